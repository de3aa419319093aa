"""Bands of lanes: what went on when, told apart by place rather than by colour alone."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np
from matplotlib.axes import Axes
from numpy.typing import NDArray

from forensics.episodes.catalogue import Episode, Kind, State, Word
from forensics.report.figures import style
from forensics.report.figures.decimate import runs
from forensics.rig.view import Activity

_CELLS = 1500

# Lanes of the activity band, top to bottom: name and the activities in it.
ACTIVITY_LANES: tuple[tuple[str, tuple[Activity, ...]], ...] = (
    ("drilling, rotating", (Activity.DRILL_ROTATE,)),
    ("drilling, sliding", (Activity.DRILL_SLIDE,)),
    ("reaming", (Activity.REAM_DOWN, Activity.REAM_UP)),
    ("rotating off bottom", (Activity.ROTATE_OFF_BOTTOM,)),
    ("running in", (Activity.TRIP_IN,)),
    ("pulling out", (Activity.TRIP_OUT,)),
    ("connection", (Activity.CONNECTION,)),
    ("still", (Activity.CIRCULATE, Activity.STATIC)),
    ("not known", (Activity.UNKNOWN,)),
)

EPISODE_LANES: tuple[tuple[str, str], ...] = (
    ("helical", style.HELICAL),
    ("sinusoidal", style.SINUSOIDAL),
    ("lockup", style.INK),
    ("drag", style.MUTED),
    ("torque", style.MUTED),
)


def lane_of(episode: Episode) -> str:
    """Lane an episode is drawn in."""
    if episode.kind is Kind.BUCKLING:
        return "helical" if episode.state is State.HELICAL else "sinusoidal"
    return str(episode.kind)


def activity_lanes(activity: NDArray[np.int8]) -> list[tuple[str, NDArray[np.bool_]]]:
    """Lanes that occur: name and where, shape (n,)."""
    lanes = [(name, np.isin(activity, [int(a) for a in members])) for name, members in ACTIVITY_LANES]
    return [(name, flags) for name, flags in lanes if flags.any()]


def draw_activity(axes: Axes, time: NDArray[np.float64], activity: NDArray[np.int8], interval: float) -> None:
    """Draw the activity band over time in seconds since the first row, one lane an activity.

    A row lasts until the next one, or for `interval` where a gap follows.
    """
    lanes = activity_lanes(activity)
    names = [name for name, _ in lanes]
    span = max(float(time[-1] - time[0]), 1.0) if len(time) else 1.0
    for lane, (_, flags) in enumerate(lanes):
        bars = merge(bars_of(flags, time, interval), span / _CELLS)
        axes.broken_barh(
            bars, (lane - 0.36, 0.72), facecolor=style.MUTED, edgecolor="none", antialiased=False
        )
    lane_axis(axes, names)


def bars_of(
    flags: NDArray[np.bool_], time: NDArray[np.float64], interval: float
) -> list[tuple[float, float]]:
    """Start since the first row and length of each unbroken run of flagged rows."""
    gaps = np.flatnonzero(np.diff(time) > 5 * interval) + 1
    bars = []
    for first, after in runs(flags):
        cuts = gaps[(gaps > first) & (gaps < after)]
        for a, b in zip([first, *cuts], [*cuts, after], strict=True):
            lasts = time[b - 1] - time[a] + interval
            bars.append((float(time[a] - time[0]), float(lasts)))
    return bars


def draw_episodes(axes: Axes, episodes: Sequence[Episode], start: float, span: float) -> None:
    """Draw the episode band, one lane a kind; every episode at least a hair wide, rejected ones hollow."""
    names = [name for name, _ in EPISODE_LANES if any(lane_of(e) == name for e in episodes)]
    colours = dict(EPISODE_LANES)
    for lane, name in enumerate(names):
        for out, face in ((True, "white"), (False, colours[name])):
            bars = [
                (e.start - start, max(e.duration, span / 700))
                for e in episodes
                if lane_of(e) == name and (e.word is Word.REJECT) is out
            ]
            axes.broken_barh(
                sorted(bars), (lane - 0.36, 0.72), facecolor=face, edgecolor=style.INK, linewidth=0.3
            )
    lane_axis(axes, names)


def merge(bars: list[tuple[float, float]], width: float) -> list[tuple[float, float]]:
    """Join bars (start, length) closer than `width` and widen thinner ones, so few shapes are drawn."""
    joined: list[tuple[float, float]] = []
    for start, length in bars:
        end = start + max(length, width)
        if joined and start - (joined[-1][0] + joined[-1][1]) < width:
            joined[-1] = (joined[-1][0], max(end, sum(joined[-1])) - joined[-1][0])
        else:
            joined.append((start, end - start))
    return joined


def lane_axis(axes: Axes, names: Sequence[str]) -> None:
    """Name the lanes on the left, top one first."""
    axes.set_ylim(max(len(names), 1) - 0.5, -0.5)
    axes.set_yticks(range(len(names)), names)
    axes.tick_params(axis="y", length=0, labelsize=7.2, labelcolor=style.INK)
    axes.spines["left"].set_visible(False)


def mark_rows(axes: Sequence[Axes], spans: Sequence[tuple[float, float]]) -> None:
    """Shade the same spans (start, length) on several axes."""
    for ax in axes:
        if spans:
            low, high = 0.0, 1.0
            ax.broken_barh(
                list(spans), (low, high - low), transform=ax.get_xaxis_transform(),
                facecolor=style.SPAN, edgecolor="none", zorder=0.2,
            )  # fmt: skip


def number_marks(axes: Axes, marks: Sequence[tuple[float, str]], span: float) -> None:
    """Write episode names above an axis at their x, on three levels; those that collide are left out."""
    last = [-np.inf] * 3
    for x, text in sorted(marks):
        width = span * (0.008 * len(text) + 0.006)
        level = next((k for k in range(3) if x - last[k] > width), None)
        if level is None:
            continue
        last[level] = x
        axes.annotate(
            text, (x, 1.0), xycoords=("data", "axes fraction"), xytext=(0, 3 + 10 * level),
            textcoords="offset points", ha="center", va="bottom", fontsize=7.2, fontweight="bold",
        )  # fmt: skip
