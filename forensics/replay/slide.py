"""How much of the weight lost while sliding is ordinary drag, and how much came with the helix."""

from __future__ import annotations

import numpy as np
from numba import njit
from numpy.typing import NDArray

from forensics.mechanics.kernels_march import Array, Ask, Hole, Pipe, march_up
from forensics.mechanics.kernels_replay import SLIDE, Found
from forensics.mechanics.offbottom import OffBottomModel
from forensics.replay.samples import Prepared

Floats = NDArray[np.float64]


THINNED_SECONDS = 15.0  # ordinary drag changes little in less


@njit(cache=True)
def _top_many(hole: Hole, pipe: Pipe, mu: Array, rows: tuple[Array, Array, Array, Array]) -> Array:
    """Tension at the rotary of a string sliding down on a loaded bit, without helical contact [N]."""
    bits, loads, factor, scale = rows
    result = np.empty(len(bits))
    work = np.empty(len(pipe.x))
    for k in range(len(bits)):
        result[k] = march_up(hole, pipe, mu * factor[k], Ask(bits[k], 1.0, -loads[k], scale[k]), work)
    return result


def straight_drag(
    model: OffBottomModel, prepared: Prepared, factors: tuple[float, float], found: Found, lost: Floats
) -> Floats:
    """Ordinary sliding drag between surface and bit at each row, helical contact left out [N].

    Where no place is helical all lost weight is ordinary.
    """
    samples = prepared.samples
    ordinary = lost.copy()
    rows = np.flatnonzero((found.state == 2) & (samples.mode == SLIDE) & np.isfinite(lost))
    if len(rows) == 0:
        return ordinary
    thin = rows[:: max(1, round(THINNED_SECONDS / float(np.median(samples.step[1:]))))]
    hole, pipe = model.hole_arrays, model.pipe_arrays
    chosen = (samples.bit[thin], found.bit_load[thin], samples.down[thin], samples.scale[thin])
    sliding = _top_many(hole, pipe, model.friction(*factors), chosen)
    # without friction the tension at the rotary is what hangs less what stands on the bit
    hanging = model.string_weight("rotating", chosen[0], 0.0, 0.0, scale=chosen[3])
    drag = np.interp(rows, thin, hanging - chosen[1] - sliding)
    ordinary[rows] = np.minimum(drag, lost[rows])
    return ordinary
