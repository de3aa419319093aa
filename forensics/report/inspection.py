"""What was read of a case, before any mechanics: files, channels, well, and what they will let be told."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from functools import partial

import numpy as np

from forensics.case import Case
from forensics.channels import BY_NAME, CHANNELS, Need
from forensics.logs.table import SourceColumn, TimeLog
from forensics.report.elements import (
    Bullets,
    Column,
    Element,
    Notice,
    Numbers,
    Picture,
    Report,
    Section,
    Table,
    Text,
)
from forensics.report.figures.strips import sheets, strips
from forensics.report.sections import account, run
from forensics.report.words import Show, count, duration, fixed, plain
from forensics.rig.prospects import Verdict, prospects
from forensics.well.model import Well


@dataclass(frozen=True)
class Inspection:
    """What was read of a case.

    Parameters
    ----------
    case : Case
        As stated, or made up for bare logs.
    log : TimeLog
    well : Well or None
        None where survey, hole, string or mud are not given or can't be used.
    inputs : mapping of str to str
        SHA-256 of every file by name.
    refusals : tuple of str
        What would keep the analysis from running, in the words of its refusal.
    remarks : tuple of str
        What was noticed on the way.
    """

    case: Case
    log: TimeLog
    well: Well | None
    inputs: Mapping[str, str]
    refusals: tuple[str, ...] = ()
    remarks: tuple[str, ...] = ()


def describe_inspection(found: Inspection, units: str = "metric") -> Report:
    """Describe what was read.

    Parameters
    ----------
    found : Inspection
    units : str
        "metric" or "field".

    Returns
    -------
    Report
        Plain content, for the page and for the terminal.
    """
    show = Show(units, found.log.timezone or "UTC")
    sections = (
        Section("first", "What was read", _first(found, show)),
        Section("will", "What these data will show", (_prospect_table(found),)),
        Section("well", "Well, string and mud", _well(found, show)),
        Section("strips", "Every channel over the run", _strips(found, show)),
        Section("data", "Data account", account.tell(_account(found, show))),
    )
    facts = (
        ("case", found.case.id),
        ("period", f"{show.stamp(float(found.log.time[0]))} to {show.stamp(float(found.log.time[-1]))}"),
        ("times shown in", show.timezone),
        ("units", show.system),
    )
    footer = "Made by tallyback; nothing here rests on a load or a friction factor."
    return Report(found.case.title, "Inspection of the data", facts, sections, footer)


def _account(found: Inspection, show: Show) -> account.Account:
    well = found.well.warnings if found.well else ()
    return account.Account(found.log, show, found.inputs, (*found.log.warnings, *well, *found.remarks))


def _first(found: Inspection, show: Show) -> tuple[Element, ...]:
    log = found.log
    length = duration(float(log.time[-1] - log.time[0]))
    elements: list[Element] = [
        Text(
            f"{count(len(log.files), 'log file')}, {count(len(log), 'row')} over {length}, one every "
            f"{fixed(log.interval, 2)} s; {count(int((~log.used).sum()), 'row')} set aside as a whole."
        )
    ]
    if found.refusals:
        elements.append(Notice("The analysis would refuse this case", found.refusals))
    remarks = tuple(dict.fromkeys((*log.warnings, *found.remarks)))
    if remarks:
        elements.append(Bullets(remarks, "To be looked at:"))
    elements.append(channel_table(log, show))
    return tuple(elements)


def channel_table(log: TimeLog, show: Show) -> Table:
    """Every channel of the vocabulary: where it came from, in what unit, how full, over what range."""
    rows = []
    for channel in CHANNELS:
        if channel.name == "time":
            continue
        sources = [c for f in log.files for c in f.columns if c.channel == channel.name]
        values = log.get(channel.name)
        if values is None:
            lacking = "left out" if sources else "not in the log"
            rows.append((plain(channel.name), channel.need.value, "", "", "", "", lacking))
            continue
        known = values[np.isfinite(values)]
        low, high = np.percentile(known, [1.0, 99.0])
        rows.append(
            (
                plain(channel.name),
                channel.need.value,
                _listed([c.column for c in sources]),
                _listed([c.unit or "none" for c in sources]),
                f"{fixed(100.0 * len(known) / len(values), 1)} %",
                show.range(float(low), float(high), BY_NAME[channel.name].quantity),
                _reasons(sources),
            )
        )
    columns = (
        Column("channel"), Column("need"), Column("column", "code"), Column("unit read"),
        Column("filled", "number"), Column("1 to 99 %", "number"), Column("why"),
    )  # fmt: skip
    note = f"Needed: {_listed([plain(c.name) for c in CHANNELS if c.need is Need.NEEDED])}."
    return Table("Channels, and what was taken for them", columns, tuple(rows), note, dense=True)


def _listed(words: list[str]) -> str:
    return ", ".join(dict.fromkeys(words))


def _reasons(sources: list[SourceColumn]) -> str:
    """Say why a channel was taken from its columns: by file only where the files differ."""
    whys = dict.fromkeys(c.why for c in sources)
    if len(whys) <= 1:
        return "".join(whys)
    return "; ".join(dict.fromkeys(f"{c.file}: {c.why}" for c in sources))


def _prospect_table(found: Inspection) -> Table:
    words = {Verdict.YES: "yes", Verdict.PARTLY: "in part", Verdict.NO: "no"}
    rows = tuple((p.name, words[p.verdict], p.why) for p in prospects(found.log, found.well is not None))
    columns = (Column("question"), Column("answered"), Column("because"))
    return Table("What the analysis will be able to tell", columns, rows)


def _well(found: Inspection, show: Show) -> tuple[Element, ...]:
    well = found.well
    if well is None:
        return (Text("Survey, hole, string and mud were not all given, or can't be used."),)
    numbers = (*run.survey_numbers(well, show), *run.mud_numbers(well, show))
    parts = well.string.components
    length = show.value(sum(part.length for part in parts), "length", 1)
    weight = show.value(sum(part.length * part.weight for part in parts), "force")
    return (
        Numbers("Path and mud", numbers, worded=True),
        run.hole_table(well, show),
        run.string_table(well, show),
        Text(f"The components listed are {length} long and weigh {weight} in air."),
    )


def _strips(found: Inspection, show: Show) -> tuple[Element, ...]:
    made = []
    for channels in sheets(found.log):
        names = ", ".join(plain(name) for name in channels)
        made.append(
            Picture(
                partial(strips, found.log, show, channels),
                f"{names[:1].upper()}{names[1:]} as read, faults set aside and gaps left open; the bars "
                "below mark rows set aside as a whole.",
                f"Strips over time of {names}.",
            )
        )
    return tuple(made)
