"""The run's usual in-slips hookload and standpipe pressure, to hold an episode's against."""

from __future__ import annotations

from functools import cached_property

import numpy as np
from numpy.typing import NDArray

from forensics.episodes.material import NOISE_MULTIPLE, Material

Floats = NDArray[np.float64]

#: An in-slips hookload this far off the run's is a shift of the sensor [N].
SLIPS_SHIFT = 10.0e3

#: A standpipe pressure this part above the usual, at usual flow, is a rise.
PRESSURE_RISE = 0.03

FEWEST = 5


class Signals:
    """Usual values of one run, worked out once.

    Parameters
    ----------
    material : Material
    """

    def __init__(self, material: Material) -> None:
        self.material = material

    @cached_property
    def _slips(self) -> Floats:
        """Hookload in slips, NaN elsewhere [N]."""
        return np.where(self.material.rig.slips, self.material.rig.hookload, np.nan)

    @cached_property
    def _usual_slips(self) -> tuple[float, float]:
        known = self._slips[np.isfinite(self._slips)]
        if len(known) < FEWEST:
            return float("nan"), float("nan")
        middle = float(np.median(known))
        return middle, 1.4826 * float(np.median(np.abs(known - middle)))

    def slips_shift(self, near: slice) -> float:
        """How far the in-slips hookload near an episode is off the run's, over what counts as a shift."""
        known = self._slips[near]
        known = known[np.isfinite(known)]
        middle, scatter = self._usual_slips
        if len(known) < FEWEST or not np.isfinite(middle):
            return float("nan")
        least = max(SLIPS_SHIFT, 3.0 * scatter, NOISE_MULTIPLE * self.material.noise("hookload"))
        return float((np.median(known) - middle) / least)

    @cached_property
    def _pressure(self) -> Floats:
        """Standpipe pressure brought to usual flow, NaN where the pumps are off or the flow unusual [Pa]."""
        material = self.material
        pressure, flow = material.log.get("standpipe_pressure"), material.log.get("flow_in")
        usual = material.rig.usual_flow
        if pressure is None or flow is None or not np.isfinite(usual) or usual <= 0.0:
            return np.full(len(material.time), np.nan)
        share = flow / usual
        with np.errstate(invalid="ignore", divide="ignore"):
            steady = material.rig.pumping & (share > 0.7) & (share < 1.3)
            return np.where(steady, pressure / share**1.8, np.nan)

    def pressure_rise(self, rows: slice) -> float:
        """Rise of pressure at like flow over the hours around, over what counts as a rise.

        Pressure losses go with flow to the power 1.8 or so in turbulent flow (trade rule, from memory).
        """
        material = self.material
        here = self._pressure[rows]
        here = here[np.isfinite(here)]
        time = material.time
        around = material.rows_between(time[rows.start] - 6.0 * 3600.0, time[rows.stop - 1] + 6.0 * 3600.0)
        usual = self._pressure[around]
        usual = usual[np.isfinite(usual)]
        if len(here) < FEWEST or len(usual) < 4 * len(here):
            return float("nan")
        middle = float(np.median(usual))
        least = max(PRESSURE_RISE * middle, NOISE_MULTIPLE * material.noise("standpipe_pressure"))
        return float((np.median(here) - middle) / least)
