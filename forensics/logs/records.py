"""What the rig kept by hand: weights as the driller read them, slides as somebody noted them."""

from __future__ import annotations

from dataclasses import dataclass
from pathlib import Path

import numpy as np
from numpy.typing import NDArray

from forensics.case import Case
from forensics.errors import TableError
from forensics.logs.table import TimeLog
from forensics.logs.table_stamps import table_stamps
from forensics.tables import Column, Table, read_table

Floats = NDArray[np.float64]

_WEIGHTS = ("pick_up", "slack_off", "rotating")
WEIGHT_COLUMNS = (
    Column("time", "text", ("datetime", "timestamp", "date time", "stamp", "clock")),
    Column("date", "text", ("day",)),
    Column("depth", "length", ("md", "bit depth", "hole depth", "measured depth")),
    Column("pick_up", "force", ("pu", "up", "pick up weight", "pickup", "pickup weight", "up weight")),
    Column("slack_off", "force", ("so", "down", "slack off weight", "slackoff", "down weight")),
    Column("rotating", "force", ("rot", "rotating weight", "free rotating", "free rotating weight")),
    Column("pumps", "dimensionless", ("pump", "pumping", "pumps on")),
)
SLIDE_COLUMNS = (
    Column("start", "text", ("from", "begin", "slide start"), required=True),
    Column("end", "text", ("to", "stop", "slide end"), required=True),
)


@dataclass(frozen=True)
class RecordedWeight:
    """A weight written down by hand.

    `kind` is "pick_up", "slack_off" or "rotating"; `time` [s since 1970 UTC] is NaN where the table goes
    by depth; `bit_depth` [m]; `value` as the indicator showed it [N]; `pumping` None where not noted.
    """

    kind: str
    time: float
    bit_depth: float
    value: float
    pumping: bool | None


@dataclass(frozen=True)
class RecordedSlide:
    """A slide written down by hand: `by` "time" [s since 1970 UTC] or "depth" [m]."""

    by: str
    start: float
    end: float


def read_weights(case: Case, log: TimeLog) -> tuple[RecordedWeight, ...]:
    """Read the hand-recorded weights of a case.

    Parameters
    ----------
    case : Case
        `case.records.weights` names the table; without it there are none.
    log : TimeLog
        Gives the bit's depth at the moment of a weight noted by time.

    Returns
    -------
    tuple of RecordedWeight
        In the table's order; empty cells are left out.

    Raises
    ------
    TableError
        If the table can't be read, has both or neither of time and depth, or no weight.
    """
    if case.records.weights is None:
        return ()
    table = read_table(case.records.weights, WEIGHT_COLUMNS)
    timed = "time" in table.headers or "date" in table.headers
    if timed == ("depth" in table.headers):
        found = "both 'time' and 'depth'" if timed else "neither 'time' nor 'depth'"
        raise TableError(f"has {found}; one of them is needed beside the weights", file=table.file)
    if not any(kind in table.headers for kind in _WEIGHTS):
        raise TableError(f"has no weight; one of {', '.join(_WEIGHTS)} is needed", file=table.file)
    nowhere = np.full(len(table), np.nan)
    time = table_stamps(table, case.logs.timezone) if timed else nowhere
    depth = _bit_at(log, time) if timed else table.number("depth")
    pumps = table.number("pumps")
    return tuple(
        RecordedWeight(
            kind=kind,
            time=float(time[row]),
            bit_depth=float(depth[row]),
            value=float(table.number(kind)[row]),
            pumping=bool(pumps[row]) if np.isfinite(pumps[row]) else None,
        )
        for row in range(len(table))
        for kind in _WEIGHTS
        if np.isfinite(table.number(kind)[row])
    )


def _bit_at(log: TimeLog, time: Floats) -> Floats:
    """Bit depth at moments; NaN outside the log, shape (k,) [m]."""
    bit = log.values["bit_depth"]
    known = np.isfinite(bit)
    return np.interp(time, log.time[known], bit[known], left=np.nan, right=np.nan)


def read_slides(case: Case) -> tuple[RecordedSlide, ...]:
    """Read the hand-recorded slides of a case.

    Parameters
    ----------
    case : Case
        `case.records.slides` names the table; without it there are none.

    Returns
    -------
    tuple of RecordedSlide

    Raises
    ------
    TableError
        If the table can't be read, or a slide ends before it starts.
    """
    path = case.records.slides
    if path is None:
        return ()
    by, table, start, end = _ends(path, case.logs.timezone)
    for row in range(len(table)):
        if not end[row] >= start[row]:
            raise table.error("lies before the start of its slide; check the row", row, "end")
    return tuple(RecordedSlide(by, float(a), float(b)) for a, b in zip(start, end, strict=True))


def _ends(path: Path, timezone: str) -> tuple[str, Table, Floats, Floats]:
    """Read the ends as depths where they are plain numbers, else as stamps."""
    table = read_table(path, SLIDE_COLUMNS)
    if any(_is_number(text) for text in table.text("start")):
        as_depth = tuple(Column(c.name, "length", c.aliases, required=True) for c in SLIDE_COLUMNS)
        table = read_table(path, as_depth)
        return "depth", table, table.number("start"), table.number("end")
    ends = (table_stamps(table, timezone, clock=name, date="") for name in ("start", "end"))
    return ("time", table, *ends)


def _is_number(text: str) -> bool:
    try:
        float(text.replace(",", "."))
    except ValueError:
        return False
    return True
