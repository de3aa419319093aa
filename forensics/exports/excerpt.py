"""A short, anonymous copy of a case: a window of its logs with its well, moved in time, depth and direction.

The hole gets longer at its top by a stretch of vertical, frictionless hole, the pipe in it by the same
stretch; the hook carries that much more out of slips. Loads below are exactly what they were, so what was
wrong in the run, or in its files, is still to be seen.
"""

from __future__ import annotations

import csv
import gzip
import hashlib
from collections.abc import Sequence
from dataclasses import dataclass
from pathlib import Path

import numpy as np
from numpy.typing import NDArray

from forensics.case import Case
from forensics.case.skeleton import quoted
from forensics.channels import BY_NAME
from forensics.exports.rewrite import Change, rewrite_line, shift_stamp
from forensics.exports.stamps import stamp
from forensics.logs.dialect import find_dialect, find_encoding
from forensics.logs.packed import is_packed, read_bytes
from forensics.logs.table import FileRecord, TimeLog
from forensics.logs.zone import tzinfo_of
from forensics.units import G, factor
from forensics.well.model import Well
from forensics.well.string import buoyed_weight

DAY = 86400.0
#: First day of every excerpt [s since 1970 UTC]: 2000-01-13, on which no day passes for a month.
FIRST_DAY = 947721600.0
#: The hole grows by no less and no more than this [m].
LENGTHENED = (40.0, 160.0)
#: A hole that leans more than this at its first station can't be made longer at the top [rad].
LEANS = np.radians(2.0)
#: Channels that tell a depth along the hole, and those that carry the string.
DEPTHS, LOADS = ("bit_depth", "hole_depth", "bit_tvd"), ("hookload", "hookload_max")


@dataclass(frozen=True)
class Shift:
    """By what a case is moved: whole days, depth [m], hookload out of slips [N], azimuth [rad]."""

    days: int
    depth: float
    load: float
    azimuth: float


def choose_shift(log: TimeLog, well: Well | None, start: float) -> Shift:
    """Choose by what to move a case, from its own content: the same case is moved the same way.

    Parameters
    ----------
    log : TimeLog
    well : Well or None
        Without it, depths stay.
    start : float
        Where the excerpt begins [s since 1970 UTC].
    """
    seed = hashlib.sha256("".join(record.sha256 for record in log.files).encode()).digest()
    one, two = (int.from_bytes(seed[k : k + 4], "big") / 2**32 for k in (0, 4))
    days = round((FIRST_DAY - DAY * np.floor(start / DAY)) / DAY)
    azimuth = 2.0 * np.pi * (0.1 + 0.8 * two)
    if well is None or well.trajectory.inclination[0] > LEANS:
        return Shift(days, 0.0, 0.0, azimuth)
    depth = float(np.round(LENGTHENED[0] + one * (LENGTHENED[1] - LENGTHENED[0])))
    top = well.string.components[-1]
    weight = float(np.ravel(buoyed_weight(top, well.fluid.typical, well.fluid.inside))[0])
    return Shift(days, depth, depth * weight, azimuth)


def write_tables(well: Well, shift: Shift, folder: Path) -> None:
    """Write survey, hole, string and mud of the moved well: numbers as they are, names made up."""
    path, hole, string = well.trajectory, well.hole, well.string
    md = path.md + shift.depth
    azimuth = np.degrees(np.mod(path.azimuth + shift.azimuth, 2.0 * np.pi))
    stations = [[0.0, 0.0, 0.0]] if shift.depth and md[0] > 0.0 else []
    stations += [[m, i, a] for m, i, a in zip(md, np.degrees(path.inclination), azimuth, strict=True)]
    _table(folder / "survey.csv", ["md [m]", "inclination [deg]", "azimuth [deg]"], stations)
    tops = np.where(hole.top > 0.0, hole.top + shift.depth, 0.0)
    rows = [
        [t, b + shift.depth, 1e3 * d, kind, "" if np.isnan(f) else f]
        for t, b, d, kind, f in zip(tops, hole.bottom, hole.diameter, hole.kind, hole.friction, strict=True)
    ]
    _table(folder / "hole.csv", ["top [m]", "bottom [m]", "diameter [mm]", "kind", "friction"], rows)
    head = [
        "kind", "length [m]", "od [mm]", "id [mm]", "weight [kg/m]", "tool_joint_od [mm]",
        "tensile_rating [kN]", "torque_rating [kN.m]", "yield_strength [MPa]", "youngs_modulus [GPa]",
        "density [kg/m3]",
    ]  # fmt: skip
    parts = [
        [
            c.kind, c.length, 1e3 * c.od, 1e3 * c.id, c.weight / G, _scaled(c.tool_joint_od, 1e3),
            _scaled(c.tensile_rating, 1e-3), _scaled(c.torque_rating, 1e-3), _scaled(c.yield_strength, 1e-6),
            c.youngs_modulus * 1e-9, c.density,
        ]
        for c in string.components
    ]  # fmt: skip
    _table(folder / "string.csv", head, parts)


def _scaled(value: float | None, scale: float) -> float | str:
    return "" if value is None else value * scale


def _table(path: Path, head: Sequence[str], rows: Sequence[Sequence[float | str]]) -> None:
    with path.open("w", encoding="utf-8", newline="") as file:
        writer = csv.writer(file, lineterminator="\n")
        writer.writerow(head)
        writer.writerows([f"{c:.8g}" if isinstance(c, float) else c for c in row] for row in rows)


def write_case(case: Case, well: Well | None, logs: Sequence[str], folder: Path) -> Path:
    """Write the excerpt's case file; nothing in it names well, field or rig."""
    lines = ["format = 1", "", "[case]", 'id = "excerpt"', 'title = "An excerpt of a run"']
    if case.mud_system:
        lines.append(f"mud_system = {quoted(case.mud_system)}")
    lines += ["", "[logs]", f"time = [{', '.join(quoted(name) for name in logs)}]"]
    lines.append(f"timezone = {quoted(case.logs.timezone)}")
    if case.logs.channels:
        lines += ["", "[logs.channels]"]
        for channel, choice in case.logs.channels.items():
            unit = f", unit = {quoted(choice.unit)}" if choice.unit else ""
            lines.append(f"{channel} = {{ column = {quoted(choice.column)}{unit} }}")
    for name in ("survey", "hole", "string"):
        lines += ["", f"[{name}]", f'file = "{name}.csv"']
    lines += ["", "[fluid]", *_fluid(well), "", "[rig]", *_rig(case)]
    path = folder / "case.toml"
    path.write_text("\n".join(lines) + "\n", encoding="utf-8", newline="\n")
    return path


def _fluid(well: Well | None) -> list[str]:
    if well is None:
        return ["# density was not read"]
    lines = [f'density = "{well.fluid.typical / 1e3:.4f} g/cm3"']
    if well.fluid.inside is not None:
        lines.append(f'density_inside = "{well.fluid.inside / 1e3:.4f} g/cm3"')
    return lines


def _rig(case: Case) -> list[str]:
    rig = case.rig
    lines = [f"hookload_includes_block = {'true' if rig.hookload_includes_block else 'false'}"]
    if rig.block_weight is not None:
        lines.append(f'block_weight = "{rig.block_weight / 1e3:.3f} kN"')
    if rig.lines is not None:
        lines.append(f"lines = {rig.lines}")
    if rig.sheave_efficiency is not None:
        lines.append(f"sheave_efficiency = {rig.sheave_efficiency}")
    return lines


@dataclass(frozen=True)
class Rows:
    """Lines of a file that an excerpt takes, from the first line of data on: `first` to `stop` (excluded).

    `carried`, shape (stop - first,), marks those on which the hook carries the string.
    """

    first: int
    stop: int
    carried: NDArray[np.bool_]


def rewrite_file(path: Path, record: FileRecord, rows: Rows, how: tuple[Shift, bool], target: Path) -> None:
    """Write lines of a delimited or LAS file again in its own dialect, moved; its head cleared of names.

    Parameters
    ----------
    path : Path
        The file.
    record : FileRecord
        What its columns were taken for.
    rows : Rows
    how : tuple of Shift and bool
        By what to move; whether 03/04/2021 is the fourth of March.
    target : Path
        Packed where `path` is.

    Raises
    ------
    ValueError
        If the file's lines are not one a row.
    """
    shift, month_first = how
    data = read_bytes(path)
    encoding = find_encoding(data[: 2**18])
    lines = data.decode(encoding, errors="replace").lstrip("\ufeff").splitlines()
    las = record.format.startswith("LAS")
    start = _first_line(lines, path, data, las)
    delimiter = _las_delimiter(lines[start]) if las else find_dialect(data[: 2**18], path).delimiter
    body = [line for line in lines[start:] if not las or (line.strip() and line.lstrip()[:1] not in "#~")]
    if len(body) < rows.stop:
        raise ValueError(f"{len(body)} lines of data where {rows.stop} rows were read")
    lifted, hanging = (_changes(record, shift, carried) for carried in (True, False))
    head = _las_head(lines[:start], shift) if las else _csv_head(lines[:start], len(record.columns))
    written = [
        rewrite_line(line, delimiter, lifted if carried else hanging, (shift.days, month_first))
        for line, carried in zip(body[rows.first : rows.stop], rows.carried, strict=True)
    ]
    text = ("\n".join([*head, *written]) + "\n").encode(encoding, errors="replace")
    target.write_bytes(gzip.compress(text, mtime=0) if is_packed(path) else text)


def _first_line(lines: list[str], path: Path, data: bytes, las: bool) -> int:
    if not las:
        return find_dialect(data[: 2**18], path).skip
    marks = [k for k, line in enumerate(lines) if line.lstrip().casefold().startswith("~a")]
    if not marks:
        raise ValueError("no ~A line")
    return marks[0] + 1


def _las_delimiter(line: str) -> str:
    return next((mark for mark in ("\t", ";", ",") if line.count(mark) > 1), " ")


def _changes(record: FileRecord, shift: Shift, carried: bool) -> list[Change]:
    """Say what becomes of each column: shifted by its unit, kept, or blanked where it was not read."""
    changes = []
    for column in record.columns:
        if column.channel == "time" or column.why.startswith("a date or time"):
            changes.append(Change("time"))
        elif column.channel is None:
            changes.append(Change("blank"))
        elif column.channel in DEPTHS or (column.channel in LOADS and carried):
            amount = shift.depth if column.channel in DEPTHS else shift.load
            unit = factor(column.unit or "m", BY_NAME[column.channel].quantity)
            changes.append(Change("number", amount / unit.scale))
        else:
            changes.append(Change("keep"))
    return changes


def _csv_head(lines: list[str], width: int) -> list[str]:
    """Keep names and units, which hold about as many cells as the data; clear what stands above them."""
    marks = [max(line.count(mark) for mark in (",", ";", "\t", "|")) for line in lines]
    return [
        line if count + 1 >= max(2, width // 2) or len(line.split()) >= width else "#"
        for line, count in zip(lines, marks, strict=True)
    ]


_KEPT = ("VERS", "WRAP", "NULL", "STEP", "STRT", "STOP", "DLM")


def _las_head(lines: list[str], shift: Shift) -> list[str]:
    """Keep the version, curve and index lines; clear every other value, dates moved where there are any."""
    out, section = [], ""
    for line in lines:
        text = line.strip()
        if text.startswith("~"):
            section = text[1:2].upper()
            out.append(line)
        elif section in {"V", "C"} or not text or "." not in text:
            out.append(line if section in {"V", "C"} or not text else "#")
        else:
            out.append(_las_line(line, shift))
    return out


def _las_line(line: str, shift: Shift) -> str:
    """Write a header line with its value moved, kept or cleared."""
    name, _, rest = line.partition(".")
    unit = (
        rest[: len(rest) - len(rest.lstrip())]
        if rest[:1].isspace()
        else rest.split()[0]
        if rest.split()
        else ""
    )
    value, colon, about = rest[len(unit) :].rpartition(":")
    moved = shift_stamp(value, shift.days)
    if name.strip().upper() in _KEPT or moved != value:
        return f"{name}.{unit}{moved}{colon}{about}"
    clock = any(part.count(":") for part in value.split()) and any(c.isdigit() for c in value)
    return f"{name}.{unit}{value if clock else '   '}:"


def write_plain(log: TimeLog, rows: slice, shift: Shift, carried: NDArray[np.bool_], target: Path) -> None:
    """Write a window of the SI table as CSV: for formats, and files, that can't be cut line by line."""
    names = [name for name in log.values if np.isfinite(log.values[name][rows]).any()]
    head = ["time", *(f"{name} [{_UNITS[BY_NAME[name].quantity]}]" for name in names)]
    columns = []
    for name in names:
        values = log.hookload_logged[rows] if name == "hookload" else log.values[name][rows]
        moved = shift.depth if name in DEPTHS else shift.load * carried if name in LOADS else 0.0
        scale = factor(_UNITS[BY_NAME[name].quantity], BY_NAME[name].quantity).scale
        columns.append((values + moved) / scale)
    zone = tzinfo_of("UTC")
    with target.open("w", encoding="utf-8", newline="") as file:
        writer = csv.writer(file, lineterminator="\n")
        writer.writerow(head)
        for k, moment in enumerate(log.time[rows] + shift.days * DAY):
            cells = ["" if np.isnan(column[k]) else f"{column[k]:.6g}" for column in columns]
            writer.writerow([stamp(float(moment), zone), *cells])


_UNITS = {
    "length": "m", "force": "kN", "moment": "kN.m", "pressure": "bar", "density": "g/cm3", "flow": "L/min",
    "speed": "m/h", "angle": "deg", "rotation": "rpm", "volume": "m3", "dimensionless": "1",
}  # fmt: skip
