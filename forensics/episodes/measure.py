"""The numbers of an episode, each with its interval over the draws."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from forensics.episodes.catalogue import Kind
from forensics.episodes.chances import Z90, drag_draws, rotational_spread
from forensics.episodes.material import Material
from forensics.episodes.spans import Span
from forensics.estimate import Estimate

Floats = NDArray[np.float64]

NOTHING = Estimate(float("nan"), float("nan"), float("nan"), "not applicable", determined=False)

#: Draws from which the ends of an interval are counted off; fewer don't show the twentieth part.
ENOUGH = 40

#: Pipe buckles by elements of ten metres: an end is told no better than to half of one [m].
HALF_ELEMENT = 5.0


@dataclass(frozen=True)
class Lost:
    """Bit load at an episode's peak, weight lost above it, and the part beyond ordinary sliding drag [N]."""

    bit_load: Estimate
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
    return about(value, _peaks(material, span, "peak_ratio"), "replay")


def peak_compression(material: Material, span: Span, peak: int) -> Estimate:
    """Compression where the load ratio peaks [N], with its interval over the draws."""
    value = float(material.loads.peak_compression[peak])
    return about(value, _peaks(material, span, "compression"), "replay")


def _peaks(material: Material, span: Span, name: str) -> Floats:
    """Values of each draw where its load ratio peaks, less what thinning takes off a peak, shape (k,)."""
    draws = material.draws
    if draws is None:
        return np.zeros(0)
    columns, _ = draws.window(span.first, span.last)
    if len(columns) == 0:
        return np.zeros(0)
    told = draws.told(columns)
    ratio = np.nan_to_num(draws.peak_ratio[np.ix_(told, columns)])
    if not len(ratio):
        return np.zeros(0)
    at = columns[ratio.argmax(axis=1)]
    found = getattr(draws, name)[np.flatnonzero(told), at].astype(float)
    # the row of the peak itself may lie between the rows that were taken
    loads = material.loads
    whole = loads.peak_ratio[span.rows]
    taken = draws.taken[columns]
    best = taken[np.nan_to_num(loads.peak_ratio[taken]).argmax()]
    values = {"peak_ratio": loads.peak_ratio, "compression": loads.peak_compression}[name]
    missed = values[span.first + int(np.nan_to_num(whole).argmax())] - values[best]
    return found + (float(missed) if np.isfinite(missed) else 0.0)


def depths_of(material: Material, span: Span) -> tuple[Estimate, Estimate]:
    """Find the ends of the buckled interval at its largest, over the draws [m].

    Parameters
    ----------
    material : Material
    span : Span

    Returns
    -------
    top, bottom : Estimate
        Not a number where nothing buckled.
    """
    loads, draws = material.loads, material.draws
    length = loads.bottom[span.rows] - loads.top[span.rows]
    if not np.isfinite(length).any():
        return NOTHING, NOTHING
    at = span.first + int(np.nanargmax(length))
    values = float(loads.top[at]), float(loads.bottom[at])
    ends = (np.zeros(0), np.zeros(0))
    columns = np.zeros(0, dtype=np.int64) if draws is None else draws.window(span.first, span.last)[0]
    if draws is not None and len(columns):
        rows = np.flatnonzero(draws.told(columns))
        top, bottom = draws.top[np.ix_(rows, columns)], draws.bottom[np.ix_(rows, columns)]
        # a draw that buckles nowhere says nothing of where
        widest = np.nan_to_num(bottom - top, nan=-1.0).argmax(axis=1)
        pick = np.arange(len(rows)), widest
        ends = (top[pick].astype(float), bottom[pick].astype(float))
    top, bottom = (around(value, end, "replay") for value, end in zip(values, ends, strict=True))
    return _widened(top, HALF_ELEMENT), _widened(bottom, HALF_ELEMENT)


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
        [N]; weights not a number where the surface weight has no reference or the bit is off bottom.
    """
    loads = material.loads
    bit = float(loads.bit_load[peak])
    drawn, multiple = _bit_loads(material, peak)
    rms = material.calibration.residual_rms
    noise = Z90 * float(np.hypot(material.noise("hookload"), rms if np.isfinite(rms) else 0.0))
    load = _widened(around(bit, drawn, "replay"), noise, least=0.0)
    value = float(material.rig.wob_surface[peak] - bit)
    if not np.isfinite(value):
        return Lost(load, NOTHING, NOTHING)
    straight = float(loads.straight_drag[peak])
    beyond = max(value - straight, 0.0) if np.isfinite(straight) else float("nan")
    lost = float(material.rig.wob_surface[peak]) - drawn
    helical = np.maximum(lost - straight * multiple, 0.0)
    weight = around(value, lost, "re-zeroed surface weight") if len(lost) else Estimate(
        value, value, value, "re-zeroed surface weight"
    )  # fmt: skip
    return Lost(
        load, _widened(weight, noise), _widened(around(beyond, helical, "replay"), noise, least=0.0)
    )


def _bit_loads(material: Material, row: int) -> tuple[Floats, Floats]:
    """Bit load of each draw at a row [N], and its multiple of ordinary drag, shape (k,); empty without draws.

    Between rows that were taken the bit load moves on as the calibrated one does.
    """
    draws = material.draws
    if draws is None or not draws.covered[row]:
        return np.zeros(0), np.zeros(0)
    column = draws.columns(np.array([row]))
    told = draws.told(column)
    load = material.loads.bit_load
    moved = float(load[row] - load[draws.taken[column[0]]])
    found = draws.bit_load[told, column[0]].astype(float) + (moved if np.isfinite(moved) else 0.0)
    return found, draws.multiple[told, column[0]].astype(float)


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


def around(value: float, samples: Floats, source: str) -> Estimate:
    """Estimate with the 90 % interval of samples, widened to hold the value.

    With a handful of draws the ends are read off a normal curve of the samples' own spread: a dozen draws
    don't show the twentieth part.
    """
    samples = samples[np.isfinite(samples)]
    if len(samples) == 0 or not np.isfinite(value):
        return Estimate(value, float("nan"), float("nan"), source, determined=bool(np.isfinite(value)))
    if len(samples) < ENOUGH:
        mean, half = float(np.mean(samples)), Z90 * float(np.std(samples))
        low, high = mean - half, mean + half
    else:
        low, high = np.quantile(samples, [0.05, 0.95]).tolist()
    return Estimate(value, min(low, value), max(high, value), source, samples=len(samples))


def about(value: float, samples: Floats, source: str) -> Estimate:
    """Do as `around` in logarithms, about the value as well: for a load over a threshold near nothing.

    The likely path is smoother than any that is drawn, and its thresholds are lower: the truth may be either.
    """
    samples = samples[np.isfinite(samples) & (samples > 0.0)]
    if len(samples) == 0 or not value > 0.0:
        return around(value, samples, source)
    level = np.log(samples)
    own = float(np.log(value))
    drawn, moved = around(own, level, source), around(own, level + own - level.mean(), source)
    low, high = np.exp([min(drawn.low, moved.low), max(drawn.high, moved.high)]).tolist()
    return Estimate(value, low, high, source, samples=len(samples))


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
        drawn = drag_draws(material, np.array([peak]))
        spread = float(np.std(drawn)) if drawn.size else 0.0
        half = np.hypot(material.noise("hookload"), spread if np.isfinite(spread) else 0.0)
    elif kind is Kind.TORQUE:
        value = float(material.loads.torque_residual[peak])
        half = np.hypot(
            material.noise("torque"), rotational_spread(material) * abs(material.model_torque[peak])
        )
    else:
        return None
    return Estimate(value, value - Z90 * float(half), value + Z90 * float(half), "measured less modelled")


def _widened(estimate: Estimate, by: float, least: float = -np.inf) -> Estimate:
    """Add an independent half-width to an estimate's interval."""
    low = estimate.value - float(np.hypot(estimate.value - estimate.low, by))
    high = estimate.value + float(np.hypot(estimate.high - estimate.value, by))
    return Estimate(
        estimate.value, max(low, least), high, estimate.source, estimate.determined, estimate.samples
    )
