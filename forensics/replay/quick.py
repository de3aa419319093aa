"""Lockup in closed form for the lowest stretch of the hole: a quick answer to hold the march against."""

from __future__ import annotations

import math

import numpy as np
from numpy.typing import NDArray

from forensics.mechanics.grid import MIN_CLEARANCE
from forensics.mechanics.kernels_judge import Setting, Stand
from forensics.mechanics.lockup import HelicalRun, QuickLimit, bit_load_limit

Floats = NDArray[np.float64]

# What is taken for one stretch of even hole and one pipe (ours).
EVEN = math.radians(6.0)  # greatest less smallest inclination
STRAIGHT = math.radians(1.0) / 30.0  # rad/m, mean curvature
LONG = 300.0  # m
ONE_PIPE = 0.8  # share of the stretch


def quick_limit(setting: Setting, place: Stand) -> QuickLimit | None:
    """Give the closed form's most bit load for the lowest stretch of the hole, where that is even.

    Parameters
    ----------
    setting : Setting
        Well, string and friction.
    place : Stand
        Where the string stands.

    Returns
    -------
    QuickLimit or None
        None where the hole bends, the string is of several pipes, or the stretch is shorter than 300 m.

    Notes
    -----
    The pipe that most of the stretch is of, helical all along, at the mean clearance, friction and
    inclination.

    References
    ----------
    Mitchell (1986), Wu and Juvkam-Wold (1993): see `mechanics.lockup`.
    """
    hole, pipe = setting.hole, setting.pipe
    rows = np.arange(place.top + 1)
    index = np.maximum(place.first - ((pipe.node[rows] + pipe.node[rows + 1]) >> 1), 0)
    angle = np.arccos(np.clip(hole.cos_i[index], -1.0, 1.0))
    count = _even(angle)
    lengths = np.minimum(pipe.x[1 : count + 1], place.bit) - pipe.x[:count]
    length, index = float(lengths.sum()), index[:count]
    bend = float(np.average(np.sqrt(hole.kappa2[index]), weights=lengths))
    mine = _main_pipe(setting.criteria.kind[:count], lengths)
    if length < LONG or bend > STRAIGHT or mine is None:
        return None
    inclination, friction = (
        float(np.average(v, weights=lengths)) for v in (angle[:count], setting.mu[index])
    )
    first = int(np.argmax(mine))
    gap = 0.5 * hole.diameter[index][mine] - 0.5 * pipe.clearance_od[first]
    clearance = float(np.average(gap, weights=lengths[mine]))
    if clearance < MIN_CLEARANCE or friction <= 0.0:
        return None
    weight = float(pipe.weight[first]) * place.scale
    run = HelicalRun(float(pipe.ei[first]), clearance, weight, friction, inclination)
    return QuickLimit(bit_load_limit(length, run), length, inclination)


def _even(angle: Floats) -> int:
    """Count the elements from the bit up over which the inclination hardly changes; at least one."""
    even = np.maximum.accumulate(angle) - np.minimum.accumulate(angle) <= EVEN
    return len(even) if even.all() else int(np.argmin(even))


def _main_pipe(kind: NDArray[np.int64], lengths: Floats) -> NDArray[np.bool_] | None:
    """Mark the elements of the pipe that nearly all of the stretch is of; None where there is none."""
    by_kind = np.bincount(kind, weights=lengths)
    most = int(np.argmax(by_kind))
    return kind == most if by_kind[most] >= ONE_PIPE * by_kind.sum() else None
