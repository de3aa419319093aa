"""What the string should weigh and how hard it should turn off bottom, by the soft-string model."""

from __future__ import annotations

import numpy as np
from numpy.typing import ArrayLike, NDArray

from forensics.case import CriteriaSettings
from forensics.mechanics.grid import HoleGrid, PipeGrid, hole_grid, pipe_grid, weight_in_air
from forensics.mechanics.kernels_judge import Setting
from forensics.mechanics.kernels_lanes import weigh_lanes
from forensics.mechanics.kernels_march import torque_up_many
from forensics.mechanics.kernels_offbottom import press_many, weigh_many
from forensics.mechanics.limits import tabulate
from forensics.mechanics.softstring import hole_arrays, pipe_arrays
from forensics.well.model import Well

Floats = NDArray[np.float64]

SIGMA = {"pick_up": -1.0, "slack_off": 1.0, "rotating": 0.0}


class OffBottomModel:
    """String weight and torque off bottom, for many depths at once.

    Parameters
    ----------
    well : Well
        Trajectory, hole, string and fluid.
    depth : float
        Deepest bit depth that will be asked for [m].
    criteria : CriteriaSettings
        From which loads sliding pipe carries the contact of a helix, and at which clearance.
    block_zero : float
        Block height at which no pipe stands above the rotary [m]; what hangs there always is part of the
        block weight.
    """

    def __init__(
        self,
        well: Well,
        depth: float,
        criteria: CriteriaSettings | None = None,
        block_zero: float = 0.0,
    ) -> None:
        self.well = well
        self.block_zero = block_zero
        self.hole: HoleGrid = hole_grid(well, depth)
        settings = CriteriaSettings() if criteria is None else criteria
        self.pipe: PipeGrid = pipe_grid(well, depth, settings.clearance)
        self.hole_arrays = hole_arrays(self.hole)
        self.pipe_arrays = pipe_arrays(self.pipe)
        self.criteria = tabulate(well, self.hole, self.pipe, settings)

    def setting(self, cased: float, open_hole: float) -> Setting:
        """Put the well, the string and the criteria at the given friction as the kernels take them."""
        return Setting(self.hole_arrays, self.pipe_arrays, self.criteria, self.friction(cased, open_hole))

    def friction(self, cased: float, open_hole: float) -> Floats:
        """Friction factor at each depth of the hole grid, shape (n,)."""
        return np.where(self.hole.open_hole, open_hole, cased)

    def string_weight(
        self, kind: str, bit_depth: ArrayLike, cased: float, open_hole: float, scale: ArrayLike = 1.0
    ) -> Floats:
        """Hookload of the string alone at the rotary, bit free [N], shape (k,).

        Parameters
        ----------
        kind : str
            "pick_up", "slack_off" or "rotating".
        bit_depth : array_like, shape (k,)
            [m]
        cased, open_hole : float
            Friction factors.
        scale : array_like, shape () or (k,)
            Multiplies all weights (mud or weight-per-length correction).
        """
        bits = np.atleast_1d(np.asarray(bit_depth, dtype=float))
        scales = np.broadcast_to(np.asarray(scale, dtype=float), bits.shape).copy()
        return weigh_many(self.setting(cased, open_hole), bits, scales, SIGMA[kind])

    def string_weights(
        self, kind: str, bit_depth: ArrayLike, cased: ArrayLike, open_hole: ArrayLike
    ) -> Floats:
        """Hookload of the string alone at many friction factors, bit free [N], shape (strings, k).

        Parameters
        ----------
        kind : str
            "pick_up", "slack_off" or "rotating".
        bit_depth : array_like, shape (k,)
            [m]
        cased, open_hole : array_like, shape (strings,)
            Friction factors, in pairs.
        """
        bits = np.atleast_1d(np.asarray(bit_depth, dtype=float))
        pairs = [np.ascontiguousarray(np.atleast_1d(f), dtype=float) for f in (cased, open_hole)]
        setting = self.setting(0.0, 0.0)
        rows = [weigh_lanes(setting, self.hole.open_hole, (b, SIGMA[kind]), *pairs) for b in bits.tolist()]
        return np.array(rows).reshape(len(bits), len(pairs[0])).T

    def slack_off_ratio(self, bit_depth: ArrayLike, cased: float, open_hole: float) -> Floats:
        """Largest load ratio anywhere while slacking off with the bit free, shape (k,)."""
        bits = np.atleast_1d(np.asarray(bit_depth, dtype=float))
        return press_many(self.setting(cased, open_hole), bits)

    def torque(self, bit_depth: ArrayLike, factor: float, scale: ArrayLike = 1.0) -> Floats:
        """Torque that turns the string off bottom at rotational friction `factor` [N.m], shape (k,)."""
        bits = np.atleast_1d(np.asarray(bit_depth, dtype=float))
        scales = np.broadcast_to(np.asarray(scale, dtype=float), bits.shape).copy()
        mu = np.full(len(self.hole.cos_i), factor)
        return torque_up_many(self.hole_arrays, self.pipe_arrays, mu, bits, scales)

    def open_length(self, bit_depth: ArrayLike) -> Floats:
        """Length of string in open hole [m], shape (k,)."""
        bits = np.atleast_1d(np.asarray(bit_depth, dtype=float))
        total = np.concatenate([[0.0], np.cumsum(self.hole.open_hole[1:]) * self.hole.step])
        return np.interp(bits, np.arange(len(total)) * self.hole.step, total)

    def above_rotary(self, block: ArrayLike, bit_depth: ArrayLike) -> Floats:
        """Weight of pipe between rotary and hook at block height and bit depth [m], at full share [N]."""
        height = np.atleast_1d(np.asarray(block, dtype=float)) - self.block_zero
        bits = np.maximum(np.nan_to_num(np.atleast_1d(np.asarray(bit_depth, dtype=float))), 0.0)
        return weight_in_air(self.pipe, bits, np.maximum(np.nan_to_num(height), 0.0))
