"""What each measurement says about each cause.

A sign reads one measurement as a strength from -1 (the contrary) to +1 (plainly so), or as nothing
where the log can't show it. Its weights are log-likelihood ratios at full strength: how much more
often the sign is seen with that cause than with the others. They are trade rules, from memory, unless
marked "mechanics"; none was fitted.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import dataclass, field

import numpy as np

from forensics.episodes.catalogue import Kind
from forensics.episodes.causes.names import Cause
from forensics.episodes.causes.tells import Tells
from forensics.units import show

TRADE = "trade rule, from memory"
MECHANICS = "mechanics"

C = Cause


@dataclass(frozen=True)
class Sign:
    """One sign: how it is read, what it says when seen, and what when its contrary is seen.

    `amount`, a quantity and how to read it, goes where `text` has a pair of braces, in the reader's unit.
    """

    name: str
    strength: Callable[[Tells], float]
    text: Callable[[Tells], str]
    seen: Mapping[Cause, float]
    contrary: Mapping[Cause, float] = field(default_factory=dict)
    kinds: tuple[Kind, ...] = tuple(Kind)
    origin: str = TRADE
    amount: tuple[str, Callable[[Tells], float]] | None = None

    def words(self, tells: Tells, system: str) -> str:
        """Say what the measurements show, in "metric" or "field" units."""
        if self.amount is None:
            return self.text(tells)
        quantity, take = self.amount
        return self.text(tells).format(show(take(tells), quantity, system))


def graded(value: float, none: float, full: float) -> float:
    """Strength that runs from -1 at `none` to +1 at `full`; NaN stays NaN."""
    middle, half = 0.5 * (none + full), 0.5 * (full - none)
    return float(np.clip((value - middle) / half, -1.0, 1.0))


def _both_ways(t: Tells) -> float:
    if not (np.isfinite(t.up) and np.isfinite(t.down)):
        return float("nan")
    return graded(min(t.up, t.down), 0.2, 0.8) if max(t.up, t.down) > 0.5 else float("nan")


def _one_way(grown: float, other: float) -> float:
    if not (np.isfinite(grown) and np.isfinite(other)) or max(grown, other) < 0.5:
        return float("nan")
    return graded(grown - 2.0 * max(other, 0.0), 0.0, 0.6)


def _percent(value: float) -> str:
    return f"{100.0 * value:.0f} %"


LOADED = (Kind.BUCKLING, Kind.LOCKUP)
DRAGS = (Kind.DRAG, Kind.LOCKUP)

SIGNS: tuple[Sign, ...] = (
    Sign(
        "load ratio",
        lambda t: graded(t.ratio, 0.7, 1.1),
        lambda t: f"compression reached {t.ratio:.2f} times the sinusoidal load",
        {C.BUCKLING: 1.5},
        {C.BUCKLING: -3.0},
        origin=MECHANICS,
    ),
    Sign(
        "share lost to buckling",
        lambda t: graded(t.lost_share, 0.05, 0.35),
        lambda t: f"{_percent(t.lost_share)} of the lost weight is beyond ordinary sliding drag",
        {C.BUCKLING: 1.5, C.FRICTION: -1.0},
        {C.BUCKLING: -1.0, C.FRICTION: 1.5},
        LOADED,
        MECHANICS,
    ),
    Sign(
        "calibrated friction",
        lambda t: graded(t.friction, -0.5, 1.5),
        lambda t: f"the calibrated factor lies {0.04 * t.friction:+.2f} off the assumed one",
        {C.FRICTION: 1.5, C.NO_DATA: -0.5},
        {C.FRICTION: -1.0},
        LOADED,
    ),
    Sign(
        "drag both ways",
        _both_ways,
        lambda t: (
            f"drag beyond the model at {t.up:.1f} of the threshold going up and {t.down:.1f} going down"
        ),
        {
            C.FRICTION: 1.0,
            C.TORTUOSITY: 0.7,
            C.CLEANING: 0.0,
            C.HANG_UP: -1.0,
            C.BUCKLING: -1.0,
            C.NO_DATA: -0.7,
        },
        {C.FRICTION: -1.0, C.TORTUOSITY: -0.4, C.CLEANING: 0.3},
        DRAGS,
    ),
    Sign(
        "drag going up only",
        lambda t: _one_way(t.up, t.down),
        lambda t: f"drag beyond the model at {t.up:.1f} of the threshold going up, {t.down:.1f} going down",
        {C.CLEANING: 1.0, C.PACK_OFF: 0.3, C.FRICTION: -0.7, C.HANG_UP: -1.0, C.BUCKLING: -2.0},
        {},
        DRAGS,
    ),
    Sign(
        "drag going down only",
        lambda t: _one_way(t.down, t.up),
        lambda t: f"drag beyond the model at {t.down:.1f} of the threshold going down, {t.up:.1f} going up",
        {C.HANG_UP: 1.2, C.BUCKLING: 1.0, C.FRICTION: -0.7, C.CLEANING: -0.7, C.STICKING: -0.5},
        {},
        DRAGS,
    ),
    Sign(
        "rotating weight off",
        lambda t: graded(abs(t.turning), 0.2, 0.8),
        lambda t: f"the rotating weight is off the model by {t.turning:+.1f} of the threshold",
        {C.SENSOR: 2.0},
        {C.SENSOR: -1.0},
    ),
    Sign(
        "same shift both ways",
        lambda t: graded(abs(t.shift), 0.1, 0.6),
        lambda t: f"up and down readings are shifted alike by {t.shift:+.1f} of the threshold",
        {C.SENSOR: 2.5, C.FRICTION: -0.7, C.TORTUOSITY: -0.7, C.CLEANING: -0.5},
        {C.SENSOR: -1.0},
    ),
    Sign(
        "in-slips reading",
        lambda t: graded(abs(t.slips), 0.4, 1.2),
        lambda t: f"the in-slips hookload stands at {t.slips:+.1f} of what counts as a shift",
        {C.SENSOR: 2.0},
        {C.SENSOR: -0.7},
    ),
    Sign(
        "torque",
        lambda t: graded(t.torque, 0.2, 0.9),
        lambda t: f"torque beyond the model at {t.torque:.1f} of its threshold",
        {
            C.FRICTION: 0.7,
            C.CLEANING: 0.9,
            C.TORTUOSITY: 0.7,
            C.BUCKLING: -1.0,
            C.HANG_UP: -0.5,
            C.SENSOR: -1.0,
        },
        {C.FRICTION: -0.5, C.CLEANING: -0.5, C.TORTUOSITY: -0.5, C.BUCKLING: 0.3, C.HANG_UP: 0.4},
        (Kind.BUCKLING, Kind.LOCKUP, Kind.DRAG),
    ),
    Sign(
        "drag with the torque",
        lambda t: graded(float(np.fmax(t.up, t.down)), 0.2, 0.8),
        lambda t: f"drag near it, up or down, at {np.fmax(t.up, t.down):.1f} of its threshold",
        {C.FRICTION: 0.7, C.CLEANING: 0.7, C.TORTUOSITY: 0.7, C.SENSOR: -1.0},
        {C.FRICTION: -0.6, C.CLEANING: -0.4, C.TORTUOSITY: -0.4, C.SENSOR: 0.4},
        (Kind.TORQUE,),
    ),
    Sign(
        "standpipe pressure",
        lambda t: graded(t.pressure, 0.3, 1.2),
        lambda t: f"pressure at like flow at {t.pressure:+.1f} of what counts as a rise",
        {C.PACK_OFF: 2.0, C.CLEANING: 1.0, C.FRICTION: -0.5, C.STICKING: -0.8, C.TORTUOSITY: -0.5},
        {C.PACK_OFF: -1.5, C.CLEANING: -0.2},
    ),
    Sign(
        "stood still before",
        lambda t: graded(t.still, 180.0, 900.0),
        lambda t: f"the string had stood still for {t.still / 60.0:.0f} min",
        {C.STICKING: 1.8},
        {C.STICKING: -2.0},
        DRAGS,
    ),
    Sign(
        "same depth on other passes",
        lambda t: graded(t.elsewhere, 0.3, 0.8),
        lambda t: f"the easiest other pass of this depth shows {t.elsewhere:.1f} of the threshold",
        {C.TORTUOSITY: 1.5, C.HANG_UP: 0.8, C.CLEANING: -0.5, C.STICKING: -1.0, C.PACK_OFF: -0.7},
        {
            C.TORTUOSITY: -1.5,
            C.HANG_UP: -0.7,
            C.CLEANING: 0.6,
            C.STICKING: 0.4,
            C.PACK_OFF: 0.4,
            C.FRICTION: -0.7,
        },
    ),
    Sign(
        "after circulating",
        lambda t: graded(-t.cleaned, 0.1, 0.7),
        lambda t: f"on the next pass, after circulating, {t.cleaned:+.1f} of the threshold",
        {C.CLEANING: 1.5, C.PACK_OFF: 0.5, C.TORTUOSITY: -1.0, C.FRICTION: -0.7},
        {C.CLEANING: -0.8},
    ),
    Sign(
        "growth in time",
        lambda t: graded(t.growth, 0.0, 0.6),
        lambda t: f"drag against time before it, rank correlation {t.growth:+.2f}",
        {C.CLEANING: 1.0, C.TORTUOSITY: -0.4, C.SENSOR: -0.4},
        {C.CLEANING: -0.3},
        (Kind.DRAG,),
    ),
    Sign(
        "onset",
        lambda t: graded(t.onset, 12.0, 2.0),
        lambda _: "the drag came up over {} of bit travel",
        {C.HANG_UP: 1.0, C.PACK_OFF: 0.7, C.STICKING: 0.7, C.FRICTION: -1.0, C.CLEANING: -0.3},
        {C.HANG_UP: -1.0, C.STICKING: -1.0, C.PACK_OFF: -0.4, C.CLEANING: 0.3},
        (Kind.DRAG,),
        amount=("length", lambda t: t.onset),
    ),
    Sign(
        "length of hole",
        lambda t: graded(t.length, 20.0, 100.0),
        lambda _: "it lasted over {} of bit travel",
        {C.FRICTION: 0.4, C.CLEANING: 0.4, C.HANG_UP: -2.0, C.STICKING: -2.0, C.PACK_OFF: -1.0},
        {C.FRICTION: -0.4, C.CLEANING: -0.4, C.HANG_UP: 0.6, C.STICKING: 0.6, C.PACK_OFF: 0.6},
        (Kind.DRAG,),
        amount=("length", lambda t: t.length),
    ),
    Sign(
        "near the shoe",
        lambda t: graded(t.shoe, 40.0, 10.0),
        lambda _: "the bit was {} from the shoe",
        {C.HANG_UP: 1.0},
        {C.HANG_UP: -0.2},
        DRAGS,
        amount=("length", lambda t: t.shoe),
    ),
    Sign(
        "dogleg at the bit",
        lambda t: graded(t.dogleg, np.radians(2.5) / 30.0, np.radians(5.0) / 30.0),
        lambda _: "the hole turns by up to {} near the bit",
        {C.TORTUOSITY: 0.7, C.HANG_UP: 0.4},
        {C.TORTUOSITY: -0.4, C.HANG_UP: -0.3},
        (Kind.DRAG, Kind.TORQUE),
        amount=("angle_per_length", lambda t: t.dogleg),
    ),
    Sign(
        "how it ended",
        lambda t: graded(t.release, 0.0, 1.0),
        lambda t: "it ended as the string turned or was raised" if t.release > 0 else "it ended by itself",
        {C.BUCKLING: 0.6, C.HANG_UP: 0.2},
        {C.BUCKLING: -0.2},
        LOADED,
    ),
    Sign(
        "hole where cuttings settle",
        lambda t: graded(t.bed, 0.0, 200.0),
        lambda _: "{} of open hole stand at 40 to 65 degrees",
        {C.CLEANING: 0.4},
        {C.CLEANING: -0.4},
        (Kind.DRAG, Kind.TORQUE),
        amount=("length", lambda t: t.bed),
    ),
)
