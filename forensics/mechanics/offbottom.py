"""What the string should weigh and how hard it should turn off bottom, by the soft-string model."""

from __future__ import annotations

import copy
from collections.abc import Sequence
from dataclasses import dataclass
from functools import cached_property

import numpy as np
from numpy.typing import ArrayLike, NDArray

from forensics.case import CriteriaSettings
from forensics.mechanics.criteria_table import tabulate
from forensics.mechanics.grid import HoleGrid, PipeGrid, hole_grid, pipe_grid, weight_in_air
from forensics.mechanics.ground import Ground, build_ground, divide
from forensics.mechanics.kernels_judge import Setting
from forensics.mechanics.kernels_lanes import AtRotary, Strings, march_lanes
from forensics.mechanics.kernels_march import RUN_AWAY, Hole, Pipe
from forensics.well.model import Well

Floats = NDArray[np.float64]

SIGMA = {"pick_up": -1.0, "slack_off": 1.0, "rotating": 0.0}


@dataclass(frozen=True)
class Weighed:
    """What strings weigh at the rotary, bit free, and how that changes; k readings, S friction sections.

    Parameters
    ----------
    weight : ndarray, shape (k,)
        [N]; NaN where the string locks up under its own drag.
    slopes : ndarray, shape (k, S)
        Change with the friction factor of the cased hole and of each open section, in this order [N per 1].
    by_scale : ndarray, shape (k,)
        Change with the scale of all weights [N per 1].
    """

    weight: Floats
    slopes: Floats
    by_scale: Floats


def hole_arrays(hole: HoleGrid) -> Hole:
    """Give the hole grid as compiled code takes it."""
    return Hole(1.0 / hole.step, hole.cos_i, hole.sin2, hole.kappa2, hole.kappa_d, hole.diameter)


def pipe_arrays(pipe: PipeGrid) -> Pipe:
    """Give the pipe grid as compiled code takes it."""
    return Pipe(pipe.x, pipe.node, pipe.weight, pipe.ei, pipe.ea, pipe.clearance_od, pipe.radius)


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
        self.depth = depth
        self.block_zero = block_zero
        self.hole = hole = hole_grid(well, depth)
        self.settings = CriteriaSettings() if criteria is None else criteria
        self.pipe = pipe_grid(well, depth, self.settings.clearance)
        self.hole_arrays, self.pipe_arrays = hole_arrays(hole), pipe_arrays(self.pipe)
        self.criteria = tabulate(hole, self.pipe, self.settings)
        self.edges: tuple[float, ...] = ()
        self.section = hole.open_hole.astype(np.int64)
        self.smooth = self.setting(0.0, 0.0)  # strings side by side bring their own friction

    @cached_property
    def ground(self) -> Ground:
        """The hole as the march of strings side by side reads it."""
        return build_ground(self.hole, self.section, self.criteria)

    def divided(self, edges: Sequence[float]) -> OffBottomModel:
        """Cut the open hole into friction sections at measured depths; tables are shared.

        Parameters
        ----------
        edges : sequence of float
            Depths, ascending [m]; none leaves one open section. A section may lie outside the open hole: its
            factor then matters nowhere.

        Returns
        -------
        OffBottomModel
            `section` gives the friction section of each depth of the hole grid: 0 cased, 1 and on open.

        Raises
        ------
        ValueError
            When the depths don't ascend.
        """
        cuts = np.asarray(edges, dtype=float)
        if np.any(np.diff(cuts) <= 0.0):
            raise ValueError(f"edges came as {tuple(edges)}; expected ascending depths")
        other = copy.copy(self)
        other.edges = tuple(cuts.tolist())
        middle = (np.arange(len(self.hole.open_hole)) - 0.5) * self.hole.step
        open_section = 1 + np.searchsorted(cuts, middle, side="right")
        other.section = np.where(self.hole.open_hole, open_section, 0).astype(np.int64)
        other.ground = divide(self.ground, other.section)
        return other

    def setting(self, cased: float, *opened: float) -> Setting:
        """Put the well, the string and the criteria at the given friction as the kernels take them."""
        return Setting(self.hole_arrays, self.pipe_arrays, self.criteria, self.friction(cased, *opened))

    def friction(self, cased: float, *opened: float) -> Floats:
        """Friction factor at each depth of the hole grid, shape (n,).

        Parameters
        ----------
        cased : float
            In casing.
        *opened : float
            In each open section from the top, or one for all of them.
        """
        return self._factors((cased, *opened))[self.section]

    def _factors(self, factors: Sequence[ArrayLike]) -> Floats:
        """Factor of the cased hole and of each open section, shape (sections, ...)."""
        cased, *opened = (np.asarray(factor, dtype=float) for factor in factors)
        sections = len(self.edges) + 1
        if len(opened) == 1:
            opened = opened * sections
        if len(opened) != sections:
            raise ValueError(f"{len(opened)} open-hole factors came; expected 1 or {sections}")
        return np.array(np.broadcast_arrays(cased, *opened))

    def string_weight(
        self, kind: str, bit_depth: ArrayLike, cased: float, *opened: float, scale: ArrayLike = 1.0
    ) -> Floats:
        """Hookload of the string alone at the rotary, bit free [N], shape (k,).

        Parameters
        ----------
        kind : str
            "pick_up", "slack_off" or "rotating".
        bit_depth : array_like, shape (k,)
            [m]
        cased : float
            Friction factor in casing.
        *opened : float
            Friction factor in each open section from the top, or one for all of them.
        scale : array_like, shape () or (k,)
            Multiplies all weights (mud or weight-per-length correction).
        """
        return self._march(self._strings(bit_depth, SIGMA[kind], (cased, *opened), scale)).weight

    def string_weights(self, kind: str, bit_depth: ArrayLike, cased: ArrayLike, *opened: ArrayLike) -> Floats:
        """Hookload of the string alone at many friction factors, bit free [N], shape (strings, k).

        Parameters
        ----------
        kind : str
            "pick_up", "slack_off" or "rotating".
        bit_depth : array_like, shape (k,)
            [m]
        cased, *opened : array_like, shape (strings,)
            Friction factors, one of each for every string; one open factor serves all open sections.
        """
        bits = np.atleast_1d(np.asarray(bit_depth, dtype=float))
        factors = np.atleast_2d(self._factors((cased, *opened)).T).T
        count = factors.shape[1]
        # strings at one depth lie side by side: what the hole does there is then at hand
        strings = self._strings(np.repeat(bits, count), SIGMA[kind], np.tile(factors, len(bits)), 1.0)
        return self._march(strings).weight.reshape(-1, count).T

    def weigh_readings(
        self, kinds: Sequence[str], bit_depth: ArrayLike, factors: Sequence[float], scale: ArrayLike = 1.0
    ) -> Weighed:
        """Weigh strings of any depths and directions in one pass, their derivatives carried along.

        Parameters
        ----------
        kinds : sequence of str, length k
            "pick_up", "slack_off" or "rotating" each.
        bit_depth : array_like, shape (k,)
            [m]
        factors : sequence of float, length S
            Friction factor of the cased hole and of each open section (or one for all of those; slopes are
            of all sections all the same).
        scale : array_like, shape () or (k,)
            Multiplies all weights.

        Returns
        -------
        Weighed
            Weights and their derivatives. Where the string presses itself into a helix, derivatives are those
            at the helix's present extent.
        """
        sigma = np.array([SIGMA[kind] for kind in kinds], dtype=float)
        found = self._march(self._strings(bit_depth, sigma, factors, scale), slopes=True)
        return Weighed(found.weight, found.slopes[:, :-1], found.slopes[:, -1])

    def loaded_weight(
        self,
        bit_depth: ArrayLike,
        load: ArrayLike,
        factors: Sequence[ArrayLike],
        scale: ArrayLike = 1.0,
    ) -> Floats:
        """Hookload of a string that slides down on a loaded bit, no helix anywhere [N], shape (k,).

        Parameters
        ----------
        bit_depth : array_like, shape (k,)
            [m]
        load : array_like, shape () or (k,)
            Bit load [N].
        factors : sequence of array_like, length S, each of shape () or (k,)
            Friction factor of the cased hole and of each open section, or one for all of those.
        scale : array_like, shape () or (k,)
            Multiplies all weights.
        """
        strings = self._strings(bit_depth, SIGMA["slack_off"], factors, scale)
        loads = np.broadcast_to(np.asarray(load, dtype=float), strings.bit.shape)
        return self._march(strings._replace(load=loads), helices=False).weight

    def _strings(
        self, bit_depth: ArrayLike, sigma: ArrayLike, factors: Sequence[ArrayLike], scale: ArrayLike
    ) -> Strings:
        """Strings with free bits, what is one for all of them repeated."""
        bits = np.atleast_1d(np.asarray(bit_depth, dtype=float))
        sigmas, scales = (np.broadcast_to(np.asarray(v, dtype=float), bits.shape) for v in (sigma, scale))
        told = self._factors(factors)
        lanes = np.broadcast_to(told.reshape(len(told), -1), (len(told), len(bits)))
        return Strings(bits, sigmas, scales, np.zeros(len(bits)), lanes)

    def _march(
        self,
        strings: Strings,
        *,
        helices: bool = True,
        arm: bool = False,
        ratio: bool = False,
        slopes: bool = False,
    ) -> AtRotary:
        """March strings in the order of their depths; give what is asked in the order they came."""
        bits, deepest = strings.bit, (len(self.hole.cos_i) - 1.5) * self.hole.step
        if not np.all((bits >= 0.0) & (bits <= deepest)):
            came = f"{bits.min()} to {bits.max()} m"
            raise ValueError(f"bit depths of {came} came; expected 0 to {deepest} m, what the tables cover")
        order = slice(None) if np.all(bits[1:] >= bits[:-1]) else np.argsort(bits, kind="stable")
        # copies: one type for the compiler, which tells arrays that may not be written from those that may
        ordered = Strings(*(np.array(column[..., order], order="C") for column in strings))
        count, columns = len(bits), len(strings.factor) + 1 if slopes else 0
        sizes = (count, count if arm else 0, count if ratio else 0, (count, columns))
        found, placed = (AtRotary(*(np.empty(size) for size in sizes)) for _ in range(2))
        march_lanes(self.smooth, self.ground, ordered, helices, found)
        locked = found.weight < RUN_AWAY
        found.weight[locked], found.slopes[locked] = np.nan, np.nan
        found.ratio[locked[: len(found.ratio)]] = np.inf
        for column, where in zip(found, placed, strict=True):
            if len(column):
                where[order] = column
        return placed

    def slack_off_ratio(self, bit_depth: ArrayLike, cased: float, *opened: float) -> Floats:
        """Largest load ratio anywhere while slacking off with the bit free, shape (k,)."""
        strings = self._strings(bit_depth, SIGMA["slack_off"], (cased, *opened), 1.0)
        return self._march(strings, ratio=True).ratio

    def torque(self, bit_depth: ArrayLike, factor: float, scale: ArrayLike = 1.0) -> Floats:
        """Torque that turns the string off bottom at rotational friction `factor` [N.m], shape (k,)."""
        strings = self._strings(bit_depth, SIGMA["rotating"], (0.0, 0.0), scale)
        return factor * self._march(strings, arm=True).arm

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
