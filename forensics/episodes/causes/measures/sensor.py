"""What the hookload sensor itself does: in slips, in steps, frozen."""

from __future__ import annotations

import numpy as np

from forensics.episodes.causes.measures.base import FEWEST, NAN, Measure, Subject, middle
from forensics.logs.table import Reason


def slips_shift(s: Subject) -> float:
    """In-slips hookload near the episode less the run's, over what counts as a shift."""
    level, least = s.usual.slips_level
    return (middle(s.usual.in_slips[s.near]) - level) / least


def slips_change(s: Subject) -> float:
    """In-slips hookload after the episode's start less the one before, over what counts as a shift."""
    m = s.material
    _, least = s.usual.slips_level
    at = s.episode.first
    before = m.rows_between(s.episode.start - 4.0 * 3600.0, s.episode.start)
    after = m.rows_between(s.episode.start, s.episode.start + 4.0 * 3600.0)
    earlier = middle(s.usual.in_slips[before.start : at])
    return (middle(s.usual.in_slips[after]) - earlier) / least


def step(s: Subject) -> float:
    """Largest lasting step of the hookload with all else unchanged, over the drag threshold."""
    m = s.material
    rows = m.rows_between(s.episode.start - 300.0, s.episode.end + 60.0)
    hook, rig = m.rig.hookload[rows], m.rig
    n = max(round(6.0 / m.log.interval), 3)
    if rows.stop - rows.start < 4 * n:
        return NAN
    windows = np.lib.stride_tricks.sliding_window_view(hook, n)
    level = np.median(windows, axis=1)
    jump = np.abs(level[n + 1 :] - level[: -n - 1])
    calm = (rig.direction[rows] == 0) & ~rig.slips[rows]
    same = np.lib.stride_tricks.sliding_window_view(calm, 2 * n + 1).all(axis=1)
    for state in (rig.pumping[rows], rig.turning[rows]):
        held = np.lib.stride_tricks.sliding_window_view(state, 2 * n + 1)
        same &= held.all(axis=1) | ~held.any(axis=1)
    known = same[: len(jump)] & np.isfinite(jump[: len(same)])
    if not known.any():
        return NAN
    return float(jump[: len(known)][known].max() / m.drag_threshold[s.episode.peak])


def frozen(s: Subject) -> float:
    """Part of the episode's samples that repeat the one before, or were set aside for it."""
    log = s.material.log
    hook = log.hookload_logged[s.rows]
    same = np.diff(hook) == 0.0
    aside = log.reason[s.near] == Reason.FROZEN
    if len(hook) < 2 * FEWEST:
        return NAN
    return float(max(same.mean(), aside.mean()))


MEASURES = (
    Measure(
        "in-slips reading",
        slips_shift,
        (-1.0, -0.4, 0.4, 1.0),
        "the in-slips hookload is off the run's by {}",
        "run",
    ),
    Measure(
        "in-slips change",
        slips_change,
        (-1.0, -0.4, 0.4, 1.0),
        "the in-slips hookload changed by {} from before to after",
        "run",
    ),
    Measure(
        "step of the reading",
        step,
        (0.15, 0.4, 1.0),
        "with block, pumps and rotation unchanged the reading stepped by {}",
        "strip",
    ),
    Measure(
        "frozen reading",
        frozen,
        (0.02, 0.2, 0.5),
        "{} of the readings repeat the one before",
        "strip",
        "share",
    ),
)
