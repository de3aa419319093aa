"""Logs as LAS: the header through lasio, the data with our own table of null codes.

lasio's null policies "aggressive" and "all" lose codes to a missing comma in their own table, and
none of them counts what it replaced, so only "strict" is asked of it (which bears on the header)
and nulls are found later, channel by channel, never in the index.
"""

from __future__ import annotations

import io
import logging
import re
from collections.abc import Mapping
from dataclasses import dataclass, field, replace
from pathlib import Path
from typing import TYPE_CHECKING

from forensics.errors import LogError
from forensics.logs.clock_text import looks_like_date
from forensics.logs.dialect import find_encoding
from forensics.logs.las_data import read_data
from forensics.logs.las_header import Block, Item, Sections, find_sections, items_of
from forensics.logs.packed import read_bytes
from forensics.logs.raw import Keep, RawLog

if TYPE_CHECKING:
    import lasio

# Header items that may hold a date, a time of day, or both; the first filled one wins.
_START_DATE = (
    *("STRT_DATETIME", "START_DATETIME", "STARTDATETIME", "SDATETIME", "DATETIME", "START_TIME", "STARTTIME"),
    *("STIM", "STIME", "START", "TSTART", "STDT", "SDAT", "SDATE", "STARTDATE", "START_DATE", "STRT_DATE"),
    *("STRTDATE", "DATE0", "T0", "DATE", "LOGDATE", "LDATE"),
)
_START_CLOCK = ("STIM", "STIME", "STARTTIME", "START_TIME", "STRT_TIME", "STRTTIME", "TIME", "TSTART", "TIM")


@dataclass
class Header:
    """What a LAS header says, brought down to plain values."""

    version: str = "2.0"
    wrap: bool = False
    delimiter: str = ""
    nulls: tuple[float, ...] = ()
    start: str | None = None
    start_is_first_row: bool = False
    names: list[str] = field(default_factory=list)
    units: list[str] = field(default_factory=list)
    about: dict[str, str] = field(default_factory=dict)
    hints: str = ""
    notes: list[str] = field(default_factory=list)


def sniff(path: Path, head: bytes) -> bool:
    """Tell whether a file is LAS: a section mark starts a line near the top, or the name says so."""
    text = head[:4096].decode(find_encoding(head), errors="replace")
    marked = re.search(r"^\s*~\s*[VvWwCcLlAaPp]", text, re.MULTILINE) is not None
    return marked or path.suffix.casefold() == ".las"


def read(path: Path, head: bytes, keep: Keep) -> RawLog:
    """Read a LAS file, version 1.2, 2.0 or 3.0, wrapped or not.

    Parameters
    ----------
    path : Path
        The file.
    head : bytes
        Its first bytes.
    keep : callable
        Says which columns to load, by name.

    Returns
    -------
    RawLog
        Columns as numbers where every entry is one, else as text.

    Raises
    ------
    LogError
        If there is no data section, no curve, or no row.

    References
    ----------
    Canadian Well Logging Society, *LAS Version 2.0: a digital standard for logs*, update January 2014.
    """
    text = read_bytes(path).decode(find_encoding(head), errors="replace").lstrip("\ufeff")
    found = find_sections(text, path)
    logs = [_raw(path, text, found, block, keep) for block in found.blocks]
    return replace(logs[0], others=tuple(logs[1:]))


def _raw(path: Path, text: str, found: Sections, block: Block, keep: Keep) -> RawLog:
    header = _read_header(text, found, block)
    if not header.names:
        raise LogError("the LAS header names no curves; expected a ~Curve section", file=path)

    def wanted(name: str) -> bool:
        about = header.about.get(name, "")
        return keep(name) or (bool(about) and keep(about))

    table, names, units, dropped, notes = read_data(text[block.start : block.end], header, wanted, path)
    return RawLog(
        path=path,
        format=f"LAS {header.version}",
        names=tuple(names),
        units=tuple(unit or None for unit in units),
        table=table,
        first_line=block.line,
        nulls=header.nulls,
        start=header.start,
        start_is_first_row=header.start_is_first_row,
        date_hint=header.hints,
        notes=(*header.notes, *notes),
        dropped=dropped,
        about=header.about,
    )


def _read_header(text: str, found: Sections, block: Block) -> Header:
    """Read the header through lasio; a header it can't make sense of is read by the line grammar."""
    above = text[: found.blocks[0].title_start]
    items = items_of(above)
    header = Header()
    values = {item.name: item for item in items if item.kind in "VWPO"}
    defined = items_of(text[slice(*block.definition)], "C") if block.definition else items
    curves = [(item.name, item.unit) for item in defined if item.kind == "C"]
    header.about = {item.name: _prose(item.about) for item in defined if item.kind == "C"}
    parsed = None if block.definition else _through_lasio(above)
    if parsed is not None and len(parsed.curves) >= len(curves):
        curves = [(str(c.original_mnemonic), str(c.unit or "")) for c in parsed.curves]
    elif not block.definition:
        header.notes.append("the LAS header departs from the standard; its lines were read one by one")
    header.names, header.units = [name for name, _ in curves], [unit for _, unit in curves]
    header.version = found.version
    header.wrap = _value(values, "WRAP").upper().startswith("Y")
    header.delimiter = {"COMMA": ",", "TAB": "\t"}.get(_value(values, "DLM").upper(), "")
    header.nulls = tuple(_numbers(_value(values, "NULL")))
    header.hints = " ".join(f"{item.unit} {item.name}" for item in items) + " ".join(
        re.findall(r"\{[^}]*\}", above)
    )
    _find_start(header, values)
    return header


def _value(values: Mapping[str, Item], name: str) -> str:
    return values[name].value.strip() if name in values else ""


def _prose(about: str) -> str:
    """Take a format and what stands around it out of a description."""
    return re.sub(r"\{[^}]*\}.*", "", about).strip()


def _numbers(text: str) -> list[float]:
    try:
        return [float(text.replace(",", "."))]
    except ValueError:
        return []


def _through_lasio(above: str) -> lasio.LASFile | None:
    import lasio

    # lasio tells its logger of lines it can't parse; those are read by the grammar below, and no news.
    logger = logging.getLogger("lasio")
    level = logger.level
    logger.setLevel(logging.CRITICAL)
    try:
        return lasio.read(
            io.StringIO(above + "\n~ASCII\n"),
            ignore_data=True,
            ignore_header_errors=True,
            null_policy="strict",
            mnemonic_case="preserve",
        )
    # lasio's own errors have no common base; whatever it stumbles on, the grammar below still stands.
    except Exception:
        return None
    finally:
        logger.setLevel(level)


def _find_start(header: Header, values: Mapping[str, Item]) -> None:
    """Find the stamp an elapsed-time index counts from."""
    first = values.get("STRT")
    if first is not None and looks_like_date(first.value):
        header.start, header.start_is_first_row = first.value, True
        return
    upper = {name.upper().replace(" ", "_"): item for name, item in values.items()}
    day = next(filter(None, (_as_date(upper[name]) for name in _START_DATE if name in upper)), None)
    clock = next(filter(None, (_as_clock(upper[name]) for name in _START_CLOCK if name in upper)), None)
    if day is not None:
        has_clock = re.search(r"\d:\d\d|T\d{4,6}|\d{2}\.\d{2}\.\d{2}\s", day) is not None
        header.start = day if has_clock or clock is None else f"{day} {clock}"


def _as_date(item: Item) -> str | None:
    """Give the date of a header line: its value, or what LAS 1.2 puts where later versions describe."""
    return next((text for text in (item.swapped, item.value) if looks_like_date(text)), None)


def _as_clock(item: Item) -> str | None:
    return next((text for text in (item.swapped, item.value) if re.search(r"\d:\d\d", text)), None)
