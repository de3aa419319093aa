"""Poor hole cleaning: a bed of cuttings that grows with footage and goes with circulation and rotation."""

from __future__ import annotations

from forensics.episodes.causes.accounts.base import Account
from forensics.episodes.causes.names import Cause

ACCOUNT = Account(
    Cause.CLEANING,
    {
        "kind of episode": (0.7, 0.4, 0.6, 1.5, 1.6),
        "drag going up": (0.6, 0.6, 0.8, 1.3, 1.8, 2.2),
        "drag going down": (1.2, 1.2, 1.1, 1.0, 0.8, 0.7),
        "torque": (0.5, 0.7, 1.4, 1.9, 2.0),
        "after circulating": (3.0, 2.2, 1.4, 0.5),
        "growth in time": (0.6, 0.8, 1.5, 2.2),
        "same depth on other passes": (1.5, 1.2, 0.8, 0.6),
        "pressure at like flow": (0.8, 1.0, 1.5, 1.5, 1.2),
        "hole where cuttings settle": (0.7, 1.0, 1.2, 1.4),
        "length of hole": (0.5, 0.6, 1.0, 1.3, 1.5),
        "stood still before": (1.0, 1.0, 0.9, 0.7),
    },
)
