"""What each place of a well is judged by, tabulated for the compiled kernels."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from forensics.case import CriteriaSettings
from forensics.mechanics.critical import HELICAL_ONSETS
from forensics.mechanics.eigen import LENGTH_RANGE, OFFSET, SHORTEST, load_table
from forensics.mechanics.grid import MIN_CLEARANCE, HoleGrid, PipeGrid, averaged, wave_length
from forensics.mechanics.kernels_judge import (
    CONSTANT,
    CUBE,
    GIVE,
    LENGTH,
    LINEAR,
    SQUARE,
    TAKEN,
    Criteria,
)

Floats = NDArray[np.float64]

SUPPORT = 1e30  # N; the load at which a place without clearance would buckle
WINDOW_CLASS = 2.0  # m; waves are grouped to this, so that few averages are kept


def tabulate(hole: HoleGrid, pipe: PipeGrid, settings: CriteriaSettings) -> Criteria:
    """Tabulate the criteria of `[criteria]` over depth, for each kind of pipe in the string."""
    _, first, kind = np.unique(pipe.component, return_index=True, return_inverse=True)
    looks = slice(None, None, hole.coarse)
    gap = 0.5 * (hole.diameter[looks][None, :] - pipe.clearance_od[first][:, None])
    typical = np.maximum(np.median(gap, axis=1), MIN_CLEARANCE)
    waves = np.round(wave_length(pipe.ei[first], typical, pipe.weight[first]) / WINDOW_CLASS) * WINDOW_CLASS
    means = {wave: averaged(hole, float(wave)) for wave in np.unique(waves)}
    a, b, c = (np.array([means[wave][k] for wave in waves]) for k in range(3))
    weight, ei = pipe.weight[first][:, None], pipe.ei[first][:, None]
    free = gap >= MIN_CLEARANCE
    root2 = 4.0 * ei / np.where(free, gap, 1.0)
    along = weight * np.maximum(hole.cos_i[looks], 0.0)
    cube = np.cbrt(ei * along**2)
    at = np.zeros((*gap.shape, 7))
    at[..., SQUARE] = np.where(free, root2**2 * a, 0.0)
    at[..., LINEAR] = np.where(free, 2.0 * weight * root2**2 * b, 0.0)
    at[..., CONSTANT] = np.where(free, weight**2 * root2**2 * c, SUPPORT**4)
    at[..., CUBE] = np.where(free, cube, 0.0)
    at[..., LENGTH] = _length_places(pipe.stiff_run[first][:, None], along, cube)
    at[..., GIVE] = np.where(free, 1.0 / root2, 0.0)
    at[..., TAKEN] = _taken(hole, pipe)[looks]
    return Criteria(
        kind=kind.astype(np.int64),
        at=_fine(at, hole.coarse),
        onset=float(HELICAL_ONSETS[settings.helical_onset].factor),
        envelope=int(settings.helical_release == "envelope"),
        table=load_table().as_tuple(),
    )


def _taken(hole: HoleGrid, pipe: PipeGrid) -> Floats:
    """Torque that turning takes above each depth at a friction of one, the bit at the deepest [N.m].

    Its shape along the hole stands for all depths of the bit.
    """
    above_bit = (len(hole.cos_i) - 1 - np.arange(len(hole.cos_i))) * hole.step
    j = np.clip(np.searchsorted(pipe.x, above_bit, side="right") - 1, 0, len(pipe.ei) - 1)
    hangs = pipe.weight[j] * hole.cos_i * hole.step
    tension = np.cumsum(hangs[::-1])[::-1]
    square = tension * (tension * hole.kappa2 + 2.0 * pipe.weight[j] * hole.kappa_d)
    contact = np.sqrt(np.maximum(square + pipe.weight[j] ** 2 * hole.sin2, 0.0))
    return np.cumsum(contact * pipe.radius[j]) * hole.step


def _fine(at: Floats, coarse: int) -> Floats:
    """Give every step the row of the look it shares."""
    kinds, looks, columns = at.shape
    fine = np.empty((kinds, looks, coarse, columns))
    fine[:] = at[:, :, None]
    return fine.reshape(kinds, looks * coarse, columns)


def _length_places(run: Floats, along: Floats, cube: Floats) -> Floats:
    """Give the place of the stiff length in the table of coefficients, as `length_place` does."""
    scaled = np.divide(run * along, cube, out=np.zeros_like(cube), where=cube > 0.0)
    inside = scaled > SHORTEST
    return np.where(inside, np.log(np.where(inside, scaled - OFFSET, 1.0)), LENGTH_RANGE[0])
