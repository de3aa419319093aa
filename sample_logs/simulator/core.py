"""Quasi-static time step of the lumped string: springs between nodes, a Coulomb slider at every node.

Node 0 is the bit, the last node hangs on the hook. Element j joins node j (lower) and node j + 1 (upper).
Positions are measured depths, so a node above the rotary has a negative one.
"""

from __future__ import annotations

import math

import numpy as np
from numba import njit

# columns of the element table
LENGTH, COMPLIANCE, BENDING, CONTACT_OD, WEIGHT, WEIGHT_AIR, STIFF_RUN = range(7)
# columns of the hole table
T_NORTH, T_EAST, T_DOWN, DIAMETER, MU = range(5)
# entries of the control vector
(
    TOP, DT, TURN_RATE, BOTTOM, DRILL_RATE, DRILL_EXPONENT, ROCK_STIFFNESS, UNTWIST, MD_FIRST, MD_STEP,
) = range(10)  # fmt: skip
# entries of the result vector
BIT_LOAD, TOP_TENSION, NEW_BOTTOM, FRICTION_TORQUE, ITERATIONS, RESIDUAL = range(6)
# columns of the geometry of one step, by element
D_NORTH, D_EAST, D_DOWN, P_NORTH, P_EAST, P_DOWN, E_MU, E_CLEAR, E_COS, E_WEIGHT = range(10)

SLIDER_STIFFNESS = 1.5e7  # N/m: a node gives about 0.1 mm before it slips
REFERENCE_LOAD = 1.0e5  # N: bit load at which the drill rate is quoted
MIN_CLEARANCE = 0.002  # m: less than this is a support, not a place that can buckle
ROOT2 = math.sqrt(2.0)


@njit(cache=True)
def lookup(table, column, first, step, md):
    """Linear interpolation in one column of the hole table."""
    p = (md - first) / step
    last = table.shape[0] - 2
    i = min(max(int(math.floor(p)), 0), last)
    f = min(max(p - i, 0.0), 1.0)
    return table[i, column] * (1.0 - f) + table[i + 1, column] * f


@njit(cache=True)
def geometry(x, elements, table, first, step):
    """Tangent change, sideways weight, friction and clearance of every element where it lies now."""
    n = elements.shape[0]
    g = np.zeros((n, 10))
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
def side_force(tension, g, j):
    """Size of the lateral force of one element [N]: bent tension plus weight across the hole."""
    a = tension * g[j, D_NORTH] + g[j, P_NORTH]
    b = tension * g[j, D_EAST] + g[j, P_EAST]
    c = tension * g[j, D_DOWN] + g[j, P_DOWN]
    return math.sqrt(a * a + b * b + c * c)


@njit(cache=True)
def end_coefficient(n, run):
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
def thresholds(tension, g, elements, j):
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
def bit_force(gap, control):
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
def tensions(x, elements, g, latched):
    """Tension in every spring; a helix makes its spring softer by what it shortens."""
    n = elements.shape[0]
    tension = np.empty(n)
    slope = np.empty(n)
    for j in range(n):
        c = elements[j, COMPLIANCE]
        if latched[j] == 2:
            c += g[j, E_CLEAR] ** 2 * elements[j, LENGTH] / (4.0 * elements[j, BENDING])
        slope[j] = 1.0 / c
        tension[j] = (x[j] - x[j + 1] - elements[j, LENGTH]) / c
    return tension, slope


@njit(cache=True)
def friction_limits(tension, g, elements, latched):
    """Largest friction force at every node: half of each neighbour's contact times its friction."""
    n = elements.shape[0]
    limit = np.zeros(n + 1)
    for j in range(n):
        normal = side_force(tension[j], g, j)
        if latched[j] == 2 and tension[j] < 0.0:
            normal += g[j, E_CLEAR] * tension[j] ** 2 / (4.0 * elements[j, BENDING]) * elements[j, LENGTH]
        half = 0.5 * g[j, E_MU] * normal
        limit[j] += half
        limit[j + 1] += half
    return limit


@njit(cache=True)
def slider(i, move, s_old, spent, limit, control, elements):
    """Friction force of one node (positive: holds it from going down) and its slope with position."""
    radius = 0.5 * elements[min(i, elements.shape[0] - 1), CONTACT_OD]
    sweep = control[TURN_RATE] * radius
    if sweep > 1e-6:
        v = move / control[DT]
        speed = math.sqrt(v * v + sweep * sweep)
        return limit * v / speed, limit * sweep * sweep / (speed**3 * control[DT]) + 1.0
    cap = math.sqrt(max(limit * limit - spent * spent, 0.0))
    trial = s_old + SLIDER_STIFFNESS * move
    if trial > cap:
        return cap, 0.0
    if trial < -cap:
        return -cap, 0.0
    return trial, SLIDER_STIFFNESS


@njit(cache=True)
def solve_chain(diagonal, off, right):
    """Thomas algorithm for a symmetric tridiagonal system, in place."""
    n = diagonal.shape[0]
    for i in range(1, n):
        m = off[i - 1] / diagonal[i - 1]
        diagonal[i] -= m * off[i - 1]
        right[i] -= m * right[i - 1]
    right[n - 1] /= diagonal[n - 1]
    for i in range(n - 2, -1, -1):
        right[i] = (right[i] - off[i] * right[i + 1]) / diagonal[i]


@njit(cache=True)
def imbalance(x, start, limit, weight, latched, elements, g, control):
    """Force left over at every node, with the tridiagonal of its slopes; `start` holds x, s, spent before."""
    n = elements.shape[0]
    tension, slope = tensions(x, elements, g, latched)
    bit, bit_slope = bit_force(x[0] - control[BOTTOM], control)
    diagonal = np.empty(n)
    off = np.empty(n)
    right = np.empty(n)
    friction = np.zeros(n + 1)
    for i in range(n):
        friction[i], grip = slider(
            i, x[i] - start[0, i], start[1, i], start[2, i], limit[i], control, elements
        )
        below = tension[i - 1] if i > 0 else -bit
        right[i] = below - tension[i] + weight[i] - friction[i]
        diagonal[i] = slope[i] + grip + (slope[i - 1] if i > 0 else bit_slope)
        off[i] = -slope[i]
    return right, diagonal, off, tension, friction, bit


@njit(cache=True)
def along(move, x, share, start, limit, weight, latched, elements, g, control):
    """Slope of the energy down a direction, a share of the way along it (falls as the share grows)."""
    trial = x.copy()
    n = move.shape[0]
    trial[:n] += share * move
    right = imbalance(trial, start, limit, weight, latched, elements, g, control)[0]
    return np.dot(right, move)


@njit(cache=True)
def careful_share(move, x, start, limit, weight, latched, elements, g, control):
    """Share of a Newton move at which the energy is least: the sliders make full moves overshoot."""
    if along(move, x, 1.0, start, limit, weight, latched, elements, g, control) >= 0.0:
        return 1.0
    low, high = 0.0, 1.0
    for _ in range(14):
        middle = 0.5 * (low + high)
        if along(move, x, middle, start, limit, weight, latched, elements, g, control) > 0.0:
            low = middle
        else:
            high = middle
    return max(low, 1e-4)


@njit(cache=True)
def equilibrium(x, start, latched, elements, g, control):
    """Move the nodes until forces balance; returns tensions, friction, its limits and how well it balanced.

    A dozen full Newton moves with friction limits that follow the load settle nearly every step; the rest
    get limits that stand still while an exact line search finds the balance, renewed a few times.
    """
    n = elements.shape[0]
    weight = np.zeros(n + 1)
    for j in range(n):
        half = 0.5 * g[j, E_WEIGHT] * g[j, E_COS]
        weight[j] += half
        weight[j + 1] += half
    tension, _ = tensions(x, elements, g, latched)
    limit = friction_limits(tension, g, elements, latched)
    friction = start[1].copy()
    worst, bit, count, calm = 0.0, 0.0, 0, 0
    for it in range(400):
        count = it + 1
        right, diagonal, off, tension, friction, bit = imbalance(
            x, start, limit, weight, latched, elements, g, control
        )
        worst = np.abs(right).max()
        if worst < 0.5:
            calm += 1
            fresh = friction_limits(tension, g, elements, latched)
            shift = np.abs(fresh - limit).max()
            if shift < 0.5 or calm > 25:
                worst = max(worst, shift)
                break
            limit = fresh if calm < 8 else 0.5 * (limit + fresh)
            continue
        solve_chain(diagonal, off, right)
        if it < 14:
            x[:n] += right
            tension, _ = tensions(x, elements, g, latched)
            limit = friction_limits(tension, g, elements, latched)
        else:
            share = careful_share(right, x, start, limit, weight, latched, elements, g, control)
            x[:n] += share * right
    hook = tension[n - 1] + weight[n]
    return tension, friction, limit, np.array([bit, hook, float(count), worst])


@njit(cache=True)
def relatch(tension, g, elements, latched, fresh):
    """Update each element's shape by its load; `fresh` marks those that just changed. Returns changes."""
    changes = 0
    for j in range(elements.shape[0]):
        load = -tension[j]
        sine, helix = thresholds(tension[j], g, elements, j)
        if latched[j] == 2:
            state = 2 if load >= sine else 0
        elif load >= helix:
            state = 2
        else:
            state = 1 if load >= sine else 0
        if state != latched[j]:
            if state == 2 or latched[j] == 2:
                if fresh[j]:
                    continue
                fresh[j] = True
                changes += 1
            latched[j] = state
    return changes


@njit(cache=True)
def step(x, s, spent, latched, elements, table, control):
    """One time step, in place: positions, sliders, torsion spent by the sliders, shapes."""
    n = elements.shape[0]
    x_old = x.copy()
    g = geometry(x_old, elements, table, control[MD_FIRST], control[MD_STEP])
    x[n] = control[TOP]
    fresh = np.zeros(n, dtype=np.bool_)
    start = np.stack((x_old, s, spent))
    tension, friction, limit, found = equilibrium(x, start, latched, elements, g, control)
    for _ in range(6):
        if relatch(tension, g, elements, latched, fresh) == 0:
            break
        tension, friction, limit, found = equilibrium(x, start, latched, elements, g, control)
    torque = 0.0
    for i in range(n + 1):
        radius = 0.5 * elements[min(i, n - 1), CONTACT_OD]
        sweep = control[TURN_RATE] * radius
        move = x[i] - x_old[i]
        if sweep > 1e-6:
            v = move / control[DT]
            spent[i] = limit[i] * sweep / math.sqrt(v * v + sweep * sweep)
        else:
            spent[i] = min(spent[i], limit[i]) * math.exp(-abs(move) / control[UNTWIST])
        s[i] = friction[i]
        torque += spent[i] * radius
    result = np.empty(6)
    result[BIT_LOAD] = found[0]
    result[TOP_TENSION] = found[1]
    if found[0] > 0.0:
        result[NEW_BOTTOM] = max(control[BOTTOM], x[0] - found[0] / control[ROCK_STIFFNESS])
    else:
        result[NEW_BOTTOM] = control[BOTTOM]
    result[FRICTION_TORQUE] = torque
    result[ITERATIONS] = found[2]
    result[RESIDUAL] = found[3]
    return tension, g, result


@njit(cache=True)
def survey_loads(tension, g, elements, x):
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
def steady(x, elements, table, control, sign):
    """Hook tension with every node sliding one way (+1 down, -1 up, 0 none), off bottom, unbuckled."""
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
def slack(x, elements, table, control):
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
