"""Stamps out of line with the rows around them: a date that changes late, a stamp gone wrong."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from forensics.logs.piece import interval_of
from forensics.logs.spikes import median_of_five
from forensics.logs.table import Step

Floats = NDArray[np.float64]
DAY = 86400.0
# A stamp this far from its neighbours is no late row [s].
FAR = 3600.0
# Rows that share a stamp are readings of their own if this share of them differ.
OWN_READINGS = 0.3
# Longest stretch for which a date may lag behind its clock at midnight [rows].
LAG_ROWS = 300


def mend_stamps(time: Floats, name: str, telling: Floats | None = None) -> tuple[Floats, list[Step]]:
    """Mend dates that lag at midnight, part rows that share a stamp, and blank stamps that fit nowhere.

    Parameters
    ----------
    time : ndarray, shape (n,)
        Stamps in the order of the rows, NaN where unreadable [s].
    name : str
        The file's name, for the account.
    telling : ndarray, shape (n,), optional
        A lively channel: rows that share a stamp and differ in it are readings of their own.

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
    shift = _shared(out[place], None if telling is None else telling[place])
    if shift.any():
        out[place] += shift
        detail = f"{name}: stamps coarser than the rows; rows of one stamp spread evenly up to the next"
        steps.append(Step("stamp shared by rows", int((shift != 0).sum()), detail=detail))
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


def _shared(time: Floats, telling: Floats | None) -> Floats:
    """Give the time to add to each row where all stamps are shared by about as many rows [s]."""
    none = np.zeros(len(time))
    change = np.flatnonzero(np.diff(time, prepend=np.nan) != 0.0)
    counts = np.diff(change, append=len(time))
    inner = counts[1:-1] if len(counts) > 2 else counts
    usual = float(np.median(inner))
    step = interval_of(time)
    if telling is None or usual < 2.0 or not np.isfinite(step) or (np.diff(time) < 0).any():
        return none
    if (np.abs(inner - usual) > max(1.0, 0.1 * usual)).mean() > 0.2:
        return none
    inside = np.diff(telling)[np.diff(time) == 0.0]
    inside = inside[np.isfinite(inside)]
    if len(inside) == 0 or (inside != 0.0).mean() < OWN_READINGS:
        return none
    within = np.arange(len(time)) - np.repeat(change, counts)
    # The first stamp may be shared by fewer rows as recording began within it.
    late = max(0.0, usual - counts[0]) if len(counts) > 1 else 0.0
    within = within + np.where(np.arange(len(time)) < counts[0], late, 0.0)
    return within * step / np.maximum(np.repeat(counts, counts), usual)


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
