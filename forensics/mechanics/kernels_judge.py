"""Compiled judgement of a load profile against its thresholds, with the memory buckled pipe has."""

from __future__ import annotations

from typing import NamedTuple

import numpy as np
from numba import njit

from forensics.mechanics.eigen import LIMIT
from forensics.mechanics.kernels_critical import VERTICAL_HELICAL, c_scalar
from forensics.mechanics.kernels_march import Array, Hole, Pipe, contact

ENVELOPE = 1.370  # times Dawson-Paslay: least load a helix keeps its shape at, from its own equations
FAR_FROM_VERTICAL = 200.0  # local load in units of the near-vertical one; beyond, c is its limit to 0.1 %
LOG_100 = np.log(100.0)


class Criteria(NamedTuple):
    """What a place is judged by; tables have shape (kinds of pipe, depths), `kind` picks the row.

    `a`, `b`, `c` give the lateral load averaged over a sine wave; `root` is 2 √(EI / r), the local load per
    root of contact (infinite on a support); `cube` is (EI w² cos² I)^⅓, zero where cos I <= 0; `log_unit` the
    logarithm of Lubinski's length. `log_run` (elements) is the logarithm of the length of like stiffness that
    holds a place near vertical; `onset` multiplies the Dawson-Paslay load for the helix; `envelope` is 1
    where a helix lasts until its own unloading limit; `table` holds the near-vertical coefficients.
    """

    kind: Array
    a: Array
    b: Array
    c: Array
    root: Array
    cube: Array
    log_unit: Array
    log_run: Array
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
def local_load(setting: Setting, j: int, i: int, tension: float, scale: float) -> float:
    """Dawson-Paslay load of element `j` at depth index `i`, at the contact that is there [N]."""
    criteria = setting.criteria
    row = criteria.kind[j]
    weight = setting.pipe.weight[j] * scale
    force = contact(tension, weight, criteria.a[row, i], criteria.b[row, i], criteria.c[row, i])
    return criteria.root[row, i] * np.sqrt(force)


@njit(cache=True, error_model="numpy")
def thresholds(setting: Setting, j: int, i: int, tension: float, scale: float) -> tuple[float, float, float]:
    """Dawson-Paslay, sinusoidal and helical load of element `j` at depth index `i` [N].

    All are infinite on a support.
    """
    criteria = setting.criteria
    local = local_load(setting, j, i, tension, scale)
    cube = criteria.cube[criteria.kind[j], i]
    if cube <= 0.0:
        return local, local, criteria.onset * local
    if scale != 1.0:
        cube *= scale ** (2.0 / 3.0)
    if local > FAR_FROM_VERTICAL * cube:
        return local, local + LIMIT * cube, criteria.onset * (local + LIMIT * cube)
    log_n = 2.0 * np.log(max(0.5 * local / cube, 1e-4))
    log_length = criteria.log_run[j] - criteria.log_unit[criteria.kind[j], i]
    low = local + c_scalar(log_n, log_length, criteria.table) * cube
    blend = min(max(log_n / LOG_100, 0.0), 1.0)
    high = VERTICAL_HELICAL + blend * (LIMIT * criteria.onset - VERTICAL_HELICAL)
    return local, low, criteria.onset * local + high * cube


@njit(cache=True, error_model="numpy")
def latch(setting: Setting, j: int, i: int, tension: float, scale: float) -> bool:
    """Whether element `j`, not yet helical, turns helical at this tension."""
    # the near-vertical term only raises the threshold, so most places end here
    if -tension < setting.criteria.onset * local_load(setting, j, i, tension, scale):
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
