"""The bit's own witness: differential pressure, and what it says of friction while sliding.

A motor's differential pressure goes with the load on the bit. Where the string turns the bit load is
known from the hookload, and the ratio is learned there; where it slides, the pressure then tells the bit
load a second time. Lasting disagreement between the two is friction that has changed since the last
weight reading, as solids make it do, and is put down to that.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray
from scipy import ndimage

from forensics.loads import Basis
from forensics.logs.table import TimeLog
from forensics.rig.view import Activity, RigView

Floats = NDArray[np.float64]
Bools = NDArray[np.bool_]

LEAST_WINDOWS = 8
WINDOW_SECONDS = 60.0
LEAST_LOAD = 10e3  # N
LEAST_ZERO_SECONDS = 20.0
MAX_SPREAD = 0.35  # of the ratio between windows; more, and the pressure does not follow the load
BIN_SECONDS = 300.0
OWN_ERROR = 4e3  # N, one sigma of the bit load by hookload where friction is right
SIGMAS = 2.0  # disagreement worth acting on
LEAST_DRAG = 10e3  # N
LEAST_ANSWER = 0.4  # correlation of the two bit loads about their means of a bin
RATIO_RANGE = (0.5, 2.0)


@dataclass(frozen=True)
class Witness:
    """Bit load by differential pressure and its standard error, both of shape (n,) [N]; NaN where silent.

    `windows` and `spread` say how much rotated footage taught the ratio and how closely it held.
    """

    load: Floats
    sigma: Floats
    windows: int
    spread: float


def hear(log: TimeLog, rig: RigView, turning_load: Floats) -> Witness | None:
    """Learn differential pressure against bit load in rotated footage.

    Parameters
    ----------
    log, rig : TimeLog, RigView
        The run.
    turning_load : ndarray, shape (n,)
        Bit load while the string turns [N].

    Returns
    -------
    Witness or None
        None where there is no such pressure, or it does not follow the load.
    """
    pressure = log.get("differential_pressure")
    if pressure is None:
        return None
    zero, zero_error = _zero(log, rig, pressure)
    beyond = pressure - zero
    drilling = (rig.activity == Activity.DRILL_ROTATE) & (turning_load > LEAST_LOAD)
    step = max(3, round(WINDOW_SECONDS / log.interval))
    ratios = _ratios(beyond, turning_load, np.flatnonzero(drilling & np.isfinite(beyond)), step)
    if len(ratios) < LEAST_WINDOWS:
        return None
    ratio = float(np.median(ratios))
    spread = float(1.4826 * np.median(np.abs(ratios - ratio)) / ratio) if ratio > 0 else np.inf
    if not spread < MAX_SPREAD:
        return None
    load = _smooth(beyond, step) / ratio
    noise = 1.4826 * np.nanmedian(np.abs(beyond - _smooth(beyond, step))) / ratio / np.sqrt(step / 3.0)
    sigma = np.hypot(np.hypot(spread * load, noise), zero_error / ratio)
    return Witness(np.where(rig.pumping & np.isfinite(pressure), load, np.nan), sigma, len(ratios), spread)


def _ratios(beyond: Floats, load: Floats, rows: NDArray[np.int64], step: int) -> Floats:
    """Pressure per load of each whole window of rows."""
    whole = len(rows) // step * step
    if whole == 0:
        return np.empty(0)
    parts = rows[:whole].reshape(-1, step)
    return np.median(beyond[parts], axis=1) / np.median(load[parts], axis=1)


def _zero(log: TimeLog, rig: RigView, pressure: Floats) -> tuple[Floats, float]:
    """Pressure with the bit clear of bottom and the pumps on, carried along time, and its scatter [Pa]."""
    clear = rig.pumping & ~rig.on_bottom & ~rig.slips & (rig.hole_depth - log.values["bit_depth"] > 1.0)
    clear &= np.isfinite(pressure)
    edges = np.flatnonzero(np.diff(np.concatenate([[0], clear.astype(np.int8), [0]]))).reshape(-1, 2)
    least = max(3, round(LEAST_ZERO_SECONDS / log.interval))
    runs = [(start, stop) for start, stop in edges if stop - start >= least]
    if not runs:
        return np.zeros(len(log)), 0.0
    at = np.array([0.5 * (log.time[a] + log.time[b - 1]) for a, b in runs])
    values = np.array([np.median(pressure[a:b]) for a, b in runs])
    scatter = float(1.4826 * np.median(np.abs(values - np.median(values))))
    return np.interp(log.time, at, values), scatter


def _smooth(values: Floats, width: int) -> Floats:
    """Take the moving median, missing samples standing as zero pressure beyond the zero."""
    return ndimage.median_filter(np.nan_to_num(values), size=width | 1, mode="nearest")


def friction_ratio(
    log: TimeLog, rig: RigView, witness: Witness, bit_load: Floats, basis: NDArray[np.int8]
) -> Floats:
    """How much more the string rubs, while sliding, than the last weight readings say; shape (n,).

    Parameters
    ----------
    log, rig : TimeLog, RigView
        The run.
    witness : Witness
        Bit load by pressure.
    bit_load : ndarray, shape (n,)
        Bit load by hookload, at the friction of the readings [N].
    basis : ndarray of int8, shape (n,)
        `Basis` codes.

    Returns
    -------
    ndarray, shape (n,)
        1 wherever the two agree within two standard errors, or the hookload does not show the bit.
    """
    ratio = np.ones(len(log))
    drag = rig.wob_surface - bit_load
    sliding = (rig.activity == Activity.DRILL_SLIDE) & (basis == Basis.HOOKLOAD) & np.isfinite(witness.load)
    usable = sliding & (drag > LEAST_DRAG)
    if not _answers(bit_load, witness.load, usable, max(3, round(BIN_SECONDS / log.interval))):
        return ratio
    step = max(3, round(BIN_SECONDS / log.interval))
    slides = np.flatnonzero(np.diff(np.concatenate([[0], _bridged(sliding, step), [0]]))).reshape(-1, 2)
    for start, stop in slides:
        at, found = [], []
        for low in range(start, stop, step):
            rows = np.arange(low, min(low + step, stop))[usable[low : min(low + step, stop)]]
            if len(rows) >= 3:
                at.append(float(np.median(rows)))
                found.append(_one_ratio(bit_load[rows], witness.load[rows], witness.sigma[rows], drag[rows]))
        if at and any(value != 1.0 for value in found):
            ratio[start:stop] = np.interp(np.arange(start, stop), at, found)
    return ratio


def _answers(own: Floats, heard: Floats, usable: Bools, step: int) -> bool:
    """Whether the pressure rises and falls with the bit load while sliding."""
    rows = np.flatnonzero(usable)
    whole = len(rows) // step * step
    if whole == 0:
        return False
    parts = rows[:whole].reshape(-1, step)
    first, second = (values[parts] - values[parts].mean(axis=1, keepdims=True) for values in (own, heard))
    size = np.sqrt(np.sum(first**2) * np.sum(second**2))
    return bool(size > 0.0 and np.sum(first * second) > LEAST_ANSWER * size)


def _one_ratio(own: Floats, heard: Floats, sigma: Floats, drag: Floats) -> float:
    """Ratio of drag that brings the bit load by hookload to the one by pressure; 1 where they agree."""
    beyond = float(np.median(own - heard))
    if abs(beyond) < SIGMAS * np.hypot(float(np.median(sigma)), OWN_ERROR):
        return 1.0
    return float(np.clip(1.0 + beyond / np.median(drag), *RATIO_RANGE))


def _bridged(rows: Bools, step: int) -> NDArray[np.int8]:
    """Rows with gaps shorter than a bin closed, so that a slide is one stretch."""
    closed = ndimage.binary_closing(np.pad(rows, step), iterations=step // 2)[step:-step]
    return (closed | rows).astype(np.int8)
