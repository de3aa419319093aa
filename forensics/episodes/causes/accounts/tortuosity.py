"""Tortuosity or ledges: the hole itself, at the same depths on every pass."""

from __future__ import annotations

from forensics.episodes.causes.accounts.base import Account
from forensics.episodes.causes.names import Cause

ACCOUNT = Account(
    Cause.TORTUOSITY,
    {
        "kind of episode": (0.7, 0.4, 0.7, 1.5, 1.3),
        "drag going up": (0.6, 0.7, 1.0, 1.5, 1.6, 1.4),
        "drag going down": (0.6, 0.7, 1.0, 1.5, 1.6, 1.4),
        "torque": (0.6, 0.8, 1.4, 1.6, 1.5),
        "same depth on other passes": (0.3, 0.8, 1.8, 3.0),
        "after circulating": (0.3, 0.5, 0.8, 1.3),
        "growth in time": (1.0, 1.1, 0.8, 0.7),
        "dogleg at the bit": (0.7, 1.0, 1.5, 2.0),
        "length of hole": (0.8, 1.0, 1.4, 1.2, 0.7),
        "pressure at like flow": (1.1, 1.2, 0.8, 0.5, 0.4),
        "same shift both ways": (0.4, 0.7, 1.2, 0.7, 0.4),
    },
)
