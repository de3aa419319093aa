"""Replay a run: the load history, the profiles at chosen moments, and the same under other friction."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from forensics.friction.result import Calibration
from forensics.loads import BitWitness, LoadHistory, RateLaw, RatioMap
from forensics.logs.table import TimeLog
from forensics.mechanics.kernels_replay import Rules, Run, replay_rows
from forensics.mechanics.offbottom import OffBottomModel
from forensics.replay.lines import drag_lines, torque_lines
from forensics.replay.margin import bit_load_limit
from forensics.replay.model import factors
from forensics.replay.room import fresh, room
from forensics.replay.samples import Prepared
from forensics.replay.slide import straight_drag
from forensics.replay.windows import window_rows
from forensics.replay.witness.combine import lean
from forensics.rig.view import Activity, RigView
from forensics.well.model import Well

Floats = NDArray[np.float64]

MAP_TIMES = 600
MAP_DEPTHS = 240


@dataclass(frozen=True)
class Replay:
    """A replay made ready: everything that does not change between friction draws.

    `witness` is what the bit's own witnesses say (None: not asked yet).
    """

    log: TimeLog
    well: Well
    rig: RigView
    calibration: Calibration
    model: OffBottomModel
    prepared: Prepared
    rules: Rules
    rate_law: RateLaw
    witness: BitWitness | None = None


def replay(run: Replay) -> LoadHistory:
    """Reconstruct the loads of every row.

    Returns
    -------
    LoadHistory
        Arrays of the log's length, SI.
    """
    samples = run.prepared.samples
    at = factors(run.calibration)
    times = np.linspace(run.log.time[0], run.log.time[-1] + 1.0, MAP_TIMES + 1)
    depths = np.linspace(0.0, float(np.max(samples.bit)) + 20.0, MAP_DEPTHS + 1)
    found = room(len(run.log), MAP_TIMES, MAP_DEPTHS)
    found.chart_row[:] = np.clip(np.searchsorted(times, run.log.time, side="right") - 1, 0, MAP_TIMES - 1)
    memory, now = fresh(run.model)
    replay_rows(
        run.model.setting(*at), Run(samples, run.rules, found, memory, now, float(depths[1]))
    )
    found.bit_load[run.prepared.far] = 0.0
    if run.witness is not None:
        drilling = run.rig.activity == Activity.DRILL_SLIDE
        step = window_rows(run.log.interval)
        found.bit_load[:], found.basis[:] = lean(run.witness, found.bit_load, found.basis, drilling, step)
    expected, drag = drag_lines(run.prepared, run.rig, run.calibration, run.model, found)
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
        bit_load_limit=bit_load_limit(run.model, samples, run.rig.activity == Activity.DRILL_SLIDE, at),
        straight_drag=straight_drag(run.model, run.prepared, at, found, lost),
        stretch=found.stretch,
        ratio_map=RatioMap(times, depths, found.chart),
        rate_law=run.rate_law, visits=int(memory.visits[0]),
        witness=run.witness,
    )
