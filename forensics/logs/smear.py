"""Null codes smeared by interpolation: values on the way from a reading down to -999.25."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

Floats = NDArray[np.float64]
REACH = 3
# Share of the way from zero to the code: less could be an offset of the sensor.
FALLEN = 0.02


def find_smeared(values: Floats, codes: NDArray[np.bool_]) -> NDArray[np.bool_]:
    """Find values beside a null code that lie between it and the channel's own range.

    Parameters
    ----------
    values : ndarray, shape (n,)
        As the file has them, in its own unit.
    codes : ndarray of bool, shape (n,)
        Where the null codes stand.

    Returns
    -------
    ndarray of bool, shape (n,)
        True within three rows of a negative code, where the value has fallen some way to the code and
        below the channel's 1st percentile by more than half the span from there to the 99th.
    """
    found = np.zeros(len(values), dtype=bool)
    if not codes.any():
        return found
    negative = codes & (values < 0)
    good = values[np.isfinite(values) & ~codes]
    if not negative.any() or len(good) < 10:
        return found
    low, high = np.percentile(good, [1, 99])
    # Smeared values would pull a percentile down where they are many: the range is that of their betters.
    low = max(low, float(np.percentile(good, 25)) - (high - float(np.percentile(good, 25))))
    least = float(np.abs(values[negative]).min())
    near = np.convolve(negative, np.ones(2 * REACH + 1), mode="same") > 0
    return near & ~codes & (values < min(-FALLEN * least, low - 0.5 * (high - low)))
