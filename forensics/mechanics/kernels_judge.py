"""Compiled judgement of a load profile against its thresholds, with the memory buckled pipe has."""

from __future__ import annotations

from typing import NamedTuple

import numpy as np
from numba import njit

from forensics.mechanics.eigen import LIMIT
from forensics.mechanics.kernels_critical import helical_prepared, length_place, sinusoidal_prepared
from forensics.mechanics.kernels_march import Array, Hole, Pipe, contact

ENVELOPE = 1.370  # times Dawson-Paslay: least load a helix keeps its shape at, from its own equations
FAR_FROM_VERTICAL = 200.0  # local load in units of the near-vertical one; beyond, c is its limit to 0.1 %


class Criteria(NamedTuple):
    """What a place is judged by; tables have shape (kinds of pipe, depths), `kind` picks the row.

    `a`, `b`, `c` give the lateral load averaged over a sine wave; `root` is 2 √(EI / r), the local load per
    root of contact (infinite on a support); `cube` is (EI w² cos² I)^⅓, zero where cos I <= 0.
    `stiff_run` (elements) is the length of like stiffness that holds a place near vertical [m]; `onset`
    multiplies the Dawson-Paslay load for the helix; `envelope` is 1 where a helix lasts until its own
    unloading limit; `table` holds the near-vertical coefficients.
    """

    kind: Array
    a: Array
    b: Array
    c: Array
    root: Array
    cube: Array
    stiff_run: Array
    onset: float
    envelope: int
    table: tuple[Array, float, float, float, float]


class Setting(NamedTuple):
    """What does not change while a run is replayed: hole, string, criteria, friction by depth."""

    hole: Hole
    pipe: Pipe
    criteria: Criteria
    mu: Array


@njit(cache=True, error_model="numpy", inline="always")
def averaged_contact(setting: Setting, j: int, i: int, tension: float, scale: float) -> float:
    """Contact per length of element `j` at depth index `i`, averaged over a sine wave [N/m]."""
    criteria = setting.criteria
    row = criteria.kind[j]
    weight = setting.pipe.weight[j] * scale
    return contact(tension, weight, criteria.a[row, i], criteria.b[row, i], criteria.c[row, i])


@njit(cache=True, error_model="numpy")
def thresholds(setting: Setting, j: int, i: int, tension: float, scale: float) -> tuple[float, float, float]:
    """Dawson-Paslay, sinusoidal and helical load of element `j` at depth index `i` [N].

    All are infinite on a support.
    """
    criteria = setting.criteria
    row = criteria.kind[j]
    force = averaged_contact(setting, j, i, tension, scale)
    root, cube = criteria.root[row, i], criteria.cube[row, i]
    local = root * np.sqrt(force)
    if np.isinf(root):
        return np.inf, np.inf, np.inf
    if local > FAR_FROM_VERTICAL * cube:
        return local, local + LIMIT * cube, criteria.onset * (local + LIMIT * cube)
    if scale != 1.0:
        cube *= scale ** (2.0 / 3.0)
    w_cos = setting.pipe.weight[j] * scale * setting.hole.cos_i[i]
    place = length_place(criteria.stiff_run[j], w_cos, cube)
    low, local, log_n = sinusoidal_prepared(root, force, cube, place, criteria.table)
    return local, low, helical_prepared(local, cube, log_n, criteria.onset)


@njit(cache=True, error_model="numpy")
def latch(setting: Setting, j: int, i: int, tension: float, scale: float) -> bool:
    """Whether element `j`, not yet helical, turns helical at this tension."""
    # the near-vertical term only raises the threshold, so most places end here
    criteria = setting.criteria
    root = criteria.root[criteria.kind[j], i]
    if -tension < criteria.onset * root * np.sqrt(averaged_contact(setting, j, i, tension, scale)):
        return False
    return -tension >= thresholds(setting, j, i, tension, scale)[2]


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
