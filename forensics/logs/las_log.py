"""Logs as LAS: the header through lasio, the data with our own table of null codes.

lasio's null policies "aggressive" and "all" lose codes to a missing comma in their own table, and
none of them counts what it replaced, so only "strict" is asked of it (which bears on the header)
and nulls are found later, channel by channel, never in the index.
"""

from __future__ import annotations

import io
import logging
import re
from dataclasses import dataclass, field
from pathlib import Path
from typing import TYPE_CHECKING

from forensics.errors import LogError
from forensics.logs.clock_text import looks_like_date
from forensics.logs.dialect import find_encoding
from forensics.logs.las_data import read_data
from forensics.logs.packed import read_bytes
from forensics.logs.raw import Keep, RawLog

if TYPE_CHECKING:
    import lasio

_SECTION = re.compile(r"^\s*~", re.MULTILINE)
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
    text = _load(path, head)
    above, body, first_line = _split(text, path)
    header = _read_header(above)
    if not header.names:
        raise LogError("the LAS header names no curves; expected a ~Curve section", file=path)

    def wanted(name: str) -> bool:
        about = header.about.get(name, "")
        return keep(name) or (bool(about) and keep(about))

    table, names, units, dropped, notes = read_data(body, header, wanted, path)
    return RawLog(
        path=path,
        format=f"LAS {header.version}",
        names=tuple(names),
        units=tuple(unit or None for unit in units),
        table=table,
        first_line=first_line,
        nulls=header.nulls,
        start=header.start,
        start_is_first_row=header.start_is_first_row,
        date_hint=header.hints,
        notes=(*header.notes, *notes),
        dropped=dropped,
        about=header.about,
    )


def _load(path: Path, head: bytes) -> str:
    return read_bytes(path).decode(find_encoding(head), errors="replace").lstrip("\ufeff")


def _split(text: str, path: Path) -> tuple[str, str, int]:
    """Part the header from the data; the line number of the first data line comes third."""
    mark = re.search(r"^[ \t]*~(?:A|\w*_?data\b)[^\n]*\n?", text, re.MULTILINE | re.IGNORECASE)
    if mark is None:
        raise LogError("found no data section; expected a line that starts with ~A", file=path)
    body = text[mark.end() :]
    later = re.search(r"^[ \t]*~", body, re.MULTILINE)
    if later is not None:
        body = body[: later.start()]
    return text[: mark.start()], body, text.count("\n", 0, mark.end()) + 1


def _read_header(above: str) -> Header:
    """Read the header through lasio; a header it can't make sense of is read by the line grammar."""
    parsed = _through_lasio(above)
    items = _by_grammar(above)
    header = Header()
    values = {name: value for section, name, _, value, _ in items if section in "VWPO"}
    curves = [(name, unit) for section, name, unit, _, _ in items if section == "C"]
    header.about = {name: _prose(about) for section, name, _, _, about in items if section == "C"}
    if parsed is not None and len(parsed.curves) >= len(curves):
        curves = [(str(c.original_mnemonic), str(c.unit or "")) for c in parsed.curves]
    else:
        header.notes.append("the LAS header departs from the standard; its lines were read one by one")
    header.names, header.units = [name for name, _ in curves], [unit for _, unit in curves]
    header.version = (re.findall(r"[123]\.\d", values.get("VERS", "")) or ["2.0"])[0]
    header.wrap = values.get("WRAP", "NO").strip().upper().startswith("Y")
    header.delimiter = {"COMMA": ",", "TAB": "\t"}.get(values.get("DLM", "").strip().upper(), "")
    header.nulls = tuple(_numbers(values.get("NULL", "")))
    header.hints = " ".join(f"{unit} {name}" for _, name, unit, _, _ in items) + " ".join(
        re.findall(r"\{[^}]*\}", above)
    )
    _find_start(header, values)
    return header


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


def _by_grammar(above: str) -> list[tuple[str, str, str, str, str]]:
    """Split header lines at the first dot, the first blank after it and the last colon.

    An item is its section, name, unit, value and description.
    """
    items: list[tuple[str, str, str, str, str]] = []
    section = ""
    for line in above.splitlines():
        bare = line.strip()
        if bare.startswith("~"):
            title = bare[1:].strip().upper()
            section = "C" if "DEFINITION" in title.split("|")[0] else title[:1]
            continue
        found = re.match(r"^\.?([^.]*?)\s*\.(\S*)\s*(.*)$", bare)
        if not bare or bare.startswith("#") or found is None or not section:
            continue
        name, unit, rest = found.groups()
        value, colon, about = rest.rpartition(":")
        value = value.strip() if colon else rest.strip()
        if not value and section == "V":
            value = about.strip()
        about = about.strip() if colon else ""
        items.append((section, name.strip(), unit.rstrip(":"), value, about))
    return items


def _find_start(header: Header, values: dict[str, str]) -> None:
    """Find the stamp an elapsed-time index counts from."""
    if looks_like_date(values.get("STRT", "")):
        header.start, header.start_is_first_row = values["STRT"], True
        return
    upper = {name.upper().replace(" ", "_"): value for name, value in values.items() if value.strip()}
    day = next((upper[name] for name in _START_DATE if looks_like_date(upper.get(name, ""))), None)
    clock = next((upper[name] for name in _START_CLOCK if re.search(r"\d:\d\d", upper.get(name, ""))), None)
    if day is not None:
        has_clock = re.search(r"\d:\d\d|T\d{4,6}|\d{2}\.\d{2}\.\d{2}\s", day) is not None
        header.start = day if has_clock or clock is None else f"{day} {clock}"
