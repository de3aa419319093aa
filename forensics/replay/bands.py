"""How far a reconstructed history may be off, row by row, by the draws."""

from __future__ import annotations

import warnings

import numpy as np
from numpy.typing import NDArray

from forensics.loads import DrawHistory

Floats = NDArray[np.float64]

Z90 = 1.6448536269514722
ALL = slice(None)


def band(draws: DrawHistory | None, name: str, values: Floats, rows: slice = ALL) -> tuple[Floats, Floats]:
    """Give the 90 % interval of a history, widened to hold it.

    Parameters
    ----------
    draws : DrawHistory or None
    name : str
        "bit_load" or "peak_ratio".
    values : ndarray, shape (n,)
        The history of the calibrated replay, over all rows of the log.
    rows : slice
        Rows to give it for.

    Returns
    -------
    low, high : ndarray, shape (rows,)
        NaN on rows that were not replayed. Between rows that the draws took, the ends move on as the history
        does.
    """
    at = np.arange(len(values))[rows]
    nothing = np.full(len(at), np.nan)
    if draws is None or len(draws.taken) == 0 or len(draws.weights) == 0:
        return nothing, nothing.copy()
    drawn = np.where(draws.state >= 0, getattr(draws, name), np.nan)
    with warnings.catch_warnings():
        warnings.simplefilter("ignore", RuntimeWarning)  # a row that no draw could tell
        middle, half = np.nanmean(drawn, axis=0), Z90 * np.nanstd(drawn, axis=0)
    whole = values[draws.taken]
    below, above = np.fmin(middle - half - whole, 0.0), np.fmax(middle + half - whole, 0.0)
    covered, here = draws.covered[rows], values[rows]
    low, high = (here + np.interp(at, draws.taken, gap) for gap in (below, above))
    return np.where(covered, low, np.nan), np.where(covered, high, np.nan)
