"""Read the string's tally: one row of the table, one component, checked."""

from __future__ import annotations

import math
from pathlib import Path

import numpy as np

from forensics.errors import nearest
from forensics.tables import Column, Table, plain, read_table
from forensics.well.string import KINDS, PIPE, STEEL_DENSITY, STEEL_MODULUS, Component, String, plain_weight
from forensics.well.weights import derive_weight
from forensics.well.witsml_objects import is_xml
from forensics.well.witsml_tubular import read_tubular

STRING_COLUMNS = (
    Column("name", "text", ("component", "description", "item", "element")),
    Column("kind", "text", ("type", "component type"), required=True),
    Column("length", "length", ("len", "total length", "section length"), required=True),
    Column("od", "length", ("outer diameter", "outside diameter", "body od", "pipe od"), required=True),
    Column("id", "length", ("inner diameter", "inside diameter", "body id", "pipe id", "bore")),
    Column(
        "weight",
        "linear_weight",
        (
            "linear weight",
            "unit weight",
            "weight in air",
            "wt",
            "mass",
            "air weight",
            "mass per length",
            "weight per length",
        ),
    ),
    Column(
        "tool_joint_od",
        "length",
        ("tj od", "tooljoint od", "joint od", "coupling od", "max od", "connection od"),
    ),
    Column("tensile_rating", "force", ("tensile", "tensile yield", "tension rating", "tensile strength")),
    Column(
        "torque_rating", "moment", ("torsional rating", "torsional yield", "torque limit", "make up torque")
    ),
    Column("yield_strength", "stress", ("yield", "yield stress", "minimum yield", "smys")),
    Column("youngs_modulus", "stress", ("modulus", "young modulus", "elastic modulus", "e")),
    Column("density", "density", ("material density", "steel density")),
)
_ALIASES = {
    "drillpipe": "drillpipe", "dp": "drillpipe", "pipe": "drillpipe",
    "hwdp": "hwdp", "heavyweightdrillpipe": "hwdp", "heavyweight": "hwdp", "hevi": "hwdp", "hw": "hwdp",
    "collar": "collar", "drillcollar": "collar", "dc": "collar", "nmdc": "collar",
    "nonmagneticcollar": "collar", "mwd": "collar", "lwd": "collar", "rss": "collar",
    "stabiliser": "stabiliser", "stabilizer": "stabiliser", "stab": "stabiliser",
    "motor": "motor", "pdm": "motor", "mudmotor": "motor", "motorsteerable": "motor", "turbine": "motor",
    "rotarysteerabletool": "collar",
    "underreamer": "reamer", "holeopener": "reamer", "drillingjar": "jar", "crossover": "sub", "xo": "sub",
    "shoe": "float", "floatshoe": "float", "floatcollar": "float", "casingshoe": "float",
    "drillbit": "bit", "accelerator": "jar",
}  # fmt: skip
_LARGEST_OD, _LONGEST = 1.2, 15000.0


def load_string(file: Path) -> tuple[String, tuple[str, ...]]:
    """Read a string table.

    Parameters
    ----------
    file : Path
        A table, bit first, going up: kind, length, od, id, weight and the optional columns of
        `STRING_COLUMNS`; or a WITSML tubular.

    Returns
    -------
    String
    tuple of str
        What was computed or assumed, in sentences.

    Raises
    ------
    TableError
        If the table can't be read, a size is impossible, or the bit stands among other components.
    """
    table, found = read_tubular(file) if is_xml(file) else (read_table(file, STRING_COLUMNS), ())
    kinds = [_kind(table, row, text) for row, text in enumerate(table.text("kind"))]
    remarks: list[str] = list(found)
    components = [_component(table, row, kind, remarks) for row, kind in enumerate(kinds)]
    bits = [row for row, kind in enumerate(kinds) if kind == "bit"]
    if bits and bits[-1] != 0:
        if len(bits) > 1 or bits[0] != len(kinds) - 1:
            raise table.error(
                "stands above other components; list the string from the bit up", bits[-1], "kind"
            )
        components.reverse()
        remarks.append(f"{file.name}: the bit stands last; the rows were turned over to run from the bit up")
    _warn(file.name, components, remarks)
    if table.ignored:
        remarks.append(f"{file.name}: columns not used: {', '.join(table.ignored)}")
    return String(tuple(components)), tuple(remarks)


def _kind(table: Table, row: int, text: str) -> str:
    key = plain(text)
    names = (key, key.removesuffix("s"))
    kind = next((n if n in KINDS else _ALIASES[n] for n in names if n in KINDS or n in _ALIASES), None)
    if kind is None:
        raise table.error(f"is {text!r}; {nearest(text, KINDS)}", row, "kind")
    return kind


def _component(table: Table, row: int, kind: str, remarks: list[str]) -> Component:
    number = {
        name: float(table.number(name)[row])
        for name in (c.name for c in STRING_COLUMNS if c.quantity != "text")
    }
    name = table.text("name")[row] or kind
    od, bore = number["od"], _bore(table, row, kind, number)
    density = _or(number["density"], STEEL_DENSITY)
    _check_sizes(table, row, number, bore)
    if bore == 0.0 and _must_be_hollow(kind):
        raise table.error(f"is 0; a {kind} has a bore", row, "id")
    weight = number["weight"]
    # Exports write 0 where they know no weight.
    if math.isnan(weight) or weight == 0.0:
        joint = number["tool_joint_od"]
        derived = derive_weight(kind, od, bore, joint if joint > od else None, density)
        weight = derived.weight
        doubt = f"; it may be {derived.unsure:.0%} off" if derived.unsure else ""
        remarks.append(f"{table.file.name}: no weight for {name}; taken as a {derived.how}{doubt}")
    else:
        _check_weight(table, row, weight, plain_weight(od, bore, density), kind, remarks)
    optional = ("tool_joint_od", "tensile_rating", "torque_rating", "yield_strength")
    return Component(
        name=name,
        kind=kind,
        length=number["length"],
        od=od,
        id=bore,
        weight=weight,
        youngs_modulus=_or(number["youngs_modulus"], STEEL_MODULUS),
        density=density,
        line=table.lines[row],
        **{key: None if math.isnan(number[key]) or number[key] == 0.0 else number[key] for key in optional},
    )


def _or(value: float, default: float) -> float:
    return default if math.isnan(value) else value


def _bore(table: Table, row: int, kind: str, number: dict[str, float]) -> float:
    if not math.isnan(number["id"]):
        return number["id"]
    if kind == "bit":
        return 0.0
    raise table.error("is empty; the inner diameter is needed", row, "id")


def _must_be_hollow(kind: str) -> bool:
    """Tell which kinds have a bore in every tally; for a tool or a bit, 0 is a fair entry."""
    return kind in PIPE or kind == "collar"


def _check_sizes(table: Table, row: int, number: dict[str, float], bore: float) -> None:
    length, od, joint = number["length"], number["od"], number["tool_joint_od"]
    if not 0.0 < length <= _LONGEST:
        raise table.error(f"is {length:g} m; above 0 and up to {_LONGEST:g} m is needed", row, "length")
    if not 0.01 <= od <= _LARGEST_OD:
        raise table.error(
            f"is {od * 1000:.4g} mm; 10 to {_LARGEST_OD * 1000:g} mm is expected: check the unit", row, "od"
        )
    if not 0.0 <= bore < od:
        raise table.error(
            f"is {bore * 1000:.4g} mm against an outer diameter of {od * 1000:.4g} mm", row, "id"
        )
    if 0.0 < joint < od - 1e-4 or joint < 0.0 or joint > _LARGEST_OD:
        raise table.error(f"is {joint * 1000:.4g} mm on a body of {od * 1000:.4g} mm", row, "tool_joint_od")
    for key, low, high in (
        ("youngs_modulus", 20e9, 400e9),
        ("density", 1000.0, 20000.0),
        ("yield_strength", 0.0, 3e9),
    ):
        if not math.isnan(number[key]) and not low <= number[key] <= high:
            raise table.error(
                f"is {number[key]:.4g} in SI; {low:g} to {high:g} is expected: check the unit", row, key
            )


def _check_weight(
    table: Table, row: int, weight: float, plain_tube: float, kind: str, remarks: list[str]
) -> None:
    """Refuse a weight no tube of this size has; remark on one that is only unlikely."""
    ratio = weight / plain_tube
    if weight <= 0.0 or ratio > 8.0 or (kind in PIPE and not 0.3 <= ratio <= 4.0):
        raise table.error(
            f"is {weight:.4g} N/m; a plain tube of its OD and ID weighs {plain_tube:.4g} N/m: check the unit",
            row,
            "weight",
        )
    if kind in PIPE and not 0.85 <= ratio <= 1.6:
        remarks.append(
            f"{table.file.name}: weight of row {row + 1} ({kind}) is {ratio:.2f} times a plain tube's"
        )


def _warn(name: str, components: list[Component], remarks: list[str]) -> None:
    bare = [c.name for c in components if c.kind in {"drillpipe", "hwdp"} and c.tool_joint_od is None]
    if bare:
        remarks.append(
            f"{name}: no tool joint OD for {', '.join(dict.fromkeys(bare))}; the body is taken as what "
            "touches the wall, which makes clearance large and thresholds low"
        )
    if components[-1].kind not in PIPE:
        remarks.append(f"{name}: the last row is a {components[-1].kind}, not pipe; the string ends there")
    if len(components) == 1 and components[0].kind in PIPE:
        remarks.append(
            f"{name}: {components[0].name} is the only component; nothing is known of what hangs below it"
        )
    if np.array([c.length for c in components]).sum() < 1.0:
        remarks.append(f"{name}: the whole string is under a metre long")
