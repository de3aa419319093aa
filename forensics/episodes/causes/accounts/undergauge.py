"""Undergauge hole: the bit or a stabiliser meets hole drilled too small, going down, till reamed."""

from __future__ import annotations

from forensics.episodes.causes.accounts.base import Account
from forensics.episodes.causes.names import Cause

ACCOUNT = Account(
    Cause.UNDERGAUGE,
    {
        "kind of episode": (0.4, 0.3, 1.8, 1.5, 0.7),
        "drag going up": (1.5, 1.4, 0.9, 0.5, 0.4, 0.3),
        "drag going down": (0.4, 0.5, 1.0, 1.7, 2.2, 2.2),
        "length of hole": (0.7, 1.2, 1.8, 1.2, 0.7),
        "distance off bottom": (0.4, 1.0, 2.0, 1.5, 0.8),
        "tries at this depth": (1.0, 1.3, 1.1, 0.8),
        "pressure at like flow": (1.1, 1.2, 0.8, 0.5, 0.5),
        "load ratio": (1.2, 1.1, 0.9, 0.7, 0.5, 0.4),
        "near the shoe": (0.4, 0.6, 0.9, 1.1, 1.1),
        "how it ended": (0.7, 1.2, 1.5),
    },
)
