"""Quasi-static time step of the lumped string: springs between nodes, a Coulomb slider at every node."""

from __future__ import annotations

import math

import numpy as np
from numba import njit
from numpy.typing import NDArray

from .elements import (
    BOTTOM,
    CONTACT_OD,
    DT,
    E_COS,
    E_SHAPE,
    E_WEIGHT,
    MD_FIRST,
    MD_STEP,
    ROCK_STIFFNESS,
    TOP,
    TURN_RATE,
    UNTWIST,
    bit_force,
    friction_limits,
    geometry,
    slider,
    tensions,
    thresholds,
)

Floats = NDArray[np.float64]
Ints = NDArray[np.int64]
Bools = NDArray[np.bool_]
# rows of the state of the nodes at the start of a step: position, slider force, its part spent on torsion,
# friction beyond the hole's as a share of it, what else is in the way of going up and down [N]; and, within
# a step only, friction limit and weight along the hole
PLACE, HELD, SPENT, GRIP, UP, DOWN, LIMIT, PULL = range(8)
NODE_ROWS = 6
TOLERANCE = 0.5  # N


@njit(cache=True)
def solve_chain(diagonal: Floats, off: Floats, right: Floats) -> None:
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
def imbalance(x: Floats, start: Floats, elements: Floats, g: Floats, control: Floats) -> tuple:
    """Force left over at every node and the tridiagonal of its slopes."""
    n = elements.shape[0]
    tension, slope = tensions(x, elements, g)
    bit, bit_slope = bit_force(x[0] - control[BOTTOM], control)
    diagonal = np.empty(n)
    off = np.empty(n)
    right = np.empty(n)
    friction = np.zeros(n + 1)
    for i in range(n):
        radius = 0.5 * elements[i, CONTACT_OD]
        move = x[i] - start[PLACE, i]
        limits = (start[LIMIT, i], start[UP, i], start[DOWN, i])
        friction[i], grip = slider(move, start[HELD, i], start[SPENT, i], limits, radius, control)
        below = tension[i - 1] if i > 0 else -bit
        right[i] = below - tension[i] + start[PULL, i] - friction[i]
        diagonal[i] = slope[i] + grip + (slope[i - 1] if i > 0 else bit_slope)
        off[i] = -slope[i]
    return right, diagonal, off, tension, friction, bit


@njit(cache=True)
def along(x: Floats, move: Floats, start: Floats, elements: Floats, g: Floats, control: Floats) -> float:
    """Slope of the energy down a direction: nil where the energy is least."""
    return np.dot(imbalance(x, start, elements, g, control)[0], move[:-1])


@njit(cache=True)
def careful_share(
    move: Floats, x: Floats, start: Floats, elements: Floats, g: Floats, control: Floats
) -> float:
    """Share of a Newton move at which the energy is least: the sliders make full moves overshoot."""
    if along(x + move, move, start, elements, g, control) >= 0.0:
        return 1.0
    low, high = 0.0, 1.0
    for _ in range(14):
        middle = 0.5 * (low + high)
        if along(x + middle * move, move, start, elements, g, control) > 0.0:
            low = middle
        else:
            high = middle
    return max(low, 1e-4)


@njit(cache=True)
def equilibrium(x: Floats, start: Floats, elements: Floats, g: Floats, control: Floats) -> tuple:
    """Move the nodes until forces balance; returns tensions, friction and how well it balanced.

    A dozen full Newton moves with friction limits that follow the load settle nearly every step; the rest
    get limits that stand still while an exact line search finds the balance, renewed a few times.
    """
    n = elements.shape[0]
    tension, _ = tensions(x, elements, g)
    start[LIMIT] = friction_limits(tension, g, elements, start[GRIP])
    friction = start[HELD].copy()
    move = np.zeros(n + 1)
    worst, bit, count, calm = 0.0, 0.0, 0, 0
    for it in range(400):
        count = it + 1
        right, diagonal, off, tension, friction, bit = imbalance(x, start, elements, g, control)
        worst = np.abs(right).max()
        if worst < TOLERANCE:
            calm += 1
            fresh = friction_limits(tension, g, elements, start[GRIP])
            shift = np.abs(fresh - start[LIMIT]).max()
            if shift < TOLERANCE or calm > 25:
                worst = max(worst, shift)
                break
            start[LIMIT] = fresh if calm < 8 else 0.5 * (start[LIMIT] + fresh)
            continue
        solve_chain(diagonal, off, right)
        move[:n] = right
        if it < 14:
            x += move
            tension, _ = tensions(x, elements, g)
            start[LIMIT] = friction_limits(tension, g, elements, start[GRIP])
        else:
            x += careful_share(move, x, start, elements, g, control) * move
    hook = tension[n - 1] + start[PULL, n]
    return tension, friction, np.array([bit, hook, float(count), worst])


@njit(cache=True)
def relatch(tension: Floats, g: Floats, elements: Floats, fresh: Bools) -> int:
    """Update each element's shape by its load; `fresh` marks those that just changed. Returns changes."""
    changes = 0
    for j in range(elements.shape[0]):
        load = -tension[j]
        sine, helix = thresholds(tension[j], g, elements, j)
        was = g[j, E_SHAPE]
        if was == 2:
            state = 2 if load >= sine else 0
        elif load >= helix:
            state = 2
        else:
            state = 1 if load >= sine else 0
        if state != was:
            if state == 2 or was == 2:
                if fresh[j]:
                    continue
                fresh[j] = True
                changes += 1
            g[j, E_SHAPE] = state
    return changes


@njit(cache=True)
def step(nodes: Floats, shapes: Ints, elements: Floats, table: Floats, control: Floats) -> tuple:
    """One time step, in place.

    `nodes` has the first six rows named at the top of this module;
    `shapes` is 0 straight, 1 sine, 2 helix, by element.
    """
    n = elements.shape[0]
    x = nodes[PLACE]
    g = geometry(x, elements, table, control[MD_FIRST], control[MD_STEP])
    g[:, E_SHAPE] = shapes
    start = np.zeros((8, n + 1))
    start[:NODE_ROWS] = nodes
    for j in range(n):
        half = 0.5 * g[j, E_WEIGHT] * g[j, E_COS]
        start[PULL, j] += half
        start[PULL, j + 1] += half
    x[n] = control[TOP]
    fresh = np.zeros(n, dtype=np.bool_)
    tension, friction, found = equilibrium(x, start, elements, g, control)
    for _ in range(6):
        if relatch(tension, g, elements, fresh) == 0:
            break
        tension, friction, found = equilibrium(x, start, elements, g, control)
    torque = 0.0
    for i in range(n + 1):
        radius = 0.5 * elements[min(i, n - 1), CONTACT_OD]
        sweep = control[TURN_RATE] * radius
        move = x[i] - start[PLACE, i]
        if sweep > 1e-6:
            v = move / control[DT]
            nodes[SPENT, i] = start[LIMIT, i] * sweep / math.sqrt(v * v + sweep * sweep)
        else:
            left = min(nodes[SPENT, i], start[LIMIT, i])
            nodes[SPENT, i] = left * math.exp(-abs(move) / control[UNTWIST])
        nodes[HELD, i] = friction[i]
        torque += nodes[SPENT, i] * radius
    shapes[:] = g[:, E_SHAPE].astype(np.int64)
    bottom = control[BOTTOM]
    if found[0] > 0.0:
        bottom = max(bottom, x[0] - found[0] / control[ROCK_STIFFNESS])
    return tension, g, np.array([found[0], found[1], bottom, torque, found[2], found[3]])
