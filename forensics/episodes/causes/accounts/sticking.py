"""Differential sticking: the string stood still against a permeable bed and is held there."""

from __future__ import annotations

from forensics.episodes.causes.accounts.base import Account
from forensics.episodes.causes.names import Cause

ACCOUNT = Account(
    Cause.STICKING,
    {
        "kind of episode": (0.4, 0.3, 1.5, 1.6, 0.6),
        "drag going up": (0.5, 0.6, 0.8, 1.2, 1.8, 2.5),
        "stood still before": (0.2, 0.6, 2.0, 4.0),
        "longest standstill": (0.3, 0.7, 1.8, 3.0),
        "breakover peak": (0.4, 0.7, 1.3, 2.2, 3.0),
        "torque held at standstill": (0.6, 0.9, 1.2, 2.0, 2.5),
        "pressure at like flow": (1.0, 1.3, 0.7, 0.3, 0.2),
        "pressure peak": (1.3, 1.0, 0.7, 0.5, 0.3),
        "onset": (2.5, 1.6, 0.8, 0.4, 0.3),
        "length of hole": (2.5, 1.5, 0.5, 0.2, 0.1),
        "same depth on other passes": (1.4, 1.0, 0.8, 0.6),
    },
)
