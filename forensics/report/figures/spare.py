"""Sheets used over again: an axis and its ticks take far longer to make than to fill.

Only a figure that was handed back is used again, and only while a report is being drawn; whoever keeps the
figure that a drawing function gave has it to himself.
"""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from contextlib import contextmanager
from contextvars import ContextVar
from dataclasses import dataclass, field

from matplotlib.axes import Axes
from matplotlib.backends.backend_agg import FigureCanvasAgg
from matplotlib.figure import Figure

from forensics.report.figures.style import Box, sheet

Layout = tuple[float, float, tuple[Box, ...]]


@dataclass
class _Shelf:
    """Sheets to be had again, and those out for drawing."""

    spare: dict[Layout, Figure] = field(default_factory=dict)
    out: dict[Figure, Layout] = field(default_factory=dict)


_SHELF: ContextVar[_Shelf | None] = ContextVar("spare sheets", default=None)


@contextmanager
def spare_sheets() -> Iterator[None]:
    """Keep the sheets handed back inside for the next figure of the same layout."""
    token = _SHELF.set(_Shelf())
    try:
        yield
    finally:
        _SHELF.reset(token)


def lay_out(size: tuple[float, float], places: Sequence[Box]) -> tuple[Figure, list[Axes]]:
    """Give a figure with bare axes, new or handed back.

    Parameters
    ----------
    size : tuple of float
        Width and height [in].
    places : sequence of (left, bottom, width, height)
        Of the axes, as parts of the figure.

    Returns
    -------
    figure : Figure
    axes : list of Axes
        Whoever draws sets limits, ticks and labels anew; nothing else of an earlier drawing is left.
    """
    shelf = _SHELF.get() or _Shelf()
    layout = (*size, tuple(places))
    figure = shelf.spare.pop(layout, None)
    if figure is None:
        figure = sheet(*size)
        for place in places:
            figure.add_axes(place)
    shelf.out[figure] = layout
    return figure, list(figure.axes)


def hand_back(figure: Figure) -> None:
    """Give up a drawn figure: to the next one of its layout, if it was laid out here."""
    shelf = _SHELF.get()
    layout = shelf.out.pop(figure, None) if shelf else None
    if shelf is None or layout is None:
        # The figure is a knot of cycles that lives until the collector comes by; its pixels need not,
        # and go with the old canvas.
        FigureCanvasAgg(figure)
        return
    for ax in figure.axes:
        for artist in (*ax.lines, *ax.collections, *ax.patches, *ax.texts):
            artist.remove()
    shelf.spare[layout] = figure
