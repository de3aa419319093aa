"""The load profile along the hole at chosen moments."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np

from forensics.loads import Profile
from forensics.mechanics.kernels_judge import CONSTANT, GIVE, LINEAR, SQUARE, Setting, thresholds
from forensics.mechanics.kernels_march import contact, place_at
from forensics.mechanics.kernels_memory import Memory
from forensics.mechanics.limits import SUPPORT
from forensics.mechanics.selfconsistent import ContactSize
from forensics.mechanics.threshold import self_consistent_load
from forensics.replay.model import factors
from forensics.replay.places import find_place
from forensics.replay.room import fresh, go, restart, take
from forensics.replay.run import Replay


def profiles(run: Replay, rows: Sequence[int]) -> tuple[Profile, ...]:
    """Axial load along the hole at the given rows of the log, in the order given."""
    cased, open_hole = factors(run.calibration)
    at = run.model.setting(cased, open_hole)
    taken: dict[int, Profile] = {}
    carried = fresh(run.model)
    done = 0
    for row in sorted(set(rows)):
        start = max(restart(run.prepared.samples.mode, row), done)
        if start > done:
            carried = fresh(run.model)
        go(at, take(run.prepared.samples, slice(start, row + 1)), run.rules, carried)
        done = row + 1
        taken[row] = _profile(run, at, carried[0], row)
    return tuple(taken[row] for row in rows)


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


def _profile(run: Replay, at: Setting, memory: Memory, row: int) -> Profile:
    """Read the profile that the memory holds, with the thresholds at it."""
    hole, pipe = at.hole, at.pipe
    place = place_at(hole, pipe, float(run.prepared.samples.bit[row]), float(run.prepared.samples.scale[row]))
    rows = np.arange(place.top + 1)
    middle = 0.5 * (memory.tension[rows] + memory.tension[rows + 1])
    index = np.maximum(place.first - ((pipe.node[rows] + pipe.node[rows + 1]) >> 1), 0)
    places = [(int(j), int(i), float(t)) for j, i, t in zip(rows, index, middle, strict=True)]
    levels = np.array([thresholds(at, place, *one) for one in places])
    levels[levels >= SUPPORT] = np.nan
    force = np.array(
        [
            contact(t, float(pipe.weight[j]) * place.scale, hole.kappa2[i], hole.kappa_d[i], hole.sin2[i])
            for j, i, t in places
        ]
    )
    give = at.criteria.at[at.criteria.kind[rows], index, GIVE]
    force += np.where(memory.state[rows] == 2, give * middle**2, 0.0)
    ends = np.minimum(pipe.x[rows + 1], place.bit)
    return Profile(
        row=row,
        time=float(run.log.time[row]),
        md=place.bit - 0.5 * (pipe.x[rows] + ends),
        tension=middle,
        sinusoidal=levels[:, 1],
        helical=levels[:, 2],
        contact=force,
        state=memory.state[rows].copy(),
    )
