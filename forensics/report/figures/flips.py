"""How far each input would have to be off: the range in which a finding holds, beside what is known."""

from __future__ import annotations

import numpy as np
from matplotlib.axes import Axes
from matplotlib.figure import Figure

from forensics.episodes.flips import Flip
from forensics.report.figures import style
from forensics.report.scene import Scene
from forensics.report.words import Show

ROW = 0.24  # in, of one episode
EDGES = (1.75, 0.35, 0.35, 0.55)  # in: left, right, top, bottom


@style.styled
def flip_chart(scene: Scene) -> Figure:
    """Draw for each input and episode the values at which the finding holds."""
    flips = scene.findings.flips
    sources = list(dict.fromkeys(flip.source for flip in flips))
    rows = [[flip for flip in flips if flip.source == source] for source in sources]
    tall = [0.62 + ROW * len(row) for row in rows]
    size = (8.4, EDGES[2] + sum(tall))
    figure = style.sheet(*size)
    top = size[1] - EDGES[2]
    for height, row in zip(tall, rows, strict=True):
        inner = ROW * len(row)
        place = EDGES[0], top - inner, size[0] - EDGES[0] - EDGES[1], inner
        axes = figure.add_axes([value / size[k % 2] for k, value in enumerate(place)])
        _rows(axes, row, scene.show)
        top -= height
    return figure


def _rows(axes: Axes, flips: list[Flip], show: Show) -> None:
    """Draw one input: what was searched pale, where the finding holds dark, what is known as a cross bar."""
    quantity = flips[0].quantity
    for lane, flip in enumerate(flips):
        searched, holds = (show.scaled(pair, quantity) for pair in (flip.searched, flip.holds))
        axes.barh(lane, np.diff(searched), 0.56, searched[0], color=style.GRID, linewidth=0)
        colour = style.HELICAL if flip.finding == "helix" else style.SINUSOIDAL
        colour = style.INK if flip.finding == "lockup" else colour
        axes.barh(lane, np.diff(holds), 0.56, holds[0], color=colour, alpha=0.55, linewidth=0)
    found = flips[0].found
    low, value, high = show.scaled([found.low, found.value, found.high], quantity)
    axes.axvspan(low, high, color=style.BIT, alpha=0.28, linewidth=0)
    axes.axvline(value, color=style.BIT, linewidth=1.2)
    axes.set_yticks(range(len(flips)), [f"{flip.episode} {flip.finding}" for flip in flips])
    axes.set_ylim(len(flips) - 0.5, -0.5)
    axes.set_xlim(*show.scaled(flips[0].searched, quantity))
    axes.tick_params(axis="y", length=0)
    unit = show.unit(quantity)
    axes.set_xlabel(f"{flips[0].source} [{unit}]" if unit else flips[0].source, fontsize=8)
