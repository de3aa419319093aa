"""The excerpt of a case: written, read again, and held against what it was taken from."""

from __future__ import annotations

import datetime as dt
from collections.abc import Iterator
from dataclasses import dataclass, replace
from pathlib import Path

import numpy as np
from numpy.typing import NDArray

from forensics.case import Case, load_case
from forensics.errors import InputError
from forensics.exports import excerpt
from forensics.exports.excerpt import DAY, Rows, Shift
from forensics.logs.clock import read_clock
from forensics.logs.mapping import keep, wanted
from forensics.logs.read import read_time_logs
from forensics.logs.registry import read_raw
from forensics.logs.table import FileRecord, TimeLog
from forensics.logs.zone import tzinfo_of
from forensics.rig.understand import understand_rig
from forensics.well.model import Well, load_well
from pipelines.output import whole_folder

NOTES = "excerpt.txt"
#: The window holds at least this many rows.
FEWEST = 30
#: A value read again may be off by its last digit: this part of the column's range, or this much [SI].
SAME = 2e-3
#: Part of the rows that must come back the same.
ALIKE = 0.98

Bools = NDArray[np.bool_]


@dataclass(frozen=True)
class Window:
    """Rows of a run that an excerpt takes, with the run, its well and where the hook carries the string."""

    case: Case
    log: TimeLog
    well: Well | None
    rows: slice
    carried: Bools


def write_excerpt(case_path: Path, span: tuple[str, str], target: Path) -> tuple[str, ...]:
    """Write an anonymous excerpt of a case into a folder.

    Parameters
    ----------
    case_path : Path
    span : tuple of str
        Start and end, ISO 8601; in the case's zone where no offset is given.
    target : Path
        Folder for the excerpt, whole or not at all.

    Returns
    -------
    tuple of str
        What was done to each file, in sentences.

    Raises
    ------
    InputError
        If the case can't be read, the span is no pair of stamps or holds too few rows, or the folder can't
        be written.
    """
    window = _window(load_case(case_path), span)
    shift = excerpt.choose_shift(window.log, window.well, float(window.log.time[window.rows][0]))
    with whole_folder(target) as fresh:
        said = [_write_log(window, number, shift, fresh) for number in range(len(window.log.files))]
        taken = [(name, words) for name, words in said if name]
        if window.well is not None:
            excerpt.write_tables(window.well, shift, fresh)
        excerpt.write_case(window.case, window.well, [name for name, _ in taken], fresh)
        words = (*(words for _, words in said), *_notes(window, shift))
        (fresh / NOTES).write_text("\n".join(words) + "\n", encoding="utf-8", newline="\n")
    return words


def _window(case: Case, span: tuple[str, str]) -> Window:
    log = read_time_logs(case)
    start, end = (_moment(text, case.logs.timezone) for text in span)
    first, stop = np.searchsorted(log.time, [start, np.nextafter(end, np.inf)]).tolist()
    if stop - first < FEWEST:
        zone = tzinfo_of(case.logs.timezone)
        run = [
            dt.datetime.fromtimestamp(float(t), zone).isoformat(timespec="seconds") for t in log.time[[0, -1]]
        ]
        raise InputError(
            f"--excerpt {span[0]} {span[1]} holds {stop - first} rows and needs {FEWEST}; the run goes from "
            f"{run[0]} to {run[1]}",
            file=case.path,
        )
    carried = np.ones(len(log), dtype=bool)
    try:
        well = load_well(case)
        carried = ~understand_rig(log, well, case).slips
    except InputError:
        well = None
    return Window(case, log, well, slice(first, stop), carried)


def _moment(text: str, timezone: str) -> float:
    try:
        moment = dt.datetime.fromisoformat(text)
    except ValueError:
        raise InputError(
            f"--excerpt has {text!r}; two stamps are needed, such as 2024-05-03T10:20 2024-05-03T11:00"
        ) from None
    return (moment if moment.tzinfo else moment.replace(tzinfo=tzinfo_of(timezone))).timestamp()


def _write_log(window: Window, number: int, shift: Shift, folder: Path) -> tuple[str, str]:
    """Write what one file has in the window, in its own dialect if that reads back as it should."""
    record = window.log.files[number]
    path = _path_of(window, number)
    inside = window.log.time[window.rows]
    if record.end < inside[0] or record.start > inside[-1]:
        return "", f"{path.name}: nothing of it lies in the window."
    suffix = "".join(path.suffixes[-2:]) if path.suffix == ".gz" else path.suffix
    name = f"log_{number + 1}{suffix}"
    for month_first in (False, True):
        if _rewritten(window, number, (shift, month_first), folder / name):
            return name, f"log {number + 1} ({record.format}): cut line by line, in its own dialect."
    (folder / name).unlink(missing_ok=True)
    name = f"log_{number + 1}.csv"
    rows = _rows_of(window, record)
    excerpt.write_plain(window.log, rows, shift, window.carried[rows], folder / name)
    return name, (
        f"log {number + 1} ({record.format}): written anew as CSV, since its lines can't be moved as they "
        "are; faults of its form are lost."
    )


def _rows_of(window: Window, record: FileRecord) -> slice:
    """Rows of the joined log in the window and in one file's span."""
    time = window.log.time
    first = max(window.rows.start, int(np.searchsorted(time, record.start)))
    stop = min(window.rows.stop, int(np.searchsorted(time, record.end, side="right")))
    return slice(first, stop)


def _rewritten(window: Window, number: int, how: tuple[Shift, bool], target: Path) -> bool:
    """Write a file's lines again and read them; whether they say the same, moved."""
    case, record = window.case, window.log.files[number]
    if not record.format.startswith(("CSV", "LAS")):
        return False
    path = _path_of(window, number)
    try:
        rows = _lines_of(window, number)
        excerpt.rewrite_file(path, record, rows, how, target)
        bare = replace(case, logs=replace(case.logs, time=(target,), depth=()))
        again = read_time_logs(bare)
    except (InputError, ValueError, IndexError):
        return False
    return all(_same(window, again, name, how[0]) for name in ("bit_depth", "hookload"))


def _path_of(window: Window, number: int) -> Path:
    """Path of a log; a file may hold several."""
    return window.log.files[number].path or window.case.logs.time[number]


def _lines_of(window: Window, number: int) -> Rows:
    """Lines of a file that lie in the window."""
    case, inside = window.case, window.log.time[window.rows]
    names = wanted(case.logs.channels)
    path = _path_of(window, number)
    raw = read_raw(path, lambda name: keep(name, names))
    choice = case.logs.channels.get("time")
    clock = read_clock(
        raw, case.logs.zone_of(path), None if choice is None else (choice.column, choice.unit), None
    )
    held = np.flatnonzero((clock.time >= inside[0]) & (clock.time <= inside[-1]))
    if len(held) == 0 or not clock.dated:
        raise ValueError("no line of the file can be placed in time")
    first, stop = int(held[0]), int(held[-1]) + 1
    near = np.clip(np.searchsorted(window.log.time, clock.time[first:stop]), 0, len(window.log) - 1)
    return Rows(first, stop, window.carried[near])


def _same(window: Window, again: TimeLog, channel: str, shift: Shift) -> bool:
    """Whether a channel came back as it was, moved."""
    log = window.log
    at = np.searchsorted(log.time, again.time - shift.days * DAY)
    at = np.clip(at, 0, len(log) - 1)
    if np.median(np.abs(log.time[at] - (again.time - shift.days * DAY))) > 0.5 * log.interval:
        return False
    was = log.hookload_logged if channel == "hookload" else log.values[channel]
    now = again.hookload_logged if channel == "hookload" else again.values[channel]
    moved = shift.load * window.carried[at] if channel == "hookload" else shift.depth
    off = np.abs(now - was[at] - moved)
    known = np.isfinite(off)
    return bool(known.any()) and float(np.mean(off[known] <= SAME * np.nanmax(np.abs(was)))) >= ALIKE


def _notes(window: Window, shift: Shift) -> Iterator[str]:
    yield "Names of well, field, rig, components and files were left out."
    yield "Columns that no channel was read from are empty."
    yield "Stamps were moved by whole days, directions turned by one angle."
    if shift.depth:
        yield "Depths were moved by adding vertical hole at the top, and the hook's load by the pipe in it."
    else:
        yield "Depths are as they were: the hole leans at its top, or its tables could not be read."
    if window.well is None:
        yield "Survey, hole, string and mud could not be read and are not part of the excerpt."
    yield "Hand-kept records and depth logs were not copied. Look through the files before you share them."
