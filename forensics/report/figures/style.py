"""Paper, ink and layout shared by all figures."""

from __future__ import annotations

import functools
from collections.abc import Callable, Sequence
from contextlib import AbstractContextManager
from typing import Any, ParamSpec

import matplotlib as mpl
from matplotlib.axes import Axes
from matplotlib.backends.backend_agg import FigureCanvasAgg
from matplotlib.colors import BoundaryNorm, Colormap, ListedColormap
from matplotlib.figure import Figure

MAX_WIDTH = 11.0
MAX_HEIGHT = 11.0
DPI = 130

INK = "#1b2733"
MUTED = "#66717b"
FAINT = "#c3c9ce"
GRID = "#e7e9eb"
SPAN = "#f3e9cf"

# Told apart by lightness as well as hue, and by width or dash where they share an axis.
LOGGED = "#9aa1a7"
SURFACE = "#2b7bb0"
BIT = "#0b4f4a"
MODEL = "#c77f0a"
REACH = "#8cc0e0"
SINUSOIDAL = "#e9b949"
HELICAL = "#7a1f3d"
PICK_UP = "#2b7bb0"
SLACK_OFF = "#c77f0a"
ROTATING = INK

# Load ratio classes: each step darker than the last; colour begins at the threshold itself.
# The helical onset, as a multiple of the local sinusoidal load, follows the criterion of the case.
ONSETS = {"chen": 1.41, "wu": 1.83, "mitchell": 2.83}
_RATIO_COLOURS = ("#ffffff", "#f4f6f7", "#e6eaec", "#d3dade", "#e8a824", "#c25a1f", "#862044")
RATIO_OVER = "#3d0f2b"

_STYLE = {
    "font.family": ["DejaVu Sans"],
    "font.size": 8.0,
    # Names from the case may hold a dollar sign; nothing here is set as mathematics.
    "text.parse_math": False,
    "axes.labelsize": 8.0,
    "axes.titlesize": 8.5,
    "axes.titlelocation": "left",
    # Fixed: nothing stands above an axis, and to look for it costs as much as to draw.
    "axes.titley": 1.0,
    "axes.edgecolor": FAINT,
    "axes.labelcolor": INK,
    "axes.linewidth": 0.7,
    "axes.spines.top": False,
    "axes.spines.right": False,
    "axes.axisbelow": True,
    "axes.formatter.useoffset": False,
    "axes.unicode_minus": True,
    "text.color": INK,
    "xtick.color": MUTED,
    "ytick.color": MUTED,
    "xtick.labelsize": 7.5,
    "ytick.labelsize": 7.5,
    "xtick.major.size": 3.0,
    "ytick.major.size": 3.0,
    "grid.color": GRID,
    "grid.linewidth": 0.6,
    "lines.linewidth": 0.9,
    "lines.solid_joinstyle": "bevel",
    "path.simplify": True,
    "path.simplify_threshold": 0.5,
    "agg.path.chunksize": 20000,
    "svg.hashsalt": "report",
    "figure.facecolor": "white",
    "savefig.facecolor": "white",
}
_BACKEND_KEYS = {"backend", "backend_fallback", "interactive", "toolbar", "timezone", "webagg.port"}

# Between two axes one above the other [in].
_GAP = 0.09

P = ParamSpec("P")
Box = tuple[float, float, float, float]


def house_style() -> AbstractContextManager[None]:
    """Draw under matplotlib's defaults, whatever the user's file says, with the house style on top."""
    settings: Any = {k: v for k, v in mpl.rcParamsDefault.items() if k not in _BACKEND_KEYS} | _STYLE
    return mpl.rc_context(settings)


def styled(draw: Callable[P, Figure]) -> Callable[P, Figure]:
    """Run a drawing function under the house settings."""

    @functools.wraps(draw)
    def wrapper(*args: P.args, **kwargs: P.kwargs) -> Figure:
        with house_style():
            return draw(*args, **kwargs)

    return wrapper


def sheet(width: float, height: float) -> Figure:
    """Make an empty figure on the Agg canvas, size in inches capped.

    Raises
    ------
    ValueError
        If the size is beyond the cap or not positive.
    """
    if not (0 < width <= MAX_WIDTH and 0 < height <= MAX_HEIGHT):
        raise ValueError(f"figure of {width} x {height} in; the cap is {MAX_WIDTH} x {MAX_HEIGHT} in")
    figure = Figure(figsize=(width, height), dpi=DPI)
    FigureCanvasAgg(figure)
    return figure


def boxes(
    size: tuple[float, float], heights: Sequence[float], edges: tuple[float, float, float, float]
) -> tuple[Box, ...]:
    """Places of axes one above the other, first on top, as parts of the figure.

    Parameters
    ----------
    size : tuple of float
        Width and height of the figure [in].
    heights : sequence of float
        Height of each [in]; the gap between two is fixed.
    edges : tuple of float
        Left, right, top, bottom margins [in].

    Returns
    -------
    tuple of (left, bottom, width, height)
    """
    width, height = size
    left, right, top, _ = edges
    places, y = [], height - top
    for tall in heights:
        y -= tall
        places.append((left / width, y / height, (width - left - right) / width, tall / height))
        y -= _GAP
    return tuple(places)


def stack(figure: Figure, heights: Sequence[float], edges: tuple[float, float, float, float]) -> list[Axes]:
    """Put axes one above the other, first on top (see `boxes`)."""
    return [figure.add_axes(box) for box in boxes(tuple(figure.get_size_inches()), heights, edges)]


def stack_height(heights: Sequence[float], edges: tuple[float, float, float, float]) -> float:
    """Height of the figure that `stack` fills [in]."""
    return sum(heights) + _GAP * (len(heights) - 1) + edges[2] + edges[3]


def ratio_edges(criterion: str) -> tuple[float, ...]:
    """Edges of the load ratio classes for a helical criterion."""
    onset = ONSETS.get(criterion, ONSETS["chen"])
    return (0.0, 0.25, 0.5, 0.75, 1.0, onset, round(1.5 * onset, 1), round(2.0 * onset, 1))


def ratio_colours(criterion: str) -> tuple[Colormap, BoundaryNorm]:
    """Colour steps of the load ratio."""
    colours = ListedColormap(list(_RATIO_COLOURS)).with_extremes(over=RATIO_OVER, bad="#ffffff")
    return colours, BoundaryNorm(list(ratio_edges(criterion)), colours.N)


def side_name(axes: Axes, name: str, unit: str = "") -> None:
    """Name of a track and its unit, level, left of its axis."""
    text = f"{name}\n[{unit}]" if unit else name
    axes.text(
        -0.068, 0.5, text, transform=axes.transAxes, ha="right", va="center", fontsize=7.8, linespacing=1.3
    )


def empty_note(axes: Axes, text: str) -> None:
    """Say in the middle of an empty plot why it is empty."""
    axes.text(0.5, 0.5, text, transform=axes.transAxes, ha="center", va="center", color=MUTED)
