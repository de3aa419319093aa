"""Regularised least squares that a minority of bad readings can't pull.

Solids, ledges and sticking only ever add drag, so the loss is lopsided: a reading on the side of more
friction than the rest is let go sooner than one on the other side, and the start is taken from the
lower envelope. That keeps drag episodes out of the base friction they are later judged against.
"""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray

from forensics.friction.assumptions import HIGHEST, LOWEST, Prior
from forensics.friction.surface import ResponseSurface

Floats = NDArray[np.float64]
Bools = NDArray[np.bool_]

#: Where the biweight lets go, in robust sigmas: on the side of more friction, and on the other.
LET_GO = (4.0, 6.0)

#: Quantile of the friction-signed residuals that the start follows.
ENVELOPE = 0.35

#: Where factors start at most; block, share and scale are not held by it.
GENTLE = np.array([np.inf, np.inf, np.inf, 0.15, 0.15, np.inf])

#: A factor moves at most this far in one step.
STRIDE = np.array([np.inf, np.inf, np.inf, 0.05, 0.05, np.inf])

#: A robust sigma is never taken smaller than this part of the reading's own.
SIGMA_FLOOR = 1.0


@dataclass(frozen=True)
class Problem:
    """Weight readings, ready to fit; arrays of shape (n,).

    `sign` is +1 where more friction lifts the reading (pick-up), -1 where it lowers it (slack-off),
    0 where it does not matter. `sigma` is each reading's own uncertainty [N]; `place` runs from -1 to 1 over
    the readings' depths.
    """

    value: Floats
    above: Floats
    sign: Floats
    sigma: Floats
    place: Floats
    surface: ResponseSurface
    prior: Prior

    def take(self, rows: Bools) -> Problem:
        """Only some of the readings."""
        return replace(
            self,
            value=self.value[rows],
            above=self.above[rows],
            sign=self.sign[rows],
            sigma=self.sigma[rows],
            place=self.place[rows],
            surface=ResponseSurface(self.surface.table[:, :, rows]),
        )

    def model(self, p: Floats) -> tuple[Floats, Floats]:
        """Modelled readings [N], shape (n,), and their Jacobian, shape (n, 6)."""
        weight, slope_cased, slope_open = self.surface.at(p[3], p[4])
        scale = p[2] + p[5] * self.place
        ones = np.ones_like(weight)
        jacobian = np.column_stack(
            [ones, self.above, weight, scale * slope_cased, scale * slope_open, weight * self.place]
        )
        return p[0] + p[1] * self.above + scale * weight, jacobian


@dataclass(frozen=True)
class Fit:
    """Parameters (block, share, scale, cased, open, drift), robust weights and the inflation of sigma."""

    p: Floats
    weights: Floats
    inflation: float
    residuals: Floats
    jacobian: Floats


def fit(problem: Problem, start: Floats, active: Bools) -> Fit:
    """Solve for the active parameters.

    Parameters
    ----------
    problem : Problem
        Readings in time order.
    start : ndarray, shape (6,)
        Where to begin; inactive parameters stay there.
    active : ndarray of bool, shape (6,)

    Returns
    -------
    Fit
    """
    p = _best_start(problem, np.clip(start, LOWEST, HIGHEST), active)
    inflation = 1.0
    weights = np.ones(len(problem.value))
    for _ in range(40):
        before = p
        residuals, _ = _standard(problem, p)
        inflation = robust_sigma(residuals)
        weights = _biweight(residuals / inflation, problem.sign)
        p = _step(problem, p, active, weights / inflation**2)
        if _settled(before, p, problem.prior):
            break
    modelled, jacobian = problem.model(p)
    return Fit(p, weights, inflation, problem.value - modelled, jacobian)


def _best_start(problem: Problem, start: Floats, active: Bools) -> Floats:
    """Envelope fits to stretches of the run; the one that half of all readings lie closest to.

    Solids that build up over the second half of a run bend a fit to the whole of it; a fit to the
    first half passes straight through the clean readings.
    """
    n = len(problem.value)
    best, least = start, np.inf
    # from below: at too high a factor the modelled string is locked up and shows no way back
    start = np.where(active, np.minimum(start, GENTLE), start)
    for parts, k in ((1, 0), (2, 0), (2, 1), (3, 0), (3, 1), (3, 2)):
        within = np.zeros(n)
        within[n * k // parts : n * (k + 1) // parts] = 1.0
        within[problem.sign == 0.0] = 1.0
        p = start
        for _ in range(25):
            before = p
            residuals, _ = _standard(problem, p)
            p = _step(problem, p, active, within * _envelope_weights(residuals, problem.sign))
            if _settled(before, p, problem.prior):
                break
        size = robust_sigma(_standard(problem, p)[0][problem.sign != 0.0])
        if size < 0.8 * least:  # a part must fit clearly better than the whole to go before it
            best, least = p, size
    return best


def robust_sigma(standard: Floats) -> float:
    """Robust sigma of standardised residuals, from the median of their size."""
    if len(standard) == 0:
        return 1.0
    return max(SIGMA_FLOOR, 1.4826 * float(np.median(np.abs(standard))))


def _standard(problem: Problem, p: Floats) -> tuple[Floats, Floats]:
    modelled, jacobian = problem.model(p)
    return (problem.value - modelled) / problem.sigma, jacobian


def _envelope_weights(residuals: Floats, sign: Floats) -> Floats:
    """Weights that make least squares follow a quantile (median where friction doesn't matter)."""
    more = residuals * sign
    share = np.where(sign == 0.0, 0.5, np.where(more > 0.0, ENVELOPE, 1.0 - ENVELOPE))
    return 2.0 * share / np.maximum(np.abs(residuals), 0.5)


def _biweight(u: Floats, sign: Floats) -> Floats:
    cut = np.where(u * sign > 0.0, LET_GO[0], LET_GO[1])
    return np.where(np.abs(u) < cut, (1.0 - (u / cut) ** 2) ** 2, 0.0)


def _step(problem: Problem, p: Floats, active: Bools, weights: Floats) -> Floats:
    """One Gauss-Newton step with the prior as extra rows, kept within the bounds."""
    residuals, jacobian = _standard(problem, p)
    prior = problem.prior
    a = (jacobian / problem.sigma[:, None])[:, active] * prior.sigma[active]
    w = weights[:, None]
    normal = a.T @ (w * a) + np.eye(int(active.sum()))
    right = a.T @ (weights * residuals) + ((prior.centre - p) / prior.sigma)[active]
    change = np.zeros(len(p))
    change[active] = prior.sigma[active] * np.linalg.solve(normal, right)
    return np.clip(p + np.clip(change, -STRIDE, STRIDE), LOWEST, HIGHEST)


def _settled(before: Floats, after: Floats, prior: Prior) -> bool:
    return bool(np.all(np.abs(after - before) < 1e-4 * prior.sigma))
