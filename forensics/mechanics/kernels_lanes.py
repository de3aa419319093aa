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

from forensics.mechanics.ground import Ground
from forensics.mechanics.kernels_judge import GIVE, Setting, latch, local_square, thresholds
from forensics.mechanics.kernels_march import RUN_AWAY, Array, Place, top_element

FAST = {"nsz", "arcp", "contract", "nnan"}  # no value here is ever NaN
LANES = 64  # strings in a block: some hundred bytes each stay in the first cache
# rows of a block's work space, LANES numbers each
BIT, SIGMA, SCALE, TENSION, SLOPE, MIDDLE, LENGTH, FORCE = (row * LANES for row in range(8))
RUB, NEAR, HELIX, HELIX_BY, DRAG, OWN, ARM, RATIO = (row * LANES for row in range(8, 16))
ROWS = 16
LEAST = 0.999  # of the least load a helix can start at: what rounding may take is far less


class Strings(NamedTuple):
    """The strings to march; arrays of shape (k,), `factor` (sections, k).

    `bit` depth [m], ascending; `sigma` +1 going down, -1 up, 0 without axial friction; `scale` of
    weights; `load` on the bit [N].
    """

    bit: Array
    sigma: Array
    scale: Array
    load: Array
    factor: Array


class AtRotary(NamedTuple):
    """What the march writes; arrays of shape (k,), or (0,) where one is not asked for.

    `weight` at the rotary [N]; `arm`, contact force times its radius summed along the string: the torque at a
    friction of one [N.m]; `ratio`, the largest load ratio anywhere; `slopes`, shape (k, sections + 1) or of
    no column: derivatives of `weight` against each section's friction and against the scale [N per 1].
    A weight below `RUN_AWAY` is that of a string that locks up, and nothing beside it holds.
    """

    weight: Array
    arm: Array
    ratio: Array
    slopes: Array


class Ask(NamedTuple):
    """What is to be worked out beside the weight."""

    helices: bool
    ratio: bool
    arm: bool
    slopes: bool


class _Room(NamedTuple):
    """Work space of a block; see the rows above."""

    work: Array
    stage: Array
    factor: Array
    first: Array
    at: Array
    section: Array
    by: Array
    by_slope: Array


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
def _rub_alike(number: int, factor: Array, section: Array, work: Array, width: int) -> None:
    """Take the friction of one section for all strings of a block."""
    for k in range(width):
        section[k] = number
        work[RUB + k] = factor[number * LANES + k]


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
def _placed(work: Array, j: int, k: int) -> Place:
    """Place string `k`, as far as the judge asks."""
    scale = work[SCALE + k]
    return Place(work[BIT + k], j, 0, scale, 1.0 if scale == 1.0 else scale ** (2.0 / 3.0))


@njit(cache=True, error_model="numpy", inline="always")
def _helices(setting: Setting, work: Array, at: Array, j: int, width: int) -> None:
    """Add the contact of a helix to those strings near one that are pressed into it on element `j`."""
    kind = setting.criteria.kind[j]
    for k in range(width):
        middle = work[MIDDLE + k]
        if work[NEAR + k] < 0.0 or middle >= 0.0:
            continue
        if latch(setting, _placed(work, j, k), j, at[k], middle):
            give = setting.criteria.at[kind, at[k], GIVE]
            extra = work[RUB + k] * middle * middle * give
            work[HELIX + k] = middle * middle * give
            work[HELIX_BY + k] = 2.0 * middle * give
            work[SLOPE + k] -= extra
            work[TENSION + k] = max(work[TENSION + k] - extra * work[LENGTH + k], 4.0 * RUN_AWAY)


@njit(cache=True, error_model="numpy", inline="always")
def _judge(setting: Setting, work: Array, at: Array, j: int, width: int) -> None:
    """Keep the largest load ratio of each string."""
    for k in range(width):
        middle, best = work[MIDDLE + k], work[RATIO + k]
        if middle >= 0.0 or work[LENGTH + k] <= 0.0:
            continue
        place = _placed(work, j, k)
        # the near-vertical term only raises the threshold
        if middle * middle > best * best * local_square(setting, place, j, at[k], middle):
            work[RATIO + k] = max(best, -middle / thresholds(setting, place, j, at[k], middle)[1])


@njit(cache=True, error_model="numpy", fastmath=FAST)
def _turn(work: Array, radius: float, width: int) -> None:
    """Sum contact force times radius."""
    for k in range(width):
        work[ARM + k] += work[FORCE + k] * radius * work[LENGTH + k]


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
def _load(strings: Strings, inv_step: float, start: int, width: int, room: _Room) -> float:
    """Set a block of strings on their bits; returns the deepest [m]."""
    work, deepest = room.work, 0.0
    work[:] = 0.0
    room.by[:, :] = 0.0
    room.by_slope[:, :] = 0.0
    for k in range(width):
        t = start + k
        work[BIT + k], work[TENSION + k], work[SCALE + k] = strings.bit[t], -strings.load[t], strings.scale[t]
        work[SIGMA + k] = strings.sigma[t]
        room.first[k] = int(strings.bit[t] * inv_step + 0.5)
        deepest = max(deepest, strings.bit[t])
        for p in range(len(strings.factor)):
            room.factor[p * LANES + k] = strings.factor[p, t] * strings.sigma[t]
    return deepest


@njit(cache=True)
def _store(found: AtRotary, start: int, width: int, room: _Room) -> None:
    """Write what a block came to."""
    for k in range(width):
        found.weight[start + k] = room.work[TENSION + k]
        if len(found.arm) > 0:
            found.arm[start + k] = room.work[ARM + k]
        if len(found.ratio) > 0:
            found.ratio[start + k] = room.work[RATIO + k]
        for p in range(found.slopes.shape[1]):
            found.slopes[start + k, p] = room.by[p, k]


@njit(cache=True, error_model="numpy", inline="always")
def _climb(setting: Setting, ground: Ground, room: _Room, width: int, last: int, ask: Ask) -> None:
    """March a block from its bits up to the element that reaches through the rotary for the deepest."""
    # out of their tuples once: each look into one counts references
    x, node, weights, radius = setting.pipe.x, setting.pipe.node, setting.pipe.weight, setting.pipe.radius
    rows, sections, until = ground.rows, ground.section, ground.until
    least, kinds = ground.least, setting.criteria.kind
    work, stage, factor, first, at, section, by, by_slope = room
    alike = -1
    for j in range(last + 1):
        _fetch(rows, first, (node[j] + node[j + 1]) >> 1, stage, at, width)
        number = sections[at[0]] if until[at[0]] >= at[width - 1] else -1
        if number < 0:
            _rub(sections, at, factor, section, work, width)
        elif number != alike:
            _rub_alike(number, factor, section, work, width)
        alike = number
        pressed = _step(work, stage, (x[j], x[j + 1]), weights[j], width)
        if ask.slopes:
            work[HELIX:DRAG] = 0.0
        if ask.helices and pressed > 0 and _near(least[kinds[j]], at, work, width) > 0:
            _helices(setting, work, at, j, width)
        if ask.ratio and pressed > 0:
            _judge(setting, work, at, j, width)
        if ask.arm:
            _turn(work, radius[j], width)
        if ask.slopes:
            _differentiate(work, stage, weights[j], width)
            _carry(work, section, by, by_slope, width)


@njit(cache=True, error_model="numpy", nogil=True)
def march_lanes(setting: Setting, ground: Ground, strings: Strings, helices: bool, found: AtRotary) -> None:
    """March strings from the bit up to the rotary.

    Parameters
    ----------
    setting : Setting
        Its own friction is not used.
    ground, strings : Ground, Strings
        Hole and strings.
    helices : bool
        Whether the string carries helical contact where it is pressed past the onset.
    found : AtRotary
        Filled.
    """
    asked = found.slopes.shape[1]
    room = _Room(
        np.empty(ROWS * LANES),
        np.zeros(4 * LANES),
        np.zeros(len(strings.factor) * LANES),
        np.zeros(LANES, dtype=np.int64),
        np.zeros(LANES, dtype=np.uint64),
        np.zeros(LANES, dtype=np.int64),
        np.zeros((asked, LANES)),
        np.zeros((asked, LANES)),
    )
    ask = Ask(helices, len(found.ratio) > 0, len(found.arm) > 0, asked > 0)
    for start in range(0, len(strings.bit), LANES):
        width = min(LANES, len(strings.bit) - start)
        deepest = _load(strings, setting.hole.inv_step, start, width, room)
        _climb(setting, ground, room, width, top_element(setting.pipe.x, deepest), ask)
        _store(found, start, width, room)
