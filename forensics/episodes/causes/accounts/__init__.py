"""The causes an episode can be put down to, one module each.

To add one: its name in `names`, a module with its `ACCOUNT`, and a row here.
"""

from __future__ import annotations

from forensics.episodes.causes.accounts import (
    buckling,
    cleaning,
    friction,
    hang_up,
    no_data,
    pack_off,
    sensor,
    stall,
    sticking,
    tortuosity,
    undergauge,
)
from forensics.episodes.causes.accounts.base import Account

__all__ = ["ACCOUNTS", "Account"]

ACCOUNTS: tuple[Account, ...] = tuple(
    module.ACCOUNT
    for module in (
        buckling,
        friction,
        cleaning,
        tortuosity,
        hang_up,
        sticking,
        pack_off,
        undergauge,
        stall,
        sensor,
        no_data,
    )
)
