"""The strip charts: the whole run, and the minutes around one episode."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace

import numpy as np
from matplotlib.axes import Axes
from matplotlib.figure import Figure
from matplotlib.ticker import MaxNLocator
from numpy.typing import NDArray

from forensics.episodes.catalogue import Episode
from forensics.report.figures import lanes, style
from forensics.report.figures.clock import time_axis
from forensics.report.figures.decimate import POINTS, thin
from forensics.report.figures.spare import lay_out
from forensics.report.scene import Scene
from forensics.report.words import Show

Floats = NDArray[np.float64]

_EDGES = (1.65, 0.95, 0.55, 0.55)


@dataclass(frozen=True)
class Curve:
    """One line of a track: values [SI], its label, how it is drawn, whether it sets the scale."""

    values: Floats | None
    label: str
    colour: str
    width: float = 0.9
    dash: str = "-"
    scales: bool = True


@dataclass(frozen=True)
class Track:
    """One track of a strip chart; `depth` tracks run downwards."""

    name: str
    quantity: str
    curves: tuple[Curve, ...]
    height: float = 0.62
    depth: bool = False

    @property
    def present(self) -> bool:
        """Whether there is anything to draw."""
        return any(c.values is not None and np.isfinite(c.values).any() for c in self.curves)


def depth_track(scene: Scene) -> Track:
    """Bit and hole depth."""
    found = scene.findings
    return Track(
        "depth",
        "length",
        (
            Curve(found.rig.hole_depth, "hole", style.LOGGED, 1.4),
            Curve(found.log.get("bit_depth"), "bit", style.INK),
        ),
        depth=True,
    )


def weight_track(scene: Scene) -> Track:
    """Weight on bit three ways: as logged, re-zeroed, reconstructed at the bit."""
    found = scene.findings
    return Track(
        "weight on bit",
        "force",
        (
            # In slips a rig's indicator shows the whole string's weight: too much to scale by.
            Curve(found.log.get("wob"), "as logged", style.LOGGED, 0.9, scales=False),
            Curve(found.rig.wob_surface, "re-zeroed", style.SURFACE, 0.9),
            Curve(found.loads.bit_load, "at the bit", style.BIT, 1.5),
        ),
        height=0.95,
    )


def run_tracks(scene: Scene) -> list[Track]:
    """Tracks of the whole run, those without data left out."""
    log, rig, loads = scene.findings.log, scene.findings.rig, scene.findings.loads
    one = style.INK
    tracks = [
        depth_track(scene),
        Track("block", "length", (Curve(rig.block, "", one, 0.6),), height=0.5),
        Track(
            "hookload",
            "force",
            (
                Curve(rig.hookload, "measured", one, 0.8),
                Curve(loads.model_hookload, "model", style.MODEL, 1.1, "--"),
            ),
            height=0.95,
        ),
        weight_track(scene),
        Track("torque", "moment", (Curve(log.get("torque"), "", one),)),
        Track("rotation", "rotation", (Curve(log.get("rpm"), "", one),), height=0.45),
        Track("pressure", "pressure", (Curve(log.get("standpipe_pressure"), "", one),), height=0.5),
        Track("flow in", "flow", (Curve(log.get("flow_in"), "", one),), height=0.45),
    ]
    return [track for track in tracks if track.present]


def missing_tracks(scene: Scene) -> tuple[str, ...]:
    """Names of the strip's channels that the log does not have."""
    log = scene.findings.log
    wanted = {
        "block_position": "block position", "wob": "weight on bit as logged", "torque": "torque",
        "rpm": "rotation", "standpipe_pressure": "standpipe pressure", "flow_in": "flow in",
    }  # fmt: skip
    return tuple(name for channel, name in wanted.items() if log.get(channel) is None)


@style.styled
def run_strip(scene: Scene) -> Figure:
    """Draw the whole run: episode band, tracks, activity band, all on one time axis."""
    found = scene.findings
    tracks = run_tracks(scene)
    n_lanes = max(len(lanes.activity_lanes(found.rig.activity)), 1)
    names = {lanes.lane_of(e) for e in found.episodes}
    heights = [0.13 * max(len(names), 1) + 0.06, *(t.height for t in tracks), 0.13 * n_lanes + 0.08]
    figure = style.sheet(10.6, style.stack_height(heights, _EDGES))
    axes = style.stack(figure, heights, _EDGES)
    start, end = _span(found.log.time)
    lanes.draw_episodes(axes[0], found.episodes, start, end - start)
    if not found.episodes:
        axes[0].set_yticks([])
        style.empty_note(axes[0], "no episode")
    draw_tracks(axes[1:-1], tracks, (found.log.time, found.log.interval, start), scene.show)
    lanes.draw_activity(axes[-1], found.log.time, found.rig.activity, found.log.interval)
    spans = [(e.start - start, max(e.duration, (end - start) / 700)) for e in scene.mains]
    lanes.mark_rows(axes[1:-1], lanes.merge(sorted(spans), 0.0))
    marks = [(_row_time(found.log.time, e.peak) - start, e.id) for e in scene.mains]
    lanes.number_marks(axes[0], marks, end - start)
    time_axis(axes, start, end, scene.show)
    return figure


def window_of(scene: Scene, episode: Episode) -> slice:
    """Rows around an episode that its strip shows: its length again on both sides, 5 to 60 min at most."""
    time = scene.findings.log.time
    margin = float(np.clip(episode.duration, 300.0, 3600.0))
    first, last = np.searchsorted(time, [episode.start - margin, episode.end + margin])
    return slice(int(first), int(max(last, first + 1)))


@style.styled
def moment_strip(scene: Scene, episode: Episode) -> Figure:
    """Draw the strip around one episode, its span shaded and its peak marked."""
    found = scene.findings
    rows = window_of(scene, episode)
    time = found.log.time[rows]
    tracks = [_cut(track, rows) for track in _moment_tracks(scene)]
    tracks = [track for track in tracks if track.present]
    n_lanes = max(len(lanes.activity_lanes(found.rig.activity[rows])), 1)
    heights = [*(t.height for t in tracks), 0.13 * n_lanes + 0.08]
    edges = (_EDGES[0], _EDGES[1], 0.3, _EDGES[3])
    size = (10.6, style.stack_height(heights, edges))
    figure, axes = lay_out(size, style.boxes(size, heights, edges))
    start, end = _span(time)
    draw_tracks(axes[:-1], tracks, (time, found.log.interval, start), scene.show)
    lanes.draw_activity(axes[-1], time, found.rig.activity[rows], found.log.interval)
    lanes.mark_rows(axes, [(episode.start - start, max(episode.duration, 1.0))])
    peak = _row_time(found.log.time, episode.peak) - start
    for ax in axes[:-1]:
        ax.axvline(peak, color=style.HELICAL, linewidth=0.8, linestyle=(0, (4, 2)))
    lanes.number_marks(axes[0], [(peak, f"{episode.id} peak")], end - start)
    time_axis(axes, start, end, scene.show)
    return figure


def _moment_tracks(scene: Scene) -> list[Track]:
    """Tracks of an episode's strip: fewer of the rig's, more of the reconstruction's."""
    found = scene.findings
    log, loads = found.log, found.loads
    run = {track.name: track for track in run_tracks(scene)}
    names = ("block", "hookload", "weight on bit", "torque", "rotation")
    tracks = [run[name] for name in names if name in run]
    pressure = log.get("differential_pressure")
    name = "diff. pressure" if pressure is not None else "pressure"
    pressure = pressure if pressure is not None else log.get("standpipe_pressure")
    tracks.append(Track(name, "pressure", (Curve(pressure, "", style.INK),), height=0.5))
    tracks.append(
        Track("load ratio", "dimensionless", (Curve(loads.peak_ratio, "", style.HELICAL, 1.2),), height=0.7)
    )
    reach = (
        Curve(found.rig.hole_depth, "hole", style.LOGGED, 1.4),
        Curve(loads.reach, "felt to", style.REACH, 2.6),
        Curve(log.get("bit_depth"), "bit", style.INK),
    )
    tracks.append(Track("depth", "length", reach, height=0.8, depth=True))
    return tracks


def _cut(track: Track, rows: slice) -> Track:
    curves = tuple(replace(c, values=c.values[rows] if c.values is not None else None) for c in track.curves)
    return Track(track.name, track.quantity, curves, track.height, track.depth)


def draw_tracks(
    axes: Sequence[Axes], tracks: Sequence[Track], base: tuple[Floats, float, float], show: Show
) -> None:
    """Draw tracks on their axes; `base` holds the stamps, their interval and the start of the chart [s]."""
    for ax, track in zip(axes, tracks, strict=True):
        _draw_track(ax, track, base, show)


def _draw_track(ax: Axes, track: Track, base: tuple[Floats, float, float], show: Show) -> None:
    """One track: its thinned lines, their labels at the right edge, the name at the left."""
    time, interval, start = base
    points = POINTS if len(track.curves) < 3 else POINTS * 3 // 4
    drawn: list[tuple[Curve, Floats]] = []
    for curve in track.curves:
        if curve.values is None or not np.isfinite(curve.values).any():
            continue
        x, y = thin(time - start, show.scaled(curve.values, track.quantity), 5 * interval, points)
        ax.plot(x, y, color=curve.colour, linewidth=curve.width, linestyle=curve.dash)
        drawn.append((curve, y))
    _limits(ax, [y for c, y in drawn if c.scales] or [y for _, y in drawn], track.depth)
    style.side_name(ax, track.name, show.unit(track.quantity))
    ax.yaxis.set_major_locator(MaxNLocator(4 if track.height > 0.7 else 3, steps=[1, 2, 2.5, 5, 10]))
    ax.grid(visible=True, axis="y")
    ax.spines["bottom"].set_visible(False)
    if track.name == "load ratio":
        ax.set_ylim(0.0, max(ax.get_ylim()[1], 1.15))
        ax.axhline(1.0, color=style.INK, linewidth=0.8, linestyle=(0, (1, 1.5)))
        ax.text(
            1.008, 1.0, "sinusoidal\nthreshold", transform=ax.get_yaxis_transform(), va="center", fontsize=7
        )
    _label_lines(ax, drawn)


def _limits(ax: Axes, series: Sequence[Floats], down: bool) -> None:
    """Span of the values with a margin; a few stray samples do not set it."""
    values = np.concatenate([y[np.isfinite(y)] for y in series]) if series else np.zeros(1)
    low, high = np.quantile(values, [0.002, 0.998]) if len(values) > 500 else (values.min(), values.max())
    margin = 0.08 * (high - low) or abs(high) * 0.05
    low, high = (low - margin, high + margin) if margin else (-0.1, 1.0)
    ax.set_ylim((high, low) if down else (low, high))


def _label_lines(ax: Axes, drawn: Sequence[tuple[Curve, Floats]]) -> None:
    """Name each line at the right edge in its own colour, spread out in the order they are listed."""
    named = [curve for curve, _ in drawn if curve.label]
    places = np.linspace(0.84, 0.16, len(named)) if len(named) > 1 else [0.5]
    for curve, y in zip(named, places, strict=False):
        ax.plot(
            [1.008, 1.024], [y, y], transform=ax.transAxes, clip_on=False, color=curve.colour,
            linewidth=curve.width + 0.4, linestyle=curve.dash,
        )  # fmt: skip
        ax.text(1.03, y, curve.label, transform=ax.transAxes, va="center", fontsize=7.4)


def _span(time: Floats) -> tuple[float, float]:
    return (float(time[0]), float(time[-1])) if len(time) else (0.0, 1.0)


def _row_time(time: Floats, row: int) -> float:
    return float(time[min(max(row, 0), len(time) - 1)]) if len(time) else 0.0
