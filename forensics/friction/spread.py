"""How sure a calibration is: joint covariance and draws."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from forensics.friction.assumptions import HIGHEST, LOWEST
from forensics.friction.robust import Fit, Problem

Floats = NDArray[np.float64]

#: A soft string on a surveyed path is trusted to this part of its drag, one sigma: what all readings
#: share, and pick-up against slack-off. Survey scatter, friction that varies along the hole and
#: stiffness left out do not show in the residuals.
MODEL_ERROR = 0.03
MODEL_SPLIT = 0.015

#: The second averages out over a run that was weighed over more than this in bit depth [m]. One weighed only
#: deep in a lateral parts cased and open hole by nothing but how pulling differs from lowering.
SPLIT_OVER = 450.0

#: Doglegs too short for the survey press the string against the wall by its tension: drag of this part of
#: the string's weight, one sigma. Little beside a lateral's drag, a good part of a vertical well's.
MODEL_TORTUOSITY = 0.003

#: Readings nearer than this in bit depth are not independent [m] (one stand).
STAND = 30.0

#: Blocks wanted at most: correlation along the hole reaches further where the run is long.
BLOCKS = 12

DRAWS = 64


def covariance(problem: Problem, fit: Fit, bit_depth: Floats, free: NDArray[np.bool_]) -> Floats:
    """Posterior covariance of the parameters.

    The Gauss-Newton posterior with sigma inflated to the residuals, each parameter widened where the
    scores summed by stand (readings of one stand share their error) say that is too narrow. For more
    than a few stands this is what resampling whole stands gives, without the resampling.

    Parameters
    ----------
    problem : Problem
    fit : Fit
    bit_depth : ndarray, shape (n,)
        Of the readings [m].
    free : ndarray of bool, shape (6,)
        Parameters that are uncertain at all.

    Returns
    -------
    ndarray, shape (6, 6)
        In SI units; zero rows where not free.

    References
    ----------
    White, H. (1980). Econometrica 48(4) (the sandwich form; summed by cluster).
    """
    unit = problem.prior.sigma
    sigma = problem.sigma * fit.inflation
    a = fit.jacobian * unit / sigma[:, None]
    a = a[:, free]
    inverse = np.linalg.inv(a.T @ (fit.weights[:, None] * a) + np.eye(a.shape[1]))
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
    moved = inverse @ a.T @ (fit.weights[:, None] * _model_errors(problem, fit, bit_depth) / sigma[:, None])
    full = np.zeros_like(np.outer(unit, unit))
    full[np.ix_(free, free)] = small + moved @ moved.T
    return full * np.outer(unit, unit)


def _model_errors(problem: Problem, fit: Fit, bit_depth: Floats) -> Floats:
    """Errors of the modelled readings [N] that scatter can't show, shape (n, 2), one sigma each."""
    hanging = problem.surface.at(0.0, 0.0)[0]
    drag = fit.p[2] * (problem.surface.at(fit.p[3], fit.p[4])[0] - hanging)
    pulled = problem.sign != 0.0
    total = float(np.abs(drag[pulled]).sum())
    short = MODEL_TORTUOSITY * float(np.abs(hanging[pulled]).sum()) / total if total > 0.0 else 0.0
    reach = float(np.ptp(bit_depth[pulled])) if pulled.any() else 0.0
    split = MODEL_SPLIT / (1.0 + reach / SPLIT_OVER) ** 0.5
    return np.column_stack([np.hypot(MODEL_ERROR, short) * drag, split * np.abs(drag)])


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


def draw(p: Floats, cov: Floats, levers: tuple[float, float]) -> Floats:
    """Joint draws of (cased factor, open factor, block weight).

    Share and scale are folded into the block weight at the readings' usual depth: their errors and
    the block's cancel there, and a draw of the block alone would undo that.

    Parameters
    ----------
    p : ndarray, shape (6,)
    cov : ndarray, shape (6, 6)
    levers : tuple of float
        Usual weight above the rotary and usual string weight [N].

    Returns
    -------
    ndarray, shape (64, 3)
        [-, -, N]; the same for the same input.
    """
    rng = np.random.default_rng(20240229)
    z = rng.standard_normal((DRAWS // 2, len(p)))
    z = np.vstack([z, -z])  # mirrored pairs keep the mean exact
    z = z @ np.linalg.inv(np.linalg.cholesky(z.T @ z / len(z))).T  # and this the spread
    sd = np.sqrt(np.diag(cov))
    unit = np.where(sd > 0.0, sd, 1.0)
    values, vectors = np.linalg.eigh(cov / np.outer(unit, unit))
    samples = p + z @ (vectors * np.sqrt(np.maximum(values, 0.0))).T * sd
    samples = np.clip(samples, LOWEST, HIGHEST)
    block = samples[:, 0] + (samples[:, 1] - p[1]) * levers[0] + (samples[:, 2] - p[2]) * levers[1]
    return np.column_stack([samples[:, 3], samples[:, 4], block])
