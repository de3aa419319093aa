"""How much weight could have reached the bit: the limit that lockup sets, and how far off it was."""

from __future__ import annotations

import numpy as np
from numba import njit
from numpy.typing import NDArray

from forensics.mechanics.kernels_judge import Setting, stand_at
from forensics.mechanics.kernels_march import Array
from forensics.mechanics.kernels_memory import Memory, march_down
from forensics.mechanics.kernels_replay import Samples
from forensics.mechanics.offbottom import OffBottomModel
from forensics.replay.room import fresh

Floats = NDArray[np.float64]

THINNED_SECONDS = 30.0  # the limit moves with bit depth and friction only


@njit(cache=True, nogil=True)
def _limits(setting: Setting, memory: Memory, bits: Array, scale: Array, down: Array) -> Array:
    """Bit load of a string sliding down with nothing left on the hook [N]."""
    result = np.empty(len(bits))
    nothing = np.zeros(3)
    for k in range(len(bits)):
        memory.state[:] = 0
        place = stand_at(setting.hole, setting.pipe, bits[k], scale[k], nothing)
        march_down(setting, memory, place, down[k], 0.0, False)
        result[k] = max(-memory.tension[0], 0.0)
    return result


def bit_load_limit(
    model: OffBottomModel, samples: Samples, rows: NDArray[np.bool_], factors: tuple[float, float]
) -> Floats:
    """Most bit load that any slacking off could give, at the rows asked for [N]; NaN elsewhere, shape (n,).

    Parameters
    ----------
    model : OffBottomModel
        The well as the kernels take it.
    samples : Samples
        Of the whole run.
    rows : ndarray of bool, shape (n,)
        Rows while sliding.
    factors : tuple of float
        Cased and open friction factors.

    Notes
    -----
    The string slides down as a whole with no weight left on the hook: from there on the block can push no
    further. Helices form on the way wherever the march passes their onset; what the pipe would stand is not
    asked.
    """
    limit = np.full(len(rows), np.nan)
    chosen = np.flatnonzero(rows)
    if len(chosen) == 0:
        return limit
    thin = chosen[:: max(1, round(THINNED_SECONDS / float(np.median(samples.step[1:]))))]
    memory, _ = fresh(model)
    found = _limits(
        model.setting(*factors), memory, samples.bit[thin], samples.scale[thin], samples.down[thin]
    )
    limit[chosen] = np.interp(chosen, thin, found)
    return limit
