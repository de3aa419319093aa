"""The replay, compiled: sample after sample, the load memory moved on and judged."""

from __future__ import annotations

from typing import NamedTuple

import numpy as np
from numba import njit

from forensics.mechanics.kernels_judge import Criteria, next_state, thresholds
from forensics.mechanics.kernels_march import Array, Hole, Pipe, top_element
from forensics.mechanics.kernels_memory import (
    FREE,
    ROTATING,
    Memory,
    Place,
    anchor,
    bit_curve,
    bit_front,
    march_down,
    rise,
    stretch_between,
)

HOLD, TURN, SLIDE = 0, 1, 2  # what a sample lets the string do
BY_HOOKLOAD, BY_MEMORY, BY_RATE, BY_PRESSURE = 0, 1, 2, 3  # what the bit load rests on


class Samples(NamedTuple):
    """What moves the string, row by row; arrays of shape (n,).

    `bit` [m]; `top` tension at the rotary [N]; `mode` HOLD, TURN or SLIDE; `direction` +1 block going
    down, -1 up, kept until it reverses; `travel` block travel since it reversed [m]; `drilling` bit on
    bottom and pumping; `free` bit clear of bottom; `share` axial share of friction while turning, signed
    by direction; `down`, `up` local multiples of friction; `scale` of weights for mud; `step` time since
    the row before [s]; `witness` bit load by differential pressure [N] or NaN.
    """

    bit: Array
    top: Array
    mode: Array
    direction: Array
    travel: Array
    drilling: Array
    free: Array
    share: Array
    down: Array
    up: Array
    scale: Array
    step: Array
    witness: Array


class Rules(NamedTuple):
    """Dead band of the hookload and tolerance of the off-bottom model [N]; the rate law."""

    band: float
    tolerance: float
    rate: float
    exponent: float


class Found(NamedTuple):
    """What the replay writes, row by row; arrays of shape (n,), the map (times, depths)."""

    bit_load: Array
    ratio: Array
    ratio_md: Array
    compression: Array
    state: Array
    span: Array
    reach: Array
    basis: Array
    full: Array
    stretch: Array
    chart: Array
    chart_row: Array


@njit(cache=True, error_model="numpy")
def judge(
    pipe: Pipe, criteria: Criteria, memory: Memory, place: Place, found: Found, t: int, chart_step: float
) -> None:
    """Judge every compressed element, move its state on, and write the row's peaks."""
    best, best_md, best_load, worst = 0.0, np.nan, 0.0, 0
    top, bottom, helix_top, helix_bottom = np.nan, np.nan, np.nan, np.nan
    for j in range(place.top + 1):
        end = min(pipe.x[j + 1], place.bit)
        tension = 0.5 * (memory.tension[j] + memory.tension[j + 1])
        if tension >= 0.0:
            memory.state[j] = 0
            continue
        i = max(place.first - ((pipe.node[j] + pipe.node[j + 1]) >> 1), 0)
        levels = thresholds(pipe, criteria, j, i, tension, place.scale)
        now = next_state(memory.state[j], -tension, levels, criteria.envelope)
        memory.state[j] = now
        md = place.bit - 0.5 * (pipe.x[j] + end)
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
        column = int(md / chart_step)
        if found.chart[found.chart_row[t], column] < ratio:
            found.chart[found.chart_row[t], column] = ratio
    found.ratio[t], found.ratio_md[t], found.compression[t], found.state[t] = best, best_md, best_load, worst
    found.span[t, 0], found.span[t, 1] = top, bottom
    found.span[t, 2], found.span[t, 3] = helix_top, helix_bottom


@njit(cache=True, error_model="numpy")
def turning(
    hole: Hole, pipe: Pipe, criteria: Criteria, mu: Array, memory: Memory, place: Place, samples: Samples, t: int
) -> None:
    """Profile of a turning string: nearly frictionless, free at the bit or hung from the hookload."""
    share = samples.share[t]
    sigma = 1.0 if share >= 0.0 else -1.0
    if samples.free[t]:
        model = rise(hole, pipe, criteria, mu, memory, place, sigma, abs(share), 0.0, False)
        anchor(memory, place, model, model)
    else:
        march_down(hole, pipe, criteria, mu, memory, place, sigma, abs(share), samples.top[t], False)


@njit(cache=True, error_model="numpy")
def whole_slide(
    hole: Hole, pipe: Pipe, criteria: Criteria, mu: Array, memory: Memory, place: Place, samples: Samples, t: int,
    sigma: float,
) -> None:
    """Profile of a string that slides as a whole in one direction."""
    factor = samples.down[t] if sigma > 0 else samples.up[t]
    if samples.free[t]:
        model = rise(hole, pipe, criteria, mu, memory, place, sigma, factor, 0.0, True)
        anchor(memory, place, samples.top[t], model)
    else:
        march_down(hole, pipe, criteria, mu, memory, place, sigma, factor, samples.top[t], False)


@njit(cache=True, error_model="numpy")
def all_moving(
    hole: Hole, pipe: Pipe, criteria: Criteria, mu: Array, memory: Memory, place: Place, samples: Samples, t: int, rules: Rules,
    found: Found,
) -> bool:
    """Whether a bit clear of bottom must be moving: the block has gone further than the string can stretch.

    A hookload well below the model's slack-off weight is not taken for it: that string may be held.
    """
    sigma = float(samples.direction[t])
    factor = samples.down[t] if sigma > 0 else samples.up[t]
    model = rise(hole, pipe, criteria, mu, memory, place, sigma, factor, 0.0, True)
    found.stretch[t] = abs(stretch_between(pipe, memory.reversal, memory.work, place))
    if samples.travel[t] < 1.3 * found.stretch[t] + 0.3:
        return False
    return (samples.top[t] - model) * sigma > -rules.tolerance


@njit(cache=True, error_model="numpy")
def sliding(
    hole: Hole, pipe: Pipe, criteria: Criteria, mu: Array, memory: Memory, place: Place, samples: Samples, t: int,
    rules: Rules, found: Found, now: Array,
) -> None:
    """Move a string that does not turn; `now` holds mode, last direction, last hookload, reach above the bit."""
    direction = samples.direction[t]
    if now[0] == ROTATING:
        now[0] = FREE
        now[1] = 0.0
    if direction != 0 and direction != now[1]:
        memory.reversal[: place.top + 2] = memory.tension[: place.top + 2]
        now[1] = direction
        now[3] = place.bit
        if now[0] != direction:
            now[0] = FREE
    top = samples.top[t]
    if now[0] == FREE:
        sigma = float(direction)
        factor = samples.down[t] if direction > 0 else samples.up[t]
        beyond = (now[2] - top) * sigma
        if direction != 0 and beyond > rules.band:
            node = march_down(hole, pipe, criteria, mu, memory, place, sigma, factor, top, True)
            now[2] = top
            now[3] = min(now[3], pipe.x[node])
            if node == 0:
                now[0] = direction
        elif samples.drilling[t] and direction >= 0 and top - now[2] > 4.0 * rules.band:
            now[0] = 1.0
        if now[0] == FREE and samples.free[t] and direction != 0:
            if all_moving(hole, pipe, criteria, mu, memory, place, samples, t, rules, found):
                now[0] = direction
    if now[0] != FREE:
        whole_slide(hole, pipe, criteria, mu, memory, place, samples, t, now[0])
        now[2] = top
        now[3] = 0.0


@njit(cache=True, error_model="numpy")
def drilling_off(
    hole: Hole, pipe: Pipe, criteria: Criteria, mu: Array, memory: Memory, place: Place, samples: Samples, t: int, rules: Rules,
    now: Array,
) -> int:
    """Let the bit unload the string from below; returns what the bit load then rests on."""
    load = -memory.tension[0]
    witness = samples.witness[t]
    factor = mu * samples.down[t]
    if not np.isnan(witness):
        if load - witness > rules.band:
            _, end = bit_curve(hole, pipe, criteria, factor, memory, place, -max(witness, 0.0), np.inf)
            last = place.top if end < 0 else end
            memory.tension[: last + 1] = memory.work[: last + 1]
            if end < 0:
                now[0] = 1.0
        return BY_PRESSURE
    if rules.rate <= 0.0 or load <= 0.0:
        return BY_MEMORY
    drilled = rules.rate * load**rules.exponent * samples.step[t]
    if bit_front(hole, pipe, criteria, factor, memory, place, drilled):
        now[0] = 1.0
    return BY_RATE


@njit(cache=True, error_model="numpy")
def replay_rows(
    hole: Hole, pipe: Pipe, criteria: Criteria, mu: Array, memory: Memory, samples: Samples, rules: Rules,
    found: Found, chart_step: float, now: Array,
) -> int:
    """Replay rows in order, the memory moved on from row to row; returns the number of stations visited.

    `memory` and `now` (mode, last direction, last hookload, reach above the bit, last depth index, last
    top element) are changed in place: called again with later rows it goes on where it stopped. A fresh
    start has -1 for the last two.
    """
    visits = 0
    last_first, last_top = int(now[4]), int(now[5])
    for t in range(len(samples.bit)):
        bit = samples.bit[t]
        top = top_element(pipe.x, bit)
        place = Place(bit, top, int(bit * hole.inv_step + 0.5), samples.scale[t])
        if last_top < 0:
            model = rise(hole, pipe, criteria, mu, memory, place, 0.0, 0.0, 0.0, False)
            anchor(memory, place, model, model)
            now[2] = model
        elif top > last_top:
            for j in range(last_top + 1, top + 1):
                i = max(place.first - pipe.node[j], 0)
                step = pipe.x[j + 1] - pipe.x[j]
                memory.tension[j + 1] = memory.tension[j] + pipe.weight[j] * place.scale * hole.cos_i[i] * step
                memory.reversal[j + 1] = memory.tension[j + 1]
                memory.state[j] = 0
        mode = samples.mode[t]
        if still_the_same(samples, rules, t, now, place.first):
            copy_row(found, t)
            continue
        basis = BY_MEMORY
        if mode == TURN:
            turning(hole, pipe, criteria, mu, memory, place, samples, t)
            now[0], now[2], now[3] = ROTATING, samples.top[t], 0.0
            basis = BY_HOOKLOAD
        elif mode == SLIDE:
            sliding(hole, pipe, criteria, mu, memory, place, samples, t, rules, found, now)
            if now[0] != FREE:
                basis = BY_HOOKLOAD
            elif samples.drilling[t]:
                basis = drilling_off(hole, pipe, criteria, mu, memory, place, samples, t, rules, now)
        elif mode == HOLD:
            now[0] = FREE
            now[1] = 0.0
        if mode == HOLD and t > 0 and place.first == last_first:
            copy_row(found, t)
        else:
            judge(pipe, criteria, memory, place, found, t, chart_step)
        visits += top + 1
        last_first, last_top = place.first, top
        now[4], now[5] = last_first, last_top
        found.bit_load[t] = max(-memory.tension[0], 0.0)
        found.reach[t] = bit - now[3]
        found.basis[t] = basis
        found.full[t] = int(now[0])
    return visits


@njit(cache=True)
def still_the_same(samples: Samples, rules: Rules, t: int, now: Array, first: int) -> bool:
    """Whether a string that moves as a whole hangs as it did: same place, mode and, within a fifth of the dead band, hookload."""
    if t == 0 or now[0] == FREE or samples.mode[t] != samples.mode[t - 1] or first != int(now[4]):
        return False
    if samples.free[t] != samples.free[t - 1] or samples.direction[t] != samples.direction[t - 1]:
        return False
    return abs(samples.top[t] - now[2]) < 0.2 * rules.band


@njit(cache=True)
def copy_row(found: Found, t: int) -> None:
    """Nothing changed: the row's peaks are those of the row before."""
    found.ratio[t] = found.ratio[t - 1]
    found.ratio_md[t] = found.ratio_md[t - 1]
    found.compression[t] = found.compression[t - 1]
    found.state[t] = found.state[t - 1]
    found.span[t] = found.span[t - 1]
    found.bit_load[t] = found.bit_load[t - 1]
    found.reach[t] = found.reach[t - 1]
    found.basis[t] = found.basis[t - 1]
    found.full[t] = found.full[t - 1]
