"""What the rig was doing, from its log alone: the order in which the rules are asked."""

from __future__ import annotations

from dataclasses import replace

import numpy as np

from forensics.case import Case, RigSettings
from forensics.estimate import Estimate
from forensics.logs.table import TimeLog
from forensics.rig import noise
from forensics.rig.activity import classify, on_bottom_from, refine_activity
from forensics.rig.block import Slips, block_weight, fill_block, find_slips
from forensics.rig.depth import find_depths
from forensics.rig.drives import find_drives
from forensics.rig.guess import guess_turning
from forensics.rig.judge import Facts, Judged, Moves, breakovers, judge_bottom
from forensics.rig.noise import Bools, Floats
from forensics.rig.pumps import pump_shift
from forensics.rig.sheaves import hook_factor
from forensics.rig.signals import Signals, block_speed, direction_of, read_signals
from forensics.rig.tare import list_tares, modelled_reference, stand_spans, weight_on_bit
from forensics.rig.view import RigView
from forensics.units import show_both
from forensics.well.model import Well

__all__ = ["refine_activity", "understand_rig"]

# Spacing of the depths at which the string is weighed [m].
_WEIGH_STEP = 5.0
# Length of the longest common stand [m].
_STAND = 30.0
# A survey is behind the bit by the tools between; beyond this the hole's direction is a guess [m].
_UNSURVEYED = 100.0
# The in-slips reading contradicts the case when off by this share and this much [N].
_DISAGREES = 0.03
_BOTHERS = 5e3
# Quantile of the hookload while turning that is taken for hardly any weight on the bit.
_LIGHTEST_ON_BIT = 0.98
# Share of the string's weight that may stand on the bit all the time.
_NEVER_LIFTED = 0.10


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
    slips = find_slips(log, signals, below, _STAND * well.string.components[-1].weight)
    depths = find_depths(log, signals, well, slips.rows)
    facts = Facts(
        log=log,
        well=well,
        signals=signals,
        moves=_moves(signals, slips, case),
        drives=find_drives(log, signals, slips.rows, depths.gap > depths.near),
        depths=depths,
        below=below,
    )
    weight = block_weight(slips, signals, facts.moves.hookload, case.rig)
    judged = judge_bottom(facts, weight)
    if weight is not None and facts.drives.turning_unknown.any():
        facts = guess_turning(facts, judged, weight)
        judged = judge_bottom(facts, weight)
    shift = pump_shift(facts, judged)
    if shift is not None:
        level = facts.moves.hookload - shift.value * facts.drives.pumping
        facts = replace(facts, moves=replace(facts.moves, hookload=level))
        judged = judge_bottom(facts, weight)
    view = _view(facts, judged, weight or _from_readings(judged, facts), slips)
    return replace(view, pump_shift=shift, breakover=breakovers(facts, judged))


def weigh(well: Well, bit_depth: Floats) -> Floats:
    """Weigh the hanging string without friction at every row, from a table over depth.

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


def _moves(signals: Signals, slips: Slips, case: Case) -> Moves:
    speed = block_speed(signals)
    direction = direction_of(speed, signals)
    height = fill_block(signals, slips.rows)
    hookload = signals.hookload * hook_factor(height, case.rig)
    return Moves(hookload, speed, direction, height, slips.rows)


def _from_readings(judged: Judged, facts: Facts) -> Estimate:
    """Block weight as measured less modelled weight, where no reading in slips shows it."""
    steady, below = judged.steady, facts.below
    turned = steady.of("rotating")
    if len(turned):
        left = turned.value - judged.base[turned.start]
        words = "rotating weight less the model: no in-slips reading"
    elif len(steady):
        left = steady.value - judged.base[steady.start]
        words = "moving weights less the model without friction: no in-slips reading"
    else:
        return _from_any_rows(judged, facts)
    left = left[np.isfinite(left)]
    value = float(np.median(left)) if left.size else 0.0
    spread = float(np.quantile(np.abs(left - value), 0.9)) if left.size else 0.0
    half = max(spread, 0.03 * float(np.median(below)), 5e3)
    return Estimate(value, value - half, value + half, words, determined=False, samples=int(left.size))


def _from_any_rows(judged: Judged, facts: Facts) -> Estimate:
    """Block weight where the log has neither a steady weight nor a reading in slips.

    A turning string shows its weight less what stands on the bit, so its highest readings are nearest; one
    that never turns shows its drag as well. What never left the bit is not seen: it widens the upper side.
    """
    out, weight = ~facts.moves.slips, float(np.median(facts.below))
    left = facts.moves.hookload - judged.base
    rows, share, how = out & facts.drives.turning & np.isfinite(left), _LIGHTEST_ON_BIT, "while turning"
    if rows.sum() < noise.LEAST_SAMPLES:
        rows, share, how = (out if out.any() else ~out) & np.isfinite(left), 0.5, "without friction"
    value, middle = np.quantile(left[rows], (share, 0.5)).tolist() if rows.any() else (0.0, 0.0)
    spread = float(np.quantile(np.abs(left[rows] - middle), 0.9)) if rows.any() else 0.0
    half = max(spread, 0.03 * weight, 5e3)
    words = f"hookload {how} less the model: neither in-slips nor off-bottom reading"
    high = value + max(half, _NEVER_LIFTED * weight)
    return Estimate(value, value - half, high, words, determined=False, samples=int(rows.sum()))


def _view(facts: Facts, judged: Judged, weight: Estimate, slips: Slips) -> RigView:
    """Put together what was found."""
    log, moves, drives = facts.log, facts.moves, facts.drives
    on_bottom = on_bottom_from(judged.vote)
    measured = np.isfinite(log.values["hookload"])
    hookload = np.where(measured, moves.hookload, np.nan)
    rotating, slack, _ = judged.references
    if not np.isfinite(rotating.weight).any():
        rotating = modelled_reference(rotating, judged.base, weight)
    # Nobody drills without pumps: where nothing shows them, a hole that deepens does.
    pumping = drives.pumping | _drilled(drives.pumping_unknown & on_bottom, facts.depths.advancing)
    sliding = on_bottom & ~drives.turning & ~slips.rows
    spans = stand_spans(slips.rows, log.time)
    view = RigView(
        block_weight=weight,
        hookload=hookload,
        slips=slips.rows,
        turning=drives.turning,
        pumping=pumping,
        on_bottom=on_bottom,
        direction=moves.direction,
        block=moves.block,
        hole_depth=facts.depths.hole,
        activity=np.zeros(len(log), dtype=np.int8),
        wob_surface=weight_on_bit(rotating, hookload, ~slips.rows),
        wob_slack_off=weight_on_bit(slack, hookload, sliding),
        noise=facts.signals.noise,
        usual_flow=drives.usual_flow,
        tares=list_tares((rotating, slack), ("rotating", "slack_off"), spans),
        can_not_tell=_can_not_tell(facts, judged, weight, slips),
        bottom_vote=judged.vote,
        steady=judged.steady,
    )
    unsure = (drives.turning_unknown, drives.pumping_unknown & ~pumping)
    return replace(view, activity=classify(view, facts.signals.missing & ~slips.rows, unsure))


def _drilled(rows: Bools, advancing: Bools) -> Bools:
    """Keep the stretches in which the hole deepens."""
    runs = noise.runs_of(rows)
    gained = np.concatenate(([0], np.cumsum(advancing)))
    kept = gained[runs.stop] > gained[runs.start]
    return noise.rows_of(noise.Runs(runs.start[kept], runs.stop[kept]), len(rows))


def _can_not_tell(facts: Facts, judged: Judged, weight: Estimate, slips: Slips) -> tuple[str, ...]:
    """Say what the log could not show, in sentences."""
    rotating, slack, _ = judged.references
    notes = list(facts.drives.remarks)
    if (facts.drives.turning & facts.drives.turning_unknown).any():
        notes.append("Where rotation can't be told, loads rest on a guess by the drag the hookload shows.")
    if not rotating.known:
        notes.append(
            "No steady rotating weight off bottom: weight on bit rests on the string's modelled weight."
        )
    if not slack.known:
        notes.append("No steady slack-off weight off bottom: slides have no slack-off reference.")
    if slips.plateau is None:
        notes.append(
            f"No reading in slips: the block weight can't be read off; it is taken from {weight.source}."
        )
    seen = block_weight(slips, facts.signals, facts.moves.hookload, RigSettings())
    if seen is not None and abs(seen.value - weight.value) > max(_DISAGREES * abs(seen.value), _BOTHERS):
        notes.append(
            f"In slips the hookload reads {show_both(seen.value, 'force')}, where the block weight is taken "
            f"as {show_both(weight.value, 'force')} from {weight.source}: bias and block weight can't be "
            "told apart."
        )
    surveyed, deepest = float(facts.well.trajectory.md[-1]), float(facts.signals.bit.max(initial=0.0))
    if deepest - surveyed > _UNSURVEYED:
        notes.append(
            f"The survey ends at {show_both(surveyed, 'length')} and the bit got to "
            f"{show_both(deepest, 'length')}: the hole's direction in between is not known, the last one "
            "surveyed was held."
        )
    if facts.log.get("block_position") is None:
        notes.append("No block position: motion is judged by the bit's depth, and in slips not at all.")
    if not facts.depths.logged:
        notes.append("No hole depth of its own: it is the largest bit depth so far.")
    return tuple(notes)
