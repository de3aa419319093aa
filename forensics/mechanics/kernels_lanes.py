"""Compiled marches of many strings side by side: one place at a time, all strings at that place.

What the hole does at a place is looked up once for all strings that lie there at the same bit depth and
differ in friction only; the strings then run in the processor's vector units. Only strings pressed past the
least load at which a helix can start are looked at one by one.
"""

from __future__ import annotations

import numpy as np
from numba import njit

from forensics.mechanics.eigen import LIMIT
from forensics.mechanics.kernels_judge import CUBE, GIVE, Setting, latch, local_square
from forensics.mechanics.kernels_march import RUN_AWAY, Array, Place, place_at

FAST = {"nsz", "arcp", "contract", "nnan"}  # no value here is ever NaN


@njit(cache=True, error_model="numpy", fastmath=FAST)
def _step(tension: Array, slope: Array, middle: Array, mu: Array, place: tuple[float, ...]) -> float:
    """Move all strings over one element, helix left out; returns the lowest tension at its middle.

    `place` holds length, kappa², 2 w kappa_d, w² sin² I, w cos I and the direction of motion.
    """
    length, square, linear, constant, along, sigma = place
    least = 0.0
    for k in range(len(tension)):
        at = tension[k] + 0.5 * length * slope[k]
        force = np.sqrt(max(at * (at * square + linear) + constant, 0.0))
        rate = along - sigma * mu[k] * force
        middle[k] = at
        slope[k] = rate
        tension[k] = max(tension[k] + rate * length, 4.0 * RUN_AWAY)
        least = min(least, at)
    return least


@njit(cache=True, error_model="numpy")
def _helices(
    setting: Setting, place: Place, strings: tuple[Array, Array, Array, Array], j: int, i: int, step: float
) -> None:
    """Add the contact of a helix to the strings that are pressed into one on element `j`.

    `strings` are tension, slope, tension at the middle and friction; `step` is length, signed with the
    direction of motion.
    """
    tension, slope, middle, mu = strings
    give = setting.criteria.at[setting.criteria.kind[j], i, GIVE]
    for k in range(len(tension)):
        if middle[k] < 0.0 and latch(setting, place, j, i, middle[k]):
            extra = mu[k] * middle[k] * middle[k] * give
            slope[k] -= np.sign(step) * extra
            tension[k] = max(tension[k] - step * extra, 4.0 * RUN_AWAY)


@njit(cache=True, error_model="numpy")
def weigh_lanes(
    setting: Setting, open_hole: Array, ask: tuple[float, float], cased: Array, opened: Array
) -> Array:
    """Weigh strings that differ in friction only at the rotary, bit free; NaN where one locks up [N].

    Parameters
    ----------
    setting : Setting
        Its own friction is not used.
    open_hole : ndarray of bool, shape (depths,)
        Whether the hole is open there.
    ask : tuple of float
        Bit depth [m]; +1 going down, -1 going up.
    cased, opened : ndarray, shape (strings,)
        Friction factors.
    """
    hole, pipe = setting.hole, setting.pipe
    bit, sigma = ask
    place = place_at(hole, pipe, bit, 1.0)
    tension, slope, middle = np.zeros(len(cased)), np.zeros(len(cased)), np.zeros(len(cased))
    for j in range(place.top + 1):
        length = min(pipe.x[j + 1], bit) - pipe.x[j]
        i = max(place.first - ((pipe.node[j] + pipe.node[j + 1]) >> 1), 0)
        weight = pipe.weight[j]
        mu = opened if open_hole[i] else cased
        here = (
            length,
            hole.kappa2[i],
            2.0 * weight * hole.kappa_d[i],
            weight * weight * hole.sin2[i],
            weight * hole.cos_i[i],
            sigma,
        )
        least = _step(tension, slope, middle, mu, here)
        if least < 0.0:
            onset = setting.criteria.onset
            cube = setting.criteria.at[setting.criteria.kind[j], i, CUBE]
            low = onset * (np.sqrt(local_square(setting, place, j, i, least)) + LIMIT * cube)
            # contact may fall as the load grows where the hole drops: half is bound enough to look closer
            if -least > 0.5 * low:
                _helices(setting, place, (tension, slope, middle, mu), j, i, sigma * length)
    return np.where(tension < RUN_AWAY, np.nan, tension)
