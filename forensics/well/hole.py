"""The hole: diameters and kinds along depth."""

from __future__ import annotations

from dataclasses import dataclass
from pathlib import Path

import numpy as np
from numpy.typing import ArrayLike, NDArray

from forensics.errors import TableError, nearest
from forensics.tables import Column, Table, plain, read_table
from forensics.well.witsml_geometry import read_geometry
from forensics.well.witsml_objects import is_xml

Floats = NDArray[np.float64]

# Rows measured in feet and rounded meet to within this [m].
JOIN = 0.1
_SMALLEST, _LARGEST = 0.05, 1.6
_KINDS = {
    "cased": "cased", "casing": "cased", "case": "cased", "csg": "cased", "liner": "cased", "riser": "cased",
    "conductor": "cased", "tubing": "cased", "bop": "cased", "casedhole": "cased", "surfacecasing": "cased",
    "open": "open", "openhole": "open", "oh": "open", "barefoot": "open",
}  # fmt: skip

HOLE_COLUMNS = (
    Column("top", "length", ("from", "top md", "md top", "top depth", "start"), required=True),
    Column(
        "bottom", "length", ("to", "bottom md", "md bottom", "base", "bottom depth", "end"), required=True
    ),
    Column("diameter", "length", ("dia", "hole diameter", "hole size", "inner diameter", "id", "size"), True),
    Column("kind", "text", ("type", "hole type"), required=True),
    Column("name", "text", ("section", "description")),
    Column("friction", "dimensionless", ("friction factor", "ff", "mu")),
)


@dataclass(frozen=True)
class Hole:
    """Hole sections from the top down; each starts where the one before ends.

    Parameters
    ----------
    top, bottom, diameter : ndarray, shape (m,)
        Measured depths and inner diameter [m].
    kind : tuple of str
        "cased" or "open".
    name : tuple of str
        What the table calls them; empty where it does not.
    friction : ndarray, shape (m,)
        Friction factor the table gives, NaN where it gives none.
    """

    top: Floats
    bottom: Floats
    diameter: Floats
    kind: tuple[str, ...]
    name: tuple[str, ...]
    friction: Floats

    def row_at(self, md: ArrayLike) -> NDArray[np.intp]:
        """Find the section of any depth, shape (k,); the last one reaches on down, the first one up."""
        index = np.searchsorted(self.top, np.atleast_1d(np.asarray(md, dtype=np.float64)), side="right") - 1
        return np.clip(index, 0, len(self.top) - 1)

    def diameter_at(self, md: ArrayLike) -> Floats:
        """Find the diameter at any depth, shape (k,) [m]."""
        return self.diameter[self.row_at(md)]

    def is_open(self, md: ArrayLike) -> NDArray[np.bool_]:
        """Tell which depths lie in open hole, shape (k,)."""
        return np.array([kind == "open" for kind in self.kind])[self.row_at(md)]

    @property
    def shoe(self) -> float:
        """Depth of the deepest cased bottom, 0 where all is open [m]."""
        return max(
            (b for b, kind in zip(self.bottom.tolist(), self.kind, strict=True) if kind == "cased"),
            default=0.0,
        )


def load_hole(file: Path) -> tuple[Hole, tuple[str, ...]]:
    """Read a hole table.

    Parameters
    ----------
    file : Path
        Columns top, bottom, diameter, kind, and optional name, friction, rows in any order; or a WITSML
        wbGeometry.

    Returns
    -------
    Hole
    tuple of str
        What a reader of the result should know.

    Raises
    ------
    TableError
        If the table can't be read, a diameter or kind is impossible, or sections leave a gap or overlap.
    """
    table, found = read_geometry(file) if is_xml(file) else (read_table(file, HOLE_COLUMNS), ())
    top, bottom, diameter = (table.number(name) for name in ("top", "bottom", "diameter"))
    kinds = [_kind(table, row, text) for row, text in enumerate(table.text("kind"))]
    _check_rows(table, top, bottom, diameter)
    order = np.argsort(top, kind="stable")
    _check_joins(table, top[order], bottom[order], order)
    remarks = list(found)
    if (np.diff(order) < 0).any():
        remarks.append(f"{file.name}: rows were not in order of depth; they were sorted")
    if table.ignored:
        remarks.append(f"{file.name}: columns not used: {', '.join(table.ignored)}")
    tops = top[order]
    tops[0] = 0.0
    hole = Hole(
        top=tops,
        bottom=np.append(tops[1:], bottom[order][-1]),
        diameter=diameter[order],
        kind=tuple(kinds[row] for row in order),
        name=tuple(table.text("name")[row] for row in order),
        friction=table.number("friction")[order],
    )
    return hole, tuple(remarks)


def _kind(table: Table, row: int, text: str) -> str:
    kind = _KINDS.get(plain(text))
    if kind is None:
        raise table.error(f"is {text!r}; 'cased' or 'open' is needed ({nearest(text, _KINDS)})", row, "kind")
    return kind


def _check_rows(table: Table, top: Floats, bottom: Floats, diameter: Floats) -> None:
    friction = table.number("friction")
    for row in range(len(table)):
        if not bottom[row] > top[row]:
            raise table.error(f"is {bottom[row]:.2f} m, not below the top at {top[row]:.2f} m", row, "bottom")
        if not _SMALLEST <= diameter[row] <= _LARGEST:
            raise table.error(
                f"is {diameter[row] * 1000:.4g} mm; {_SMALLEST * 1000:g} to {_LARGEST * 1000:g} mm is "
                "expected: check the number and its unit",
                row,
                "diameter",
            )
        if friction[row] < 0.0 or friction[row] > 1.5:
            raise table.error(f"is {friction[row]:g}; a factor from 0 to 1.5 is needed", row, "friction")


def _check_joins(table: Table, top: Floats, bottom: Floats, order: NDArray[np.intp]) -> None:
    for i, row in enumerate(order):
        above = bottom[i - 1] if i else 0.0
        step = top[i] - above
        if abs(step) <= JOIN:
            continue
        what = "leaves a gap below" if step > 0.0 else "overlaps"
        whom = f"the section that ends at {above:.2f} m" if i else "the rotary table at 0 m"
        if i == 0 and step < 0.0:
            raise table.error(f"is {top[i]:.2f} m; depths count down from the rotary table", int(row), "top")
        raise table.error(
            f"starts at {top[i]:.2f} m and {what} {whom}; sections must meet, the innermost wall only",
            int(row), "top",
        )  # fmt: skip


__all__ = ["HOLE_COLUMNS", "JOIN", "Hole", "TableError", "load_hole"]
