"""Friction higher than assumed: the same everywhere, in every motion."""

from __future__ import annotations

from forensics.episodes.causes.accounts.base import Account
from forensics.episodes.causes.names import Cause

ACCOUNT = Account(
    Cause.FRICTION,
    {
        "kind of episode": (1.5, 0.8, 1.0, 1.0, 1.2),
        "share lost to buckling": (2.0, 1.5, 0.8, 0.5, 0.3),
        "calibrated friction": (0.3, 0.6, 1.5, 2.5, 3.5),
        "drag going up": (0.5, 0.6, 0.8, 1.3, 2.0, 2.0),
        "drag going down": (0.5, 0.6, 0.8, 1.3, 2.0, 2.0),
        "torque": (0.5, 0.6, 1.2, 1.8, 1.8),
        "length of hole": (0.4, 0.5, 0.8, 1.3, 1.8),
        "onset": (0.5, 0.5, 0.7, 1.2, 1.8),
        "same depth on other passes": (0.6, 0.8, 1.2, 1.5),
        "same shift both ways": (0.4, 0.7, 1.2, 0.7, 0.4),
        "rotating weight": (0.4, 0.7, 1.2, 0.7, 0.4),
        "pressure at like flow": (1.0, 1.2, 0.8, 0.5, 0.4),
        "drag in the whole run": (0.8, 1.0, 1.3, 1.5),
    },
)
