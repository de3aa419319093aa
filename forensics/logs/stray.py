"""Stamps out of line with the rows around them: a date that changes late, a stamp gone wrong."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from forensics.logs.join import interval_of
from forensics.logs.spikes import median_of_five
from forensics.logs.table import Step

Floats = NDArray[np.float64]
DAY = 86400.0
# A stamp this far from its neighbours is no late row [s].
FAR = 3600.0
# Longest stretch for which a date may lag behind its clock at midnight [rows].
LAG_ROWS = 300


def mend_stamps(time: Floats, name: str) -> tuple[Floats, list[Step]]:
    """Mend dates that lag at midnight and blank stamps that fit nowhere.

    Parameters
    ----------
    time : ndarray, shape (n,)
        Stamps in the order of the rows, NaN where unreadable [s].
    name : str
        The file's name, for the account.

    Returns
    -------
    time : ndarray, shape (n,)
        Stamps, NaN where a stamp was blanked.
    steps : list of Step
        What was done, to how many rows.

    Notes
    -----
    A date column is often written a moment before or after the clock turns: the rows between jump by a
    day and back. A lone stamp an hour and more from both neighbours is a fault of writing.
    """
    place = np.flatnonzero(np.isfinite(time))
    if len(place) < 5 or (np.diff(time[place]) > 0).all():
        return time, []
    out, steps = time.copy(), []
    near = max(60.0, 20.0 * interval_of(time[place]))
    lagging = _lagging(out[place], near)
    if lagging.any():
        out[place] += lagging
        detail = f"{name}: the date changed before or after its midnight"
        steps.append(Step("date mended at midnight", int((lagging != 0).sum()), detail=detail))
    far = np.abs(out[place] - median_of_five(out[place])) > max(FAR, 100.0 * interval_of(out[place]))
    if far.any() and far.mean() < 0.05:
        out[place[far]] = np.nan
        steps.append(
            Step("stamp out of line", int(far.sum()), detail=f"{name}: an hour or more from its neighbours")
        )
    return out, steps


def _lagging(time: Floats, near: float) -> Floats:
    """Give the day to add to each row between a jump of a day and the jump back."""
    shift = np.zeros(len(time))
    step = np.diff(time)
    jumps = np.flatnonzero(np.abs(np.abs(step) - DAY) <= near)
    i = 0
    while i + 1 < len(jumps):
        out, back = int(jumps[i]), int(jumps[i + 1])
        if (
            step[out] * step[back] < 0
            and back - out <= LAG_ROWS
            and abs(time[back + 1] - time[out]) <= (back - out) * near
        ):
            shift[out + 1 : back + 1] = -DAY * np.sign(step[out])
            i += 2
        else:
            i += 1
    return shift
