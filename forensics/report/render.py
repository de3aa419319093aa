"""Content to one offline HTML file: figures drawn, numbered and put inline."""

from __future__ import annotations

import base64
import io
import itertools
from collections.abc import Iterator
from dataclasses import dataclass
from functools import cache
from typing import TYPE_CHECKING, Any

import numpy as np
from jinja2 import Environment, PackageLoader, StrictUndefined
from matplotlib.backends.backend_agg import FigureCanvasAgg
from PIL import Image

from forensics.errors import legible
from forensics.report.describe import describe
from forensics.report.elements import Element, Part, Picture, Report, Section
from forensics.report.figures.spare import hand_back, spare_sheets
from forensics.report.figures.style import house_style

if TYPE_CHECKING:
    from matplotlib.figure import Figure

    from forensics.findings import Findings

_PIXELS_SHOWN = 0.8


@dataclass(frozen=True)
class Drawn:
    """A figure as it stands in the page: number, PNG as base64, size shown [px], its words."""

    number: int
    data: str
    width: int
    height: int
    caption: str
    alt: str
    anchor: str = ""
    form = "drawn"


def render(findings: Findings, units: str = "metric") -> str:
    """Render the event report of one run.

    Parameters
    ----------
    findings : Findings
        What the run's analysis found.
    units : str
        "metric" or "field".

    Returns
    -------
    str
        One HTML document with all it needs inside; the same findings give the same bytes.
    """
    return render_report(describe(findings, units))


def render_report(report: Report) -> str:
    """Render content elements to HTML, figures numbered in order."""
    counter = itertools.count(1)
    with house_style(), spare_sheets():
        sections = [_draw_section(section, counter) for section in report.sections]
    return environment().get_template("report.html.j2").render(report=report, sections=sections)


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


def _draw_section(section: Section, counter: Iterator[int]) -> dict[str, object]:
    return {
        "id": section.id,
        "title": section.title,
        "elements": _drawn(section.elements, counter),
        "parts": [_draw_part(part, counter) for part in section.parts],
    }


def _draw_part(part: Part, counter: Iterator[int]) -> dict[str, object]:
    return {"id": part.id, "title": part.title, "elements": _drawn(part.elements, counter)}


def _drawn(elements: tuple[Element, ...], counter: Iterator[int]) -> list[Element | Drawn]:
    return [_draw(e, next(counter)) if isinstance(e, Picture) else e for e in elements]


def _draw(picture: Picture, number: int) -> Drawn:
    """Draw one figure and let go of it before the next."""
    figure = picture.draw()
    data = base64.b64encode(png(figure)).decode("ascii")
    width, height = (round(side * figure.dpi * _PIXELS_SHOWN) for side in figure.get_size_inches())
    hand_back(figure)
    return Drawn(number, data, width, height, picture.caption, picture.alt, picture.anchor)


def _legible(value: object) -> object:
    """Let no letter through that steers the page; what the templates themselves made stays as it is."""
    return legible(value) if type(value) is str else value


@cache
def environment() -> Environment:
    """Set up the templates: everything escaped, nothing undefined."""
    return Environment(
        loader=PackageLoader("forensics.report", "templates"),
        autoescape=True,
        undefined=StrictUndefined,
        finalize=_legible,
        trim_blocks=True,
        lstrip_blocks=True,
    )
