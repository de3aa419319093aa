"""Compiled marches along the string; scalar code, no Python objects.

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


class Ask(NamedTuple):
    """One string to march up: bit depth [m], +1 going down or -1 up, tension at the bit [N].

    `scale` multiplies all weights, where the mud has changed.
    """

    bit: float
    sigma: float
    tension_bit: float
    scale: float


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


@njit(cache=True, error_model="numpy")
def march_up(hole: Hole, pipe: Pipe, mu: Array, ask: Ask, out: Array) -> float:
    """Tension at the rotary from that at the bit, no helix; fills `out` with tension at the nodes [N]."""
    bit = ask.bit
    top = top_element(pipe.x, bit)
    first = int(bit * hole.inv_step + 0.5)
    tension = ask.tension_bit
    out[0] = tension
    slope = 0.0
    for j in range(top + 1):
        length = min(pipe.x[j + 1], bit) - pipe.x[j]
        i = max(first - ((pipe.node[j] + pipe.node[j + 1]) >> 1), 0)
        weight = pipe.weight[j] * ask.scale
        middle = tension + 0.5 * length * slope
        force = contact(middle, weight, hole.kappa2[i], hole.kappa_d[i], hole.sin2[i])
        slope = weight * hole.cos_i[i] - ask.sigma * mu[i] * force
        tension += slope * length
        out[j + 1] = tension
    return tension


@njit(cache=True, error_model="numpy")
def torque_up(
    hole: Hole, pipe: Pipe, mu: Array, bit: float, tension_bit: float, scale: float
) -> float:
    """Torque at the rotary that turns the string off bottom or on, bit torque left out [N.m]."""
    top = top_element(pipe.x, bit)
    first = int(bit * hole.inv_step + 0.5)
    tension = tension_bit
    torque = 0.0
    for j in range(top + 1):
        length = min(pipe.x[j + 1], bit) - pipe.x[j]
        i = max(first - ((pipe.node[j] + pipe.node[j + 1]) >> 1), 0)
        weight = pipe.weight[j] * scale
        slope = weight * hole.cos_i[i]
        force = contact(
            tension + 0.5 * length * slope, weight, hole.kappa2[i], hole.kappa_d[i], hole.sin2[i]
        )
        tension += slope * length
        torque += mu[i] * force * pipe.radius[j] * length
    return torque


@njit(cache=True)
def torque_up_many(hole: Hole, pipe: Pipe, mu: Array, bits: Array, scale: Array) -> Array:
    """Off-bottom rotating torque for many bit depths [N.m]."""
    result = np.empty(len(bits))
    for k in range(len(bits)):
        result[k] = torque_up(hole, pipe, mu, bits[k], 0.0, scale[k])
    return result
