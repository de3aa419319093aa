"""What stands for "no value" in rig files, as data, and columns of text turned into numbers."""

from __future__ import annotations

import re
from collections.abc import Iterable
from typing import TYPE_CHECKING

import numpy as np
from numpy.typing import NDArray

if TYPE_CHECKING:
    import pandas as pd

Floats = NDArray[np.float64]

# Always missing, in whatever channel: no rig quantity takes these exact values.
CODES: tuple[float, ...] = (
    -999.25, -999.0, -999.99, -999.9, -9999.0, -9999.25, -9999.99, -99999.0, -99999.25, -999999.0, -8888.0,
    -9998.0, -1.0e30, 1.0e30, 1.70141e38, -2147483648.0
)  # fmt: skip
# Missing only where absurd beside the rest of the column: each is also a possible reading.
CODES_IF_ABSURD: tuple[float, ...] = (
    9999.0, 9998.0, 9999.25, 9999.99, 99999.0, 999.25, 999.0, 8888.0, 32767.0, -32767.0, -32768.0, 65535.0,
    2147483647.0,
)  # fmt: skip
# Text for "no value", compared without case and outer blanks.
WORDS: frozenset[str] = frozenset(
    [
        *(
            "",
            "-",
            "--",
            "---",
            "----",
            ".",
            "?",
            "(null)",
            "null",
            "none",
            "nan",
            "-nan",
            "-nan(ind)",
            "na",
            "n/a",
        ),
        *(
            "#n/a",
            "#na",
            "#err",
            "#error",
            "#value!",
            "#ref!",
            "#div/0!",
            "#num!",
            "err",
            "error",
            "bad",
            "<na>",
        ),
        *(
            "1.#ind",
            "-1.#ind",
            "-1.#ind0000",
            "1.#qnan",
            "-1.#qnan",
            "1.#inf",
            "-1.#inf",
            "inf",
            "-inf",
            "nodata",
        ),
        *("no data", "no value", "missing", "absent", "invalid", "offline", "comm fail", "bad input"),
        *("i/o timeout", "not connected"),
    ]
)
_STARS = re.compile(r"[*#?x-]{2,}")
_SWITCH = {
    **dict.fromkeys(("true", "yes", "on", "in", "y", "in slips", "closed", "set"), 1.0),
    **dict.fromkeys(("false", "no", "off", "out", "n", "out of slips", "open", "pulled"), 0.0),
}
_THOUSANDS = re.compile(r"[+-]?\d{1,3}(?:,\d{3})+(?:\.\d*)?")


def words_for_pandas() -> list[str]:
    """Null words in the cases met, for a reader that compares exactly.

    Examples
    --------
    >>> "(null)" in words_for_pandas()
    True
    """
    return sorted({form for word in WORDS for form in (word, word.upper(), word.capitalize())} - {""})


def _one(text: str, grouped: bool) -> float:
    word = text.strip().casefold()
    if word in WORDS or _STARS.fullmatch(word):
        return np.nan
    if word in _SWITCH:
        return _SWITCH[word]
    if _THOUSANDS.fullmatch(word) and (grouped or "." in word or word.count(",") > 1):
        word = word.replace(",", "")
    return float(word.replace(",", "."))


def to_numbers(column: pd.Series, grouped: bool = False) -> tuple[Floats, int]:
    """Turn a column into numbers.

    Parameters
    ----------
    column : pandas.Series, shape (n,)
        Numbers, booleans or text.
    grouped : bool
        True where a comma before three digits sets thousands apart.

    Returns
    -------
    values : ndarray, shape (n,)
        NaN where the text says "no value" or says nothing a number could be read from.
    garbled : int
        How many entries were text that is neither a number nor a known word for "no value".

    Examples
    --------
    >>> import pandas as pd
    >>> to_numbers(pd.Series(["1.5", "(null)", "2,5", "oops"]))[1]
    1
    """
    import pandas as pd

    if pd.api.types.is_bool_dtype(column) or pd.api.types.is_numeric_dtype(column):
        values = column.to_numpy(dtype=np.float64, na_value=np.nan)
        endless = np.isinf(values)
        return (np.where(endless, np.nan, values) if endless.any() else values), 0
    codes, uniques = pd.factorize(column)
    table = np.full(len(uniques) + 1, np.nan)
    bad = np.zeros(len(uniques) + 1, dtype=bool)
    for place, text in enumerate(uniques):
        try:
            table[place] = _one(str(text), grouped)
        except ValueError:
            bad[place] = True
    table[~np.isfinite(table)] = np.nan
    return table[codes], int(bad[codes].sum())


def mostly_numbers(column: pd.Series) -> Floats | None:
    """Give a column as numbers where nearly all its entries are, else None.

    One garbled entry turns a whole column into text for whoever parses it.

    Examples
    --------
    >>> import pandas as pd
    >>> mostly_numbers(pd.Series(["2031-05-14", "2031-05-15"])) is None
    True
    """
    import pandas as pd

    if not pd.api.types.is_numeric_dtype(column):
        known = column.dropna()
        some = known.iloc[:: max(1, len(known) // 20)]
        if len(some) == 0 or np.isnan(to_numbers(some)[0]).mean() > 0.3:
            return None
    values, garbled = to_numbers(column)
    return values if garbled <= 0.2 * len(values) else None


def find_codes(values: Floats, declared: Iterable[float] = ()) -> NDArray[np.bool_]:
    """Find null codes among numbers.

    Parameters
    ----------
    values : ndarray, shape (n,)
        As the file has them, in its own unit.
    declared : iterable of float
        Codes the file's header declares.

    Returns
    -------
    ndarray of bool, shape (n,)
        True where the value is a code: one of `CODES` or declared, or one of `CODES_IF_ABSURD`
        that lies beyond twice the reach of the rest of the column.
    """
    found = np.zeros(len(values), dtype=bool)
    if len(values) == 0:
        return found
    low, high = float(np.fmin.reduce(values)), float(np.fmax.reduce(values))
    if not np.isfinite(low):
        return found
    for code in (*CODES, *declared):
        # Comparing a whole column costs; most codes lie outside its reach altogether.
        if low <= code + 1e-6 * abs(code) and high >= code - 1e-6 * abs(code):
            found |= np.abs(values - code) <= 1e-6 * abs(code)
    maybe = np.zeros(len(values), dtype=bool)
    for code in CODES_IF_ABSURD:
        if low <= code <= high:
            maybe |= values == code
    if maybe.any():
        rest = np.abs(values[np.isfinite(values) & ~found & ~maybe])
        reach = 2.0 * float(np.max(rest)) if len(rest) else np.inf
        found |= maybe & (np.abs(values) > reach)
    return found
