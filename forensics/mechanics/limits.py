"""What each place of a well is judged by, tabulated for the compiled kernels."""

from __future__ import annotations

import numpy as np

from forensics.case import CriteriaSettings
from forensics.mechanics.critical import HELICAL_ONSETS
from forensics.mechanics.eigen import load_table
from forensics.mechanics.grid import MIN_CLEARANCE, HoleGrid, PipeGrid, averaged, wave_length
from forensics.mechanics.kernels_judge import Criteria
from forensics.well.model import Well

WINDOW_CLASS = 2.0  # m; waves are grouped to this, so that few averages are kept


def tabulate(well: Well, hole: HoleGrid, pipe: PipeGrid, settings: CriteriaSettings) -> Criteria:
    """Tabulate the criteria of `[criteria]` over depth, for each kind of pipe in the string."""
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
