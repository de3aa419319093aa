"""Whole windows of steady drilling with the string turning: where the bit load is known and others learn."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray
from scipy import ndimage

from forensics.logs.table import TimeLog
from forensics.rig.view import Activity, RigView

Floats = NDArray[np.float64]

WINDOW_SECONDS = 60.0


@dataclass(frozen=True)
class Windows:
    """Windows of `step` rows each, starting at rows `first`, shape (k,)."""

    first: NDArray[np.int64]
    step: int

    def medians(self, values: Floats) -> Floats:
        """Median of each window, NaN where any row of it is missing; shape (k,)."""
        if len(self.first) == 0:
            return np.empty(0)
        return np.median(values[self.first[:, None] + np.arange(self.step)], axis=1)


def rotary_windows(log: TimeLog, rig: RigView) -> Windows:
    """Cut rotary drilling into whole windows of a minute.

    Parameters
    ----------
    log, rig : TimeLog, RigView
        The run.

    Returns
    -------
    Windows
    """
    drilling = rig.activity == Activity.DRILL_ROTATE
    step = window_rows(log.interval)
    parts = [np.arange(start, stop - step + 1, step) for start, stop in edges_of(drilling)]
    return Windows(np.concatenate([*parts, np.empty(0, dtype=int)]).astype(np.int64), step)


def window_rows(interval: float) -> int:
    """Rows of a window, three at least."""
    return max(3, round(WINDOW_SECONDS / interval))


def smoothed(values: Floats, step: int) -> Floats:
    """Take the moving median over about `step` rows, shape as `values`."""
    return ndimage.median_filter(values, size=step | 1, mode="nearest")


def edges_of(rows: NDArray[np.bool_]) -> NDArray[np.int64]:
    """First and one-past-last row of each stretch of marked rows; shape (k, 2)."""
    return np.flatnonzero(np.diff(np.concatenate([[0], rows.astype(np.int8), [0]]))).reshape(-1, 2)
