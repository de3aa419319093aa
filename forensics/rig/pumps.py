"""Shift of the hookload when the pumps come on: thrust on the hose, pressure in the string."""

from __future__ import annotations

import numpy as np

from forensics.estimate import Estimate
from forensics.rig import noise
from forensics.rig.judge import Facts, Judged
from forensics.rig.steady import KINDS

# Quiet time compared on each side of a change of the pumps, and what is left out about it [s].
_SIDE = 30.0
_LEAVE_BEFORE = 3.0
_LEAVE_AFTER = 8.0
# Readings make a pair when this near in depth [m] and time [s].
_PAIR_DEPTH = 60.0
_PAIR_TIME = 7200.0
# The block is at rest when it goes no further than this from row to row [m].
_STILL_STEP = 0.01
# Changes needed, and how many standard errors the shift must stand out by.
_LEAST_CHANGES = 3
_CLEAR = 3.0
# What drag that changes along the hole can feign [N]; a shift below twice that isn't corrected.
_FEIGNED = 1e3
_FIT_ROUNDS = 12
_HUBER = 2.0
# A shift beyond this share of the string's weight is something else.
_LARGEST_SHARE = 0.05
_Z90 = 1.645


def pump_shift(facts: Facts, judged: Judged) -> Estimate | None:
    """Learn the shift from weights taken with and without pumps, and from changes of the pumps at rest.

    Parameters
    ----------
    facts : Facts
        Signals, motion and drives.
    judged : Judged
        Steady readings, and the votes for being off bottom.

    Returns
    -------
    Estimate or None
        Hookload with pumps less hookload without [N]; None where it doesn't show.

    Notes
    -----
    Two readings of one kind, near one another in depth and time, one with pumps and one without, differ by
    the shift and by little else. So do the moments before and after a change of the pumps at which the
    block is still, the string off bottom, and turning or not the same on both sides.
    """
    design, change = _from_pairs(facts, judged)
    seen = _from_changes(facts, judged)
    if seen.size:
        alone = np.zeros((seen.size, design.shape[1]))
        alone[:, 0] = 1.0
        design, change = np.vstack((design, alone)), np.concatenate((change, seen))
    return _settle(design, change, float(np.median(facts.below)))


def _from_pairs(facts: Facts, judged: Judged) -> tuple[noise.Floats, noise.Floats]:
    """Difference of each reading from the one before of its kind: pumps, and by kind depth and block height.

    Drag grows with depth and pipe above the rotary with the block, so both stand in the fit.
    """
    steady, time = judged.steady, facts.signals.time
    left = steady.value - judged.base[(steady.start + steady.stop) // 2]
    rows, change = [], []
    for code in range(len(KINDS)):
        index = np.flatnonzero(steady.kind == code)
        first, second = index[:-1], index[1:]
        apart = np.abs(steady.bit[second] - steady.bit[first])
        near = (apart < _PAIR_DEPTH) & (time[steady.start[second]] - time[steady.start[first]] < _PAIR_TIME)
        first, second = first[near], second[near]
        row = np.zeros((len(first), 1 + 2 * len(KINDS)))
        row[:, 0] = steady.pumping[second].astype(float) - steady.pumping[first]
        row[:, 1 + 2 * code] = steady.bit[second] - steady.bit[first]
        row[:, 2 + 2 * code] = steady.block[second] - steady.block[first]
        rows.append(row)
        change.append(left[second] - left[first])
    return np.vstack(rows), np.concatenate(change)


def _from_changes(facts: Facts, judged: Judged) -> noise.Floats:
    """Hookload after less before each change of the pumps at which nothing else changed."""
    signals, moves, drives = facts.signals, facts.moves, facts.drives
    step = np.abs(np.diff(moves.block, prepend=moves.block[:1]))
    still = step < _STILL_STEP + noise.NOISE_FACTOR * signals.block_noise
    quiet = still & ~moves.slips & (noise.hold(judged.vote, initial=-1) < 0) & signals.weighed
    # A change of rotation ends a quiet stretch.
    quiet[1:] &= drives.turning[1:] == drives.turning[:-1]
    runs = noise.runs_of(quiet)
    found = []
    for row in np.flatnonzero(np.diff(drives.pumping.astype(np.int8))).tolist():
        k = int(np.searchsorted(runs.start, row, side="right")) - 1
        if k < 0 or runs.stop[k] <= row + 1:
            continue
        now = signals.time[row]
        before = _rows(signals.time, now - _SIDE, now - _LEAVE_BEFORE, (runs.start[k], row))
        after = _rows(signals.time, now + _LEAVE_AFTER, now + _SIDE + _LEAVE_AFTER, (row + 1, runs.stop[k]))
        if min(before.stop - before.start, after.stop - after.start) < noise.LEAST_SAMPLES:
            continue
        if drives.pumping[before].any() == drives.pumping[after].any():
            continue
        sign = 1.0 if drives.pumping[row + 1] else -1.0
        found.append(sign * float(np.median(moves.hookload[after]) - np.median(moves.hookload[before])))
    return np.array(found)


def _rows(time: noise.Floats, start: float, stop: float, within: tuple[int, int]) -> slice:
    """Rows between two times and two rows."""
    first = max(int(np.searchsorted(time, start)), within[0])
    return slice(first, max(first, min(int(np.searchsorted(time, stop, side="right")), within[1])))


def _settle(design: noise.Floats, change: noise.Floats, string_weight: float) -> Estimate | None:
    """Fit the changes, outliers weighed down; the shift, if it stands clear of its error."""
    told = int(np.count_nonzero(design[:, 0]))
    used = np.abs(design).max(axis=0, initial=0.0) > 0
    if told < _LEAST_CHANGES or len(change) <= used.sum() + 1:
        return None
    columns = design[:, used]
    weight = np.ones(len(change))
    for _ in range(_FIT_ROUNDS):
        scaled = columns * weight[:, None]
        fit = np.linalg.lstsq(scaled, change * weight, rcond=None)[0]
        off = change - columns @ fit
        sigma = max(1.4826 * float(np.median(np.abs(off))), 1.0)
        weight = np.minimum(1.0, (_HUBER * sigma / np.maximum(np.abs(off), 1e-9)) ** 0.5)
    error = sigma * float(np.linalg.pinv(scaled.T @ scaled)[0, 0]) ** 0.5
    if abs(fit[0]) < max(_CLEAR * error, 2.0 * _FEIGNED) or abs(fit[0]) > _LARGEST_SHARE * string_weight:
        return None
    half = _Z90 * error + _FEIGNED
    value = float(fit[0])
    return Estimate(value, value - half, value + half, "readings with and without pumps", samples=told)
