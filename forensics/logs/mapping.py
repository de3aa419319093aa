"""Which column is which channel, in what unit, and why."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray

from forensics import channels, units
from forensics.case import ChannelChoice
from forensics.channels import BY_NAME, GENERIC_DEPTH, Need
from forensics.errors import LogError, UnitError, nearest
from forensics.logs.clock_column import is_time_name
from forensics.logs.likely import likely_unit, likely_units
from forensics.logs.naming import split_name
from forensics.logs.nulls import find_codes, to_numbers
from forensics.logs.raw import RawLog
from forensics.logs.table import SourceColumn
from forensics.units import show

Floats = NDArray[np.float64]
Choices = Mapping[str, ChannelChoice]
Numbers = Mapping[int, tuple[Floats, int]]
# Channels whose usual name is its unit: "RPM", "GPM".
_UNIT_IN_NAME = (("rpm", "rotation", "rpm"), ("gpm", "flow", "gpm"), ("lpm", "flow", "L/min"))
# Two columns for one channel are the same where they are no further apart than this part of their size.
_SAME = 0.01


@dataclass(frozen=True)
class Candidate:
    """A column that may be a channel."""

    place: int
    name: str
    channel: str
    unit: str | None
    why: str
    chosen: bool = False


class NoUnitError(LogError):
    """A needed channel whose column has no unit, or one that can't be; `likely` are units it could be in."""

    def __init__(self, message: str, raw: RawLog, candidate: Candidate, likely: tuple[str, ...]) -> None:
        self.channel = candidate.channel
        self.header = raw.names[candidate.place]
        self.likely = likely
        super().__init__(message, file=raw.path, column=self.header)


@dataclass(frozen=True)
class Mapped:
    """Channels found in one file: values in the file's unit, how to bring them to SI, and the account.

    Parameters
    ----------
    values : mapping of str to ndarray, shape (n,)
        As the file has them.
    units : mapping of str to str
        Unit of each.
    columns : tuple of SourceColumn
        Every column of the file and what became of it.
    garbled : mapping of str to int
        Entries of a channel that were text no number could be read from.
    warnings : tuple of str
        Channels set aside, and why.
    aside : mapping of str to int
        Samples of each channel set aside.
    empty : mapping of str to str
        Channels whose only columns hold no value, with such a column.
    """

    values: Mapping[str, Floats]
    units: Mapping[str, str]
    columns: tuple[SourceColumn, ...]
    garbled: Mapping[str, int]
    warnings: tuple[str, ...]
    aside: Mapping[str, int]
    empty: Mapping[str, str]


def wanted(choices: Choices) -> frozenset[str]:
    """Names the case file chose, in the form names are compared in."""
    return frozenset(channels.normalise(choice.column) for choice in choices.values())


def keep(name: str, chosen: frozenset[str]) -> bool:
    """Tell whether a column may be needed, from its name alone."""
    if channels.normalise(name) in chosen or is_time_name(name):
        return True
    return channels.match(split_name(name)[0])[0] is not None


def map_columns(raw: RawLog, choices: Choices, time_columns: tuple[str, ...]) -> Mapped:
    """Say which column is which channel.

    Parameters
    ----------
    raw : RawLog
        The file.
    choices : mapping of str to ChannelChoice
        What the case file names.
    time_columns : tuple of str
        Columns the stamps came from.

    Returns
    -------
    Mapped
        Channels with a column each.

    Raises
    ------
    LogError
        If a needed channel has no unit, or one that is not of its quantity.
    """
    numbers: dict[int, tuple[Floats, int]] = {}
    account: dict[int, SourceColumn] = {}
    file = raw.path.name

    def say(place: int, channel: str | None, why: str, unit: str | None = None) -> None:
        account[place] = SourceColumn(file, raw.names[place], unit or raw.units[place], channel, why)

    candidates = []
    for place, name in enumerate(raw.names):
        if name in time_columns:
            say(place, "time", "holds the stamps")
        elif (found := _candidate(raw, place, choices)) is None:
            if is_time_name(name):
                say(place, None, f"a date or time; the stamps come from {', '.join(time_columns)}")
                continue
            say(place, None, channels.match(split_name(name)[0])[1])
        else:
            numbers[place] = to_numbers(raw.table[place], raw.grouped)
            candidates.append(found)
    filled = [c for c in candidates if np.isfinite(numbers[c.place][0]).any()]
    for candidate in candidates:
        if candidate not in filled:
            say(candidate.place, None, "every value is missing")
    picked, doubts = _pick(_settle_depth(filled), numbers, say)
    mapped = _finish(raw, picked, numbers, account)
    mapped = replace(mapped, warnings=(*mapped.warnings, *(f"{file}: {words}" for words in doubts)))
    found = {c.channel for c in picked}
    empty = {c.channel: raw.names[c.place] for c in candidates if c not in filled and c.channel not in found}
    return replace(mapped, empty=empty)


def _candidate(raw: RawLog, place: int, choices: Choices) -> Candidate | None:
    name = raw.names[place]
    if place not in raw.table:
        return None
    for channel, choice in choices.items():
        loosely = choice.column not in raw.names and channels.normalise(choice.column) == channels.normalise(
            name
        )
        if channel != "time" and (choice.column == name or loosely):
            unit = choice.unit or raw.units[place] or split_name(name)[1]
            return Candidate(place, name, channel, unit, "named in the case file", chosen=True)
    stem, glued = split_name(name)
    unit = raw.units[place] if not units.is_blank(raw.units[place]) else glued
    channel, why = channels.match(stem, unit or "")
    about = raw.about.get(name, "")
    if channel is None and about and not channels.is_listed(stem):
        channel, _ = channels.match(about, unit or "")
        why = f"{name!r} is described as {about!r}"
    if channel in {None, "time"} or channel is None:
        return None
    if units.is_blank(unit):
        key = channels.normalise(stem)
        quantity = BY_NAME[channel].quantity
        unit = next((u for word, q, u in _UNIT_IN_NAME if word in key and q == quantity), None)
    return Candidate(place, stem, channel, unit, why)


def _settle_depth(found: list[Candidate]) -> list[Candidate]:
    """Give a lone depth to the bit: a time log that has one depth follows the bit with it."""
    if any(c.channel == "bit_depth" for c in found):
        return found
    depths = [c for c in found if channels.normalise(c.name) in GENERIC_DEPTH and not c.chosen]
    if not depths:
        return found
    lone = min(depths, key=lambda c: channels.rank(c.name))
    why = f"{lone.name!r}: a lone depth in a time log is the bit's"
    bit = Candidate(lone.place, lone.name, "bit_depth", lone.unit, why)
    return [bit if c is lone else c for c in found]


def _pick(
    found: list[Candidate], numbers: Numbers, say: Callable[[int, str | None, str], None]
) -> tuple[list[Candidate], list[str]]:
    """Take the best column for each channel; say how far the others are from it."""
    picked, doubts = [], []
    for channel in dict.fromkeys(c.channel for c in found):
        rivals = [c for c in found if c.channel == channel]
        rivals.sort(key=lambda c: (not c.chosen, units.is_blank(c.unit), channels.rank(c.name), c.place))
        best = rivals[0]
        others = ", ".join(repr(c.name) for c in rivals[1:])
        why = f"{best.why}; preferred to {others}" if others else best.why
        picked.append(Candidate(best.place, best.name, channel, best.unit, why, best.chosen))
        for rival in rivals[1:]:
            apart = _apart(best, rival, numbers)
            say(rival.place, None, f"{channel} is taken from {best.name!r}{apart and f': {apart}'}")
            if apart.startswith("that reads") and not best.chosen and BY_NAME[channel].need is not Need.HELPS:
                doubts.append(
                    f"{channel.replace('_', ' ')} is taken from {best.name!r} rather than {rival.name!r}; "
                    f"{apart}; to take the other, name it under [logs.channels] {channel}"
                )
    return picked, doubts


def _apart(best: Candidate, rival: Candidate, numbers: Numbers) -> str:
    """Say how far apart two columns are that could be the same channel; empty where it can't be told."""
    quantity = BY_NAME[best.channel].quantity
    values = []
    # Some twenty thousand rows tell it as well as all.
    every = max(1, len(numbers[best.place][0]) // 20_000)
    for c in (best, rival):
        data = numbers[c.place][0][::every]
        try:
            si = units.to_si(data, "1" if quantity == "dimensionless" else c.unit or "", quantity)
        except UnitError:
            return ""
        values.append(np.where(find_codes(data), np.nan, si))
    both = np.isfinite(values[0]) & np.isfinite(values[1])
    if both.sum() < 10:
        return ""
    more = (values[1] - values[0])[both]
    size = float(np.percentile(np.abs(values[0][both]), 90))
    low, middle, high = (float(q) for q in np.percentile(more, [5, 50, 95]))
    if max(abs(low), abs(high)) <= _SAME * size:
        return "the two agree"
    way = "more" if middle >= 0.0 else "less"
    spread = " to ".join(show(q, quantity) for q in (low, high))
    return f"that reads {show(abs(middle), quantity)} {way} at the median, {spread} in nine rows of ten"


def _finish(
    raw: RawLog,
    picked: list[Candidate],
    numbers: Numbers,
    account: dict[int, SourceColumn],
) -> Mapped:
    values: dict[str, Floats] = {}
    used_units: dict[str, str] = {}
    warnings: list[str] = []
    aside: dict[str, int] = {}
    file = raw.path.name
    for c in picked:
        data, _ = numbers[c.place]
        fault = _unit_fault(c, data)
        if fault is None:
            values[c.channel] = data
            used_units[c.channel] = c.unit or "1"
            account[c.place] = SourceColumn(file, raw.names[c.place], c.unit, c.channel, c.why)
            continue
        if BY_NAME[c.channel].need is Need.NEEDED:
            raise NoUnitError(fault, raw, c, likely_units(c.channel, data))
        account[c.place] = SourceColumn(file, raw.names[c.place], c.unit, None, f"set aside: {fault}")
        aside[c.channel] = int(np.isfinite(data).sum())
        warnings.append(f"{file}, column {raw.names[c.place]!r}: {c.channel} set aside; {fault}")
    garbled = {c.channel: numbers[c.place][1] for c in picked if numbers[c.place][1] and c.channel in values}
    return Mapped(
        values, used_units, tuple(account[i] for i in sorted(account)), garbled, tuple(warnings), aside, {}
    )


def _unit_fault(candidate: Candidate, data: Floats) -> str | None:
    """Say what is wrong with a column's unit, or None."""
    quantity = BY_NAME[candidate.channel].quantity
    if quantity == "dimensionless":
        return None
    if candidate.unit is None or units.is_blank(candidate.unit):
        hint = likely_unit(candidate.channel, data)
        given = f" (the file says {candidate.unit!r})" if candidate.unit else ""
        return (
            f"no unit is given{given}; {hint}give it under [logs.channels]: "
            f'{candidate.channel} = {{ column = "{candidate.name}", unit = "..." }}'
        )
    try:
        units.factor(candidate.unit, quantity)
    except UnitError as error:
        return f"{error.message}; {likely_unit(candidate.channel, data)}give it under [logs.channels]"
    return None


def missing_channel(channel: str, raws: list[RawLog]) -> LogError:
    """Word the refusal of a case whose logs lack a needed channel."""
    seen = list(dict.fromkeys(name for raw in raws for name in raw.names if name))
    near = nearest(channel, seen)
    close = f"; {near}" if near.startswith("did you mean") else ""
    hole = [name for name in seen if channels.match(split_name(name)[0])[0] == "hole_depth"]
    if channel == "bit_depth" and hole:
        close += f"; if {hole[0]!r} is the bit's depth, say so there"
    listed = ", ".join(repr(name) for name in seen[:60])
    return LogError(
        f"found no column for {channel} among {listed}{close}; name it under [logs.channels] as "
        f"{channel} = {{ column = \"...\", unit = \"...\" }}",
        file=raws[0].path if raws else None,
    )  # fmt: skip
