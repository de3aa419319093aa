"""Strips of every channel as it was read: what the log holds, before anything is made of it."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np
from matplotlib.figure import Figure

from forensics.channels import BY_NAME, CHANNELS
from forensics.logs.table import TimeLog
from forensics.report.figures import style
from forensics.report.figures.clock import time_axis
from forensics.report.figures.timeline import Curve, Track, draw_tracks
from forensics.report.words import Show, plain

#: Strips on one sheet: more can't be told apart.
PER_SHEET = 7

_EDGES = (1.65, 0.95, 0.2, 0.55)
_ASIDE_HEIGHT = 0.16


def sheets(log: TimeLog) -> tuple[tuple[str, ...], ...]:
    """Channels that hold values, in the vocabulary's order, cut into sheets."""
    there = [c.name for c in CHANNELS if c.name != "time" and log.get(c.name) is not None]
    count = -(-len(there) // PER_SHEET)
    return tuple(tuple(part) for part in np.array_split(there, count)) if there else ()


@style.styled
def strips(log: TimeLog, show: Show, channels: Sequence[str]) -> Figure:
    """Draw channels over the whole run, one strip each, rows set aside marked under the last.

    Parameters
    ----------
    log : TimeLog
    show : Show
    channels : sequence of str
        Channels with values; at most `PER_SHEET`.
    """
    tracks = [_track(log, name) for name in channels]
    heights = [*(track.height for track in tracks), _ASIDE_HEIGHT]
    figure = style.sheet(10.6, style.stack_height(heights, _EDGES))
    axes = style.stack(figure, heights, _EDGES)
    start, end = float(log.time[0]), float(log.time[-1])
    draw_tracks(axes[:-1], tracks, (log.time, log.interval, start), show)
    aside = axes[-1]
    aside.vlines(log.time[~log.used] - start, 0.0, 1.0, color=style.HELICAL, linewidth=0.6)
    aside.set_ylim(0.0, 1.0)
    aside.set_yticks([])
    style.side_name(aside, "set aside")
    time_axis(axes, start, end, show)
    return figure


def _track(log: TimeLog, name: str) -> Track:
    curve = Curve(log.values[name], "", style.INK, 0.7)
    height = 0.5 if BY_NAME[name].quantity in {"rotation", "flow", "dimensionless"} else 0.62
    return Track(plain(name), BY_NAME[name].quantity, (curve,), height, name in {"bit_depth", "hole_depth"})
