"""Critical loads at one place, compiled: the twins of `critical.py` that the replay calls station by station.

All are scalar, SI, and safe on the edges: no contact, no weight along the hole, a place that points
upwards. Where it can, the caller computes `stiffness_root`, `weight_cube` and `length_place` beforehand and
calls the `..._prepared` forms; the others take the physical quantities.
"""

from __future__ import annotations

import math

import numba as nb

from forensics.mechanics.eigen import LENGTH_RANGE, LIMIT, LOG_N, OFFSET, SHORTEST, Floats
from forensics.mechanics.threshold import VERTICAL_HELICAL

Table = tuple[Floats, float, float, float, float]
"""What `EigenTable.as_tuple` gives: values, first log n, its step, first length place, its step."""

_LOG_N_LOW, _LOG_N_HIGH = LOG_N
_ROOT_N_LOW = math.exp(0.5 * LOG_N[0])
_PLACE_LOW, _PLACE_HIGH = LENGTH_RANGE

_LOG_100 = math.log(100.0)


@nb.njit(cache=True, error_model="numpy")
def c_scalar(log_n: float, place: float, table: Table) -> float:
    """Interpolate c(n, length) as `eigen.interpolate` does, from log n and `length_place` [-]."""
    values, n0, dn, l0, dl = table
    held_n = min(max(log_n, _LOG_N_LOW), _LOG_N_HIGH)
    held_place = min(max(place, _PLACE_LOW), _PLACE_HIGH)
    row = (held_n - n0) / dn
    column = (held_place - l0) / dl
    i = min(int(row), values.shape[0] - 2)
    j = min(int(column), values.shape[1] - 2)
    u = row - i
    v = column - j
    low = values[i, j] + v * (values[i, j + 1] - values[i, j])
    high = values[i + 1, j] + v * (values[i + 1, j + 1] - values[i + 1, j])
    c = low + u * (high - low)
    if log_n < _LOG_N_LOW:
        c += 2.0 * (_ROOT_N_LOW - math.exp(0.5 * log_n))
    elif log_n > _LOG_N_HIGH:
        c = LIMIT + (c - LIMIT) * math.exp(0.5 * (_LOG_N_HIGH - log_n))
    return c


@nb.njit(cache=True, error_model="numpy")
def stiffness_root(ei: float, clearance: float) -> float:
    """Give ``2 sqrt(EI / r)``, the local load per root of contact force per length [N / sqrt(N/m)]."""
    return 2.0 * math.sqrt(ei / clearance)


@nb.njit(cache=True, error_model="numpy")
def weight_cube(ei: float, w_cos: float) -> float:
    """Give ``(EI w^2 cos^2 I)^(1/3)``, the unit of the near-vertical term [N]; zero where cos I <= 0."""
    if w_cos <= 0.0:
        return 0.0
    return (ei * w_cos * w_cos) ** (1.0 / 3.0)


@nb.njit(cache=True, error_model="numpy")
def length_place(length: float, w_cos: float, cube: float) -> float:
    """Give a length's place in the table, ``log(length / l - OFFSET)`` [-], ``cube`` being `weight_cube`.

    ``l = (EI / (w cos I))^(1/3)`` is ``cube / (w cos I)``. Its low edge below the table or if cos I <= 0.
    """
    if cube <= 0.0:
        return _PLACE_LOW
    scaled = length * w_cos / cube
    return math.log(scaled - OFFSET) if scaled > SHORTEST else _PLACE_LOW


@nb.njit(cache=True, error_model="numpy")
def log_scaled_length(length: float, ei: float, w_cos: float) -> float:
    """Give `length_place` from physical quantities [-]."""
    return length_place(length, w_cos, weight_cube(ei, w_cos))


@nb.njit(cache=True, error_model="numpy")
def sinusoidal_prepared(
    root: float, contact: float, cube: float, place: float, table: Table
) -> tuple[float, float, float]:
    """Give the sinusoidal load, its local part, and log n, from precomputed constants.

    `root` is `stiffness_root`, `cube` is `weight_cube`, `contact` the averaged contact force per length
    [N/m], `place` is `length_place`. Returned: F_sin [N], F_DP [N], log n [-] (infinite where
    there is no weight along the hole, minus infinity where there is no contact).
    """
    local = root * math.sqrt(contact)
    if cube <= 0.0:
        return local, local, math.inf
    scaled = local / cube  # two roots of n
    log_n = 2.0 * math.log(0.5 * scaled) if scaled > 0.0 else -math.inf
    return local + c_scalar(log_n, place, table) * cube, local, log_n


@nb.njit(cache=True, error_model="numpy")
def helical_prepared(local: float, cube: float, log_n: float, onset: float) -> float:
    """Give the helical onset from `sinusoidal_prepared`'s results and the criterion's factor `onset` [N]."""
    if cube <= 0.0:
        return onset * local
    blend = min(max(log_n / _LOG_100, 0.0), 1.0)
    return onset * local + cube * (VERTICAL_HELICAL + blend * (LIMIT * onset - VERTICAL_HELICAL))


@nb.njit(cache=True, error_model="numpy")
def sinusoidal_load(
    ei: float, contact: float, clearance: float, w_cos: float, place: float, table: Table
) -> tuple[float, float, float]:
    """Give the sinusoidal load, its local part and log n of one place, from physical quantities [SI]."""
    return sinusoidal_prepared(stiffness_root(ei, clearance), contact, weight_cube(ei, w_cos), place, table)


@nb.njit(cache=True, error_model="numpy")
def helical_load(local: float, ei: float, w_cos: float, n: float, onset: float) -> float:
    """Give the helical onset of one place from its local load, n and the criterion's factor `onset` [N]."""
    log_n = math.log(n) if n > 0.0 else -math.inf
    return helical_prepared(local, weight_cube(ei, w_cos), log_n, onset)
