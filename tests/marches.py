"""The profile of one string, as the replay's compiled march gives it."""

from __future__ import annotations

import numpy as np

from forensics.mechanics.kernels_judge import stand_at
from forensics.mechanics.kernels_memory import rise
from forensics.mechanics.offbottom import OffBottomModel
from forensics.replay.room import fresh


def tension_from_bit(
    model: OffBottomModel, factor: float, bit: float, sigma: float, tension_bit: float = 0.0
) -> tuple[np.ndarray, np.ndarray]:
    """March up from the bit, no helix: depth of the nodes from the bit to the rotary [m], tension there [N].

    `sigma` is +1 going down, -1 going up, and less where rotation takes its share of the friction.
    """
    setting = model.setting(factor, factor)
    place = stand_at(setting.hole, setting.pipe, bit, 1.0, np.zeros(3))
    memory, _ = fresh(model)
    rise(setting, memory, place, float(sigma), float(tension_bit), False)
    nodes = place.top + 2
    return np.maximum(bit - model.pipe.x[:nodes], 0.0), memory.work[:nodes]
