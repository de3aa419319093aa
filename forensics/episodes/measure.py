"""The numbers of an episode, each with its interval over the draws."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from forensics.episodes.catalogue import Kind
from forensics.episodes.material import Material
from forensics.episodes.rules import LockupSigns, locked_up
from forensics.episodes.spans import Span
from forensics.estimate import Estimate

Floats = NDArray[np.float64]

Z90 = 1.6448536269514722

NOTHING = Estimate(float("nan"), float("nan"), float("nan"), "not applicable", determined=False)

#: Share of a lockup's flagged rows that a draw must keep for the rule to hold in it.
MOST = 0.5

#: A chance is never told as more certain than this: the draws are few and the model is one.
CERTAIN = 0.99


@dataclass(frozen=True)
class Lost:
    """Weight lost between surface and bit, and the part of it beyond ordinary sliding drag [N]."""

    weight: Estimate
    to_buckling: Estimate


def peak_ratio(material: Material, span: Span, peak: int) -> Estimate:
    """Peak load ratio with its interval over the draws.

    Parameters
    ----------
    material : Material
    span : Span
    peak : int
        Row of the peak.

    Returns
    -------
    Estimate
        [-]
    """
    value = float(material.loads.peak_ratio[peak])
    draws = material.draws
    if draws is None or not draws.rows[span.rows].any():
        return Estimate(value, float("nan"), float("nan"), "replay", determined=np.isfinite(value))
    rows = np.arange(span.first, span.last + 1)[draws.rows[span.rows]]
    with np.errstate(invalid="ignore"):
        peaks = np.fmax.reduce(draws.peak_ratio[:, rows], axis=1).astype(float)
    return around(value, peaks, draws.weights, "replay")


def peak_compression(material: Material, peak: int, ratio: Estimate) -> Estimate:
    """Compression at the peak [N]; its interval is the ratio's, the threshold being known better."""
    value = float(material.loads.peak_compression[peak])
    if not (np.isfinite(ratio.low) and ratio.value > 0.0):
        return Estimate(value, float("nan"), float("nan"), "replay", determined=np.isfinite(value))
    return Estimate(
        value,
        value * ratio.low / ratio.value,
        value * ratio.high / ratio.value,
        "replay",
        samples=ratio.samples,
    )


def lost_weight(material: Material, peak: int) -> Lost:
    """Weight lost at a row: re-zeroed surface weight less the reconstructed bit load.

    Parameters
    ----------
    material : Material
    peak : int
        Row of the peak load ratio.

    Returns
    -------
    Lost
        [N]; not a number where the surface weight has no reference or the bit is off bottom.
    """
    loads, draws = material.loads, material.draws
    value = float(material.rig.wob_surface[peak] - loads.bit_load[peak])
    if not np.isfinite(value):
        return Lost(NOTHING, NOTHING)
    straight = float(loads.straight_drag[peak])
    beyond = max(value - straight, 0.0) if np.isfinite(straight) else float("nan")
    rms = material.calibration.residual_rms
    noise = Z90 * float(np.hypot(material.noise("hookload"), rms if np.isfinite(rms) else 0.0))
    if draws is None or not draws.rows[peak] or not np.isfinite(draws.bit_load[:, peak]).any():
        low, high = value - noise, value + noise
        return Lost(
            Estimate(value, low, high, "re-zeroed surface weight"),
            Estimate(beyond, float("nan"), float("nan"), "replay", determined=bool(np.isfinite(beyond))),
        )
    lost = material.rig.wob_surface[peak] - draws.bit_load[:, peak].astype(float)
    multiple = material.friction_multiple(np.array([peak]), draws.cased, draws.open)[:, 0]
    helical = np.maximum(lost - straight * multiple, 0.0)
    return Lost(
        _widened(around(value, lost, draws.weights, "re-zeroed surface weight"), noise),
        _widened(around(beyond, helical, draws.weights, "replay"), noise, least=0.0),
    )


def helical_span(material: Material, span: Span) -> tuple[float, float]:
    """Depths of the helical places at their largest extent within a span [m]; NaN where there are none.

    Parameters
    ----------
    material : Material
    span : Span

    Returns
    -------
    top, bottom : float
    """
    top, bottom = material.loads.helical_top[span.rows], material.loads.helical_bottom[span.rows]
    if not np.isfinite(bottom - top).any():
        return float("nan"), float("nan")
    at = int(np.nanargmax(bottom - top))
    return float(top[at]), float(bottom[at])


def around(value: float, samples: Floats, weights: Floats, source: str) -> Estimate:
    """Estimate with the 90 % interval of weighted samples, widened to hold the value.

    With a handful of draws the ends are read off a normal curve of the samples' own spread where that is
    wider than the samples: seven draws don't show the twentieth part.
    """
    known = np.isfinite(samples)
    if not known.any() or not np.isfinite(value):
        return Estimate(value, float("nan"), float("nan"), source, determined=bool(np.isfinite(value)))
    samples, weights = samples[known], weights[known] / weights[known].sum()
    mean = float(weights @ samples)
    spread = float(np.sqrt(weights @ (samples - mean) ** 2))
    if len(samples) < 40:
        low, high = mean - Z90 * spread, mean + Z90 * spread
    else:
        order = np.argsort(samples)
        low, high = np.interp([0.05, 0.95], np.cumsum(weights[order]), samples[order]).tolist()
    return Estimate(value, min(low, value), max(high, value), source, samples=len(samples))


def buckling_chance(material: Material, span: Span, least: float, state: int = 1) -> float:
    """Chance that the string reaches `state` for at least `least` seconds within the span."""
    draws = material.draws
    if draws is None or not draws.rows[span.rows].any():
        return float("nan")
    rows = np.arange(span.first, span.last + 1)[draws.rows[span.rows]]
    time = (draws.state[:, rows] >= state).sum(axis=1) * material.log.interval
    held = time >= min(least, len(rows) * material.log.interval)
    return _chance(held, draws.weights)


def lockup_chance(material: Material, span: Span, flags: NDArray[np.bool_], signs: LockupSigns) -> float:
    """Chance that the lockup rule holds on most of the rows flagged in the span."""
    draws = material.draws
    rows = np.flatnonzero(flags[span.rows]) + span.first
    if draws is None or not draws.rows[rows].all():
        return float("nan")
    held = [
        float(np.mean(locked_up(material, signs, load.astype(float))[rows])) >= MOST
        for load in draws.bit_load
    ]
    return _chance(np.array(held), draws.weights)


def drag_chance(material: Material, span: Span, least: float) -> float:
    """Chance that the drag stays beyond its threshold for `least` seconds, over friction and block weight.

    Parameters
    ----------
    material : Material
    span : Span
    least : float
        [s]

    Returns
    -------
    float
    """
    draws = material.calibration.draws
    rows = np.arange(span.first, span.last + 1)
    rows = rows[np.isfinite(material.drag[rows])]
    if len(draws) == 0 or len(rows) == 0:
        return float("nan")
    sign = material.friction_sign[rows]
    residual = drag_draws(material, rows)
    drag = np.where(sign == 0, np.abs(residual), residual * sign)
    time = (drag > material.drag_threshold[rows]).sum(axis=1) * material.log.interval
    return _chance(time >= least * (1.0 - 1e-9), np.full(len(draws), 1.0 / len(draws)))


def drag_draws(material: Material, rows: NDArray[np.int64]) -> Floats:
    """Hookload residuals at the calibration's draws, shape (k, m) [N].

    Parameters
    ----------
    material : Material
    rows : ndarray of int, shape (m,)

    Returns
    -------
    ndarray, shape (k, m)
    """
    draws = material.calibration.draws
    base = material.calibration.block_weight.value
    moved = material.loads.model_hookload[rows] - base - material.rotating_weight[rows]
    extra = material.friction_multiple(rows, draws[:, 0], draws[:, 1]) - 1.0
    shift = extra * moved + (draws[:, 2] - base)[:, None]
    return material.loads.drag_residual[rows] - shift


def peak_residual(material: Material, kind: Kind, peak: int) -> Estimate | None:
    """Residual at the peak of a drag or torque episode, with noise and calibration in its interval.

    Parameters
    ----------
    material : Material
    kind : Kind
    peak : int
        Row of the peak.

    Returns
    -------
    Estimate or None
        [N or N.m]; None for other kinds.
    """
    if kind is Kind.DRAG:
        value = float(material.loads.drag_residual[peak])
        spread = (
            float(np.std(drag_draws(material, np.array([peak])))) if len(material.calibration.draws) else 0.0
        )
        half = np.hypot(material.noise("hookload"), spread if np.isfinite(spread) else 0.0)
    elif kind is Kind.TORQUE:
        value = float(material.loads.torque_residual[peak])
        half = np.hypot(
            material.noise("torque"), rotational_spread(material) * abs(material.model_torque[peak])
        )
    else:
        return None
    return Estimate(value, value - Z90 * float(half), value + Z90 * float(half), "measured less modelled")


def rotational_spread(material: Material) -> float:
    """One sigma of the rotational factor over its value; zero where there is none."""
    factor = material.calibration.rotational
    if factor is None or factor.value <= 0.0:
        return 0.0
    return (factor.high - factor.low) / (2.0 * Z90 * factor.value)


def torque_chance(material: Material, span: Span, least: float) -> float:
    """Chance that the torque stays beyond its threshold, over the rotational factor's interval."""
    factor = material.calibration.rotational
    rows = np.arange(span.first, span.last + 1)
    rows = rows[np.isfinite(material.loads.torque_residual[rows])]
    if factor is None or factor.value <= 0.0 or len(rows) == 0:
        return float("nan")
    sigma = rotational_spread(material)
    quantiles = np.array([-1.645, -1.036, -0.674, -0.385, -0.126, 0.126, 0.385, 0.674, 1.036, 1.645])
    shift = np.outer(sigma * quantiles, material.model_torque[rows])
    residual = material.loads.torque_residual[rows] - shift
    time = (residual > material.torque_threshold[rows]).sum(axis=1) * material.log.interval
    return _chance(time >= least * (1.0 - 1e-9), np.full(len(quantiles), 1.0 / len(quantiles)))


def _chance(held: NDArray[np.bool_], weights: Floats) -> float:
    share = float(np.sum(weights[np.asarray(held, dtype=bool)]) / np.sum(weights))
    return float(np.clip(share, 1.0 - CERTAIN, CERTAIN))


def _widened(estimate: Estimate, by: float, least: float = -np.inf) -> Estimate:
    """Add an independent half-width to an estimate's interval."""
    low = estimate.value - float(np.hypot(estimate.value - estimate.low, by))
    high = estimate.value + float(np.hypot(estimate.high - estimate.value, by))
    return Estimate(
        estimate.value, max(low, least), high, estimate.source, estimate.determined, estimate.samples
    )
