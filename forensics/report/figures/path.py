"""Where in the hole: the path in vertical section, inclination and curvature along it, episodes on both."""

from __future__ import annotations

import numpy as np
from matplotlib.axes import Axes
from matplotlib.figure import Figure
from numpy.typing import NDArray

from forensics.episodes.catalogue import Episode
from forensics.report.figures import style
from forensics.report.figures.lanes import EPISODE_LANES, lane_of
from forensics.report.scene import Scene

Floats = NDArray[np.float64]

_STATIONS = 600


@style.styled
def hole_path(scene: Scene) -> Figure:
    """Draw the hole from the side, and inclination with curvature along it, affected intervals marked."""
    figure = style.sheet(10.6, 4.5)
    width, height = figure.get_size_inches()
    boxes = ((0.95, 5.2, 0.62, 3.55), (7.25, 3.1, 2.45, 1.72), (7.25, 3.1, 0.62, 1.55))
    section, inclination, curvature = (
        figure.add_axes((x / width, y / height, w / width, h / height)) for x, w, y, h in boxes
    )
    md = _depths(scene)
    _draw_section(section, scene, md)
    _draw_along(inclination, curvature, scene, md)
    return figure


def _depths(scene: Scene) -> Floats:
    """Measured depths to draw, from surface to the deepest hole of the log, or of the survey."""
    hole = scene.findings.rig.hole_depth
    deepest = (
        float(np.nanmax(hole)) if np.isfinite(hole).any() else float(scene.findings.well.trajectory.md[-1])
    )
    return np.linspace(0.0, max(deepest, 1.0), _STATIONS)


def _places(scene: Scene, md: Floats) -> tuple[Floats, Floats]:
    """Distance out, summed along the path, and vertical depth, in the unit shown."""
    path = scene.findings.well.trajectory
    fine = _depths(scene)
    places = path.position(fine)
    out = np.concatenate([[0.0], np.cumsum(np.hypot(*np.diff(places[:, :2], axis=0).T))])
    shown = scene.show.scaled(np.interp(md, fine, out), "length")
    return shown, scene.show.scaled(np.interp(md, fine, places[:, 2]), "length")


def _draw_section(ax: Axes, scene: Scene, md: Floats) -> None:
    """Draw the path from the side: cased part bold, open part thin, affected intervals beside it."""
    show, hole = scene.show, scene.findings.well.hole
    shoe = hole.shoe
    out, down = _places(scene, md)
    cased = md <= shoe
    ax.plot(out[cased], down[cased], color=style.FAINT, linewidth=6.0, solid_capstyle="butt")
    ax.plot(out, down, color=style.INK, linewidth=1.0)
    if 0.0 < shoe < md[-1]:
        x, y = _places(scene, np.array([shoe]))
        ax.annotate(
            f"shoe {show.value(shoe, 'length', 0)}",
            (x[0], y[0]),
            xytext=(-4, -18),
            textcoords="offset points",
            ha="right",
            color=style.MUTED,
        )
    for rank, episode in enumerate(scene.mains):
        _mark_interval(ax, scene, episode, rank)
    ax.margins(0.08, 0.12)
    ax.set_aspect("equal", adjustable="datalim")
    ax.invert_yaxis()
    ax.grid(visible=True)
    ax.set_xlabel(f"distance out along the path [{show.unit('length')}]")
    ax.set_ylabel(f"vertical depth [{show.unit('length')}]")
    ax.set_title("from the side, true to scale")


def _mark_interval(ax: Axes, scene: Scene, episode: Episode, rank: int) -> None:
    """Draw a bar along the path over an episode's interval, set off from it, with its name."""
    if not (np.isfinite(episode.top_md) and np.isfinite(episode.bottom_md)):
        return
    md = np.linspace(episode.top_md, episode.bottom_md, 30)
    out, down = _places(scene, md)
    offset = 7.0 + 6.5 * rank
    dx, dy = np.gradient(out), np.gradient(down)
    size = np.maximum(np.hypot(dx, dy), 1e-12)
    # Shift to the upper side of the path by points, so that bars stay apart at any scale.
    scale = _units_per_point(ax, scene)
    x, y = out + offset * scale * dy / size, down - offset * scale * dx / size
    ax.plot(x, y, color=dict(EPISODE_LANES)[lane_of(episode)], linewidth=3.2, solid_capstyle="butt")
    # The name goes on where the bar ends, in its direction, so that names of neighbours stay apart.
    slope = np.degrees(np.arctan2(-(y[-1] - y[-2]), x[-1] - x[-2]))
    ax.annotate(
        episode.id, (x[-1], y[-1]), xytext=(4 * np.cos(np.radians(slope)), 4 * np.sin(np.radians(slope))),
        textcoords="offset points", ha="left", va="center", rotation=slope, rotation_mode="anchor",
        fontsize=6.4,
    )  # fmt: skip


def _units_per_point(ax: Axes, scene: Scene) -> float:
    """Length in the unit shown that one point of paper stands for, from the extent of the whole path."""
    out, down = _places(scene, _depths(scene))
    box = ax.get_window_extent()
    points = 72.0 / ax.figure.dpi
    across = max(float(np.ptp(out)), 1.0) / (box.width * points)
    return max(across, max(float(np.ptp(down)), 1.0) / (box.height * points))


def _draw_along(top: Axes, bottom: Axes, scene: Scene, md: Floats) -> None:
    """Inclination above, curvature below, over measured depth, with affected intervals shaded."""
    show = scene.show
    directions = scene.findings.well.trajectory.at(md)
    x = show.scaled(md, "length")
    bend = np.linalg.norm(directions.curvature, axis=1)
    top.plot(x, show.scaled(directions.inclination, "angle"), color=style.INK, linewidth=1.2)
    bottom.fill_between(x, 0.0, show.scaled(bend, "angle_per_length"), color=style.LOGGED, linewidth=0)
    top.set_ylabel(f"inclination [{show.unit('angle')}]")
    bottom.set_ylabel(f"curvature [{show.unit('angle_per_length')}]")
    bottom.set_xlabel(f"measured depth [{show.unit('length')}]")
    top.set_title("along the hole, affected intervals shaded")
    top.tick_params(axis="x", labelbottom=False)
    for ax in (top, bottom):
        ax.set_xlim(0.0, float(x[-1]))
        ax.set_ylim(bottom=0.0)
        ax.grid(visible=True)
        for episode in scene.mains:
            if np.isfinite(episode.top_md) and np.isfinite(episode.bottom_md):
                ax.axvspan(
                    *show.scaled([episode.top_md, episode.bottom_md], "length"), color=style.SPAN, zorder=0
                )
