"""Readings that ran into the end of their scale: the count of a recorder, or a sensor's own ceiling."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from forensics.logs.frozen import is_lively

Floats = NDArray[np.float64]
Bools = NDArray[np.bool_]
# Ends of a signed and an unsigned 16-bit count, and the powers of ten a recorder divides them by.
ENDS = (32767.0, -32767.0, -32768.0, 65535.0)
TENTHS = (1.0, 0.1, 0.01, 0.001)
# The very same end met this often is no coincidence; a scaled one must be the column's own extreme too.
OFTEN, OFTEN_SCALED = 2, 3
# A ceiling is held for this many rows on end, by this many in all, and many times as often as what lies
# just below it (within this part of the range).
ON_END, IN_ALL, TIMES, BELOW = 4, 20, 5.0, 0.02
# Channels whose largest value is no set point: pumps and rotation run at theirs for hours.
CLIPPED = ("hookload", "hookload_max", "torque", "wob", "downhole_wob", "downhole_torque")


@dataclass(frozen=True)
class Ceiling:
    """A largest value that was held: the value, rows at it, and the most of them on end."""

    value: float
    rows: int
    longest: int


def find_full_scale(values: Floats) -> Bools:
    """Find readings at the end of a 16-bit count, plain or divided by ten, a hundred or a thousand.

    Parameters
    ----------
    values : ndarray, shape (n,)
        As the file has them, in its own unit.

    Returns
    -------
    ndarray of bool, shape (n,)
        True where the reading ran over.

    Examples
    --------
    >>> find_full_scale(np.array([12.0, 327.67, 327.67, 327.67, 14.0])).tolist()
    [False, True, True, True, False]
    """
    found = np.zeros(len(values), dtype=bool)
    if not np.isfinite(values).any():
        return found
    low, high = float(np.fmin.reduce(values)), float(np.fmax.reduce(values))
    for scale in TENTHS:
        for end in ENDS:
            value = round(end * scale, 3)
            extreme = value == (high if value > 0.0 else low)
            if not (extreme or (scale == 1.0 and low <= value <= high)):
                continue
            at = values == value
            if at.sum() >= (OFTEN if scale == 1.0 else OFTEN_SCALED):
                found |= at
    return found


def find_ceiling(values: Floats) -> Ceiling | None:
    """Find a ceiling: the largest value of a lively channel, held for rows on end time and again.

    Parameters
    ----------
    values : ndarray, shape (n,)
        A channel, NaN where missing.

    Returns
    -------
    Ceiling or None
        None where the channel comes to its largest value as it comes to others.
    """
    known = values[np.isfinite(values)]
    if len(known) < IN_ALL:
        return None
    top = float(known.max())
    at = known == top
    rows = int(at.sum())
    if rows < IN_ALL or top <= 0.0:
        return None
    below = top - BELOW * float(np.ptp(known))
    if rows < TIMES * int(((known >= below) & ~at).sum()) or not is_lively(known[~at]):
        return None
    edges = np.flatnonzero(np.diff(np.concatenate(([0], at.view(np.int8), [0]))))
    longest = int(np.max(edges[1::2] - edges[::2]))
    return Ceiling(top, rows, longest) if longest >= ON_END else None
