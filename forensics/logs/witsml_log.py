"""Logs as WITSML 1.3 and 1.4 XML, read by local names: versions and vendors' own elements don't matter."""

from __future__ import annotations

import gzip
from collections.abc import Iterator
from dataclasses import dataclass, field
from pathlib import Path
from typing import TYPE_CHECKING, BinaryIO
from xml.etree import ElementTree

from forensics.errors import LogError
from forensics.logs.csv_log import is_packed
from forensics.logs.nulls import WORDS
from forensics.logs.raw import UNPACK_ERRORS, Keep, RawLog

if TYPE_CHECKING:
    import pandas as pd


@dataclass
class _Part:
    """One <log>: its curves by mnemonic, the order of its columns, its rows."""

    index_type: str = ""
    index: str = ""
    nulls: list[float] = field(default_factory=list)
    units: dict[str, str] = field(default_factory=dict)
    places: dict[str, int] = field(default_factory=dict)
    listed: list[str] = field(default_factory=list)
    delimiter: str = ","
    rows: list[str] = field(default_factory=list)
    start: str | None = None

    @property
    def order(self) -> list[str]:
        """Column order: the list above the data where there is one, else the curves' own numbers."""
        if self.listed:
            return self.listed
        if any(self.places.values()):
            return sorted(self.units, key=lambda name: self.places.get(name, 0))
        return list(self.units)


def sniff(path: Path, head: bytes) -> bool:
    """Tell whether a file is XML."""
    del path
    start = head.lstrip(b"\xef\xbb\xbf \r\n\t")
    return start.startswith(b"<") or start.replace(b"\x00", b"").lstrip(b"\xff\xfe").startswith(b"<?xml")


def read(path: Path, head: bytes, keep: Keep) -> RawLog:
    """Read a WITSML log; the parts of a log split over several <log> elements are put one after another.

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
        Columns of all parts, numbers where every entry is one; an empty entry is missing.

    Raises
    ------
    LogError
        If the XML is broken or holds no log by time.

    References
    ----------
    Energistics, WITSML data schemas 1.3.1.1 and 1.4.1.1, `log` object: `logCurveInfo`, `mnemonicList`,
    `columnIndex`.
    """
    del head
    try:
        with gzip.open(path) if is_packed(path) else path.open("rb") as file:
            parts = [part for part in _parts(file) if part.rows]
    except ElementTree.ParseError as error:
        raise LogError(f"the XML is broken: {error}", file=path, line=error.position[0]) from error
    except UNPACK_ERRORS as error:
        raise LogError(f"the file can't be unpacked: {error}", file=path) from error
    timed = [part for part in parts if "depth" not in part.index_type and "length" not in part.index_type]
    if not timed:
        found = f"logs by {parts[0].index_type} only" if parts else "no rows of log data"
        raise LogError(f"found {found}; expected a WITSML log by date and time", file=path)
    names = list(dict.fromkeys(name for part in timed for name in part.order))
    wanted = [number for number, name in enumerate(names) if keep(name) or name == timed[0].index]
    table, long = _table(timed, names, wanted)
    units = {name: unit for part in reversed(timed) for name, unit in part.units.items()}
    return RawLog(
        path=path,
        format="WITSML",
        names=tuple(names),
        units=tuple(units.get(name) or None for name in names),
        table=table,
        first_line=1,
        nulls=tuple({code for part in timed for code in part.nulls}),
        start=timed[0].start,
        notes=("lines are counted by row of data",)
        if not long
        else ("rows longer than their header were cut",),
    )


def _local(tag: str) -> str:
    return tag.rpartition("}")[2]


def _parts(file: BinaryIO) -> Iterator[_Part]:
    """Walk the file once, dropping elements as they close, so that memory holds the rows alone."""
    part = _Part()
    curve: dict[str, str] = {}
    inside = False
    for event, element in ElementTree.iterparse(file, events=("start", "end")):
        name, text = _local(element.tag), (element.text or "").strip()
        if event == "start":
            if name == "log":
                part = _Part()
            inside = inside or name == "logCurveInfo"
            if inside and name == "logCurveInfo":
                curve = {}
            continue
        if name == "logCurveInfo":
            inside = False
            _add_curve(part, curve)
        elif inside:
            curve.setdefault(name, text)
        elif name == "log":
            yield part
        else:
            _add_field(part, name, text)
        element.clear()


def _add_curve(part: _Part, curve: dict[str, str]) -> None:
    name = curve.get("mnemonic", "")
    if not name:
        return
    part.units[name] = curve.get("unit", "")
    part.places[name] = int(curve["columnIndex"]) if curve.get("columnIndex", "").isdecimal() else 0
    part.nulls += _number(curve.get("nullValue", ""))


def _add_field(part: _Part, name: str, text: str) -> None:
    if name == "data":
        part.rows.append(text)
    elif name == "indexType":
        part.index_type = text.casefold()
    elif name == "indexCurve":
        part.index = text
    elif name == "nullValue":
        part.nulls += _number(text)
    elif name == "dataDelimiter" and text:
        part.delimiter = text
    elif name == "startDateTimeIndex":
        part.start = text or None
    elif name == "mnemonicList":
        part.listed = [word.strip() for word in text.split(",")]
    elif name == "unitList":
        for mnemonic, unit in zip(part.listed, text.split(","), strict=False):
            part.units[mnemonic] = unit.strip() or part.units.get(mnemonic, "")


def _number(text: str) -> list[float]:
    try:
        return [float(text)]
    except ValueError:
        return []


def _table(parts: list[_Part], names: list[str], wanted: list[int]) -> tuple[pd.DataFrame, bool]:
    import pandas as pd

    columns: dict[int, list[str | None]] = {number: [] for number in wanted}
    long = False
    for part in parts:
        place = {name: i for i, name in enumerate(part.order)}
        at = [place.get(names[number], -1) for number in wanted]
        for row in part.rows:
            cells = row.split(part.delimiter)
            long = long or len(cells) > len(place)
            for number, i in zip(wanted, at, strict=True):
                cell = cells[i].strip() if 0 <= i < len(cells) else ""
                columns[number].append(None if cell.casefold() in WORDS else cell)
    table = pd.DataFrame({number: pd.Series(cells, dtype="object") for number, cells in columns.items()})
    for number in wanted:
        converted = pd.to_numeric(table[number], errors="coerce")
        if converted.notna().sum() == table[number].notna().sum():
            table[number] = converted
    return table, long
