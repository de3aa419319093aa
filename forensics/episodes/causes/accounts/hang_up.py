"""Ledge or shoe hang-up: a hard stop going down at one depth; free at once going up."""

from __future__ import annotations

from forensics.episodes.causes.accounts.base import Account
from forensics.episodes.causes.names import Cause

ACCOUNT = Account(
    Cause.HANG_UP,
    {
        "kind of episode": (0.5, 0.3, 2.5, 1.2, 0.2),
        "load ratio": (1.3, 1.1, 0.9, 0.7, 0.5, 0.4),
        "drag going up": (1.5, 1.4, 0.8, 0.4, 0.3, 0.2),
        "drag going down": (0.5, 0.6, 1.0, 1.6, 2.0, 2.0),
        "torque": (1.2, 1.3, 0.7, 0.5, 0.4),
        "stiffness going down": (0.3, 0.5, 0.8, 1.6, 2.5, 2.5),
        "onset": (2.5, 1.8, 0.8, 0.4, 0.3),
        "length of hole": (2.0, 1.5, 0.6, 0.3, 0.2),
        "near the shoe": (3.0, 2.0, 1.0, 0.9, 0.8),
        "same depth on other passes": (0.6, 0.9, 1.3, 1.5),
        "tries at this depth": (0.5, 1.0, 1.7, 2.0),
        "how it ended": (0.6, 1.5, 1.5),
        "pressure at like flow": (1.0, 1.2, 0.8, 0.5, 0.5),
        "distance off bottom": (0.3, 0.8, 1.2, 1.4, 1.4),
    },
)
