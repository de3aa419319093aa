"""Time along the x axis: seconds since the first row, ticks at round local times."""

from __future__ import annotations

from datetime import timedelta

import numpy as np
from matplotlib.axes import Axes

from forensics.report.figures import style
from forensics.report.words import Show

_STEPS = (
    1, 2, 5, 10, 15, 30,
    60, 120, 300, 600, 900, 1800,
    3600, 7200, 10800, 21600, 43200,
    86400, 172800, 432000, 864000,
)  # fmt: skip


def tick_step(span: float, wanted: int = 10) -> int:
    """Smallest round step that gives at most `wanted` ticks over `span` seconds."""
    return next((step for step in _STEPS if span / step <= wanted), 30 * 86400)


def ticks(start: float, end: float, show: Show, wanted: int = 10) -> tuple[list[float], list[str]]:
    """Tick places and labels at round local times.

    Parameters
    ----------
    start, end : float
        Span to be ticked [s since 1970 UTC].
    show : Show
        Gives the zone.
    wanted : int
        Most ticks wanted.

    Returns
    -------
    tuple of list
        Places [s since 1970 UTC], labels; the first label and the first of a day carry the date.
    """
    step = tick_step(max(end - start, 1.0), wanted)
    offset = (show.moment(start).utcoffset() or timedelta(0)).total_seconds()
    first = np.ceil((start + offset) / step) * step - offset
    places = [float(place) for place in np.arange(first, end + 1e-6, step)]
    labels, day = [], None
    for place in places:
        moment = show.moment(place)
        clock = moment.strftime("%H:%M:%S" if step < 60 else "%H:%M")
        date = f"{moment.day} {moment.strftime('%b')}"
        labels.append(clock if date == day else f"{clock}\n{date}")
        day = date
    return places, labels


def time_axis(axes: list[Axes], start: float, end: float, show: Show) -> None:
    """Set the same span and ticks on stacked axes; labels only under the last."""
    places, labels = ticks(start, end, show)
    relative = [place - start for place in places]
    for ax in axes:
        ax.set_xlim(0.0, max(end - start, 1.0))
        # One collection of lines is much cheaper to draw than an axis of ticks whose labels stay hidden.
        ax.vlines(
            relative,
            0.0,
            1.0,
            transform=ax.get_xaxis_transform(),
            color=style.GRID,
            linewidth=0.6,
            zorder=0.4,
        )
        ax.xaxis.set_visible(ax is axes[-1])
    last = axes[-1]
    last.set_xticks(relative, labels)
    last.set_xlabel(f"time of day, {show.timezone}")
