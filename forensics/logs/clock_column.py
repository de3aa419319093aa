"""Which column of a log holds its time."""

from __future__ import annotations

from typing import TYPE_CHECKING

from forensics import channels
from forensics.errors import LogError
from forensics.logs.clock_text import looks_like_date, take_apart
from forensics.logs.naming import split_name
from forensics.logs.raw import RawLog

if TYPE_CHECKING:
    import pandas as pd

DATE_NAMES = frozenset(
    [
        "date",
        "day",
        "datum",
        "dato",
        "yyyymmdd",
        "ddmmyyyy",
        "mmddyyyy",
        "yymmdd",
        "ddmmyy",
        "logdate",
        "fecha",
    ]
)
CLOCK_NAMES = frozenset(
    ["time", "hhmmss", "hhmm", "clock", "timeofday", "tod", "tid", "uhrzeit", "zeit", "hora"]
)


def is_time_name(name: str) -> bool:
    """Tell whether a column's name says it holds a date or a time."""
    key = time_key(name)
    return key in DATE_NAMES or key in CLOCK_NAMES or channels.match(split_name(name)[0])[0] == "time"


def pick_time(raw: RawLog, chosen: tuple[str, str | None] | None) -> tuple[int, str | None]:
    """Find the time column: the one named, the best by name, or the first if it holds stamps.

    Parameters
    ----------
    raw : RawLog
        The file.
    chosen : tuple of (str, str or None), optional
        Column and unit the case file names.

    Returns
    -------
    int, str or None
        Its number among the columns, and its unit.

    Raises
    ------
    LogError
        If no column holds time.
    """
    loaded = [i for i in range(len(raw.names)) if i in raw.table]
    if chosen is not None:
        key = channels.normalise(chosen[0])
        for i in loaded:
            if raw.names[i] == chosen[0] or channels.normalise(raw.names[i]) == key:
                return i, chosen[1] or unit_of(raw, i)
    filled = [i for i in loaded if not raw.table[i].isna().all()]
    named = [i for i in filled if time_key(raw.names[i]) in CLOCK_NAMES]
    named += [i for i in filled if channels.match(split_name(raw.names[i])[0])[0] == "time"]
    named += [i for i in filled if time_key(raw.names[i]) in DATE_NAMES]
    full = [i for i in named if _holds_stamps(raw.table[i])]
    stamped = [i for i in filled if _holds_stamps(raw.table[i])] if not named else []
    # The index of a file that says when it starts can be nothing else.
    index = filled[:1] if raw.start is not None and not raw.format.startswith("CSV") else []
    for i in (*full, *named, *stamped, *index):
        return i, unit_of(raw, i)
    seen = ", ".join(repr(name) for name in raw.names[:40])
    first = channels.match(split_name(raw.names[0])[0])[0] if raw.names else None
    by_depth = first in {"hole_depth", "bit_depth"}
    hint = "; if it is a log by depth, name it under [logs] depth" if by_depth else ""
    raise LogError(
        f'found no column of time among {seen}; name it under [logs.channels] as time = "..."{hint}',
        file=raw.path,
    )


def time_key(name: str) -> str:
    """Bring a column's name, without its unit, to the form names are compared in."""
    return channels.normalise(split_name(name)[0])


def unit_of(raw: RawLog, place: int) -> str | None:
    """Give the unit of a column: the file's, or the one glued to its name."""
    return raw.units[place] or split_name(raw.names[place])[1]


def _holds_stamps(column: pd.Series) -> bool:
    if column.dtype.kind == "M":
        return True
    texts = [str(text) for text in column.dropna().iloc[:5]]
    return bool(texts) and all(looks_like_date(text) and take_apart(text).clock is not None for text in texts)
