"""Compiled weights off bottom: the march from a free bit, helices where the string is pressed into them."""

from __future__ import annotations

import numpy as np
from numba import njit

from forensics.mechanics.kernels_judge import GIVE, Setting, latch, thresholds
from forensics.mechanics.kernels_march import RUN_AWAY, Array, Ask, contact, place_at


@njit(cache=True, error_model="numpy")
def weigh(setting: Setting, ask: Ask, judged: bool) -> tuple[float, float]:
    """Tension at the rotary of a string that slides off bottom, helical contact where it has latched [N].

    Beside it, where `judged`, the largest load ratio anywhere (else 0). A string that locks up under its
    own drag has no such tension: NaN.
    """
    hole, pipe, criteria = setting.hole, setting.pipe, setting.criteria
    place = place_at(hole, pipe, ask.bit, ask.scale)
    tension = ask.tension_bit
    slope = 0.0
    ratio = 0.0
    for j in range(place.top + 1):
        length = min(pipe.x[j + 1], ask.bit) - pipe.x[j]
        i = max(place.first - ((pipe.node[j] + pipe.node[j + 1]) >> 1), 0)
        weight = pipe.weight[j] * ask.scale
        middle = tension + 0.5 * length * slope
        force = contact(middle, weight, hole.kappa2[i], hole.kappa_d[i], hole.sin2[i])
        if middle < 0.0 and latch(setting, place, j, i, middle):
            force += middle * middle * criteria.at[criteria.kind[j], i, GIVE]
        if judged and middle < 0.0:
            ratio = max(ratio, -middle / thresholds(setting, place, j, i, middle)[1])
        if middle < RUN_AWAY:
            return np.nan, np.inf
        slope = weight * hole.cos_i[i] - ask.sigma * setting.mu[i] * force
        tension += slope * length
    return (tension if tension > RUN_AWAY else np.nan), ratio


@njit(cache=True)
def wake(number: float) -> float:
    """Give the number back: a first call makes numba load what all compiled code needs."""
    return number


@njit(cache=True)
def weigh_many(setting: Setting, bits: Array, scale: Array, sigma: float) -> Array:
    """Weigh the string at the rotary for many bit depths, bit free [N]."""
    result = np.empty(len(bits))
    for k in range(len(bits)):
        result[k] = weigh(setting, Ask(bits[k], sigma, 0.0, scale[k]), False)[0]
    return result


@njit(cache=True)
def press_many(setting: Setting, bits: Array) -> Array:
    """Largest load ratio of strings that slide down off bottom, for many bit depths."""
    result = np.empty(len(bits))
    for k in range(len(bits)):
        result[k] = weigh(setting, Ask(bits[k], 1.0, 0.0, 1.0), True)[1]
    return result
