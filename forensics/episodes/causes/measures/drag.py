"""Drag and torque beyond the model: which way, how it came, where else, and what circulating did to it."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from forensics.episodes.catalogue import Kind
from forensics.episodes.causes.measures.base import FEWEST, NAN, Floats, Measure, Subject, middle, spread

#: Passes of the same depth lie apart in time by at least this [s].
NEW_PASS = 900.0

#: Like drag is looked for this far in time [s]; it ends where this much bit travel [m] shows less than
#: this share of the threshold, and comes up from under that one.
STRETCH = 3.0 * 3600.0
GAP = 6.0
LIKE = 0.5
SLACK = 0.33

#: How long before an episode's end its drag is followed in time [s].
BEFORE = 6.0 * 3600.0


def _residual(s: Subject) -> Floats:
    return s.material.loads.drag_residual[s.near] / s.material.drag_threshold[s.near]


def going_up(s: Subject) -> float:
    """Median drag beyond the model going up, over the threshold."""
    return middle(np.where(s.material.friction_sign[s.near] > 0, _residual(s), np.nan))


def going_down(s: Subject) -> float:
    """Median drag beyond the model going down, over the threshold."""
    return middle(np.where(s.material.friction_sign[s.near] < 0, -_residual(s), np.nan))


def turning(s: Subject) -> float:
    """Median hookload less model while turning off bottom, over the threshold, signed."""
    return middle(np.where(s.material.rig.turning[s.near], _residual(s), np.nan))


def peak_turning(s: Subject) -> float:
    """Hookload less model over the episode's rows that turn, over the threshold, signed."""
    m = s.material
    share = m.loads.drag_residual[s.rows] / m.drag_threshold[s.rows]
    return middle(np.where(m.rig.turning[s.rows], share, np.nan))


def shift(s: Subject) -> float:
    """Part of the hookload's residual that is alike going up and going down, over the threshold."""
    up, down = going_up(s), -going_down(s)
    if not (np.isfinite(up) and np.isfinite(down)):
        return NAN
    return float(np.sign(up) * min(abs(up), abs(down))) if up * down > 0.0 else 0.0


def torque(s: Subject) -> float:
    """Median torque beyond the model, over its threshold."""
    return middle(s.material.loads.torque_residual[s.near] / s.material.torque_threshold[s.near])


def _passes(s: Subject) -> tuple[Floats, Floats]:
    """Drag in the episode's direction (or torque) over its threshold at its depth, and when [s]."""
    rows = s.same_depth
    if s.episode.kind is Kind.TORQUE:
        values = s.usual.torque[rows]
    else:
        rows = rows[s.material.friction_sign[rows] == s.sign] if s.sign else rows
        values = s.usual.drag[rows]
    known = np.isfinite(values)
    return values[known], s.material.time[rows][known]


def elsewhen(s: Subject) -> float:
    """Drag (or torque) at the same depth on the easiest of the other passes, over the threshold."""
    values, time = _passes(s)
    other = (time < s.episode.start - NEW_PASS) | (time > s.episode.end + NEW_PASS)
    values, time = values[other], time[other]
    if len(values) == 0:
        return NAN
    easiest = [middle(one) for one in np.split(values, np.flatnonzero(np.diff(time) > NEW_PASS) + 1)]
    return float(np.nanmin(easiest)) if np.isfinite(easiest).any() else NAN


def earlier(s: Subject) -> float:
    """Median drag (or torque) on earlier passes of the same depth, over the threshold."""
    values, time = _passes(s)
    return middle(values[time < s.episode.start - NEW_PASS])


def later(s: Subject) -> float:
    """Median drag (or torque) on later passes of the same depth, over the threshold."""
    values, time = _passes(s)
    return middle(values[time > s.episode.end + NEW_PASS])


def cleaned(s: Subject) -> float:
    """Change of drag to the next pass of the depth, where the hole was circulated in between."""
    values, time = _passes(s)
    after = time > s.episode.end + NEW_PASS
    if after.sum() < FEWEST:
        return NAN
    m = s.material
    between = slice(s.episode.last, int(np.searchsorted(m.time, time[after][0])))
    if float(m.rig.pumping[between].sum() * m.log.interval) < 1800.0:
        return NAN
    here = (time >= s.episode.start) & (time <= s.episode.end)
    return middle(values[after]) - middle(values[here], 1)


def growth(s: Subject) -> float:
    """Rank correlation of drag with time, over the six hours up to the episode's end."""
    m = s.material
    rows = m.rows_between(s.episode.end - BEFORE, s.episode.end)
    values = s.usual.drag[rows]
    at = np.flatnonzero((m.friction_sign[rows] != 0) & np.isfinite(values))
    if len(at) < 60 or m.time[rows][at[-1]] - m.time[rows][at[0]] < 1800.0:
        return NAN
    at = at[np.linspace(0, len(at) - 1, 200).astype(int)]
    if np.ptp(values[at]) < 0.3:
        return 0.0
    ranks = np.argsort(np.argsort(values[at])).astype(float)
    return float(np.corrcoef(ranks, np.arange(len(at)))[0, 1])


def _told(s: Subject) -> tuple[Floats, Floats, slice]:
    """Share of the threshold and bit depth of rows moving the episode's way, and the span of like drag."""
    m = s.material
    near = m.rows_between(s.episode.start - STRETCH, s.episode.end + STRETCH)
    share = s.usual.drag[near]
    told = np.flatnonzero((m.friction_sign[near] == s.sign) & np.isfinite(share))
    at = int(np.searchsorted(told, s.episode.peak - near.start))
    share, bit = share[told], m.bit[near][told]
    low = _lasting(share < LIKE, bit)
    before, after = low[low < at], low[low > at]
    first = int(before[-1]) + 1 if len(before) else 0
    return share, bit, slice(first, int(after[0]) if len(after) else len(told))


def length(s: Subject) -> float:
    """Bit travel with like drag in the same direction, across connections [m]."""
    if s.episode.kind is not Kind.DRAG or s.sign == 0:
        return spread(s.material.bit[s.rows])
    _, bit, like = _told(s)
    return spread(bit[like])


def onset(s: Subject) -> float:
    """Bit travel over which the drag came up [m]."""
    if s.episode.kind is not Kind.DRAG or s.sign == 0:
        return NAN
    share, bit, like = _told(s)
    slack = np.flatnonzero(share[: like.start] < SLACK)
    beyond = like.start + np.flatnonzero(share[like] > 1.0)
    if len(slack) == 0 or len(beyond) == 0:
        return NAN
    return abs(float(bit[beyond[0]] - bit[slack[-1]]))


def _lasting(flags: NDArray[np.bool_], bit: Floats) -> NDArray[np.int64]:
    """Rows of flagged runs that last over some bit travel: each stand starts slack, and that is no gap."""
    edges = np.flatnonzero(np.diff(np.concatenate([[0], flags.astype(np.int8), [0]]))).reshape(-1, 2)
    kept = [np.arange(a, b) for a, b in edges.tolist() if spread(bit[a:b]) >= GAP]
    return np.concatenate(kept) if kept else np.zeros(0, dtype=np.int64)


def run_share(s: Subject) -> float:
    """Part of the run's readings going up or down that are beyond the threshold."""
    return s.usual.dragging


def run_turning(s: Subject) -> float:
    """Median hookload less model while turning off bottom in the whole run, over the threshold, signed."""
    return s.usual.turning


GRADES = (0.2, 0.5, 1.0, 2.0)

MEASURES = (
    Measure("drag going up", going_up, (-0.2, *GRADES), "drag beyond the model going up: {}", "residuals"),
    Measure(
        "drag going down", going_down, (-0.2, *GRADES), "drag beyond the model going down: {}", "residuals"
    ),
    Measure(
        "rotating weight", turning, (-0.6, -0.25, 0.25, 0.6), "rotating weight less model: {}", "residuals"
    ),
    Measure(
        "turning within the episode",
        peak_turning,
        (-1.0, -0.4, 0.4, 1.0),
        "hookload less model while turning in it: {}",
    ),
    Measure(
        "same shift both ways", shift, (-0.6, -0.2, 0.2, 0.6), "up and down shifted alike by {}", "residuals"
    ),
    Measure("torque", torque, (-0.2, 0.3, 0.8, 1.5), "torque beyond the model: {}", "residuals"),
    Measure(
        "same depth on other passes",
        elsewhen,
        (0.2, 0.5, 0.8),
        "easiest other pass of this depth: {}",
        "residuals",
    ),
    Measure("earlier passes", earlier, (0.1, 0.3, 0.6, 1.0), "earlier passes of this depth: {}", "residuals"),
    Measure("later passes", later, (0.1, 0.3, 0.6, 1.0), "later passes of this depth: {}", "residuals"),
    Measure(
        "after circulating",
        cleaned,
        (-1.0, -0.5, -0.1),
        "next pass, after circulating, less this one: {}",
        "residuals",
    ),
    Measure(
        "growth in time",
        growth,
        (-0.3, 0.3, 0.6),
        "drag against time before it, rank correlation {}",
        "residuals",
        "ratio",
    ),
    Measure("onset", onset, (1.0, 3.0, 10.0, 30.0), "drag came up over {} of bit travel", "strip", "length"),
    Measure(
        "length of hole",
        length,
        (2.0, 10.0, 40.0, 120.0),
        "like drag over {} of bit travel",
        "strip",
        "length",
    ),
    Measure(
        "drag in the whole run",
        run_share,
        (0.02, 0.1, 0.3),
        "{} of the run's moving readings are beyond the threshold",
        "residuals",
        "share",
    ),
    Measure(
        "rotating weight of the run",
        run_turning,
        (-0.4, -0.15, 0.15, 0.4),
        "rotating weight less model over the whole run: {}",
        "residuals",
    ),
)
