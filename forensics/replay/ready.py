"""Make a run ready for replay: samples, friction by stand and by the bit's own witness, rate law."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
from numpy.typing import NDArray

from forensics.case import Case
from forensics.friction.result import Calibration
from forensics.logs.table import TimeLog
from forensics.mechanics.hydraulics import jet_thrust
from forensics.mechanics.kernels_replay import TURN, Rules
from forensics.mechanics.offbottom import OffBottomModel
from forensics.replay.local import match_locally
from forensics.replay.model import build_model, factors
from forensics.replay.rate import learn_rate
from forensics.replay.run import Replay
from forensics.replay.samples import Prepared, prepare
from forensics.replay.torsion import torque_ends
from forensics.replay.witness.heed import heed
from forensics.rig.view import RigView
from forensics.well.model import Well

Floats = NDArray[np.float64]

BAND_NOISES = 1.5

TALLEST = 70.0  # m; no block travels further


def block_zero(rig: RigView) -> float:
    """Block height taken as no pipe above the rotary: the lowest seen out of slips [m].

    Infinite, so that none ever is above it, where heights span more than any derrick: they were made up
    from bit depth over several stands, and say nothing of how much pipe stands above the rotary.
    """
    height = rig.block[~rig.slips & np.isfinite(rig.block)]
    if len(height) and np.ptp(height) > TALLEST:
        return float("inf")
    return float(np.percentile(height, 1.0)) if len(height) else 0.0


def ready(
    log: TimeLog,
    well: Well,
    rig: RigView,
    calibration: Calibration,
    case: Case,
    model: OffBottomModel | None = None,
) -> Replay:
    """Make a run ready for replay: tables, samples, local match, rate law."""
    if model is None:
        depth = float(np.nanmax(log.values["bit_depth"]))
        model = build_model(well, case, depth, block_zero(rig))
    if calibration.edges:
        model = model.divided(calibration.edges)
    local = match_locally(log.time, calibration, model)
    prepared = prepare(log, well, rig, calibration, model, local)
    still, drag = _lines(prepared, model, calibration)
    turning = _turning_load(prepared, still, drag)
    law = learn_rate(log, rig, turning)
    noise = rig.noise.get("hookload", 1e3)
    rules = Rules(
        band=max(BAND_NOISES * noise, 0.5e3),
        tolerance=max(6.0 * noise, 10e3),
        rate=law.rate,
        exponent=law.exponent,
    )
    run = Replay(log, well, rig, calibration, model, prepared, rules, law)
    if case.criteria.torque_effect:
        run = _wound(run)
    if case.nozzle_area is not None:
        run = _lifted(run, case.nozzle_area)
    return heed(run, turning, drag)


def _wound(run: Replay) -> Replay:
    """Let torque lower the helical onset and press the helix on the wall."""
    ends = run.prepared.samples.ends.copy()
    ends[:, :2] = np.nan_to_num(torque_ends(run, np.arange(len(run.log))))
    return replace(run, prepared=replace(run.prepared, samples=run.prepared.samples._replace(ends=ends)))


def _lifted(run: Replay, area: float) -> Replay:
    """Let the jets press the string from below while the pumps run: the hook carries that much less."""
    samples = run.prepared.samples
    ends = samples.ends.copy()
    ends[:, 2] = usual_thrust(run.rig, run.well, area) * run.rig.pumping
    samples = samples._replace(ends=ends, top=samples.top - ends[:, 2])
    return replace(run, prepared=replace(run.prepared, samples=samples))


def usual_thrust(rig: RigView, well: Well, area: float) -> float:
    """Force with which the jets lift the bit at the run's usual flow [N]; zero where no flow is known.

    Parameters
    ----------
    rig : RigView
        With its usual flow.
    well : Well
        With its mud.
    area : float
        Of the nozzles together [m2].
    """
    inside = well.fluid.inside
    density = well.fluid.typical if inside is None else inside
    flow = rig.usual_flow if np.isfinite(rig.usual_flow) else 0.0
    return float(jet_thrust(flow, density, area))


def _turning_load(prepared: Prepared, still: Floats, drag: Floats) -> Floats:
    """Bit load while turning on bottom: rotating weight, less the drag of going down, less hookload [N]."""
    samples = prepared.samples
    return np.where(samples.mode == TURN, still - samples.share * drag - samples.top, np.nan)


def _lines(prepared: Prepared, model: OffBottomModel, calibration: Calibration) -> tuple[Floats, Floats]:
    """Weight of the string at rest, and the drag of sliding down with the bit free, shape (n,) each [N]."""
    samples = prepared.samples
    grid = np.linspace(np.min(samples.bit), np.max(samples.bit) + 1.0, 400)
    still, sliding = (
        np.interp(samples.bit, grid, model.string_weight(kind, grid, *factors(calibration))) * samples.scale
        for kind in ("rotating", "slack_off")
    )
    return still, samples.down * (still - sliding)
