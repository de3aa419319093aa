"""WITSML objects other than logs: small trees of elements, numbers in SI by their uom."""

from __future__ import annotations

import math
import re
from collections.abc import Iterator, Mapping
from dataclasses import dataclass, field
from pathlib import Path

from forensics import units
from forensics.errors import TableError, UnitError, no_file
from forensics.logs.packed import UNPACK_ERRORS, open_bytes
from forensics.logs.witsml_log import sniff
from forensics.logs.xml_walk import walk

# Written where nothing was measured; a correction of 999.25 rad has been met too.
_PLACEHOLDERS = (-999.25, -9999.0, -999.0, 999.25, 9999.0)
# What an object tells of, by the sections of a case file.
TABLES = {"trajectory": "survey", "tubular": "string", "wbGeometry": "hole"}
# More elements than any survey or tally has.
MOST = 1_000_000


@dataclass
class Element:
    """An element with its place in the file."""

    file: Path
    name: str
    attributes: Mapping[str, str]
    line: int
    text: str = ""
    children: list[Element] = field(default_factory=list)

    def every(self, name: str) -> list[Element]:
        """Children of a name."""
        return [child for child in self.children if child.name == name]

    def first(self, *names: str) -> Element | None:
        """Go down by names, taking the first child of each; None where one is missing."""
        found: Element | None = self
        for name in names:
            found = None if found is None else next(iter(found.every(name)), None)
        return found

    def word(self, *names: str) -> str:
        """Text of the element that names lead to; empty where there is none."""
        found = self.first(*names)
        return "" if found is None else found.text

    def error(self, message: str, column: str | None = None) -> TableError:
        """Make a refusal that names file, line and element."""
        return TableError(message, file=self.file, line=self.line, column=column)

    def number(self, quantity: str, *names: str) -> float:
        """Read the number of the element that names lead to [SI]; NaN for none, or a placeholder.

        Raises
        ------
        TableError
            If the text is no number, or its uom is missing or not one of the quantity.
        """
        found = self.first(*names)
        if found is None or not found.text:
            return math.nan
        label = "/".join(names)
        try:
            value = float(found.text)
        except ValueError:
            raise found.error(f"holds {found.text!r}; a number is needed", label) from None
        if not math.isfinite(value) or any(math.isclose(value, p) for p in _PLACEHOLDERS):
            return math.nan
        if quantity == "dimensionless":
            return value
        uom = found.attributes.get("uom", "")
        if units.is_blank(uom):
            example = units.spellings(quantity)[0]
            raise found.error(f'is {found.text} without a unit; give it as uom="{example}"', label)
        try:
            return float(units.to_si(value, uom, quantity))
        except UnitError as error:
            raise found.error(error.message, label) from None


def is_xml(path: Path) -> bool:
    """Tell whether a table of the case is XML; what can't be read as a file is none."""
    if no_file(path) is not None:
        return False
    try:
        with open_bytes(path) as file:
            return sniff(path, file.read(256))
    except UNPACK_ERRORS:
        return False


def object_kind(head: bytes) -> str | None:
    """Tell which table of a case a WITSML document can be, from its first bytes; None for none of them.

    Examples
    --------
    >>> object_kind(b"<tubulars><tubular>")
    'string'
    """
    found = re.search(rb"<(?:\w+:)?(trajectory|tubular|wbGeometry)[\s>]", head)
    return None if found is None else TABLES[found[1].decode()]


def read_objects(path: Path, name: str, plural: str) -> list[Element]:
    """Read the objects of one kind from a WITSML document.

    Parameters
    ----------
    path : Path
        The file.
    name, plural : str
        Element of the object, and of the list of them: "trajectory", "trajectorys".

    Returns
    -------
    list of Element
        At least one.

    Raises
    ------
    TableError
        If the XML is broken or unsafe, or holds no such object.
    """
    found = [element for element in _trees(path) if element.name == name]
    if found:
        return found
    other = sorted({element.name for element in _trees(path)})
    what = f"a document of {', '.join(other[:4])}" if other else "nothing"
    raise TableError(f"holds {what}; a WITSML <{plural}> document with a <{name}> is needed", file=path)


def _trees(path: Path) -> Iterator[Element]:
    """Give the children of the document's root, or the root itself where it is an object."""
    stack: list[Element] = []
    count = 0
    for event in walk(path, TableError):
        if event.opens:
            count += 1
            if count > MOST:
                raise TableError(f"holds more than {MOST:,} elements; this is no table of a well", file=path)
            stack.append(Element(path, event.name, event.attributes, event.line))
            continue
        element = stack.pop()
        element.text = event.text if not element.children else ""
        if stack:
            stack[-1].children.append(element)
        else:
            plural = element.children and not element.name.endswith(("trajectory", "tubular", "wbGeometry"))
            yield from element.children if plural else [element]


def choose(objects: list[Element], what: str) -> Element:
    """Take the one object of a file; refuse several, by their names.

    Raises
    ------
    TableError
        If there are several.
    """
    if len(objects) == 1:
        return objects[0]
    names = ", ".join(repr(o.word("name") or o.attributes.get("uid", "?")) for o in objects[:12])
    raise objects[1].error(f"holds {len(objects)} {what} objects ({names}); keep the one of this run")
