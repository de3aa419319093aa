"""A table of the case file with its place in the text, and the checks a value can be put through."""

from __future__ import annotations

import re
import zoneinfo
from collections.abc import Callable, Iterable, Mapping
from dataclasses import dataclass
from pathlib import Path
from typing import Any

from forensics.errors import CaseError, UnitError, nearest, no_file
from forensics.units import parse_quantity, spellings

#: Letters a folder's name may have, with room for what is put beside it.
LONGEST_ID = 120


@dataclass(frozen=True)
class Node:
    """A table of the file with its place in it."""

    path: Path
    text: str
    values: Mapping[str, Any]
    keys: tuple[str, ...]

    def error(self, message: str, key: str) -> CaseError:
        """Make a refusal that names the key, and its line where the text shows it."""
        keys = (*self.keys, key)
        return CaseError(f"{'.'.join(keys)}: {message}", file=self.path, line=line_of(self.text, keys))

    def only(self, known: Iterable[str]) -> None:
        """Refuse keys that are not known here."""
        names = tuple(known)
        for key in self.values:
            if key not in names:
                raise self.error(f"unknown key; {nearest(key, names)}", key)

    def take(self, key: str, convert: Callable[[Node, str, Any], Any], default: object = None) -> Any:  # noqa: ANN401
        """Return a key's value, converted, or the default where it is absent."""
        return convert(self, key, self.values[key]) if key in self.values else default

    def need(self, key: str, convert: Callable[[Node, str, Any], Any], example: str) -> Any:  # noqa: ANN401
        """Return a key's value, converted; refuse its absence."""
        if key not in self.values:
            place = f"[{'.'.join(self.keys)}] needs {key!r}" if self.keys else f"section [{key}] is missing"
            raise CaseError(f"{place}, such as {example}", file=self.path, line=line_of(self.text, self.keys))
        return convert(self, key, self.values[key])

    def section(self, key: str, known: Iterable[str]) -> Node:
        """Return a sub-table with its keys checked; an absent one is empty."""
        values = self.values.get(key, {})
        if not isinstance(values, dict):
            raise self.error(f"is {values!r}; a table is needed, such as [{key}]", key)
        node = Node(self.path, self.text, values, (*self.keys, key))
        node.only(known)
        return node


def line_of(text: str, keys: tuple[str, ...]) -> int | None:
    """Find the line a key stands on, by its section and name; None where the text does not show it."""
    section: tuple[str, ...] = ()
    for number, line in enumerate(text.splitlines(), 1):
        header = re.match(r"\s*\[+([^\]]*)\]", line)
        if header:
            section = tuple(part.strip().strip("\"'") for part in header.group(1).split("."))
            if section == keys:
                return number
            continue
        left = re.match(r"\s*([\w.\-\"' ]+?)\s*=", line)
        if left:
            full = (*section, *(part.strip().strip("\"'") for part in left.group(1).split(".")))
            # A key of an inline table stands on its table's line.
            if full == keys[: len(full)] and len(full) > len(section):
                return number
    return None


def as_text(node: Node, key: str, value: object) -> str:
    """Take text in quotes that is not blank."""
    if not isinstance(value, str) or not value.strip():
        raise node.error(f"is {value!r}; text in quotes is needed", key)
    return value.strip()


def as_note(node: Node, key: str, value: object) -> str | None:
    """Take text that may be blank, which counts as absent."""
    return as_text(node, key, value) if value != "" else None


def as_identifier(node: Node, key: str, value: object) -> str:
    """Take a name that can name a folder."""
    if not isinstance(value, str) or not re.fullmatch(r"[A-Za-z0-9._-]*[A-Za-z0-9][A-Za-z0-9._-]*", value):
        raise node.error(
            f"is {value!r}; letters, digits, dot, dash and underscore only (it names a folder)", key
        )
    if len(value) > LONGEST_ID:
        raise node.error(f"has {len(value)} letters; {LONGEST_ID} at most (it names a folder)", key)
    return value


def as_file(node: Node, key: str, value: object) -> Path:
    """Take the path of a file that is there, relative to the case file."""
    text = as_text(node, key, value)
    try:
        path = (node.path.parent / text).resolve()
        found = no_file(path)
    except (OSError, ValueError, RuntimeError) as error:
        found = f"can't be named so ({error})"
    if found is not None:
        raise node.error(f"file {value!r} {found}; paths are relative to the case file", key)
    return path


def as_files(node: Node, key: str, value: object) -> tuple[Path, ...]:
    """Take one path or a list of paths."""
    items = value if isinstance(value, list) else [value]
    return tuple(as_file(node, key, item) for item in items)


def as_timezone(node: Node, key: str, value: object) -> str:
    """Take an IANA name, or an offset such as "+02:00" (returned in that form)."""
    name = as_text(node, key, value)
    offset = re.fullmatch(r"(?:UTC|GMT)?([+-])(\d{1,2}):?(\d{2})?", name)
    if offset and int(offset.group(2)) <= 14 and int(offset.group(3) or 0) < 60:
        return f"{offset.group(1)}{int(offset.group(2)):02d}:{int(offset.group(3) or 0):02d}"
    if name.upper() in {"Z", "UTC", "GMT"}:
        return "UTC"
    try:
        zoneinfo.ZoneInfo(name)
    except (ValueError, OSError, zoneinfo.ZoneInfoNotFoundError):
        hint = nearest(name, zoneinfo.available_timezones())
        hint = hint if hint.startswith("did") else 'such as "Europe/Oslo" or "+02:00"'
        raise node.error(f"unknown time zone {name!r}; {hint}", key) from None
    return name


def as_flag(node: Node, key: str, value: object) -> bool:
    """Take true or false."""
    if not isinstance(value, bool):
        raise node.error(f"is {value!r}; true or false is needed", key)
    return value


def as_number(low: float, high: float) -> Callable[[Node, str, object], float]:
    """Make a check that takes a bare number from `low` to `high`."""

    def convert(node: Node, key: str, value: object) -> float:
        if isinstance(value, bool) or not isinstance(value, int | float) or not low <= value <= high:
            raise node.error(f"is {value!r}; a number from {low:g} to {high:g} is needed", key)
        return float(value)

    return convert


def as_whole(low: int, high: int) -> Callable[[Node, str, object], int]:
    """Make a check that takes a whole number from `low` to `high`."""

    def convert(node: Node, key: str, value: object) -> int:
        if isinstance(value, bool) or not isinstance(value, int) or not low <= value <= high:
            raise node.error(f"is {value!r}; a whole number from {low} to {high} is needed", key)
        return value

    return convert


def as_quantity(quantity: str, low: float = 0.0, high: float = float("inf")) -> Callable[..., float]:
    """Make a check that takes text such as "60 s" and returns it in SI, between `low` and `high`."""

    def convert(node: Node, key: str, value: object) -> float:
        if isinstance(value, int | float) and not isinstance(value, bool):
            unit = spellings(quantity)[0]
            raise node.error(
                f'is the bare number {value}; write it with its unit, such as "{value} {unit}"', key
            )
        try:
            number = parse_quantity(as_text(node, key, value), quantity)
        except UnitError as error:
            raise node.error(error.message, key) from None
        if not low <= number <= high:
            raise node.error(f"is {value!r}, which is no {quantity} for this key", key)
        return number

    return convert


def as_choice(*words: str) -> Callable[[Node, str, object], str]:
    """Make a check that takes one of the words."""

    def convert(node: Node, key: str, value: object) -> str:
        if value not in words:
            raise node.error(f"is {value!r}; {nearest(str(value), words)}", key)
        return str(value)

    return convert


def as_switch(node: Node, key: str, value: object) -> bool:
    """Take "on" or "off"."""
    return as_choice("off", "on")(node, key, value) == "on"
