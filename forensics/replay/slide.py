"""How much of the weight lost while sliding is ordinary drag, and how much came with the helix."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from forensics.mechanics.kernels_replay import SLIDE, Found
from forensics.mechanics.offbottom import OffBottomModel
from forensics.replay.samples import Prepared

Floats = NDArray[np.float64]


THINNED_SECONDS = 15.0  # ordinary drag changes little in less


def straight_drag(
    model: OffBottomModel, prepared: Prepared, factors: tuple[float, ...], found: Found, lost: Floats
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
    bit, load, down, scale = (
        column[thin] for column in (samples.bit, found.bit_load, samples.down, samples.scale)
    )
    sliding = model.loaded_weight(bit, load, [factor * down for factor in factors], scale)
    # without friction the tension at the rotary is what hangs less what stands on the bit
    hanging = model.string_weight("rotating", bit, 0.0, 0.0, scale=scale)
    drag = np.interp(rows, thin, hanging - load - sliding)
    ordinary[rows] = np.minimum(drag, lost[rows])
    return ordinary
