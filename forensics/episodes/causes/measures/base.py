"""What a measurement is, and what it is taken on."""

from __future__ import annotations

import bisect
from collections.abc import Callable
from dataclasses import dataclass
from functools import cached_property

import numpy as np
from numpy.typing import NDArray

from forensics.episodes.catalogue import Episode
from forensics.episodes.causes.names import Cause
from forensics.episodes.causes.usual import Usual
from forensics.episodes.material import Material
from forensics.units import display_unit, show

Floats = NDArray[np.float64]
Bools = NDArray[np.bool_]

NAN = float("nan")

#: How far around an episode its readings still belong to it [s].
NEAR = 900.0

#: A run's usual pressure is taken over this much time on both sides [s].
AROUND = 6.0 * 3600.0

#: Passes of the same depth lie within this [m].
SAME_DEPTH = 15.0

#: Fewer readings than this make no measurement.
FEWEST = 5


@dataclass(frozen=True)
class Subject:
    """One episode of one run, with what is usual in that run.

    Parameters
    ----------
    material : Material
    usual : Usual
    episode : Episode
    """

    material: Material
    usual: Usual
    episode: Episode

    @cached_property
    def rows(self) -> slice:
        """Rows of the episode."""
        return slice(self.episode.first, self.episode.last + 1)

    @cached_property
    def near(self) -> slice:
        """Rows of the episode and a quarter of an hour on both sides."""
        return self.material.rows_between(self.episode.start - NEAR, self.episode.end + NEAR)

    @cached_property
    def place(self) -> float:
        """Bit depth at the episode's peak, or usual in it where the log has none there [m]."""
        here = float(self.material.bit[self.episode.peak])
        return here if np.isfinite(here) else middle(self.material.bit[self.rows], 1)

    @cached_property
    def same_depth(self) -> NDArray[np.int64]:
        """Rows with the bit at the episode's depth, whenever, in order of time."""
        return self.usual.rows_at(self.place, SAME_DEPTH)

    @cached_property
    def usual_pressure(self) -> float:
        """Median pressure at usual flow in the hours around, on or off bottom as at the peak [Pa]."""
        m, episode = self.material, self.episode
        around = m.rows_between(episode.start - AROUND, episode.end + AROUND)
        rows = np.r_[around.start : episode.first, episode.last + 1 : around.stop]
        rows = rows[m.rig.on_bottom[rows] == m.rig.on_bottom[episode.peak]]
        return middle(self.usual.pressure[rows], 60)

    @cached_property
    def sign(self) -> int:
        """Which way more drag moves the hookload at the peak: +1 going up, -1 going down, 0 else."""
        return int(self.material.friction_sign[self.episode.peak])


@dataclass(frozen=True)
class Measure:
    """One named measurement of an episode.

    Parameters
    ----------
    name : str
        In outputs, in the cause modules and in the learned strengths.
    take : callable
        From a Subject to a number [SI]; NaN where the log can't show it.
    edges : tuple of float
        Bounds of the bins it is sorted into, increasing: k edges make k + 1 bins.
    words : str
        Sentence with braces where the value goes.
    figure : str
        What shows it: "strip", "profile", "residuals", "fan", "path", "run" or "files".
    quantity : str
        As `forensics.units` names it, or "threshold" (multiples of what counts), "share", "part", "ratio",
        "count" or "word".
    levels : tuple of str
        For "word": what the numbers 0, 1, 2... stand for.
    about : Cause, optional
        The one cause it tells from all others, which it does not tell from one another.
    """

    name: str
    take: Callable[[Subject], float]
    edges: tuple[float, ...]
    words: str
    figure: str = "strip"
    quantity: str = "threshold"
    levels: tuple[str, ...] = ()
    about: Cause | None = None

    @property
    def bins(self) -> int:
        """Number of bins."""
        return len(self.edges) + 1

    def bin_of(self, value: float) -> int:
        """Bin a value lies in; a value on an edge belongs above it."""
        return bisect.bisect_right(self.edges, value)

    def unit(self, system: str = "metric") -> str:
        """Label of the unit the value is shown in; empty for plain numbers."""
        if self.quantity in PLAIN:
            return PLAIN[self.quantity]
        return display_unit(self.quantity, system)[0]

    def shown(self, value: float, system: str = "metric") -> str:
        """Write a value with its unit."""
        if self.levels:
            return self.levels[int(value)]
        if self.quantity in FORMS:
            scale, form = FORMS[self.quantity]
            return form.format(round(scale * value, 2) + 0.0)
        if self.quantity == "time" and value >= 180.0:
            return f"{value / 60.0:.0f} min"
        return show(value, self.quantity, system)

    def scaled(self, value: float) -> float:
        """Value in the metric unit that outputs carry."""
        if self.quantity in PLAIN:
            return value
        return value / display_unit(self.quantity, "metric")[1]

    def say(self, value: float, system: str = "metric") -> str:
        """Put a value in a sentence."""
        return self.words.format(self.shown(value, system))


#: Scale and form of the quantities that units know nothing of.
FORMS = {
    "share": (100.0, "{:.0f} %"),
    "count": (1.0, "{:.0f}"),
    "part": (100.0, "{:.2f} %"),
    "ratio": (1.0, "{:.2f}"),
    "threshold": (1.0, "{:.1f} of the threshold"),
}

#: What outputs call their units.
PLAIN = {"threshold": "of the threshold", "share": "1", "part": "1", "ratio": "1", "count": "1", "word": ""}


def named(levels: tuple[str, ...]) -> tuple[float, ...]:
    """Edges between the numbers of named levels."""
    return tuple(k + 0.5 for k in range(len(levels) - 1))


def middle(values: Floats, fewest: int = FEWEST) -> float:
    """Median of the known values; NaN where they are few."""
    known = values[np.isfinite(values)]
    return float(np.median(known)) if len(known) >= fewest else NAN


def spread(values: Floats) -> float:
    """Largest less smallest known value; NaN where there is none."""
    known = values[np.isfinite(values)]
    return float(np.ptp(known)) if len(known) else NAN
