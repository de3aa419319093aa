"""What a run's data will let the analysis tell, before any load is reckoned."""

from __future__ import annotations

import enum
from collections.abc import Callable
from dataclasses import dataclass

import numpy as np

from forensics.logs.table import TimeLog
from forensics.rig.absent import SLOW

#: From this interval on, a helix that comes and goes within a minute is seen by a sample or two [s].
COARSE = 20.0

#: Less bit travel than this is one or two stands: friction would rest on one depth [m].
SHORT = 60.0


class Verdict(enum.StrEnum):
    """How far something can be told."""

    YES = "yes"
    PARTLY = "partly"
    NO = "no"


@dataclass(frozen=True)
class Prospect:
    """One thing the analysis is asked for, whether the data will show it, and why or why not."""

    name: str
    verdict: Verdict
    why: str


def prospects(log: TimeLog, with_well: bool) -> tuple[Prospect, ...]:
    """Say what the run's data will let the analysis tell.

    Parameters
    ----------
    log : TimeLog
        The SI table of the run.
    with_well : bool
        Whether survey, hole, string and mud could be read.

    Returns
    -------
    tuple of Prospect
        In the order in which a report would speak of them.
    """
    judged = [Prospect(name, *judge(log)) for name, judge in _JUDGES]
    if with_well:
        return tuple(judged)
    why = "survey, hole, string and mud are needed"
    needing = {name for name, _ in _JUDGES} - {"activity"}
    return tuple(Prospect(p.name, Verdict.NO, why) if p.name in needing else p for p in judged)


def _has(log: TimeLog, *names: str) -> bool:
    return any(log.get(name) is not None for name in names)


def _activity(log: TimeLog) -> tuple[Verdict, str]:
    lacking = [
        words
        for words, names in (
            ("rotation (rpm or torque)", ("rpm", "torque")),
            ("pumps (flow or standpipe pressure)", ("flow_in", "standpipe_pressure")),
        )
        if not _has(log, *names)
    ]
    if lacking:
        return Verdict.PARTLY, f"nothing shows {' or '.join(lacking)}, so some states stay unnamed"
    if not _has(log, "block_position"):
        return Verdict.PARTLY, "no block position: slips and small moves are read from bit depth and hookload"
    return Verdict.YES, "block, rotation and pumps are logged"


def _loads(log: TimeLog) -> tuple[Verdict, str]:
    if log.interval >= COARSE:
        return Verdict.PARTLY, f"one row every {log.interval:.0f} s: loads between rows are not seen"
    if not _has(log, "rpm", "torque"):
        return Verdict.PARTLY, "rotation is guessed, and rotation is what frees the string of drag"
    if not _has(log, "block_position"):
        return Verdict.PARTLY, "without block position a pick-up is told from the hookload alone"
    return Verdict.YES, "hookload, bit depth, block and rotation are logged"


def _friction(log: TimeLog) -> tuple[Verdict, str]:
    depth = log.values["bit_depth"]
    travel = float(np.nanmax(depth) - np.nanmin(depth))
    if log.interval >= SLOW:
        return Verdict.PARTLY, f"one row every {log.interval:.0f} s: many weight checks are too short to read"
    if travel < SHORT:
        return Verdict.PARTLY, f"the bit moved over {travel:.0f} m only: cased and open hole can't be parted"
    return Verdict.YES, "where the log holds steady pick-ups, slack-offs or rotating weights off bottom"


def _torque(log: TimeLog) -> tuple[Verdict, str]:
    if not _has(log, "torque"):
        return Verdict.NO, "no torque in the log"
    return Verdict.YES, "torque is logged"


def _witness(log: TimeLog) -> tuple[Verdict, str]:
    found = [
        words
        for words, name in (
            ("downhole weight", "downhole_wob"),
            ("differential pressure", "differential_pressure"),
            ("standpipe pressure", "standpipe_pressure"),
        )
        if _has(log, name)
    ]
    if not found:
        return Verdict.NO, "neither downhole weight nor pressure is logged"
    return (Verdict.YES if found != ["standpipe pressure"] else Verdict.PARTLY), f"{', '.join(found)} logged"


def _indicator(log: TimeLog) -> tuple[Verdict, str]:
    if not _has(log, "wob"):
        return Verdict.NO, "the rig's own weight on bit is not in the log"
    return Verdict.YES, "the rig's weight on bit can be held against the re-zeroed one"


def _solids(log: TimeLog) -> tuple[Verdict, str]:
    pressure, flow = _has(log, "standpipe_pressure"), _has(log, "flow_in")
    if pressure and flow and _has(log, "torque"):
        return Verdict.YES, "pressure, flow and torque are logged"
    if pressure and flow:
        return Verdict.PARTLY, "pressure and flow are logged, torque is not"
    return Verdict.NO, "a rise of pressure at like flow can't be seen without both"


_JUDGES: tuple[tuple[str, Callable[[TimeLog], tuple[Verdict, str]]], ...] = (
    ("activity", _activity),
    ("axial load, buckling and lockup", _loads),
    ("friction from the run's own weights", _friction),
    ("torque beyond the model", _torque),
    ("bit load checked by a second witness", _witness),
    ("how the weight indicator was zeroed", _indicator),
    ("pack-off and poor cleaning told from friction", _solids),
)
