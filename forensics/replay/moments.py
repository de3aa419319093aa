"""The load profile along the hole at chosen moments."""

from __future__ import annotations

from collections.abc import Iterable, Iterator, Sequence
from dataclasses import replace

import numpy as np
from numba import njit

from forensics.loads import Profile
from forensics.mechanics.criteria_table import SUPPORT
from forensics.mechanics.kernels_judge import (
    CONSTANT,
    GIVE,
    LINEAR,
    SQUARE,
    Setting,
    Stand,
    lowered,
    stand_at,
    thresholds,
    torque_at,
    winding_wall,
)
from forensics.mechanics.kernels_march import Array, contact
from forensics.mechanics.kernels_memory import Memory
from forensics.mechanics.selfconsistent import ContactSize
from forensics.mechanics.threshold import self_consistent_load
from forensics.replay.margin import slack_off
from forensics.replay.model import factors
from forensics.replay.places import find_place
from forensics.replay.room import fresh, go, restarts, take
from forensics.replay.run import Replay


def profiles(run: Replay, rows: Sequence[int]) -> tuple[Profile, ...]:
    """Axial load along the hole at the given rows of the log, in the order given."""
    taken = {profile.row: profile for profile in profiles_in_turn(run, rows)}
    return tuple(taken[row] for row in rows)


def profiles_in_turn(run: Replay, rows: Iterable[int], spare: bool = True) -> Iterator[Profile]:
    """Axial load along the hole at the given rows of the log, each once, in order of time.

    Parameters
    ----------
    run : Replay
        Made ready.
    rows : iterable of int
        Rows of the log.
    spare : bool
        Whether to reckon what more slacking off would have brought: half of what a profile costs.

    Yields
    ------
    Profile
        One at a time: thousands are not held at once.
    """
    at, samples = run.model.setting(*factors(run.calibration)), run.prepared.samples
    wanted = np.unique(np.fromiter(rows, dtype=np.int64))
    carried, done = fresh(run.model), 0
    for row, lead in zip(wanted.tolist(), restarts(samples.mode, wanted).tolist(), strict=True):
        if lead > done:
            carried = fresh(run.model)
        go(at, take(samples, slice(max(lead, done), row + 1)), run.rules, carried)
        done = row + 1
        found = _profile(run, at, carried[0], row)
        yield replace(found, slack_off=slack_off(at, carried[0], samples, row)) if spare else found


def critical_load(run: Replay, row: int, md: float) -> float:
    """Give the compression at which a place would just buckle sideways, at the contact it then causes [N].

    Parameters
    ----------
    run : Replay
        Made ready.
    row : int
        Row of the log: which piece of string lies there, and in which mud.
    md : float
        Measured depth of the place [m]; NaN gives NaN, as does a support.
    """
    found = find_place(run, row, md)
    if found is None:
        return float("nan")
    (j, i), model = found, run.model
    scale = float(run.prepared.samples.scale[row])
    at = model.criteria.at[model.criteria.kind[j], i]
    gap = 4.0 * model.pipe.ei[j] * at[GIVE]
    part = at[GIVE] ** 2  # takes the fourth power of a load back to the square of a contact
    size = ContactSize(
        at[CONSTANT] * part * scale**2, -0.5 * at[LINEAR] * part * scale, at[SQUARE] * part
    )
    w_cos = model.pipe.weight[j] * scale * model.hole.cos_i[i]
    return float(self_consistent_load(model.pipe.ei[j], gap, w_cos, model.pipe.stiff_run[j], size))


@njit(cache=True, error_model="numpy")
def _read(setting: Setting, memory: Memory, place: Stand, out: Array) -> None:
    """Fill depth, tension, sinusoidal and helical threshold, and contact of the elements; out (5, m)."""
    hole, pipe = setting.hole, setting.pipe
    for j in range(place.top + 1):
        i = max(place.first - ((pipe.node[j] + pipe.node[j + 1]) >> 1), 0)
        middle = 0.5 * (memory.tension[j] + memory.tension[j + 1])
        _, low, high = thresholds(setting, place, j, i, middle)
        weight = pipe.weight[j] * place.scale
        force = contact(middle, weight, hole.kappa2[i], hole.kappa_d[i], hole.sin2[i])
        torque = torque_at(setting, place, j, i)
        if torque > 0.0:
            high = lowered(low, high, pipe.ei[j], torque)
        if memory.state[j] == 2:
            give = setting.criteria.at[setting.criteria.kind[j], i, GIVE]
            force += give * middle * middle + winding_wall(give, pipe.ei[j], middle, torque)
        out[0, j] = place.bit - 0.5 * (pipe.x[j] + min(pipe.x[j + 1], place.bit))
        out[1, j], out[2, j], out[3, j], out[4, j] = middle, low, high, force


def _profile(run: Replay, at: Setting, memory: Memory, row: int) -> Profile:
    """Read the profile that the memory holds, with the thresholds at it."""
    samples = run.prepared.samples
    place = stand_at(at.hole, at.pipe, samples.bit[row], samples.scale[row], samples.ends[row])
    out = np.empty((5, place.top + 1))
    _read(at, memory, place, out)
    out[2:4][out[2:4] >= SUPPORT] = np.nan
    md, tension, sinusoidal, helical, pressed = out
    return Profile(
        row=row,
        time=float(run.log.time[row]),
        md=md,
        tension=tension,
        sinusoidal=sinusoidal,
        helical=helical,
        contact=pressed,
        state=memory.state[: place.top + 1].copy(),
    )
