"""JSON files whose bytes follow from their content alone."""

from __future__ import annotations

import json
from collections.abc import Mapping
from pathlib import Path
from typing import Any


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
