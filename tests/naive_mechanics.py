"""Slow, obvious versions of the compiled and closed-form mechanics, for comparison on small inputs."""

from __future__ import annotations

import math

import numpy as np
from scipy.optimize import brentq

from forensics.mechanics.eigen import column_eigenvalue


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
