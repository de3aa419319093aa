"""Compiled march of many strings side by side: one element at a time, all strings of a block at it.

Strings may differ in bit depth, direction, friction and weight. What the hole does where each of them lies
is copied side by side first; roots and divisions then run in the processor's vector units. Only strings
pressed past the least load at which a helix can start are looked at one by one.

Where asked, the derivatives of every tension against each section's friction and against the scale of
weights are carried along in the same pass: with m the tension at the middle of an element and p a parameter,

    dT/dx = w cos I - sigma mu N(m),    d/dx (dT/dp) = d(w cos I)/dp - sigma (dmu/dp N + mu dN/dp),

dN/dp being dN/dm dm/dp and what p changes itself.
"""

from __future__ import annotations

from typing import NamedTuple

import numpy as np
from numba import njit

from forensics.mechanics.eigen import LIMIT
from forensics.mechanics.kernels_judge import CONSTANT, CUBE, GIVE, LINEAR, SQUARE, Criteria, Setting, latch
from forensics.mechanics.kernels_march import RUN_AWAY, Array, Place, top_element

FAST = {"nsz", "arcp", "contract", "nnan"}  # no value here is ever NaN
LANES = 64  # strings in a block: some hundred bytes each stay in the first cache
# rows of a block's work space, LANES numbers each
BIT, TENSION, SLOPE, MIDDLE, SCALE, LENGTH, FORCE, RUB, SIGMA, NEAR, HELIX, HELIX_BY, DRAG, OWN = (
    row * LANES for row in range(14)
)
ROWS = 14
LEAST = 0.999  # of the least load a helix can start at: what rounding may take is far less


class Ground(NamedTuple):
    """The hole as lanes read it.

    `rows` has shape (4 depths,): cos I, sin² I, squared and downward curvature of each depth together;
    `section` (depths,) the friction section; `least` (kinds of pipe, depths) a load below which no helix
    starts there, weights unscaled [N].
    """

    rows: Array
    section: Array
    least: Array


class Strings(NamedTuple):
    """The strings to weigh; arrays of shape (k,), `factor` (sections, k).

    `bit` [m], in order for speed; `sigma` +1 going down, -1 up, 0 without axial friction; `scale` of weights.
    """

    bit: Array
    sigma: Array
    scale: Array
    factor: Array


def least_onset(criteria: Criteria) -> Array:
    """Give a load below which no helix starts, whatever the contact there, shape (kinds, depths) [N].

    The fourth power of the Dawson-Paslay load is a parabola of the tension: its least value under compression
    and the least near-vertical term bound the onset from below.
    """
    square, linear, constant = (criteria.at[..., column] for column in (SQUARE, LINEAR, CONSTANT))
    turns = (linear > 0.0) & (square > 0.0)
    dip = np.where(turns, linear**2 / (4.0 * np.where(turns, square, 1.0)), 0.0)
    local = np.maximum(constant - dip, 0.0) ** 0.25
    return criteria.onset * (local + LIMIT * criteria.at[..., CUBE])


@njit(cache=True, error_model="numpy", fastmath=FAST)
def _fetch(rows: Array, first: Array, depth: int, stage: Array, at: Array, width: int) -> None:
    """Copy what the hole does to each string of a block, `depth` steps above its bit, and note its row."""
    for k in range(width):
        i = np.uint64(max(first[k] - depth, 0))
        # all four are read before any is written: one move of the processor's
        cos_i, sin2, kappa2, kappa_d = rows[4 * i], rows[4 * i + 1], rows[4 * i + 2], rows[4 * i + 3]
        stage[4 * k], stage[4 * k + 1], stage[4 * k + 2], stage[4 * k + 3] = cos_i, sin2, kappa2, kappa_d
        at[k] = i


@njit(cache=True, error_model="numpy", fastmath=FAST)
def _rub(sections: Array, at: Array, factor: Array, section: Array, work: Array, width: int) -> None:
    """Look up each string's section, and its friction signed as it moves."""
    for k in range(width):
        here = np.uint64(sections[at[k]])
        section[k] = here
        work[RUB + k] = factor[here * np.uint64(LANES) + np.uint64(k)]


@njit(cache=True, error_model="numpy", fastmath=FAST)
def _step(work: Array, stage: Array, ends: tuple[float, float], weight: float, width: int) -> int:
    """Move a block over one element, helix left out; returns how many strings are compressed there."""
    low, high = ends
    pressed = 0
    for k in range(width):
        length = max(min(high, work[BIT + k]) - low, 0.0)
        at = work[TENSION + k] + 0.5 * length * work[SLOPE + k]
        own = weight * work[SCALE + k]
        square = at * (at * stage[4 * k + 2] + 2.0 * own * stage[4 * k + 3]) + own * own * stage[4 * k + 1]
        force = np.sqrt(max(square, 0.0))
        slope = own * stage[4 * k] - work[RUB + k] * force
        work[LENGTH + k] = length
        work[MIDDLE + k] = at
        work[FORCE + k] = force
        work[SLOPE + k] = slope
        work[TENSION + k] = max(work[TENSION + k] + slope * length, 4.0 * RUN_AWAY)
        pressed += 1 if at < 0.0 else 0  # a least tension, though telling more, would keep this off the units
    return pressed


@njit(cache=True, error_model="numpy", fastmath=FAST)
def _near(least: Array, at: Array, work: Array, width: int) -> int:
    """Leave in NEAR how far each string is past the least load of a helix; returns how many are."""
    for k in range(width):
        work[NEAR + k] = least[at[k]]
    near = 0
    for k in range(width):
        past = -work[MIDDLE + k] - LEAST * min(work[SCALE + k], 1.0) * work[NEAR + k]
        past = past if work[LENGTH + k] > 0.0 else -1.0
        work[NEAR + k] = past
        near += 1 if past >= 0.0 else 0
    return near


@njit(cache=True, error_model="numpy", inline="always")
def _helices(setting: Setting, work: Array, at: Array, j: int, width: int) -> None:
    """Add the contact of a helix to those strings near one that are pressed into it on element `j`."""
    kind = setting.criteria.kind[j]
    for k in range(width):
        middle, scale = work[MIDDLE + k], work[SCALE + k]
        if work[NEAR + k] < 0.0 or middle >= 0.0:
            continue
        place = Place(work[BIT + k], j, 0, scale, 1.0 if scale == 1.0 else scale ** (2.0 / 3.0))
        if latch(setting, place, j, at[k], middle):
            give = setting.criteria.at[kind, at[k], GIVE]
            extra = work[RUB + k] * middle * middle * give
            work[HELIX + k] = middle * middle * give
            work[HELIX_BY + k] = 2.0 * middle * give
            work[SLOPE + k] -= extra
            work[TENSION + k] = max(work[TENSION + k] - extra * work[LENGTH + k], 4.0 * RUN_AWAY)


@njit(cache=True, error_model="numpy", fastmath=FAST)
def _differentiate(work: Array, stage: Array, weight: float, width: int) -> None:
    """Leave in DRAG how friction grows with tension, in OWN what the scale of weights changes itself."""
    for k in range(width):
        at, force, rub = work[MIDDLE + k], work[FORCE + k], work[RUB + k]
        kappa_d = stage[4 * k + 3]
        own = weight * work[SCALE + k]
        inverse = rub / force if force > 0.0 else 0.0
        across = at * kappa_d + own * stage[4 * k + 1]
        work[DRAG + k] = (at * stage[4 * k + 2] + own * kappa_d) * inverse + rub * work[HELIX_BY + k]
        work[OWN + k] = weight * (stage[4 * k] - across * inverse)
        work[FORCE + k] = (force + work[HELIX + k]) * work[SIGMA + k]


@njit(cache=True, error_model="numpy", fastmath=FAST)
def _carry(work: Array, section: Array, by: Array, slope: Array, width: int) -> None:
    """Move the derivatives over the element; the last row is that against the scale of weights."""
    last = len(by) - 1
    for p in range(last):
        one, rate = by[p], slope[p]
        for k in range(width):
            length, force = work[LENGTH + k], work[FORCE + k]
            drag = work[DRAG + k] * (one[k] + 0.5 * length * rate[k])
            change = -(drag + force) if section[k] == p else -drag
            rate[k] = change
            one[k] += change * length
    one, rate = by[last], slope[last]
    for k in range(width):
        length = work[LENGTH + k]
        change = work[OWN + k] - work[DRAG + k] * (one[k] + 0.5 * length * rate[k])
        rate[k] = change
        one[k] += change * length


@njit(cache=True)
def _load(strings: Strings, start: int, width: int, work: Array, factor: Array) -> None:
    """Set a block of strings to their bits, free."""
    work[:] = 0.0
    for k in range(width):
        work[BIT + k] = strings.bit[start + k]
        work[SIGMA + k] = strings.sigma[start + k]
        work[SCALE + k] = strings.scale[start + k]
        for p in range(len(strings.factor)):
            factor[p * LANES + k] = strings.factor[p, start + k] * strings.sigma[start + k]


@njit(cache=True, error_model="numpy", nogil=True)
def weigh_lanes(setting: Setting, ground: Ground, strings: Strings, weight: Array, slopes: Array) -> None:
    """Weigh strings at the rotary, bit free, helical contact where it has latched [N]; NaN past lockup.

    Parameters
    ----------
    setting : Setting
        Its own friction is not used.
    ground, strings : Ground, Strings
        Hole and strings.
    weight : ndarray, shape (k,)
        Filled with the weights [N].
    slopes : ndarray, shape (k, sections + 1)
        Filled with their derivatives against each section's friction and against the scale [N per unit]; of
        no column where they are not asked.
    """
    # out of their tuples once: each look into one counts references
    x, node, weights = setting.pipe.x, setting.pipe.node, setting.pipe.weight
    rows, sections, least, kinds = ground.rows, ground.section, ground.least, setting.criteria.kind
    asked = slopes.shape[1]
    work, stage, factor = np.empty(ROWS * LANES), np.zeros(4 * LANES), np.zeros(len(strings.factor) * LANES)
    first, section = np.zeros(LANES, dtype=np.int64), np.zeros(LANES, dtype=np.int64)
    at = np.zeros(LANES, dtype=np.uint64)
    by, by_slope = np.zeros((asked, LANES)), np.zeros((asked, LANES))
    for start in range(0, len(strings.bit), LANES):
        width = min(LANES, len(strings.bit) - start)
        _load(strings, start, width, work, factor)
        by[:, :] = 0.0
        by_slope[:, :] = 0.0
        deepest = 0.0
        for k in range(width):
            first[k] = int(work[BIT + k] * setting.hole.inv_step + 0.5)
            deepest = max(deepest, work[BIT + k])
        for j in range(top_element(x, deepest) + 1):
            _fetch(rows, first, (node[j] + node[j + 1]) >> 1, stage, at, width)
            _rub(sections, at, factor, section, work, width)
            pressed = _step(work, stage, (x[j], x[j + 1]), weights[j], width)
            work[HELIX:DRAG] = 0.0
            if pressed > 0 and _near(least[kinds[j]], at, work, width) > 0:
                _helices(setting, work, at, j, width)
            if asked > 0:
                _differentiate(work, stage, weights[j], width)
                _carry(work, section, by, by_slope, width)
        for k in range(width):
            locked = work[TENSION + k] < RUN_AWAY
            weight[start + k] = np.nan if locked else work[TENSION + k]
            for p in range(asked):
                slopes[start + k, p] = np.nan if locked else by[p, k]
