"""Channels recorded less often than the rows: their values carried on between readings, and counted."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

Floats = NDArray[np.float64]
# Longest time over which a reading speaks for the rows after it [s].
REACH = 30.0


def fill_between(
    time: Floats, values: Floats, interval: float, hold: bool
) -> tuple[Floats, NDArray[np.bool_]]:
    """Fill the rows between readings of a channel that comes at a lower rate than the rows.

    Parameters
    ----------
    time, values : ndarray, shape (n,)
        Stamps [s] and readings, NaN where there is none.
    interval : float
        Usual step of the rows [s].
    hold : bool
        True to repeat the last reading, False to draw a line to the next.

    Returns
    -------
    filled : ndarray, shape (n,)
        The channel; as it was where it is no slow one.
    where : ndarray of bool, shape (n,)
        Rows that were filled.

    Notes
    -----
    Slow is a channel with readings in fewer than 70 % of the rows whose usual step is one and a half
    times that of the rows or more, and nine of ten steps within 30 s: an outage is not filled.

    Examples
    --------
    >>> time = np.arange(9.0)
    >>> fill_between(time, np.where(time % 2, np.nan, time), 1.0, hold=False)[0].tolist()
    [0.0, 1.0, 2.0, 3.0, 4.0, 5.0, 6.0, 7.0, 8.0]
    """
    none = np.zeros(len(values), dtype=bool)
    known = np.flatnonzero(np.isfinite(values))
    if len(known) < 3 or len(known) > 0.7 * len(values):
        return values, none
    steps = np.diff(time[known])
    reach = max(REACH, 5.0 * interval)
    if np.median(steps) < 1.5 * interval or np.percentile(steps, 90) > reach:
        return values, none
    after = np.searchsorted(time[known], time, side="left").clip(1, len(known) - 1)
    inside = (time > time[known[0]]) & (time < time[known[-1]]) & (steps[after - 1] <= reach)
    where = ~np.isfinite(values) & inside
    between = values[known][after - 1] if hold else np.interp(time, time[known], values[known])
    return np.where(where, between, values), where
