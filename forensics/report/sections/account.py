"""The data account: files, columns, history, rows set aside, gaps."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass

import numpy as np

from forensics.logs.table import Reason, TimeLog
from forensics.report import derived
from forensics.report.elements import Bullets, Column, Element, Section, Table, Text
from forensics.report.scene import Scene
from forensics.report.words import Show, count, duration, fixed

COLUMN_ROWS = 120
STEP_ROWS = 120
GAP_ROWS = 20


@dataclass(frozen=True)
class Account:
    """What was read, how to show it, and what was remarked on the way; `inputs` maps names to SHA-256."""

    log: TimeLog
    show: Show
    inputs: Mapping[str, str]
    remarks: tuple[str, ...] = ()


def describe(scene: Scene) -> Section:
    """Describe what was read and what became of it."""
    found = scene.findings
    remarks = (*found.log.warnings, *found.well.warnings, *found.warnings)
    return Section("data", "Data account", tell(Account(found.log, scene.show, found.inputs, remarks)))


def tell(account: Account) -> tuple[Element, ...]:
    """Give the account's elements: files, inputs, rows set aside, gaps, steps, columns, remarks."""
    log = account.log
    share = f" ({fixed(100.0 * float(np.mean(~log.used)), 2)} %)" if len(log) else ""
    lead = (
        f"{count(len(log), 'row')} at a usual interval of {fixed(log.interval, 2)} s; "
        f"{count(int((~log.used).sum()), 'row')} set aside as a whole{share}. Nothing is dropped "
        "without being counted here."
    )
    elements: list[Element] = [Text(lead), file_table(account), input_table(account), reason_table(account)]
    elements += [gap_table(account), step_table(account), column_table(account)]
    notes = tuple(f"{f.name}: {note}" for f in log.files for note in f.notes)
    said = (*dict.fromkeys(account.remarks), *notes)
    if said:
        elements.append(Bullets(said, "Remarks made on the way:"))
    return tuple(elements)


def file_table(account: Account) -> Table:
    """Log files."""
    show = account.show
    columns = (
        Column("file", "code"), Column("format"), Column("rows", "number"), Column(f"from ({show.timezone})"),
        Column(f"to ({show.timezone})"), Column("interval", "number"),
    )  # fmt: skip
    rows = tuple(
        (
            f.name,
            f.format,
            fixed(f.rows, 0),
            show.time(f.start),
            show.time(f.end),
            f"{fixed(f.interval, 2)} s",
        )
        for f in account.log.files
    )
    return Table("Log files read", columns, rows, empty="No file is on record.")


def input_table(account: Account) -> Table:
    """Every input with its hash."""
    known = {f.name: f.sha256 for f in account.log.files} | dict(account.inputs)
    columns = (Column("input", "code"), Column("SHA-256", "code"))
    note = "The same inputs and the same version of the program give the same report, byte for byte."
    return Table("Inputs and their fingerprints", columns, tuple(sorted(known.items())), note, dense=True)


def reason_table(account: Account) -> Table:
    """Rows set aside by reason."""
    reason = account.log.reason
    counts = [(r, int((reason == int(r)).sum())) for r in Reason if r is not Reason.NONE]
    rows = tuple((r.words, fixed(n, 0)) for r, n in counts if n)
    columns = (Column("reason"), Column("rows", "number"))
    return Table("Rows set aside, by reason", columns, rows, empty="No row was set aside.")


def gap_table(account: Account) -> Table:
    """Longest gaps."""
    show = account.show
    found = derived.gaps(account.log)
    longest = sorted(sorted(found, key=lambda g: (g[0] - g[1], g[0]))[:GAP_ROWS])
    rows = tuple((show.time(a), show.time(b), duration(b - a)) for a, b in longest)
    columns = (Column(f"from ({show.timezone})"), Column(f"to ({show.timezone})"), Column("length", "number"))
    total = duration(sum(b - a for a, b in found))
    note = f"{count(len(found), 'gap')} of more than five intervals, {total} in all."
    if len(found) > GAP_ROWS:
        note += f" The {GAP_ROWS} longest are listed."
    return Table("Gaps in time", columns, rows, note if rows else "", "No gap of more than five intervals.")


def step_table(account: Account) -> Table:
    """Tell what was done to the log, in order."""
    history = account.log.history
    columns = (
        Column("step"),
        Column("channel", "code"),
        Column("samples changed", "number"),
        Column("detail"),
    )
    rows = tuple((s.name, s.channel or "", fixed(s.samples, 0), s.detail) for s in history[:STEP_ROWS])
    note = f"The first {STEP_ROWS} of {len(history)} steps." if len(history) > STEP_ROWS else ""
    return Table(
        "What was done to the log, in order", columns, rows, note, "No step is on record.", dense=True
    )


def column_table(account: Account) -> Table:
    """Columns as found and what they were taken for; those used first."""
    columns = (
        Column("file", "code"),
        Column("column", "code"),
        Column("unit"),
        Column("taken for", "code"),
        Column("why"),
    )
    found = [column for file in account.log.files for column in file.columns]
    ordered = sorted(found, key=lambda c: c.channel is None)
    rows = tuple(
        (c.file, c.column, c.unit or "", c.channel or "not used", c.why) for c in ordered[:COLUMN_ROWS]
    )
    note = f"{COLUMN_ROWS} of {len(found)} columns, those used first." if len(found) > COLUMN_ROWS else ""
    return Table(
        "Columns and what they were taken for", columns, rows, note, "No column is on record.", dense=True
    )
