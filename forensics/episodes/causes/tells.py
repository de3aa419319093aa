"""What can be measured about an episode that speaks for one cause or another.

Every measurement is a plain number, NaN where the log can't show it. Drag and torque are given as
multiples of the threshold that makes an episode.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from forensics.episodes.catalogue import Episode, Kind
from forensics.episodes.causes.signals import Signals
from forensics.episodes.material import Material
from forensics.rig.view import Activity

Floats = NDArray[np.float64]

NAN = float("nan")

#: How far around an episode its readings still belong to it [s].
NEAR = 900.0

#: Passes of the same depth lie within this [m], and apart in time by at least this [s].
SAME_DEPTH = 15.0
NEW_PASS = 900.0

#: Like drag is looked for this far in time [s]; it ends where this much bit travel [m] shows less than
#: this share of the threshold, and comes up from under that one.
STRETCH = 3.0 * 3600.0
GAP = 6.0
LIKE = 0.5
SLACK = 0.33

#: A band of hole where cuttings settle into beds that slide back [rad] (trade rule, from memory).
BED = (np.radians(40.0), np.radians(65.0))

FEWEST = 5


@dataclass(frozen=True)
class Tells:
    """Measurements on one episode.

    Parameters
    ----------
    up, down : float
        Median drag beyond the model going up, and down, over the threshold.
    turning : float
        Median residual of the hookload while turning off bottom, over the threshold, signed.
    shift : float
        The part of the up and down residuals that is alike in sign, over the threshold.
    slips : float
        In-slips hookload near the episode less the run's, over its own scatter and 10 kN.
    torque : float
        Median torque beyond the model, over its threshold.
    pressure : float
        Standpipe pressure at usual flow above the run's usual, over its threshold (3 % or six noises).
    still : float
        Time the string had stood still before [s].
    elsewhere : float
        Drag at the same depth on the easiest of the other passes, over the threshold.
    cleaned : float
        Drag on the next pass less this one's, over the threshold, where the hole was circulated between.
    growth : float
        Rank correlation of drag with time over the hours before.
    onset : float
        Bit travel over which the drag came up [m].
    length : float
        Bit travel with like drag in the same direction, across connections [m].
    shoe, dogleg : float
        Distance of the bit from the shoe [m]; largest curvature near the bit [rad/m].
    ratio : float
        Peak load ratio.
    lost_share : float
        Part of the lost weight that is beyond ordinary sliding drag.
    friction : float
        Calibrated less assumed factor of the hole that matters, in steps of 0.04.
    release : float
        1 where the episode ended as the string turned or was picked up, 0 where not.
    bed : float
        Length of open hole above the bit in the band where cuttings settle [m].
    """

    up: float = NAN
    down: float = NAN
    turning: float = NAN
    shift: float = NAN
    slips: float = NAN
    torque: float = NAN
    pressure: float = NAN
    still: float = NAN
    elsewhere: float = NAN
    cleaned: float = NAN
    growth: float = NAN
    onset: float = NAN
    length: float = NAN
    shoe: float = NAN
    dogleg: float = NAN
    ratio: float = NAN
    lost_share: float = NAN
    friction: float = NAN
    release: float = NAN
    bed: float = NAN


def measure_tells(material: Material, signals: Signals, episode: Episode) -> Tells:
    """Measure everything about an episode that the log shows.

    Parameters
    ----------
    material : Material
    signals : Signals
        The run's usual values.
    episode : Episode

    Returns
    -------
    Tells
    """
    near = material.rows_between(episode.start - NEAR, episode.end + NEAR)
    rows = slice(episode.first, episode.last + 1)
    up, down, shift, turning = _directions(material, near)
    place = float(material.bit[episode.peak])
    lost = episode.lost_weight.value
    return Tells(
        up=up, down=down, shift=shift, turning=turning,
        slips=signals.slips_shift(near),
        torque=_median(material.loads.torque_residual[near] / material.torque_threshold[near]),
        pressure=signals.pressure_rise(rows),
        still=_still_before(material, episode),
        **_other_passes(material, episode),
        growth=_growth(material, episode),
        **_stretch(material, episode),
        shoe=abs(place - float(material.well.hole.shoe)),
        dogleg=_dogleg(material, place),
        ratio=episode.peak_load_ratio.value,
        lost_share=float(np.clip(episode.lost_to_buckling.value / lost, 0.0, 1.0)) if lost > 0.0 else NAN,
        friction=_friction(material, episode.peak),
        release=_release(material, episode),
        bed=_bed(material, place),
    )  # fmt: skip


def _median(values: Floats, fewest: int = FEWEST) -> float:
    known = values[np.isfinite(values)]
    return float(np.median(known)) if len(known) >= fewest else NAN


def _span(values: Floats) -> float:
    known = values[np.isfinite(values)]
    return float(np.ptp(known)) if len(known) else NAN


def _directions(material: Material, near: slice) -> tuple[float, float, float, float]:
    """Drag up and down, their common shift, and the residual while turning."""
    sign, threshold = material.friction_sign[near], material.drag_threshold[near]
    residual = material.loads.drag_residual[near] / threshold
    up = _median(np.where(sign > 0, residual, np.nan))
    down = _median(np.where(sign < 0, -residual, np.nan))
    turning = _median(np.where(material.rig.turning[near], residual, np.nan))
    both = np.isfinite(up) and np.isfinite(down)
    alike = both and up * -down > 0.0
    shift = float(np.sign(up) * min(abs(up), abs(down))) if alike else (0.0 if both else NAN)
    return up, down, shift, turning


def _still_before(material: Material, episode: Episode) -> float:
    """Time the string stood still, neither moved nor turned, up to two minutes before the episode [s]."""
    before = material.rows_between(episode.start - 4.0 * 3600.0, episode.start)
    if material.log.get("block_position") is None or before.stop - before.start < FEWEST:
        return NAN
    rig = material.rig
    drilling = np.isin(rig.activity[before], (Activity.DRILL_SLIDE, Activity.DRILL_ROTATE))
    moving = ((rig.direction[before] != 0) & ~rig.slips[before]) | rig.turning[before] | drilling
    time = material.time[before]
    moved = time[moving & (time < episode.start - 120.0)]
    rested = time[~moving]
    if len(rested) == 0:
        return 0.0
    return float(max(rested[-1] - (moved[-1] if len(moved) else time[0]), 0.0))


def _other_passes(material: Material, episode: Episode) -> dict[str, float]:
    """Drag on other passes of the same depths, and after circulating in between."""
    if episode.kind not in (Kind.DRAG, Kind.TORQUE):
        return {}
    sign = material.friction_sign[episode.peak]
    values = material.drag / material.drag_threshold
    if episode.kind is Kind.TORQUE:
        values = material.loads.torque_residual / material.torque_threshold
    elif sign != 0:
        values = np.where(material.friction_sign == sign, values, np.nan)
    place = material.bit[episode.peak]
    same = (np.abs(material.bit - place) < SAME_DEPTH) & np.isfinite(values)
    time = material.time
    other = same & ((time < episode.start - NEW_PASS) | (time > episode.end + NEW_PASS))
    later = np.flatnonzero(same & (time > episode.end + NEW_PASS))
    cleaned = NAN
    if len(later) >= FEWEST:
        between = slice(episode.last, int(later[0]))
        pumped = float(material.rig.pumping[between].sum() * material.log.interval)
        if pumped > 1800.0:
            cleaned = _median(values[later]) - _median(values[episode.first : episode.last + 1], 1)
    rows = np.flatnonzero(other)
    passes = np.split(rows, np.flatnonzero(np.diff(time[rows]) > NEW_PASS) + 1) if len(rows) else []
    easiest = [_median(values[one]) for one in passes]
    return {"elsewhere": float(np.nanmin(easiest)) if np.isfinite(easiest).any() else NAN, "cleaned": cleaned}


def _growth(material: Material, episode: Episode) -> float:
    """Rank correlation of drag with time, over the six hours up to the episode's end."""
    rows = material.rows_between(episode.end - 6.0 * 3600.0, episode.end)
    values = material.drag[rows] / material.drag_threshold[rows]
    moving = (material.friction_sign[rows] != 0) & np.isfinite(values)
    at = np.flatnonzero(moving)
    if len(at) < 60 or material.time[rows][at[-1]] - material.time[rows][at[0]] < 1800.0:
        return NAN
    at = at[np.linspace(0, len(at) - 1, 200).astype(int)]
    ranks = np.argsort(np.argsort(values[at])).astype(float)
    if np.ptp(values[at]) < 0.3:
        return 0.0
    return float(np.corrcoef(ranks, np.arange(len(at)))[0, 1])


def _stretch(material: Material, episode: Episode) -> dict[str, float]:
    """Length of hole with like drag, across connections, and the bit travel over which it came up [m]."""
    rows = slice(episode.first, episode.last + 1)
    sign = material.friction_sign[episode.peak]
    if episode.kind is not Kind.DRAG or sign == 0:
        return {"length": _span(material.bit[rows])}
    near = material.rows_between(episode.start - STRETCH, episode.end + STRETCH)
    share = material.drag[near] / material.drag_threshold[near]
    told = np.flatnonzero((material.friction_sign[near] == sign) & np.isfinite(share))
    at = int(np.searchsorted(told, episode.peak - near.start))
    bit = material.bit[near][told]
    low = _lasting(share[told] < LIKE, bit)
    before, after = low[low < at], low[low > at]
    first = int(before[-1]) + 1 if len(before) else 0
    last = int(after[0]) if len(after) else len(told)
    length = _span(bit[first:last])
    slack = np.flatnonzero(share[told[:first]] < SLACK)
    beyond = first + np.flatnonzero(share[told[first:last]] > 1.0)
    if len(slack) == 0 or len(beyond) == 0:
        return {"length": length}
    return {"length": length, "onset": abs(float(bit[beyond[0]] - bit[slack[-1]]))}


def _lasting(flags: NDArray[np.bool_], bit: Floats) -> NDArray[np.int64]:
    """Rows of flagged runs that last over some bit travel: each stand starts slack, and that is no gap."""
    edges = np.flatnonzero(np.diff(np.concatenate([[0], flags.astype(np.int8), [0]]))).reshape(-1, 2)
    kept = [np.arange(a, b) for a, b in edges.tolist() if _span(bit[a:b]) >= GAP]
    return np.concatenate(kept) if kept else np.zeros(0, dtype=np.int64)


def _dogleg(material: Material, place: float) -> float:
    """Largest curvature of the hole within 30 m above the bit [rad/m]."""
    at = np.linspace(max(place - 30.0, 0.0), place, 7)
    curvature = np.asarray(material.well.trajectory.at(at).curvature)
    return float(np.max(np.linalg.norm(curvature, axis=1)))


def _friction(material: Material, row: int) -> float:
    """Calibrated less assumed factor of the hole that carries most drag, in steps of 0.04."""
    from forensics.friction.assumptions import assumed_factor

    kind = "open" if material.open_share[row] > 0.5 else "cased"
    factor = next(s.factor for s in material.calibration.sections if s.kind == kind)
    if not factor.determined:
        return NAN
    return (factor.value - assumed_factor(kind, material.case, material.well).value) / 0.04


def _release(material: Material, episode: Episode) -> float:
    """Whether the string turned or was picked up as the episode ended."""
    end = material.rows_between(episode.end - 60.0, episode.end + 60.0)
    if episode.last >= len(material.time) - 1:
        return NAN
    return float(bool((material.rig.turning[end] | (material.rig.direction[end] < 0)).any()))


def _bed(material: Material, place: float) -> float:
    """Length of open hole above the bit at inclinations where cuttings settle and slide [m]."""
    step = 10.0
    at = np.arange(float(material.well.hole.shoe), place, step)
    if len(at) == 0:
        return 0.0
    inclination = np.asarray(material.well.trajectory.at(at).inclination)
    return float(((inclination >= BED[0]) & (inclination <= BED[1])).sum() * step)
