"""Units at the edge: whatever a rig, a table or a case file writes, to SI and back for showing.

Inside the program every number is SI, with two agreed exceptions: rotation stays in rev/min, and
`linear_weight` is always a force per length [N/m], whether it came as mass or as force.
Spellings are compared without case, blanks and separators, within one quantity: that is what lets
"M" be a metre for a length and "KMN" a kN.m for a moment.
"""

from __future__ import annotations

import math
import re
from collections.abc import Iterable
from dataclasses import dataclass
from functools import lru_cache

import numpy as np
from numpy.typing import ArrayLike, NDArray

from forensics.errors import UnitError, nearest
from forensics.units.table import DISPLAY, INVERSE, NO_UNIT, TABLE, G

__all__ = [
    "QUANTITIES",
    "SYSTEMS",
    "G",
    "Unit",
    "display_unit",
    "factor",
    "is_blank",
    "parse_quantity",
    "quantities_of",
    "show",
    "show_both",
    "spellings",
    "to_si",
]


@dataclass(frozen=True)
class Unit:
    """How a unit becomes SI: si = value * scale + offset, or scale / value where `inverse`.

    Parameters
    ----------
    scale : float
        SI units in one of this unit (for an inverse one, such as min/ft: SI speed at 1).
    offset : float
        SI value at zero.
    inverse : bool
        True for time-per-length spellings of a speed.
    label : str
        The spelling the table lists first.
    """

    scale: float
    offset: float = 0.0
    inverse: bool = False
    label: str = ""


QUANTITIES: tuple[str, ...] = tuple(TABLE)
SYSTEMS = ("metric", "field")

_FLOAT = r"[+-]?(?:\d+\.?\d*|\.\d+)(?:[eE][+-]?\d+)?"
_NUMBER = re.compile(rf"\s*({_FLOAT})(?:\s+(\d+)/(\d+))?\s*(.*?)\s*$", re.DOTALL)


def _key(unit: str) -> str:
    """Strip a spelling of case, blanks and multiplication marks."""
    text = unit.strip().strip("[](){}").replace("º", "°").replace("³", "3").replace("²", "2").casefold()
    if text and not text.strip("-.%#'\"°"):
        return text
    text = re.sub(r"(?<![\d.])\.|\.(?!\d)|[\s_*\u00b7\u22c5\u00d7^]|-", "", text)
    return text.lstrip(".")


@lru_cache(maxsize=1)
def _index() -> dict[str, dict[str, Unit]]:
    index: dict[str, dict[str, Unit]] = {}
    for quantity, rows in TABLE.items():
        units = index.setdefault(quantity, {})
        for spellings, scale in rows:
            words = spellings.split()
            for word in words:
                units.setdefault(_key(word), Unit(scale, label=words[0]))
    for spellings, scale in INVERSE:
        for word in spellings.split():
            index["speed"].setdefault(_key(word), Unit(scale, inverse=True, label=spellings.split()[0]))
    return index


def _require_quantity(quantity: str) -> dict[str, Unit]:
    units = _index().get("length" if quantity == "diameter" else quantity)
    if units is None:
        raise UnitError(f"unknown quantity {quantity!r}; {nearest(quantity, QUANTITIES)}")
    return units


def spellings(quantity: str) -> tuple[str, ...]:
    """Labels of the units known for a quantity, the SI one first.

    Examples
    --------
    >>> spellings("force")[:3]
    ('N', 'daN', 'kN')
    """
    return tuple(dict.fromkeys(unit.label for unit in _require_quantity(quantity).values()))


def quantities_of(unit: str) -> tuple[str, ...]:
    """Quantities a spelling is known for; empty where it is known for none.

    Examples
    --------
    >>> quantities_of("kft.lbf")
    ('moment',)
    """
    key = _key(unit)
    return tuple(quantity for quantity, units in _index().items() if key in units)


def is_blank(unit: str | None) -> bool:
    """Tell whether a unit field says nothing: empty, dashes, "unitless", "Euc" and the like."""
    key = "" if unit is None else _key(unit).strip("?-. ")
    return key in NO_UNIT


def factor(unit: str, quantity: str) -> Unit:
    """Look up the unit behind a spelling, for one quantity.

    Parameters
    ----------
    unit : str
        Spelling, as a file or a user writes it.
    quantity : str
        One of `QUANTITIES`, or "diameter" (a length).

    Returns
    -------
    Unit
        Scale and offset to SI (rev/min for rotation, N/m for linear_weight).

    Raises
    ------
    UnitError
        If the spelling is unknown, or known only for another quantity.

    Examples
    --------
    >>> factor("KMDN", "moment").scale
    10000.0
    """
    units = _require_quantity(quantity)
    found = units.get(_key(unit))
    if found is not None:
        return found
    examples = ", ".join(spellings(quantity)[:6])
    others = _words(quantities_of(unit))
    if others:
        raise UnitError(f"{unit!r} is a unit of {others}, needed one of {quantity}, such as {examples}")
    hint = nearest(unit, spellings(quantity)) if unit.strip() else f"such as {examples}"
    raise UnitError(f"unknown unit {unit!r} for {quantity}; {hint}")


def _words(names: Iterable[str]) -> str:
    return " or ".join(name.replace("_", " ") for name in names)


def to_si(values: ArrayLike, unit: str, quantity: str) -> NDArray[np.float64]:
    """Values in `unit` as SI.

    Parameters
    ----------
    values : array_like, any shape
        Numbers in `unit`; NaN stays NaN.
    unit, quantity : str
        As in `factor`.

    Returns
    -------
    ndarray of float64
        SI values. A time per length of zero or less (min/ft) becomes NaN.

    Raises
    ------
    UnitError
        As `factor`.

    Examples
    --------
    >>> to_si([1.0, 2.0], "kN", "force").tolist()
    [1000.0, 2000.0]
    """
    found = factor(unit, quantity)
    array = np.asarray(values, dtype=np.float64)
    if found.inverse:
        positive = np.where(array > 0.0, array, np.nan)
        return found.scale / positive
    return array * found.scale + found.offset


def parse_quantity(text: object, quantity: str) -> float:
    """Read a number with its unit, as text, into SI.

    Parameters
    ----------
    text : str
        Such as "12.25 in", "9 5/8 in", "290 kN", "30 min"; a bare number only for "dimensionless".
    quantity : str
        As in `factor`.

    Returns
    -------
    float
        The value in SI.

    Raises
    ------
    UnitError
        If there is no number, no unit, or a unit of another quantity.

    Examples
    --------
    >>> round(parse_quantity("12.25 in", "length"), 5)
    0.31115
    """
    units = _require_quantity(quantity)
    example = next(iter(units.values())).label
    if isinstance(text, bool) or not isinstance(text, str | int | float):
        raise UnitError(f"found {text!r}, needed text with a unit of {quantity}, such as '12 {example}'")
    match = _NUMBER.match(str(text))
    if match is None:
        raise UnitError(f"found {text!r}, needed a number and a unit of {quantity}, such as '12 {example}'")
    number, over, under, unit = match.groups()
    value = float(number)
    if over is not None:
        if int(under) == 0:
            raise UnitError(f"found {text!r}: the fraction divides by zero")
        value += math.copysign(int(over) / int(under), value)
    if unit.startswith(","):
        raise UnitError(f"found {text!r}: write the decimal mark as a point, without thousands separators")
    if not unit and quantity != "dimensionless":
        raise UnitError(
            f"{text!r} has no unit; write it as text with a unit of {quantity}, as in '{number} {example}'"
        )
    if not math.isfinite(value):
        raise UnitError(f"found {text!r}, needed a finite number")
    return float(to_si(value, unit or "1", quantity))


def display_unit(quantity: str, system: str = "metric") -> tuple[str, float]:
    """Label and scale a report shows a quantity in: shown = si / scale.

    Examples
    --------
    >>> display_unit("force", "metric")
    ('kN', 1000.0)
    """
    label, scale, _ = _display(quantity, system)
    return label, scale


def _display(quantity: str, system: str) -> tuple[str, float, int]:
    if system not in SYSTEMS:
        raise UnitError(f"unknown unit system {system!r}; {nearest(system, SYSTEMS)}")
    if quantity not in DISPLAY:
        raise UnitError(f"unknown quantity {quantity!r}; {nearest(quantity, DISPLAY)}")
    return DISPLAY[quantity][SYSTEMS.index(system)]


def show(value: float, quantity: str, system: str = "metric") -> str:
    """Put a value in words for a report: number, blank, unit; "n/a" where it isn't finite.

    Examples
    --------
    >>> show(290e3, "force")
    '290.0 kN'
    """
    label, scale, decimals = _display(quantity, system)
    if not math.isfinite(value):
        return "n/a"
    shown = round(value / scale, decimals) + 0.0
    return f"{shown:.{decimals}f} {label}".rstrip()


def show_both(value: float, quantity: str) -> str:
    """Put a value in words in metric and, in brackets, in field units, where the reader's are not known yet.

    Examples
    --------
    >>> show_both(290e3, "force")
    '290.0 kN (65.2 klbf)'
    """
    return f"{show(value, quantity)} ({show(value, quantity, 'field')})"
