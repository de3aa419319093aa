"""Rotational friction from off-bottom torque, with what the top drive itself eats."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from forensics.estimate import Estimate
from forensics.friction.assumptions import DRAG_SIGMA, HIDDEN_CENTRE, HIDDEN_SIGMA, WIDEST, Z90
from forensics.friction.result import Reading
from forensics.friction.spread import blocks
from forensics.friction.surface import OffBottom

Floats = NDArray[np.float64]

#: Loss inside the top drive and swivel: centre and one sigma [N.m] (trade values, from memory).
LOSS = (500.0, 1000.0)

#: One sigma of the rotational factor about the axial one: often a little more or less than it.
FACTOR_SIGMA = 0.08

#: Contact radius at which doglegs that no survey shows rub a drill string's tool joints [m].
LEVER = 0.084

#: Robust sigmas at which a reading is let go: with more torque than the rest, and with less.
LET_GO = (4.0, 6.0)

#: Fewer groups of stands than this prove nothing when one is left out.
LEAST_GROUPS = 4

UNSEPARATED = (
    "The loss inside the top drive could not be told from hole friction: torque readings span too "
    "little depth."
)


@dataclass(frozen=True)
class Rotational:
    """Rotational factor, the loss inside the top drive [N.m], and the residuals [N.m] of the readings.

    `held_out` is the error on stands left out and that of the fit to all, of the readings heard [N.m]; NaN
    where there are too few stands.
    """

    factor: Estimate
    loss: Estimate
    residuals: Floats
    sentences: tuple[str, ...]
    held_out: tuple[float, float]


def fit_rotational(readings: tuple[Reading, ...], model: OffBottom, centre: float) -> Rotational | None:
    """Fit torque = loss + factor * unit torque, robustly, with what the torque model may be off as two more.

    Parameters
    ----------
    readings : tuple of Reading
        Of kind "torque".
    model : OffBottom
    centre : float
        Where the weak prior of the factor lies: the axial factor [-].

    Returns
    -------
    Rotational or None
        None where there are no readings.
    """
    if not readings:
        return None
    depth = np.array([r.bit_depth for r in readings])
    value = np.array([r.value for r in readings])
    own = np.array([r.spread / np.sqrt(min(max(r.samples, 1), 10)) for r in readings])
    sigma = np.hypot(own, np.maximum(100.0, 0.01 * np.abs(value)))
    unit = np.asarray(model.torque(depth, 1.0), dtype=float)
    hidden = centre * LEVER * np.asarray(model.string_weight("rotating", depth, 0.0, 0.0), dtype=float)
    jacobian = np.column_stack([unit, np.ones_like(unit), centre * unit, hidden])
    prior = np.array([[centre, FACTOR_SIGMA], LOSS, [0.0, DRAG_SIGMA], [HIDDEN_CENTRE, HIDDEN_SIGMA]])
    p, weights, inflation = _solve(jacobian, value, sigma, prior)
    cov = _covariance(jacobian, (value - jacobian @ p) * weights, weights, sigma * inflation, (prior, depth))
    sd = np.sqrt(np.diag(cov))
    kept = int((weights > 0.1).sum())
    factor = _interval(p[0], sd[0], "off-bottom torque", bool(2.0 * Z90 * sd[0] <= WIDEST), kept)
    separate = bool(sd[1] < 0.5 * LOSS[1])
    loss = _interval(p[1], sd[1], "off-bottom torque" if separate else "assumed", separate, kept)
    sentences = () if separate else (UNSEPARATED,)
    residuals = value - jacobian @ p
    left_out = _hold_out((jacobian, value, sigma), prior, depth)
    heard = weights > 0.1
    proof = (rms(left_out[heard]), rms(residuals[heard]))
    return Rotational(factor, loss, residuals, sentences, proof)


def rms(values: Floats) -> float:
    """Root of the mean square; NaN of nothing."""
    return float(np.sqrt(np.mean(values**2))) if len(values) else float("nan")


def _hold_out(readings: tuple[Floats, Floats, Floats], prior: Floats, depth: Floats) -> Floats:
    """Residuals of each group of stands from a fit to the others [N.m], NaN where there are too few."""
    jacobian, value, sigma = readings
    label = blocks(depth)
    out = np.full(len(value), np.nan)
    if label.max() + 1 < LEAST_GROUPS:
        return out
    for k in range(int(label.max()) + 1):
        kept = label != k
        p, _, _ = _solve(jacobian[kept], value[kept], sigma[kept], prior)
        out[~kept] = value[~kept] - jacobian[~kept] @ p
    return out


def _solve(jacobian: Floats, value: Floats, sigma: Floats, prior: Floats) -> tuple[Floats, Floats, float]:
    """Iterate lopsided biweight least squares with the prior as rows of its own; loss is never negative."""
    p = prior[:, 0].copy()
    weights, inflation = np.ones(len(value)), 1.0
    for n in range(40):
        residuals = (value - jacobian @ p) / sigma
        if n < 15:  # the lower envelope first: solids and sticking only add torque
            weights = np.where(residuals > 0.0, 0.7, 1.3) / np.maximum(np.abs(residuals), 0.5)
            inflation = 1.0
        else:
            inflation = max(1.0, 1.4826 * float(np.median(np.abs(residuals))))
            u = residuals / inflation
            cut = np.where(u > 0.0, LET_GO[0], LET_GO[1])
            weights = np.where(np.abs(u) < cut, (1.0 - (u / cut) ** 2) ** 2, 0.0)
        a = jacobian / (sigma * inflation)[:, None] * prior[:, 1]
        normal = a.T @ (weights[:, None] * a) + np.eye(len(prior))
        right = a.T @ (weights * value / (sigma * inflation)) + prior[:, 0] / prior[:, 1]
        p = prior[:, 1] * np.linalg.solve(normal, right)
        if p[1] < 0.0:
            rest = np.array([0, 2, 3])
            p[1] = 0.0
            p[rest] = prior[rest, 1] * np.linalg.solve(normal[np.ix_(rest, rest)], right[rest])
    return p, weights, inflation


def _covariance(
    jacobian: Floats, weighted: Floats, weights: Floats, sigma: Floats, context: tuple[Floats, Floats]
) -> Floats:
    """Posterior covariance, widened where readings of one stand share their error."""
    prior, depth = context
    a = jacobian / sigma[:, None] * prior[:, 1]
    inverse = np.linalg.inv(a.T @ (weights[:, None] * a) + np.eye(len(prior)))
    label = blocks(depth)
    groups = int(label.max()) + 1
    widen = np.ones(len(prior))
    if groups >= 4:
        summed = np.zeros((groups, len(prior)))
        np.add.at(summed, label, a * (weighted / sigma)[:, None])
        sandwich = inverse @ (summed.T @ summed * groups / (groups - 1) + np.eye(len(prior))) @ inverse
        widen = np.maximum(1.0, np.sqrt(np.diag(sandwich) / np.diag(inverse)))
    return inverse * np.outer(widen * prior[:, 1], widen * prior[:, 1])


def _interval(value: float, sd: float, source: str, determined: bool, samples: int) -> Estimate:
    return Estimate(
        float(value), max(0.0, float(value - Z90 * sd)), float(value + Z90 * sd), source, determined, samples
    )
