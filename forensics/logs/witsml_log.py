"""Logs as WITSML 1.3 and 1.4 XML, read by local names: versions and vendors' own elements don't matter."""

from __future__ import annotations

import io
from collections.abc import Iterable, Iterator, Mapping
from dataclasses import dataclass, field, replace
from pathlib import Path
from typing import TYPE_CHECKING

import numpy as np

from forensics.errors import LogError
from forensics.logs.nulls import WORDS, words_for_pandas
from forensics.logs.raw import Keep, RawLog
from forensics.logs.xml_walk import walk

if TYPE_CHECKING:
    import pandas as pd


# Delimiters that some write as words.
DELIMITERS = {"comma": ",", "tab": "\t", "space": " ", "semicolon": ";"}


@dataclass
class _Part:
    """One <log>: its curves by mnemonic, the order of its columns, its rows."""

    uid: str = ""
    index_type: str = ""
    index: str = ""
    index_place: int = 0
    nulls: dict[str, float] = field(default_factory=dict)
    units: dict[str, str] = field(default_factory=dict)
    places: dict[str, int] = field(default_factory=dict)
    about: dict[str, str] = field(default_factory=dict)
    listed: list[str] = field(default_factory=list)
    delimiter: str = ","
    rows: list[str] = field(default_factory=list)
    lines: list[int] = field(default_factory=list)
    start: str | None = None

    @property
    def order(self) -> list[str]:
        """Column order: the list above the data where there is one, else the curves' own numbers."""
        if self.listed:
            return self.listed
        if any(self.places.values()):
            return sorted(self.units, key=lambda name: self.places.get(name, 0))
        return list(self.units)

    @property
    def by(self) -> str:
        """What the rows are indexed by, where the header says."""
        if "depth" in self.index_type or "length" in self.index_type:
            return "depth"
        return "time" if "time" in self.index_type else ""

    @property
    def key(self) -> tuple[object, ...]:
        """Equal for the parts of one log: same object, same columns in the same units."""
        return self.uid, self.by, self.start if self.index_type == "elapsed time" else None, tuple(
            (name, self.units.get(name, "")) for name in self.order
        )  # fmt: skip


def sniff(path: Path, head: bytes) -> bool:
    """Tell whether a file is XML."""
    del path
    start = head.lstrip(b"\xef\xbb\xbf \r\n\t")
    return start.startswith(b"<") or start.replace(b"\x00", b"").lstrip(b"\xff\xfe").startswith(b"<?xml")


def read(path: Path, head: bytes, keep: Keep) -> RawLog:
    """Read the logs of a WITSML file.

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
        The first log by time, or else the first; `others` holds the rest. Parts of one log, split over
        several <log> elements, are put one after another in the order of their first rows. An empty entry
        is missing.

    Raises
    ------
    LogError
        If the XML is broken, unsafe, or holds no row of a log.

    References
    ----------
    Energistics, WITSML data schemas 1.3.1.1 and 1.4.1.1, `log` object: `logCurveInfo`, `mnemonicList`,
    `columnIndex`.
    """
    del head
    groups: dict[tuple[object, ...], list[_Part]] = {}
    seen: set[str] = set()
    for part in _parts(path, seen):
        if part.rows:
            groups.setdefault(part.key, []).append(part)
    if not groups:
        raise LogError(_no_rows(seen), file=path)
    raws = [_raw(path, parts, keep) for parts in groups.values()]
    # A log by depth is no use as the first where there is one by time.
    raws.sort(key=lambda raw: raw.by == "depth")
    return replace(raws[0], others=tuple(raws[1:]))


def _no_rows(seen: set[str]) -> str:
    other = sorted(seen & {"trajectory", "tubular", "wbGeometry", "mudLog", "message", "bhaRun"})
    if other:
        return (
            f"found a WITSML {other[0]}, not a log; [logs] takes log objects ([survey], [string] and [hole] "
            "take trajectory, tubular and wbGeometry)"
        )
    if "log" in seen:
        return "found no rows of log data; expected <data> in <logData>: export the log with its data"
    return "found no <log> element; expected a WITSML 1.3.1.1 or 1.4.1.1 log document"


def _parts(path: Path, seen: set[str]) -> Iterator[_Part]:
    """Walk the file once; names of the elements met are added to `seen`."""
    part = _Part()
    curve: dict[str, str] = {}
    inside = False
    for event in walk(path):
        name = event.name
        if event.opens:
            if name == "log":
                part = _Part(uid=event.attributes.get("uid", ""))
            elif name == "logCurveInfo":
                inside, curve = True, {}
            elif name == "indexCurve":
                part.index_place = _whole(event.attributes.get("columnIndex", ""))
            seen.add(name)
        elif name == "logCurveInfo":
            inside = False
            _add_curve(part, curve)
        elif inside:
            curve.setdefault(name, event.text)
        elif name == "data":
            part.rows.append(event.text)
            part.lines.append(event.line)
        elif name == "log":
            _place_index(part)
            yield part
            part = _Part()
        else:
            _add_field(part, name, event.text)


def _add_curve(part: _Part, curve: Mapping[str, str]) -> None:
    name = curve.get("mnemonic", "")
    if not name:
        return
    part.units[name] = curve.get("unit", "")
    part.places[name] = _whole(curve.get("columnIndex", ""))
    about = curve.get("curveDescription", "") or curve.get("mnemAlias", "")
    if about:
        part.about[name] = about
    _add_null(part, name, curve.get("nullValue", ""))


def _place_index(part: _Part) -> None:
    """Take the index curve's own column number where its logCurveInfo gives none and others have theirs."""
    if part.index in part.units and not part.places.get(part.index) and any(part.places.values()):
        part.places[part.index] = part.index_place


def _whole(text: str) -> int:
    return int(text) if text.isdecimal() and len(text) < 7 else 0


def _add_field(part: _Part, name: str, text: str) -> None:
    if name == "indexType":
        part.index_type = text.casefold()
    elif name == "indexCurve":
        part.index = text
    elif name == "nullValue":
        _add_null(part, "", text)
    elif name == "dataDelimiter" and text:
        part.delimiter = DELIMITERS.get(text.casefold(), text)
    elif name == "startDateTimeIndex":
        part.start = text or None
    elif name == "mnemonicList":
        part.listed = [word.strip() for word in text.split(",")]
    elif name == "unitList":
        for mnemonic, unit in zip(part.listed, text.split(","), strict=False):
            part.units[mnemonic] = unit.strip() or part.units.get(mnemonic, "")


def _add_null(part: _Part, name: str, text: str) -> None:
    try:
        part.nulls[name] = float(text)
    except ValueError:
        return


def _raw(path: Path, parts: list[_Part], keep: Keep) -> RawLog:
    """Put the parts of one log one after another, in the order of their first rows."""
    import pandas as pd

    firsts = [part.rows[0].split(part.delimiter)[0] for part in parts]
    if len({len(first) for first in firsts}) == 1 and firsts[0][:4].isdecimal() and firsts[0][4:5] == "-":
        parts = [part for _, part in sorted(zip(firsts, parts, strict=True), key=lambda pair: pair[0])]
    names = parts[0].order
    index = parts[0].index or (names[0] if names else "")
    wanted = [number for number, name in enumerate(names) if keep(name) or name == index]
    tables, lines, cut = [], [], 0
    for part in parts:
        table, longer = _table(part, len(names), wanted)
        tables.append(table)
        lines += part.lines
        cut += longer
    notes = [f"{len(parts)} parts of one log put together"] if len(parts) > 1 else []
    notes += [f"{cut} rows longer than their header were cut"] if cut else []
    return RawLog(
        path=path,
        format="WITSML",
        names=tuple(names),
        units=tuple(parts[0].units.get(name) or None for name in names),
        table=tables[0] if len(tables) == 1 else pd.concat(tables, ignore_index=True),
        first_line=lines[0],
        lines=np.array(lines),
        nulls=tuple(dict.fromkeys(part.nulls[""] for part in parts if "" in part.nulls)),
        own_nulls={name: null for part in parts for name, null in part.nulls.items() if name},
        start=parts[0].start,
        notes=tuple(notes),
        about=parts[0].about,
        by=parts[0].by,
    )


def _table(part: _Part, width: int, wanted: list[int]) -> tuple[pd.DataFrame, int]:
    """Split rows into the columns wanted; rows longer than the header are cut, and counted."""
    import pandas as pd

    commas = [row.count(part.delimiter) for row in part.rows]
    longer = sum(count >= width for count in commas)
    if not longer and not any('"' in row or "\n" in row for row in part.rows):
        try:
            return _fast(part, width, wanted), 0
        except (pd.errors.ParserError, pd.errors.EmptyDataError):
            longer = 0
    return _patient(part, wanted), longer


def _fast(part: _Part, width: int, wanted: list[int]) -> pd.DataFrame:
    import pandas as pd

    return pd.read_csv(
        io.StringIO("\n".join(part.rows)),
        engine="c",
        sep=part.delimiter,
        header=None,
        names=range(width),
        usecols=wanted,
        skip_blank_lines=False,
        skipinitialspace=True,
        index_col=False,
        na_values=words_for_pandas(),
        low_memory=False,
    )[wanted]


def _patient(part: _Part, wanted: Iterable[int]) -> pd.DataFrame:
    import pandas as pd

    columns: dict[int, list[str | None]] = {number: [] for number in wanted}
    for row in part.rows:
        cells = row.split(part.delimiter)
        for number, column in columns.items():
            cell = cells[number].strip().strip('"') if number < len(cells) else ""
            column.append(None if cell.casefold() in WORDS else cell)
    table = pd.DataFrame({number: pd.Series(cells, dtype="object") for number, cells in columns.items()})
    for number in columns:
        converted = pd.to_numeric(table[number], errors="coerce")
        if converted.notna().sum() == table[number].notna().sum():
            table[number] = converted
    return table
