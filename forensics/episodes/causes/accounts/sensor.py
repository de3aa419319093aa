"""Sensor or tare fault: the reading moves and the string does not."""

from __future__ import annotations

from forensics.episodes.causes.accounts.base import Account
from forensics.episodes.causes.names import Cause

ACCOUNT = Account(
    Cause.SENSOR,
    {
        "kind of episode": (0.6, 0.4, 0.5, 1.6, 0.4),
        "rotating weight": (5.0, 2.0, 0.4, 2.0, 5.0),
        "same shift both ways": (6.0, 3.0, 0.5, 3.0, 6.0),
        "in-slips reading": (4.0, 2.0, 0.6, 2.0, 4.0),
        "in-slips change": (5.0, 2.0, 0.5, 2.0, 5.0),
        "rotating weight of the run": (3.0, 1.7, 0.7, 1.7, 3.0),
        "step of the reading": (0.5, 1.0, 2.5, 4.0),
        "frozen reading": (0.9, 1.2, 2.5, 4.0),
        "torque": (1.2, 1.3, 0.8, 0.5, 0.4),
        "drag in the whole run": (0.7, 1.0, 1.3, 1.8),
        "growth in time": (1.2, 1.1, 0.8, 0.7),
    },
)
