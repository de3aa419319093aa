"""How stiff a string is that is pushed or pulled at the top and held further down, friction at its limit.

A string that slides and is stopped at a depth gives up its hookload like a spring. What is added at the
top does not reach the stop whole: where the wall force goes with the load, friction takes a share of every
increment, so that an increment falls off as exp(fade s), fade = friction times the change of wall force
per change of tension, signed as the motion is. The stiffness at the top is then

    dF/du = 1 / integral of g(s) c(s) ds,   g' = fade g,   g(0) = 1,

with c = 1/EA, and r^2/(4 EI) more where the string is a helix. While the moving part still grows, its
lower end takes the place of the stop: the slope is that of the part that moves.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import ArrayLike, NDArray

Floats = NDArray[np.float64]


def give_along(lengths: ArrayLike, give: ArrayLike, fade: ArrayLike) -> Floats:
    """Give how far the top goes per newton added there, for a string held at the end of each piece.

    Parameters
    ----------
    lengths : array_like, shape (k,)
        Pieces of string from the top down [m].
    give : array_like, shape (k,)
        Shortening per length and per newton [1/N].
    fade : array_like, shape (k,)
        Growth of an increment per length, negative where friction eats it [1/m].

    Returns
    -------
    ndarray, shape (k,)
        Compliance of the string above the end of each piece [m/N].

    Examples
    --------
    >>> [round(1e6 * give, 9) for give in give_along([1000.0, 1000.0], [1e-9, 1e-9], [0.0, 0.0]).tolist()]
    [1.0, 2.0]
    """
    lengths, give, fade = (np.asarray(values, dtype=float) for values in (lengths, give, fade))
    grown = fade * lengths
    before = np.exp(np.concatenate([[0.0], np.cumsum(grown)[:-1]]))
    nil = np.abs(grown) < 1e-9
    mean = np.where(nil, 1.0 + grown / 2.0, np.expm1(grown) / np.where(nil, 1.0, grown))
    return np.cumsum(before * mean * give * lengths)


def held_at(give: float, md: Floats, along: Floats) -> float:
    """Give the depth at which a string of compliance `along` at depths `md` shows the compliance `give` [m].

    Parameters
    ----------
    give : float
        Measured [m/N].
    md, along : ndarray, shape (k,)
        Depths [m] and compliance of the string held there [m/N], growing.

    Returns
    -------
    float
        Infinite where the whole string is not soft enough.
    """
    if give > along[-1]:
        return float("inf")
    return float(np.interp(give, np.concatenate([[0.0], along]), np.concatenate([[0.0], md])))
