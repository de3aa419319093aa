"""What all compiled marches along the string share; scalar code, no Python objects.

Sign: tension positive, `sigma` +1 while the string moves or tends to move down, -1 up.
Going up the string dT/dx = w cos I - sigma mu N, with N the contact force per length.
Each element takes its direction at its middle and its tension at its middle too, the latter carried on
from the slope of the element before: second order along smooth stretches at one root an element.
"""

from __future__ import annotations

from typing import NamedTuple

import numpy as np
from numba import njit

Array = np.ndarray

RUN_AWAY = -1e8  # N; no string carries it: the march has passed lockup


class Hole(NamedTuple):
    """Columns of `HoleGrid`, for compiled code."""

    inv_step: float
    cos_i: Array
    sin2: Array
    kappa2: Array
    kappa_d: Array
    diameter: Array


class Pipe(NamedTuple):
    """Columns of `PipeGrid`, for compiled code."""

    x: Array
    node: Array
    weight: Array
    ei: Array
    ea: Array
    clearance_od: Array
    radius: Array


class Place(NamedTuple):
    """Where the string is: bit depth, row of the top element, depth index of the bit, scale of weights.

    `cube` is that scale to the two thirds, as the near-vertical load goes with it.
    """

    bit: float
    top: int
    first: int
    scale: float
    cube: float


@njit(cache=True, inline="always")
def contact(tension: float, weight: float, kappa2: float, kappa_d: float, sin2: float) -> float:
    """Contact force per length of unbuckled pipe [N/m]."""
    square = tension * (tension * kappa2 + 2.0 * weight * kappa_d) + weight * weight * sin2
    return np.sqrt(max(square, 0.0))


@njit(cache=True)
def top_element(x: Array, bit: float) -> int:
    """Row of the element that reaches through the rotary table, for a bit at depth `bit` [m]."""
    return min(max(np.searchsorted(x, bit, side="left") - 1, 0), len(x) - 2)


@njit(cache=True, inline="always")
def place_at(hole: Hole, pipe: Pipe, bit: float, scale: float) -> Place:
    """Place a string with its bit at depth `bit` [m], all weights times `scale`."""
    cube = 1.0 if scale == 1.0 else scale ** (2.0 / 3.0)
    return Place(bit, top_element(pipe.x, bit), int(bit * hole.inv_step + 0.5), scale, cube)


@njit(cache=True)
def wake(number: float) -> float:
    """Give the number back: a first call makes numba load what all compiled code needs."""
    return number
