"""Pressure as a witness of the bit load: a motor's differential, or the standpipe's at like flow."""

from __future__ import annotations

from dataclasses import dataclass, replace
from functools import cached_property

import numpy as np
from numpy.typing import NDArray
from scipy.ndimage import minimum_filter1d, uniform_filter1d

from forensics.loads import Basis, Response
from forensics.logs.table import TimeLog
from forensics.replay.windows import Windows
from forensics.replay.witness.respond import Heard, judge, learn, read_off
from forensics.replay.witness.zero import zero_line
from forensics.rig.view import Activity, RigView

Floats = NDArray[np.float64]
Bools = NDArray[np.bool_]

LIKE_FLOW = 0.05  # pressures at flows further apart than this say nothing of the bit load
SAME_FLOW = 0.015  # and nearer than this they are one flow
SETTLING = 10.0  # s before and after a change of flow that say nothing
FLOW_EXPONENT = 1.8  # turbulent losses in pipe; common practice, no source
LEAST_ZERO_SECONDS = 20.0
CLEAR = 1.0  # m off bottom from which nothing rests on the bit

NAMES = {"differential_pressure": "differential pressure", "standpipe_pressure": "standpipe pressure"}


@dataclass(frozen=True)
class Lesson:
    """What a witness learns from: the run, its rotary windows, and the bit load while turning (n,) [N]."""

    log: TimeLog
    rig: RigView
    windows: Windows
    load: Floats

    @cached_property
    def like(self) -> tuple[Bools, Floats]:
        """Rows with the flow drilled with, and the flow over it; see `like_flow`."""
        return like_flow(self.log, self.rig)

    @cached_property
    def clear(self) -> Bools:
        """Rows with the pumps on and the bit clear of bottom, shape (n,)."""
        gap = self.rig.hole_depth - self.log.values["bit_depth"]
        return self.rig.pumping & ~self.rig.on_bottom & ~self.rig.slips & (gap > CLEAR)


def hear_pressure(lesson: Lesson, channel: str) -> Heard | Response:
    """Learn a pressure's answer to load, and read the bit load off it.

    Parameters
    ----------
    lesson : Lesson
        The run.
    channel : str
        "differential_pressure" or "standpipe_pressure".

    Returns
    -------
    Heard or Response
        The response alone, with the reason, where it is not believed.
    """
    log, rig = lesson.log, lesson.rig
    response = Response(NAMES[channel], Basis.DIFFERENTIAL)
    pressure = log.get(channel)
    if pressure is None:
        return replace(response, why="not in the log")
    like, ratio = lesson.like
    # losses in pipe grow with flow; a motor's part goes with its torque and does not
    lift = ratio**FLOW_EXPONENT if channel == "standpipe_pressure" else np.ones(len(log))
    zero = zero_line(log.time, pressure / lift, lesson.clear & like, LEAST_ZERO_SECONDS)
    if zero is None:
        return replace(response, why="it has no reading off bottom at the flow drilled with")
    beyond = np.where(like, pressure - zero.line * lift, np.nan)
    response = judge(learn(response, beyond, lesson.load, lesson.windows))
    unlike = int((rig.pumping & rig.on_bottom & ~like).sum())
    if unlike:
        response = replace(response, set_aside={"flow unlike that of the zero": unlike})
    if not response.heard:
        return response
    return read_off(response, beyond, zero, ~(rig.pumping & like), lesson.windows.step)


def like_flow(log: TimeLog, rig: RigView) -> tuple[Bools, Floats]:
    """Rows with the flow drilled with, and the flow over it; shape (n,) each.

    Where the log has no flow, every row with the pumps on.
    """
    flow = log.get("flow_in")
    drilling = rig.pumping & np.isin(rig.activity, (Activity.DRILL_ROTATE, Activity.DRILL_SLIDE))
    if flow is None or not np.isfinite(flow[drilling]).any():
        return rig.pumping.copy(), np.ones(len(log))
    usual = float(np.nanmedian(flow[drilling]))
    known = np.isfinite(flow)
    ratio = np.interp(log.time, log.time[known], flow[known]) / usual
    like = np.abs(uniform_filter1d(ratio, 3) - 1.0) < LIKE_FLOW
    # while the flow changes the pressure goes ahead of it, or lags behind
    edge = max(1, round(SETTLING / log.interval))
    like = minimum_filter1d((like & rig.pumping).astype(np.int8), 2 * edge + 1) > 0
    level = uniform_filter1d(ratio, 4 * edge + 1)
    # a meter's own noise would be read as pressure
    return like, np.where(like & (np.abs(level - 1.0) > SAME_FLOW), level, 1.0)
