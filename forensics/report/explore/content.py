"""What the explorer shows: tracks, bands, the map, profiles and episodes, as plain content for its script."""

from __future__ import annotations

from dataclasses import dataclass
from datetime import datetime
from typing import TYPE_CHECKING

import numpy as np
from matplotlib.colors import to_hex
from numpy.typing import NDArray

from forensics.episodes.catalogue import Episode, Kind, Word
from forensics.replay.bands import band
from forensics.report.explore.levels import Pack, level, level_times, steps
from forensics.report.figures import lanes, style
from forensics.report.figures.timeline import Curve, Track, run_tracks
from forensics.report.scene import Scene, main_episodes
from forensics.report.words import Show, duration, fixed, plain
from forensics.rig.view import Activity

if TYPE_CHECKING:
    from forensics.findings import Findings

Floats = NDArray[np.float64]
Content = dict[str, object]

# Height of a track in the page for each unit of height in the report's strip [px].
TALL = 105
# Bars of a band closer than this part of the run are drawn as one.
BARS = 20_000
# A threshold further out than so many times the largest load is drawn there.
FAR = 4.0

# What a figure's caption tells, its label tells here.
LABELS = {("hookload", "model"): "model, off bottom"}
SAID = {
    Word.ACCEPT: "accepted by the engineer",
    Word.REJECT: "rejected by the engineer",
    Word.RELABEL: "relabelled by the engineer",
}
DASHES = {"-": "solid", "--": "dashed"}


@dataclass(frozen=True)
class Band:
    """The 90 % band of a track's last curve: lower and upper end [SI], its colour."""

    low: Floats
    high: Floats
    colour: str


def tracks_of(scene: Scene) -> list[tuple[Track, Band | None]]:
    """Give the run's tracks as the report draws them, with the load ratio and the bands of the draws."""
    found = scene.findings
    loads = found.loads
    largest = Curve(loads.peak_ratio, "largest anywhere", style.HELICAL, 1.2)
    ratio = Track("load ratio", "dimensionless", (largest,), 0.95)
    low, high = band(found.draws, "peak_ratio", loads.peak_ratio)
    bands = {
        "weight on bit": Band(*band(found.draws, "bit_load", loads.bit_load), style.BIT),
        "load ratio": Band(np.maximum(low, 0.0), high, style.HELICAL),
    }
    shown = run_tracks(scene)
    if ratio.present:
        shown.insert(1, ratio)
    return [(track, bands.get(track.name)) for track in shown]


def content_of(scene: Scene) -> tuple[Content, Pack]:
    """Describe the whole page for its script.

    Parameters
    ----------
    scene : Scene
        Findings and how to show them.

    Returns
    -------
    content : dict
        Plain values only; numbers are in the units shown, times in seconds since `start`.
    pack : Pack
        The long arrays, by the names that `content` tells.
    """
    found, show, pack = scene.findings, scene.show, Pack()
    log = found.log
    start, end = (float(log.time[0]), float(log.time[-1])) if len(log) else (0.0, 1.0)
    content: Content = {
        "start": start,
        "end": max(end, start + 1.0) - start,
        "offset": show.moment(start).utcoffset().total_seconds(),  # type: ignore[union-attr]
        "zone": zone_words(show, show.moment(start)),
        "interval": log.interval if np.isfinite(log.interval) else 1.0,
        "levels": _times(pack, log.time - start),
        "tracks": [_track(pack, show, *pair) for pair in tracks_of(scene)],
        "ratio_marks": ratio_marks(found),
        "bands": [_episode_band(found, start), _activity_band(found)],
        "map": _map(pack, scene, start),
        "profiles": _profiles(pack, scene, start),
        "hole": _hole(scene),
        "activities": [plain(activity.word) for activity in Activity],
        "episodes": [_episode(scene, e, start) for e in found.episodes],
        "gravest": next((found.episodes.index(e) for e in main_episodes(found.episodes, 1)), -1),
        "units": {name: show.unit(name) for name in ("length", "force")},
        "colours": {"ink": style.INK, "muted": style.MUTED, "grid": style.GRID, "faint": style.FAINT},
    }
    pack.whole("activity", found.rig.activity, "u1")
    return content | {"index": pack.index}, pack


def zone_words(show: Show, moment: datetime) -> str:
    """Name the zone of the page's times with the offset that holds at the run's start."""
    offset = moment.strftime("%z")
    return f"{show.timezone}, UTC{offset[:3]}:{offset[3:5]}"


def _times(pack: Pack, time: Floats) -> list[int]:
    levels = steps(len(time))
    for step in levels:
        pack.whole(f"time/{step}", level_times(time, step), "f8")
    return list(levels)


def _series(pack: Pack, name: str, values: Floats) -> str:
    """Put a series at every level under its name, and give the name."""
    for step in steps(len(values)):
        pack.numbers(f"{name}/{step}", level(values, step))
    return name


def _track(pack: Pack, show: Show, track: Track, under: Band | None) -> Content:
    """Describe one track, its curves put away."""
    curves = []
    for k, curve in enumerate(track.curves):
        if curve.values is None or not np.isfinite(curve.values).any():
            continue
        curves.append({
            "key": _series(pack, f"{track.name}/{k}", show.scaled(curve.values, track.quantity)),
            "label": LABELS.get((track.name, curve.label), curve.label or track.name),
            "colour": curve.colour,
            "width": curve.width + 0.3,
            "dash": DASHES[curve.dash],
            "scales": curve.scales,
        })  # fmt: skip
    told: Content = {
        "name": track.name,
        "unit": show.unit(track.quantity),
        "height": round(TALL * track.height),
        "down": track.depth,
        "curves": curves,
        "band": None,
    }
    if under is not None and np.isfinite(under.low).any():
        ends = {
            "low": _series(pack, f"{track.name}/low", show.scaled(under.low, track.quantity)),
            "high": _series(pack, f"{track.name}/high", show.scaled(under.high, track.quantity)),
        }
        told["band"] = {**ends, "about": curves[-1]["key"], "colour": under.colour}
    return told


def ratio_marks(found: Findings) -> list[Content]:
    """Give the thresholds of the load ratio: the sinusoidal one, and about where the helix begins."""
    criterion = found.case.criteria.helical_onset
    onset = style.ratio_edges(criterion)[5]
    return [
        {"at": 1.0, "label": "sinusoidal", "dash": "dashed"},
        {"at": onset, "label": f"helical, about ({criterion})", "dash": "dotted"},
    ]


def _episode_band(found: Findings, start: float) -> Content:
    """Describe the band of episodes: one lane a kind, as the report draws it."""
    names = [name for name, _ in lanes.EPISODE_LANES if any(lanes.lane_of(e) == name for e in found.episodes)]
    colours = dict(lanes.EPISODE_LANES)
    bars = [
        (e.start - start, max(e.end, e.start + found.log.interval) - start, names.index(lanes.lane_of(e)))
        for e in found.episodes
    ]
    return {
        "name": "episodes",
        "lanes": names or ["none"],
        "bars": [list(bar) for bar in sorted(bars)],
        "colours": [colours[name] for name in names],
    }


def _activity_band(found: Findings) -> Content:
    """Describe the band of activities: one lane an activity, bars too close to tell apart joined."""
    log = found.log
    told = lanes.activity_lanes(found.rig.activity)
    span = float(log.time[-1] - log.time[0]) if len(log) else 0.0
    bars = [
        [round(a, 1), round(a + length, 1), lane]
        for lane, (_, flags) in enumerate(told)
        for a, length in lanes.merge(lanes.bars_of(flags, log.time, log.interval), span / BARS)
    ]
    return {
        "name": "activity",
        "lanes": [name for name, _ in told] or ["none"],
        "bars": bars,
        "colours": [style.MUTED] * len(told),
    }


def _map(pack: Pack, scene: Scene, start: float) -> Content | None:
    """Describe the load-ratio map: classes as small whole numbers, 0 where nothing is judged."""
    grid = scene.findings.loads.ratio_map
    if not grid.values.size:
        return None
    criterion = scene.findings.case.criteria.helical_onset
    edges = style.ratio_edges(criterion)
    classes = np.digitize(np.nan_to_num(grid.values.T, nan=-1.0), edges)
    pack.whole("map", classes, "u1")
    colours, _ = style.ratio_colours(criterion)
    shades = ["#ffffff", *(to_hex(colours(k)) for k in range(len(edges) - 1)), style.RATIO_OVER]
    return {
        "rows": int(classes.shape[0]),
        "columns": int(classes.shape[1]),
        "from": float(grid.time_edges[0]) - start,
        "to": float(grid.time_edges[-1]) - start,
        "bin": duration(float(grid.time_edges[1] - grid.time_edges[0])),
        "bottom": float(scene.show.scaled(grid.md_edges[-1], "length")),
        "palette": shades,
        "edges": [float(edge) for edge in edges],
        "criterion": criterion,
    }


def _profiles(pack: Pack, scene: Scene, start: float) -> Content | None:
    """Put the profiles away: each is told by its row, its time and the arrays of its places."""
    found, show = scene.findings, scene.show
    course = found.course
    if course is None or not len(course.rows):
        return None
    for name in ("tension", "sinusoidal", "helical"):
        values = show.scaled(getattr(course, name), "force")
        if name != "tension":
            most = FAR * float(np.nanmax(np.abs(course.tension), initial=1.0))
            values = -np.minimum(values, show.scaled(most, "force"))
        pack.numbers(f"profile/{name}", values)
    pack.numbers("profile/md", show.scaled(course.md, "length"))
    pack.whole("profile/state", course.state, "u1")
    return {
        "time": [round(float(t), 3) for t in found.log.time[course.rows] - start],
        "reach": [_plain(v) for v in show.scaled(found.loads.reach[course.rows], "length")],
        "bit": [_plain(v) for v in show.scaled(found.log.values["bit_depth"][course.rows], "length")],
        "places": int(course.md.shape[1]),
        "deepest": float(show.scaled(np.nanmax(course.md), "length")),
    }


def _plain(value: float) -> float | None:
    """Give a number that JSON knows."""
    return round(float(value), 2) if np.isfinite(value) else None


def _hole(scene: Scene) -> list[Content]:
    """Tell where each section of the hole but the first begins."""
    hole = scene.findings.well.hole
    tops = scene.show.scaled(np.asarray(hole.top)[1:], "length")
    return [
        {"at": float(top), "name": name} for top, name in zip(tops, list(hole.name)[1:], strict=True)
    ]


def _episode(scene: Scene, episode: Episode, start: float) -> Content:
    """Tell of one episode what the list and the jump to it need."""
    time = scene.findings.log.time
    peak = float(time[min(max(episode.peak, 0), len(time) - 1)]) if len(time) else start
    return {
        "id": episode.id,
        "start": episode.start - start,
        "end": episode.end - start,
        "peak": peak - start,
        "words": episode_words(scene.show, episode),
    }


def episode_words(show: Show, episode: Episode) -> str:
    """Put an episode in a line: when, what, how bad, what it cost."""
    what = plain(episode.state) if episode.kind is Kind.BUCKLING else plain(episode.kind)
    parts = [episode.id, show.time(episode.start)[5:16], what]
    ratio, lost = episode.peak_load_ratio.value, episode.lost_weight.value
    if episode.peak_residual is not None:
        quantity = "moment" if episode.kind is Kind.TORQUE else "force"
        parts.append(f"{show.value(episode.peak_residual.value, quantity)} off the model")
    else:
        parts += [f"load ratio {fixed(ratio, 2)}"] if ratio > 0.0 else []
        parts += [f"{show.value(lost, 'force')} short of the bit"] if lost > 0.0 else []
    if episode.word is not None:
        parts.append(SAID[episode.word])
    return ", ".join(parts)
