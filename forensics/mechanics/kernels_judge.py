"""Compiled judgement of a load profile against its thresholds, with the memory buckled pipe has."""

from __future__ import annotations

from typing import TYPE_CHECKING, NamedTuple

import numpy as np
from numba import njit

from forensics.mechanics.eigen import LIMIT
from forensics.mechanics.kernels_critical import helical_prepared, sinusoidal_prepared
from forensics.mechanics.kernels_march import Array, Hole, Pipe, Place, place_at
from forensics.mechanics.threshold import ENVELOPE_RELEASE as ENVELOPE

if TYPE_CHECKING:
    from forensics.mechanics.kernels_replay import Run

FAR_FROM_VERTICAL = 20.0  # local load in units of the near-vertical one: c is its limit (0.04 % of the load)
SQUARE, LINEAR, CONSTANT, CUBE, LENGTH, GIVE, TAKEN = range(7)  # columns of `Criteria.at`


class Criteria(NamedTuple):
    """What a place is judged by.

    `at` has shape (kinds of pipe, depths, 7), `kind` (elements) picks its row. The first three columns give
    the fourth power of the Dawson-Paslay load at tension T, contact averaged over a sine wave, as
    T² SQUARE + T LINEAR + CONSTANT (huge on a support); CUBE is (EI w² cos² I)^⅓, zero where cos I <= 0;
    LENGTH the place of the stiff length in the table of near-vertical coefficients; GIVE is r / (4 EI);
    TAKEN what turning off bottom at a friction of one takes off the torque between surface and there [N.m].
    `onset` multiplies the Dawson-Paslay load for the helix; `envelope` is 1 where a helix lasts until its
    own unloading limit; `table` holds the near-vertical coefficients.
    """

    kind: Array
    at: Array
    onset: float
    envelope: int
    table: tuple[Array, float, float, float, float]


class Stand(NamedTuple):
    """A `Place` and what acts on the ends of the string there.

    `torque` at surface [N.m] and `fall`, what turning takes off it per unit of TAKEN, both zero
    where torque is left out; `push` with which the jets lift the bit [N].
    """

    bit: float
    top: int
    first: int
    scale: float
    cube: float
    torque: float
    fall: float
    push: float


class Setting(NamedTuple):
    """What does not change while a run is replayed: hole, string, criteria, friction by depth."""

    hole: Hole
    pipe: Pipe
    criteria: Criteria
    mu: Array


@njit(cache=True, inline="always")
def stand_at(hole: Hole, pipe: Pipe, bit: float, scale: float, ends: Array) -> Stand:
    """Place a string as `place_at` does; `ends` holds torque, its fall and the push at the bit."""
    place = place_at(hole, pipe, bit, scale)
    return Stand(bit, place.top, place.first, scale, place.cube, ends[0], ends[1], ends[2])


@njit(cache=True, error_model="numpy", inline="always")
def local_square(setting: Setting, place: Place, j: int, i: int, tension: float) -> float:
    """Square of the Dawson-Paslay load of element `j` at depth index `i`, at the contact there [N²]."""
    at, row, scale = setting.criteria.at, setting.criteria.kind[j], place.scale
    linear = tension * at[row, i, SQUARE] + scale * at[row, i, LINEAR]
    return np.sqrt(max(tension * linear + scale * scale * at[row, i, CONSTANT], 0.0))


@njit(cache=True, error_model="numpy", inline="always")
def thresholds(setting: Setting, place: Place, j: int, i: int, tension: float) -> tuple[float, float, float]:
    """Dawson-Paslay, sinusoidal and helical load of element `j` at depth index `i` [N]; huge on a support."""
    criteria = setting.criteria
    row = criteria.kind[j]
    local = np.sqrt(local_square(setting, place, j, i, tension))
    cube = criteria.at[row, i, CUBE] * place.cube
    if local > FAR_FROM_VERTICAL * cube:
        return local, local + LIMIT * cube, criteria.onset * (local + LIMIT * cube)
    length = criteria.at[row, i, LENGTH]
    low, local, log_n = sinusoidal_prepared(local, 1.0, cube, length, criteria.table)
    return local, low, helical_prepared(local, cube, log_n, criteria.onset)


@njit(cache=True, error_model="numpy", inline="always")
def latch(setting: Setting, place: Place, j: int, i: int, tension: float) -> bool:
    """Whether element `j`, not yet helical, turns helical at this tension."""
    # the near-vertical term only raises the threshold, so most places end here
    onset = setting.criteria.onset
    if tension * tension < onset * onset * local_square(setting, place, j, i, tension):
        return False
    return -tension >= thresholds(setting, place, j, i, tension)[2]


@njit(cache=True, inline="always")
def torque_at(setting: Setting, place: Stand, j: int, i: int) -> float:
    """Torque in element `j` at depth index `i` [N.m]."""
    return max(place.torque - place.fall * setting.criteria.at[setting.criteria.kind[j], i, TAKEN], 0.0)


@njit(cache=True, error_model="numpy")
def lowered(low: float, high: float, ei: float, torque: float) -> float:
    """Helical load `high` as torque lowers it, not below the sinusoidal load `low` [N]."""
    return max(high - torque * np.sqrt(high / (2.0 * ei)), low)


@njit(cache=True, error_model="numpy")
def winding_wall(give: float, ei: float, tension: float, torque: float) -> float:
    """Wall force per length that torque adds to a helix's own, ``r M k^3`` with k^2 = F / 2EI [N/m]."""
    return 4.0 * ei * give * torque * max(-0.5 * tension / ei, 0.0) ** 1.5


@njit(cache=True, error_model="numpy")
def latch_wound(setting: Setting, place: Place, j: int, i: int, tension: float, torque: float) -> bool:
    """Whether element `j`, not yet helical, turns helical at this tension under torque."""
    _, low, high = thresholds(setting, place, j, i, tension)
    return -tension >= lowered(low, high, setting.pipe.ei[j], torque)


@njit(cache=True, error_model="numpy")
def next_state(state: int, load: float, levels: tuple[float, float, float], envelope: int) -> int:
    """State of a place under compression `load`, from its last state: 0 none, 1 sinusoidal, 2 helical."""
    straight, low, high = levels
    if load >= high:
        return 2
    release = max(low, ENVELOPE * straight) if envelope else low
    if state == 2 and load >= release:
        return 2
    return 1 if load >= low else 0


@njit(cache=True, error_model="numpy")
def judge(setting: Setting, run: Run, place: Stand, t: int) -> None:
    """Judge every compressed element, move its state on, and write the row's peaks."""
    pipe, memory, found = setting.pipe, run.memory, run.found
    chart = found.chart[found.chart_row[t]]
    memory.visits[0] += place.top + 1
    best, best_md, best_load, worst = 0.0, np.nan, 0.0, 0
    top, bottom, helix_top, helix_bottom = np.nan, np.nan, np.nan, np.nan
    for j in range(place.top + 1):
        # the end pressed hardest: near vertical the critical load is the one at the foot of what buckles
        tension = min(memory.tension[j], memory.tension[j + 1])
        if tension >= 0.0:
            memory.state[j] = 0
            continue
        i = max(place.first - ((pipe.node[j] + pipe.node[j + 1]) >> 1), 0)
        end = min(pipe.x[j + 1], place.bit)
        md = place.bit - 0.5 * (pipe.x[j] + end)
        column = int(md / run.chart_step)
        # the near-vertical term only raises the threshold: this ratio is the most it can be
        most = min(best, chart[column], 1.0)
        if tension * tension < most * most * local_square(setting, place, j, i, tension):
            memory.state[j] = 0
            continue
        levels = thresholds(setting, place, j, i, tension)
        if place.torque > 0.0:
            torque = torque_at(setting, place, j, i)
            levels = levels[0], levels[1], lowered(levels[1], levels[2], pipe.ei[j], torque)
        now = next_state(memory.state[j], -tension, levels, setting.criteria.envelope)
        memory.state[j] = now
        ratio = -tension / levels[1]
        if ratio > best:
            best, best_md, best_load = ratio, md, -tension
        if now > 0:
            worst = max(worst, now)
            bottom = place.bit - pipe.x[j] if np.isnan(bottom) else bottom
            top = place.bit - end
            if now == 2:
                helix_bottom = place.bit - pipe.x[j] if np.isnan(helix_bottom) else helix_bottom
                helix_top = place.bit - end
        chart[column] = max(chart[column], ratio)
    found.ratio[t], found.ratio_md[t], found.compression[t], found.state[t] = best, best_md, best_load, worst
    found.span[t, 0], found.span[t, 1] = top, bottom
    found.span[t, 2], found.span[t, 3] = helix_top, helix_bottom
