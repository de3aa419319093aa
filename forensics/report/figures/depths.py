"""Figures over depth: the load ratio map, the load profile of a moment, where in the hole."""

from __future__ import annotations

import numpy as np
from matplotlib.axes import Axes
from matplotlib.figure import Figure
from numpy.typing import NDArray

from forensics.episodes.catalogue import Episode
from forensics.loads import Profile
from forensics.report import derived
from forensics.report.figures import lanes, style
from forensics.report.figures.clock import time_axis
from forensics.report.figures.decimate import runs, thin
from forensics.report.figures.spare import lay_out
from forensics.report.scene import Scene

Floats = NDArray[np.float64]


@style.styled
def ratio_map(scene: Scene) -> Figure:
    """Draw the load ratio over time and depth, with the bit's path and the hole sections."""
    found, show = scene.findings, scene.show
    figure = style.sheet(10.6, 4.4)
    (ax,) = style.stack(figure, [3.35], (1.0, 1.55, 0.42, 0.55))
    time = found.log.time
    start, end = (float(time[0]), float(time[-1])) if len(time) else (0.0, 1.0)
    grid = found.loads.ratio_map
    criterion = found.case.criteria.helical_onset
    colours, norm = style.ratio_colours(criterion)
    if grid.values.size:
        x = grid.time_edges - start
        y = show.scaled(grid.md_edges, "length")
        mesh = ax.pcolorfast(x, y, np.ma.masked_invalid(grid.values.T), cmap=colours, norm=norm)
        mesh.set_rasterized(True)
    bit = found.log.get("bit_depth")
    if bit is not None:
        ax.plot(
            *thin(time - start, show.scaled(bit, "length"), 5 * found.log.interval), color=style.INK, lw=0.9
        )
    ax.set_ylim(_deepest(scene), 0.0)
    _hole_marks(ax, scene)
    ax.set_ylabel(f"measured depth [{show.unit('length')}]")
    lanes.number_marks(ax, [(float(time[e.peak]) - start, e.id) for e in scene.mains], end - start)
    for episode in scene.mains:
        ax.plot(
            float(time[episode.peak]) - start, show.scaled(episode.peak_md, "length"),
            marker="o", markersize=5, mfc="none", mec=style.INK, mew=1.1,
        )  # fmt: skip
    _ratio_key(figure, criterion)
    time_axis([ax], start, end, show)
    return figure


def _deepest(scene: Scene) -> float:
    """Depth that map and bit both fit above, in the unit shown."""
    edges, bit = scene.findings.loads.ratio_map.md_edges, scene.findings.log.get("bit_depth")
    ends = [float(np.nanmax(values)) for values in (edges, bit) if values is not None and len(values)]
    return float(scene.show.scaled(max([1.0, *ends]), "length"))


def _ratio_key(figure: Figure, criterion: str) -> None:
    """Colour key of the load ratio, with the thresholds named beside their step."""
    width, height = figure.get_size_inches()
    left, bottom, wide, tall = (9.25, 0.62, 0.17, 2.9)
    ax = figure.add_axes((left / width, bottom / height, wide / width, tall / height))
    colours, _ = style.ratio_colours(criterion)
    edges = style.ratio_edges(criterion)
    steps = len(edges)
    bars = ax.barh(
        np.arange(steps) + 0.5,
        1.0,
        height=1.0,
        color=[colours(k) for k in range(steps - 1)] + [style.RATIO_OVER],
    )
    for bar in bars:
        bar.set_edgecolor(style.FAINT)
        bar.set_linewidth(0.5)
    ax.set_xlim(0, 1)
    ax.set_ylim(0, steps)
    ax.set_xticks([])
    names = {1.0: "1  sinusoidal", edges[5]: f"{edges[5]:g}  helical,\nabout ({criterion})"}
    ax.yaxis.tick_right()
    ax.set_yticks(range(steps), [names.get(edge, f"{edge:g}") for edge in edges])
    ax.tick_params(axis="y", length=0, labelcolor=style.INK)
    for side in ax.spines.values():
        side.set_visible(False)
    ax.set_title("load ratio\n(compression over\nsinusoidal load)", fontsize=7.8)


def _hole_marks(ax: Axes, scene: Scene) -> None:
    """Draw a line at each change of hole section, named at the right edge."""
    hole = scene.findings.well.hole
    low, high = sorted(ax.get_ylim())
    for top, name in zip(np.asarray(hole.top)[1:], list(hole.name)[1:], strict=False):
        y = float(scene.show.scaled(top, "length"))
        if low < y < high:
            ax.axhline(y, color=style.MUTED, linewidth=0.8, linestyle=(0, (5, 2)))
            ax.text(
                0.995,
                y,
                f"below: {name}",
                transform=ax.get_yaxis_transform(),
                ha="right",
                va="bottom",
                fontsize=7.2,
                color=style.MUTED,
                bbox={"fc": "white", "ec": "none", "pad": 0.6, "alpha": 0.75},
            )


@style.styled
def load_profile(scene: Scene, profile: Profile, episode: Episode) -> Figure:
    """Draw load against thresholds along the hole: the whole string, the place in trouble, contact force."""
    width, height = 10.6, 5.0
    spans = ((0.95, 3.6), (5.3, 2.9), (8.75, 1.6))
    places = [(x / width, 0.62 / height, w / width, 3.85 / height) for x, w in spans]
    figure, axes = lay_out((width, height), places)
    show = scene.show
    unit = show.unit("length")
    full = (0.0, float(np.nanmax(profile.md)))
    near = _near(profile, episode)
    for ax, span in zip(axes, (full, near, near), strict=True):
        low, high = show.scaled(span, "length")
        ax.set_ylim(float(high), float(low))
        ax.grid(visible=True)
    _draw_load(axes[0], profile, scene, full)
    _draw_load(axes[1], profile, scene, near)
    axes[0].axhspan(*show.scaled(near, "length"), color=style.SPAN, zorder=0)
    _draw_contact(axes[2], profile, scene, near)
    axes[0].set_ylabel(f"measured depth [{unit}]")
    titles = ("whole string", "shaded span, enlarged", "wall force")
    for ax, title in zip(axes, titles, strict=True):
        ax.set_title(title)
    return figure


def _near(profile: Profile, episode: Episode) -> tuple[float, float]:
    """Depth span to enlarge: the place in trouble with a margin, at most a third of the string, inside it."""
    deepest = float(np.nanmax(profile.md))
    top, bottom = _trouble(profile, episode, deepest)
    margin = max(0.35 * (bottom - top), 100.0)
    top, bottom = max(top - margin, 0.0), min(bottom + margin, deepest)
    if bottom - top > deepest / 3.0 and np.isfinite(episode.peak_md):
        half = deepest / 6.0
        centre = float(np.clip(episode.peak_md, top + half, bottom - half))
        top, bottom = centre - half, centre + half
    return top, bottom


def _trouble(profile: Profile, episode: Episode, deepest: float) -> tuple[float, float]:
    """Top and bottom of the helical run nearest the peak, else of the episode's interval."""
    spans = [sorted((profile.md[a], profile.md[b - 1])) for a, b in runs(profile.state == 2)]
    if spans and np.isfinite(episode.peak_md):
        top, bottom = min(spans, key=lambda s: abs(float(np.clip(episode.peak_md, *s)) - episode.peak_md))
        return float(top), float(bottom)
    top, bottom = episode.top_md, episode.bottom_md
    if np.isfinite(top) and np.isfinite(bottom) and bottom > top:
        return top, bottom
    centre = episode.peak_md if np.isfinite(episode.peak_md) else deepest
    return centre - 150.0, centre + 150.0


def _draw_load(ax: Axes, profile: Profile, scene: Scene, span: tuple[float, float]) -> None:
    """Effective tension with the two thresholds on the compression side, buckled spans in the margin."""
    show = scene.show
    depth = show.scaled(profile.md, "length")
    load = show.scaled(profile.tension, "force")
    sinusoidal = -show.scaled(profile.sinusoidal, "force")
    helical = -show.scaled(profile.helical, "force")
    inside = (profile.md >= span[0]) & (profile.md <= span[1])
    other = -show.scaled(derived.other_threshold(scene.findings, profile), "force")
    ax.axvline(0.0, color=style.MUTED, linewidth=0.7)
    ax.fill_betweenx(depth, sinusoidal, other, color=style.SINUSOIDAL, alpha=0.3, linewidth=0, zorder=0.8)
    ax.plot(sinusoidal, depth, color=style.MODEL, linewidth=1.2, linestyle=(0, (4, 1.5)))
    ax.plot(helical, depth, color=style.HELICAL, linewidth=1.2, linestyle=(0, (1, 1.2)))
    ax.plot(load, depth, color=style.INK, linewidth=1.6)
    lows = [load[inside], 1.0 * helical[inside], sinusoidal[inside]]
    _load_limits(ax, load[inside], lows)
    _state_margin(ax, profile, depth)
    ax.set_xlabel(f"effective tension [{show.unit('force')}]\n\N{LEFTWARDS ARROW} compression is negative")
    _name_curves(ax, depth, {"load": load, "sinusoidal": sinusoidal, "helical": helical}, inside)


def _load_limits(ax: Axes, load: Floats, lows: list[Floats]) -> None:
    """Span that holds the whole load and as much of the thresholds as keeps the load readable."""
    finite = load[np.isfinite(load)]
    low, high = (float(finite.min()), float(finite.max())) if len(finite) else (-1.0, 1.0)
    stack = np.concatenate([x[np.isfinite(x)] for x in lows])
    if len(stack):
        low = max(min(low, float(np.quantile(stack, 0.1))), low - 1.2 * max(high - low, 1.0))
    high = max(high, 0.0)
    margin = 0.06 * max(high - low, 1.0)
    ax.set_xlim(low - 2 * margin, high + margin)


def _state_margin(ax: Axes, profile: Profile, depth: Floats) -> None:
    """Bars along the left edge where the string is sinusoidal or helical."""
    left, right = ax.get_xlim()
    wide = 0.022 * (right - left)
    for state, colour in ((1, style.SINUSOIDAL), (2, style.HELICAL)):
        for a, b in runs(profile.state == state):
            tall = max(depth[b - 1] - depth[a], depth[a] - depth[b - 1], 1e-9)
            ax.barh(
                min(depth[a], depth[b - 1]), wide, height=tall, left=left, align="edge", color=colour,
                edgecolor="none",
            )  # fmt: skip
    ax.set_xlim(left, right)


def _name_curves(ax: Axes, depth: Floats, curves: dict[str, Floats], inside: NDArray[np.bool_]) -> None:
    """Write each curve's name beside it, at heights far enough apart to read."""
    colours = {"load": style.INK, "sinusoidal": "#8a5704", "helical": style.HELICAL}
    left, right = ax.get_xlim()
    rows = np.flatnonzero(inside)
    for share, (name, values) in zip((0.18, 0.42, 0.6), curves.items(), strict=True):
        seen = rows[np.isfinite(values[rows]) & (values[rows] > left) & (values[rows] < right)]
        if not len(seen):
            continue
        order = seen[np.argsort(depth[seen])]
        row = order[int(share * (len(order) - 1))]
        side = _free_side(values[row], [other[row] for key, other in curves.items() if key != name])
        ax.annotate(
            name, (values[row], depth[row]), xytext=(6 * side, 0), textcoords="offset points", va="center",
            ha="right" if side < 0 else "left", fontsize=7.4, color=colours[name],
            bbox={"fc": "white", "ec": "none", "pad": 0.5, "alpha": 0.8},
        )  # fmt: skip


def _free_side(value: float, others: list[float]) -> int:
    """Side of a curve away from its nearest neighbour: 1 right, -1 left."""
    steps = [other - value for other in others if np.isfinite(other)]
    return -1 if steps and min(steps, key=abs) > 0 else 1


def _draw_contact(ax: Axes, profile: Profile, scene: Scene, span: tuple[float, float]) -> None:
    """Wall force per length."""
    show = scene.show
    inside = (profile.md >= span[0]) & (profile.md <= span[1])
    force = show.scaled(profile.contact, "contact")
    ax.plot(force, show.scaled(profile.md, "length"), color=style.SURFACE, linewidth=1.2)
    seen = force[inside & np.isfinite(force)]
    ax.set_xlim(0.0, 1.08 * float(seen.max()) if len(seen) and seen.max() > 0 else 1.0)
    ax.tick_params(axis="y", labelleft=False)
    ax.set_xlabel(f"force per length [{show.unit('contact')}]")
