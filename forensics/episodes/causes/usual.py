"""What is usual in one run, to hold an episode's readings against; each worked out once."""

from __future__ import annotations

from functools import cached_property

import numpy as np
from numpy.typing import NDArray

from forensics.episodes.catalogue import Kind
from forensics.episodes.find import flag_rows, span_rule
from forensics.episodes.material import NOISE_MULTIPLE, Material
from forensics.episodes.spans import find_spans
from forensics.rig.view import Activity

Floats = NDArray[np.float64]

#: An in-slips hookload this far off the run's is a shift of the sensor [N].
SLIPS_SHIFT = 10.0e3

#: Turbulent pressure losses go with flow to about this power (trade rule, from memory).
FLOW_POWER = 1.8

#: Rows that a slope of differential pressure against weight is read over.
SLOPE_ROWS = 60

#: Channels that tell causes apart, besides time, bit depth and hookload.
WANTED = ("block_position", "rpm", "torque", "standpipe_pressure", "flow_in", "differential_pressure")

FEWEST = 5


class Usual:
    """Usual values of one run.

    Parameters
    ----------
    material : Material
    """

    def __init__(self, material: Material) -> None:
        self.material = material
        self._channels: dict[str, Floats | None] = {}

    @cached_property
    def in_slips(self) -> Floats:
        """Hookload in slips, shape (n,), NaN elsewhere [N]."""
        return np.where(self.material.rig.slips, self.material.rig.hookload, np.nan)

    @cached_property
    def slips_level(self) -> tuple[float, float]:
        """Median in-slips hookload and what counts as a shift of it [N]; NaN where there is too little."""
        known = self.in_slips[np.isfinite(self.in_slips)]
        if len(known) < FEWEST:
            return float("nan"), float("nan")
        centre = float(np.median(known))
        scatter = 1.4826 * float(np.median(np.abs(known - centre)))
        return centre, max(SLIPS_SHIFT, 3.0 * scatter, NOISE_MULTIPLE * self.material.noise("hookload"))

    @cached_property
    def pressure(self) -> Floats:
        """Standpipe pressure brought to usual flow, shape (n,), NaN where the pumps are off [Pa]."""
        material = self.material
        pressure, flow = material.log.get("standpipe_pressure"), material.log.get("flow_in")
        usual = material.rig.usual_flow
        if pressure is None or flow is None or not np.isfinite(usual) or usual <= 0.0:
            return np.full(len(material.time), np.nan)
        share = flow / usual
        with np.errstate(invalid="ignore", divide="ignore"):
            steady = material.rig.pumping & (share > 0.7) & (share < 1.3)
            return np.where(steady, pressure / share**FLOW_POWER, np.nan)

    @cached_property
    def drag(self) -> Floats:
        """Drag beyond the model over its threshold, shape (n,)."""
        return self.material.drag / self.material.drag_threshold

    @cached_property
    def torque(self) -> Floats:
        """Torque beyond the model over its threshold, shape (n,)."""
        return self.material.loads.torque_residual / self.material.torque_threshold

    @cached_property
    def dragging(self) -> float:
        """Part of the run's readings going up or down that are beyond the threshold; NaN for few."""
        known = np.isfinite(self.drag) & (self.material.friction_sign != 0)
        return float((self.drag[known] > 1.0).mean()) if known.sum() >= SLOPE_ROWS else float("nan")

    @cached_property
    def turning(self) -> float:
        """Median hookload less model while turning off bottom, over the threshold; NaN for few."""
        m = self.material
        turned = m.rig.turning & np.isfinite(m.loads.drag_residual)
        if turned.sum() < SLOPE_ROWS:
            return float("nan")
        return float(np.median(m.loads.drag_residual[turned] / m.drag_threshold[turned]))

    @cached_property
    def returns(self) -> tuple[Floats, float]:
        """Flow out over flow in, shape (n,), NaN where the pumps are off; and its median."""
        out, into = self.material.log.get("flow_out"), self.material.log.get("flow_in")
        if out is None or into is None:
            return np.full(len(self.material.time), np.nan), float("nan")
        with np.errstate(divide="ignore", invalid="ignore"):
            share = np.where(self.material.rig.pumping & (into > 0.0), out / into, np.nan)
        known = share[np.isfinite(share)]
        return share, float(np.median(known)) if len(known) else float("nan")

    def channel(self, name: str) -> Floats | None:
        """Values of a channel of the log [SI], or None; looked up once."""
        if name not in self._channels:
            self._channels[name] = self.material.log.get(name)
        return self._channels[name]

    @cached_property
    def by_depth(self) -> tuple[NDArray[np.int64], Floats]:
        """Rows that have a bit depth, in its order, and those depths [m]."""
        order = np.argsort(self.material.bit, kind="stable")
        order = order[: int(np.isfinite(self.material.bit).sum())]
        return order, self.material.bit[order]

    def rows_at(self, depth: float, within: float) -> NDArray[np.int64]:
        """Rows, in order of time, with the bit within so many metres of a depth."""
        order, depths = self.by_depth
        first, stop = np.searchsorted(depths, [depth - within, depth + within]).tolist()
        return np.sort(order[first:stop])

    @cached_property
    def lacking(self) -> int:
        """How many of the wanted channels the log lacks."""
        return sum(self.channel(name) is None for name in WANTED)

    @cached_property
    def places(self) -> dict[Kind, Floats]:
        """Bit depth of every span in which a kind's rule held [m]."""
        flags, _ = flag_rows(self.material)
        found = {}
        for kind, flagged in flags.items():
            spans, _ = find_spans(flagged, self.material.time, span_rule(self.material, kind))
            found[kind] = np.array([np.median(self.material.bit[span.rows]) for span in spans])
        return found

    @cached_property
    def drilling(self) -> NDArray[np.bool_]:
        """Rows that drill, shape (n,)."""
        return np.isin(self.material.rig.activity, (Activity.DRILL_SLIDE, Activity.DRILL_ROTATE))

    @cached_property
    def differential(self) -> float:
        """Median differential pressure while drilling [Pa]; NaN where there is none."""
        return self._while_drilling(self.material.log.get("differential_pressure"))

    @cached_property
    def rate(self) -> float:
        """Median rate at which the hole got deeper while drilling [m/s]; NaN where it didn't."""
        return self._while_drilling(self.progress)

    @cached_property
    def progress(self) -> Floats:
        """Rate at which the hole gets deeper, over half a minute, shape (n,) [m/s]."""
        time, hole = self.material.time, self.material.rig.hole_depth
        before = np.searchsorted(time, time - self.material.window(30.0))
        with np.errstate(invalid="ignore", divide="ignore"):
            return (hole - hole[before]) / np.maximum(time - time[before], self.material.log.interval)

    @cached_property
    def response(self) -> float:
        """Differential pressure answering surface weight in drilling rows [Pa/N]; NaN where it shows none."""
        rows = np.flatnonzero(self.drilling)
        return slope(self.material, rows)

    def _while_drilling(self, values: Floats | None) -> float:
        if values is None:
            return float("nan")
        known = values[self.drilling & np.isfinite(values)]
        return float(np.median(known)) if len(known) >= SLOPE_ROWS else float("nan")


def slope(material: Material, rows: NDArray[np.int64]) -> float:
    """Slope of differential pressure (else of standpipe pressure) against re-zeroed surface weight.

    Parameters
    ----------
    material : Material
    rows : ndarray of int, shape (m,)

    Returns
    -------
    float
        [Pa/N]; NaN where a channel is missing or the weight hardly varies.
    """
    pressure = material.log.get("differential_pressure")
    pressure = pressure if pressure is not None else material.log.get("standpipe_pressure")
    if pressure is None:
        return float("nan")
    weight, answer = material.rig.wob_surface[rows], pressure[rows]
    known = np.isfinite(weight) & np.isfinite(answer)
    weight, answer = weight[known], answer[known]
    if len(weight) < FEWEST or np.std(weight) < max(3.0e3, NOISE_MULTIPLE / 2 * material.noise("hookload")):
        return float("nan")
    return float(np.cov(weight, answer)[0, 1] / np.var(weight, ddof=1))
