"""JSON files whose bytes follow from their content alone, and cells of CSV that no spreadsheet computes."""

from __future__ import annotations

import json
from collections.abc import Mapping
from pathlib import Path
from typing import Any, TypeVar

T = TypeVar("T")
_FORMULA = ("=", "+", "-", "@", "\t", "\r", "\n")


def write_json(content: Mapping[str, Any], path: Path) -> None:
    """Write JSON: UTF-8, two spaces of indent, keys in the order given, no NaN.

    Parameters
    ----------
    content : mapping
        What to write.
    path : Path
        The file to write.

    Raises
    ------
    ValueError
        If a number is NaN or infinite, which JSON can't carry.
    """
    text = json.dumps(content, indent=2, ensure_ascii=False, allow_nan=False)
    path.write_text(text + "\n", encoding="utf-8", newline="\n")


def inert(cell: T) -> T | str:
    """Keep a spreadsheet from taking text for a formula; numbers stay as they are.

    A cell of text that begins with =, +, -, @, a tab or a line end gets an apostrophe in front, which
    spreadsheets read as "text follows".

    Examples
    --------
    >>> inert("=1+1"), inert("Kestrel 3"), inert(-2.5)
    ("'=1+1", 'Kestrel 3', -2.5)
    """
    return f"'{cell}" if isinstance(cell, str) and cell.startswith(_FORMULA) else cell
