"""What the rig was doing, from its log alone: the order in which the rules are asked."""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray

from forensics.case import Case
from forensics.estimate import Estimate
from forensics.logs.table import TimeLog
from forensics.rig import noise
from forensics.rig.activity import (
    SMOOTHING,
    Surface,
    bottom_evidence,
    classify,
    on_bottom_from,
    refine_activity,
)
from forensics.rig.block import Slips, block_weight, fill_block, find_slips
from forensics.rig.depth import DepthView, find_depths
from forensics.rig.drives import Drives, find_drives
from forensics.rig.noise import Bools, Floats
from forensics.rig.sheaves import hook_factor
from forensics.rig.signals import Signals, block_speed, direction_of, read_signals
from forensics.rig.steady import Motion, Steady, find_steady
from forensics.rig.tare import (
    Reference,
    build_reference,
    hanging_share,
    list_tares,
    rezero_pressure,
    stand_spans,
    weight_on_bit,
)
from forensics.rig.view import RigView
from forensics.units import G
from forensics.well.model import Well

__all__ = ["refine_activity", "understand_rig"]

_COMMON_RPM = 60.0
# Spacing of the depths at which the string is weighed [m].
_WEIGH_STEP = 5.0
# Off bottom by at least this much, tried in turn until readings turn up, as shares of `near`.
_CLEARANCES = (1.0, 0.4, 0.15)


@dataclass(frozen=True)
class _Moves:
    """Block and hookload once slips are known; arrays of shape (n,)."""

    hookload: Floats
    speed: Floats
    direction: NDArray[np.int8]
    block: Floats
    slips: Bools


@dataclass(frozen=True)
class _Judged:
    """Where the bit was and the references that say so."""

    vote: NDArray[np.int8]
    steady: Steady
    references: tuple[Reference, Reference, Reference]


def understand_rig(log: TimeLog, well: Well, case: Case) -> RigView:
    """Turn surface sensors into what the rig was doing.

    Parameters
    ----------
    log : TimeLog
        The SI table of the run.
    well : Well
        Trajectory, hole, string and mud.
    case : Case
        Rig settings: block weight, lines, sheaves, tare.

    Returns
    -------
    RigView
        Activity, references and noise at each row of the log, and what could not be told.
    """
    signals = read_signals(log)
    below = weigh(well, signals.bit)
    slips = find_slips(log, signals, below)
    moves = _moves(signals, slips, case)
    drives = find_drives(log, signals, slips.rows)
    depths = find_depths(log, signals, well, slips.rows)
    judged = _judge(log, well, signals, moves, drives, depths)
    weight = block_weight(slips, signals, moves.hookload, case.rig)
    view = RigView(
        block_weight=weight or _from_readings(judged, moves, below, depths),
        hookload=np.where(np.isfinite(log.values["hookload"]), moves.hookload, np.nan),
        slips=slips.rows,
        turning=drives.turning,
        pumping=drives.pumping,
        on_bottom=on_bottom_from(judged.vote),
        direction=moves.direction,
        block=moves.block,
        hole_depth=depths.hole,
        activity=np.zeros(len(log), dtype=np.int8),
        wob_surface=np.zeros(0),
        wob_slack_off=np.zeros(0),
        noise=signals.noise,
        usual_flow=drives.usual_flow,
        bottom_vote=judged.vote,
        steady=judged.steady,
    )
    unsure = (drives.turning_unknown, drives.pumping_unknown)
    view = replace(view, activity=classify(view, signals.missing & ~slips.rows, unsure))
    return _with_weights(view, log, judged, (below, slips, drives, depths))


def weigh(well: Well, bit_depth: Floats) -> Floats:
    """Hanging weight of the string without friction at every row, from a table over depth.

    Parameters
    ----------
    well : Well
        The string and its hole.
    bit_depth : ndarray, shape (n,)
        Filled bit depth [m].

    Returns
    -------
    ndarray, shape (n,)
        [N]
    """
    deepest = max(float(bit_depth.max(initial=0.0)), 0.0) + 2 * _WEIGH_STEP
    grid = np.arange(0.0, deepest + _WEIGH_STEP, _WEIGH_STEP)
    return np.interp(bit_depth, grid, well.rotating_weight(grid))


def _moves(signals: Signals, slips: Slips, case: Case) -> _Moves:
    speed = block_speed(signals)
    direction = direction_of(speed, signals)
    hookload = signals.hookload * hook_factor(direction, signals, case.rig)
    return _Moves(hookload, speed, direction, fill_block(signals, slips.rows), slips.rows)


def _judge(
    log: TimeLog, well: Well, signals: Signals, moves: _Moves, drives: Drives, depths: DepthView
) -> _Judged:
    """Take readings surely off bottom, references from them, and with these look at the bottom again."""
    hanging = _hanging(well, log)
    below = weigh(well, signals.bit)
    steady = Steady()
    for share in _CLEARANCES:
        clear = (depths.gap > share * depths.near) | depths.run_in
        steady = find_steady(_motion(moves, drives, clear), signals, below, depths.near)
        if len(steady.of("rotating")) or len(steady.of("slack_off")):
            break
    base = below + hanging_share(steady, below, hanging) * hanging * np.nan_to_num(moves.block)
    references = _references(steady, base, signals)
    surface = _surface(log, well, signals, moves, drives, depths)
    vote = bottom_evidence(surface, depths, references, signals)
    # Once more: a bit known to be free close to bottom gives the references of that very place.
    free = (noise.hold(vote, initial=-1) < 0) & ((depths.gap > 0.5) | depths.run_in)
    steady = find_steady(_motion(moves, drives, free), signals, below, depths.near)
    references = _references(steady, base, signals)
    return _Judged(bottom_evidence(surface, depths, references, signals), steady, references)


def _motion(moves: _Moves, drives: Drives, clear: Bools) -> Motion:
    return Motion(
        hookload=moves.hookload,
        speed=moves.speed,
        direction=moves.direction,
        block=moves.block,
        turning=drives.turning,
        rpm=drives.rpm,
        torque=drives.torque,
        pumping=drives.pumping,
        flow_steady=drives.flow_steady,
        clear=clear & ~moves.slips,
        slips=moves.slips,
    )


def _references(steady: Steady, base: Floats, signals: Signals) -> tuple[Reference, Reference, Reference]:
    return (
        build_reference("rotating", steady, base, signals),
        build_reference("slack_off", steady, base, signals),
        build_reference("pick_up", steady, base, signals),
    )


def _surface(
    log: TimeLog, well: Well, signals: Signals, moves: _Moves, drives: Drives, depths: DepthView
) -> Surface:
    free = (depths.gap > depths.near) & drives.pumping & drives.flow_steady & ~moves.slips
    pressure, level = rezero_pressure(log, signals, free)
    pace = -noise.rate(moves.block, log.time, noise.window_seconds(SMOOTHING, signals.interval))
    radius = 0.5 * well.string.components[-1].contact_diameter()
    # A string known to turn only by its torque is taken to turn at a common speed.
    rpm = noise.fill(drives.rpm) if np.isfinite(drives.rpm).any() else np.full(len(log), _COMMON_RPM)
    spin = np.abs(rpm) * (2.0 * np.pi / 60.0) * radius
    return Surface(
        smooth=noise.running_mean(moves.hookload, signals.count(SMOOTHING)),
        direction=moves.direction,
        speed=moves.speed,
        axial=np.nan_to_num(pace / np.hypot(pace, np.maximum(spin, 1e-3))),
        turning=drives.turning,
        pumping=drives.pumping,
        slips=moves.slips,
        differential=pressure,
        differential_level=level,
    )


def _hanging(well: Well, log: TimeLog) -> float:
    """Weight per length of the top pipe in air, full of mud [N/m]."""
    top = well.string.components[-1]
    fill = well.fluid.inside
    if fill is None:
        fill = float(well.fluid.outside_at(log.time[:1], 0.0)[0])
    return top.weight + fill * G * top.inner_area


def _from_readings(judged: _Judged, moves: _Moves, below: Floats, depths: DepthView) -> Estimate:
    """Block weight as measured less modelled weight, where no reading in slips shows it."""
    steady = judged.steady
    turned = steady.of("rotating")
    if len(turned):
        left = turned.value - below[turned.start]
        words = "rotating weight less the model: no in-slips reading"
    elif len(steady):
        left = steady.value - below[steady.start]
        words = "moving weights less the model without friction: no in-slips reading"
    else:
        free = ~moves.slips & (depths.gap > 0)
        rows = free if free.any() else ~moves.slips
        left = (moves.hookload - below)[rows]
        words = "hookload less the model without friction: no in-slips reading"
    value = float(np.median(left))
    half = max(float(np.quantile(np.abs(left - value), 0.9)), 0.03 * float(np.median(below)), 5e3)
    return Estimate(value, value - half, value + half, words, determined=False, samples=len(left))


def _with_weights(
    view: RigView, log: TimeLog, judged: _Judged, parts: tuple[Floats, Slips, Drives, DepthView]
) -> RigView:
    """Add weight on bit, tares and what could not be told."""
    below, slips, drives, depths = parts
    rotating, slack, _ = judged.references
    notes = list(drives.remarks)
    if not rotating.known:
        weight = view.block_weight.value + below
        rotating = replace(rotating, weight=weight)
        notes.append(
            "No steady rotating weight off bottom: weight on bit rests on the string's modelled weight."
        )
    if not slack.known:
        notes.append("No steady slack-off weight off bottom: slides have no slack-off reference.")
    if slips.plateau is None:
        notes.append(
            f"No reading in slips: the block weight can't be read off; it is {view.block_weight.source}."
        )
    if log.get("block_position") is None:
        notes.append("No block position: motion is judged by the bit's depth, and in slips not at all.")
    if not depths.logged:
        notes.append("No hole depth of its own: it is the largest bit depth so far.")
    hookload = view.hookload
    sliding = view.on_bottom & ~view.turning & ~view.slips
    tares = list_tares((rotating, slack), ("rotating", "slack_off"), stand_spans(view.slips, log.time))
    return replace(
        view,
        wob_surface=weight_on_bit(rotating, hookload, ~view.slips),
        wob_slack_off=weight_on_bit(slack, hookload, sliding),
        tares=tares,
        can_not_tell=tuple(notes),
    )
