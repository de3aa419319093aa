"""The hole from a WITSML wbGeometry: sections as the innermost wall, from the rotary table down."""

from __future__ import annotations

import math
from dataclasses import dataclass
from itertools import pairwise
from pathlib import Path

import numpy as np

from forensics.tables import Table, plain
from forensics.well.witsml_objects import Element, choose, read_objects

HEADERS = {"top": "mdTop", "bottom": "mdBottom", "diameter": "idSection", "kind": "typeHoleCasing",
           "name": "description", "friction": "factFric"}  # fmt: skip
_KINDS = {
    **dict.fromkeys(("blowoutpreventer", "casing", "conductor", "curvedconductor"), "cased"),
    **dict.fromkeys(("liner", "riser", "tubing"), "cased"),
    "openhole": "open",
}
# A first section that starts this deep at most starts at sea bed or cellar; above it nothing rubs [m].
DEEPEST_START = 3000.0
# Sections measured in feet and rounded meet to within this [m].
JOIN = 0.1


@dataclass(frozen=True)
class _Section:
    element: Element
    kind: str
    top: float
    bottom: float
    diameter: float
    name: str


def read_geometry(file: Path) -> tuple[Table, tuple[str, ...]]:
    """Read a WITSML wbGeometry as a hole table.

    Parameters
    ----------
    file : Path
        A document of one wbGeometry.

    Returns
    -------
    Table
        top, bottom, diameter, kind, name, friction; sections that meet, the innermost wall only.
    tuple of str
        What was repaired, with counts.

    Raises
    ------
    TableError
        If a section has no depth or no diameter, or is of a kind that says neither cased nor open.

    References
    ----------
    Energistics, WITSML data schemas 1.3.1.1 and 1.4.1.1, `wbGeometry` object.
    """
    whole = choose(read_objects(file, "wbGeometry", "wbGeometrys"), "wbGeometry")
    elements = whole.every("wbGeometrySection")
    if not elements:
        raise whole.error("the wbGeometry holds no wbGeometrySection; export it with its sections")
    remarks: list[str] = []
    sections = [_section(element, remarks) for element in elements]
    ordered = sorted(sections, key=lambda s: (s.top, s.bottom))
    if ordered != sections:
        remarks.append(f"{file.name}: {len(sections)} sections stood out of order; sorted by depth")
    _say_copied(elements, file.name, remarks)
    rows = _innermost(ordered, file.name, remarks)
    if 0.0 < rows[0][1] <= DEEPEST_START and rows[0][0].kind == "cased":
        remarks.append(
            f"{file.name}: the first wall starts at {rows[0][1]:.1f} m; it was drawn up to the rotary table"
        )
        rows[0] = (rows[0][0], 0.0, rows[0][2])
    return _table(file, rows), tuple(remarks)


def _section(element: Element, remarks: list[str]) -> _Section:
    word = element.word("typeHoleCasing")
    kind = _KINDS.get(plain(word))
    if kind is None:
        known = "casing, liner, riser, conductor, open hole"
        raise element.error(f"is {word or 'missing'!r}; a kind such as {known} is needed", "typeHoleCasing")
    top, bottom = (element.number("length", key) for key in ("mdTop", "mdBottom"))
    name = element.word("description") or word
    for key, value in (("mdTop", top), ("mdBottom", bottom)):
        if math.isnan(value):
            raise element.error(f"is missing in section {name!r}; its measured depth is needed", key)
    inner, outer = (element.number("diameter", key) for key in ("idSection", "odSection"))
    if kind == "open" and not inner > 0.0 and outer > 0.0:
        # An open hole has one diameter; some write it as the outer one.
        inner = outer
        remarks.append(f"{element.file.name}: odSection taken as the diameter of {name!r}, no idSection")
    if not inner > 0.0:
        raise element.error(
            f"is missing or 0 in section {name!r} from {top:.1f} m; its inner diameter is needed", "idSection"
        )
    return _Section(element, kind, top, bottom, inner, name)


def _say_copied(elements: list[Element], name: str, remarks: list[str]) -> None:
    """Say of vertical depths that repeat measured ones that nothing rests on them."""
    pairs = [(e.number("length", "mdBottom"), e.number("length", "tvdBottom")) for e in elements]
    known = [(md, tvd) for md, tvd in pairs if not math.isnan(tvd)]
    if len(known) > 1 and all(abs(md - tvd) < 0.01 for md, tvd in known):
        remarks.append(f"{name}: tvdBottom repeats mdBottom in all sections; not used, the survey tells it")


def _innermost(ordered: list[_Section], name: str, remarks: list[str]) -> list[tuple[_Section, float, float]]:
    """Cut sections that overlap at every top and bottom, and keep the innermost wall of each stretch."""
    edges = np.unique([edge for s in ordered for edge in (s.top, s.bottom)])
    overlapping = sum(b.top < a.bottom - JOIN for a, b in pairwise(ordered))
    if not overlapping:
        return [(s, s.top, s.bottom) for s in ordered]
    rows: list[tuple[_Section, float, float]] = []
    for low, high in zip(edges[:-1].tolist(), edges[1:].tolist(), strict=True):
        here = [s for s in ordered if s.top <= low and s.bottom >= high]
        if not here:
            continue
        cased = [s for s in here if s.kind == "cased"]
        inner = min(cased or here, key=lambda s: s.diameter)
        if rows and rows[-1][0] is inner and rows[-1][2] == low:
            rows[-1] = (inner, rows[-1][1], high)
        else:
            rows.append((inner, low, high))
    remarks.append(
        f"{name}: {overlapping} sections overlap others; the innermost casing was taken where there is one, "
        "open hole below"
    )
    return [row for row in rows if row[2] - row[1] > JOIN] or rows


def _table(file: Path, rows: list[tuple[_Section, float, float]]) -> Table:
    numbers = {
        "top": np.array([top for _, top, _ in rows]),
        "bottom": np.array([bottom for _, _, bottom in rows]),
        "diameter": np.array([s.diameter for s, _, _ in rows]),
        # Some write 0 where nobody knows a factor.
        "friction": np.array([s.element.number("dimensionless", "factFric") or math.nan for s, _, _ in rows]),
    }
    texts = {"kind": tuple(s.kind for s, _, _ in rows), "name": tuple(s.name for s, _, _ in rows)}
    return Table(file, tuple(s.element.line for s, _, _ in rows), numbers, texts, HEADERS)
