"""Shift of the hookload when the pumps come on: thrust on the hose, pressure in the string."""

from __future__ import annotations

import numpy as np

from forensics.estimate import Estimate
from forensics.rig import noise
from forensics.rig.judge import Facts, Judged

# Quiet time compared on each side of a change of the pumps, and what is left out about it [s].
_SIDE = 30.0
_LEAVE_BEFORE = 3.0
_LEAVE_AFTER = 8.0
# The block is at rest when it goes no further than this from row to row [m].
_STILL_STEP = 0.01
# Changes needed, and how many standard errors the shift must stand out by.
_LEAST_CHANGES = 3
_CLEAR = 3.0
# A shift beyond this share of the string's weight is something else.
_LARGEST_SHARE = 0.05
_Z90 = 1.645


def pump_shift(facts: Facts, judged: Judged) -> Estimate | None:
    """Learn the shift from moments at which the pumps changed and nothing else did.

    Parameters
    ----------
    facts : Facts
        Signals, motion and drives.
    judged : Judged
        For being off bottom.

    Returns
    -------
    Estimate or None
        Hookload with pumps less hookload without [N]; None where it doesn't show.

    Notes
    -----
    Block still, out of slips, off bottom, turning or not the same on both sides: the string then holds what
    friction holds, and only the pumps move the reading.
    """
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
    return _settle(np.array(found), float(np.median(facts.below)))


def _rows(time: noise.Floats, start: float, stop: float, within: tuple[int, int]) -> slice:
    """Rows between two times and two rows."""
    first = max(int(np.searchsorted(time, start)), within[0])
    return slice(first, max(first, min(int(np.searchsorted(time, stop, side="right")), within[1])))


def _settle(found: noise.Floats, string_weight: float) -> Estimate | None:
    """Median of the changes, if it stands clear of their scatter."""
    if found.size < _LEAST_CHANGES:
        return None
    value = float(np.median(found))
    error = 1.4826 * float(np.median(np.abs(found - value))) / found.size**0.5 * (np.pi / 2) ** 0.5
    error = max(error, 1e-3 * abs(value))
    if abs(value) < _CLEAR * error or abs(value) > _LARGEST_SHARE * string_weight:
        return None
    half = _Z90 * error
    return Estimate(
        value, value - half, value + half, "changes of the pumps at rest", samples=int(found.size)
    )
