"""What a calibration found, and how sure it is."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field

import numpy as np
from numpy.typing import NDArray

from forensics.estimate import Estimate
from forensics.rig.breakover import Breakovers

Floats = NDArray[np.float64]

UNIT_SCALE = Estimate(1.0, 1.0, 1.0, "assumed", determined=False)


@dataclass(frozen=True)
class Reading:
    """One steady weight reading off bottom.

    `kind` is "pick_up", "slack_off", "rotating" or "torque"; `value` in N (hookload as measured,
    block weight in) or N.m; `bit_depth`, `block` in m; `speed` in m/s; `rpm` in rev/min. `by_hand` was
    written down by the rig; `buckled` was weighed with the string near or past its buckling load.
    """

    kind: str
    start: float
    end: float
    bit_depth: float
    block: float
    value: float
    spread: float
    samples: int
    pumping: bool
    speed: float = 0.0
    rpm: float = 0.0
    by_hand: bool = False
    buckled: bool = False


@dataclass(frozen=True)
class FrictionSection:
    """Friction factor of one stretch of hole."""

    kind: str
    top: float
    bottom: float
    factor: Estimate


@dataclass(frozen=True)
class Parameter:
    """One number of the joint fit, with its name and SI unit ("N", "N.m" or "-")."""

    name: str
    unit: str
    estimate: Estimate


@dataclass(frozen=True)
class OpenDirection:
    """A way in which parameters can move together without the readings noticing.

    `moves` maps a parameter's name to how far it moves, one sigma [SI]; `known` is what the readings tell of
    the direction, as a multiple of what was assumed of it beforehand; `sentence` puts it in words.
    """

    moves: Mapping[str, float]
    known: float
    sentence: str


@dataclass(frozen=True)
class HeldOut:
    """How well readings are foretold by a calibration that never saw their stands.

    `folds` groups of whole stands were left out in turn; `readings` hookload readings foretold, those let go
    by the fit to all left out; `rms` and `in_sample` of the same readings [N]; `torque_rms` and
    `torque_in_sample` [N.m], NaN where torque has no stands to leave out; `residuals`, shape (n,), measured
    less foretold of every weight reading [N].
    """

    folds: int
    readings: int
    rms: float
    in_sample: float
    torque_rms: float
    torque_in_sample: float
    residuals: Floats


@dataclass(frozen=True)
class Calibration:
    """Friction and weights learned from a run.

    Parameters
    ----------
    sections : tuple of FrictionSection
        Axial friction factors, top to bottom.
    block_weight : Estimate
        Block weight the mechanics uses (absorbs any constant bias unless a block weight was given) [N].
    hookload_bias : Estimate
        Constant sensor bias, zero unless the case gives a block weight [N].
    pipe_above_rotary : Estimate
        Share (0 to 1) of the weight of pipe between rotary and hook that shows in the hookload.
    rotational : Estimate or None
        Rotational friction factor, where torque allows.
    readings : tuple of Reading
        The steady readings used.
    residuals : ndarray, shape (len(readings),)
        Measured less modelled [N or N.m].
    residual_rms : float
        Of the hookload readings [N].
    draws : ndarray, shape (k, s + 1)
        Joint draws (a factor for each section, then block weight [N]) from the posterior.
    can_not_tell : tuple of str
        What the readings could not determine, in sentences.
    weight_scale : Estimate
        Factor on the modelled string weight (weight per length, mud density): a modelled hookload is
        block weight + bias + share * pipe above the rotary + scale * string weight.
    torque_loss : Estimate or None
        Constant torque lost inside the top drive: modelled torque is loss + torque of the string [N.m].
    edges : tuple of float
        Measured depths at which the open hole is cut into sections [m].
    gain : ndarray, shape (s + 1, n)
        How factors and block weight follow the n weight readings: where the modelled readings change by `d`
        [N] (other mud, survey or clearance), a fit to the same readings moves by -gain @ d.
    held_out : HeldOut or None
        The error on whole stands left out, None where there are too few of them.
    open_directions : tuple of OpenDirection
        What the readings leave open, the least known first.
    parameters : tuple of Parameter
        Every number of the joint fit beside the factors.
    breakover : Breakovers or None
        Peaks of the hookload as a string that stood still starts to move up: a series of its own, in no fit.
    """

    sections: tuple[FrictionSection, ...]
    block_weight: Estimate
    hookload_bias: Estimate
    pipe_above_rotary: Estimate
    rotational: Estimate | None
    readings: tuple[Reading, ...]
    residuals: Floats
    residual_rms: float
    draws: Floats
    can_not_tell: tuple[str, ...] = ()
    weight_scale: Estimate = UNIT_SCALE
    torque_loss: Estimate | None = None
    edges: tuple[float, ...] = ()
    gain: Floats = field(default_factory=lambda: np.zeros((3, 0)))
    held_out: HeldOut | None = None
    open_directions: tuple[OpenDirection, ...] = ()
    parameters: tuple[Parameter, ...] = ()
    breakover: Breakovers | None = None

    @property
    def weights(self) -> tuple[Reading, ...]:
        """The hookload readings, as `gain` has them."""
        return tuple(r for r in self.readings if r.kind != "torque")

    def factor(self, kind: str) -> float:
        """Axial friction factor of a kind of hole, "cased" or "open": the mean by length of its sections."""
        same = [s for s in self.sections if s.kind == kind]
        lengths = [max(s.bottom - s.top, 1e-6) for s in same]
        return float(np.average([s.factor.value for s in same], weights=lengths))
