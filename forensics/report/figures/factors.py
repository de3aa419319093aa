"""Friction factors of several runs beside what they give together for the next."""

from __future__ import annotations

import numpy as np
from matplotlib.axes import Axes
from matplotlib.figure import Figure

from forensics.friction.pool import Pool, Pooled, Seen
from forensics.report.figures import style

#: Lines on one sheet at most; more runs of a group are left to the table.
MOST_LINES = 60

_EDGES = (3.0, 2.4, 0.3, 0.55)
_LINE = 0.19


@style.styled
def factors(pool: Pool) -> Figure:
    """Draw runs by group, each as read and as drawn to its group, and under them the range of the next run.

    Parameters
    ----------
    pool : Pool
        Of one kind of hole.
    """
    lines = _lines(pool)
    height = min(_LINE * len(lines) + 0.1, style.MAX_HEIGHT - _EDGES[2] - _EDGES[3])
    figure = style.sheet(10.0, height + _EDGES[2] + _EDGES[3])
    (ax,) = style.stack(figure, [height], _EDGES)
    for place, line in enumerate(lines):
        if isinstance(line, Seen):
            _draw_run(ax, place, line)
        else:
            _draw_next(ax, place, line)
    ax.set_ylim(len(lines) - 0.4, -0.6)
    ax.set_yticks(range(len(lines)), [_name(line) for line in lines])
    ax.tick_params(axis="y", length=0)
    ax.set_xlabel("friction factor [-]")
    ax.set_xlim(left=0.0)
    ax.grid(visible=True, axis="x")
    return figure


def _lines(pool: Pool) -> list[Seen | Pooled]:
    lines: list[Seen | Pooled] = []
    for group in pool.groups:
        lines += [run for run in pool.runs if run.group == group.group]
        lines.append(group)
    if len(pool.groups) > 1:
        lines.append(pool.other)
    if len(lines) > MOST_LINES:
        lines = [line for line in lines if isinstance(line, Pooled)][:MOST_LINES]
    return lines


def _name(line: Seen | Pooled) -> str:
    if isinstance(line, Seen):
        return _short(line.name)
    return _short(f"next: {line.group}" if line.group else "next: any other section or mud")


def _short(text: str) -> str:
    return text if len(text) <= 44 else f"{text[:43]}…"


def _draw_run(ax: Axes, place: int, run: Seen) -> None:
    ax.plot([run.low, run.high], [place, place], color=style.SURFACE, linewidth=1.4)
    ax.plot([run.value], [place], marker="o", color=style.SURFACE, markersize=4)


def _draw_next(ax: Axes, place: int, group: Pooled) -> None:
    ax.barh(place, group.p90 - group.p10, left=group.p10, height=0.62, color=style.SPAN)
    ax.plot([group.p50, group.p50], [place - 0.31, place + 0.31], color=style.HELICAL, linewidth=1.8)
    ends = np.array([group.p10, group.p50, group.p90])
    words = "  ".join(f"{name} {value:.2f}" for name, value in zip(("P10", "P50", "P90"), ends, strict=True))
    ax.text(1.01, place, words, transform=ax.get_yaxis_transform(), va="center", fontsize=7.4)
