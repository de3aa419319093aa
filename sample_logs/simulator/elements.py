"""Forces on the pieces of a lumped string: weights, contact, thresholds, sliders and the bit.

Node 0 is the bit, the last node hangs on the hook. Element j joins node j (lower) and node j + 1 (upper).
Positions are measured depths, so a node above the rotary has a negative one.
"""

from __future__ import annotations

import math

import numpy as np
from numba import njit
from numpy.typing import NDArray

Floats = NDArray[np.float64]
Ints = NDArray[np.int64]

# columns of the element table
LENGTH, COMPLIANCE, BENDING, CONTACT_OD, WEIGHT, WEIGHT_AIR, STIFF_RUN = range(7)
# columns of the hole table
T_NORTH, T_EAST, T_DOWN, DIAMETER, MU = range(5)
# entries of the control vector
(
    TOP, DT, TURN_RATE, BOTTOM, DRILL_RATE, DRILL_EXPONENT, ROCK_STIFFNESS, UNTWIST, MD_FIRST, MD_STEP,
    SLIDER_STIFFNESS,
) = range(11)  # fmt: skip
# entries of the result vector
BIT_LOAD, TOP_TENSION, NEW_BOTTOM, FRICTION_TORQUE, ITERATIONS, RESIDUAL = range(6)
# columns of the geometry of one step, by element
D_NORTH, D_EAST, D_DOWN, P_NORTH, P_EAST, P_DOWN, E_MU, E_CLEAR, E_COS, E_WEIGHT, E_SHAPE = range(11)

USUAL_SLIDER_STIFFNESS = 1.5e7  # N/m: a node gives about 0.1 mm before it slips
PLOUGH_SPEED = 0.005  # m/s: solids in the way of a turning string resist fully from about this speed on
REFERENCE_LOAD = 1.0e5  # N: bit load at which the drill rate is quoted
MIN_CLEARANCE = 0.002  # m: less than this is a support, not a place that can buckle
ROOT2 = math.sqrt(2.0)


@njit(cache=True)
def lookup(table: Floats, column: int, first: float, step: float, md: float) -> float:
    """Linear interpolation in one column of the hole table."""
    p = (md - first) / step
    last = table.shape[0] - 2
    i = min(max(math.floor(p), 0), last)
    f = min(max(p - i, 0.0), 1.0)
    return table[i, column] * (1.0 - f) + table[i + 1, column] * f


@njit(cache=True)
def geometry(x: Floats, elements: Floats, table: Floats, first: float, step: float) -> Floats:
    """Tangent change, sideways weight, friction and clearance of every element where it lies now."""
    n = elements.shape[0]
    g = np.zeros((n, 11))
    for j in range(n):
        low, high = x[j], x[j + 1]
        mid = 0.5 * (low + high)
        above = min(max(-high / max(low - high, 1e-9), 0.0), 1.0)
        weight = elements[j, WEIGHT] * (1.0 - above) + elements[j, WEIGHT_AIR] * above
        t = np.empty(3)
        for k in range(3):
            t[k] = lookup(table, k, first, step, mid)
            g[j, k] = lookup(table, k, first, step, low) - lookup(table, k, first, step, high)
        size = math.sqrt(t[0] ** 2 + t[1] ** 2 + t[2] ** 2)
        for k in range(3):
            t[k] /= size
            g[j, P_NORTH + k] = -weight * t[2] * t[k]
        g[j, P_DOWN] += weight
        g[j, E_MU] = lookup(table, MU, first, step, mid) if mid > 0.0 else 0.0
        g[j, E_CLEAR] = 0.5 * (lookup(table, DIAMETER, first, step, mid) - elements[j, CONTACT_OD])
        g[j, E_COS] = t[2]
        g[j, E_WEIGHT] = weight
    return g


@njit(cache=True)
def side_force(tension: float, g: Floats, j: int) -> float:
    """Size of the lateral force of one element [N]: bent tension plus weight across the hole."""
    a = tension * g[j, D_NORTH] + g[j, P_NORTH]
    b = tension * g[j, D_EAST] + g[j, P_EAST]
    c = tension * g[j, D_DOWN] + g[j, P_DOWN]
    return math.sqrt(a * a + b * b + c * c)


@njit(cache=True)
def end_coefficient(n: float, run: float) -> float:
    """Extra load for a near-vertical string, in units of (EI w^2 cos^2 I)^(1/3); n is the wall's support.

    For a string lying free (n = 0) it falls with the length of the run; with some support it does not.
    """
    free = np.array([1.93704, 1.71104095, 1.54244492, 1.37875790, 1.29098918])
    free_run = np.array([8.0, 20.0, 64.0, 512.0, 4096.0])
    held = np.array([1.499765, 1.561432, 1.595610, 1.609819, 1.614822, 1.616464, 1.617233])
    if n <= 0.01:
        return np.interp(math.log(max(run, 8.0)), np.log(free_run), free)
    at_tenth = np.interp(math.log(max(run, 8.0)), np.log(free_run[:4]), np.array([1.66, 1.55, 1.50, 1.4998]))
    if n < 0.1:
        at_zero = np.interp(math.log(max(run, 8.0)), np.log(free_run), free)
        f = math.log(n / 0.01) / math.log(10.0)
        return at_zero * (1.0 - f) + at_tenth * f
    if n < 1.0:
        f = math.log(n / 0.1) / math.log(10.0)
        return at_tenth * (1.0 - f) + held[1] * f
    return np.interp(math.log10(n), np.array([0.0, 1.0, 2.0, 3.0, 4.0, 5.0]), held[1:])


@njit(cache=True)
def thresholds(tension: float, g: Floats, elements: Floats, j: int) -> tuple[float, float]:
    """Compression at which element j takes a sine shape and a helix [N]; infinite for a support."""
    clear = g[j, E_CLEAR]
    if clear < MIN_CLEARANCE:
        return np.inf, np.inf
    length = elements[j, LENGTH]
    bending = elements[j, BENDING]
    contact = side_force(tension, g, j) / length
    base = 2.0 * math.sqrt(bending * contact / clear)
    axial = g[j, E_WEIGHT] / length * g[j, E_COS]
    if axial <= 0.0:
        return base, ROOT2 * base
    scale = (bending * axial * axial) ** (1.0 / 3.0)
    lubinski = (bending / axial) ** (1.0 / 3.0)
    n = lubinski * contact / (clear * axial)
    sine = base + end_coefficient(n, elements[j, STIFF_RUN] / lubinski) * scale
    share = min(max(math.log10(max(n, 1e-9)) / 2.0, 0.0), 1.0)
    helix = ROOT2 * base + (5.55 * (1.0 - share) + 1.6172330 * ROOT2 * share) * scale
    return sine, max(helix, sine)


@njit(cache=True)
def bit_force(gap: float, control: Floats) -> tuple[float, float]:
    """Load on the bit and its slope for a given overlap with the bottom at the start of the step."""
    stiff = control[ROCK_STIFFNESS]
    if gap <= 0.0:
        return 0.0, 0.0
    rate = control[DRILL_RATE] * control[DT] * stiff
    if rate <= 0.0:
        return stiff * gap, stiff
    e = control[DRILL_EXPONENT]
    low, high = 0.0, stiff * gap
    load = 0.5 * high
    for _ in range(60):
        value = load + rate * (load / REFERENCE_LOAD) ** e - stiff * gap
        if value > 0.0:
            high = load
        else:
            low = load
        slope = 1.0 + rate * e / REFERENCE_LOAD * (max(load, 1.0) / REFERENCE_LOAD) ** (e - 1.0)
        trial = load - value / slope
        if trial <= low or trial >= high:
            trial = 0.5 * (low + high)
        if abs(trial - load) < 1e-3:
            load = trial
            break
        load = trial
    return load, stiff / (1.0 + rate * e / REFERENCE_LOAD * (max(load, 1.0) / REFERENCE_LOAD) ** (e - 1.0))


@njit(cache=True)
def tensions(x: Floats, elements: Floats, g: Floats) -> tuple[Floats, Floats]:
    """Tension in every spring; a helix makes its spring softer by what it shortens."""
    n = elements.shape[0]
    tension = np.empty(n)
    slope = np.empty(n)
    for j in range(n):
        c = elements[j, COMPLIANCE]
        if g[j, E_SHAPE] == 2:
            c += g[j, E_CLEAR] ** 2 * elements[j, LENGTH] / (4.0 * elements[j, BENDING])
        slope[j] = 1.0 / c
        tension[j] = (x[j] - x[j + 1] - elements[j, LENGTH]) / c
    return tension, slope


@njit(cache=True)
def friction_limits(tension: Floats, g: Floats, elements: Floats, grip: Floats) -> Floats:
    """Largest friction force at every node: half of each neighbour's contact times its friction.

    `grip` is what a node holds more than that, as a share of it.
    """
    n = elements.shape[0]
    limit = np.zeros(n + 1)
    for j in range(n):
        normal = side_force(tension[j], g, j)
        if g[j, E_SHAPE] == 2 and tension[j] < 0.0:
            normal += g[j, E_CLEAR] * tension[j] ** 2 / (4.0 * elements[j, BENDING]) * elements[j, LENGTH]
        half = 0.5 * g[j, E_MU] * normal
        limit[j] += half
        limit[j + 1] += half
    return limit * (1.0 + grip)


@njit(cache=True)
def slider(
    move: float, s_old: float, spent: float, limits: tuple, radius: float, control: Floats
) -> tuple[float, float]:
    """Friction force of one node (positive: holds it from going down) and its slope with position.

    `limits` holds the contact's friction, and what else is in the way of going up and of going down: turning
    takes the first aside, but not the others.
    """
    limit, up, down = limits
    sweep = control[TURN_RATE] * radius
    if sweep > 1e-6:
        v = move / control[DT]
        speed = math.sqrt(v * v + sweep * sweep)
        force, slope = limit * v / speed, limit * sweep * sweep / (speed**3 * control[DT]) + 1.0
        block = down if v > 0.0 else up
        if block > 0.0:
            pace = math.sqrt(v * v + PLOUGH_SPEED * PLOUGH_SPEED)
            force += block * v / pace
            slope += block * PLOUGH_SPEED * PLOUGH_SPEED / (pace**3 * control[DT])
        return force, slope
    cap = math.sqrt(max(limit * limit - spent * spent, 0.0))
    stiff = control[SLIDER_STIFFNESS]
    trial = s_old + stiff * move
    if trial > cap + down:
        return cap + down, 0.0
    if trial < -cap - up:
        return -cap - up, 0.0
    return trial, stiff


@njit(cache=True)
def survey_loads(tension: Floats, g: Floats, elements: Floats, x: Floats) -> Floats:
    """Worst load ratio of all elements, where it is, its compression, and the frictionless hanging weight."""
    out = np.array([0.0, 0.0, 0.0, 0.0])
    for j in range(elements.shape[0]):
        out[3] += g[j, E_WEIGHT] * g[j, E_COS]
        if tension[j] >= 0.0:
            continue
        sine, _ = thresholds(tension[j], g, elements, j)
        ratio = -tension[j] / sine
        if ratio > out[0]:
            out[0] = ratio
            out[1] = 0.5 * (x[j] + x[j + 1])
            out[2] = -tension[j]
    return out


@njit(cache=True)
def steady(x: Floats, elements: Floats, table: Floats, control: Floats, sign: float) -> float:
    """Find the hook tension with all nodes sliding (+1 down, -1 up, 0 turning), off bottom."""
    n = elements.shape[0]
    g = geometry(x, elements, table, control[MD_FIRST], control[MD_STEP])
    tension = 0.0
    for j in range(n):
        # element tension by two corrections of its own midpoint value
        middle = tension
        for _ in range(4):
            drag = g[j, E_MU] * side_force(middle, g, j)
            middle = tension + 0.5 * (g[j, E_WEIGHT] * g[j, E_COS] - sign * drag)
        drag = g[j, E_MU] * side_force(middle, g, j)
        tension += g[j, E_WEIGHT] * g[j, E_COS] - sign * drag
    return tension


@njit(cache=True)
def slack(x: Floats, elements: Floats, table: Floats, control: Floats) -> float:
    """Block travel between full pick-up and full slack-off, off bottom and unbuckled [m]."""
    n = elements.shape[0]
    g = geometry(x, elements, table, control[MD_FIRST], control[MD_STEP])
    up, down, travel = 0.0, 0.0, 0.0
    for j in range(n):
        pull = g[j, E_WEIGHT] * g[j, E_COS]
        up += pull + g[j, E_MU] * side_force(up, g, j)
        down += pull - g[j, E_MU] * side_force(down, g, j)
        travel += (up - down) * elements[j, COMPLIANCE]
    return travel


@njit(cache=True)
def turning_torque(x: Floats, tension: Floats, elements: Floats, table: Floats, control: Floats) -> float:
    """Torque of a string that turns without moving along, at the friction of a table [N.m]."""
    g = geometry(x, elements, table, control[MD_FIRST], control[MD_STEP])
    total = 0.0
    for j in range(elements.shape[0]):
        total += g[j, E_MU] * side_force(tension[j], g, j) * 0.5 * elements[j, CONTACT_OD]
    return total
