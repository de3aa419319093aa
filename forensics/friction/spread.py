"""How sure a calibration is: joint covariance and draws."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from forensics.friction.assumptions import WANDER_SIGMA
from forensics.friction.parameters import BLOCK, FIRST, PUMPS, SCALE, SHARE, within
from forensics.friction.robust import Fit, Problem, whitened

Floats = NDArray[np.float64]

#: Readings nearer than this in bit depth are not independent [m] (one stand).
STAND = 30.0

#: Blocks wanted at most: correlation along the hole reaches further where the run is long.
BLOCKS = 12

DRAWS = 64


@dataclass(frozen=True)
class Posterior:
    """How sure a fit is: `cov`, shape (p, p), and `gain`, shape (p, n).

    `gain` is how the parameters follow the readings, or a modelled reading that moves the other way [1/N].
    """

    cov: Floats
    gain: Floats


def posterior(problem: Problem, fit: Fit, bit_depth: Floats) -> Posterior:
    """Posterior covariance of the parameters.

    The Gauss-Newton posterior with sigma inflated to the residuals, each direction widened where the
    scores summed by stand (readings of one stand share their error) say that is too narrow. For more
    than a few stands this is what resampling whole stands gives, without the resampling.

    Parameters
    ----------
    problem : Problem
    fit : Fit
    bit_depth : ndarray, shape (n,)
        Of the readings [m].

    Returns
    -------
    Posterior
        In SI units; zero rows for what the prior holds.

    References
    ----------
    White, H. (1980). Econometrica 48(4) (the sandwich form; summed by cluster).
    """
    prior = problem.prior
    a = whitened(problem, fit.jacobian) / fit.inflation
    inverse = np.linalg.inv(a.T @ (fit.weights[:, None] * a) + np.eye(a.shape[1]))
    sigma = problem.sigma * fit.inflation
    gain = inverse @ (a * (fit.weights / sigma)[:, None]).T
    label = blocks(bit_depth)
    groups = int(label.max()) + 1 if len(label) else 0
    widen = np.ones(a.shape[1])
    if groups >= 4:
        score = a * (fit.weights * fit.residuals / sigma)[:, None]
        summed = np.zeros((groups, a.shape[1]))
        np.add.at(summed, label, score)
        middle = summed.T @ summed * groups / (groups - 1) + np.eye(a.shape[1])
        sandwich = inverse @ middle @ inverse
        widen = np.maximum(1.0, np.sqrt(np.diag(sandwich) / np.diag(inverse)))
    small = inverse * np.outer(widen, widen)
    full = np.zeros_like(prior.cov)
    full[np.ix_(prior.free, prior.free)] = prior.root @ small @ prior.root.T
    wander = np.full(len(prior.centre) - FIRST, WANDER_SIGMA["open"])
    wander[0] = WANDER_SIGMA["cased"]
    full[FIRST:, FIRST:] += np.diag(np.where(prior.free[FIRST:], wander * fit.p[FIRST:], 0.0) ** 2)
    followed = np.zeros((len(prior.centre), len(problem.value)))
    followed[prior.free] = prior.root @ gain
    return Posterior(full, followed)


def blocks(bit_depth: Floats) -> NDArray[np.int64]:
    """Label readings by blocks of bit depth, numbered from zero.

    Parameters
    ----------
    bit_depth : ndarray, shape (n,)
        [m].

    Returns
    -------
    ndarray of int, shape (n,)
    """
    if len(bit_depth) == 0:
        return np.zeros(0, dtype=np.int64)
    low, high = float(np.min(bit_depth)), float(np.max(bit_depth))
    size = max(STAND, (high - low) / BLOCKS)
    raw = np.floor((np.asarray(bit_depth) - low) / size).astype(np.int64)
    return np.unique(raw, return_inverse=True)[1]


def fold(problem: Problem, fit: Fit) -> Floats:
    """Rows that give (factors..., block weight) from the parameters, shape (s + 1, p).

    Whatever else shifts a hookload is folded into the block weight at the readings' usual depth, height and
    pumps: their errors and the block's cancel there, and a draw of the block alone would undo that.
    """
    count = len(fit.p) - FIRST
    rows = np.zeros((count + 1, len(fit.p)))
    rows[:count, FIRST:] = np.eye(count)
    rows[count, BLOCK] = 1.0
    if len(problem.value):
        weight = problem.surface.at(fit.p[FIRST:])[0]
        rows[count, SHARE] = float(problem.above.mean())
        rows[count, SCALE] = float(np.median(weight))
        rows[count, PUMPS] = float(problem.pumping.mean())
    return rows


def draw(p: Floats, cov: Floats, rows: Floats) -> Floats:
    """Joint draws of the factors and the block weight.

    Parameters
    ----------
    p : ndarray, shape (p,)
    cov : ndarray, shape (p, p)
    rows : ndarray, shape (s + 1, p)
        As `fold` gives them.

    Returns
    -------
    ndarray, shape (64, s + 1)
        [-, ..., N]; the same for the same input.
    """
    rng = np.random.default_rng(20240229)
    z = rng.standard_normal((DRAWS // 2, len(p)))
    z = np.vstack([z, -z])  # mirrored pairs keep the mean exact
    z = z @ np.linalg.inv(np.linalg.cholesky(z.T @ z / len(z))).T  # and this the spread
    sd = np.sqrt(np.diag(cov))
    unit = np.where(sd > 0.0, sd, 1.0)
    values, vectors = np.linalg.eigh(cov / np.outer(unit, unit))
    moved = z @ (vectors * np.sqrt(np.maximum(values, 0.0))).T * sd
    samples = np.where(sd > 0.0, within(p + moved), p)
    # the block is told from its own value: what is folded into it counts by how far it strayed
    strayed = (samples - p) @ rows.T
    at = np.append(p[FIRST:], p[BLOCK])
    return at + strayed
