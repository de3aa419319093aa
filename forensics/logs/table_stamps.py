"""Stamps in the rows of a table: date and clock in one column or two."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from forensics.logs.clock import DAY
from forensics.logs.clock_text import date_fields, day_number, find_order, take_apart
from forensics.logs.zone import to_utc, zone_of
from forensics.tables import Table

Floats = NDArray[np.float64]


def table_stamps(table: Table, timezone: str, clock: str = "time", date: str = "date") -> Floats:
    """Read date and clock of each row to seconds since 1970 UTC.

    Parameters
    ----------
    table : Table
        With the text column `clock`, or `date`, or both.
    timezone : str
        Zone of stamps that carry none.
    clock, date : str
        Names of the columns; the clock may hold the whole stamp.

    Returns
    -------
    ndarray, shape (rows,)
        [s since 1970 UTC]

    Raises
    ------
    TableError
        If a row has no stamp, or one that can be day first or month first.
    """
    texts = [f"{day} {time}".strip() for day, time in zip(table.text(date), table.text(clock), strict=True)]
    column = clock if clock in table.headers else date
    parts = [take_apart(text) for text in texts]
    order = find_order(part.date for part in parts)
    local, offset = np.full(len(table), np.nan), np.full(len(table), np.nan)
    for row, part in enumerate(parts):
        day = day_number(part.date, order)
        if day is None or not part.date:
            raise table.error(
                f"is {texts[row]!r}; a stamp such as 2024-05-03T14:30:00Z is needed", row, column
            )
        if order in (None, "clash") and len(date_fields(part.date) or ()) == 4:
            raise table.error(
                f"is {texts[row]!r}, which can be day first or month first; write dates as YYYY-MM-DD",
                row,
                column,
            )
        local[row] = day * DAY + (part.clock or 0.0)
        offset[row] = np.nan if part.offset is None else part.offset
    known = np.isfinite(offset)
    seconds: Floats = local - np.nan_to_num(offset)
    seconds[~known] = to_utc(local[~known], zone_of(timezone))
    return seconds
