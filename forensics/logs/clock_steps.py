"""Clocks that were set while they recorded: found where the stamps step and the rig plainly did not.

A recorder whose clock is put back tells an hour, or some seconds, twice; one put forward leaves an hour out.
Bit and block tell which it was: they go on as if nothing had happened. Rows that only come late, and blocks
written twice, are something else and left to the joining of files.
"""

from __future__ import annotations

import datetime as dt
from collections.abc import Mapping, Sequence
from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray

from forensics.logs.piece import CLASH, Piece, interval_of, share_different
from forensics.logs.table import Step

Floats = NDArray[np.float64]
HOUR, HALF_HOUR = 3600.0, 1800.0
# A fall of fewer intervals is a row out of place.
LEAST_FALL = 3.0
# More falls than this in one file are no settings of a clock.
MOST_STEPS = 12
POSITIONS = ("bit_depth", "block_position")
# Positions that go on: this far apart at most, or as far as the fastest hoisting goes in the time [m, m/s].
NEAR, FASTEST = 0.3, 1.5
# A block or bit that moves [m/s], and how alike its speed is on both sides of a step.
MOVING, ALIKE = 0.02, 0.5
# Files of one recorder follow one another within this [s].
FOLLOWS = 2.0 * HOUR
# Rows a file must have, and two files must share, for any of this.
ENOUGH = 20


@dataclass(frozen=True)
class Mended:
    """Pieces with their clocks carried on, the account, and what the reader should know."""

    pieces: list[Piece]
    steps: list[Step]
    warnings: list[str]


def mend_clocks(pieces: Sequence[Piece]) -> Mended:
    """Carry clocks on that were set back or forward while they recorded.

    Parameters
    ----------
    pieces : sequence of Piece
        Files in the order the case lists them.

    Returns
    -------
    Mended
        The same files in the same order; stamps after a setting go on in the clock before it, in that file
        and in those that follow it.
    """
    done = Mended(list(pieces), [], [])
    order = sorted(range(len(pieces)), key=lambda i: float(pieces[i].time[0]) if len(pieces[i].time) else 0.0)
    carried, last = 0.0, None
    for i in order:
        piece = pieces[i]
        if last is None or not _follows(pieces[last], piece):
            carried = 0.0
        if last is not None and (between := _boundary(pieces[last], piece)):
            carried += between
            _tell(done, piece, 0, between)
        shift = carried + _shifts(done, piece)
        if shift.any():
            done.pieces[i] = replace(piece, time=piece.time + shift)
        carried, last = float(shift[-1]) if len(shift) else carried, i
    return done


def _follows(one: Piece, other: Piece) -> bool:
    gap = other.time[0] - one.time[-1]
    return bool(-FOLLOWS < gap < FOLLOWS)


def _tell(done: Mended, piece: Piece, row: int, shift: float) -> None:
    """Account for one setting of a clock."""
    stamp = dt.datetime.fromtimestamp(float(piece.time[row]), dt.UTC).strftime("%Y-%m-%d %H:%M:%S")
    way = "back" if shift > 0 else "forward"
    rows = len(piece.time) - row
    hours = abs(abs(shift) - HOUR) < 120.0
    span = "an hour" if hours else f"{abs(shift):.0f} s"
    why = " (summer time?)" if hours else ""
    detail = f"{piece.path.name}, line {int(piece.line[row])}: set {way} by {span}, bit and block went on"
    done.steps.append(Step("clock setting undone", rows, detail=detail))
    done.warnings.append(
        f"{piece.path.name}: the clock was set {way} by {span} at {stamp}{why}, while bit and block went on; "
        "stamps from there on follow the clock before. If it was summer time, name the rig's zone under "
        "[logs] timezone"
    )


def _shifts(done: Mended, piece: Piece) -> Floats:
    """Time to add to each row of a file [s], shape (n,)."""
    time = piece.time
    out = np.zeros(len(time))
    step = np.diff(time)
    usual = interval_of(time)
    if len(step) < ENOUGH or not np.isfinite(usual):
        return out
    falls = np.flatnonzero(step < -LEAST_FALL * usual)
    leaps = np.flatnonzero(np.abs(step - HOUR - usual) <= 2.0 * usual)
    if len(falls) + len(leaps) > MOST_STEPS:
        return out
    for at in np.sort(np.concatenate([falls, leaps])).tolist():
        back = step[at] < 0
        shift = usual - step[at]
        if (_set_back(piece, at) if back else _set_forward(piece, at)) and _goes_on(piece, at):
            out[at + 1 :] += shift
            _tell(done, piece, at + 1, float(shift))
    return out


def _set_back(piece: Piece, at: int) -> bool:
    """Tell whether the stamps after a fall were taken already, by rows with other values."""
    time = piece.time
    half = 0.5 * interval_of(time)
    before = np.arange(max(0, at + 1 - _rows_within(time, at)), at + 1)
    after = np.arange(at + 1, len(time))
    again = after[time[after] <= time[at] + half]
    stop = np.flatnonzero(np.diff(again) > 1)
    again = again[: stop[0] + 1] if len(stop) else again
    if len(again) < LEAST_FALL:
        return False
    order = before[np.argsort(time[before], kind="stable")]
    nearest = order[np.clip(np.searchsorted(time[order], time[again]), 0, len(order) - 1)]
    close = np.abs(time[nearest] - time[again]) <= 2.0 * half
    if close.mean() < 0.5:
        return False
    return share_different(piece.values, nearest[close], again[close]) > CLASH


def _rows_within(time: Floats, at: int) -> int:
    """Rows before a fall that its own reach can touch."""
    reach = time[at] - time[at + 1]
    return int((time[: at + 1] >= time[at] - 1.5 * reach).sum()) + 1


def _goes_on(piece: Piece, at: int) -> bool:
    """Tell whether every position known goes on across a step as within one interval."""
    reach = max(NEAR, FASTEST * interval_of(piece.time))
    known = False
    for name in POSITIONS:
        values = piece.values.get(name)
        if values is None or not np.isfinite(values[at : at + 2]).all():
            continue
        known = True
        if abs(values[at + 1] - values[at]) > reach:
            return False
    return known


def _set_forward(piece: Piece, at: int) -> bool:
    """Tell whether an hour left out was none: on the hour, with block or bit moving alike on both sides."""
    usual = interval_of(piece.time)
    if min(piece.time[at + 1] % HOUR, HOUR - piece.time[at + 1] % HOUR) > 1.5 * usual:
        return False
    for name in POSITIONS:
        values = piece.values.get(name)
        if values is None:
            continue
        one = _speed(values[max(0, at - 5) : at + 1], usual)
        other = _speed(values[at + 1 : at + 7], usual)
        jump = (values[at + 1] - values[at]) / usual
        if min(abs(one), abs(other)) > MOVING and all(
            abs(v - one) < ALIKE * abs(one) + 0.01 for v in (other, jump)
        ):
            return True
    return False


def _speed(values: Floats, usual: float) -> float:
    return float(np.median(np.diff(values)) / usual) if len(values) > 1 and np.isfinite(values).all() else 0.0


def _boundary(one: Piece, other: Piece) -> float:
    """Time by which a clock was set back between two files of one recorder [s]; 0 where it was not."""
    back = one.time[-1] - other.time[0]
    usual = interval_of(one.time)
    hours = round(back / HALF_HOUR) * HALF_HOUR
    if hours <= 0.0 or not abs(back + usual - hours) <= 2.0 * usual or other.time[-1] <= one.time[-1]:
        return 0.0
    ends: Mapping[str, Floats] = {
        name: np.array([one.values[name][-1], other.values[name][0]])
        for name in POSITIONS if name in one.values and name in other.values
    }  # fmt: skip
    seam = Piece(other.path, np.array([0.0, usual]), np.zeros(2, dtype=np.int64), ends)
    if not _goes_on(seam, 0):
        return 0.0
    _, mine, its = np.intersect1d(one.time, other.time, return_indices=True)
    both = {name: (one.values[name][mine], other.values[name][its]) for name in ends}
    apart = [gap[np.isfinite(gap)] for gap in (np.abs(a - b) for a, b in both.values())]
    clash = max((float((gap > NEAR).mean()) for gap in apart if len(gap)), default=0.0)
    return float(back + usual) if len(mine) >= ENOUGH and clash > CLASH else 0.0
