"""From load history to a catalogue of episodes."""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray

from forensics.episodes import chances, measure, rules, wording
from forensics.episodes.catalogue import RESIDUAL_QUANTITY, Consequence, Episode, Kind, State
from forensics.episodes.chances import Chance
from forensics.episodes.consequence import consequence_of
from forensics.episodes.material import Material
from forensics.episodes.spans import Span, SpanRule, find_spans
from forensics.units import show

Floats = NDArray[np.float64]
Bools = NDArray[np.bool_]

# A state is not carried on through a log that says nothing for longer than this [s].
SILENCE = 300.0
STATES = (State.NONE, State.SINUSOIDAL, State.HELICAL)


# Rows that each kind's rule flags, and the signs the lockup rule looked at.
Flagged = tuple[dict[Kind, Bools], rules.LockupSigns]


@dataclass(frozen=True)
class Found:
    """A span of one kind, with the rows its rule flags and the least duration it had to last [s]."""

    kind: Kind
    span: Span
    flags: Bools
    least: float
    signs: rules.LockupSigns


def find_episodes(material: Material) -> tuple[tuple[Episode, ...], dict[str, int]]:
    """Find a run's episodes by the contract's rules.

    Parameters
    ----------
    material : Material
        Log, rig view, loads, draws and calibration of the run.

    Returns
    -------
    episodes : tuple of Episode
        In time order, numbered from E001; without family and cause.
    dropped : dict of str to int
        Spans left out, by reason.
    """
    found: list[Found] = []
    dropped: dict[str, int] = {}
    flagged, signs = flag_rows(material)
    for kind, flags in flagged.items():
        rule = span_rule(material, kind)
        spans, short = find_spans(flags, material.time, rule)
        found += [Found(kind, span, flags, rule.least, signs) for span in spans]
        if short:
            dropped[f"{kind.value}: shorter than {rule.least:g} s"] = short
    lockups = [f.span for f in found if f.kind is Kind.LOCKUP]
    episodes = [_episode(material, f, lockups) for f in found]
    episodes.sort(key=lambda e: (e.start, list(Kind).index(e.kind)))
    return tuple(replace(e, id=f"E{n:03d}") for n, e in enumerate(episodes, 1)), dropped


def rows_in_question(material: Material) -> Bools:
    """Mark the rows whose outcome under other friction matters: the spans of buckling and lockup."""
    wanted = np.zeros(len(material.log), dtype=bool)
    for found in _loaded_spans(material):
        wanted[found.span.rows] = True
    return wanted


def rows_in_doubt(material: Material) -> Bools:
    """Mark the rows of those of these spans whose rule holds in some draws only, or barely in all."""
    wanted = np.zeros(len(material.log), dtype=bool)
    for found in _loaded_spans(material):
        if _chance(material, found).in_doubt:
            wanted[found.span.rows] = True
    return wanted


def _loaded_spans(material: Material) -> list[Found]:
    """Spans of buckling and lockup."""
    flagged, signs = flag_rows(material)
    found = []
    for kind in (Kind.BUCKLING, Kind.LOCKUP):
        rule = span_rule(material, kind)
        spans, _ = find_spans(flagged[kind], material.time, rule)
        found += [Found(kind, span, flagged[kind], rule.least, signs) for span in spans]
    return found


def flag_rows(material: Material) -> Flagged:
    """Flag the rows of every kind of episode, shape (n,) each; with the signs the lockup rule looked at."""
    if material.flagged is not None:
        return material.flagged
    signs = rules.lockup_signs(material)
    used = np.asarray(material.log.used, dtype=bool)
    flagged = {
        Kind.BUCKLING: rules.buckled(material) & _heard(material),
        Kind.LOCKUP: rules.locked_up(material, signs, material.loads.bit_load) & used,
        Kind.DRAG: rules.dragging(material) & used,
        Kind.TORQUE: rules.hard_to_turn(material) & used,
    }
    return flagged, signs


def _heard(material: Material) -> Bools:
    """Mark rows near one that was used: a state stands while rows are set aside, but not for ever."""
    used = np.asarray(material.log.used, dtype=bool)
    last = np.maximum.accumulate(np.where(used, material.time, -np.inf))
    return material.time - last <= max(SILENCE, 3.0 * material.log.interval)


def span_rule(material: Material, kind: Kind) -> SpanRule:
    """Give the case's gap and least duration for a kind, neither under three samples.

    Residuals must be beyond their threshold for the least duration itself; what was bridged does not count.
    """
    criteria = material.case.criteria
    least = material.window(criteria.minimum_duration)
    exact = kind in (Kind.DRAG, Kind.TORQUE)
    return SpanRule(material.window(criteria.bridge_gap), least, material.log.interval, flagged=exact)


def _episode(material: Material, found: Found, lockups: list[Span]) -> Episode:
    """Measure one span."""
    span, kind = found.span, found.kind
    peak = _peak(material, found)
    state = STATES[int(np.max(material.loads.state[span.rows]))]
    ratio = measure.peak_ratio(material, span, peak)
    lost, ends = measure.Lost(*[measure.NOTHING] * 3), (measure.NOTHING, measure.NOTHING)
    if kind in (Kind.BUCKLING, Kind.LOCKUP):
        lost, ends = measure.lost_weight(material, peak), measure.depths_of(material, span)
    top, bottom = _depths(material, found)
    chance = _chance(material, found)
    episode = Episode(
        id="",
        kind=kind,
        state=state,
        start=float(material.time[span.first]),
        end=_end(material, span),
        first=span.first,
        last=span.last,
        peak=peak,
        activity=material.usual_activity(_doing(material, found)),
        top_md=top,
        bottom_md=bottom,
        peak_md=_peak_depth(material, kind, peak),
        peak_load_ratio=ratio,
        peak_compression=measure.peak_compression(material, span, peak),
        lost_weight=lost.weight,
        lost_to_buckling=lost.to_buckling,
        probability=chance.value,
        consequence=Consequence.NONE,
        peak_residual=measure.peak_residual(material, kind, peak),
        bit_load=lost.bit_load,
        ends=ends,
        probability_range=(chance.low, chance.high),
    )
    consequence = consequence_of(material, episode, lockups)
    return replace(episode, consequence=consequence, note=_note(material, episode, consequence))


def _peak(material: Material, found: Found) -> int:
    """Row of the peak load ratio, or of the largest residual, within the span."""
    rows = np.flatnonzero(found.flags[found.span.rows]) + found.span.first
    values = {
        Kind.DRAG: material.drag,
        Kind.TORQUE: material.loads.torque_residual,
    }.get(found.kind, material.loads.peak_ratio)[rows]
    return int(rows[np.argmax(np.nan_to_num(values, nan=-np.inf))])


def _doing(material: Material, found: Found) -> NDArray[np.int64]:
    """Rows that tell what the rig was doing: the flagged ones, and those that led to a lockup."""
    span = found.span
    if found.kind is Kind.LOCKUP:  # the block may stand by the time the rule holds
        before = material.rows_between(
            float(material.time[span.first]) - rules.LOCKUP_WINDOW, material.time[-1]
        )
        return np.arange(before.start, span.last + 1)
    return np.flatnonzero(found.flags[span.rows]) + span.first


def _end(material: Material, span: Span) -> float:
    """End of the span: the first row back to normal, at most one sample on [s]."""
    time = material.time
    last = float(time[span.last])
    after = float(time[span.last + 1]) if span.last + 1 < len(time) else np.inf
    return min(after, last + material.log.interval)


def _depths(material: Material, found: Found) -> tuple[float, float]:
    """Affected depths: the buckled interval at its largest, else the depths the bit was at [m]."""
    loads, rows = material.loads, found.span.rows
    length = loads.bottom[rows] - loads.top[rows]
    if found.kind in (Kind.BUCKLING, Kind.LOCKUP) and np.isfinite(length).any():
        at = found.span.first + int(np.nanargmax(length))
        return float(loads.top[at]), float(loads.bottom[at])
    bit = material.bit[rows]
    if not np.isfinite(bit).any():
        return float("nan"), float("nan")
    if found.kind is Kind.LOCKUP:
        return float(min(np.nanmin(loads.reach[rows]), np.nanmax(bit))), float(np.nanmax(bit))
    return float(np.nanmin(bit)), float(np.nanmax(bit))


def _peak_depth(material: Material, kind: Kind, peak: int) -> float:
    if kind in (Kind.DRAG, Kind.TORQUE):
        return float(material.bit[peak])
    return float(material.loads.peak_md[peak])


def _chance(material: Material, found: Found) -> Chance:
    span, least = found.span, found.least
    if found.kind is Kind.BUCKLING:
        return chances.buckling_chance(material, span, least)
    if found.kind is Kind.LOCKUP:
        return chances.lockup_chance(material, span, found.flags, found.signs)
    if found.kind is Kind.DRAG:
        return chances.drag_chance(material, span, least)
    return chances.torque_chance(material, span, least)


def _note(material: Material, episode: Episode, consequence: Consequence) -> str:
    """Write what the columns leave out: helical span, size of a residual, revolutions while helical."""
    rows = slice(episode.first, episode.last + 1)
    said = []
    top, bottom = measure.helical_span(material, Span(episode.first, episode.last))
    if np.isfinite(bottom - top):
        time = float((material.loads.state[rows] == 2).sum() * material.log.interval)
        said.append(f"helical from {wording.depths(top, bottom, material.system)}, {time:.0f} s in all")
    if episode.peak_residual is not None:
        quantity = RESIDUAL_QUANTITY[episode.kind]
        size = show(episode.peak_residual.value, quantity, material.system)
        said.append(f"{size if size.startswith('-') else '+' + size} against the model")
    if consequence is Consequence.ROTATED_BUCKLED:
        said.append(f"about {_revolutions(material, episode):.0f} revolutions while helical")
    return "; ".join(said)


def _revolutions(material: Material, episode: Episode) -> float:
    rows = slice(episode.first, episode.last + 1)
    rpm = material.log.get("rpm")
    if rpm is None:
        return float("nan")
    turned = np.where((material.loads.state[rows] == 2) & material.rig.turning[rows], rpm[rows], 0.0)
    return float(np.nansum(turned) * material.log.interval / 60.0)
