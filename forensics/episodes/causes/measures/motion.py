"""How the string was moved: what it was doing, standing still before, turning it, tries, how it ended."""

from __future__ import annotations

import numpy as np

from forensics.episodes.catalogue import Kind
from forensics.episodes.causes.measures.base import FEWEST, NAN, Measure, Subject, named

ENDS = ("by itself", "as the string was raised", "as the string turned")

#: Standing still is looked for this long before an episode, and ends at most this long before it [s].
BACK = 4.0 * 3600.0
SHORTLY = 120.0

#: Tries at the same depth lie within this [m].
SAME_PLACE = 3.0


def lasted(s: Subject) -> float:
    """How long it lasted [s]."""
    return s.episode.duration


def still_before(s: Subject) -> float:
    """Time the string stood still, neither moved nor turned, up to two minutes before the episode [s]."""
    m, start = s.material, s.episode.start
    before = m.rows_between(start - BACK, start)
    if s.usual.channel("block_position") is None or before.stop - before.start < FEWEST:
        return NAN
    moving = ((m.rig.direction[before] != 0) & ~m.rig.slips[before]) | m.rig.turning[before]
    moving |= s.usual.drilling[before]
    time = m.time[before]
    moved, rested = time[moving & (time < start - SHORTLY)], time[~moving]
    if len(rested) == 0:
        return 0.0
    return float(max(rested[-1] - (moved[-1] if len(moved) else time[0]), 0.0))


def longest_still(s: Subject) -> float:
    """Longest time the string stood still out of slips in the hour before [s]."""
    m, start = s.material, s.episode.start
    rows = m.rows_between(start - 3600.0, start + 60.0)
    if s.usual.channel("block_position") is None or rows.stop - rows.start < FEWEST:
        return NAN
    moving = (m.rig.direction[rows] != 0) | m.rig.turning[rows] | s.usual.drilling[rows]
    stops = np.flatnonzero(moving)
    edges = np.concatenate([[0], stops, [len(moving) - 1]])
    return float(np.max(np.diff(m.time[rows][edges])))


def held_torque(s: Subject) -> float:
    """Largest torque while the string did not turn, over the run's usual torque while turning."""
    m = s.material
    torque = s.usual.channel("torque")
    if torque is None or not m.usual_torque > 0.0:
        return NAN
    rows = m.rows_between(s.episode.start - 60.0, s.episode.end + 300.0)
    held = torque[rows][~m.rig.turning[rows] & ~m.rig.slips[rows]]
    held = np.sort(held[np.isfinite(held)])
    return float(held[-FEWEST] / m.usual_torque) if len(held) >= 2 * FEWEST else NAN


def torque_peak(s: Subject) -> float:
    """Largest torque while turning, spikes of a few samples left out, over the run's usual."""
    m = s.material
    torque = s.usual.channel("torque")
    if torque is None or not m.usual_torque > 0.0:
        return NAN
    rows = m.rows_between(s.episode.start - 60.0, s.episode.end + 60.0)
    turned = torque[rows][m.rig.turning[rows] & np.isfinite(torque[rows])]
    return float(np.sort(turned)[-FEWEST] / m.usual_torque) if len(turned) >= 2 * FEWEST else NAN


def ending(s: Subject) -> float:
    """How it ended, as a number of `ENDS`."""
    m, episode = s.material, s.episode
    if episode.last >= len(m.time) - 1:
        return NAN
    end = m.rows_between(episode.end - 60.0, episode.end + 60.0)
    if m.rig.turning[end].any() and not m.rig.turning[episode.peak]:
        return 2.0
    return float((m.rig.direction[end] < 0).any() and m.rig.direction[episode.peak] >= 0)


def breakover(s: Subject) -> float:
    """Peak of the hookload as the string was first raised after a stop, over what it then carried going up.

    Over the drag threshold; the largest within the episode and ten minutes around.
    """
    m = s.material
    rows = m.rows_between(s.episode.start - 600.0, s.episode.end + 600.0)
    up = (m.friction_sign[rows] > 0) & ~m.rig.slips[rows]
    hook = m.rig.hookload[rows]
    edges = np.flatnonzero(np.diff(np.concatenate([[0], up.astype(np.int8), [0]]))).reshape(-1, 2)
    least = max(round(10.0 / m.log.interval), 2)
    peaks = []
    for a, b in edges.tolist():
        if b - a < 3 * least:
            continue
        first, later = hook[a : a + 2 * least], hook[b - least : b]
        if np.isfinite(first).any() and np.isfinite(later).any():
            peaks.append(np.nanmax(first) - np.nanmedian(later))
    return float(max(peaks) / m.drag_threshold[s.episode.peak]) if peaks else NAN


def tries(s: Subject) -> float:
    """How many times the lockup or drag rule held with the bit at this depth."""
    kind = s.episode.kind if s.episode.kind in (Kind.DRAG, Kind.TORQUE) else Kind.LOCKUP
    if not np.isfinite(s.place):
        return NAN
    return float((np.abs(s.usual.places[kind] - s.place) < SAME_PLACE).sum())


MEASURES = (
    Measure("duration", lasted, (40.0, 120.0, 400.0, 1200.0), "it lasted {}", "strip", "time"),
    Measure(
        "stood still before",
        still_before,
        (120.0, 400.0, 900.0),
        "the string had stood still for {}",
        "strip",
        "time",
    ),
    Measure(
        "longest standstill",
        longest_still,
        (240.0, 480.0, 900.0),
        "it had stood still for up to {} out of its last hour",
        "strip",
        "time",
    ),
    Measure(
        "torque held at standstill",
        held_torque,
        (0.2, 0.5, 1.0, 1.6),
        "torque without turning came up to {} of the usual turning torque",
        "strip",
        "ratio",
    ),
    Measure(
        "torque peak",
        torque_peak,
        (1.1, 1.3, 1.6, 2.2),
        "torque while turning came up to {} of the usual",
        "strip",
        "ratio",
    ),
    Measure("how it ended", ending, named(ENDS), "it ended {}", "strip", "word", ENDS),
    Measure(
        "breakover peak",
        breakover,
        (0.2, 0.5, 1.0, 2.0),
        "raised after a stop, the hookload peaked by {}",
        "strip",
    ),
    Measure(
        "tries at this depth",
        tries,
        (0.5, 1.5, 3.5),
        "the rule held {} times with the bit at this depth",
        "run",
        "count",
    ),
)
