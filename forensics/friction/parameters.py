"""The parameters of the joint fit: their order, names, units and bounds."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

Floats = NDArray[np.float64]

#: Parameters that come before the friction factors, with their units.
REST = (
    ("block weight", "N"),
    ("pipe above the rotary", "-"),
    ("weight per length", "-"),
    ("drift of weight with depth", "-"),
    ("pump effect left over", "N"),
    ("drift of the sensor in time", "N"),
    ("sheave friction left over", "-"),
    ("drag of doglegs no survey shows", "-"),
    ("error of the drag model", "-"),
    ("pulling against lowering", "-"),
    ("friction as a helix feels it", "-"),
)
BLOCK, SHARE, SCALE, DRIFT, PUMPS, SLOW, SHEAVE, HIDDEN, DRAG, SPLIT, HELIX = range(len(REST))

#: Index of the first friction factor: cased hole, then the open hole from the shoe down.
FIRST = len(REST)

#: Bounds of the parameters before the factors, and of every factor.
_LOWEST = (-np.inf, 0.0, 0.9, -0.02, *(-np.inf,) * 3, 0.0, *(-np.inf,) * 3)
_HIGHEST = (np.inf, 1.2, 1.1, 0.02, *(np.inf,) * (FIRST - 4))
FACTORS = (0.01, 0.6)

#: Where factors start at most, and how far one moves in a step; the others are not held by either.
_GENTLE = 0.15
_STRIDE = 0.05


def names(sections: int) -> tuple[str, ...]:
    """Name every parameter of a fit with so many sections of friction.

    Examples
    --------
    >>> names(2)[-2:]
    ('cased factor', 'open factor')
    >>> names(3)[-1]
    'open factor, section 2'
    """
    opened = [f"open factor, section {k + 1}" for k in range(sections - 1)]
    if sections == 2:
        opened = ["open factor"]
    return (*(name for name, _ in REST), "cased factor", *opened)


def within(p: Floats) -> Floats:
    """Hold parameters within their bounds, along the last axis of an array of shape (..., p)."""
    more = p.shape[-1] - FIRST
    return np.clip(p, _LOWEST + (FACTORS[0],) * more, _HIGHEST + (FACTORS[1],) * more)


def gentle(p: Floats, free: NDArray[np.bool_]) -> Floats:
    """Give a start from below: at too high a factor the modelled string is locked up and sees no way back."""
    out = p.copy()
    out[FIRST:] = np.where(free[FIRST:], np.minimum(p[FIRST:], _GENTLE), p[FIRST:])
    return out


def stride(change: Floats) -> Floats:
    """Hold the factors' part of a step to what the model's bends allow."""
    out = change.copy()
    out[FIRST:] = np.clip(change[FIRST:], -_STRIDE, _STRIDE)
    return out
