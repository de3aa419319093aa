"""Content to one offline HTML file: figures drawn, numbered and put inline."""

from __future__ import annotations

import base64
from functools import cache
from typing import TYPE_CHECKING

from jinja2 import Environment, PackageLoader, StrictUndefined

from forensics.errors import legible
from forensics.report.describe import describe
from forensics.report.drawing import Drawn, draw_figures
from forensics.report.elements import Report

if TYPE_CHECKING:
    from forensics.findings import Findings

_PIXELS_SHOWN = 0.8


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
    """Render content elements to HTML, figures numbered in order; those drawn before stay as they are."""
    return environment().get_template("report.html.j2").render(report=draw_figures(report))


def _inline(drawn: Drawn) -> str:
    """Give a figure's pixels as the address of an image."""
    return f"data:image/png;base64,{base64.b64encode(drawn.png).decode('ascii')}"


def _shown(drawn: Drawn) -> tuple[int, int]:
    """Width and height a figure is shown at [px]."""
    width, height = (round(side * drawn.dpi * _PIXELS_SHOWN) for side in drawn.size)
    return width, height


def _legible(value: object) -> object:
    """Let no letter through that steers the page; what the templates themselves made stays as it is."""
    return legible(value) if type(value) is str else value


@cache
def environment() -> Environment:
    """Set up the templates: everything escaped, nothing undefined."""
    made = Environment(
        loader=PackageLoader("forensics.report", "templates"),
        autoescape=True,
        undefined=StrictUndefined,
        finalize=_legible,
        trim_blocks=True,
        lstrip_blocks=True,
    )
    made.filters |= {"inline": _inline, "shown": _shown}
    return made
