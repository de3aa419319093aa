"""A log as a file holds it, before anyone says what its columns are."""

from __future__ import annotations

import zlib
from collections.abc import Callable, Mapping
from dataclasses import dataclass, field
from pathlib import Path
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    import pandas as pd

# Says of a column's name whether its data are worth loading.
Keep = Callable[[str], bool]
# What unpacking a damaged gzip file may raise.
UNPACK_ERRORS = (OSError, EOFError, zlib.error)


@dataclass(frozen=True)
class RawLog:
    """Columns of one file with their names and units.

    Parameters
    ----------
    path : Path
        The file.
    format : str
        What a reader calls it: "CSV", "LAS 2.0".
    names, units : tuple of str
        One a column, in file order; a unit is None where the file gives none.
    table : pandas.DataFrame
        Data of the columns loaded, labelled by their number in `names`; numbers or text.
    first_line : int
        Line of the file that holds the first row, counted from 1.
    nulls : tuple of float
        Values the file itself declares as missing.
    start : str or None
        Start of an elapsed-time index as the file's header writes it.
    start_is_first_row : bool
        True where `start` is the stamp of the first row, False where the index counts from it.
    date_hint : str
        What the file says about the order of day and month ("dd/mm" and so on), never more than a hint.
    notes : tuple of str
        What the reader had to put up with, for the report.
    grouped : bool
        True where a comma before three digits sets thousands apart.
    dropped : int
        Rows the reader could not split into columns.
    about : mapping of str to str
        What the file says of a column beside its name.
    """

    path: Path
    format: str
    names: tuple[str, ...]
    units: tuple[str | None, ...]
    table: pd.DataFrame
    first_line: int
    nulls: tuple[float, ...] = ()
    start: str | None = None
    start_is_first_row: bool = False
    date_hint: str = ""
    notes: tuple[str, ...] = field(default=())
    grouped: bool = False
    dropped: int = 0
    about: Mapping[str, str] = field(default_factory=dict)
