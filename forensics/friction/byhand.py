"""Weights written down by the rig, as readings the fit can hear beside the log's own."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np

from forensics.friction.result import Reading
from forensics.rig.sheaves import direction_factor

if TYPE_CHECKING:
    from forensics.case import Case
    from forensics.logs.records import RecordedWeight
    from forensics.logs.table import TimeLog
    from forensics.rig.view import RigView

#: A weight noted by depth is taken to be from when the bit was nearest, if it came this near [m].
NEAR = 30.0

#: Which way the block goes for each kind: +1 down.
DIRECTION = {"pick_up": -1, "slack_off": 1, "rotating": 0}


def as_readings(
    recorded: tuple[RecordedWeight, ...], log: TimeLog, rig: RigView, case: Case
) -> tuple[Reading, ...]:
    """Turn recorded weights into readings, corrected as the log's are.

    Parameters
    ----------
    recorded : tuple of RecordedWeight
        As the indicator showed them.
    log : TimeLog
        Gives the time of a weight noted by depth.
    rig : RigView
        Gives the pump effect.
    case : Case
        Gives the sheaves.

    Returns
    -------
    tuple of Reading
        Those at a depth the log's bit came near; without a block height, which nobody notes.
    """
    bit = log.values["bit_depth"]
    known = np.flatnonzero(np.isfinite(bit))
    if not len(known):
        return ()
    made = []
    for weight in recorded:
        if not np.isfinite(weight.bit_depth):
            continue
        row = int(known[np.argmin(np.abs(bit[known] - weight.bit_depth))])
        if abs(bit[row] - weight.bit_depth) > NEAR:
            continue
        time = weight.time if np.isfinite(weight.time) else float(log.time[row])
        value = weight.value * direction_factor(DIRECTION[weight.kind], case.rig)
        if weight.pumping and rig.pump_shift is not None:
            value -= rig.pump_shift.value
        made.append(
            Reading(
                kind=weight.kind,
                start=time,
                end=time,
                bit_depth=weight.bit_depth,
                block=float("nan"),
                value=value,
                spread=0.0,
                samples=1,
                pumping=bool(weight.pumping),
                by_hand=True,
            )
        )
    return tuple(made)
