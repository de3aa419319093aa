"""Logs as delimited text: CSV and its relatives, packed with gzip or not."""

from __future__ import annotations

import io
import warnings
from pathlib import Path

import pandas as pd

from forensics.errors import LogError
from forensics.logs.dialect import Dialect, find_dialect, split_line
from forensics.logs.packed import UNPACK_ERRORS, is_packed, open_bytes
from forensics.logs.raw import Keep, RawLog

HEAD = 2**18
SUFFIXES = (".csv", ".gz", ".txt", ".tsv", ".asc", ".dat", ".prn")


def sniff(path: Path, head: bytes) -> bool:
    """Tell whether a file looks like delimited text; the last reader to be asked, so it takes all but XML."""
    return path.suffix.casefold() in SUFFIXES or not head.lstrip(b"\xef\xbb\xbf \r\n\t").startswith(b"<")


def read(path: Path, head: bytes, keep: Keep) -> RawLog:
    """Read a delimited file.

    Parameters
    ----------
    path : Path
        The file; gzip is unpacked in memory.
    head : bytes
        Its first bytes, unpacked.
    keep : callable
        Says which columns to load, by name.

    Returns
    -------
    RawLog
        Columns as numbers where every entry is one, else as text.

    Raises
    ------
    LogError
        If the file is empty, has no rows of data or can't be unpacked.
    """
    dialect = find_dialect(head, path)
    # The first two columns may hold the stamps whatever they are called.
    wanted = [number for number, name in enumerate(dialect.names) if number < 2 or keep(name)]
    notes = list(dialect.notes)
    table = _fast(path, dialect, wanted)
    dropped = 0
    if table is None:
        table, dropped = _patient(path, dialect, wanted)
        notes.append("rows with more fields than the header were cut to it")
    if (
        _cut_short(path)
        and len(table) > 1
        and table.iloc[-1].isna().any()
        and not table.iloc[-2].isna().any()
    ):
        # A line the recorder did not finish: its last number may have lost digits.
        table, dropped = table.iloc[:-1], dropped + 1
        notes.append("the last line breaks off and was left out")
    return RawLog(
        path=path,
        format="CSV",
        names=dialect.names,
        units=dialect.units,
        table=table,
        first_line=dialect.skip + 1,
        start=dialect.start,
        date_hint=" ".join(filter(None, (*dialect.names, *dialect.units))),
        notes=tuple(notes),
        grouped=dialect.delimiter == ",",
        dropped=dropped,
    )


def _fast(path: Path, dialect: Dialect, wanted: list[int]) -> pd.DataFrame | None:
    """Read with the C parser; None where a row has more fields than it allows.

    Options that a clean file does not need are left out: together they cost more than the parsing.
    """
    width = len(dialect.names)
    options = {
        "sep": r"\s+" if dialect.delimiter == " " else dialect.delimiter,
        "decimal": dialect.decimal,
        "names": range(width),
        "skiprows": dialect.skip,
        "encoding": dialect.encoding,
        **({"skipinitialspace": True} if dialect.padded else {}),
        **({"usecols": wanted} if len(wanted) < 0.9 * width else {}),
    }
    slow = {"low_memory": False, "encoding_errors": "replace"}
    for extra in ({}, slow):
        try:
            with warnings.catch_warnings():
                warnings.simplefilter("error", pd.errors.DtypeWarning)
                warnings.simplefilter("error", pd.errors.ParserWarning)
                return _parse(path, {**options, **extra})[wanted]
        except (pd.errors.DtypeWarning, UnicodeDecodeError):
            continue
        except (pd.errors.ParserError, pd.errors.ParserWarning, pd.errors.EmptyDataError):
            return None
        except UNPACK_ERRORS as error:
            raise LogError(f"the file can't be unpacked: {error}", file=path) from error
    return None


def _parse(path: Path, options: dict[str, object]) -> pd.DataFrame:
    fixed = {"engine": "c", "header": None, "skip_blank_lines": False, "index_col": False}
    if not is_packed(path):
        return pd.read_csv(path, **fixed, **options)
    with open_bytes(path) as file:
        return pd.read_csv(file, **fixed, **options)


def _text(path: Path, dialect: Dialect) -> io.TextIOBase:
    return io.TextIOWrapper(open_bytes(path), encoding=dialect.encoding, errors="replace")


def _patient(path: Path, dialect: Dialect, wanted: list[int]) -> tuple[pd.DataFrame, int]:
    """Read line by line: long rows are cut, short ones filled, so that line numbers hold."""
    rows: list[list[str | None]] = []
    with _text(path, dialect) as lines:
        for number, line in enumerate(lines):
            if number < dialect.skip:
                continue
            fields = split_line(line.rstrip("\r\n"), dialect.delimiter)
            rows.append([fields[i] if i < len(fields) and fields[i] else None for i in wanted])
    return pd.DataFrame(rows, columns=wanted), 0


def _cut_short(path: Path) -> bool:
    """Tell whether the last line lacks its end."""
    if is_packed(path) or path.stat().st_size < 2:
        return False
    with path.open("rb") as file:
        file.seek(-2, 2)
        return b"\n" not in (tail := file.read(2)) and b"\r" not in tail
