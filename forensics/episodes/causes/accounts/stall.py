"""Motor stall: the motor stops turning under load; pressure stands at its highest and nothing is drilled."""

from __future__ import annotations

from forensics.episodes.causes.accounts.base import Account
from forensics.episodes.causes.names import Cause

ACCOUNT = Account(
    Cause.STALL,
    {
        "kind of episode": (1.0, 0.8, 1.0, 0.2, 2.0),
        "differential pressure": (0.1, 0.4, 2.0, 5.0, 6.0),
        "pressure peak": (0.4, 1.0, 1.8, 2.5, 2.0),
        "slowest drilling": (2.5, 1.3, 0.6, 0.3),
        "drilling rate": (2.5, 1.5, 0.7, 0.5, 0.5),
        "torque peak": (0.5, 0.9, 1.3, 1.8, 2.2),
        "torque held at standstill": (0.6, 0.9, 1.4, 1.8, 1.8),
        "distance off bottom": (2.5, 0.8, 0.2, 0.1, 0.1),
        "how it ended": (0.7, 1.6, 0.8),
    },
)
