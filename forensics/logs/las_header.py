"""The sections of a LAS file and the lines of its header, by the grammar of the standards."""

from __future__ import annotations

import re
from dataclasses import dataclass
from pathlib import Path

from forensics.errors import LogError

_TITLE = re.compile(r"^[ \t]*~([^\n]*)\n?", re.MULTILINE)
# LAS 3.0 names its data sections; "Log_Data" and "ASCII" hold logs, others surveys, tops, tests and so on.
_LOG_DATA = re.compile(r"^(?:log_data\b|ascii\b|a\b)", re.IGNORECASE)
_LETTER = re.compile(r"^(?:log_data\b|a)", re.IGNORECASE)
_ANY_DATA = re.compile(r"^\w*_?data\b", re.IGNORECASE)
# A colon that is not one of a clock's.
_BETWEEN_WORDS = re.compile(r"(?<!\d):|:(?!\d)")
_LINE = re.compile(r"^\.?([^.]*?)\s*\.(\S*)\s*(.*)$")


@dataclass(frozen=True)
class Block:
    """A data section: where its title and its rows stand in the text, and the definition it names.

    `line` is the line of its first row, from 1; `definition` the bounds of a section of curves of its own,
    None where the header's ~Curve holds them.
    """

    title_start: int
    start: int
    end: int
    line: int
    definition: tuple[int, int] | None = None


@dataclass(frozen=True)
class Sections:
    """Version of a file, and its data sections."""

    version: str
    blocks: tuple[Block, ...]


@dataclass(frozen=True)
class Item:
    """A header line: the section it stands in by letter, name, unit, value and description.

    `swapped` is what stands after the first colon, where LAS 1.2 and those who follow it put a text value.
    """

    kind: str
    name: str
    unit: str
    value: str
    about: str
    swapped: str = ""


def find_sections(text: str, path: Path) -> Sections:
    """Find the data sections of a file.

    Parameters
    ----------
    text : str
        The whole file.
    path : Path
        For messages.

    Returns
    -------
    Sections
        In file order. In LAS 2.0 only the letter of a title counts, and others borrow titles of 3.0 as they
        like; where a file has sections of log data, data sections of other kinds are left alone.

    Raises
    ------
    LogError
        If there is none.
    """
    titles = list(_TITLE.finditer(text))
    named = [(mark, mark[1].strip()) for mark in titles]
    version = (re.findall(r"VERS\s*\.\s*([123]\.\d)", text[: 2**16], re.IGNORECASE) or ["2.0"])[0]
    log_data = _LOG_DATA if version >= "3" else _LETTER
    logs = [i for i, (_, title) in enumerate(named) if log_data.match(title)]
    found = logs or [i for i, (_, title) in enumerate(named) if _ANY_DATA.match(title)]
    if not found:
        raise LogError("found no data section; expected a line that starts with ~A", file=path)
    ends = [mark.start() for mark in titles[1:]] + [len(text)]
    return Sections(version, tuple(_block(text, named, ends, i) for i in found))


def _block(text: str, named: list[tuple[re.Match[str], str]], ends: list[int], at: int) -> Block:
    mark, title = named[at]
    line = text.count("\n", 0, mark.end()) + 1
    own = re.split(r"[|/]", title)
    plain = re.sub("data", "definition", own[0].strip(), flags=re.IGNORECASE)
    wanted = own[1].strip() if len(own) > 1 else plain
    definition = next(
        ((other.end(), ends[i]) for i, (other, name) in enumerate(named)
         if "definition" in wanted.casefold() and _same(name, wanted)),
        None,
    )  # fmt: skip
    return Block(mark.start(), mark.end(), ends[at], line, definition)


def _same(title: str, wanted: str) -> bool:
    """Compare names of sections; the first of several may go without its number."""
    return title.casefold().removesuffix("[1]").strip() == wanted.casefold().removesuffix("[1]").strip()


def items_of(text: str, kind: str = "") -> list[Item]:
    """Split header lines at the first dot, the first blank after it and the last colon.

    Parameters
    ----------
    text : str
        Header lines, with the titles of their sections or without.
    kind : str
        Letter of the section that lines above the first title belong to; "" passes over them.
    """
    items: list[Item] = []
    for line in text.splitlines():
        bare = line.strip()
        if bare.startswith("~"):
            title = bare[1:].strip().upper()
            kind = "C" if "DEFINITION" in title.split("|")[0] else title[:1]
            continue
        found = _LINE.match(bare)
        if not bare or bare.startswith("#") or found is None or not kind:
            continue
        name, unit, rest = found.groups()
        value, colon, about = rest.rpartition(":")
        value = value.strip() if colon else rest.strip()
        if not value and kind == "V":
            value = about.strip()
        about = about.strip() if colon else ""
        swapped = _BETWEEN_WORDS.split(rest, maxsplit=1)[1:]
        items.append(Item(kind, name.strip(), unit.rstrip(":"), value, about, "".join(swapped).strip()))
    return items
