"""The two-ended load memory, compiled: motion enters from the top or the bit and dies out in friction.

The tension profile of the last sample is kept by distance above the bit. A front from the surface is
marched down for as long as its curve lies beyond the remembered one; a front from the bit is found from
the length the bit has drilled. Once a front has crossed the whole string, the profile follows the
hookload until the motion turns.
"""

from __future__ import annotations

from typing import NamedTuple

import numpy as np
from numba import njit

from forensics.mechanics.kernels_judge import (
    GIVE,
    Setting,
    Stand,
    latch,
    latch_wound,
    torque_at,
    winding_wall,
)
from forensics.mechanics.kernels_march import Array, Pipe, contact

FREE = 0
ROTATING = 2


class Memory(NamedTuple):
    """What the string remembers: tension at nodes, at the last reversal, work space, state of elements.

    `visits` (one number) counts the stations marched and judged.
    """

    tension: Array
    reversal: Array
    work: Array
    drag: Array
    state: Array
    visits: Array


@njit(cache=True, error_model="numpy")
def march_down(
    setting: Setting, memory: Memory, place: Stand, rub: float, tension_top: float, bounded: bool
) -> int:
    """March from the rotary down; returns the lowest node reached (0: the bit).

    `rub` is the share of friction that acts axially, signed as the motion is: positive down.
    Bounded, the march ends where the curve meets the remembered tension; below, that stands.
    Elements that pass the helical threshold on the way carry helical contact at once.
    """
    hole, pipe, criteria, mu = setting.hole, setting.pipe, setting.criteria, setting.mu
    kept = memory.tension
    tension = tension_top
    kept[place.top + 1] = tension
    slope = 0.0
    least = min(tension, 0.0)
    for j in range(place.top, -1, -1):
        length = min(pipe.x[j + 1], place.bit) - pipe.x[j]
        i = max(place.first - ((pipe.node[j] + pipe.node[j + 1]) >> 1), 0)
        weight = pipe.weight[j] * place.scale
        least -= weight * length
        middle = tension + 0.5 * length * slope
        force = contact(middle, weight, hole.kappa2[i], hole.kappa_d[i], hole.sin2[i])
        if middle < 0.0:
            if memory.state[j] < 2 and latch(setting, place, j, i, middle):
                memory.state[j] = 2
            torque = 0.0
            if place.torque > 0.0:
                torque = torque_at(setting, place, j, i)
                if memory.state[j] < 2 and latch_wound(setting, place, j, i, middle, torque):
                    memory.state[j] = 2
            if memory.state[j] == 2:
                give = criteria.at[criteria.kind[j], i, GIVE]
                force += middle * middle * give
                if place.torque > 0.0:
                    force += winding_wall(give, pipe.ei[j], middle, torque)
        slope = -weight * hole.cos_i[i] + rub * mu[i] * force
        # nothing but the pipe above presses: without this a helix marched against its motion runs away
        tension = max(tension + slope * length, least)
        if bounded and (tension - kept[j]) * rub >= 0.0:
            memory.visits[0] += place.top - j + 1
            return j + 1
        kept[j] = tension
    memory.visits[0] += place.top + 1
    return 0


@njit(cache=True, error_model="numpy")
def rise(
    setting: Setting, memory: Memory, place: Stand, rub: float, tension_bit: float, helices: bool
) -> float:
    """March up from the bit into work space, friction summed beside; returns tension at the rotary.

    `rub` as in `march_down`.
    """
    hole, pipe, criteria, mu = setting.hole, setting.pipe, setting.criteria, setting.mu
    tension = tension_bit
    drag = 0.0
    slope = 0.0
    memory.work[0] = tension
    memory.drag[0] = 0.0
    for j in range(place.top + 1):
        length = min(pipe.x[j + 1], place.bit) - pipe.x[j]
        i = max(place.first - ((pipe.node[j] + pipe.node[j + 1]) >> 1), 0)
        weight = pipe.weight[j] * place.scale
        middle = tension + 0.5 * length * slope
        force = contact(middle, weight, hole.kappa2[i], hole.kappa_d[i], hole.sin2[i])
        if helices and middle < 0.0 and memory.state[j] == 2:
            give = criteria.at[criteria.kind[j], i, GIVE]
            force += middle * middle * give
            if place.torque > 0.0:
                torque = torque_at(setting, place, j, i)
                force += winding_wall(give, pipe.ei[j], middle, torque)
        friction = rub * mu[i] * force
        slope = weight * hole.cos_i[i] - friction
        tension += slope * length
        drag += friction * length
        memory.work[j + 1] = tension
        memory.drag[j + 1] = drag
    memory.visits[0] += place.top + 1
    return tension


@njit(cache=True)
def anchor(memory: Memory, place: Stand, tension_top: float, model_top: float) -> None:
    """Take the curve in work space, free at the bit, as the profile.

    What the hookload says beyond it is spread as the friction is: the whole string is taken to rub
    more, or less, by one ratio.
    """
    whole = memory.drag[place.top + 1]
    excess = (tension_top - model_top) / whole if abs(whole) > 1.0 else 0.0
    for j in range(place.top + 2):
        memory.tension[j] = memory.work[j] + excess * memory.drag[j]


@njit(cache=True)
def stretch_between(pipe: Pipe, first: Array, second: Array, place: Stand) -> float:
    """Length by which the string differs between two tension profiles [m]."""
    total = 0.0
    for j in range(place.top + 1):
        length = min(pipe.x[j + 1], place.bit) - pipe.x[j]
        total += 0.5 * (second[j] - first[j] + second[j + 1] - first[j + 1]) * length / pipe.ea[j]
    return total


@njit(cache=True, error_model="numpy")
def bit_curve(
    setting: Setting, memory: Memory, place: Stand, rub: float, tension_bit: float, limit: float
) -> tuple[float, int]:
    """Stretch of the curve from `tension_bit` up to where it meets the memory, and the node it ends under.

    The curve is left in work space. Ends early where the stretch passes `limit`. The node is -1 where
    the curve runs to the rotary without meeting the memory.
    """
    hole, pipe, criteria, mu = setting.hole, setting.pipe, setting.criteria, setting.mu
    kept = memory.tension
    tension = tension_bit
    over = tension - kept[0]
    memory.work[0] = tension
    stretch = 0.0
    slope = 0.0
    for j in range(place.top + 1):
        length = min(pipe.x[j + 1], place.bit) - pipe.x[j]
        i = max(place.first - ((pipe.node[j] + pipe.node[j + 1]) >> 1), 0)
        weight = pipe.weight[j] * place.scale
        middle = tension + 0.5 * length * slope
        force = contact(middle, weight, hole.kappa2[i], hole.kappa_d[i], hole.sin2[i])
        give = 1.0 / pipe.ea[j]
        if middle < 0.0 and memory.state[j] == 2:
            spring = criteria.at[criteria.kind[j], i, GIVE]
            force += middle * middle * spring
            if place.torque > 0.0:
                torque = torque_at(setting, place, j, i)
                force += winding_wall(spring, pipe.ei[j], middle, torque)
            give += 4.0 * pipe.ei[j] * spring * spring
        slope = weight * hole.cos_i[i] - rub * mu[i] * force
        tension += slope * length
        memory.work[j + 1] = tension
        above = tension - kept[j + 1]
        memory.visits[0] += 1
        if above <= 0.0:
            return stretch + 0.5 * over * length * over / (over - above) * give, j
        stretch += 0.5 * (over + above) * length * give
        if stretch > limit:
            return stretch, j
        over = above
    return stretch, -1


@njit(cache=True, error_model="numpy")
def bit_front(
    setting: Setting, memory: Memory, place: Stand, rub: float, drilled: float
) -> bool:
    """Unload the string from below by the length drilled [m].

    Returns whether the front reached the rotary.
    """
    low = memory.tension[0]
    high = -place.push
    if low >= high or drilled <= 0.0:
        return False
    most, _ = bit_curve(setting, memory, place, rub, high, drilled)
    if most <= drilled:
        value = high
    else:
        low_value, high_value = -drilled, most - drilled
        value = low
        for _ in range(24):
            value = 0.5 * (low + high)
            if high_value < 3.0 * drilled:
                value = low - low_value * (high - low) / (high_value - low_value)
            got, _ = bit_curve(setting, memory, place, rub, value, 8.0 * drilled)
            miss = got - drilled
            if abs(miss) < 0.01 * drilled or high - low < 1.0:
                break
            if miss > 0.0:
                high, high_value = value, miss
            else:
                low, low_value = value, miss
    _, end = bit_curve(setting, memory, place, rub, value, np.inf)
    reached = end < 0
    last = place.top if reached else end
    for j in range(last + 1):
        memory.tension[j] = memory.work[j]
    return reached
