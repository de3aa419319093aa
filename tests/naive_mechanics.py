"""Slow, obvious versions of the compiled and closed-form mechanics, for comparison on small inputs."""

from __future__ import annotations

import math

import numpy as np
from scipy.optimize import brentq

from forensics.mechanics.eigen import column_eigenvalue
from forensics.mechanics.kernels_judge import GIVE, latch
from forensics.mechanics.kernels_march import Place
from forensics.mechanics.offbottom import SIGMA, OffBottomModel


def column_by_differences(n: float, length: float, points: int) -> float:
    """c(n, length) by plain central differences, dense matrices, second order.

    Unknowns are y at inner nodes; pinned ends mirror with opposite sign.
    """
    h = length / points
    inner = points - 1
    ones = np.ones(inner)
    second = (np.diag(ones[1:], -1) - 2 * np.diag(ones) + np.diag(ones[1:], 1)) / h**2
    slope = np.zeros((points, inner))  # y' at the middles of the cells
    for i in range(inner):
        slope[i, i], slope[i + 1, i] = 1 / h, -1 / h
    middles = (np.arange(points) + 0.5) * h
    stiffness = second @ second + slope.T @ (middles[:, None] * slope) + n * np.eye(inner)
    load = slope.T @ slope
    root = np.linalg.inv(np.linalg.cholesky(load))
    return float(np.linalg.eigvalsh(root @ stiffness @ root.T)[0]) - 2 * math.sqrt(n)


def sinusoidal(ei: float, contact: float, clearance: float, w_cos: float, length: float) -> float:
    """Local load plus near-vertical term, c from the eigenproblem itself."""
    local = 2 * math.sqrt(ei * contact / clearance)
    if w_cos <= 0:
        return local
    scale = (ei / w_cos) ** (1 / 3)
    n = scale * contact / (clearance * w_cos)
    return local + column_eigenvalue(n, length / scale) * (ei * w_cos**2) ** (1 / 3)


def helical(local: float, ei: float, w_cos: float, n: float, onset: float) -> float:
    """Multiple of F_DP plus the blended near-vertical term, case by case."""
    if w_cos <= 0:
        return onset * local
    flat = 1.6172330 * onset
    if n <= 1:
        share = 5.55
    elif n >= 100:
        share = flat
    else:
        share = 5.55 + (flat - 5.55) * math.log10(n) / 2
    return onset * local + share * (ei * w_cos**2) ** (1 / 3)


def first_crossing(threshold: object, top: float, steps: int = 20000) -> float:
    """Lowest F with threshold(F) = F: march in small steps, then close in."""
    force = np.linspace(0, top, steps)
    gap = [threshold(f) - f for f in force]
    for k in range(1, steps):
        if gap[k] <= 0 < gap[k - 1]:
            return float(brentq(lambda f: threshold(f) - f, force[k - 1], force[k]))
    return math.inf


def march_helical(distance: float, bit_load: float, growth: tuple[float, float], steps: int = 4000) -> float:
    """Load after `distance` of dF/dx = a + b max(F, 0)^2, fourth-order Runge-Kutta."""
    a, b = growth

    def rate(force: float) -> float:
        return a + b * max(force, 0.0) ** 2

    h, force = distance / steps, bit_load
    for _ in range(steps):
        k1 = rate(force)
        k2 = rate(force + h * k1 / 2)
        k3 = rate(force + h * k2 / 2)
        k4 = rate(force + h * k3)
        force += h * (k1 + 2 * k2 + 2 * k3 + k4) / 6
    return force


def column_by_beam_elements(n: float, length: float, bit: str, top: str, cells: int) -> float:
    """Load phi of a column with any ends, by Hermite beam elements, dense matrices.

    Unknowns are deflection and slope at each node; an end takes away those that it holds.
    """
    h = length / cells
    place, weight = np.polynomial.legendre.leggauss(6)
    s = (place + 1) / 2
    shape = np.array(
        [1 - 3 * s**2 + 2 * s**3, h * (s - 2 * s**2 + s**3), 3 * s**2 - 2 * s**3, h * (s**3 - s**2)]
    )
    slope = (
        np.array([-6 * s + 6 * s**2, h * (1 - 4 * s + 3 * s**2), 6 * s - 6 * s**2, h * (3 * s**2 - 2 * s)])
        / h
    )
    bend = np.array([-6 + 12 * s, h * (-4 + 6 * s), 6 - 12 * s, h * (6 * s - 2)]) / h**2
    size = 2 * (cells + 1)
    stiffness, load = np.zeros((size, size)), np.zeros((size, size))
    for k in range(cells):
        w, x, own = weight * h / 2, (k + s) * h, slice(2 * k, 2 * k + 4)
        stiffness[own, own] += (bend * w) @ bend.T + (slope * (w * x)) @ slope.T + n * (shape * w) @ shape.T
        load[own, own] += (slope * w) @ slope.T
    held = {"pinned": [0], "guided": [1], "clamped": [0, 1]}[bit]
    held += {"held": [size - 2], "free": [], "clamped": [size - 2, size - 1]}[top]
    kept = np.setdiff1d(np.arange(size), held)
    # the load's matrix may be singular: the greatest of load over stiffness is the least of its inverse
    root = np.linalg.inv(np.linalg.cholesky(stiffness[np.ix_(kept, kept)]))
    return 1 / float(np.linalg.eigvalsh(root @ load[np.ix_(kept, kept)] @ root.T)[-1])


def weigh_with_slopes(
    model: OffBottomModel, kind: str, bit: float, factors: tuple[float, ...], scale: float = 1.0
) -> tuple[float, list[float]]:
    """Weight of one string at the rotary, bit free, and its change with each factor and with the scale.

    Plain numbers, one element after the other; whether an element turns helical is asked of the judge, which
    has its own checks.
    """
    hole, pipe, setting, sigma = model.hole, model.pipe, model.setting(0.0, 0.0), SIGMA[kind]
    last = len(factors)
    tension, by = 0.0, [0.0] * (last + 1)
    rate, rate_by = 0.0, [0.0] * (last + 1)
    bit_row = int(bit / hole.step + 0.5)
    for j in range(len(pipe.weight)):
        if pipe.x[j] >= bit:
            break
        length = min(float(pipe.x[j + 1]), bit) - float(pipe.x[j])
        i = max(bit_row - int(pipe.node[j] + pipe.node[j + 1]) // 2, 0)
        own, section = float(pipe.weight[j]), int(model.section[i])
        cos_i, sin2, kappa2, kappa_d = (
            float(column[i]) for column in (hole.cos_i, hole.sin2, hole.kappa2, hole.kappa_d)
        )
        m = tension + length / 2 * rate
        m_by = [by[p] + length / 2 * rate_by[p] for p in range(last + 1)]
        w = own * scale
        n = math.sqrt(max(m * m * kappa2 + 2 * m * w * kappa_d + w * w * sin2, 0.0))
        n_by_m = (m * kappa2 + w * kappa_d) / n if n > 0 else 0.0
        n_by_scale = own * (m * kappa_d + w * sin2) / n if n > 0 else 0.0
        if m < 0 and latch(setting, Place(bit, j, bit_row, scale, scale ** (2 / 3)), j, i, m):
            give = float(model.criteria.at[model.criteria.kind[j], i, GIVE])
            n += m * m * give
            n_by_m += 2 * m * give
        mu = factors[section]
        rate = w * cos_i - sigma * mu * n
        for p in range(last + 1):
            change = mu * n_by_m * m_by[p]
            change += mu * n_by_scale if p == last else n if p == section else 0.0
            rate_by[p] = (own * cos_i if p == last else 0.0) - sigma * change
            by[p] += rate_by[p] * length
        tension += rate * length
        if min(m, tension) < -1e8:
            return math.nan, [math.nan] * (last + 1)
    return tension, by


def wound_rate(force: float, ei: float, torque: float) -> float:
    """Turn rate of a weightless helix under torque: ``F = 2 EI k^2 - 3/2 M k`` [rad/m]."""
    part = 1.5 * torque
    return (part + math.sqrt(part**2 + 8 * ei * force)) / (4 * ei)


def wound_contact(force: float, ei: float, clearance: float, torque: float) -> float:
    """Wall force per length of a weightless helix under torque, ``r (F k^2 + M k^3 - EI k^4)`` [N/m]."""
    rate = wound_rate(force, ei, torque)
    return clearance * rate**2 * (force + torque * rate - ei * rate**2)
