"""Steady weight and torque readings, as the calibration takes them."""

from __future__ import annotations

import numpy as np

from forensics.friction.result import Reading
from forensics.logs.table import TimeLog
from forensics.rig.steady import KINDS
from forensics.rig.view import RigView
from forensics.well.model import Well


def find_readings(log: TimeLog, rig: RigView, well: Well) -> tuple[Reading, ...]:  # noqa: ARG001
    """Every usable steady reading off bottom, in time order.

    Parameters
    ----------
    log : TimeLog
        For the stamps.
    rig : RigView
        Holds the steady moments found while the rig's references were made: off bottom, motion held,
        rotation clean, speed steady, flow unchanged, breakover left out.
    well : Well
        Not needed today; a reading's place is its bit depth.

    Returns
    -------
    tuple of Reading
        Pick-up, slack-off and rotating weights [N], and off-bottom torque [N.m].
    """
    out: list[Reading] = []
    steady = rig.steady
    for k in range(0 if steady is None else len(steady)):
        common = {
            "start": float(log.time[steady.start[k]]),
            "end": float(log.time[steady.stop[k] - 1]),
            "bit_depth": float(steady.bit[k]),
            "block": float(steady.block[k]),
            "samples": int(steady.stop[k] - steady.start[k]),
            "pumping": bool(steady.pumping[k]),
            "speed": abs(float(steady.speed[k])),
            "rpm": float(steady.rpm[k]),
        }
        kind = KINDS[steady.kind[k]]
        out.append(Reading(kind=kind, value=float(steady.value[k]), spread=float(steady.spread[k]), **common))
        if kind == "rotating" and np.isfinite(steady.torque[k]):
            turn = float(steady.torque[k])
            out.append(Reading(kind="torque", value=turn, spread=float(steady.torque_spread[k]), **common))
    return tuple(out)
