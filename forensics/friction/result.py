"""What a calibration found, and how sure it is."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from forensics.estimate import Estimate

Floats = NDArray[np.float64]

UNIT_SCALE = Estimate(1.0, 1.0, 1.0, "assumed", determined=False)


@dataclass(frozen=True)
class Reading:
    """One steady weight reading off bottom.

    `kind` is "pick_up", "slack_off", "rotating" or "torque"; `value` in N (hookload as measured,
    block weight in) or N.m; `bit_depth`, `block` in m; `speed` in m/s; `rpm` in rev/min.
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


@dataclass(frozen=True)
class FrictionSection:
    """Friction factor of one stretch of hole."""

    kind: str
    top: float
    bottom: float
    factor: Estimate


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
    draws : ndarray, shape (k, 3)
        Joint draws (cased factor, open factor, block weight [N]) from the posterior.
    can_not_tell : tuple of str
        What the readings could not determine, in sentences.
    weight_scale : Estimate
        Factor on the modelled string weight (weight per length, mud density): a modelled hookload is
        block weight + bias + share * pipe above the rotary + scale * string weight.
    torque_loss : Estimate or None
        Constant torque lost inside the top drive: modelled torque is loss + torque of the string [N.m].
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

    def factor(self, kind: str) -> float:
        """Axial friction factor of a hole kind, "cased" or "open"."""
        return next(s.factor.value for s in self.sections if s.kind == kind)
