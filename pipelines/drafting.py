"""A case made from bare files: which are logs, which are tables, and what a case file would say of them."""

from __future__ import annotations

import os
import re
from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass, field, replace
from pathlib import Path

import numpy as np

from forensics import channels
from forensics.case import Case, ChannelChoice, FluidSettings, LogSettings
from forensics.case.skeleton import Known, write_skeleton
from forensics.errors import InputError, TableError
from forensics.logs.clock_column import is_time_name
from forensics.logs.mapping import NoUnitError
from forensics.logs.naming import split_name
from forensics.logs.read import read_time_logs
from forensics.logs.records import SLIDE_COLUMNS, WEIGHT_COLUMNS
from forensics.logs.registry import read_head
from forensics.logs.table import TimeLog
from forensics.tables import Column, decode
from forensics.tables.columns import Rows, match_columns
from forensics.tables.reader import header_of
from forensics.well.fluid import MUD_COLUMNS
from forensics.well.hole import HOLE_COLUMNS
from forensics.well.survey import SURVEY_COLUMNS
from forensics.well.tally import STRING_COLUMNS
from forensics.well.witsml_objects import object_kind

#: Tables told by their headers, the more particular first.
KINDS: Mapping[str, Sequence[Column]] = {
    "string": STRING_COLUMNS,
    "hole": HOLE_COLUMNS,
    "survey": SURVEY_COLUMNS,
    "slides": SLIDE_COLUMNS,
    "weights": WEIGHT_COLUMNS,
    "mud": MUD_COLUMNS,
}
_ID_LETTERS = re.compile(r"[^A-Za-z0-9._-]+")


@dataclass(frozen=True)
class Gathered:
    """Files told apart: logs by time, logs by depth, and tables by kind."""

    logs: tuple[Path, ...]
    depth: tuple[Path, ...] = ()
    tables: Mapping[str, Path] = field(default_factory=dict)


def gather(files: Sequence[Path]) -> Gathered:
    """Tell logs from tables.

    Parameters
    ----------
    files : sequence of Path

    Returns
    -------
    Gathered

    Raises
    ------
    InputError
        If a case file stands among them, a file can't be read, two files are tables of one kind, or there is
        no log.
    """
    logs: list[Path] = []
    depth: list[Path] = []
    tables: dict[str, Path] = {}
    for path in files:
        if path.suffix == ".toml":
            raise InputError("is a case file; give one case file alone, or logs and tables", file=path)
        head = read_head(path)
        kind = _kind(path, head)
        if kind is None:
            (depth if _is_by_depth(path, head) else logs).append(path)
        elif kind in tables:
            raise InputError(
                f"looks like a table of the {kind}, and so does {tables[kind].name}; give one", file=path
            )
        else:
            tables[kind] = path
    if not logs:
        names = ", ".join(path.name for path in files)
        raise InputError(f"none of {names} is a log by time; give at least one")
    return Gathered(tuple(logs), tuple(depth), tables)


def _is_by_depth(path: Path, head: bytes) -> bool:
    """Tell a log that goes by depth: depth leads and no column is a time."""
    text = decode(head)
    if kinds := re.findall(r"<(?:\w+:)?indexType>([^<]*)<", text):
        return all("depth" in kind.casefold() for kind in kinds)
    if curves := re.search(r"^\s*~C[^\n]*\n(.*?)(?=^\s*~)", text, re.MULTILINE | re.DOTALL):
        lines = (line.strip() for line in curves[1].splitlines())
        names = [line.split(".")[0].strip() for line in lines if line and not line.startswith("#")]
    else:
        cells = _header(text, path)
        names = list(cells.cells[0]) if cells else []
    if not names or any(is_time_name(name) for name in names):
        return False
    return channels.match(split_name(names[0])[0])[0] == "hole_depth"


def _header(text: str, path: Path) -> Rows | None:
    """Cells of a text's first line; None where it can't be a table's."""
    try:
        return header_of(text, path)
    except TableError:
        return None


def _kind(path: Path, head: bytes) -> str | None:
    """Kind of table a file is by its header; None for a log."""
    if head.lstrip(b"\xef\xbb\xbf \r\n\t").startswith(b"<"):
        return object_kind(head)
    if path.suffix.casefold() not in {".csv", ".txt", ".tsv"} or not (cells := _header(decode(head), path)):
        return None
    found = {channels.match(cell)[0] for cell in cells.cells[0]}
    if "hookload" in found and found & {"bit_depth", "block_position", "time"}:
        return None
    for kind, columns in KINDS.items():
        try:
            matched, _ = match_columns(cells, columns)
        except TableError:
            continue
        names = {m.column.name for m in matched}
        if kind != "weights" or names >= {"pick_up", "slack_off"}:
            return kind
    return None


def read_bare(made: Gathered) -> tuple[Case, TimeLog]:
    """Read logs that no case file names; a needed unit that is missing is taken from what is usual.

    Parameters
    ----------
    made : Gathered

    Returns
    -------
    Case
        Made up: its `logs.channels` hold the units taken.
    TimeLog

    Raises
    ------
    LogError
        If a log can't be read, or no unit would make a needed channel usual.
    """
    case = _bare_case(made)
    for _ in range(len(channels.CHANNELS)):
        try:
            return case, read_time_logs(case)
        except NoUnitError as error:
            if not error.likely or error.channel in case.logs.channels:
                raise
            choice = ChannelChoice(error.header, error.likely[0])
            chosen = {**case.logs.channels, error.channel: choice}
            case = replace(case, logs=replace(case.logs, channels=chosen))
    return case, read_time_logs(case)


def _bare_case(made: Gathered) -> Case:
    name = _ID_LETTERS.sub("-", made.logs[0].name.split(".")[0]).strip("-.") or "run"
    nowhere = Path()
    return Case(
        path=nowhere, id=name, title=name, logs=LogSettings(time=made.logs, depth=made.depth),
        survey=made.tables.get("survey", nowhere), hole=made.tables.get("hole", nowhere),
        string=made.tables.get("string", nowhere), fluid=FluidSettings(file=made.tables.get("mud")),
    )  # fmt: skip


def with_mud(case: Case, log: TimeLog) -> Case | None:
    """Complete a made-up case with the mud the log shows; None where its well is not all there."""
    if Path() in (case.survey, case.hole, case.string):
        return None
    if case.fluid.file is not None:
        return case
    density = _median_density(log)
    return None if density is None else replace(case, fluid=FluidSettings(density=density))


def _median_density(log: TimeLog) -> float | None:
    density = log.get("mud_density")
    return None if density is None else float(np.nanmedian(density))


def check_free(target: Path) -> None:
    """Refuse to draft over a file that is there.

    Raises
    ------
    InputError
        If the file exists, or its folder doesn't.
    """
    if target.exists():
        raise InputError("exists already, and a draft replaces nothing; name another file", file=target)
    if not target.resolve().parent.is_dir():
        raise InputError("lies in a folder that does not exist; make it first", file=target)


def write_draft(target: Path, made: Gathered, case: Case, log: TimeLog) -> None:
    """Write a case file from what was found.

    Parameters
    ----------
    target : Path
        Must not exist.
    made : Gathered
    case : Case
        As `read_bare` made it up.
    log : TimeLog

    Raises
    ------
    InputError
        If the file exists or can't be written.
    """
    check_free(target)
    folder = target.resolve().parent

    def from_there(path: Path) -> str:
        return Path(os.path.relpath(path.resolve(), folder)).as_posix()

    known = Known(
        id=case.id,
        logs=tuple(from_there(path) for path in made.logs),
        depth=tuple(from_there(path) for path in made.depth),
        tables={kind: from_there(path) for kind, path in made.tables.items()},
        well=next((name for name in map(_well_name, made.logs) if name), None),
        timezone=case.logs.timezone,
        choices=case.logs.channels,
        density=_median_density(log),
        notes=_notes(log),
    )
    part = folder / f".{target.name}.{os.getpid()}.part"
    try:
        part.write_text(write_skeleton(known), encoding="utf-8")
        part.replace(target)
    except OSError as error:
        part.unlink(missing_ok=True)
        raise InputError(f"can't be written: {error.strerror}; name another file", file=target) from error


def _notes(log: TimeLog) -> tuple[str, ...]:
    """Say what the logs are, for the top of the draft."""
    low, high = np.nanmin(log.values["bit_depth"]), np.nanmax(log.values["bit_depth"])
    return (
        f"{len(log)} rows, one every {log.interval:g} s, bit from {low:.0f} to {high:.0f} m.",
        "Lines marked FILL IN need what the logs can't tell; lines marked CHECK were guessed.",
    )


def _well_name(path: Path) -> str | None:
    """Name of the well in the head of a LAS or WITSML file."""
    text = decode(read_head(path))
    patterns: tuple[Callable[[str], re.Match[str] | None], ...] = (
        re.compile(r"^\s*WELL\s*\.\S*[ \t]+([^:\n]*?)\s*:", re.MULTILINE).search,
        re.compile(r"<(?:\w+:)?nameWell>([^<]{1,200})<").search,
    )
    for search in patterns:
        found = search(text)
        if found and found.group(1).strip():
            return found.group(1).strip()
    return None
