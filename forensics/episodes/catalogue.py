"""Episodes, groups and causes as the report and the exports see them."""

from __future__ import annotations

import enum
import math
from collections.abc import Iterable
from dataclasses import dataclass

from forensics.estimate import Estimate


class Kind(enum.StrEnum):
    """What an episode is."""

    BUCKLING = "buckling"
    LOCKUP = "lockup"
    DRAG = "drag"
    TORQUE = "torque"


#: What the residual of a drag or torque episode is, as a quantity.
RESIDUAL_QUANTITY = {Kind.DRAG: "force", Kind.TORQUE: "moment"}


class State(enum.StrEnum):
    """Worst state of the string in an episode."""

    NONE = "none"
    SINUSOIDAL = "sinusoidal"
    HELICAL = "helical"


class Consequence(enum.StrEnum):
    """What an episode led to."""

    NONE = "none"
    WEIGHT_LOST = "weight_lost"
    LOCKED_UP = "locked_up"
    ROTATED_BUCKLED = "rotated_buckled"


@dataclass(frozen=True)
class Evidence:
    """A named measurement for or against a cause.

    Parameters
    ----------
    name, text : str
        The measurement, and a sentence with its value.
    weight : float
        Natural log of the likelihood ratio: above zero it supports the cause, below it speaks against.
    origin : str
        Where the ratio comes from.
    value : float
        What was measured, in `unit` (metric, as outputs have it).
    unit : str
    figure : str
        What in the report shows it: "strip", "profile", "residuals", "fan", "path", "run" or "files".
    """

    name: str
    text: str
    weight: float
    origin: str
    value: float = float("nan")
    unit: str = ""
    figure: str = ""

    @property
    def ratio(self) -> float:
        """How many times as often this is met with the cause as with causes at large."""
        return math.exp(self.weight)


@dataclass(frozen=True)
class CauseView:
    """One cause weighed for one episode."""

    cause: str
    probability: float
    evidence: tuple[Evidence, ...] = ()


@dataclass(frozen=True)
class Travel:
    """How the hookload went with the block in the move that led into an episode.

    Parameters
    ----------
    row : int
        Last row of the part measured.
    sense : int
        +1 set down, -1 picked up.
    travel, change : float
        Block travel over that part [m], and what the hookload changed by [N].
    stiffness, stiffness_sigma : float
        Slope of hookload against travel at its middle, and its standard error [N/m].
    softening, softening_sigma : float
        Part of the slope lost from the part's beginning to its end, and its standard error: a solid stop has
        none, buckling grows softer as weight is added.
    free_length : Estimate or None
        Depth at which a string of that stiffness is held, friction's share in it [m].
    elastic_length : float
        The same with friction left out: the trade's free length [m].
    """

    row: int
    sense: int
    travel: float
    change: float
    stiffness: float
    stiffness_sigma: float
    softening: float
    softening_sigma: float
    free_length: Estimate | None = None
    elastic_length: float = float("nan")


class Word(enum.StrEnum):
    """What the engineer makes of an episode."""

    ACCEPT = "accept"
    REJECT = "reject"
    RELABEL = "relabel"


@dataclass(frozen=True)
class Verdict:
    """The engineer's verdict on an episode; who gave it is not recorded.

    `cause` is the engineer's own, empty but for a relabelled episode; `program_cause` what the program had
    named before it.
    """

    word: Word
    cause: str = ""
    note: str = ""
    program_cause: str = ""


@dataclass(frozen=True)
class Episode:
    """One episode; times in s since 1970 UTC, depths in m, forces in N, SI throughout.

    `first` and `last` are row numbers in the log (inclusive); `peak` the row of the peak load ratio
    (of the largest residual for drag and torque); `critical_load` is the compression at which that place
    would just buckle sideways, at the contact it then causes; `peak_residual` is that residual, measured less
    modelled [N or N.m], None for other kinds. `onsets` says which published helical onsets the compression
    passed, `onsets_beyond` which of them are used there beyond their range, `onsets_drop` what the surface
    torque would take off each [N]. `bit_load` is what reached the bit at the peak [N], `ends` the buckled
    interval's with how far they may be off [m] (both None for drag and torque); `probability_range` is the
    90 % interval of the probability for the number of draws behind it. `verdict` is the engineer's, None
    where there is none; a relabelled episode has the engineer's `cause`, `causes` stay the program's own.
    """

    id: str
    kind: Kind
    state: State
    start: float
    end: float
    first: int
    last: int
    peak: int
    activity: str
    top_md: float
    bottom_md: float
    peak_md: float
    peak_load_ratio: Estimate
    peak_compression: Estimate
    lost_weight: Estimate
    lost_to_buckling: Estimate
    probability: float
    consequence: Consequence
    family: str = ""
    cause: str = ""
    note: str = ""
    causes: tuple[CauseView, ...] = ()
    critical_load: float = float("nan")
    peak_residual: Estimate | None = None
    onsets: str = ""
    onsets_beyond: str = ""
    onsets_drop: float = float("nan")
    travel: Travel | None = None
    bit_load: Estimate | None = None
    ends: tuple[Estimate, Estimate] | None = None
    probability_range: tuple[float, float] = (float("nan"), float("nan"))
    verdict: Verdict | None = None

    @property
    def duration(self) -> float:
        """Length in time [s]."""
        return self.end - self.start

    @property
    def word(self) -> Word | None:
        """What the engineer makes of it; None where no verdict was given."""
        return None if self.verdict is None else self.verdict.word


def standing(episodes: Iterable[Episode]) -> tuple[Episode, ...]:
    """Give the episodes that the engineer has not rejected: what headline, groups and counts rest on."""
    return tuple(episode for episode in episodes if episode.word is not Word.REJECT)


@dataclass(frozen=True)
class Family:
    """A group of like episodes: its name, what its members share in words, and how stable it is.

    `stability` is the mean agreement of the group under resampling, 0 to 1 (NaN where groups were
    made by rule and no resampling applies).
    """

    name: str
    description: str
    members: tuple[str, ...]
    stability: float


@dataclass(frozen=True)
class Headline:
    """The finding in words: one sentence, its support, what the data can't tell."""

    sentence: str
    confidence: str
    details: tuple[str, ...] = ()
    can_not_tell: tuple[str, ...] = ()
