"""Rows that repeat the row before: a record filled from step to step, which tells less than its rows."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

Floats = NDArray[np.float64]
# What a row of a record tells of the rig's work; at least two of them must be there.
MECHANICS = ("hookload", "wob", "torque", "rpm", "standpipe_pressure", "flow_in")
# Rows while the bit moved that are needed to judge by, and how far it moves over so many rows [m].
FEWEST, ACROSS, MOVED = 200, 20, 0.03


@dataclass(frozen=True)
class Repeats:
    """Rows judged, how many of them repeat the row before, and rows from one new reading to the next."""

    rows: int
    same: int
    stride: float

    @property
    def share(self) -> float:
        """Part of the rows that repeat the row before."""
        return self.same / self.rows if self.rows else 0.0


NONE = Repeats(0, 0, 1.0)
# Part of the rows that may repeat the row before in a log sampled as often as it is written.
REPEATING = 0.4


def find_repeats(values: Mapping[str, Floats], depth: Floats) -> Repeats:
    """Count rows that repeat the row before in all that is logged of the rig's work.

    Parameters
    ----------
    values : mapping of str to ndarray, shape (n,)
        Channels; those of `MECHANICS` that say anything are looked at.
    depth : ndarray, shape (n,)
        Depth of the bit, or of a log by depth [m]. Only rows while it moves count: a rig at rest may well
        show one value for hours.

    Returns
    -------
    Repeats

    Examples
    --------
    >>> rng = np.random.default_rng(1)
    >>> held = {name: np.repeat(rng.random(200), 5) for name in ("wob", "torque")}
    >>> find_repeats(held, np.arange(1000.0)).stride
    5.0
    """
    told = [values[name] for name in MECHANICS if name in values and _says(values[name])]
    if len(told) < 2 or len(depth) <= ACROSS:
        return NONE
    with np.errstate(invalid="ignore"):
        far = np.abs(depth[ACROSS:] - depth[:-ACROSS]) > MOVED
    moving = np.zeros(len(depth), dtype=bool)
    moving[ACROSS // 2 : ACROSS // 2 + len(far)] = far
    judged = moving[1:].copy()
    same = judged.copy()
    for data in told:
        known = np.isfinite(data[1:]) & np.isfinite(data[:-1])
        judged &= known
        same &= known & (data[1:] == data[:-1])
    rows, repeated = int(judged.sum()), int(same.sum())
    if rows < FEWEST:
        return NONE
    return Repeats(rows, repeated, rows / max(1, rows - repeated))


def _says(data: Floats) -> bool:
    known = data[np.isfinite(data)]
    return len(known) > 0 and bool(known.min() < known.max())
