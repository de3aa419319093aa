"""Travel balance: how the hookload goes with the block while a string is set down or picked up."""

from __future__ import annotations

from dataclasses import replace
from typing import TYPE_CHECKING

import numpy as np
from numpy.typing import NDArray

from forensics.episodes.catalogue import Episode, Kind, Travel
from forensics.episodes.material import NOISE_MULTIPLE, Material
from forensics.estimate import Estimate
from forensics.mechanics.free_point import held_at

if TYPE_CHECKING:
    from forensics.replay.springs import Springs

Floats = NDArray[np.float64]

BEFORE = 60.0  # s before an episode in which the move that led to it is looked for
LEAST_TRAVEL = 0.06  # m of block travel over the part measured
LEAST_STEP = 0.002  # m of block travel from row to row that is a move
LEAST_CHANGE = 15e3  # N lost or gained over it
LEAST_ROWS = 4
#: Part of a move's change, counted from its end, that is looked at; of a small one, twice the least change.
LAST_PART, TWICE = 0.5, 2.0
STIFFNESS_ERROR = 0.05  # one sigma: tool joints, modulus, scale of the hookload (from memory)
SPRING_LIKE = 0.3  # of the whole string's spring rate: a softer slope is sliding, not holding
Z90 = 1.6448536269514722


def move_of(material: Material, first: int, last: int, sense: int = 1) -> Travel | None:
    """Measure the slope of hookload against block travel at the end of the move that cost most, within rows.

    Parameters
    ----------
    material : Material
    first, last : int
        Rows of the log, inclusive.
    sense : int
        +1 for a string set down, -1 for one picked up.

    Returns
    -------
    Travel or None
        Without a free length; None where the block did not go far enough that way, out of slips and without
        rotation, or the hookload did not change with it.

    Notes
    -----
    The end of the move is taken: while the front of a move still runs down the string, the slope is that of
    the part that moves already, and a string that slid before it was stopped shows no slope until then.
    """
    rig, rows = material.rig, slice(first, last + 1)
    hook, block = rig.hookload[rows], rig.block[rows]
    if len(hook) <= LEAST_ROWS:
        return None
    step = max(LEAST_STEP, 2.0 * material.noise("block_position"))
    going = (-sense * np.gradient(block) > step) & ~rig.slips[rows] & ~rig.turning[rows] & np.isfinite(hook)
    edges = np.flatnonzero(np.diff(np.concatenate([[0], going.astype(np.int8), [0]]))).reshape(-1, 2)
    moves = [(float(np.max(sense * (hook[a] - hook[a:b]))), a, b) for a, b in edges.tolist()]
    change, start, stop = max(moves, default=(0.0, 0, 0))
    if change < max(LEAST_CHANGE, NOISE_MULTIPLE * material.noise("hookload")):
        return None
    lost, travel = sense * (hook[start] - hook[start:stop]), sense * (block[start] - block[start:stop])
    end = int(np.argmax(lost)) + 1
    begin = _begin(lost[:end], travel[:end])
    if begin is None:
        return None
    return _slope(material, lost[begin:end], travel[begin:end], (first + start + end - 1, sense))


def _begin(lost: Floats, travel: Floats) -> int | None:
    """Row from which the end of a move is measured: the steepest part of what ends it."""
    back, gone = lost[-1] - lost, travel[-1] - travel
    rows = np.arange(len(lost))
    told = (rows <= len(lost) - LEAST_ROWS) & (gone >= LEAST_TRAVEL) & (back >= LEAST_CHANGE)
    told &= back <= max(LAST_PART * lost[-1], TWICE * LEAST_CHANGE)
    if not told.any():
        return None
    return int(rows[told][np.argmax(back[told] / gone[told])])


def _slope(material: Material, lost: Floats, travel: Floats, where: tuple[int, int]) -> Travel:
    """Fit a parabola; its slope at the middle, and how it bends."""
    span = float(np.ptp(travel))
    x = travel - travel.mean()
    matrix = np.stack([np.ones_like(x), x, x**2], axis=1)
    found, *_ = np.linalg.lstsq(matrix, lost, rcond=None)
    left = lost - matrix @ found
    # neighbours share their error: fewer readings than rows
    alike = float(np.clip(left[1:] @ left[:-1] / max(left @ left, 1e-9), 0.0, 0.9))
    spread = max(float(left @ left) / max(len(x) - 3, 1), material.noise("hookload") ** 2)
    errors = np.sqrt(spread * (1.0 + alike) / (1.0 - alike) * np.diag(np.linalg.pinv(matrix.T @ matrix)))
    placed = float(found[1]) * material.noise("block_position") / (float(np.std(x)) * np.sqrt(len(x)))
    slope = float(found[1])
    return Travel(
        row=where[0],
        sense=where[1],
        travel=span,
        change=float(np.ptp(lost)),
        stiffness=slope,
        stiffness_sigma=float(np.hypot(errors[1], placed)),
        softening=float(-2.0 * found[2] * span / slope) if slope > 0.0 else float("nan"),
        softening_sigma=float(2.0 * errors[2] * span / slope) if slope > 0.0 else float("nan"),
    )


def wants_travel(episode: Episode) -> bool:
    """Whether an episode is one in which a string may hang: a lockup, or drag of a string that moves."""
    return episode.kind in (Kind.LOCKUP, Kind.DRAG)


def travel_of(material: Material, episode: Episode) -> Travel | None:
    """Measure the move that led into an episode, or is it; see `move_of`."""
    if not wants_travel(episode):
        return None
    rows = material.rows_between(episode.start - BEFORE, episode.end)
    sense = 1 if episode.kind is Kind.LOCKUP else -int(material.friction_sign[episode.peak])
    if sense == 0:
        return None
    found = move_of(material, rows.start, min(rows.stop, len(material.time) - 1), sense)
    if found is None or found.stiffness < SPRING_LIKE * float(material.spring_rate[found.row]):
        return None
    return found


def with_free_length(travel: Travel, along: Springs) -> Travel:
    """Read off the depth at which a string of this stiffness is held.

    Parameters
    ----------
    travel : Travel
        The slope.
    along : Springs
        Compliance of the string from the rotary down.

    Returns
    -------
    Travel
        With `free_length`, its interval from scatter, stiffness and friction, and `elastic_length`, what
        friction left out would give. Where the slope is softer than the whole string's, the free length is
        the bit's depth: nothing above it held.
    """
    give = 1.0 / travel.stiffness
    error = float(np.hypot(travel.stiffness_sigma / travel.stiffness, STIFFNESS_ERROR))
    bit = float(along.md[-1])
    value = held_at(give, along.md, along.rubbed[1])
    ends = [
        held_at(give * part, along.md, column)
        for part in (max(1.0 - Z90 * error, 0.05), 1.0 + Z90 * error)
        for column in along.rubbed
    ]
    low, high = (min(end, bit) for end in (min(ends), max(ends)))
    source = "slope of hookload against block travel"
    free = Estimate(min(value, bit), low, high, source, determined=low < bit, samples=1)
    return replace(travel, free_length=free, elastic_length=min(held_at(give, along.md, along.elastic), bit))
