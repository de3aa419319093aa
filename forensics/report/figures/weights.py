"""Figures of weights: hookload against depth with model lines, residuals, surface weight and bit load."""

from __future__ import annotations

import numpy as np
from matplotlib.axes import Axes
from matplotlib.colors import LinearSegmentedColormap
from matplotlib.figure import Figure
from numpy.typing import NDArray

from forensics.report.figures import style
from forensics.report.figures.clock import time_axis
from forensics.report.figures.decimate import thin
from forensics.report.scene import Scene
from forensics.report.words import Show
from forensics.rig.view import Activity

Floats = NDArray[np.float64]

# Kind of reading: name, colour, marker.
KINDS = {
    "pick_up": ("pick-up", style.PICK_UP, "^"),
    "rotating": ("rotating", style.ROTATING, "o"),
    "slack_off": ("slack-off", style.SLACK_OFF, "v"),
}
_CLOUD = LinearSegmentedColormap.from_list("cloud", ["#e3ecf2", "#7fb0cc", "#2b7bb0", "#123a56"])


@style.styled
def fan_chart(scene: Scene) -> Figure:
    """Draw hookload against bit depth: model lines with their band, measured readings on top."""
    found, show = scene.findings, scene.show
    fan, readings = found.fan, found.calibration.readings
    figure = style.sheet(8.4, 5.4)
    (ax,) = style.stack(figure, [4.45], (0.95, 1.1, 0.35, 0.6))
    depth = show.scaled(fan.bit_depth, "length")
    lines = {
        "pick_up": (fan.pick_up, fan.pick_up_low, fan.pick_up_high, "-"),
        "rotating": (fan.rotating, None, None, (0, (5, 1.5))),
        "slack_off": (fan.slack_off, fan.slack_off_low, fan.slack_off_high, "-"),
    }
    for kind, (line, low, high, dash) in lines.items():
        colour = KINDS[kind][1]
        if low is not None and high is not None:
            ax.fill_betweenx(depth, _finite(low, show), _finite(high, show), color=colour, alpha=0.18, lw=0)
        ax.plot(_finite(line, show), depth, color=colour, linewidth=1.4, linestyle=dash)
    for kind, (_, colour, marker) in KINDS.items():
        same = [r for r in readings if r.kind == kind]
        groups = (
            ([r for r in same if not (r.by_hand or r.buckled)], marker, 1.0),
            ([r for r in same if r.buckled], marker, 0.35),
            ([r for r in same if r.by_hand], "s", 1.0),
        )
        for picked, mark, alpha in groups:
            ax.plot(
                show.scaled([r.value for r in picked], "force"),
                show.scaled([r.bit_depth for r in picked], "length"),
                linestyle="none", marker=mark, markersize=5, mfc="white", mec=colour, mew=1.2, alpha=alpha,
            )  # fmt: skip
    if len(depth):
        _end_names(ax, depth, {k: show.scaled(v[0], "force") for k, v in lines.items()})
    else:
        style.empty_note(ax, "no model line: the log gives no depth range")
    ax.invert_yaxis()
    ax.grid(visible=True)
    ax.set_xlabel(f"hookload with block weight [{show.unit('force')}]")
    ax.set_ylabel(f"bit depth [{show.unit('length')}]")
    return figure


def _finite(force: Floats, show: Show) -> Floats:
    """Scale forces, NaN where the model has none: past lockup a slack-off line has no end."""
    return np.where(np.isfinite(force), show.scaled(force, "force"), np.nan)


def _end_names(ax: Axes, depth: Floats, lines: dict[str, Floats]) -> None:
    """Name the model lines just below their deep ends."""
    row = int(np.nanargmax(depth))
    ends = sorted((float(values[row]), kind) for kind, values in lines.items() if np.isfinite(values[row]))
    sides = {0: ("right", -4), len(ends) - 1: ("left", 4)}
    for place, (x, kind) in enumerate(ends):
        side, shift = sides.get(place, ("center", 0))
        name, colour, _ = KINDS[kind]
        ax.annotate(
            name, (x, depth[row]), xytext=(shift, -7), textcoords="offset points", ha=side, va="top",
            fontsize=8, fontweight="bold", color=colour,
        )  # fmt: skip
    low, high = float(np.nanmin(depth)), float(np.nanmax(depth))
    ax.set_ylim(low - 0.03 * (high - low), high + 0.09 * (high - low) + 1.0)


@style.styled
def residual_chart(scene: Scene) -> Figure:
    """Draw what the model leaves over: by reading over depth, and by sample over time."""
    found, show = scene.findings, scene.show
    figure = style.sheet(10.6, 4.6)
    width, height = figure.get_size_inches()
    left = figure.add_axes((0.95 / width, 0.65 / height, 2.7 / width, 3.55 / height))
    _reading_residuals(left, scene)
    boxes = ((2.55, 1.65), (0.65, 1.65))
    axes = [figure.add_axes((4.65 / width, y / height, 5.6 / width, tall / height)) for y, tall in boxes]
    time = found.log.time
    start, end = (float(time[0]), float(time[-1])) if len(time) else (0.0, 1.0)
    pairs = (
        (found.loads.drag_residual, "force", "hookload residual"),
        (found.loads.torque_residual, "moment", "torque residual"),
    )
    for ax, (values, quantity, name) in zip(axes, pairs, strict=True):
        ax.axhline(0.0, color=style.MUTED, linewidth=0.8)
        ax.set_ylabel(f"{name} [{show.unit(quantity)}]")
        ax.grid(visible=True)
        if not np.isfinite(values).any():
            ax.set_yticks([])
            style.empty_note(ax, "no model line applies, or the log lacks the channel")
            continue
        x, y = thin(time - start, show.scaled(values, quantity), 5 * found.log.interval, 1600)
        ax.plot(x, y, color=style.SURFACE, linewidth=0.8)
        limit = float(np.nanquantile(np.abs(y), 0.995)) or 1.0
        ax.set_ylim(-1.15 * limit, 1.15 * limit)
    axes[0].set_title("by sample: measured less modelled")
    time_axis(axes, start, end, show)
    return figure


def _reading_residuals(ax: Axes, scene: Scene) -> None:
    """Residual of each steady hookload reading against bit depth."""
    cal, show = scene.findings.calibration, scene.show
    for kind, (name, colour, marker) in KINDS.items():
        picked = [k for k, r in enumerate(cal.readings) if r.kind == kind and not (r.buckled or r.by_hand)]
        if picked:
            ax.plot(
                show.scaled(cal.residuals[picked], "force"),
                show.scaled([cal.readings[k].bit_depth for k in picked], "length"),
                linestyle="none", marker=marker, markersize=5, mfc="white", mec=colour, mew=1.2, label=name,
            )  # fmt: skip
    ax.axvline(0.0, color=style.MUTED, linewidth=0.8)
    ax.set_title("by reading")
    ax.set_xlabel(f"hookload residual [{show.unit('force')}]")
    ax.set_ylabel(f"bit depth [{show.unit('length')}]")
    ax.grid(visible=True)
    if ax.get_legend_handles_labels()[0]:
        ax.legend(loc="upper center", bbox_to_anchor=(0.5, -0.16), ncols=3, frameon=False, fontsize=7.2,
                  handletextpad=0.1, columnspacing=0.9)  # fmt: skip
        ax.invert_yaxis()
    else:
        style.empty_note(ax, "no steady reading")


@style.styled
def transfer_chart(scene: Scene) -> Figure:
    """Draw reconstructed bit load against surface weight, rotating and sliding side by side."""
    found, show = scene.findings, scene.show
    figure = style.sheet(10.0, 4.4)
    width, height = figure.get_size_inches()
    axes = [figure.add_axes((x / width, 0.62 / height, 4.0 / width, 3.35 / height)) for x in (0.95, 5.6)]
    surface = show.scaled(found.rig.wob_surface, "force")
    bit = show.scaled(found.loads.bit_load, "force")
    kinds = ((Activity.DRILL_ROTATE, "drilling, rotating"), (Activity.DRILL_SLIDE, "drilling, sliding"))
    good = np.isfinite(surface) & np.isfinite(bit)
    drilling = good & np.isin(found.rig.activity, [int(k) for k, _ in kinds])
    top = float(np.quantile(np.maximum(surface, bit)[drilling], 0.999)) if drilling.any() else 1.0
    top = max(1.06 * top, 1.0)
    for ax, (kind, title) in zip(axes, kinds, strict=True):
        picked = good & (found.rig.activity == int(kind))
        _cloud(ax, surface[picked], bit[picked], top)
        minutes = picked.sum() * found.log.interval / 60.0
        ax.set_title(f"{title}, {minutes:.0f} min")
        ax.set_xlabel(f"re-zeroed surface weight [{show.unit('force')}]")
    axes[0].set_ylabel(f"reconstructed bit load [{show.unit('force')}]")
    return figure


def _cloud(ax: Axes, x: Floats, y: Floats, top: float) -> None:
    """Density of points, the line of equal weights, and the median of y along x."""
    ax.plot([0, top], [0, top], color=style.INK, linewidth=0.9)
    ax.text(
        0.66 * top,
        0.68 * top,
        "all of it reaches the bit",
        fontsize=7.2,
        rotation=45,
        ha="center",
        va="bottom",
        rotation_mode="anchor",
        transform_rotates_text=True,
    )
    ax.set_xlim(-0.05 * top, top)
    ax.set_ylim(-0.05 * top, top)
    ax.grid(visible=True)
    if not len(x):
        style.empty_note(ax, "none in this run")
        return
    edges = np.linspace(-0.05 * top, top, 71)
    counts, _, _ = np.histogram2d(x, y, bins=[edges, edges])
    shown = np.ma.masked_equal(counts.T, 0)
    ax.pcolorfast(edges, edges, np.ma.log10(shown), cmap=_CLOUD, zorder=0.5)
    cells = np.digitize(x, np.linspace(0.0, top, 21))
    medians = [
        (np.median(x[cells == k]), np.median(y[cells == k])) for k in range(1, 21) if (cells == k).sum() >= 20
    ]
    if len(medians) > 1:
        ax.plot(*np.array(medians).T, color=style.MODEL, linewidth=2.0)
        ax.annotate(
            "median", medians[-1], xytext=(4, -4), textcoords="offset points", color="#8a5704", fontsize=7.4
        )
