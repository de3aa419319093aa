"""Replay a run: the load history, the profiles at chosen moments, and the same under other friction."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from forensics.case import Case
from forensics.friction.result import Calibration
from forensics.loads import LoadHistory, RateLaw, RatioMap
from forensics.logs.table import TimeLog
from forensics.mechanics.kernels_replay import TURN, Rules, Run, replay_rows
from forensics.mechanics.offbottom import OffBottomModel
from forensics.replay.lines import drag_lines, torque_lines
from forensics.replay.local import match_locally
from forensics.replay.model import build_model, factors
from forensics.replay.rate import learn_rate
from forensics.replay.room import fresh, room
from forensics.replay.samples import Prepared, prepare
from forensics.replay.slide import straight_drag
from forensics.rig.view import RigView
from forensics.well.model import Well

Floats = NDArray[np.float64]

MAP_TIMES = 600
MAP_DEPTHS = 240
BAND_NOISES = 1.5


@dataclass(frozen=True)
class Replay:
    """A replay made ready: everything that does not change between friction draws."""

    log: TimeLog
    well: Well
    rig: RigView
    calibration: Calibration
    model: OffBottomModel
    prepared: Prepared
    rules: Rules
    rate_law: RateLaw


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
    law = learn_rate(log, rig, _turning_load(prepared, model))
    noise = rig.noise.get("hookload", 1e3)
    rules = Rules(
        band=max(BAND_NOISES * noise, 0.5e3),
        tolerance=max(6.0 * noise, 10e3),
        rate=law.rate,
        exponent=law.exponent,
    )
    return Replay(log, well, rig, calibration, model, prepared, rules, law)


def replay(run: Replay) -> LoadHistory:
    """Reconstruct the loads of every row.

    Returns
    -------
    LoadHistory
        Arrays of the log's length, SI.
    """
    samples = run.prepared.samples
    cased, open_hole = factors(run.calibration)
    times = np.linspace(run.log.time[0], run.log.time[-1] + 1.0, MAP_TIMES + 1)
    depths = np.linspace(0.0, float(np.max(samples.bit)) + 20.0, MAP_DEPTHS + 1)
    found = room(len(run.log), MAP_TIMES, MAP_DEPTHS)
    found.chart_row[:] = np.clip(np.searchsorted(times, run.log.time, side="right") - 1, 0, MAP_TIMES - 1)
    kernel = Run(samples, run.rules, found, *fresh(run.model), depths[1])
    visits = replay_rows(run.model.setting(cased, open_hole), kernel)
    expected, drag = drag_lines(run.prepared, run.rig, run.calibration, run.model, found.full)
    lost = run.rig.wob_surface - found.bit_load
    return LoadHistory(
        bit_load=found.bit_load, peak_ratio=found.ratio, peak_md=found.ratio_md,
        peak_compression=found.compression, state=found.state,
        top=found.span[:, 0], bottom=found.span[:, 1],
        helical_top=found.span[:, 2], helical_bottom=found.span[:, 3],
        reach=found.reach, basis=found.basis, drag_residual=drag,
        torque_residual=torque_lines(
            run.log, run.prepared, run.rig, run.calibration, run.model, found.bit_load
        ),
        model_hookload=expected,
        straight_drag=straight_drag(run.model, run.prepared, (cased, open_hole), found, lost),
        stretch=found.stretch,
        ratio_map=RatioMap(times, depths, found.chart),
        rate_law=run.rate_law, visits=int(visits),
    )


def _turning_load(prepared: Prepared, model: OffBottomModel) -> Floats:
    """Bit load while turning on bottom: rotating weight less hookload [N]."""
    samples = prepared.samples
    grid = np.linspace(np.min(samples.bit), np.max(samples.bit) + 1.0, 400)
    weight = np.interp(samples.bit, grid, model.string_weight("rotating", grid, 0.0, 0.0))
    return np.where(samples.mode == TURN, weight * samples.scale - samples.top, np.nan)
