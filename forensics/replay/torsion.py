"""Torque along the string: what the surface shows, less what turning against the wall takes above a place."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np
from numpy.typing import NDArray

from forensics.mechanics.kernels_judge import TAKEN

if TYPE_CHECKING:
    from forensics.replay.run import Replay

Floats = NDArray[np.float64]

SMOOTH_SECONDS = 15.0  # a median over this takes stick-slip and spikes out
GRID = 400  # bit depths at which friction's torque is computed, at most

SPREAD = "surface torque, taken down by what turning against the wall costs"
HELD = "surface torque all along: the string was not turned, and how deep it reaches is not known"
NO_TORQUE = "torsion left out: the log has no torque there"


def torque_ends(run: Replay, rows: NDArray[np.int64]) -> Floats:
    """Give the torque at surface, and how it falls down the hole, at rows of the log.

    Parameters
    ----------
    run : Replay
        Made ready.
    rows : ndarray of int, shape (k,)
        Rows of the log.

    Returns
    -------
    ndarray, shape (k, 2)
        Torque at surface, what the top drive loses taken off [N.m]; its fall per unit of the criteria's
        TAKEN [-]. NaN where the log has no torque.

    Notes
    -----
    While the string turns, friction at the calibrated rotational factor takes its part above the bit, spread
    along the hole as it is off bottom with the bit at its deepest; what friction leaves is the bit's, and
    friction that would take more than there is, is scaled down. While it does not turn, torque is taken to be
    all along what it is at surface: the most there can be.
    """
    log, calibration = run.log, run.calibration
    torque = log.get("torque")
    if torque is None:
        return np.full((len(rows), 2), np.nan)
    turning = run.rig.turning[rows]
    loss = calibration.torque_loss.value if calibration.torque_loss else 0.0
    surface = np.maximum(_median(torque, rows, log.interval) - loss * turning, 0.0)
    fall = np.zeros(len(rows))
    if calibration.rotational is not None and turning.any():
        turned, samples, hole = rows[turning], run.prepared.samples, run.model.hole
        bits = samples.bit[turned]
        grid = np.linspace(bits.min(), bits.max() + 1.0, min(GRID, len(bits) + 1))
        line = run.model.torque(grid, calibration.rotational.value)
        costs = np.minimum(np.interp(bits, grid, line) * samples.scale[turned], surface[turning])
        deep = np.clip(np.round(bits / hole.step).astype(int), 0, len(hole.cos_i) - 1)
        taken = run.model.criteria.at[0, deep, TAKEN]
        fall[turning] = np.divide(costs, taken, out=np.zeros(len(bits)), where=taken > 0.0)
    return np.column_stack([surface, fall])


def torque_along(run: Replay, row: int, index: NDArray[np.int64]) -> Floats:
    """Give the torque at depths of the hole grid at a row of the log [N.m], NaN where the log has none.

    Parameters
    ----------
    run : Replay
        Made ready.
    row : int
        Row of the log.
    index : ndarray of int, shape (m,)
        Rows of the hole grid.
    """
    surface, fall = torque_ends(run, np.array([row]))[0]
    along: Floats = surface - fall * run.model.criteria.at[0, index, TAKEN]
    return np.maximum(along, 0.0)


def origin(run: Replay, row: int, torque: Floats) -> str:
    """Say in words where the torque along the string is from."""
    if not np.isfinite(torque).all():
        return NO_TORQUE
    return SPREAD if run.rig.turning[row] and run.calibration.rotational is not None else HELD


def _median(torque: Floats, rows: NDArray[np.int64], interval: float) -> Floats:
    """Take the median of the readings about each row, whichever way the torque acts; NaN where none."""
    half = int(0.5 * SMOOTH_SECONDS / interval)
    about = np.clip(rows[:, None] + np.arange(-half, half + 1), 0, len(torque) - 1)
    read = np.abs(torque[about])
    told = np.isfinite(torque[rows])
    found = np.full(len(rows), np.nan)
    found[told] = np.nanmedian(read[told], axis=1)
    return found
