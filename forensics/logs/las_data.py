"""The data section of a LAS file, liberal about how its lines are written."""

from __future__ import annotations

import io
import re
from collections import Counter
from pathlib import Path
from typing import TYPE_CHECKING, Protocol

from forensics.errors import LogError
from forensics.logs.clock_text import looks_like_clock, looks_like_date
from forensics.logs.nulls import words_for_pandas
from forensics.logs.raw import Keep

if TYPE_CHECKING:
    import pandas as pd


class _Header(Protocol):
    wrap: bool
    delimiter: str
    names: list[str]
    units: list[str]


Table = "tuple[pd.DataFrame, list[str], list[str], int, list[str]]"


def read_data(body: str, header: _Header, keep: Keep, path: Path) -> Table:
    """Read the lines below ~A.

    Parameters
    ----------
    body : str
        Everything after the line that starts with ~A.
    header : Header
        Curves, wrap and delimiter.
    keep : callable
        Says which columns to load, by name.
    path : Path
        For messages.

    Returns
    -------
    table, names, units, dropped, notes
        Data labelled by column number; names and units mended to the columns found; rows that could
        not be split; remarks.

    Raises
    ------
    LogError
        If there is no row of data.
    """
    notes: list[str] = []
    head = [
        line
        for line in body[:200_000].splitlines()[:200]
        if line.strip() and not line.lstrip().startswith("#")
    ]
    if not head:
        raise LogError("the data section holds no rows", file=path)
    delimiter = header.delimiter or _delimiter(head)
    if header.wrap:
        table, names, units, dropped = _wrapped(body, header)
        if len(table) == 0:
            raise LogError("the data section holds no whole row", file=path)
        wanted = [number for number, name in enumerate(names) if number == 0 or keep(name)]
        return table[wanted], names, units, dropped, ["wrapped lines were joined"]
    width = Counter(len(_split(line, delimiter)) for line in head).most_common(1)[0][0]
    names, units = _mend(header, width, _split(head[len(head) // 2], delimiter), notes)
    wanted = [number for number, name in enumerate(names) if number == 0 or keep(name)]
    table = _fast(body, delimiter, len(names), wanted)
    dropped = 0
    if table is None or _ragged(table):
        table, dropped = _patient(body, delimiter, len(names), wanted)
        if dropped:
            notes.append("lines that do not split into the header's curves were left out")
    if len(table) == 0:
        raise LogError("the data section holds no rows", file=path)
    return table, names, units, dropped, notes


def _delimiter(lines: list[str]) -> str:
    """Blank, unless commas, semicolons or tabs split the lines and decimals don't explain them."""
    lines = [re.sub(r'"[^"]*"', '""', line) for line in lines]
    for mark in ("\t", ";", ","):
        counts = Counter(line.strip().count(mark) for line in lines)
        count, agreeing = counts.most_common(1)[0]
        if count == 0 or agreeing < 0.8 * len(lines):
            continue
        # "12,5 13,5": commas inside every blank-split word are decimal marks.
        words = [word for line in lines[:20] for word in line.split()]
        if mark == "," and sum(bool(re.fullmatch(r"[+-]?\d+,\d+", w)) for w in words) > 0.5 * len(words) > 1:
            continue
        return mark
    return " "


def _split(line: str, delimiter: str) -> list[str]:
    if delimiter == " ":
        return re.findall(r'"[^"]*"|\S+', line)
    return [word.strip().strip('"') for word in line.rstrip("\r\n").split(delimiter)]


def _mend(header: _Header, width: int, sample: list[str], notes: list[str]) -> tuple[list[str], list[str]]:
    """Bring names and units to the number of columns the data have."""
    names, units = list(header.names), list(header.units)
    if width == len(names) + 1 and len(sample) > 1:
        pairs = [i for i in range(len(sample) - 1) if _is_pair(sample[i], sample[i + 1])]
        if pairs:
            # One curve holds date and clock with a blank between: the data have a column more.
            at = pairs[0]
            first_is_date = looks_like_date(sample[at])
            names[at : at + 1] = ["DATE", "TIME"] if first_is_date else ["TIME", "DATE"]
            units[at : at + 1] = ["", ""]
            notes.append("date and time of one curve stand in two columns")
        else:
            names, units = ["INDEX", *names], ["", *units]
            notes.append(
                "the data have a column more than the header has curves; the first was taken as the index"
            )
    elif width > len(names):
        notes.append(f"columns beyond the header's {len(names)} curves were left out")
    return names, units


def _is_pair(one: str, two: str) -> bool:
    return (looks_like_date(one) and looks_like_clock(two)) or (
        looks_like_clock(one) and looks_like_date(two)
    )


def _fast(body: str, delimiter: str, width: int, wanted: list[int]) -> pd.DataFrame | None:
    import pandas as pd

    try:
        return pd.read_csv(
            io.StringIO(body),
            engine="c",
            sep=r"\s+" if delimiter == " " else delimiter,
            header=None,
            names=range(width),
            usecols=wanted,
            skip_blank_lines=False,
            skipinitialspace=True,
            index_col=False,
            na_values=words_for_pandas(),
            low_memory=False,
        )
    except (pd.errors.ParserError, pd.errors.EmptyDataError):
        return None


def _ragged(table: pd.DataFrame) -> bool:
    """Tell whether columns meant for numbers came as text, or rows ended early."""
    import pandas as pd

    text = [number for number in table.columns if not pd.api.types.is_numeric_dtype(table[number])]
    last = table[table.columns[-1]]
    return len(text) > 2 or bool(last.isna().any() and not last.isna().all())


def _patient(body: str, delimiter: str, width: int, wanted: list[int]) -> tuple[pd.DataFrame, int]:
    """Read line by line; numbers run together are parted before a minus sign; odd lines are left out."""
    import pandas as pd

    rows: list[list[str | None]] = []
    dropped = 0
    for line in body.splitlines():
        words = _split(line, delimiter)
        if words and delimiter == " " and len(words) != width:
            words = _split(re.sub(r"(?<=\d)-(?=\d+\.)", " -", line), delimiter)
        if line.lstrip().startswith("#") or not line.strip():
            words = []
        elif len(words) < width and delimiter == " ":
            # Which value is missing can't be told where blanks part them.
            dropped += 1
            words = []
        rows.append([words[i] if i < len(words) and words[i] else None for i in wanted])
    table = pd.DataFrame(rows, columns=wanted)
    for number in wanted:
        mended = table[number].astype("str").str.replace(r"^([+-]?\d+),(\d+)$", r"\1.\2", regex=True)
        converted = pd.to_numeric(mended, errors="coerce")
        if converted.notna().sum() == table[number].notna().sum():
            table[number] = converted
    return table, dropped


def _wrapped(body: str, header: _Header) -> tuple[pd.DataFrame, list[str], list[str], int]:
    """Join wrapped lines: every row has as many values as there are curves."""
    import pandas as pd

    words = [
        word for line in body.splitlines() if not line.lstrip().startswith("#") for word in _split(line, " ")
    ]
    width = len(header.names)
    whole = len(words) // width * width
    rows = [words[i : i + width] for i in range(0, whole, width)]
    table = pd.DataFrame(rows, columns=range(width))
    for number in range(width):
        converted = pd.to_numeric(table[number], errors="coerce")
        if converted.notna().all():
            table[number] = converted
    return table, list(header.names), list(header.units), int(whole < len(words))
