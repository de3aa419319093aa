"""Weights off bottom on a grid of bit depths: what many readings and many draws need, cheaply."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Protocol

import numpy as np
from numpy.typing import ArrayLike, NDArray

from forensics.friction.result import Calibration
from forensics.mechanics.offbottom import OffBottomModel
from forensics.replay.model import factors

Floats = NDArray[np.float64]

KINDS = ("pick_up", "rotating", "slack_off")
LEAST_DRAG = 1e3  # N; less drag than this has no multiple


class Weights(Protocol):
    """What tells the weight of a string off bottom."""

    def string_weight(
        self, kind: str, bit_depth: ArrayLike, cased: float, *opened: float, scale: ArrayLike = 1.0
    ) -> Floats:
        """Weigh as `OffBottomModel` does [N]."""

    def above_rotary(self, block: ArrayLike, bit_depth: ArrayLike) -> Floats:
        """Weigh the pipe above the rotary as `OffBottomModel` does [N]."""


@dataclass(frozen=True)
class Tabulated:
    """Weights at one calibration, drag in proportion to friction about it.

    Parameters
    ----------
    model : OffBottomModel
    factor : float
        The last of the calibration's friction factors, by which others are measured.
    depth : ndarray, shape (p,)
        Bit depths [m].
    weights : ndarray, shape (3, p)
        String weights by `KINDS` [N].
    """

    model: OffBottomModel
    factor: float
    depth: Floats
    weights: Floats

    def string_weight(
        self,
        kind: str,
        bit_depth: ArrayLike,
        cased: float,  # noqa: ARG002
        *opened: float,
        scale: ArrayLike = 1.0,  # noqa: ARG002
    ) -> Floats:
        """Weigh as `OffBottomModel` does, at the calibration's scale; factors may only grow together [N]."""
        still, own = (
            np.interp(bit_depth, self.depth, self.weights[KINDS.index(k)]) for k in ("rotating", kind)
        )
        return still + (own - still) * (opened[-1] / self.factor if kind != "rotating" else 0.0)

    def above_rotary(self, block: ArrayLike, bit_depth: ArrayLike) -> Floats:
        """Weigh the pipe above the rotary as `OffBottomModel` does [N]."""
        return self.model.above_rotary(block, bit_depth)

    def drag_over(self, other: Tabulated, bit_depth: Floats) -> Floats:
        """Slack-off drag over another's, one where there is hardly any, shape (k,)."""
        drag, was = (one.weights[2] - one.weights[1] for one in (self, other))
        share = np.divide(drag, was, out=np.ones_like(was), where=np.abs(was) > LEAST_DRAG)
        return np.interp(bit_depth, self.depth, share)


def tabulated(model: OffBottomModel, calibration: Calibration, depth: Floats) -> Tabulated:
    """Tabulate a model's weights at a calibration.

    Parameters
    ----------
    model : OffBottomModel
    calibration : Calibration
    depth : ndarray, shape (p,)
        Bit depths, ascending [m].
    """
    mu, scale = factors(calibration), calibration.weight_scale.value
    weights = np.array([model.string_weight(kind, depth, *mu, scale=scale) for kind in KINDS])
    return Tabulated(model, max(mu[-1], 1e-6), depth, weights)
