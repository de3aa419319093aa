"""Pictures to drawn figures: numbered, and drawn once for every form the report takes."""

from __future__ import annotations

import io
import itertools
from collections.abc import Iterator
from dataclasses import dataclass, replace
from typing import TYPE_CHECKING, Any

import numpy as np
from matplotlib.backends.backend_agg import FigureCanvasAgg
from PIL import Image

from forensics.report.elements import Element, Picture, Report, Section
from forensics.report.figures.spare import hand_back, spare_sheets
from forensics.report.figures.style import house_style

if TYPE_CHECKING:
    from matplotlib.figure import Figure

# A figure of more lines than this [bytes] reads no better for them; as pixels it opens faster.
VECTOR_CAP = 150_000


@dataclass(frozen=True)
class Drawn:
    """A figure as drawn: number, PNG, PDF page (None where too large), size [in], resolution, words."""

    number: int
    png: bytes
    vector: bytes | None
    size: tuple[float, float]
    dpi: float
    caption: str
    alt: str
    anchor: str
    form = "drawn"


def draw_figures(report: Report, vector: bool = False) -> Report:
    """Draw every picture of a report, numbered in order.

    Parameters
    ----------
    report : Report
    vector : bool
        Draw each figure as lines too, for the printed form.

    Returns
    -------
    Report
        The same report with a `Drawn` in the place of each `Picture`; one drawn before stays as it is.
    """
    counter = itertools.count(1)
    with house_style(), spare_sheets():
        return replace(report, sections=tuple(_section(s, counter, vector) for s in report.sections))


def png(figure: Figure) -> bytes:
    """Draw a figure to PNG bytes that hold nothing but the picture.

    Notes
    -----
    Charts have few hues, so a palette of 256 loses nothing an eye can see and makes the file a third as big
    and faster to write. Pillow comes with matplotlib.
    """
    canvas: Any = figure.canvas if isinstance(figure.canvas, FigureCanvasAgg) else FigureCanvasAgg(figure)
    canvas.draw()
    picture = Image.fromarray(np.asarray(canvas.buffer_rgba())).convert("RGB")
    small = picture.quantize(256, method=Image.Quantize.FASTOCTREE, dither=Image.Dither.NONE)
    # The octree rounds paper to 254; put pure white back.
    palette = [255 if level >= 253 else level for level in small.getpalette() or []]
    small.putpalette(palette)
    buffer = io.BytesIO()
    small.save(buffer, format="png", compress_level=6)
    return buffer.getvalue()


def pdf_page(figure: Figure) -> bytes:
    """Draw a figure to a PDF of one page; no date, so that the same figure is the same bytes."""
    buffer = io.BytesIO()
    figure.savefig(buffer, format="pdf", metadata={"CreationDate": None})
    return buffer.getvalue()


def _section(section: Section, counter: Iterator[int], vector: bool) -> Section:
    elements = _drawn(section.elements, counter, vector)
    parts = tuple(replace(part, elements=_drawn(part.elements, counter, vector)) for part in section.parts)
    return replace(section, elements=elements, parts=parts)


def _drawn(elements: tuple[Element, ...], counter: Iterator[int], vector: bool) -> tuple[Any, ...]:
    return tuple(_draw(e, next(counter), vector) if isinstance(e, Picture) else e for e in elements)


def _draw(picture: Picture, number: int, vector: bool) -> Drawn:
    """Draw one figure and let go of it before the next."""
    figure = picture.draw()
    pixels = png(figure)
    page = pdf_page(figure) if vector else None
    if page is not None and len(page) > VECTOR_CAP:
        page = None
    width, height = figure.get_size_inches()
    drawn = Drawn(
        number,
        pixels,
        page,
        (float(width), float(height)),
        figure.dpi,
        picture.caption,
        picture.alt,
        picture.anchor or f"figure-{number}",
    )
    hand_back(figure)
    return drawn
