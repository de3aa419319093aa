"""Compiled judgement of a load profile against its thresholds, with the memory buckled pipe has."""

from __future__ import annotations

from typing import NamedTuple

import numpy as np
from numba import njit

from forensics.mechanics.eigen import LIMIT
from forensics.mechanics.kernels_critical import helical_prepared, sinusoidal_prepared
from forensics.mechanics.kernels_march import Array, Hole, Pipe, Place
from forensics.mechanics.threshold import ENVELOPE_RELEASE as ENVELOPE

FAR_FROM_VERTICAL = 20.0  # local load in units of the near-vertical one: c is its limit (0.04 % of the load)
SQUARE, LINEAR, CONSTANT, CUBE, LENGTH, GIVE = range(6)  # columns of `Criteria.at`


class Criteria(NamedTuple):
    """What a place is judged by.

    `at` has shape (kinds of pipe, depths, 6), `kind` (elements) picks its row. The first three columns give
    the fourth power of the Dawson-Paslay load at tension T, contact averaged over a sine wave, as
    T² SQUARE + T LINEAR + CONSTANT (huge on a support); CUBE is (EI w² cos² I)^⅓, zero where cos I <= 0;
    LENGTH the place of the stiff length in the table of near-vertical coefficients; GIVE is r / (4 EI).
    `onset` multiplies the Dawson-Paslay load for the helix; `envelope` is 1 where a helix lasts until its
    own unloading limit; `table` holds the near-vertical coefficients.
    """

    kind: Array
    at: Array
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
