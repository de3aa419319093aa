"""Regularised least squares that a minority of bad readings can't pull.

Solids, ledges and sticking only ever add drag, so the loss is lopsided: a reading on the side of more
friction than the rest is let go sooner than one on the other side, and the start is taken from the
lower envelope. That keeps drag episodes out of the base friction they are later judged against.
"""

from __future__ import annotations

from dataclasses import dataclass, replace
from typing import Protocol

import numpy as np
from numpy.typing import NDArray

from forensics.friction.assumptions import Prior
from forensics.friction.parameters import DRIFT, FIRST, HIDDEN, SCALE, gentle, stride, within

Floats = NDArray[np.float64]
Bools = NDArray[np.bool_]

#: Where the biweight lets go, in robust sigmas: on the side of more friction, and on the other.
LET_GO = (4.0, 6.0)

#: Quantile of the friction-signed residuals that the start follows.
ENVELOPE = 0.35

#: A robust sigma is never taken smaller than this part of the reading's own.
SIGMA_FLOOR = 1.0

#: Weight below which a reading counts as let go.
HEARD = 0.1


class Weights(Protocol):
    """String weight of n readings as a function of the friction factors."""

    def at(self, factors: Floats) -> tuple[Floats, Floats]:
        """Weights, shape (n,), and slopes against each factor, shape (n, sections) [N]."""

    def take(self, rows: Bools) -> Weights:
        """Only some of the readings."""


@dataclass(frozen=True)
class Problem:
    """Weight readings, ready to fit; arrays of shape (n,).

    `sign` is +1 where more friction lifts the reading (pick-up), -1 where it lowers it (slack-off),
    0 where it does not matter. `sigma` is each reading's own uncertainty [N]. `place` and `when` run from
    -1 to 1 over the readings' depths and times; `pumping` is 1 with pumps on. `hanging` is the string's
    weight without friction [N]; `near` marks strings near or past their buckling load, `rough` weights
    written down by hand: neither says how well the model fits.
    """

    value: Floats
    above: Floats
    sign: Floats
    sigma: Floats
    place: Floats
    when: Floats
    pumping: Floats
    hanging: Floats
    near: Bools
    rough: Bools
    surface: Weights
    prior: Prior

    def take(self, rows: Bools) -> Problem:
        """Only some of the readings."""
        names = ("value", "above", "sign", "sigma", "place", "when", "pumping", "hanging", "near", "rough")
        part = {name: getattr(self, name)[rows] for name in names}
        return replace(self, surface=self.surface.take(rows), **part)

    @property
    def plain(self) -> Bools:
        """Readings by which the fit is judged, shape (n,)."""
        return ~self.near & ~self.rough

    def model(self, p: Floats) -> tuple[Floats, Floats]:
        """Modelled readings [N], shape (n,), and their Jacobian, shape (n, p)."""
        weight, slopes = self.surface.at(p[FIRST:])
        scale = p[SCALE] + p[DRIFT] * self.place
        drag = weight - self.hanging
        bare = self.sign * self.hanging  # rubs at unseen doglegs by its tension, mostly high up in casing
        known = np.column_stack(
            [
                np.ones_like(weight),
                self.above,
                weight,
                weight * self.place,
                self.pumping,
                self.when,
                -self.sign * self.value,  # dead-line sheaves: light on the way up, heavy on the way down
                bare * p[FIRST],
                drag,
                np.abs(drag),
                np.where(self.near, slopes @ p[FIRST:], 0.0),
            ]
        )
        jacobian = np.column_stack([known, scale[:, None] * slopes])
        jacobian[:, FIRST] += p[HIDDEN] * bare
        return known @ p[:FIRST], jacobian


@dataclass(frozen=True)
class Fit:
    """Parameters, shape (p,), robust weights and the inflation of sigma; what is left over, the Jacobian."""

    p: Floats
    weights: Floats
    inflation: float
    residuals: Floats
    jacobian: Floats

    @property
    def heard(self) -> Bools:
        """Readings that were not let go, shape (n,)."""
        return self.weights > HEARD


def fit(problem: Problem, start: Floats | None = None) -> Fit:
    """Solve for the parameters that the prior leaves free.

    Parameters
    ----------
    problem : Problem
        Readings in time order.
    start : ndarray, shape (p,), optional
        A solution to go on from; without it the best of several envelope fits is taken.

    Returns
    -------
    Fit
    """
    p = _best_start(problem) if start is None else start
    inflation = 1.0
    weights = np.ones(len(problem.value))
    for _ in range(40):
        before = p
        residuals, jacobian = _standard(problem, p)
        inflation = robust_sigma(residuals)
        weights = biweight(residuals / inflation, problem.sign)
        p = _step(problem, p, weights / inflation**2, (residuals, jacobian))
        if _settled(before, p, problem.prior):
            break
    modelled, jacobian = problem.model(p)
    return Fit(p, weights, inflation, problem.value - modelled, jacobian)


def _best_start(problem: Problem) -> Floats:
    """Envelope fits to stretches of the run; the one that half of all readings lie closest to.

    Solids that build up over the second half of a run bend a fit to the whole of it; a fit to the
    first half passes straight through the clean readings.
    """
    n = len(problem.value)
    best, least = problem.prior.centre, np.inf
    start = gentle(best, problem.prior.free)
    for parts, k in ((1, 0), (2, 0), (2, 1), (3, 0), (3, 1), (3, 2)):
        within_part = np.zeros(n)
        within_part[n * k // parts : n * (k + 1) // parts] = 1.0
        within_part[problem.sign == 0.0] = 1.0
        p = follow_envelope(problem, start, within_part)
        size = robust_sigma(_standard(problem, p)[0][problem.sign != 0.0])
        if size < 0.8 * least:  # a part must fit clearly better than the whole to go before it
            best, least = p, size
    return best


def follow_envelope(problem: Problem, p: Floats, counts: Floats, rounds: int = 25) -> Floats:
    """Go from a start to where the readings' lower envelope lies; `counts` (n,) is 1 for those that count."""
    for _ in range(rounds):
        before = p
        here = _standard(problem, p)
        p = _step(problem, p, counts * _envelope_weights(here[0], problem.sign), here)
        if _settled(before, p, problem.prior):
            break
    return p


def robust_sigma(standard: Floats) -> float:
    """Robust sigma of standardised residuals, from the median of their size."""
    if len(standard) == 0:
        return 1.0
    return max(SIGMA_FLOOR, 1.4826 * float(np.median(np.abs(standard))))


def biweight(u: Floats, sign: Floats) -> Floats:
    """Lopsided biweight of standardised residuals, shape (n,)."""
    cut = np.where(u * sign > 0.0, LET_GO[0], LET_GO[1])
    return np.where(np.abs(u) < cut, (1.0 - (u / cut) ** 2) ** 2, 0.0)


def whitened(problem: Problem, jacobian: Floats) -> Floats:
    """Jacobian in sigmas of the readings against independent sigmas of the prior, shape (n, f)."""
    prior = problem.prior
    return (jacobian / problem.sigma[:, None])[:, prior.free] @ prior.root


def _standard(problem: Problem, p: Floats) -> tuple[Floats, Floats]:
    modelled, jacobian = problem.model(p)
    return (problem.value - modelled) / problem.sigma, jacobian


def _envelope_weights(residuals: Floats, sign: Floats) -> Floats:
    """Weights that make least squares follow a quantile (median where friction doesn't matter)."""
    more = residuals * sign
    share = np.where(sign == 0.0, 0.5, np.where(more > 0.0, ENVELOPE, 1.0 - ENVELOPE))
    return 2.0 * share / np.maximum(np.abs(residuals), 0.5)


def _step(problem: Problem, p: Floats, weights: Floats, here: tuple[Floats, Floats]) -> Floats:
    """One Gauss-Newton step with the prior as extra rows, kept within the bounds."""
    residuals, jacobian = here
    prior = problem.prior
    if not prior.free.any():
        return p
    a = whitened(problem, jacobian)
    normal = a.T @ (weights[:, None] * a) + np.eye(a.shape[1])
    right = a.T @ (weights * residuals) - prior.apart(p)
    change = np.zeros(len(p))
    change[prior.free] = prior.root @ np.linalg.solve(normal, right)
    return np.where(prior.free, within(p + stride(change)), p)


def _settled(before: Floats, after: Floats, prior: Prior) -> bool:
    return bool(np.all(np.abs(after - before) <= 1e-4 * prior.sigma))
