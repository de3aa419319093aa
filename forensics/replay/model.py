"""The well, string and criteria as the replay's kernels take them."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from forensics.case import Case, CriteriaSettings
from forensics.friction.result import Calibration
from forensics.mechanics.critical import HELICAL_ONSETS
from forensics.mechanics.eigen import load_table
from forensics.mechanics.grid import MIN_CLEARANCE, averaged, wave_length
from forensics.mechanics.kernels_judge import Criteria
from forensics.mechanics.offbottom import OffBottomModel
from forensics.well.model import Well

Floats = NDArray[np.float64]

WINDOW_CLASS = 2.0  # m; waves are grouped to this, so that few averages are kept
DEFAULT_FACTORS = {"cased": 0.20, "open": 0.28}  # common practice, no source


@dataclass(frozen=True)
class LoadModel:
    """Off-bottom model and criteria of one well, string and clearance choice."""

    offbottom: OffBottomModel
    criteria: Criteria

    def friction(self, cased: float, open_hole: float) -> Floats:
        """Friction factor by depth of the hole grid, shape (n,)."""
        return self.offbottom.friction(cased, open_hole)


def build_model(well: Well, case: Case, depth: float, block_zero: float = 0.0) -> LoadModel:
    """Tabulate the well for bits down to `depth` [m]; `block_zero` as in `OffBottomModel`."""
    settings = case.criteria
    offbottom = OffBottomModel(
        well, depth, settings.clearance, HELICAL_ONSETS[settings.helical_onset].factor, block_zero
    )
    return LoadModel(offbottom, _criteria(well, offbottom, settings))


def _criteria(well: Well, model: OffBottomModel, settings: CriteriaSettings) -> Criteria:
    pipe, hole = model.pipe, model.hole
    _, first, kind = np.unique(pipe.component, return_index=True, return_inverse=True)
    gap = 0.5 * (hole.diameter[None, :] - pipe.clearance_od[first][:, None])
    typical = np.maximum(np.median(gap, axis=1), MIN_CLEARANCE)
    waves = np.round(wave_length(pipe.ei[first], typical, pipe.weight[first]) / WINDOW_CLASS) * WINDOW_CLASS
    means = {wave: averaged(hole, well, float(wave)) for wave in np.unique(waves)}
    a, b, c = (np.array([means[wave][k] for wave in waves]) for k in range(3))
    along = pipe.weight[first][:, None] * np.maximum(hole.cos_i, 0.0)
    free = gap >= MIN_CLEARANCE
    root = np.where(free, 2.0 * np.sqrt(pipe.ei[first][:, None] / np.where(free, gap, 1.0)), np.inf)
    return Criteria(
        kind=kind.astype(np.int64),
        a=a,
        b=b,
        c=c,
        root=root,
        cube=np.cbrt(pipe.ei[first][:, None] * along**2),
        stiff_run=pipe.stiff_run,
        onset=float(HELICAL_ONSETS[settings.helical_onset].factor),
        envelope=int(settings.helical_release == "envelope"),
        table=load_table().as_tuple(),
    )


def factors(calibration: Calibration) -> tuple[float, float]:
    """Cased and open-hole friction factors; the default where the hole has no such stretch."""
    found = {section.kind: section.factor.value for section in calibration.sections}
    return tuple(found.get(kind, DEFAULT_FACTORS[kind]) for kind in ("cased", "open"))  # type: ignore[return-value]
