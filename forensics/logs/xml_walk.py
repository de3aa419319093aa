"""XML as a stream of elements, without anything a hostile file could use: no DTD, no entities, bounded text.

The parser is the standard library's expat. Entities can be declared in a DTD alone, and none of the formats
read here has one, so a file with one is refused before an entity is ever expanded.
"""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from pathlib import Path
from typing import NamedTuple
from xml.parsers import expat

from forensics.errors import InputError, LogError
from forensics.logs.packed import UNPACK_ERRORS, open_bytes

CHUNK = 2**16
DEEPEST = 100
# Longest text of one element [characters]: a row of data with thousands of columns stays far below.
LONGEST = 2**22


class Event(NamedTuple):
    """An element that opens (`opens` True, with its attributes) or closes (with its text)."""

    opens: bool
    name: str
    attributes: Mapping[str, str]
    text: str
    line: int


_NO_ATTRIBUTES: Mapping[str, str] = {}


class _Collector:
    """What expat calls: gathers events, refuses what no log needs."""

    def __init__(self, path: Path, kind: type[InputError]) -> None:
        self.events: list[Event] = []
        self.parser = expat.ParserCreate()
        self._path, self._kind = path, kind
        self._text: list[str] = []
        self._depth = self._length = 0
        self.parser.buffer_text = True
        self.parser.StartElementHandler = self._open
        self.parser.EndElementHandler = self._close
        self.parser.CharacterDataHandler = self._add
        self.parser.StartDoctypeDeclHandler = self._refuse_doctype

    def refuse(self, message: str) -> InputError:
        return self._kind(message, file=self._path, line=self.parser.CurrentLineNumber)

    def _refuse_doctype(self, *_: object) -> None:
        raise self.refuse(
            "the XML declares a document type; no WITSML file has one, and entities declared in it are not "
            "read: take the <!DOCTYPE ...> out, or export the file anew"
        )

    def _open(self, tag: str, attributes: dict[str, str]) -> None:
        self._depth += 1
        if self._depth > DEEPEST:
            raise self.refuse(f"the XML nests elements more than {DEEPEST} deep; this is no WITSML file")
        self._text, self._length = [], 0
        self.events.append(Event(True, _local(tag), attributes, "", self.parser.CurrentLineNumber))

    def _add(self, text: str) -> None:
        self._length += len(text)
        if self._length > LONGEST:
            raise self.refuse(f"one element holds more than {LONGEST:,} characters; this is no WITSML file")
        self._text.append(text)

    def _close(self, tag: str) -> None:
        self._depth -= 1
        text = "".join(self._text).strip()
        self._text, self._length = [], 0
        self.events.append(Event(False, _local(tag), _NO_ATTRIBUTES, text, self.parser.CurrentLineNumber))


def _local(tag: str) -> str:
    """Name an element without its namespace prefix: versions and vendors' own spaces don't matter."""
    return tag.rpartition(":")[2]


def _feed(collector: _Collector, chunk: bytes) -> None:
    """Parse some bytes; the parser knows UTF-8, UTF-16, Latin-1 and encodings of one byte a letter."""
    try:
        collector.parser.Parse(chunk, False)
    except (ValueError, LookupError) as error:
        raise collector.refuse(
            f"the XML declares an encoding that can't be read ({error}); save it as UTF-8"
        ) from error


def walk(path: Path, kind: type[InputError] = LogError) -> Iterator[Event]:
    """Walk an XML file once, in a memory that does not grow with it.

    Parameters
    ----------
    path : Path
        The file, packed with gzip or not.
    kind : type
        Class of the refusals.

    Yields
    ------
    Event
        Elements as they open and close.

    Raises
    ------
    InputError
        Of the kind asked for: if the XML is broken, declares a document type, nests or swells beyond reason,
        or the file can't be unpacked.
    """
    collector = _Collector(path, kind)
    try:
        with open_bytes(path) as file:
            while chunk := file.read(CHUNK):
                _feed(collector, chunk)
                yield from collector.events
                collector.events.clear()
            collector.parser.Parse(b"", True)
    except expat.ExpatError as error:
        message = f"the XML is broken: {expat.errors.messages[error.code]}; export the file anew"
        raise kind(message, file=path, line=error.lineno) from error
    except UNPACK_ERRORS as error:
        raise kind(f"the file can't be unpacked: {error}", file=path) from error
    yield from collector.events
