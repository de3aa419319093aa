"""The rules that flag rows: buckled, locked up, dragging, hard to turn (contract, section 3)."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from forensics.episodes.material import NOISE_MULTIPLE, Material
from forensics.episodes.spans import running_extreme, window_extreme

Floats = NDArray[np.float64]
Bools = NDArray[np.bool_]

#: Lockup: block lowered [m] and hookload lost [N] within the window [s]; part that may reach the bit.
LOCKUP_TRAVEL = 0.08
LOCKUP_DROP = 10.0e3
LOCKUP_WINDOW = 30.0
LOCKUP_PART = 0.2

#: The reach stays short of the bit by at least this, off bottom [m]: a tenth of a stand is within its error.
SHORT_OF_BIT = 3.0

#: Off bottom, a string that was sliding is held where the hookload falls by this part of its spring rate;
#: it slides once the block has come down this far [m] since it was raised.
SPRING_PART = 0.3
SETTLED_TRAVEL = 1.0

#: After slips the hookload is not the string's until this has passed [s].
SETTLED = 5.0

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


@dataclass(frozen=True)
class LockupSigns:
    """What the surface shows of lockup; arrays of shape (n,).

    `there` where block, hookload and rotation leave lockup open; `drop` how far the hookload came down
    within the window [N], from row `since`; `held` where, off bottom, the block went further than the
    string's stretch and the motion still has not reached the bit, or a string that slid as a whole was
    stopped.
    """

    there: Bools
    drop: Floats
    since: NDArray[np.int64]
    held: Bools


def lockup_signs(material: Material) -> LockupSigns:
    """Read the surface signs of lockup.

    Parameters
    ----------
    material : Material

    Returns
    -------
    LockupSigns

    Notes
    -----
    Before the hookload has fallen below the slack-off weight at that depth the string has not paid its
    ordinary drag, and nothing can have arrived at the bit yet: such rows are in transit, not locked up.
    """
    rig = material.rig
    hookload = _free_hookload(material)
    drop, since = _hookload_drop(material, hookload)
    least = max(LOCKUP_DROP, NOISE_MULTIPLE * material.noise("hookload"))
    with np.errstate(invalid="ignore"):
        there = (_block_lowered(material) >= LOCKUP_TRAVEL) & (drop >= least) & ~_loose(material)
        there &= _at_lowest(material, hookload)
        below = rig.wob_slack_off
        there &= ~(rig.on_bottom & np.isfinite(below) & (below < least))
        short = material.loads.reach < material.bit - SHORT_OF_BIT
        held = short & (_travel_down(material) > material.loads.stretch)
        held |= _stopped(material, drop, since)
    return LockupSigns(there, drop, since, held)


def locked_up(material: Material, signs: LockupSigns, bit_load: Floats) -> Bools:
    """Flag rows on which lowering the block adds next to nothing to the bit load.

    Parameters
    ----------
    material : Material
    signs : LockupSigns
    bit_load : ndarray, shape (n,)
        Of the calibrated replay or of a draw [N].

    Returns
    -------
    ndarray of bool, shape (n,)
    """
    with np.errstate(invalid="ignore"):
        little = bit_load - bit_load[signs.since] < LOCKUP_PART * signs.drop
    return signs.there & np.where(material.rig.on_bottom, little, signs.held)


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


def _free_hookload(material: Material) -> Floats:
    """Smoothed hookload, NaN while held in slips, turning, or just taken from the slips [N]."""
    from scipy.ndimage import binary_dilation

    edge = max(round(SETTLED / material.log.interval), 1)
    taken = binary_dilation(material.rig.slips, iterations=edge)
    return np.where(taken | material.rig.turning, np.nan, _smoothed(material.rig.hookload))


def _hookload_drop(material: Material, hookload: Floats) -> tuple[Floats, NDArray[np.int64]]:
    """How far the hookload has come down within the window [N], and from which row."""
    window = material.window(LOCKUP_WINDOW)
    highest, row = window_extreme(hookload, material.time, window, material.log.interval)
    return highest - hookload, row


def _block_lowered(material: Material) -> Floats:
    """How far the block has come down within the window [m]."""
    block = np.where(material.rig.slips, np.nan, material.rig.block)
    window = material.window(LOCKUP_WINDOW)
    return window_extreme(block, material.time, window, material.log.interval)[0] - block


def _at_lowest(material: Material, hookload: Floats) -> Bools:
    """Rows at the lowest hookload since slips or rotation, within the noise."""
    lowest = running_extreme(hookload, _loose(material), largest=False)
    return hookload <= lowest + 1.5 * material.noise("hookload") + 1.0


def _stopped(material: Material, drop: Floats, since: NDArray[np.int64]) -> Bools:
    """Rows on which a string that was sliding down as a whole was stopped: the hookload fell like a spring.

    A free string gives the same hookload whatever the block does; one that is held gives up its spring
    rate. Friction that grows on the way takes far more travel for the same drop.
    """
    travel = material.rig.block[since] - material.rig.block
    sliding = (material.rig.direction > 0) & (material.loads.reach >= material.bit - SHORT_OF_BIT)
    sliding &= _travel_down(material) > SETTLED_TRAVEL
    return sliding[since] & (drop >= SPRING_PART * material.spring_rate * np.maximum(travel, LOCKUP_TRAVEL))


def _travel_down(material: Material) -> Floats:
    """How far the block has come down since it was last raised, in slips or turning [m]."""
    loose = _loose(material) | (material.rig.direction < 0)
    highest = running_extreme(material.rig.block, loose, largest=True)
    return highest - material.rig.block
