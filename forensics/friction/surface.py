"""String weight of every reading as a function of the two friction factors.

The soft string is marched once on a small grid of factors; the fit, its Jacobian and its many starts
then cost a few table look-ups each, whatever the string's length. Local cubics, not one polynomial:
where slacked-off pipe buckles and nears lockup the weight bends sharply, and that bend must not spoil
the rest of the table.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import Protocol

import numpy as np
from numpy.typing import NDArray

from forensics.mechanics.offbottom import Weighed

Floats = NDArray[np.float64]

#: Grid of factors. A capstan of 2 rad of bends is held to 1e-5 of its value by cubics of this step.
STEP = 0.05
FACTORS = np.arange(13) * STEP

#: String weight is never taken lower than this [N]: past lockup the march runs away.
LOWEST_WEIGHT = -3.0e6


class OffBottom(Protocol):
    """What the calibration needs of the off-bottom model."""

    def string_weight(self, kind: str, bit_depth: Floats, mu_cased: float, mu_open: float) -> Floats:
        """Hookload of the string alone at the rotary [N]."""

    def string_weights(self, kind: str, bit_depth: Floats, mu_cased: Floats, mu_open: Floats) -> Floats:
        """Weigh at k pairs of factors and n depths, shape (k, n) [N]."""

    def slack_off_ratio(self, bit_depth: Floats, mu_cased: float, mu_open: float) -> Floats:
        """Largest load ratio while slacking off, bit free [-]."""

    def torque(self, bit_depth: Floats, mu: float) -> Floats:
        """Torque to turn the string off bottom [N.m]."""

    def open_length(self, bit_depth: Floats) -> Floats:
        """Length of string in open hole [m]."""

    def above_rotary(self, block: Floats, bit_depth: Floats) -> Floats:
        """Weight of the pipe between rotary and hook [N]."""

    def divided(self, edges: tuple[float, ...]) -> OffBottom:
        """Cut the open hole into friction sections at depths [m]."""

    def weigh_readings(
        self, kinds: tuple[str, ...], bit_depth: Floats, factors: tuple[float, ...]
    ) -> Weighed:
        """Weights and their slopes against each section's factor, of readings of any kind."""


@dataclass(frozen=True)
class ResponseSurface:
    """String weight of n readings over (cased, open) friction; `table` has shape (13, 13, n) [N]."""

    table: Floats

    def at(self, factors: Floats) -> tuple[Floats, Floats]:
        """Weights and their slopes against the cased and the open factor.

        Parameters
        ----------
        factors : ndarray, shape (2,)
            Cased and open, from 0 to 0.6 [-].

        Returns
        -------
        weight : ndarray, shape (n,)
        slopes : ndarray, shape (n, 2)
            [N].
        """
        i, value_i, slope_i = _cubic(float(factors[0]))
        j, value_j, slope_j = _cubic(float(factors[1]))
        near = self.table[i : i + 4, j : j + 4]
        along = np.tensordot(value_j, near, axes=(0, 1))
        across = np.tensordot(slope_j, near, axes=(0, 1))
        return value_i @ along, np.column_stack([slope_i @ along, value_i @ across])

    def take(self, rows: NDArray[np.bool_]) -> ResponseSurface:
        """Only some of the readings."""
        return ResponseSurface(self.table[:, :, rows])


def _cubic(mu: float) -> tuple[int, Floats, Floats]:
    """First of the four nodes about a factor, their Lagrange weights, and the slopes of these."""
    first = int(np.clip(int(mu / STEP) - 1, 0, len(FACTORS) - 4))
    x = mu / STEP - first
    a, b, c, d = x, x - 1.0, x - 2.0, x - 3.0
    value = np.array([-b * c * d / 6.0, a * c * d / 2.0, -a * b * d / 2.0, a * b * c / 6.0])
    slope = np.array(
        [
            -(c * d + b * d + b * c) / 6.0,
            (c * d + a * d + a * c) / 2.0,
            -(b * d + a * d + a * b) / 2.0,
            (b * c + a * c + a * b) / 6.0,
        ]
    )
    return first, value, slope / STEP


def build_surface(model: OffBottom, kinds: tuple[str, ...], bit_depth: Floats) -> ResponseSurface:
    """March the model on the grid of factors for every reading.

    Parameters
    ----------
    model : OffBottom
    kinds : tuple of str, length n
        "pick_up", "slack_off" or "rotating".
    bit_depth : ndarray, shape (n,)
        [m].

    Returns
    -------
    ResponseSurface
    """
    m = len(FACTORS)
    table = np.zeros((m, m, len(bit_depth)))
    which = np.array(kinds)
    for kind in sorted(set(kinds)):
        rows = np.flatnonzero(which == kind)
        depths = np.asarray(bit_depth, dtype=float)[rows]
        if kind == "rotating":  # no axial friction: one march serves
            table[:, :, rows] = model.string_weight(kind, depths, 0.0, 0.0)
            continue
        pairs = np.meshgrid(FACTORS, FACTORS, indexing="ij")
        table[:, :, rows] = model.string_weights(kind, depths, *(f.ravel() for f in pairs)).reshape(m, m, -1)
    np.nan_to_num(table, copy=False, nan=LOWEST_WEIGHT)
    return ResponseSurface(np.maximum(table, LOWEST_WEIGHT))
