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
from forensics.replay.model import LoadModel, factors

Floats = NDArray[np.float64]

MAX_SHIFT = 0.04  # of the string's weight; more than this is a fault to be reported, not followed
FACTOR_RANGE = (0.6, 1.6)
LEAST_DRAG = 10e3  # N; below this the drag is too small to say anything about friction


@dataclass(frozen=True)
class LocalMatch:
    """Weight shift [N] and friction multiples downwards and upwards, each of shape (n,)."""

    shift: Floats
    down: Floats
    up: Floats


def match_locally(time: Floats, calibration: Calibration, model: LoadModel) -> LocalMatch:
    """Interpolate what the readings say beyond the model to the log's rows.

    Parameters
    ----------
    time : ndarray, shape (n,)
        [s since 1970 UTC]
    calibration : Calibration
        With its readings.
    model : LoadModel
        The well as the kernels take it.
    """
    weights = [r for r in calibration.readings if r.kind in ("rotating", "slack_off", "pick_up")]
    turning = [r for r in weights if r.kind == "rotating"]
    shift_at, shifts = _shifts(turning, calibration, model)
    shift = _carry(time, shift_at, shifts, 0.0)
    result = {}
    for kind in ("slack_off", "pick_up"):
        chosen = [r for r in weights if r.kind == kind]
        at = np.array([r.end for r in chosen])
        beyond = np.array([_carry(np.array([r.end]), shift_at, shifts, 0.0)[0] for r in chosen])
        multiples = _multiples(chosen, beyond, kind, calibration, model)
        result[kind] = _carry(time, at[np.isfinite(multiples)], multiples[np.isfinite(multiples)], 1.0)
    return LocalMatch(shift, result["slack_off"], result["pick_up"])


def string_part(readings: list[Reading], calibration: Calibration, model: LoadModel) -> Floats:
    """Hookload of the readings with block, bias and pipe above the rotary taken off [N], shape (k,)."""
    block = np.array([r.block for r in readings])
    value = np.array([r.value for r in readings])
    above = model.offbottom.above_rotary(block) * calibration.pipe_above_rotary.value
    return value - calibration.block_weight.value - calibration.hookload_bias.value - above


def _shifts(
    readings: list[Reading], calibration: Calibration, model: LoadModel
) -> tuple[Floats, Floats]:
    """Find times and weight shifts of the rotating readings."""
    if not readings:
        return np.empty(0), np.empty(0)
    depth = np.array([r.bit_depth for r in readings])
    weight = model.offbottom.string_weight("rotating", depth, 0.0, 0.0, calibration.weight_scale.value)
    shift = string_part(readings, calibration, model) - weight
    limit = MAX_SHIFT * np.abs(weight)
    return np.array([r.end for r in readings]), np.clip(shift, -limit, limit)


def _multiples(
    readings: list[Reading], shift: Floats, kind: str, calibration: Calibration, model: LoadModel
) -> Floats:
    """Friction multiple of each sliding reading, NaN where the drag is too small to tell."""
    if not readings:
        return np.empty(0)
    cased, open_hole = factors(calibration)
    depth = np.array([r.bit_depth for r in readings])
    scale = calibration.weight_scale.value
    still = model.offbottom.string_weight("rotating", depth, 0.0, 0.0, scale)
    moving = model.offbottom.string_weight(kind, depth, cased, open_hole, scale)
    found = string_part(readings, calibration, model) - shift - still
    expected = moving - still
    told = np.abs(expected) > LEAST_DRAG
    multiple = np.divide(found, expected, out=np.full(len(found), np.nan), where=told)
    return np.clip(multiple, *FACTOR_RANGE)


def _carry(time: Floats, at: Floats, values: Floats, default: float) -> Floats:
    """Carry readings along time, lightly smoothed by a running median of three."""
    if len(at) == 0:
        return np.full(len(time), default)
    order = np.argsort(at, kind="stable")
    at, values = at[order], values[order]
    if len(values) >= 5:
        padded = np.concatenate([values[:1], values, values[-1:]])
        values = np.median(np.stack([padded[:-2], padded[1:-1], padded[2:]]), axis=0)
    return np.interp(time, at, values)
