"""What the surface sensors mean: the rig as the analysis sees it."""

from __future__ import annotations

import enum
from collections.abc import Mapping
from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np
from numpy.typing import NDArray

from forensics.estimate import Estimate

if TYPE_CHECKING:
    from forensics.rig.breakover import Breakovers
    from forensics.rig.steady import Steady

Floats = NDArray[np.float64]
Bools = NDArray[np.bool_]


class Activity(enum.IntEnum):
    """What the rig was doing; the number is what `RigView.activity` holds."""

    UNKNOWN = 0
    CONNECTION = 1
    DRILL_ROTATE = 2
    DRILL_SLIDE = 3
    REAM_DOWN = 4
    REAM_UP = 5
    ROTATE_OFF_BOTTOM = 6
    TRIP_IN = 7
    TRIP_OUT = 8
    CIRCULATE = 9
    STATIC = 10

    @property
    def word(self) -> str:
        """The name in outputs: `drill_slide` and so on."""
        return self.name.lower()


@dataclass(frozen=True)
class Tare:
    """One off-bottom reference reading, for one stand.

    `kind` is "rotating" or "slack_off"; `offset` is measured less modelled or interpolated
    reference weight [N]; the stand runs from `start` to `end` [s since 1970 UTC].
    """

    start: float
    end: float
    bit_depth: float
    kind: str
    weight: float
    offset: float
    samples: int


@dataclass(frozen=True)
class RigView:
    """The rig's state at each row of the log; all arrays have shape (n,).

    Parameters
    ----------
    block_weight : Estimate
        Everything that hangs from the sensor but is not the string [N].
    hookload : ndarray
        String tension at the hook: cleaned, corrected for sheaves and pumps, block weight still in [N].
    slips, turning, pumping, on_bottom : ndarray of bool
        In slips; above 5 rpm; pumps on; bit on bottom.
    direction : ndarray of int8
        Block: +1 going down, -1 going up, 0 not moving by the contract's rule (above 1 cm/s over 15 s).
    block : ndarray
        Block height, from the block channel or, out of slips, from bit depth [m]; NaN where unknown.
    hole_depth : ndarray
        Hole depth, running maximum of bit depth where the log has none [m].
    activity : ndarray of int8
        `Activity` codes.
    wob_surface, wob_slack_off : ndarray
        Surface weight on bit re-zeroed on the rotating, and (sliding only) slack-off, reference [N].
    noise : mapping of str to float
        Short-term noise (1 sigma) by channel [SI].
    usual_flow : float
        The run's usual flow [m3/s], NaN where there is none.
    tares : tuple of Tare
        Reference readings used, by stand.
    can_not_tell : tuple of str
        What the log could not show, in sentences.
    bottom_vote : ndarray of int8 or None
        What each row alone says about the bit: +1 on bottom, -1 off, 0 nothing (the state was held).
    steady : Steady or None
        The steady moments off bottom that the references rest on.
    pump_shift : Estimate or None
        What the pumps added to the reading, already taken out of `hookload` [N]; None where it didn't show.
    breakover : Breakovers or None
        Peaks of the hookload as a string that stood still starts to move up.
    """

    block_weight: Estimate
    hookload: Floats
    slips: Bools
    turning: Bools
    pumping: Bools
    on_bottom: Bools
    direction: NDArray[np.int8]
    block: Floats
    hole_depth: Floats
    activity: NDArray[np.int8]
    wob_surface: Floats
    wob_slack_off: Floats
    noise: Mapping[str, float]
    usual_flow: float
    tares: tuple[Tare, ...] = ()
    can_not_tell: tuple[str, ...] = ()
    bottom_vote: NDArray[np.int8] | None = None
    steady: Steady | None = None
    pump_shift: Estimate | None = None
    breakover: Breakovers | None = None
