"""Pack-off: cuttings or cavings close the annulus round the string."""

from __future__ import annotations

from forensics.episodes.causes.accounts.base import Account
from forensics.episodes.causes.names import Cause

ACCOUNT = Account(
    Cause.PACK_OFF,
    {
        "kind of episode": (0.4, 0.3, 1.2, 1.6, 1.2),
        "pressure at like flow": (0.2, 0.4, 1.5, 4.0, 6.0),
        "pressure peak": (0.2, 0.5, 1.5, 3.0, 5.0),
        "drag going up": (0.5, 0.6, 0.8, 1.2, 1.8, 2.2),
        "torque": (0.6, 0.8, 1.2, 1.6, 2.0),
        "torque peak": (0.6, 0.9, 1.3, 1.8, 2.0),
        "onset": (1.8, 1.5, 1.0, 0.6, 0.4),
        "length of hole": (1.8, 1.4, 0.8, 0.5, 0.4),
        "same depth on other passes": (1.4, 1.1, 0.8, 0.6),
        "after circulating": (1.3, 1.3, 1.0, 0.7),
    },
)
