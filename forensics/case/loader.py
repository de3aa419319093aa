"""Read a case file into its frozen objects, or refuse it with the line at fault."""

from __future__ import annotations

import re
import tomllib
from collections.abc import Callable, Mapping
from pathlib import Path
from typing import Any

from forensics.case.node import (
    Node,
    as_choice,
    as_file,
    as_files,
    as_flag,
    as_identifier,
    as_note,
    as_number,
    as_quantity,
    as_switch,
    as_text,
    as_timezone,
    as_whole,
    line_of,
)
from forensics.case.settings import (
    Case,
    ChannelChoice,
    CriteriaSettings,
    FluidSettings,
    FrictionSettings,
    LimitSettings,
    LogSettings,
    RecordSettings,
    RigSettings,
    TieIn,
)
from forensics.errors import CaseError, UnitError, no_file
from forensics.units import factor

# A station that may be off by more than a degree is none [rad].
LEAST_ACCURATE = 0.0175
# No case file comes near this [bytes], or near so many parts of a dotted key.
LARGEST, MOST_PARTS = 2**18, 100
TOO_DEEP = "nests far deeper than any case; sections and keys such as [logs.channels] are needed"
_IN_QUOTES = re.compile(r"\"(?:[^\"\\]|\\.)*\"|'[^']*'")
_MANY_PARTS = re.compile(rf"(?:[\w-]*[ \t]*\.[ \t]*){{{MOST_PARTS}}}")
_LOGS = ("time", "depth", "timezone", "timezones", "wits_units", "channels")
_SECTIONS = "case logs survey hole string fluid rig friction criteria limits records"


def load_case(path: Path | str) -> Case:
    """Read a case file.

    Parameters
    ----------
    path : Path or str
        The TOML file; paths in it are relative to its folder.

    Returns
    -------
    Case
        Every number in SI, every path resolved and found.

    Raises
    ------
    CaseError
        If the file is missing or not TOML, a key is unknown or absent, a value is not what its key
        needs (a number without its unit, a word off the list), or a file it names is missing.
    """
    path = Path(path)
    text = _read_text(path)
    _refuse_depth(path, text)
    try:
        tree = tomllib.loads(text)
    except RecursionError:
        raise CaseError(TOO_DEEP, file=path) from None
    except tomllib.TOMLDecodeError as error:
        place = re.search(r"\(at line (\d+), column (\d+)\)", str(error))
        message = re.sub(r" \(at .*\)$", "", str(error))
        line = int(place.group(1)) if place else len(text.splitlines())
        raise CaseError(f"is not TOML: {message[:1].lower()}{message[1:]}", file=path, line=line) from None
    if not tree:
        raise CaseError("is empty; format = 1 and the sections of a case are needed", file=path)
    root = Node(path, text, tree, ())
    root.only(("format", *_SECTIONS.split()))
    version = root.take("format", as_whole(1, 999), 1)
    if version != 1:
        raise root.error(f"is {version}; this program reads format 1", "format")
    return _build(root)


def _refuse_depth(path: Path, text: str) -> None:
    """Refuse keys of very many parts, on which the parser spends the square of their number."""
    for number, line in enumerate(text.splitlines(), 1):
        if line.count(".") >= MOST_PARTS and _MANY_PARTS.search(_IN_QUOTES.sub("", line)):
            raise CaseError(TOO_DEEP, file=path, line=number)


def _build(root: Node) -> Case:
    names = ("well", "field", "rig", "section", "mud_system", "notes", "campaign")
    case = root.section("case", ("id", "title", *names))
    survey = root.section("survey", ("file", "tie_in", "accuracy"))
    string = root.section("string", ("file", "nozzle_area"))
    case_id = case.need("id", as_identifier, 'id = "kestrel-3-run-4"')
    words = {name: case.take(name, as_note) for name in names}
    return Case(
        path=root.path,
        id=case_id,
        title=case.take("title", as_note) or case_id,
        logs=_logs(root.section("logs", _LOGS)),
        survey=survey.need("file", as_file, 'file = "survey.csv"'),
        tie_in=_tie_in(survey),
        survey_accuracy=survey.take("accuracy", as_quantity("angle", 0.0, LEAST_ACCURATE)),
        hole=root.section("hole", ("file",)).need("file", as_file, 'file = "hole.csv"'),
        string=string.need("file", as_file, 'file = "string.csv"'),
        nozzle_area=string.take("nozzle_area", as_quantity("area", 1e-6, 0.05)),
        fluid=_fluid(root.section("fluid", ("density", "file", "density_inside"))),
        rig=RigSettings(**_settings(root, "rig", _RIG)),
        friction=FrictionSettings(**_settings(root, "friction", _FRICTION)),
        criteria=CriteriaSettings(**_settings(root, "criteria", _CRITERIA)),
        limits=LimitSettings(**_settings(root, "limits", _LIMITS)),
        records=RecordSettings(**_settings(root, "records", _RECORDS)),
        field_name=words.pop("field"),
        rig_name=words.pop("rig"),
        **words,
    )


def _settings(root: Node, name: str, converters: Mapping[str, Callable[..., Any]]) -> dict[str, Any]:
    node = root.section(name, converters)
    return {key: converters[key](node, key, value) for key, value in node.values.items()}


def _logs(node: Node) -> LogSettings:
    files = node.need("time", as_files, 'time = ["time.csv"]')
    if not files:
        raise node.error("is empty; name at least one time log", "time")
    # Imported here: the vocabulary is needed only where a case names columns of its own.
    from forensics.channels import CHANNELS

    quantities = {channel.name: channel.quantity for channel in CHANNELS}
    channels = node.section("channels", quantities)
    return LogSettings(
        time=files,
        depth=node.take("depth", as_files, ()),
        timezone=node.take("timezone", as_timezone, "UTC"),
        wits_units=node.take("wits_units", as_choice("metric", "fps")),
        timezones=_timezones(node, files),
        channels={key: _choice(channels, key, quantities[key]) for key in channels.values},
    )


def _timezones(logs: Node, files: tuple[Path, ...]) -> dict[Path, str]:
    """Zones of single files, named as under `time`."""
    table = logs.values.get("timezones", {})
    names = {name: path for path in files for name in (path.name, _relative(logs.path.parent, path))}
    node = logs.section("timezones", names if isinstance(table, dict) else ())
    return {names[name]: as_timezone(node, name, value) for name, value in node.values.items()}


def _relative(folder: Path, path: Path) -> str:
    folder = folder.resolve()
    return path.relative_to(folder).as_posix() if path.is_relative_to(folder) else path.as_posix()


def _choice(node: Node, key: str, quantity: str) -> ChannelChoice:
    value = node.values[key]
    if not isinstance(value, dict):
        return ChannelChoice(as_text(node, key, value))
    table = node.section(key, ("column", "unit"))
    unit = table.take("unit", as_text)
    if unit is not None:
        try:
            factor(unit, quantity)
        except UnitError as error:
            raise table.error(error.message, "unit") from None
    return ChannelChoice(table.need("column", as_text, 'column = "HKLD"'), unit)


def _tie_in(survey: Node) -> TieIn | None:
    if "tie_in" not in survey.values:
        return None
    node = survey.section("tie_in", ("md", "inclination", "azimuth"))
    return TieIn(
        md=node.need("md", as_quantity("length"), 'md = "0 m"'),
        inclination=node.need("inclination", as_quantity("angle"), 'inclination = "0 deg"'),
        azimuth=node.need("azimuth", as_quantity("angle", -10.0), 'azimuth = "0 deg"'),
    )


def _fluid(node: Node) -> FluidSettings:
    if ("density" in node.values) == ("file" in node.values):
        found = "both 'density' and 'file'" if "file" in node.values else "neither 'density' nor 'file'"
        raise CaseError(
            f'[fluid] has {found}; one is needed, such as density = "1.32 g/cm3"',
            file=node.path,
            line=line_of(node.text, node.keys),
        )
    density = as_quantity("density", 0.0, 3500.0)
    return FluidSettings(
        density=node.take("density", density),
        file=node.take("file", as_file),
        density_inside=node.take("density_inside", density),
    )


def _read_text(path: Path) -> str:
    fault = no_file(path, LARGEST)
    if fault is not None:
        raise CaseError(f"{fault}; the path of a case file is needed", file=path)
    try:
        return path.read_bytes().decode("utf-8-sig").replace("\r\n", "\n")
    except UnicodeDecodeError as error:
        raise CaseError(f"is not UTF-8 text (byte {error.start}); save it as UTF-8", file=path) from None
    except OSError as error:
        reason = f"can't be read ({error.strerror})"
        raise CaseError(f"{reason}; the path of a case file is needed", file=path) from None


_RIG: dict[str, Callable[..., Any]] = {
    "block_weight": as_quantity("force"),
    "lines": as_whole(2, 24),
    "sheave_efficiency": as_number(0.8, 1.0),
    "hookload_includes_block": as_flag,
}
_FRICTION: dict[str, Callable[..., Any]] = {
    "cased": as_number(0.0, 1.5),
    "open": as_number(0.0, 1.5),
    "fixed": as_flag,
}
_CRITERIA: dict[str, Callable[..., Any]] = {
    "helical_onset": as_choice("chen", "wu", "mitchell"),
    "helical_release": as_choice("unbuckled", "envelope"),
    "clearance": as_choice("tool_joint", "body"),
    "bridge_gap": as_quantity("time"),
    "minimum_duration": as_quantity("time"),
    "torque_effect": as_switch,
    "tool_joint_effect": as_switch,
}
_LIMITS: dict[str, Callable[..., Any]] = {
    "hookload": as_quantity("force"),
    "overpull": as_quantity("force"),
    "torque": as_quantity("moment"),
    "wob": as_quantity("force"),
    "pipe_class": as_choice("new", "premium", "used"),
}
_RECORDS: dict[str, Callable[..., Any]] = {"weights": as_file, "slides": as_file, "verdicts": as_file}
