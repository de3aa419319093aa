"""Not enough data: the log does not show what would tell the causes apart."""

from __future__ import annotations

from forensics.episodes.causes.accounts.base import Account
from forensics.episodes.causes.names import Cause

ACCOUNT = Account(
    Cause.NO_DATA,
    {
        "channels missing": (0.3, 0.7, 1.2, 2.5, 6.0),
        "sampling": (0.6, 0.9, 2.5, 4.0),
        "time without samples": (0.5, 1.0, 2.5, 5.0),
        "measurements without a reading": (0.4, 0.7, 1.2, 2.5, 5.0),
        "friction not determined": (0.7, 1.2, 2.0),
    },
)
