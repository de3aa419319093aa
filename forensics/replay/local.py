"""How far each stand's own weight readings lie from the calibrated model, carried from stand to stand.

One friction factor for a hole kind fits no stand exactly. The rotating and slack-off weights read just
before the pipe went on bottom tell what the model misses there and then; the replay takes the weight
shift and the friction multiple from them, so that a bit load is the change from a known reading.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from forensics.friction.result import Calibration, Reading
from forensics.replay.model import factors
from forensics.replay.tabulated import Weights

Floats = NDArray[np.float64]

MAX_SHIFT = 0.04  # of the string's weight; more than this is a fault to be reported, not followed
FACTOR_RANGE = (0.6, 1.6)
TRIED = (0.6, 0.8, 1.0, 1.25, 1.6)
HELIX_TRUST = 0.5
LEAST_DRAG = 10e3  # N; below this the drag is too small to say anything about friction


SLIDING = ("slack_off", "pick_up")


@dataclass(frozen=True)
class Series:
    """Values read at moments, both of shape (k,) [s since 1970 UTC]."""

    at: Floats
    values: Floats


@dataclass(frozen=True)
class LocalMatch:
    """Weight shift [N] and friction multiples downwards and upwards, each of shape (n,)."""

    shift: Floats
    down: Floats
    up: Floats


def match_locally(time: Floats, calibration: Calibration, model: Weights) -> LocalMatch:
    """Interpolate what the readings say beyond the model to the log's rows.

    Parameters
    ----------
    time : ndarray, shape (n,)
        [s since 1970 UTC]
    calibration : Calibration
        With its readings.
    model : OffBottomModel
        The well as the kernels take it.
    """
    logged = [r for r in calibration.readings if not r.by_hand]
    weights = {kind: [r for r in logged if r.kind == kind] for kind in SLIDING}
    turning = [r for r in logged if r.kind == "rotating"]
    shifts = _shifts(turning, calibration, model)
    multiples = {kind: _multiples(weights[kind], shifts, kind, calibration, model) for kind in SLIDING}
    usual = {kind: float(np.median(m.values)) if len(m.values) else 1.0 for kind, m in multiples.items()}
    # what rubs going up rubs going down: either reading tells how friction stands at its moment
    both = Series(
        np.concatenate([multiples[kind].at for kind in SLIDING]),
        np.concatenate([multiples[kind].values / usual[kind] for kind in SLIDING]),
    )
    beyond = _carry(time, both, 1.0)
    down, up = (np.clip(beyond * usual[kind], *FACTOR_RANGE) for kind in SLIDING)
    return LocalMatch(_carry(time, shifts, 0.0), down, up)


def string_part(readings: list[Reading], calibration: Calibration, model: Weights) -> Floats:
    """Hookload of the readings with block, bias and pipe above the rotary taken off [N], shape (k,)."""
    block = np.array([r.block for r in readings])
    value = np.array([r.value for r in readings])
    depth = np.array([r.bit_depth for r in readings])
    above = model.above_rotary(block, depth) * calibration.pipe_above_rotary.value
    return value - calibration.block_weight.value - calibration.hookload_bias.value - above


def _shifts(readings: list[Reading], calibration: Calibration, model: Weights) -> Series:
    """Find the weight shifts of the rotating readings."""
    if not readings:
        return Series(np.empty(0), np.empty(0))
    depth = np.array([r.bit_depth for r in readings])
    weight = model.string_weight("rotating", depth, 0.0, 0.0, scale=calibration.weight_scale.value)
    shift = string_part(readings, calibration, model) - weight
    limit = MAX_SHIFT * np.abs(weight)
    return Series(np.array([r.end for r in readings]), np.clip(shift, -limit, limit))


def _multiples(
    readings: list[Reading], shifts: Series, kind: str, calibration: Calibration, model: Weights
) -> Series:
    """Find the friction multiple of each sliding reading whose drag is large enough to tell."""
    if not readings:
        return Series(np.empty(0), np.empty(0))
    base = np.array(factors(calibration))
    depth = np.array([r.bit_depth for r in readings])
    at = np.array([r.end for r in readings])
    scale = calibration.weight_scale.value
    still = model.string_weight("rotating", depth, 0.0, 0.0, scale=scale)
    drags = np.array([model.string_weight(kind, depth, *(base * m), scale=scale) - still for m in TRIED])
    found = string_part(readings, calibration, model) - _carry(at, shifts, 0.0) - still
    told = np.abs(drags[TRIED.index(1.0)]) > LEAST_DRAG
    multiple = np.array([_multiple(drags[:, k], found[k]) for k in np.flatnonzero(told)])
    buckled = np.array([r.buckled for r in readings])[told]
    # a helix's drag says less of friction: half way back to what the whole run says
    return Series(at[told], np.where(buckled, 1.0 + HELIX_TRUST * (multiple - 1.0), multiple))


def _multiple(drags: Floats, found: float) -> float:
    """Friction multiple at which the model gives the drag found, within those tried; drag grows with it."""
    whole = np.isfinite(drags)
    tried, size = np.array(TRIED)[whole], np.abs(drags[whole])
    return float(np.interp(found * np.sign(drags[0]), np.maximum.accumulate(size), tried))


def _carry(time: Floats, series: Series, default: float) -> Floats:
    """Carry readings along time: between two a straight line, before and after the nearest one."""
    if len(series.at) == 0:
        return np.full(len(time), default)
    order = np.argsort(series.at, kind="stable")
    return np.interp(time, series.at[order], series.values[order])
