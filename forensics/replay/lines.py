"""Model lines of hookload and torque against depth, and what was measured beyond them."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from forensics.friction.result import Calibration
from forensics.loads import Fan
from forensics.logs.table import TimeLog
from forensics.mechanics.kernels_replay import SLIDE, Found
from forensics.mechanics.offbottom import OffBottomModel
from forensics.replay.model import factors
from forensics.replay.samples import Prepared
from forensics.rig.view import Activity, RigView

Floats = NDArray[np.float64]

FAN_POINTS = 160

#: With less than this part of the slack-off weight on the hook, the string may as well hang in slips.
HANGING = 0.3


def fan(calibration: Calibration, model: OffBottomModel, depths: tuple[float, float]) -> Fan:
    """Hookload against bit depth for pick-up, rotating and slack-off, with the band of the friction draws.

    Block weight and bias are in; pipe above the rotary is not.
    """
    depth = np.linspace(max(depths[0], 1.0), max(depths[1], depths[0] + 1.0, 2.0), FAN_POINTS)
    lines = {kind: _line(kind, depth, calibration, model) for kind in ("pick_up", "rotating", "slack_off")}
    bands = {kind: _band(kind, depth, calibration, model) for kind in ("pick_up", "slack_off")}
    return Fan(
        depth, lines["pick_up"], lines["rotating"], lines["slack_off"],
        np.minimum(bands["pick_up"][0], lines["pick_up"]), np.maximum(bands["pick_up"][1], lines["pick_up"]),
        np.minimum(bands["slack_off"][0], lines["slack_off"]),
        np.maximum(bands["slack_off"][1], lines["slack_off"]),
    )


def _line(kind: str, depth: Floats, calibration: Calibration, model: OffBottomModel) -> Floats:
    base = calibration.block_weight.value + calibration.hookload_bias.value
    scale = calibration.weight_scale.value
    return base + model.string_weight(kind, depth, *factors(calibration), scale=scale)


def _band(kind: str, depth: Floats, calibration: Calibration, model: OffBottomModel) -> tuple[Floats, Floats]:
    """Fifth and ninety-fifth percentile of the line over the calibration's draws."""
    draws = calibration.draws[:32]
    if len(draws) == 0:
        line = _line(kind, depth, calibration, model)
        return line, line
    bias = calibration.hookload_bias.value
    weights = model.string_weights(kind, depth, *draws[:, :-1].T)
    lines = draws[:, -1:] + bias + calibration.weight_scale.value * weights
    # where some draws lock up there is no band to show
    whole = np.isfinite(lines).all(axis=0)
    low, high = np.percentile(np.where(whole, lines, 0.0), [5.0, 95.0], axis=0)
    return np.where(whole, low, np.nan), np.where(whole, high, np.nan)


def drag_lines(
    prepared: Prepared,
    rig: RigView,
    calibration: Calibration,
    model: OffBottomModel,
    found: Found,
) -> tuple[Floats, Floats]:
    """Give the hookload expected off bottom and measured less expected [N]; NaN where no line applies.

    Parameters
    ----------
    prepared : Prepared
        Samples and smoothed hookload.
    rig, calibration, model
        The run and its calibration.
    found : Found
        What the string did at each row, and where it was helical.

    Notes
    -----
    While the block stands still any hookload between slack-off and pick-up weight is in equilibrium, and no
    line applies. One beyond either is not: the string is held, and the line it is beyond applies.
    """
    samples = prepared.samples
    moving, helical = found.full, found.state == 2
    up, down = samples.free & (rig.direction < 0), samples.free & (rig.direction > 0)
    still = samples.free & (rig.direction == 0) & (samples.mode == SLIDE) & _lifted(rig)
    string = prepared.hookload - prepared.hanging
    kinds = {
        # a helix has its own drag: the line of a string that has none says nothing of it
        "slack_off": (down & (moving == 1) & ~helical, still & ~helical, -1.0),
        "pick_up": (up & (moving == -1), still, 1.0),
        "rotating": (samples.free & (moving == 2), np.zeros_like(still), 0.0),
    }
    expected = np.full(len(samples.bit), np.nan)
    grid = np.linspace(np.min(samples.bit), np.max(samples.bit) + 1.0, 2 * FAN_POINTS)
    at = factors(calibration)
    for kind, (rows, waiting, side) in kinds.items():
        if (rows | waiting).any():
            line = model.string_weight(kind, grid, *at)
            weight = np.interp(samples.bit, grid, line) * samples.scale
            held = waiting & (side * (string - weight) > 0.0) & (string > HANGING * weight)
            rows = rows | held
            expected[rows] = weight[rows] + prepared.hanging[rows]
    return expected, prepared.hookload - expected


def _lifted(rig: RigView) -> NDArray[np.bool_]:
    """Mark rows at which the block has moved since slips: till then they may hold part of the string."""
    rows = np.arange(len(rig.slips))
    slips = np.maximum.accumulate(np.where(rig.slips, rows, -1))
    moved = np.maximum.accumulate(np.where((rig.direction != 0) & ~rig.slips, rows, -1))
    return moved > slips


def torque_lines(
    log: TimeLog,
    prepared: Prepared,
    rig: RigView,
    calibration: Calibration,
    model: OffBottomModel,
    bit_load: Floats,
) -> Floats:
    """Surface torque measured less expected [N.m], while turning; NaN elsewhere.

    On bottom the bit's torque is taken as proportional to the bit load, at the ratio this run's own
    rotary drilling shows.
    """
    torque = log.get("torque")
    residual = np.full(len(log), np.nan)
    if torque is None or calibration.rotational is None:
        return residual
    samples = prepared.samples
    grid = np.linspace(np.min(samples.bit), np.max(samples.bit) + 1.0, 2 * FAN_POINTS)
    line = model.torque(grid, calibration.rotational.value)
    loss = calibration.torque_loss.value if calibration.torque_loss else 0.0
    expected = np.interp(samples.bit, grid, line) * samples.scale + loss
    beyond = torque - expected
    turning = rig.turning & ~rig.slips
    off = turning & samples.free
    residual[off] = beyond[off]
    drilling = rig.activity == Activity.DRILL_ROTATE
    loaded = drilling & (bit_load > 5e3) & np.isfinite(beyond)
    if loaded.sum() >= 30:
        ratio = max(float(np.median(beyond[loaded] / bit_load[loaded])), 0.0)
        residual[drilling] = beyond[drilling] - ratio * bit_load[drilling]
    return residual
