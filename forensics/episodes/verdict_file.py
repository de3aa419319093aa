"""`verdicts.csv`: what the engineer makes of the episodes, kept by hand beside the case.

One row a verdict, as CSV with a header; lines that start with #, and columns of other names, are passed over.

========= =========================================================================================
column    holds
========= =========================================================================================
start     stamp at which the episode begins, as in the other records (the case's zone where it has none)
end       stamp at which it ends
top_md    optional: upper end of the place meant, with a unit in the header (`top_md [m]`, `top_md_m`)
bottom_md optional: lower end of it
kind      optional: buckling, lockup, drag or torque
verdict   accept, reject or relabel; an empty cell means none, and the row is passed over
cause     for relabel, and only there: one of the names in `causes.names.Cause`
note      optional: a line of text
id        optional: the episode's id when the verdict was given; ids change between runs, times decide
========= =========================================================================================
"""

from __future__ import annotations

import difflib
from dataclasses import dataclass
from pathlib import Path
from typing import TypeVar

from forensics.case import Case
from forensics.episodes.catalogue import Kind, Word
from forensics.episodes.causes.names import Cause
from forensics.errors import TableError, legible, nearest, no_file
from forensics.logs.table_stamps import table_stamps
from forensics.tables import NULLS, Column, Table, decode, plain, read_table
from forensics.tables.reader import LARGEST

W = TypeVar("W", Word, Cause, Kind)

#: Taken from the case's folder where `[records] verdicts` names no other.
NAME = "verdicts.csv"

COLUMNS = (
    Column("start", "text", ("from", "begin"), required=True),
    Column("end", "text", ("to", "stop"), required=True),
    Column("top_md", "length", ("top",)),
    Column("bottom_md", "length", ("bottom",)),
    Column("kind", "text"),
    Column("verdict", "text"),
    Column("cause", "text"),
    Column("note", "text", ("notes", "remark", "comment")),
    Column("id", "text", ("episode",)),
)


@dataclass(frozen=True)
class WrittenVerdict:
    """One row of the file: times [s since 1970 UTC]; depths [m] NaN, and `kind` None, where not given."""

    line: int
    start: float
    end: float
    top_md: float
    bottom_md: float
    kind: Kind | None
    word: Word
    cause: str = ""
    note: str = ""
    id: str = ""


def verdicts_path(case: Case) -> Path | None:
    """Find the file of verdicts: the one the case names, else `verdicts.csv` beside it, if there is one."""
    if case.records.verdicts is not None:
        return case.records.verdicts
    beside = case.path.parent / NAME
    return beside if beside.is_file() else None


def read_verdicts(case: Case) -> tuple[WrittenVerdict, ...]:
    """Read the engineer's verdicts on a case's episodes.

    Parameters
    ----------
    case : Case
        See `verdicts_path` for where they are looked for.

    Returns
    -------
    tuple of WrittenVerdict
        In the file's order; rows without a verdict are left out.

    Raises
    ------
    TableError
        If the file can't be read, a word, kind or cause is unknown, a relabelled episode has no cause or
        another one has, a note or cause stands without a verdict, or a row ends before it starts.
    """
    path = verdicts_path(case)
    if path is None or not has_rows(path):
        return ()
    table = read_table(path, COLUMNS)
    _check_columns(table)
    ends = [table_stamps(table, case.logs.timezone, clock=name, date="") for name in ("start", "end")]
    read = []
    for row in range(len(table)):
        word = _choice(table, row, "verdict", Word)
        if word is None:
            _refuse_idle(table, row)
            continue
        start, end = (float(at[row]) for at in ends)
        if not end > start:
            raise table.error("is not after the start; the span of an episode is needed", row, "end")
        read.append(_written(table, row, word, (start, end)))
    return tuple(read)


def has_rows(path: Path) -> bool:
    """Whether a file holds more than its header: a run without episodes gives a draft without rows."""
    try:
        lines = decode(path.read_bytes()).splitlines() if no_file(path, LARGEST) is None else []
    except OSError:
        lines = []
    # Where there are no lines at all, the reader of tables says what is wrong with the file.
    return sum(line.strip()[:1] not in ("", "#") for line in lines) != 1


def _check_columns(table: Table) -> None:
    """Refuse a table without verdicts, or with a header so near to one of ours that it must be meant."""
    absent = {plain(column.name): column.name for column in COLUMNS if column.name not in table.headers}
    for header in table.ignored:
        for key in difflib.get_close_matches(plain(header), absent, n=1, cutoff=0.75):
            said = f"has a column {legible(header)!r}; did you mean {absent[key]!r}?"
            raise TableError(said, file=table.file)
    if "verdict" in absent:
        said = "has no column 'verdict'; accept, reject or relabel is needed there"
        raise TableError(said, file=table.file)


def _written(table: Table, row: int, word: Word, span: tuple[float, float]) -> WrittenVerdict:
    top, bottom = (float(table.number(name)[row]) for name in ("top_md", "bottom_md"))
    if bottom < top:
        raise table.error("lies above the top; the lower end of the place is needed", row, "bottom_md")
    cause = _choice(table, row, "cause", Cause)
    if (cause is None) == (word is Word.RELABEL):
        if cause is None:
            known = ", ".join(Cause)
            raise table.error(f"is empty beside 'relabel'; needed is one of: {known}", row, "cause")
        said = f"holds {cause.value!r} beside {word.value!r}; empty it, or make the verdict 'relabel'"
        raise table.error(said, row, "cause")
    return WrittenVerdict(
        table.lines[row],
        *span,
        top,
        bottom,
        _choice(table, row, "kind", Kind),
        word,
        "" if cause is None else cause.value,
        legible(table.text("note")[row]),
        legible(table.text("id")[row]),
    )


def _choice(table: Table, row: int, column: str, words: type[W]) -> W | None:
    """Read a cell that holds one of some words; None where it is empty."""
    text = table.text(column)[row]
    if text.casefold() in NULLS:
        return None
    for word in words:
        if text.casefold() == word.value:
            return word
    known = [word.value for word in words]
    raise table.error(f"holds {legible(text)!r}; {nearest(text.casefold(), known)}", row, column)


def _refuse_idle(table: Table, row: int) -> None:
    """Refuse a row in which something was written, but no verdict: nothing is to be lost in silence."""
    for column in ("cause", "note"):
        if table.text(column)[row]:
            raise table.error(
                f"holds {legible(table.text(column)[row])!r}, but the row has no verdict; "
                "write accept, reject or relabel, or empty the cell",
                row,
                column,
            )
