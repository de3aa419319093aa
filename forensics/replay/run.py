"""Replay a run: the load history, the profiles at chosen moments, and the same under other friction."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray

from forensics.case import Case
from forensics.friction.result import Calibration
from forensics.loads import DrawHistory, LoadHistory, Profile, RateLaw, RatioMap
from forensics.logs.table import TimeLog
from forensics.mechanics.kernels_judge import thresholds
from forensics.mechanics.kernels_march import contact
from forensics.mechanics.kernels_memory import Memory
from forensics.mechanics.kernels_replay import SLIDE, TURN, Found, Rules, Samples, replay_rows
from forensics.replay.lines import drag_lines, torque_lines
from forensics.replay.local import match_locally
from forensics.replay.model import LoadModel, build_model, factors
from forensics.replay.rate import learn_rate
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
    model: LoadModel
    prepared: Prepared
    rules: Rules
    rate_law: RateLaw


def block_zero(rig: RigView) -> float:
    """Block height taken as no pipe above the rotary: the lowest seen out of slips [m]."""
    height = rig.block[~rig.slips & np.isfinite(rig.block)]
    return float(np.percentile(height, 1.0)) if len(height) else 0.0


def ready(
    log: TimeLog, well: Well, rig: RigView, calibration: Calibration, case: Case, model: LoadModel | None = None
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
    found = _found(len(run.log), MAP_TIMES, MAP_DEPTHS)
    found.chart_row[:] = np.clip(np.searchsorted(times, run.log.time, side="right") - 1, 0, MAP_TIMES - 1)
    memory, now = _fresh(run.model)
    visits = replay_rows(
        *_tables(run.model), run.model.friction(cased, open_hole), memory, samples, run.rules, found,
        depths[1], now,
    )
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


def profiles(run: Replay, rows: Sequence[int]) -> tuple[Profile, ...]:
    """Axial load along the hole at the given rows of the log, in the order given."""
    cased, open_hole = factors(run.calibration)
    mu = run.model.friction(cased, open_hole)
    found = _found(len(run.log), 1, 1)
    taken: dict[int, Profile] = {}
    memory, now = _fresh(run.model)
    done = 0
    for row in sorted(set(rows)):
        start = max(_restart(run.prepared.samples.mode, row), done)
        if start > done:
            memory, now = _fresh(run.model)
        part = slice(start, row + 1)
        replay_rows(
            *_tables(run.model), mu, memory, _take(run.prepared.samples, part), run.rules,
            _found(row + 1 - start, 1, 1), 1e9, now,
        )
        done = row + 1
        taken[row] = _profile(run, memory, row)
    del found
    return tuple(taken[row] for row in rows)


def replay_draws(run: Replay, rows: NDArray[np.bool_], count: int = 7) -> DrawHistory:
    """Replay the rows asked for, and what leads up to them, at `count` draws of friction and block weight.

    Parameters
    ----------
    run : Replay
        Made ready.
    rows : ndarray of bool, shape (n,)
        Rows whose outcome is wanted.
    count : int
        Draws, spread evenly over the calibration's in order of open-hole friction.
    """
    draws = run.calibration.draws
    order = np.argsort(draws[:, 1] + draws[:, 0], kind="stable")
    chosen = draws[order[((np.arange(count) + 0.5) * len(order) / count).astype(int)]] if len(draws) else draws
    blocks = _blocks(run.prepared.samples.mode, rows)
    n = len(run.log)
    state = np.zeros((len(chosen), n), dtype=np.int8)
    ratio = np.full((len(chosen), n), np.nan, dtype=np.float32)
    load = np.full((len(chosen), n), np.nan, dtype=np.float32)
    covered = np.zeros(n, dtype=bool)
    for start, stop in blocks:
        covered[start:stop] = True
    for k, (cased, open_hole, block) in enumerate(chosen):
        mu = run.model.friction(cased, open_hole)
        shift = block - run.calibration.block_weight.value
        for start, stop in blocks:
            part = _take(run.prepared.samples, slice(start, stop))
            part = part._replace(top=part.top - shift)
            found = _found(stop - start, 1, 1)
            memory, now = _fresh(run.model)
            replay_rows(*_tables(run.model), mu, memory, part, run.rules, found, 1e9, now)
            state[k, start:stop] = found.state
            ratio[k, start:stop] = found.ratio
            load[k, start:stop] = found.bit_load
    weights = np.full(len(chosen), 1.0 / max(len(chosen), 1))
    return DrawHistory(weights, chosen[:, 0], chosen[:, 1], covered, state, ratio, load)


def _tables(model: LoadModel) -> tuple[object, object, object]:
    return model.offbottom.hole_arrays, model.offbottom.pipe_arrays, model.criteria


def _fresh(model: LoadModel) -> tuple[Memory, Floats]:
    """A string that remembers nothing."""
    nodes = len(model.offbottom.pipe.x)
    arrays = [np.zeros(nodes + 1) for _ in range(4)]
    return Memory(*arrays, np.zeros(nodes, dtype=np.int8)), np.array([0.0, 0.0, 0.0, 0.0, -1.0, -1.0])


def _found(count: int, times: int, depths: int) -> Found:
    """Room for the replay's results."""
    return Found(
        bit_load=np.zeros(count), ratio=np.zeros(count), ratio_md=np.full(count, np.nan),
        compression=np.zeros(count), state=np.zeros(count, dtype=np.int8), span=np.full((count, 4), np.nan),
        reach=np.zeros(count), basis=np.zeros(count, dtype=np.int8), full=np.zeros(count, dtype=np.int8),
        stretch=np.zeros(count), chart=np.zeros((times, depths)), chart_row=np.zeros(count, dtype=np.int64),
    )


def _take(samples: Samples, part: slice) -> Samples:
    return Samples(*(column[part] for column in samples))


def _turning_load(prepared: Prepared, model: LoadModel) -> Floats:
    """Bit load while turning on bottom: rotating weight less hookload [N]."""
    samples = prepared.samples
    grid = np.linspace(np.min(samples.bit), np.max(samples.bit) + 1.0, 400)
    weight = np.interp(samples.bit, grid, model.offbottom.string_weight("rotating", grid, 0.0, 0.0))
    return np.where(samples.mode == TURN, weight * samples.scale - samples.top, np.nan)


def _restart(mode: NDArray[np.int8], row: int, least: int = 30) -> int:
    """Row to start from so that the memory is right at `row`: where the string last turned for a while."""
    turned = np.flatnonzero(mode[: max(row - least, 0)] == TURN)
    return max(int(turned[-1]) - least, 0) if len(turned) else 0


def _blocks(mode: NDArray[np.int8], rows: NDArray[np.bool_]) -> list[tuple[int, int]]:
    """Stretches of rows to replay so that every row asked for has its lead-up, merged where they meet."""
    edges = np.flatnonzero(np.diff(np.concatenate([[0], rows.astype(np.int8), [0]]))).reshape(-1, 2)
    merged: list[tuple[int, int]] = []
    for start, stop in edges:
        lead = _restart(mode, int(start))
        if merged and lead <= merged[-1][1]:
            merged[-1] = (merged[-1][0], int(stop))
        else:
            merged.append((lead, int(stop)))
    return merged


def _profile(run: Replay, memory: Memory, row: int) -> Profile:
    """The profile that the memory holds, with the thresholds at it."""
    hole, pipe, criteria = _tables(run.model)
    bit = float(run.prepared.samples.bit[row])
    scale = float(run.prepared.samples.scale[row])
    top = int(np.searchsorted(pipe.x, bit) - 1)
    rows = np.arange(max(min(top, len(pipe.x) - 2), 0) + 1)
    middle = 0.5 * (memory.tension[rows] + memory.tension[rows + 1])
    first = int(bit * hole.inv_step + 0.5)
    index = np.maximum(first - ((pipe.node[rows] + pipe.node[rows + 1]) >> 1), 0)
    levels = np.array(
        [thresholds(pipe, criteria, int(j), int(i), float(t), scale) for j, i, t in zip(rows, index, middle, strict=True)]
    )
    levels[~np.isfinite(levels)] = np.nan
    force = np.array(
        [
            contact(float(t), float(pipe.weight[j]) * scale, hole.kappa2[i], hole.kappa_d[i], hole.sin2[i])
            for j, i, t in zip(rows, index, middle, strict=True)
        ]
    )
    gap = 0.5 * (hole.diameter[index] - pipe.clearance_od[rows])
    helical = memory.state[rows] == 2
    force[helical] += (gap * middle**2 / (4.0 * pipe.ei[rows]))[helical]
    ends = np.minimum(pipe.x[rows + 1], bit)
    return Profile(
        row=row, time=float(run.log.time[row]), md=bit - 0.5 * (pipe.x[rows] + ends), tension=middle,
        sinusoidal=levels[:, 1], helical=levels[:, 2], contact=force, state=memory.state[rows].copy(),
    )


__all__ = ["SLIDE", "Replay", "profiles", "ready", "replay", "replay_draws", "replace"]
