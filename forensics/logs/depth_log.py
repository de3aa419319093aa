"""Logs by depth: the few channels that a time log can be held against, in SI, in order of depth."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from pathlib import Path

import numpy as np
from numpy.typing import NDArray

from forensics import channels, units
from forensics.channels import BY_NAME
from forensics.errors import LogError, nearest
from forensics.logs.mapping import map_columns
from forensics.logs.naming import split_name
from forensics.logs.nulls import find_codes
from forensics.logs.raw import RawLog
from forensics.logs.registry import read_raw, require
from forensics.logs.repeats import NONE, Repeats, find_repeats
from forensics.logs.smear import find_smeared

Floats = NDArray[np.float64]
WITNESSED = ("torque", "wob", "mud_density")
DEPTHS = ("hole_depth", "bit_depth")


@dataclass(frozen=True)
class DepthLog:
    """A log by depth.

    Parameters
    ----------
    path : Path
        The file.
    depth : ndarray, shape (n,)
        Measured depth, increasing [m].
    values : mapping of str to ndarray, shape (n,)
        Channels of `WITNESSED` it has [SI], NaN where missing or absurd.
    units : mapping of str to str
        Units they were read in.
    repeats : Repeats
        How many of its rows repeat the row before.
    """

    path: Path
    depth: Floats
    values: Mapping[str, Floats]
    units: Mapping[str, str]
    repeats: Repeats = NONE


def read_depth_logs(paths: tuple[Path, ...]) -> tuple[DepthLog, ...]:
    """Read logs by depth, in any format of the registry.

    Parameters
    ----------
    paths : tuple of Path
        As the case names them.

    Returns
    -------
    tuple of DepthLog
        One a log; a file may hold several.

    Raises
    ------
    LogError
        If a file can't be read, or has no column of depth with its unit.
    """
    found = []
    for path in paths:
        require(path)
        raw = read_raw(path, _wanted)
        logs = [log for log in (raw, *raw.others) if log.by != "time"]
        if not logs:
            raise LogError("found logs by time only; a log by time goes to [logs] time", file=path)
        found += [_read(log) for log in logs]
    return tuple(found)


def _wanted(name: str) -> bool:
    return channels.match(split_name(name)[0])[0] in {*WITNESSED, *DEPTHS}


def _read(raw: RawLog) -> DepthLog:
    # The first column of depth is the index; others are its copies in other units, or another hole's.
    place = next((i for i, name in enumerate(raw.names) if i in raw.table and _is_depth(name)), None)
    if place is None:
        seen = ", ".join(repr(name) for name in raw.names[:40])
        near = nearest("depth", raw.names)
        hint = f"; {near}" if near.startswith("did you mean") else ""
        raise LogError(
            f"found no column of depth among {seen}{hint}; a log by depth needs one such as DEPT [m]",
            file=raw.path,
        )
    mapped = map_columns(raw, {}, ())
    channel = next(c.channel for c in mapped.columns if c.column == raw.names[place])
    if channel not in DEPTHS:
        raise LogError("the column of depth holds no value", file=raw.path, column=raw.names[place])
    depth = units.to_si(mapped.values[channel], mapped.units[channel], "length")
    depth[find_codes(mapped.values[channel], raw.nulls_of(raw.names[place]))] = np.nan
    known = np.flatnonzero(np.isfinite(depth))
    order = known[np.argsort(depth[known], kind="stable")]
    if len(order) == 0:
        raise LogError("the column of depth holds no value", file=raw.path, column=raw.names[place])
    values = {
        name: _in_si(name, data, mapped.units[name], raw)[order]
        for name, data in mapped.values.items()
        if name in WITNESSED
    }
    read_in = {name: mapped.units[name] for name in values}
    return DepthLog(raw.path, depth[order], values, read_in, find_repeats(values, depth[order]))


def _is_depth(name: str) -> bool:
    return channels.match(split_name(name)[0])[0] in DEPTHS


def _in_si(channel: str, data: Floats, unit: str, raw: RawLog) -> Floats:
    codes = find_codes(data, raw.nulls)
    gone = codes | find_smeared(data, codes)
    values = units.to_si(np.where(gone, np.nan, data), unit, BY_NAME[channel].quantity)
    # Not the range of a right unit alone: a wrong one is what the comparison is to find.
    most = 100.0 * max(map(abs, BY_NAME[channel].plausible))
    with np.errstate(invalid="ignore"):
        return np.where(np.abs(values) > most, np.nan, values)
