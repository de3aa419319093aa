"""A case file made from what was found: what the files tell is written in, what they don't is marked."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field

from forensics.case.settings import ChannelChoice

#: What stands beside a line that somebody has to fill in or to check.
FILL_IN, CHECK = "FILL IN", "CHECK"


@dataclass(frozen=True)
class Known:
    """What is known of a run before anybody wrote its case file.

    Parameters
    ----------
    id : str
        For `[case]`.
    well : str or None
        Name of the well, as a log's header has it.
    logs, depth, tables : tuple of str, tuple of str, mapping of str to str
        Paths of the logs by time, by depth, and of "survey", "hole", "string", "mud", "weights" and "slides"
        where they were given, as the case file is to write them.
    timezone : str
        Zone of stamps that carry none.
    choices : mapping of str to ChannelChoice
        Columns that had to be named, with the unit taken for each.
    density : float or None
        Median of the logged mud density [kg/m3].
    notes : tuple of str
        Sentences to stand at the top.
    """

    id: str
    logs: tuple[str, ...]
    depth: tuple[str, ...] = ()
    tables: Mapping[str, str] = field(default_factory=dict)
    well: str | None = None
    timezone: str = "UTC"
    choices: Mapping[str, ChannelChoice] = field(default_factory=dict)
    density: float | None = None
    notes: tuple[str, ...] = ()


def write_skeleton(known: Known) -> str:
    """Write the text of a case file.

    Parameters
    ----------
    known : Known

    Returns
    -------
    str
        TOML. Lines that need a person are marked "FILL IN" or "CHECK"; tables that were not given are named
        as if they lay beside the file, so that the program says which one is missing.
    """
    lines = ["# A case file drafted from logs.", *(f"# {note}" for note in known.notes)]
    lines += ["format = 1", "", "[case]", f"id = {quoted(known.id)}"]
    lines.append(f"title = {quoted(known.id)}  # {FILL_IN}: what happened, in a few words")
    well = known.well or "name of the well"
    lines.append(f"{'' if known.well else '# '}well = {quoted(well)}")
    lines.append('# mud_system = "water-base mud"  # its usual friction is where calibration starts')
    lines += ["", "[logs]", f"time = [{', '.join(quoted(name) for name in known.logs)}]"]
    if known.depth:
        lines.append(f"depth = [{', '.join(quoted(name) for name in known.depth)}]")
    lines.append(f"timezone = {quoted(known.timezone)}  # {CHECK}: zone of stamps that carry none")
    lines += _choices(known)
    for name, columns in _TABLES.items():
        lines += ["", f"[{name}]", _table(known, name, columns)]
    lines += ["", "[fluid]", _density(known), "", "[rig]"]
    lines.append('# block_weight = "310 kN"  # left out, it is learned from in-slips readings')
    lines.append("# hookload_includes_block = false  # where the sensor was tared")
    kept = [
        f"{name} = {quoted(known.tables[name])}" for name in ("weights", "slides") if name in known.tables
    ]
    lines += ["", "[records]", *kept] if kept else []
    return "\n".join(lines) + "\n"


_TABLES = {
    "survey": "md, inclination, azimuth",
    "hole": "top, bottom, diameter, kind (cased or open)",
    "string": "bit first: kind, length, od, id, weight, tool_joint_od",
}


def _choices(known: Known) -> list[str]:
    if not known.choices:
        return []
    lines = ["", "[logs.channels]"]
    for channel, choice in known.choices.items():
        unit = f", unit = {quoted(choice.unit)}" if choice.unit else ""
        lines.append(
            f"{channel} = {{ column = {quoted(choice.column)}{unit} }}  # {CHECK}: the file gives no unit; "
            "this one makes its values usual"
        )
    return lines


def _table(known: Known, name: str, columns: str) -> str:
    if name in known.tables:
        return f"file = {quoted(known.tables[name])}"
    return (
        f"file = {quoted(f'{name}.csv')}  # {FILL_IN}: a table with columns {columns}, units in its header"
    )


def _density(known: Known) -> str:
    if "mud" in known.tables:
        return f"file = {quoted(known.tables['mud'])}"
    if known.density is not None:
        text = quoted(f"{known.density / 1000.0:.3f} g/cm3")
        return f"density = {text}  # {CHECK}: median of the mud density in the logs"
    return f'# density = "1.25 g/cm3"  # {FILL_IN}: the mud in the hole during the run'


def quoted(text: str) -> str:
    """Write a TOML string: quotes, backslashes and control letters escaped."""
    escaped = text.replace("\\", "\\\\").replace('"', '\\"')
    return '"' + "".join(c if c.isprintable() else f"\\U{ord(c):08x}" for c in escaped) + '"'
