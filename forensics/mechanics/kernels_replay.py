"""The replay, compiled: sample after sample, the load memory moved on and judged."""

from __future__ import annotations

from typing import NamedTuple

import numpy as np
from numba import njit

from forensics.mechanics.kernels_judge import Setting, Stand, judge, stand_at
from forensics.mechanics.kernels_march import Array
from forensics.mechanics.kernels_memory import (
    FREE,
    ROTATING,
    Memory,
    anchor,
    bit_curve,
    bit_front,
    march_down,
    rise,
    stretch_between,
)

HOLD, TURN, SLIDE = 0, 1, 2  # what a sample lets the string do
BY_HOOKLOAD, BY_MEMORY, BY_RATE, BY_PRESSURE = 0, 1, 2, 3  # what the bit load rests on
MODE, WAY, HOOK, REACH, AT, TOP, LIFT, PACE, PACED, MOVES = range(10)  # columns of `Run.now`

SAME = 0.35  # of the dead band: a string that moves as a whole is not marched again for less
ARRIVED = 4.0  # dead bands the hookload must rise, block not raised, to show that the bit's front is here
RAISED = 0.03  # m of block travel that shows a string sliding down to be pulled up again
PACE_LENGTH = 1.0  # m of travel over which a held string would lose a spring's load
PACE_SHARE = 0.2  # of the spring rate: losing less, the string is moving
FAR_STRETCH, FAR_LENGTH = 3.0, 2.0  # travel beyond stretch, and [m], from which the pace is asked
OVER_STRETCH, OVER_LENGTH = 1.3, 0.3  # travel beyond stretch, and [m], that shows a clear bit to be moving


class Samples(NamedTuple):
    """What moves the string, row by row; arrays of shape (n,).

    `bit` [m]; `top` tension at the rotary [N]; `mode` HOLD, TURN or SLIDE; `direction` +1 block going
    down, -1 up, kept until it reverses; `travel` block travel since it reversed [m]; `drilling` bit on
    or near bottom and pumping; `free` bit clear of bottom; `share` axial share of friction while turning,
    signed by direction; `down`, `up` local multiples of friction; `scale` of weights for mud; `step` time
    since the row before [s]; `witness` most the bit load can be by differential pressure [N], infinite where
    that is silent; `ends`, of shape (n, 3), torque, its fall and the push at the bit, as in `Stand`.
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
    ends: Array


class Rules(NamedTuple):
    """Dead band of the hookload and tolerance of the off-bottom model [N]; the rate law."""

    band: float
    tolerance: float
    rate: float
    exponent: float


class Found(NamedTuple):
    """What the replay writes, row by row; arrays of shape (n,), `span` (n, 4), `chart` (times, depths)."""

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


class Run(NamedTuple):
    """One replay: samples in, results out, and what is carried from row to row.

    `now` holds what the string is doing (`FREE`, +1 or -1 sliding as a whole, `ROTATING`), the last
    direction, the last hookload taken [N], how near the bit surface motion has come [m above it],
    depth index and top element of the last row (-1 before the first), the block's travel when the bit's
    front came through [m], travel and hookload when the pace was last taken [m, N], and 1 where the pace
    alone showed the string to be moving.
    """

    samples: Samples
    rules: Rules
    found: Found
    memory: Memory
    now: Array
    chart_step: float


@njit(cache=True, error_model="numpy")
def turning(setting: Setting, run: Run, place: Stand, t: int) -> None:
    """Profile of a turning string: nearly frictionless, free at the bit or hung from the hookload."""
    rub = run.samples.share[t]
    if run.samples.free[t]:
        model = rise(setting, run.memory, place, rub, -place.push, False)
        anchor(run.memory, place, model, model)
    else:
        march_down(setting, run.memory, place, rub, run.samples.top[t], False)


@njit(cache=True)
def friction_of(samples: Samples, t: int, sigma: float) -> float:
    """Local multiple of friction, signed as the motion is."""
    return samples.down[t] if sigma > 0.0 else -samples.up[t]


@njit(cache=True, error_model="numpy")
def whole_slide(setting: Setting, run: Run, place: Stand, t: int, sigma: float) -> None:
    """Profile of a string that slides as a whole in one direction."""
    rub = friction_of(run.samples, t, sigma)
    if run.samples.free[t]:
        top = run.samples.top[t]
        model = rise(setting, run.memory, place, rub, -place.push, True)
        if sigma < 0.0 or run.now[MOVES] == 1.0 or model - top < run.rules.tolerance:
            anchor(run.memory, place, top, model)
            return
    march_down(setting, run.memory, place, rub, run.samples.top[t], False)


@njit(cache=True, error_model="numpy")
def all_moving(setting: Setting, run: Run, place: Stand, t: int) -> bool:
    """Whether a bit clear of bottom must be moving: the block has gone further than the string can stretch.

    A hookload well below the model's slack-off weight, or above its pick-up weight, is not enough: that
    string may be held. It moves for all that where the block has gone far and the hookload does not change
    as a spring's would.
    """
    samples, memory, now = run.samples, run.memory, run.now
    sigma = float(samples.direction[t])
    model = rise(setting, memory, place, friction_of(samples, t, sigma), -place.push, True)
    stretch = abs(stretch_between(setting.pipe, memory.reversal, memory.work, place))
    run.found.stretch[t] = stretch
    travel, top = samples.travel[t], samples.top[t]
    if travel < OVER_STRETCH * stretch + OVER_LENGTH:
        now[PACE], now[PACED] = travel, top
        return False
    now[MOVES] = 0.0
    if (top - model) * sigma > -run.rules.tolerance:
        return True
    gone = travel - now[PACE]
    if gone < PACE_LENGTH:
        return False
    lost = (now[PACED] - top) * sigma
    now[PACE], now[PACED] = travel, top
    spring = setting.pipe.ea[place.top] / place.bit
    if travel > FAR_STRETCH * stretch + FAR_LENGTH and lost < PACE_SHARE * spring * gone:
        now[MOVES] = 1.0
        return True
    return False


@njit(cache=True)
def arrived(run: Run, place: Stand, t: int) -> bool:
    """Whether the bit's front is at the surface, early: the hookload rises and the block was not raised."""
    samples = run.samples
    loaded = samples.drilling[t] and run.memory.tension[0] < -place.push
    return loaded and samples.direction[t] >= 0 and samples.top[t] - run.now[HOOK] > ARRIVED * run.rules.band


@njit(cache=True, error_model="numpy")
def sliding(setting: Setting, run: Run, place: Stand, t: int) -> None:
    """Move a string that does not turn: a front from the surface, or the whole string once it is through."""
    samples, now, band = run.samples, run.now, run.rules.band
    direction, top = samples.direction[t], samples.top[t]
    if now[MODE] == ROTATING:
        now[MODE], now[WAY] = FREE, 0.0
    # the bit's front may set the string sliding after the block was raised a little: raised again, it turns
    again = now[MODE] == 1.0 and direction == -1 and samples.travel[t] > now[LIFT] + RAISED
    if direction != 0 and (direction != now[WAY] or again):
        run.memory.reversal[: place.top + 2] = run.memory.tension[: place.top + 2]
        now[WAY], now[REACH] = direction, place.bit
        if now[MODE] != direction:
            now[MODE] = FREE
    if now[MODE] == FREE:
        sigma = float(direction)
        if direction != 0 and (now[HOOK] - top) * sigma > band:
            rub = friction_of(samples, t, sigma)
            node = march_down(setting, run.memory, place, rub, top, True)
            now[HOOK] = top
            now[REACH] = min(now[REACH], setting.pipe.x[node])
            if node == 0:
                now[MODE] = sigma
        elif arrived(run, place, t):
            now[MODE], now[LIFT] = 1.0, samples.travel[t]
        if now[MODE] == FREE and direction != 0 and samples.free[t] and all_moving(setting, run, place, t):
            now[MODE] = sigma
    if now[MODE] != FREE:
        whole_slide(setting, run, place, t, now[MODE])
        now[HOOK], now[REACH] = top, 0.0


@njit(cache=True, error_model="numpy")
def drilling_off(setting: Setting, run: Run, place: Stand, t: int) -> int:
    """Let the bit unload the string from below; returns what the bit load then rests on."""
    samples, memory, rules = run.samples, run.memory, run.rules
    lifted = -place.push  # tension of a bit that carries nothing
    load = lifted - memory.tension[0]
    rub = samples.down[t]
    if load > max(samples.witness[t], 0.0):
        _, end = bit_curve(setting, memory, place, rub, lifted - max(samples.witness[t], 0.0), np.inf)
        last = place.top if end < 0 else end
        memory.tension[: last + 1] = memory.work[: last + 1]
        if end < 0:
            run.now[MODE], run.now[LIFT] = 1.0, samples.travel[t]
        return BY_PRESSURE
    if rules.rate <= 0.0 or load <= 0.0:
        return BY_MEMORY
    drilled = rules.rate * load**rules.exponent * samples.step[t]
    if bit_front(setting, memory, place, rub, drilled):
        run.now[MODE], run.now[LIFT] = 1.0, samples.travel[t]
    return BY_RATE


@njit(cache=True)
def lengthen(setting: Setting, run: Run, place: Stand) -> None:
    """Give pipe new below the rotary its tension: it hangs on what is below."""
    pipe, memory = setting.pipe, run.memory
    last = int(run.now[TOP])
    if last < 0:
        model = rise(setting, memory, place, 0.0, 0.0, False)
        anchor(memory, place, model, model)
        run.now[HOOK], run.now[REACH] = model, place.bit
    for j in range(last + 1, place.top + 1):
        if last < 0:
            break
        i = max(place.first - pipe.node[j], 0)
        weight = pipe.weight[j] * place.scale * setting.hole.cos_i[i]
        memory.tension[j + 1] = memory.tension[j] + weight * (pipe.x[j + 1] - pipe.x[j])
        memory.reversal[j + 1] = memory.tension[j + 1]
        memory.state[j] = 0


@njit(cache=True, inline="always")
def still_the_same(run: Run, t: int, first: int) -> bool:
    """Whether a string that moves as a whole hangs as it did: same place, mode and nearly same hookload."""
    samples, now = run.samples, run.now
    if t == 0 or now[MODE] == FREE or samples.mode[t] != samples.mode[t - 1] or first != int(now[AT]):
        return False
    if samples.free[t] != samples.free[t - 1] or samples.direction[t] != samples.direction[t - 1]:
        return False
    return abs(samples.top[t] - now[HOOK]) < SAME * run.rules.band


@njit(cache=True, inline="always")
def copy_row(found: Found, t: int) -> None:
    """Nothing changed: the row's results are those of the row before."""
    found.bit_load[t] = found.bit_load[t - 1]
    found.ratio[t] = found.ratio[t - 1]
    found.ratio_md[t] = found.ratio_md[t - 1]
    found.compression[t] = found.compression[t - 1]
    found.state[t] = found.state[t - 1]
    found.span[t] = found.span[t - 1]
    found.reach[t] = found.reach[t - 1]
    found.basis[t] = found.basis[t - 1]
    found.full[t] = found.full[t - 1]


@njit(cache=True, error_model="numpy")
def move(setting: Setting, run: Run, place: Stand, t: int) -> int:
    """Move the profile on to row `t`; returns what the bit load rests on."""
    mode, now = run.samples.mode[t], run.now
    if mode == TURN:
        turning(setting, run, place, t)
        now[MODE], now[HOOK], now[REACH] = ROTATING, run.samples.top[t], 0.0
        return BY_HOOKLOAD
    if mode == HOLD:
        now[MODE], now[WAY] = FREE, 0.0
        return BY_MEMORY
    sliding(setting, run, place, t)
    if now[MODE] != FREE:
        return BY_HOOKLOAD
    return drilling_off(setting, run, place, t) if run.samples.drilling[t] else BY_MEMORY


@njit(cache=True, error_model="numpy", nogil=True)
def replay_rows(setting: Setting, run: Run) -> None:
    """Replay rows in order, the memory moved on from row to row.

    `run.memory` and `run.now` are changed in place: called again with later rows, the replay goes on
    where it stopped.
    """
    samples, found, now = run.samples, run.found, run.now
    for t in range(len(samples.bit)):
        place = stand_at(setting.hole, setting.pipe, samples.bit[t], samples.scale[t], samples.ends[t])
        if place.top > int(now[TOP]):
            lengthen(setting, run, place)
        if still_the_same(run, t, place.first):
            copy_row(found, t)
            if now[MODE] == ROTATING and not samples.free[t]:  # then newton goes for newton
                found.bit_load[t] = max(found.bit_load[t] + samples.top[t - 1] - samples.top[t], 0.0)
            now[TOP] = place.top
            continue
        found.basis[t] = move(setting, run, place, t)
        held = samples.mode[t] == HOLD and t > 0 and place.first == int(now[AT])
        if held:
            copy_row(found, t)
        else:
            judge(setting, run, place, t)
        now[AT], now[TOP] = place.first, place.top
        # a bit clear of bottom carries nothing, whatever the march leaves there
        clear = samples.free[t] and now[MODE] != FREE
        found.bit_load[t] = 0.0 if clear else max(-run.memory.tension[0] - place.push, 0.0)
        found.reach[t] = max(place.bit - now[REACH], 0.0)
        found.full[t] = int(now[MODE])
