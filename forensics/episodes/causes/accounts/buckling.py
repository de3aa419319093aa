"""Buckling: the string is pressed off its line and its own wall contact eats the weight."""

from __future__ import annotations

from forensics.episodes.causes.accounts.base import Account
from forensics.episodes.causes.names import Cause

ACCOUNT = Account(
    Cause.BUCKLING,
    {
        "kind of episode": (1.5, 5.0, 2.0, 0.2, 0.15),
        "load ratio": (0.05, 0.15, 0.5, 1.5, 3.0, 4.0),
        "share lost to buckling": (0.4, 0.8, 2.0, 3.0, 4.0),
        "chance over the draws": (0.3, 0.7, 1.5, 2.5),
        "calibrated friction": (1.2, 1.2, 1.0, 0.7, 0.6),
        "stiffness going down": (1.0, 1.3, 1.5, 0.8, 0.4, 0.4),
        "drag going up": (1.2, 1.2, 0.8, 0.5, 0.4, 0.3),
        "torque": (1.2, 1.2, 0.8, 0.5, 0.4),
        "weight answered at the bit": (2.0, 1.5, 1.0, 0.6, 0.6),
        "how it ended": (0.9, 1.4, 1.5),
    },
)
