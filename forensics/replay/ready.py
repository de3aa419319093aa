"""Make a run ready for replay: samples, friction by stand and by the bit's own witness, rate law."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
from numpy.typing import NDArray

from forensics.case import Case
from forensics.friction.result import Calibration
from forensics.logs.table import TimeLog
from forensics.mechanics.kernels_replay import TURN, Rules
from forensics.mechanics.offbottom import OffBottomModel
from forensics.replay.local import match_locally
from forensics.replay.model import build_model, factors
from forensics.replay.rate import learn_rate
from forensics.replay.room import excerpt, fresh, go
from forensics.replay.run import Replay
from forensics.replay.samples import Prepared, prepare
from forensics.replay.torsion import torque_ends
from forensics.replay.witness import SIGMAS, Witness, friction_ratio, hear
from forensics.rig.view import Activity, RigView
from forensics.well.model import Well

Floats = NDArray[np.float64]

BAND_NOISES = 1.5


def block_zero(rig: RigView) -> float:
    """Block height taken as no pipe above the rotary: the lowest seen out of slips [m]."""
    height = rig.block[~rig.slips & np.isfinite(rig.block)]
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
    local = match_locally(log.time, calibration, model)
    prepared = prepare(log, well, rig, calibration, model, local)
    turning = _turning_load(prepared, model)
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
    witness = hear(log, rig, turning)
    return run if witness is None else _heed(run, witness)


def _wound(run: Replay) -> Replay:
    """Let torque lower the helical onset and press the helix on the wall."""
    ends = run.prepared.samples.ends.copy()
    ends[:, :2] = np.nan_to_num(torque_ends(run, np.arange(len(run.log))))
    return replace(run, prepared=replace(run.prepared, samples=run.prepared.samples._replace(ends=ends)))


def _heed(run: Replay, witness: Witness) -> Replay:
    """Let the pressure bound the bit load, and move friction where the two disagree for long."""
    bound = np.where(np.isfinite(witness.load), witness.load + SIGMAS * witness.sigma, np.inf)
    samples = run.prepared.samples._replace(witness=bound)
    run = replace(run, prepared=replace(run.prepared, samples=samples))
    load, basis = _slides(run)
    ratio = friction_ratio(run.log, run.rig, witness, load, basis)
    samples = samples._replace(down=samples.down * ratio)
    return replace(run, prepared=replace(run.prepared, samples=samples), moved=ratio)


def _slides(run: Replay) -> tuple[Floats, NDArray[np.int8]]:
    """Bit load and its basis over the slides and what leads up to them; zero elsewhere."""
    load = np.zeros(len(run.log))
    basis = np.full(len(run.log), -1, dtype=np.int8)
    part = excerpt(run.prepared.samples, run.log.time, run.rig.activity == Activity.DRILL_SLIDE)
    if part.covered.any():
        at = run.model.setting(*factors(run.calibration))
        found = go(at, part.samples, run.rules, fresh(run.model))
        load[part.covered], basis[part.covered] = part.spread(found.bit_load), part.spread(found.basis)
    return load, basis


def _turning_load(prepared: Prepared, model: OffBottomModel) -> Floats:
    """Bit load while turning on bottom: rotating weight less hookload [N]."""
    samples = prepared.samples
    grid = np.linspace(np.min(samples.bit), np.max(samples.bit) + 1.0, 400)
    weight = np.interp(samples.bit, grid, model.string_weight("rotating", grid, 0.0, 0.0))
    return np.where(samples.mode == TURN, weight * samples.scale - samples.top, np.nan)
