"""Time logs of a case: any files to one SI table with its history."""

from __future__ import annotations

from collections.abc import Sequence
from concurrent.futures import ThreadPoolExecutor
from dataclasses import dataclass, field, replace

import numpy as np
from numpy.typing import NDArray

from forensics import channels, units
from forensics.case import Case
from forensics.channels import BY_NAME
from forensics.errors import LogError, nearest
from forensics.logs.clock import DAY, Clock, OpenOrderError, read_clock
from forensics.logs.clock_offset import find_offsets
from forensics.logs.depth_log import read_depth_logs
from forensics.logs.depth_witness import hold_against_depth
from forensics.logs.join import join
from forensics.logs.lag import find_lags, tell_lags
from forensics.logs.likely import likely_unit
from forensics.logs.mapping import Mapped, keep, map_columns, missing_channel, wanted
from forensics.logs.nulls import find_codes
from forensics.logs.piece import Piece, interval_of
from forensics.logs.quality import clean
from forensics.logs.raw import RawLog
from forensics.logs.registry import digest, read_raw, require
from forensics.logs.saturated import find_full_scale
from forensics.logs.smear import find_smeared
from forensics.logs.stray import mend_stamps
from forensics.logs.systems import settle_units
from forensics.logs.table import FileRecord, Reason, Step, TimeLog

Floats = NDArray[np.float64]
NEEDED = ("bit_depth", "hookload")
# Hookload no rig shows: below, the block alone weighs more; above, no derrick holds it [N].
HOOKLOAD_LOW, HOOKLOAD_HIGH = 5.0e3, 2.0e7
DEPTH_LOW, DEPTH_HIGH = 5.0, 1.5e4
# Files of one run follow one another within this [s].
NEIGHBOUR = 5.0 * DAY


@dataclass
class _Gathered:
    """What the files of a case gave."""

    pieces: list[Piece] = field(default_factory=list)
    records: list[FileRecord] = field(default_factory=list)
    steps: list[Step] = field(default_factory=list)
    warnings: list[str] = field(default_factory=list)


def read_time_logs(case: Case) -> TimeLog:
    """Read a case's time logs into one table.

    Parameters
    ----------
    case : Case
        `case.logs` names the files, the zone of stamps without one, and columns to take for channels.

    Returns
    -------
    TimeLog
        One row for each distinct stamp, in time order, SI; what was set aside stands in `history`.

    Raises
    ------
    LogError
        If a file can't be read, a needed channel or its unit is missing or absurd, or time can't be told.
    """
    if not case.logs.time:
        raise LogError("no time log is named; [logs] time needs at least one file", file=case.path)
    return _assemble(case, _gather(case))


def _gather(case: Case) -> _Gathered:
    """Read every file and bring it to SI; what the files held besides is let go on return."""
    settings = case.logs
    names = wanted(settings.channels)
    for path in settings.time:
        require(path)
    with ThreadPoolExecutor(max_workers=1) as side:
        # Hashing needs no lock that parsing needs.
        digests = {path: side.submit(digest, path) for path in settings.time}
        raws = [
            settle_units(raw, settings.wits_units)
            for path in settings.time
            for raw in _by_time(read_raw(path, lambda name: keep(name, names)))
        ]
    _check_choices(case, raws)
    out = _Gathered()
    empty: dict[str, tuple[RawLog, str]] = {}
    for raw, clock in zip(raws, _read_clocks(case, raws), strict=True):
        mapped = map_columns(raw, settings.channels, clock.columns)
        piece, account = _to_piece(raw, clock, mapped, case.rig.hookload_includes_block)
        out.pieces.append(piece)
        out.steps.extend(account)
        out.warnings.extend((*clock.warnings, *mapped.warnings))
        empty.update({channel: (raw, column) for channel, column in mapped.empty.items()})
        out.records.append(_record(raw, clock, mapped, piece, digests[raw.path].result()))
    for channel in NEEDED:
        if any(channel in piece.values for piece in out.pieces):
            continue
        if channel in empty:
            raw, column = empty[channel]
            raise LogError(f"every value of {channel} is missing", file=raw.path, column=column)
        raise missing_channel(channel, raws)
    return out


def _by_time(raw: RawLog) -> list[RawLog]:
    """Give the logs of a file that are not indexed by depth; refuse a file that has none."""
    logs = [raw, *raw.others]
    timed = [log for log in logs if log.by != "depth"]
    if not timed:
        raise LogError(
            "found logs by depth only; expected a log by date and time here (a log by depth goes to "
            "[logs] depth)",
            file=raw.path,
        )
    return timed


def _assemble(case: Case, found: _Gathered) -> TimeLog:
    file = found.pieces[0].path
    found.warnings.extend(find_offsets(found.pieces, case.logs.timezone))
    time, values, joined, remarks = join(found.pieces)
    found.pieces.clear()
    interval = interval_of(time)
    if len(time) < 2:
        raise LogError(f"found {len(time)} row with a stamp; a log needs two or more", file=file)
    logged = values["hookload"]
    read_in = {c.channel: c.unit for record in found.records for c in record.columns if c.channel and c.unit}
    work = clean(time, values, interval, read_in)
    reason = work.cause["hookload"].copy()
    lacking = ~np.isfinite(work.values["hookload"])
    depthless = ~np.isfinite(work.values["bit_depth"])
    reason[~lacking] = 0
    reason[~lacking & depthless] = work.cause["bit_depth"][~lacking & depthless]
    used = ~(lacking | depthless)
    if not used.any():
        raise LogError(_nothing_left(reason), file=file)
    delays, delayed = tell_lags(find_lags(time, work.values, interval))
    deep, doubted = hold_against_depth(time, work.values, read_depth_logs(case.logs.depth), found.records)
    return TimeLog(
        time=time,
        values=work.values,
        hookload_logged=logged,
        used=used,
        reason=reason,
        interval=interval,
        timezone=case.logs.timezone,
        history=(*found.steps, *joined, *work.steps, *delays, *deep),
        files=tuple(found.records),
        warnings=tuple(dict.fromkeys((*found.warnings, *remarks, *work.warnings, *delayed, *doubted))),
    )


def _nothing_left(reason: NDArray[np.int8]) -> str:
    codes, counts = np.unique(reason, return_counts=True)
    words = ", ".join(f"{Reason(int(c)).words}: {n}" for c, n in zip(codes, counts, strict=True))
    return f"no row has both a usable hookload and a usable bit depth ({words} rows)"


def _check_choices(case: Case, raws: Sequence[RawLog]) -> None:
    """Refuse a column named in the case that no file has."""
    seen = list(dict.fromkeys(name for raw in raws for name in raw.names))
    keys = {channels.normalise(name) for name in seen}
    for channel, choice in case.logs.channels.items():
        if channel not in BY_NAME:
            raise LogError(
                f"[logs.channels] names an unknown channel {channel!r}; {nearest(channel, BY_NAME)}",
                file=case.path,
            )
        if choice.column not in seen and channels.normalise(choice.column) not in keys:
            raise LogError(
                f"no log has a column {choice.column!r}, named for {channel}; {nearest(choice.column, seen)}",
                file=raws[0].path,
                column=choice.column,
            )


def _read_clocks(case: Case, raws: Sequence[RawLog]) -> list[Clock]:
    """Read the stamps of all files; one whose day and month are open learns from the others."""
    choice = case.logs.channels.get("time")
    chosen = None if choice is None else (choice.column, choice.unit)
    clocks: list[Clock | None] = []
    learned: str | None = None
    for raw in raws:
        try:
            clock = read_clock(raw, case.logs.zone_of(raw.path), chosen, None)
            learned = clock.order if clock.order in {"dmy", "mdy"} else learned
            clocks.append(clock)
        except OpenOrderError:
            if len(raws) == 1:
                raise
            clocks.append(None)
    told = [clock for clock in clocks if clock is not None and clock.dated]
    done = [
        clock or _settle_order(raw, (case.logs.zone_of(raw.path), chosen), learned, told)
        for raw, clock in zip(raws, clocks, strict=True)
    ]
    return _date_the_undated(done, raws)


def _settle_order(
    raw: RawLog, how: tuple[str, tuple[str, str | None] | None], learned: str | None, told: list[Clock]
) -> Clock:
    """Read stamps of open order as another file showed it, or as they come to lie beside the other files."""
    timezone, chosen = how
    if learned is None and told:
        first, last = (float(edge([edge(c.time[np.isfinite(c.time)]) for c in told])) for edge in (min, max))
        tried = {order: read_clock(raw, timezone, chosen, order) for order in ("dmy", "mdy")}
        near = [
            order
            for order, clock in tried.items()
            if np.nanmax(clock.time) > first - NEIGHBOUR and np.nanmin(clock.time) < last + NEIGHBOUR
        ]
        if len(near) == 1:
            return tried[near[0]]
    return read_clock(raw, timezone, chosen, learned)


def _date_the_undated(clocks: list[Clock], raws: Sequence[RawLog]) -> list[Clock]:
    """Chain files that give a clock alone, in the order the case lists them."""
    undated = [raw for raw, clock in zip(raws, clocks, strict=True) if not clock.dated]
    if not undated or len(clocks) == 1:
        return clocks
    if len(undated) < len(clocks):
        raise LogError(
            "this file gives no date while other logs of the case do; add a date column", file=undated[0].path
        )
    out: list[Clock] = []
    end = -np.inf
    for clock in clocks:
        known = clock.time[np.isfinite(clock.time)]
        shift = DAY * np.ceil(max(0.0, end - known[0]) / DAY) if len(known) and np.isfinite(end) else 0.0
        out.append(replace(clock, time=clock.time + shift))
        end = float(known[-1] + shift) if len(known) else end
    return out


def _to_piece(raw: RawLog, clock: Clock, mapped: Mapped, with_block: bool) -> tuple[Piece, list[Step]]:
    """Bring one file's channels to SI and leave out rows without a stamp."""
    time, steps = mend_stamps(clock.time, raw.path.name, mapped.values.get("hookload"))
    stamped = np.isfinite(time)
    lost = raw.dropped
    unread = ~np.isfinite(clock.time)
    if unread.any():
        lost += int((unread & raw.table.notna().any(axis=1).to_numpy()).sum())
    if lost:
        steps.append(
            Step("unreadable row", lost, detail=f"{raw.path.name}: no stamp, or not split into columns")
        )
    if not stamped.any():
        raise LogError("no row has a readable stamp", file=raw.path, column=clock.columns[0])
    for channel, count in mapped.aside.items():
        steps.append(Step("unit missing or unknown", count, channel, raw.path.name))
    values: dict[str, Floats] = {}
    columns = {column.channel: column.column for column in mapped.columns if column.channel}
    for channel, data in mapped.values.items():
        if mapped.garbled.get(channel):
            steps.append(Step("text where a number belongs", mapped.garbled[channel], channel, raw.path.name))
        codes = find_codes(data, raw.nulls_of(columns[channel]))
        smeared, full = find_smeared(data, codes), find_full_scale(data)
        for name, where in (("null code", codes & ~full), ("smeared null", smeared), ("saturated", full)):
            if where.any():
                steps.append(Step(name, int(where.sum()), channel, raw.path.name))
        gone = codes | smeared | full
        kept = np.where(gone, np.nan, data) if gone.any() else data
        if channel in NEEDED:
            _check_size(raw, channel, kept, mapped, with_block)
        quantity = BY_NAME[channel].quantity
        unit = mapped.units[channel] if quantity != "dimensionless" else "1"
        converted = units.to_si(kept, unit, quantity)
        converted = converted if stamped.all() else converted[stamped]
        missing = int(np.isnan(converted).sum()) - int(gone[stamped].sum())
        if missing > 0:
            steps.append(Step("no value", missing, channel, raw.path.name))
        values[channel] = converted
    return Piece(raw.path, time[stamped], raw.line_of(np.flatnonzero(stamped)), values), steps


def _check_size(raw: RawLog, channel: str, data: Floats, mapped: Mapped, with_block: bool) -> None:
    """Refuse values impossible under the unit given, or missing throughout."""
    unit = mapped.units[channel]
    column = next(c.column for c in mapped.columns if c.channel == channel)
    known = data[np.isfinite(data)]
    if len(known) == 0:
        raise LogError(f"every value of {channel} is missing", file=raw.path, column=column)
    quantity = BY_NAME[channel].quantity
    top = float(np.percentile(units.to_si(known, unit, quantity), 95))
    low, high = (HOOKLOAD_LOW, HOOKLOAD_HIGH) if channel == "hookload" else (DEPTH_LOW, DEPTH_HIGH)
    if channel == "hookload" and not with_block:
        low = -np.inf
    if not low <= top <= high:
        typical = float(np.percentile(known, 95))
        raise LogError(
            f"{channel} near {typical:g} {unit} can't be; {likely_unit(channel, data)}"
            f"give the unit under [logs.channels]: {channel} = {{ column = \"{column}\", unit = \"...\" }}",
            file=raw.path, column=column,
        )  # fmt: skip


def _record(raw: RawLog, clock: Clock, mapped: Mapped, piece: Piece, sha256: str) -> FileRecord:
    return FileRecord(
        name=raw.path.name,
        sha256=sha256,
        format=raw.format,
        rows=len(piece.time),
        start=float(piece.time.min()),
        end=float(piece.time.max()),
        interval=interval_of(piece.time),
        columns=mapped.columns,
        notes=(clock.why, *raw.notes),
        path=raw.path,
    )
