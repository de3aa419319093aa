"""The rules that flag rows: buckled, locked up, dragging, hard to turn (contract, section 3)."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from forensics.episodes.material import NOISE_MULTIPLE, Material
from forensics.episodes.spans import running_extreme, since_reset, window_extreme

Floats = NDArray[np.float64]
Bools = NDArray[np.bool_]

#: Lockup: block lowered [m] and hookload lost [N] within the window [s]; part that may reach the bit.
LOCKUP_TRAVEL = 0.08
LOCKUP_DROP = 10.0e3
LOCKUP_WINDOW = 30.0
LOCKUP_PART = 0.2

#: The reach stays short of the bit by at least this, off bottom [m]: a tenth of a stand is within its error.
SHORT_OF_BIT = 3.0

#: Readings are smoothed by a median over this many samples before the lockup rule looks at them.
SMOOTH = 5


def buckled(material: Material) -> Bools:
    """Flag rows on which any place of the string is buckled, shape (n,)."""
    return np.asarray(material.loads.state) > 0


def dragging(material: Material) -> Bools:
    """Flag rows whose drag is beyond the model by the contract's threshold, shape (n,)."""
    with np.errstate(invalid="ignore"):
        return material.drag > material.drag_threshold


def hard_to_turn(material: Material) -> Bools:
    """Flag rows whose torque is beyond the model by the contract's threshold, shape (n,)."""
    with np.errstate(invalid="ignore"):
        return material.loads.torque_residual > material.torque_threshold


def locked_up(material: Material) -> Bools:
    """Flag rows on which lowering the block adds next to nothing to the bit load, shape (n,)."""
    return lockup_part(material, material.loads.bit_load) < LOCKUP_PART


def lockup_part(material: Material, bit_load: Floats) -> Floats:
    """Part of a hookload drop that reaches the bit, where the surface signs of lockup are there.

    Parameters
    ----------
    material : Material
    bit_load : ndarray, shape (n,)
        Of the calibrated replay or of a draw [N].

    Returns
    -------
    ndarray, shape (n,)
        Infinite where the block, the hookload or rotation say that this is no lockup at all.

    Notes
    -----
    Before the hookload has fallen below the slack-off weight at that depth the string has not paid its
    ordinary drag, and nothing can have arrived at the bit yet: such rows are in transit, not locked up.
    """
    rig = material.rig
    drop, row = _hookload_drop(material)
    least = max(LOCKUP_DROP, NOISE_MULTIPLE * material.noise("hookload"))
    with np.errstate(invalid="ignore"):
        signs = (_block_lowered(material) >= LOCKUP_TRAVEL) & (drop >= least) & ~rig.turning & ~rig.slips
        signs &= _at_lowest(material)
        below = rig.wob_slack_off
        signs &= ~(rig.on_bottom & np.isfinite(below) & (below < least))
        arrived = (bit_load - bit_load[row]) / np.where(drop > 0.0, drop, np.nan)
        off = ~rig.on_bottom
        short = material.loads.reach < material.bit - SHORT_OF_BIT
        held = short & (_travel_down(material) > material.loads.stretch)
    part = np.where(off, np.where(held, 0.0, np.inf), arrived)
    return np.where(signs & np.isfinite(part), part, np.inf)


def _smoothed(values: Floats) -> Floats:
    """Smooth by a moving median over a few samples, NaN passed over as the neighbours have it."""
    if len(values) < SMOOTH:
        return values
    from scipy.ndimage import median_filter

    known = np.isfinite(values)
    if not known.any():
        return values
    filled = np.interp(np.arange(len(values)), np.flatnonzero(known), values[known])
    return np.where(known, median_filter(filled, SMOOTH, mode="nearest"), np.nan)


def _loose(material: Material) -> Bools:
    """Rows in slips or turning: what went before is forgotten there."""
    return material.rig.slips | material.rig.turning


def _hookload_drop(material: Material) -> tuple[Floats, NDArray[np.int64]]:
    """How far the hookload has come down within the window [N], and from which row."""
    hookload = np.where(_loose(material), np.nan, _smoothed(material.rig.hookload))
    window = material.window(LOCKUP_WINDOW)
    highest, row = window_extreme(hookload, material.time, window, material.log.interval)
    row = np.maximum(row, since_reset(_loose(material)))
    return highest - hookload, row


def _block_lowered(material: Material) -> Floats:
    """How far the block has come down within the window [m]."""
    block = np.where(material.rig.slips, np.nan, material.rig.block)
    window = material.window(LOCKUP_WINDOW)
    return window_extreme(block, material.time, window, material.log.interval)[0] - block


def _at_lowest(material: Material) -> Bools:
    """Rows at the lowest hookload since slips or rotation, within the noise."""
    hookload = _smoothed(material.rig.hookload)
    lowest = running_extreme(hookload, _loose(material), largest=False)
    return hookload <= lowest + 1.5 * material.noise("hookload") + 1.0


def _travel_down(material: Material) -> Floats:
    """How far the block has come down since it was last raised, in slips or turning [m]."""
    loose = _loose(material) | (material.rig.direction < 0)
    highest = running_extreme(material.rig.block, loose, largest=True)
    return highest - material.rig.block
