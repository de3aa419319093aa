"""Fewer points, same picture: series thinned with the smallest and largest of each bin kept."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

Floats = NDArray[np.float64]

POINTS = 2000


def envelope(x: Floats, y: Floats, points: int = POINTS) -> tuple[Floats, Floats]:
    """Thin a series to at most about `points` points.

    Parameters
    ----------
    x, y : ndarray, shape (n,)
        Series in order of x; y may hold NaN.
    points : int
        Points wanted; each of points/2 bins of rows gives its smallest and its largest y, in order.

    Returns
    -------
    tuple of ndarray, shape (m,)
        The series as it is where n <= points, else thinned, m <= points + 2. A bin of nothing but NaN
        gives NaN, so breaks stay.

    Examples
    --------
    >>> x, y = envelope(np.arange(1000.0), np.sin(np.arange(1000.0) / 50), 100)
    >>> len(x) <= 102, bool(y.max() > 0.999)
    (True, True)
    """
    x = np.asarray(x, dtype=np.float64)
    y = np.asarray(y, dtype=np.float64)
    n = len(x)
    if n <= max(points, 4):
        return x, y
    bins = max(points // 2, 2)
    per = -(-n // bins)
    bins = -(-n // per)
    padded = np.full(bins * per, np.nan)
    padded[:n] = y
    grid = padded.reshape(bins, per)
    finite = np.isfinite(grid)
    low = np.argmin(np.where(finite, grid, np.inf), axis=1)
    high = np.argmax(np.where(finite, grid, -np.inf), axis=1)
    start = np.arange(bins) * per
    rows = np.column_stack([start + np.minimum(low, high), start + np.maximum(low, high)]).ravel()
    return x[rows], y[rows]


def with_breaks(x: Floats, y: Floats, gap: float) -> tuple[Floats, Floats]:
    """Put a NaN into a series wherever x jumps by more than `gap`, so that a line breaks there.

    Parameters
    ----------
    x, y : ndarray, shape (n,)
        Series in order of x.
    gap : float
        Largest step that is still joined, in x's unit.
    """
    jumps = np.flatnonzero(np.diff(x) > gap) + 1
    if not len(jumps):
        return x, y
    return np.insert(x, jumps, x[jumps - 1]), np.insert(y, jumps, np.nan)


def thin(x: Floats, y: Floats, gap: float, points: int = POINTS) -> tuple[Floats, Floats]:
    """Break a series at gaps and thin it: what every time track draws."""
    if len(x) <= points:
        return with_breaks(x, y, gap)
    # One NaN row a gap survives thinning only if the gap is a whole bin wide; narrower can't be seen.
    bin_width = (x[-1] - x[0]) / (points / 2)
    thin_x, thin_y = envelope(x, y, points)
    return with_breaks(thin_x, thin_y, max(gap, 2.5 * bin_width, 2.5 * _row_bin(x, points)))


def _row_bin(x: Floats, points: int) -> float:
    """Usual width in x of a bin of rows."""
    per = max(-(-len(x) // max(points // 2, 2)), 1)
    return float(np.median(np.diff(x))) * per if len(x) > 1 else 0.0


def runs(flags: NDArray[np.bool_]) -> NDArray[np.int64]:
    """First row and row after the last of each run of True, shape (k, 2)."""
    padded = np.concatenate([[False], np.asarray(flags, dtype=bool), [False]])
    edges = np.flatnonzero(padded[1:] != padded[:-1])
    return edges.reshape(-1, 2)
