"""Zeros written for "no value" in the hookload: no hook with a block and a string on it carries nothing."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from forensics.logs.frozen import runs_of

Floats = NDArray[np.float64]
Bools = NDArray[np.bool_]
# Nobody sets slips, makes up a stand and pulls them again within this time [s].
BRIEF = 20.0
# What a stretch of zeros leaves and comes back to is a load, and nearly the same one.
LOADED, SAME = 0.2, 0.3
# A block that goes this far while the bit stays has left the string in slips [m].
BLOCK_WAY, BIT_STAYS = 3.0, 1.0


def find_zeros(time: Floats, hookload: Floats, bit_depth: Floats, block: Floats | None) -> Bools:
    """Find stretches of exact zeros in the hookload that are no readings.

    Parameters
    ----------
    time, hookload, bit_depth : ndarray, shape (n,)
        Stamps [s], hookload [N] and bit depth [m], NaN where missing.
    block : ndarray, shape (n,), or None
        Block height [m].

    Returns
    -------
    ndarray of bool, shape (n,)
        True where a zero stands for "no value".

    Notes
    -----
    A sensor tared with the block on it may well read zero in slips. So a stretch counts where it is too
    brief for slips and comes back to the load it left, or where no stretch of the log shows the block
    on its way without the string.
    """
    found = np.zeros(len(hookload), dtype=bool)
    zero = hookload == 0.0
    if not zero.any():
        return found
    stretches = runs_of(np.where(zero, 0.0, np.nan), 1)
    share = sum(end - start for start, end in stretches) / max(len(hookload), 1)
    if not stretches or share > 0.5:
        return found
    usual = float(np.nanmedian(hookload[~zero]))
    slips = block is None or any(_in_slips(block[a:b], bit_depth[a:b]) for a, b in stretches)
    for start, end in stretches:
        brief = start > 0 and end < len(time) and time[end] - time[start - 1] <= BRIEF
        if not slips or (brief and _comes_back(hookload, start, end, usual)):
            found[start:end] = True
    return found


def _in_slips(block: Floats, bit_depth: Floats) -> bool:
    return _way(block) > BLOCK_WAY and _way(bit_depth) < BIT_STAYS


def _way(values: Floats) -> float:
    known = values[np.isfinite(values)]
    return float(np.ptp(known)) if len(known) else 0.0


def _comes_back(hookload: Floats, start: int, end: int, usual: float) -> bool:
    before, after = hookload[start - 1], hookload[end]
    return bool(min(before, after) > LOADED * usual and abs(after - before) < SAME * max(before, after))
