"""What moves the string at each row: hookload, block, bottom and rotation made ready for the kernels."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numba import njit
from numpy.typing import NDArray
from scipy import ndimage

from forensics.friction.result import Calibration
from forensics.logs.table import TimeLog
from forensics.mechanics.kernels_replay import HOLD, SLIDE, TURN, Samples
from forensics.mechanics.offbottom import OffBottomModel
from forensics.replay.local import LocalMatch
from forensics.rig.view import Activity, RigView
from forensics.well.model import Well

Floats = NDArray[np.float64]

SMOOTH_SECONDS = 15.0  # moving median of the hookload; longer hides tags, shorter lets noise ratchet
SETTING_SECONDS = 10.0  # before slips are seen the hookload may be coming down for this long
SET_SHARE = 0.05  # of the hookload, at least, that slips have taken off it by then
EDGE_SECONDS = 3.0  # around slips the hookload is neither the block's nor the string's
BRIDGED_SECONDS = 15.0  # shorter gaps of hookload or bit depth are read across
STILL_ON_BOTTOM = 5.0  # m; further than a string stretches in a partial pick-up, the bit is off bottom
CLEAR_OF_BOTTOM = 1.0  # m; nearer than this, stretch may still hold the bit on bottom
LEAST_FLOW = 0.5  # of the usual flow: with less a motor hardly turns (from memory)
MIN_REVERSAL = 0.02  # m; a block that comes back by less has not reversed


@dataclass(frozen=True)
class Prepared:
    """Samples for the kernels, with the smoothed hookload and the block and pipe weight taken off it [N].

    `far` marks rows on which the bit is so far off bottom that nothing can rest on it.
    """

    samples: Samples
    hookload: Floats
    hanging: Floats
    far: NDArray[np.bool_]


def prepare(
    log: TimeLog, well: Well, rig: RigView, calibration: Calibration, model: OffBottomModel, local: LocalMatch
) -> Prepared:
    """Make the replay's samples from the log and the rig view, one a row."""
    mode = _mode(log, rig)
    hookload = _smooth(rig.hookload, mode != HOLD, log.interval)
    bit = np.maximum(_across(log.time, log.values["bit_depth"]), 1.0)
    above = model.above_rotary(rig.block, bit) * calibration.pipe_above_rotary.value
    hanging = calibration.block_weight.value + calibration.hookload_bias.value + above
    height = _calm(_across(log.time, rig.block) if np.isfinite(rig.block).any() else -bit)
    noise = rig.noise.get("block_position", 0.0)
    direction, travel = _reversals(height, mode == HOLD, max(MIN_REVERSAL, 6.0 * noise))
    gap = np.nan_to_num(rig.hole_depth, nan=np.inf) - bit
    # a string picked up in part has its bit on bottom still: whether it drills is for the memory to say
    near = rig.on_bottom | (gap < STILL_ON_BOTTOM)
    samples = Samples(
        bit=bit,
        top=hookload - hanging - local.shift,
        mode=mode,
        direction=direction,
        travel=travel,
        drilling=near & _bit_turns(log, rig),
        free=(gap > CLEAR_OF_BOTTOM) & ~rig.on_bottom,
        share=_share(log, height, model),
        down=local.down,
        up=local.up,
        scale=weight_scale(log, well, calibration),
        step=np.clip(np.diff(log.time, prepend=log.time[0]), 0.0, 4.0 * log.interval),
        witness=np.full(len(log), np.inf),
        ends=np.zeros((len(log), 3)),
    )
    return Prepared(samples, hookload, hanging, ~near)


def _bit_turns(log: TimeLog, rig: RigView) -> NDArray[np.bool_]:
    """Rows on which a motor turns the bit: enough flow; pumps on where only pressure tells; else all."""
    flow = log.get("flow_in")
    if flow is not None and rig.usual_flow > 0.0:
        return rig.pumping & (np.nan_to_num(flow, nan=np.inf) > LEAST_FLOW * rig.usual_flow)
    if log.get("standpipe_pressure") is not None:
        return rig.pumping
    return np.ones(len(log), dtype=bool)


def weight_scale(log: TimeLog, well: Well, calibration: Calibration) -> Floats:
    """Factor on all buoyed weights at each row: calibrated, and for mud other than the reference."""
    steel = 7850.0
    reference = well.fluid.typical
    density = np.asarray(well.fluid.outside_at(log.time, log.values["bit_depth"]), dtype=float)
    density = np.where(np.isfinite(density), density, reference)
    change = (1.0 - density / steel) / (1.0 - reference / steel)
    return calibration.weight_scale.value * np.broadcast_to(change, len(log)).astype(float)


def _mode(log: TimeLog, rig: RigView) -> NDArray[np.int8]:
    """HOLD in slips, at their edges and in gaps too long to bridge; TURN where the string turns."""
    held = rig.slips | (rig.activity == Activity.CONNECTION)
    edge = max(1, round(EDGE_SECONDS / log.interval))
    held = ndimage.binary_dilation(held, iterations=edge)
    held |= _being_set(rig, held, max(1, round(SETTING_SECONDS / log.interval)))
    missing = ~np.isfinite(rig.hookload) | ~np.isfinite(log.values["bit_depth"])
    bridged = np.ones(max(3, round(BRIDGED_SECONDS / log.interval)) + 1, dtype=bool)
    held |= ndimage.binary_opening(missing, structure=bridged)
    return np.where(held, HOLD, np.where(rig.turning, TURN, SLIDE)).astype(np.int8)


def _being_set(rig: RigView, held: NDArray[np.bool_], most: int) -> NDArray[np.bool_]:
    """Mark up to `most` rows before slips on which the hookload has come down with the block still.

    A slow indicator, or a spike at the wrong moment, hides for a few seconds that the slips have the string:
    what they take off the hook would press it.
    """
    setting = np.zeros(len(held), dtype=bool)
    noise = rig.noise.get("hookload", 0.0)
    for start in (np.flatnonzero(held[1:] & ~held[:-1]) + 1).tolist():
        before = rig.hookload[max(start - 3 * most, 0) : max(start - most, 1)]
        if not np.isfinite(before).any():
            continue
        level = float(np.nanmedian(before))
        for row in range(start - 1, max(start - 1 - most, -1), -1):
            if rig.direction[row] != 0 or not rig.hookload[row] < level - max(6.0 * noise, SET_SHARE * level):
                break
            setting[row] = True
    return setting


def _smooth(values: Floats, good: NDArray[np.bool_], interval: float) -> Floats:
    """Take the moving median over the good samples, gaps filled from the nearest."""
    filled = np.where(good, values, np.nan)
    rows = np.flatnonzero(np.isfinite(filled))
    if len(rows) == 0:
        return np.zeros_like(values)
    filled = filled[_nearest(rows, len(values))]
    width = max(3, round(SMOOTH_SECONDS / interval))
    if width > 3 or interval <= SMOOTH_SECONDS / 3:
        filled = ndimage.median_filter(filled, size=width | 1, mode="nearest")
    return filled


def _nearest(rows: NDArray[np.int64], count: int) -> NDArray[np.int64]:
    """Row of the nearest good sample for every sample."""
    at = np.arange(count)
    right = np.clip(np.searchsorted(rows, at), 0, len(rows) - 1)
    left = np.maximum(right - 1, 0)
    closer = np.abs(rows[right] - at) <= np.abs(rows[left] - at)
    return np.where(closer, rows[right], rows[left])


def _across(time: Floats, values: Floats) -> Floats:
    """Read gaps across in a straight line, the ends level."""
    good = np.isfinite(values)
    return values.astype(float) if good.all() else np.interp(time, time[good], values[good])


def _calm(height: Floats) -> Floats:
    """Take lone readings out of a height: one would look like a rush up and down, with all its drag."""
    calm: Floats = ndimage.median_filter(height, size=3, mode="nearest")
    return calm


def _share(log: TimeLog, height: Floats, model: OffBottomModel) -> Floats:
    """Axial share of friction while turning, |v| / sqrt(v² + (ωR)²), signed + going down."""
    rpm = log.get("rpm")
    if rpm is None:
        return np.zeros(len(log))
    window = max(3, round(15.0 / log.interval))
    speed = -ndimage.uniform_filter1d(np.gradient(height, log.time), window)
    radius = float(np.median(model.pipe.radius))
    # a lost reading is no standstill: read as one, it would give the drag all of the friction
    rim = np.maximum(_across(log.time, rpm), 5.0) * 2.0 * np.pi / 60.0 * radius
    return speed / np.hypot(speed, rim)


@njit(cache=True)
def _reversals(
    height: Floats, held: NDArray[np.bool_], threshold: float
) -> tuple[NDArray[np.int8], Floats]:
    """Direction of the block (+1 down) kept until it comes back by `threshold`, and travel since [m]."""
    count = len(height)
    direction = np.zeros(count, dtype=np.int8)
    travel = np.zeros(count)
    way = 0
    start = turn = height[0]
    for t in range(count):
        here = height[t]
        if held[t]:
            way = 0
            start = turn = here
            continue
        if way == 0:
            if abs(here - start) > threshold:
                way = 1 if here < start else -1
                turn = here
        elif way == 1:
            if here < turn:
                turn = here
            elif here - turn > threshold:
                way, start, turn = -1, turn, here
        elif here > turn:
            turn = here
        elif turn - here > threshold:
            way, start, turn = 1, turn, here
        direction[t] = way
        travel[t] = abs(turn - start)
    return direction, travel
