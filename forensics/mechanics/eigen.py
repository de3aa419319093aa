"""The near-vertical coefficient c(n, length): when a heavy column lying lightly on its side buckles.

A string that hangs in a hole a few degrees off vertical is held by three things at once: its bending
stiffness, its own weight along the hole (the load falls off upwards), and the little weight that presses
it on the low side. In Lubinski's length ``l = (EI / (w cos I))**(1/3)`` the deflection obeys

    y'''' + ((phi - x) y')' + n y = 0   on (0, length),   y = y'' = 0 at both ends,

and the lowest eigenvalue gives ``c = phi - 2 sqrt(n)``: the part of the critical load that Dawson and
Paslay's formula (``2 sqrt(n)`` in these units) leaves out. Because both ends are held, c depends on the
length: Lubinski's 1.94 is the weightless-side value (n = 0) at length 7.93 and nowhere else; it is 1.71
at 20, 1.38 at 512, and creeps towards 1.0188 with the logarithm of the length, so that no real string
gets there. With side load the upper end is soon out of sight: from n = 1 on, nothing changes beyond
length 8 (to 0.03 %), and c tends to 1.6172 as n grows.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from functools import lru_cache
from pathlib import Path

import numpy as np
from numpy.typing import ArrayLike, NDArray

from forensics.mechanics.columns import Floats, column_load

LIMIT = 4 ** (1 / 3) * 1.0187929716474710890
"""c as n goes to infinity: the first zero of Ai' times the cube root of 4."""

TABLE_FILE = Path(__file__).with_name("eigen_table.npy")

SHORTEST = 2.0
OFFSET = 1.9
"""The table is even in log(length - OFFSET): fine near 2, where modes change places, coarse far off."""

LOG_N = (math.log(1e-6), math.log(1e6))
LENGTH_RANGE = (math.log(SHORTEST - OFFSET), math.log(1e6))
ROWS, COLUMNS = 553, 325


@dataclass(frozen=True)
class EigenTable:
    """c(n, length) on a grid even in log n and in log(length - OFFSET).

    Parameters
    ----------
    values : ndarray, shape (rows, columns)
        c at each n (rows) and length (columns) [-].
    n0, dn : float
        First log n and its step.
    l0, dl : float
        First log(length - OFFSET) and its step.
    """

    values: Floats
    n0: float
    dn: float
    l0: float
    dl: float

    def as_tuple(self) -> tuple[Floats, float, float, float, float]:
        """Give the table in the form the compiled kernels take."""
        return self.values, self.n0, self.dn, self.l0, self.dl


def column_eigenvalue(n: float, length: float) -> float:
    """Solve for c(n, length) of the pinned-pinned column, from its weak form.

    Parameters
    ----------
    n : float
        Side load: Lubinski's length times contact force per length over (clearance times weight along
        the hole) [-], not negative.
    length : float
        Length held between the ends over Lubinski's length [-], above zero.

    Returns
    -------
    float
        ``phi - 2 sqrt(n)``, of the lowest mode whatever its number of half waves [-].

    Raises
    ------
    ValueError
        If n is negative or length is not positive and finite.

    Notes
    -----
    By `columns.column_load`, which takes other ends too. Without side load (n = 0) the value people may have
    at hand is Lubinski's 1.94: it holds at length 7.93 only. The string's real value falls with its length,
    as the logarithm does: 1.71 at 20, 1.38 at 512, 1.183 at a million, towards 1.0188, which is the load of a
    string whose top is free to move sideways. A hole off the vertical by a fraction of a degree has n above
    1, and there the length no longer matters.

    References
    ----------
    Lubinski, A. (1950), "A study of the buckling of rotary drilling strings" (the equation at n = 0).
    Wang, C. Y. (1986), "A critical review of the heavy elastica" (infinite string).

    Examples
    --------
    >>> round(column_eigenvalue(0.0, 8.0), 5)
    1.93704
    >>> round(column_eigenvalue(0.0, 512.0), 5)
    1.37876
    """
    return column_load(n, length) - 2 * math.sqrt(n)


def build_table() -> EigenTable:
    """Compute the whole table afresh (a few minutes); `load_table` gives the one that is shipped.

    Returns
    -------
    EigenTable
        n from 1e-6 to 1e6 and length from 2 to 1e6.

    Examples
    --------
    To renew the shipped file: ``np.save(TABLE_FILE, build_table().values.astype(np.float32))``.
    """
    values = np.empty((ROWS, COLUMNS))
    for column, place in enumerate(np.linspace(*LENGTH_RANGE, COLUMNS)):
        for row, log_n in enumerate(np.linspace(*LOG_N, ROWS)):
            values[row, column] = column_eigenvalue(math.exp(log_n), OFFSET + math.exp(place))
    return _table(values)


@lru_cache(maxsize=1)
def load_table() -> EigenTable:
    """Load the table that ships with the package, once.

    Returns
    -------
    EigenTable
        The values of `build_table`, rounded to single precision in the file.
    """
    return _table(np.ascontiguousarray(np.load(TABLE_FILE), dtype=np.float64))


def interpolate(n: ArrayLike, length: ArrayLike) -> Floats:
    """Interpolate c(n, length) in the shipped table.

    Parameters
    ----------
    n : array_like
        Side load, as in `column_eigenvalue` [-].
    length : array_like
        Length over Lubinski's length [-]; held between 2 and 1e6: below 2 the true value is greater,
        so that holding it is on the cautious side.

    Returns
    -------
    ndarray, shape of the inputs broadcast together
        c [-]. NaN stays NaN.

    Notes
    -----
    Bilinear. Below n = 1e-6 ``phi`` is held; above n = 1e6 the departure from `LIMIT` falls as
    ``1/sqrt(n)``. The error of c is below 0.02 % from length 8 on. Shorter, c swings with the number of
    half waves that fit: the error is then below 0.1 % of ``phi``, which is what a critical load is made
    of, and can be some per cent of c itself where n is so great that c hardly matters.

    Examples
    --------
    >>> bool(abs(interpolate(1.0, 512.0) - 1.561432) < 1e-3)
    True
    """
    table = load_table()
    n, length = np.broadcast_arrays(np.asarray(n, dtype=float), np.asarray(length, dtype=float))
    lowest = math.exp(LOG_N[0])
    log_n = np.log(np.maximum(n, lowest))
    row = (np.minimum(log_n, LOG_N[1]) - table.n0) / table.dn
    place = np.log(np.maximum(length, SHORTEST) - OFFSET)
    column = (np.minimum(place, LENGTH_RANGE[1]) - table.l0) / table.dl
    i, u = _cell(row, ROWS)
    j, v = _cell(column, COLUMNS)
    g = table.values
    low = g[i, j] * (1 - v) + g[i, j + 1] * v
    high = g[i + 1, j] * (1 - v) + g[i + 1, j + 1] * v
    inside = low * (1 - u) + high * u
    fade = np.exp(-0.5 * np.maximum(log_n - LOG_N[1], 0.0))
    below = 2 * np.maximum(math.sqrt(lowest) - np.sqrt(n), 0.0)
    return LIMIT + (inside - LIMIT) * fade + below


def quick_eigenvalue(n: ArrayLike, length: ArrayLike) -> Floats:
    """Give c(n, length) from a short formula: for a check by hand, not for judging.

    Parameters
    ----------
    n : array_like
        Side load, as in `column_eigenvalue` [-].
    length : array_like
        Over Lubinski's length, 5 or more [-].

    Returns
    -------
    ndarray, shape of the inputs broadcast together
        c [-].

    Notes
    -----
    Two ends are fitted: ``phi`` of a string without side load by length, ``1.01879 + 1/(0.1597 + 0.4181
    log(length + 1.057))``, and of an endless one by side load, ``2 sqrt(n) + 1.01879 + 0.59844/(1 + 0.3104
    log(1 + 0.3566/sqrt(n) + 0.0042/n))``; they are joined by their powers of ``3 + 3.7508 log(length)``.
    Against the solver phi, and so a critical load, is met within 1.1 % (0.3 % in the mean) for lengths from 5
    to 1e6 and n from 0 to 1e6.

    Examples
    --------
    >>> float(quick_eigenvalue(0.0, 512.0).round(2))
    1.38
    """
    n, length = np.broadcast_arrays(np.asarray(n, dtype=float), np.asarray(length, dtype=float))
    side, first = 2 * np.sqrt(n), LIMIT / 4 ** (1 / 3)
    some = np.maximum(n, 1e-300)
    endless = side + first + (LIMIT - first) / (1 + 0.3104 * np.log1p(0.3566 / np.sqrt(some) + 0.0042 / some))
    bare = first + 1 / (0.1597 + 0.4181 * np.log(length + 1.057))
    power = 3 + 3.7508 * np.log(length)
    more, less = np.maximum(endless, bare), np.minimum(endless, bare)
    return more * (1 + (less / more) ** power) ** (1 / power) - side


def _table(values: Floats) -> EigenTable:
    dn = (LOG_N[1] - LOG_N[0]) / (ROWS - 1)
    dl = (LENGTH_RANGE[1] - LENGTH_RANGE[0]) / (COLUMNS - 1)
    return EigenTable(values, LOG_N[0], dn, LENGTH_RANGE[0], dl)


def _cell(position: Floats, size: int) -> tuple[NDArray[np.int64], Floats]:
    """Split a grid position into a cell's index and the fraction within it; NaN keeps its fraction."""
    whole = np.nan_to_num(position)
    index = np.clip(whole.astype(np.int64), 0, size - 2)
    return index, position - index
