"""Gauges near the bit as witnesses: tared off bottom, put right for their delay, and doubted."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
from numpy.typing import NDArray

from forensics.loads import Basis, Response
from forensics.logs.table import TimeLog
from forensics.replay.windows import edges_of
from forensics.replay.witness.pressure import LEAST_ZERO_SECONDS, Lesson
from forensics.replay.witness.respond import FEW, Heard, judge, learn, read_off
from forensics.replay.witness.zero import zero_line

Floats = NDArray[np.float64]
Bools = NDArray[np.bool_]

NAMES = {"downhole_wob": "downhole weight on bit", "downhole_torque": "downhole torque"}
DELAYS = (-30.0, 300.0)  # s; mud-pulse telemetry is late by tens of seconds to a few minutes (from memory)
GRID = 5.0  # s between the delays tried
SWING = 60.0  # s over which changes are compared
LEAST_MATCH = 0.3  # correlation of changes
LONGEST_STILL = 300.0  # s of one and the same value with the pumps on: the gauge or the telemetry stopped
HOLDS = 20.0  # usual holds between two updates that are no standstill
TRUE = (0.7, 1.4)  # slope of a weight gauge that may be believed: its calibration, and the hookload's
ASSUMED_SPREAD = 0.15  # one sigma of a weight gauge's slope that no rotary drilling could check
UNITS = {
    "kN taken for N or N for kN": 1000.0, "klbf taken for kN": 4.44822, "tonnef taken for kN": 9.80665,
    "klbf taken for tonnef": 2.20462, "kdaN taken for kN": 10.0, "tonnef taken for N": 9806.65,
    "klbf taken for N": 4448.22,
}  # fmt: skip
NEAR = 0.08
UNTARED = "it has no reading off bottom with the pumps on, so it can't be tared"


def hear_gauge(lesson: Lesson, channel: str) -> Heard | Response:
    """Tare a gauge near the bit, find its delay, learn its slope, and read the bit load off it.

    Parameters
    ----------
    lesson : Lesson
        The run.
    channel : str
        "downhole_wob" or "downhole_torque".

    Returns
    -------
    Heard or Response
        The response alone, with the reason, where the gauge is not believed.
    """
    log = lesson.log
    response = Response(NAMES[channel], Basis.DOWNHOLE)
    signal = log.get(channel)
    if signal is None:
        return replace(response, why="not in the log")
    still = _stopped(log, signal, lesson.rig.pumping)
    if still.any():
        response = replace(response, set_aside={"stood still with the pumps on": int(still.sum())})
    signal = np.where(still, np.nan, signal)
    if np.isfinite(signal).sum() < lesson.windows.step:
        return replace(response, why="it stood still")
    delay, match = _delay(log.time, signal, lesson.load, log.interval)
    if match < LEAST_MATCH:
        if lesson.windows.first.size:
            return replace(response, why=f"its changes do not go with those of the load ({match:.2f})")
        delay = 0.0
    signal = _brought_back(signal, round(delay / log.interval))
    zero = zero_line(log.time, signal, lesson.clear & ~_stale(signal, lesson.rig.pumping), LEAST_ZERO_SECONDS)
    if zero is None:
        zero = zero_line(log.time, signal, lesson.clear, LEAST_ZERO_SECONDS)
    if zero is None:
        return replace(response, delay=delay, why=UNTARED)
    beyond = signal - zero.line
    response = learn(replace(response, delay=delay), beyond, lesson.load, lesson.windows)
    response = _weight_gauge(response) if channel == "downhole_wob" else response
    response = judge(response)
    if not response.heard:
        return response
    return read_off(response, beyond, zero, ~lesson.rig.pumping | ~np.isfinite(signal), lesson.windows.step)


def _weight_gauge(response: Response) -> Response:
    """Hold a weight gauge to what it claims: a newton is a newton."""
    if response.why == FEW:  # nothing turned: its own word, with a wide margin
        return replace(
            response, slope=1.0, spread=ASSUMED_SPREAD, low=0.0, high=np.inf, heard=True, why=""
        )
    slope = abs(response.slope)
    if TRUE[0] < slope < TRUE[1]:
        return response
    for words, unit in UNITS.items():
        if slope > 0.0 and min(abs(slope / unit - 1.0), abs(slope * unit - 1.0)) < NEAR:
            why = f"it reads {slope:.3g} times the load in rotated footage: a unit is mistaken ({words})?"
            return replace(response, heard=False, why=why)
    why = f"it reads {response.slope:.2f} times the load in rotated footage"
    return replace(response, heard=False, why=why)


def _stopped(log: TimeLog, signal: Floats, pumping: Bools) -> Bools:
    """Rows of one and the same value for far longer than between two updates, with the pumps on."""
    row = np.arange(len(signal))
    changed = np.diff(signal, prepend=np.nan) != 0.0
    hold = np.diff(row[changed & pumping])
    usual = float(np.median(hold)) * log.interval if len(hold) else 0.0
    longest = max(LONGEST_STILL, HOLDS * usual)
    still = np.zeros(len(signal), dtype=bool)
    same = np.concatenate([[False], np.diff(signal) == 0.0]) & pumping
    for start, stop in edges_of(same).tolist():
        if log.time[stop - 1] - log.time[start] > longest:
            still[start:stop] = True
    return still


def _stale(signal: Floats, pumping: Bools) -> Bools:
    """Rows that still show the value from before the pumps came on."""
    row = np.arange(len(signal))
    started = np.maximum.accumulate(np.where(np.diff(pumping.astype(np.int8), prepend=0) > 0, row, 0))
    changed = np.maximum.accumulate(np.where(np.diff(signal, prepend=np.nan) != 0.0, row, 0))
    return changed < started


def _delay(time: Floats, signal: Floats, load: Floats, interval: float) -> tuple[float, float]:
    """Delay at which changes of the signal go best with changes of the load [s], and their correlation."""
    pace = max(GRID, interval)
    at = np.arange(time[0], time[-1], pace)
    rows = np.minimum(np.searchsorted(time, at), len(time) - 1)
    apart = max(1, round(SWING / pace))
    told, heard = (values[rows][apart:] - values[rows][:-apart] for values in (load, signal))
    best, match = 0.0, -1.0
    for shift in range(round(DELAYS[0] / pace), round(DELAYS[1] / pace) + 1):
        first = told[max(0, -shift) : len(told) - max(0, shift)]
        second = heard[max(0, shift) : len(heard) - max(0, -shift)]
        both = np.isfinite(first) & np.isfinite(second)
        if both.sum() < 3 * apart:
            continue
        x, y = first[both], second[both]
        size = float(np.sqrt((x @ x) * (y @ y)))
        value = float(x @ y) / size if size > 0.0 else 0.0
        if value > match:
            best, match = shift * pace, value
    return best, match


def _brought_back(signal: Floats, rows: int) -> Floats:
    """Put each value where it was measured."""
    moved = np.full(len(signal), np.nan)
    if rows >= 0:
        moved[: len(signal) - rows] = signal[rows:]
    else:
        moved[-rows:] = signal[:rows]
    return moved
