"""Rotation guessed from the hookload, where the log has neither rotary speed nor torque."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
from scipy import ndimage

from forensics.estimate import Estimate
from forensics.rig import noise
from forensics.rig.activity import SMOOTHING
from forensics.rig.judge import Facts, Judged
from forensics.rig.noise import Bools, Floats

# The drag that rotation takes away must be this large to tell by: a share of the string's weight, and [N].
_LEAST_SHARE = 0.04
_LEAST_DRAG = 20e3
# Share of the drag left in the hookload: below the first the string turns, above the second it doesn't.
_TURNS = 0.5
_SLIDES = 0.75
# While drilling, weight on bit looks like drag: the string turns below this share.
_DRILLS = 0.85
# At rest rotation leaves little drag behind.
_RESTS = 0.35
# A reversal looks like rotation until the whole string moves: shorter spells are none [s].
_LEAST_TURNING = 40.0
# Among this many readings one with less than this share of the largest drag was taken while turning.
_NEIGHBOURS = 7
_SLIDING_SHARE = 0.6
_FEED_WINDOW = 30.0
_FEED = 0.02


def guess_turning(facts: Facts, judged: Judged, block_weight: Estimate) -> Facts:
    """Judge rotation by how much of the drag the hookload shows.

    Parameters
    ----------
    facts : Facts
        Known before; `drives.turning_unknown` marks the rows to judge.
    judged : Judged
        Pick-up and slack-off references, from the moving weights of the run.
    block_weight : Estimate
        With the modelled string weight, the weight without drag [N].

    Returns
    -------
    Facts
        With `drives.turning` filled where it could be judged. The rows stay marked as unknown, and their
        activity with them: this is for the mechanics, which else would take rotary drilling for a slide.

    Notes
    -----
    A string that slides down drilling shows the slack-off weight less the weight on bit, never more; one
    that turns shows its rotating weight less the weight on bit. Moving off bottom it shows full drag, or
    next to none.
    """
    drives, moves = facts.drives, facts.moves
    vote = np.zeros(len(moves.hookload), dtype=np.int8)
    bare = judged.base + block_weight.value
    smooth = noise.running_mean(moves.hookload, facts.signals.count(SMOOTHING))
    down, told_down = _share(bare - smooth, _full_drag(judged, "slack_off", facts, block_weight), judged.base)
    up, told_up = _share(smooth - bare, _full_drag(judged, "pick_up", facts, block_weight), judged.base)
    near = (facts.depths.gap < facts.depths.near) & ~facts.depths.run_in
    last = noise.hold(moves.direction)
    still = moves.direction == 0
    for told, share, sign in ((told_down, down, 1), (told_up, up, -1)):
        moving = told & ~near & (moves.direction == sign)
        resting = told & ~near & still & (last == sign)
        vote[(moving & (share < _TURNS)) | (resting & (share < _RESTS))] = 1
        vote[(moving | resting) & (share > _SLIDES)] = -1
    drilling = told_down & near & facts.depths.advancing & _fed(facts)
    vote[drilling & (down < _DRILLS)] = 1
    vote[told_down & near & (down > 1.0)] = -1
    vote[told_up & near & (up > _TURNS)] = -1
    vote[~facts.signals.weighed] = 0
    vote[moves.slips] = -1
    turns = noise.despeckle(noise.hold(vote, initial=-1) > 0, facts.signals.count(_LEAST_TURNING))
    turning = np.where(drives.turning_unknown, turns & ~moves.slips, drives.turning)
    return replace(facts, drives=replace(drives, turning=turning))


def _full_drag(judged: Judged, kind: str, facts: Facts, block_weight: Estimate) -> Floats:
    """Drag of a string that slides, from those readings that show most of it among their neighbours."""
    readings = judged.steady.of(kind)
    if not len(readings):
        return np.full(len(judged.base), np.nan)
    middle = (readings.start + readings.stop) // 2
    sign = -1.0 if kind == "slack_off" else 1.0
    drag = sign * (readings.value - judged.base[middle] - block_weight.value)
    kept = drag >= _SLIDING_SHARE * ndimage.maximum_filter1d(drag, _NEIGHBOURS)
    if not kept.any():  # every reading lies on the wrong side of the weight without drag
        return np.full(len(judged.base), np.nan)
    return np.interp(facts.signals.time, facts.signals.time[middle[kept]], drag[kept])


def _share(drag: Floats, full: Floats, weight: Floats) -> tuple[Floats, Bools]:
    """Drag seen over full drag, and where the full drag is known and large enough to tell by."""
    told = np.nan_to_num(full) > np.maximum(_LEAST_SHARE * weight, _LEAST_DRAG)
    return np.where(told, drag / np.where(told, full, 1.0), np.nan), told


def _fed(facts: Facts) -> Bools:
    """Mark rows at which the block has been going down, however slowly."""
    window = noise.window_seconds(_FEED_WINDOW, facts.signals.interval)
    fall = -noise.rate(noise.fill(facts.moves.block), facts.signals.time, window) * window
    return fall > _FEED + noise.NOISE_FACTOR * facts.signals.block_noise
