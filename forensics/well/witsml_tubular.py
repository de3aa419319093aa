"""The string from a WITSML tubular: components by their sequence, the first one at the bottom."""

from __future__ import annotations

import math
import re
from collections import Counter
from pathlib import Path

import numpy as np

from forensics.tables import Table, plain
from forensics.well.string import PIPE
from forensics.well.witsml_objects import Element, choose, read_objects

HEADERS = {
    "name": "description", "kind": "typeTubularComp", "length": "len", "od": "od", "id": "id",
    "weight": "wtPerLen", "tool_joint_od": "connection/od",
}  # fmt: skip
# Words of typeTubularComp, the more particular first; compared without case, blanks and signs.
_KINDS = tuple(
    (re.compile(pattern), kind)
    for pattern, kind in (
        ("bitsub|floatsub|jarsub|sub|crossover|saver|kellyvalve|shockabsorber|bumper|restrictor", "sub"),
        ("underream|reamer|holeopener|enlarger|ghostream", "reamer"),
        ("stabili[sz]er", "stabiliser"),
        ("accelerator|jar", "jar"),
        ("motor|turbine|dynadrill", "motor"),
        ("heavyweight|hwdp", "hwdp"),
        ("drillpipe|aluminium|kelly", "drillpipe"),
        ("collar(?!float)", "collar"),
        ("floatcollar|floatshoe|casingshoe|guideshoe|shoe", "float"),
        ("liner", "liner"),
        ("casing", "casing"),
        ("tubing", "tubing"),
        ("mwd|lwd|logging|measure|rotarysteer|pulser|directional|resistivity|gamma|nuclear|survey|gyro",
         "collar"),
        ("bit|corehead|mill", "bit"),
    )
)  # fmt: skip
_FLOATS = re.compile("floatcollar|shoe")
# Longer than any single joint: a row of pipe this short and not at the top is one joint's length [m].
ONE_JOINT = 15.0


def read_tubular(file: Path) -> tuple[Table, tuple[str, ...]]:
    """Read a WITSML tubular as a string table.

    Parameters
    ----------
    file : Path
        A document of one tubular.

    Returns
    -------
    Table
        name, kind, length, od, id, weight, tool_joint_od; bit first, going up.
    tuple of str
        What was put in order, guessed or left out, with counts.

    Raises
    ------
    TableError
        If a component lacks its length or outer diameter, or two stand in one place.

    Notes
    -----
    tensYield and tqYield are typed as pressures in the schema and written as 0 where unknown, so neither is
    taken for a rating; stiffnesses follow from the diameters.

    References
    ----------
    Energistics, WITSML data schemas 1.3.1.1 and 1.4.1.1, `tubular` object.
    """
    whole = choose(read_objects(file, "tubular", "tubulars"), "tubular")
    found = whole.every("tubularComponent")
    if not found:
        raise whole.error("the tubular holds no tubularComponent; export it with its components")
    remarks: list[str] = []
    components = _in_sequence(found, file.name, remarks)
    kinds = _kinds(components, file.name, remarks)
    numbers = {
        "length": np.array([_need(c, "len") for c in components]),
        "od": np.array([_outer(c, kind) for c, kind in zip(components, kinds, strict=True)]),
        "id": np.array([_size(c, "id") for c in components]),
        "weight": np.array([c.number("linear_weight", "wtPerLen") for c in components]),
        "tool_joint_od": np.array([_joint(c, k) for c, k in zip(components, kinds, strict=True)]),
    }
    # A tool whose bore nobody entered is taken as solid; pipe without one is refused further on.
    tools = np.array([kind not in PIPE and kind != "collar" for kind in kinds])
    blind = tools & ~np.isfinite(numbers["id"])
    numbers["id"][blind] = 0.0
    if blind.any():
        remarks.append(f"{file.name}: no bore for {int(blind.sum())} tools; taken as solid steel")
    _say_single_joints(numbers["length"], kinds, file.name, remarks)
    texts = {"name": tuple(_name(c) for c in components), "kind": tuple(kinds)}
    return Table(file, tuple(c.line for c in components), numbers, texts, HEADERS), tuple(remarks)


def _name(component: Element) -> str:
    return component.word("description") or component.word("typeTubularComp") or "component"


def _need(component: Element, key: str) -> float:
    value = component.number("length", key)
    if not value > 0.0:
        raise component.error(f"is missing or 0 for {_name(component)!r}; it is needed", key)
    return value


def _size(component: Element, *names: str) -> float:
    """Diameter without the noise that a change of units left in it [m]; 0 is a placeholder."""
    value = component.number("diameter", *names)
    return round(value, 6) if value > 0.0 else math.nan


def _outer(component: Element, kind: str) -> float:
    sizes = [_size(component, "od")]
    if kind == "bit":
        sizes += [_size(component, "bitRecord", "diaBit"), _size(component, "odMx")]
    known = [size for size in sizes if not math.isnan(size)]
    if not known:
        raise component.error(f"is missing or 0 for {_name(component)!r}; it is needed", "od")
    return known[0]


def _joint(component: Element, kind: str) -> float:
    """Largest diameter above the body, of a joint or a blade [m]."""
    body = _outer(component, kind)
    sizes = [_size(component, *names) for names in
             (("connection", "od"), ("odMx",), ("stabilizer", "odBladeMx"))]  # fmt: skip
    larger = [size for size in sizes if size > body + 1e-4]
    return max(larger, default=math.nan)


def _in_sequence(found: list[Element], name: str, remarks: list[str]) -> list[Element]:
    """Put components in order of entering the hole; refuse two in one place."""
    numbers = [component.number("dimensionless", "sequence") for component in found]
    told = [number for number in numbers if not math.isnan(number)]
    if not told:
        remarks.append(f"{name}: no component has a sequence; taken in the order of the file, bit first")
        return found
    for component, number in zip(found, numbers, strict=True):
        if math.isnan(number):
            raise component.error(
                f"is missing for {_name(component)!r} while others have one; number them from the bit up",
                "sequence",
            )
    number, times = Counter(told).most_common(1)[0]
    if times > 1:
        rivals = [c for c, n in zip(found, numbers, strict=True) if n == number]
        names = " and ".join(repr(_name(c)) for c in rivals)
        raise rivals[1].error(f"{number:g} stands for {names}; number components from the bit up", "sequence")
    order = np.argsort(numbers, kind="stable")
    if (np.diff(order) < 0).any():
        remarks.append(f"{name}: {len(found)} components stood out of order; sorted by sequence, 1 lowest")
    missing = sorted(set(range(1, int(max(told)) + 1)) - {int(n) for n in told})
    if missing:
        listed = ", ".join(map(str, missing[:8]))
        remarks.append(f"{name}: sequence skips {listed}: is a component missing?")
    return [found[i] for i in order]


def _kinds(components: list[Element], name: str, remarks: list[str]) -> list[str]:
    kinds, unknown = [], []
    for component in components:
        word = plain(component.word("typeTubularComp"))
        kind = "float" if _FLOATS.search(word) else None
        kind = kind or next((kind for pattern, kind in _KINDS if pattern.search(word)), None)
        if kind is None:
            unknown.append(_name(component))
        kinds.append(kind or "other")
    if unknown:
        listed = ", ".join(unknown)
        remarks.append(f"{name}: typeTubularComp of {listed} says no kind known; taken as 'other'")
    return kinds


def _say_single_joints(length: np.ndarray, kinds: list[str], name: str, remarks: list[str]) -> None:
    """Warn where a row of pipe is no longer than one joint and more string stands above it."""
    short = [f"row {i + 1} ({kind}, {length[i]:.1f} m)" for i, kind in enumerate(kinds[:-1])
             if kind in {"drillpipe", "hwdp"} and length[i] < ONE_JOINT]  # fmt: skip
    if short:
        listed = ", ".join(short)
        remarks.append(f"{name}: {listed} is one joint long: check that len is that of the whole row")
