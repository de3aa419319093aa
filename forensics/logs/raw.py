"""A log as a file holds it, before anyone says what its columns are."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import dataclass, field
from pathlib import Path
from typing import TYPE_CHECKING

import numpy as np
from numpy.typing import NDArray

if TYPE_CHECKING:
    import pandas as pd

# Says of a column's name whether its data are worth loading.
Keep = Callable[[str], bool]


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
    lines : ndarray of int, shape (n,), optional
        Line of each row, where rows do not stand on lines of their own one after another.
    nulls : tuple of float
        Values the file itself declares as missing.
    own_nulls : mapping of str to float
        The same for one column alone, in place of `nulls`.
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
    by : str
        "time" or "depth" where the file says what its rows are indexed by, else "".
    systems : mapping of str to tuple of (str or None)
        For a format whose units go by an agreed system that the file does not name: units of every column
        under each system.
    others : tuple of RawLog
        Further logs of the same file, with columns and units of their own.
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
    own_nulls: Mapping[str, float] = field(default_factory=dict)
    by: str = ""
    lines: NDArray[np.int64] | None = None
    systems: Mapping[str, tuple[str | None, ...]] = field(default_factory=dict)
    others: tuple[RawLog, ...] = ()

    def line_of(self, rows: NDArray[np.intp]) -> NDArray[np.int64]:
        """Lines of the file that rows, counted from 0, stand on."""
        if self.lines is not None:
            return self.lines[rows]
        return np.asarray(self.first_line + rows, dtype=np.int64)

    def nulls_of(self, column: str) -> tuple[float, ...]:
        """Values declared as missing in a column; never 0, which a rig that stands still reads."""
        declared = (self.own_nulls[column],) if column in self.own_nulls else self.nulls
        return tuple(value for value in declared if value)
