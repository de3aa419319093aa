"""Hole depth, how far the bit is off it, and whether new depth is being drilled or run through."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from forensics.logs.table import TimeLog
from forensics.rig import noise
from forensics.rig.noise import Bools, Floats
from forensics.rig.signals import Signals
from forensics.well.model import Well

# New depth gained faster than this is a trip, not drilling (180 m/h) [m/s].
_FASTEST_DRILLING = 0.05
_ADVANCE_WINDOW = 30.0
# The bit counts as near bottom within this, plus what the string stretches by [m].
_NEAR = 1.0
# Load by which the string may be compressed or stretched at a tag, at least [N].
_LEAST_STRETCH_LOAD = 100e3
# Kinds of pipe that are run into a hole already drilled.
_RUN_IN = frozenset({"casing", "liner", "tubing"})
_DRILLS = frozenset({"bit", "motor", "reamer"})


@dataclass(frozen=True)
class DepthView:
    """Where the bit is against bottom; arrays of shape (n,).

    Parameters
    ----------
    hole : ndarray
        Hole depth [m].
    gap : ndarray
        Bit off bottom, counted from where the bit usually stands while the hole deepens [m].
    near : float
        The bit may be on bottom when the gap is smaller [m].
    advancing : ndarray of bool
        Hole deepens at a drilling rate.
    run_in : ndarray of bool
        The deepest point was reached at tripping speed: it is no bottom.
    logged : bool
        Whether the log has a hole depth.
    """

    hole: Floats
    gap: Floats
    near: float
    advancing: Bools
    run_in: Bools
    logged: bool


def find_depths(log: TimeLog, signals: Signals, well: Well, slips: Bools) -> DepthView:
    """Work out hole depth and the bit's place against it.

    Parameters
    ----------
    log : TimeLog
        For the `hole_depth` channel; without it the running maximum of the bit's depth serves.
    signals : Signals
        Filled channels.
    well : Well
        The string (what stretches, whether it is casing) and the hole table.
    slips : ndarray of bool, shape (n,)
        Rows in slips.

    Returns
    -------
    DepthView
        Hole depth, gap and what moves the hole's bottom.
    """
    logged = log.get("hole_depth")
    if logged is not None and _is_the_bit(logged, signals):
        logged = None
    steady_bit = noise.running_median(signals.bit, noise.LEAST_SAMPLES)
    deepest = np.maximum.accumulate(steady_bit)
    hole = deepest if logged is None else noise.fill(logged)
    if logged is None and _is_run_in(well):
        hole = np.maximum(hole, float(well.hole.bottom[-1]))
    window = noise.window_seconds(_ADVANCE_WINDOW, signals.interval)
    gain = noise.rate(hole, signals.time, window)
    local = noise.rate(hole, signals.time, noise.window_seconds(_ADVANCE_WINDOW / 3, signals.interval))
    grid = max(noise.NOISE_FACTOR * signals.bit_noise, 0.02) / window
    drilled = (gain > grid) & (local > 0) & (gain < _FASTEST_DRILLING) & ~slips
    run_in = np.zeros(len(hole), dtype=bool)
    if logged is None:
        fast = (gain >= _FASTEST_DRILLING) & ~slips
        mark = np.where(fast, 1, np.where(drilled, -1, 0)).astype(np.int8)
        run_in = noise.hold(mark, initial=1) == 1
    raw = hole - signals.bit
    gap = raw - _usual_gap(raw, drilled & (raw < 5.0))
    near = _NEAR + _stretch(signals, well, slips)
    return DepthView(hole, gap, near, drilled & (gap < near) & ~run_in, run_in, logged is not None)


def _is_the_bit(hole: Floats, signals: Signals) -> bool:
    """Whether the hole depth given follows the bit up and down: then it is the bit's depth again."""
    if signals.bit.max() - signals.bit.min() < 5.0:
        return False
    filled = noise.fill(hole)
    drop = np.maximum.accumulate(filled) - filled
    lift = np.maximum.accumulate(signals.bit) - signals.bit
    return bool(lift.max() > 5.0 and np.quantile(np.abs(drop - lift), 0.95) < 0.5)


def _is_run_in(well: Well) -> bool:
    """Tell whether the string is pipe run into a hole already drilled, with nothing on it that drills."""
    kinds = {part.kind for part in well.string.components}
    return bool(kinds & _RUN_IN) and not kinds & _DRILLS


def _usual_gap(raw: Floats, drilled: Bools) -> float:
    """Gap at which the hole deepens: the two depths may be counted with and without stretch."""
    return float(np.median(raw[drilled])) if drilled.sum() >= noise.LEAST_SAMPLES else 0.0


def _stretch(signals: Signals, well: Well, slips: Bools) -> float:
    """How far a tag may move the bit's counted depth: the string as a spring under its hookload range."""
    inside = ~slips & ~signals.missing
    if not inside.any():
        return 0.0
    low, high = np.quantile(signals.hookload[inside], (0.02, 0.98))
    load = max(_LEAST_STRETCH_LOAD, 0.5 * float(high - low))
    length = max(float(np.quantile(signals.bit, 0.9)), 0.0)
    return min(load * length / float(well.string.components[-1].axial), 4.0)
