"""Breakover: the peak of the hookload as a string that stood still starts to move up."""

from __future__ import annotations

from dataclasses import dataclass, field

import numpy as np

from forensics.rig import noise
from forensics.rig.noise import Bools, Floats
from forensics.rig.signals import Signals
from forensics.rig.steady import Motion

# The string stood still while the bit went no further than this, beyond the noise of its depth [m].
_STAYS = 0.05
# Shorter stands show stretch, not what standing does [s].
_LEAST_STILL = 20.0
# How far back is looked for the last motion, in steps: most stands are short [s].
_LOOKS = (900.0, 7200.0, 86400.0)
# Turning is no turning below this [rev/min].
_STILL_RPM = 2.0
# The peak is looked for so far beyond the travel that moves the whole string; steady is what follows, over
# this much travel [m].
_BEYOND = 0.5
_FLAT_TRAVEL = 2.0
# Slower logs than this step over the peak [s].
_SLOWEST = 5.0
# Samples averaged for the peak: one spike is no peak.
_PEAK_SAMPLES = 3


@dataclass(frozen=True)
class Breakovers:
    """Starts upward of a string that stood still, in time order; arrays of shape (k,).

    `row` of the start, `bit` depth [m], `still` how long it stood [s], `peak` the largest hookload before the
    whole string moves and `steady` the pick-up weight after it [N], `pumping` whether the pumps ran.
    """

    row: np.ndarray = field(default_factory=lambda: np.zeros(0, dtype=np.int64))
    bit: Floats = field(default_factory=lambda: np.zeros(0))
    still: Floats = field(default_factory=lambda: np.zeros(0))
    peak: Floats = field(default_factory=lambda: np.zeros(0))
    steady: Floats = field(default_factory=lambda: np.zeros(0))
    pumping: Bools = field(default_factory=lambda: np.zeros(0, dtype=bool))

    def __len__(self) -> int:
        """Count them."""
        return len(self.row)


def find_breakovers(motion: Motion, signals: Signals, settle_travel: float) -> Breakovers:
    """Find every start upward after standing still, with its peak and the weight that follows.

    Parameters
    ----------
    motion : Motion
        What moves at each row.
    signals : Signals
        Time, bit depth and noise.
    settle_travel : float
        Travel before the whole string moves [m].

    Returns
    -------
    Breakovers
        None where the log is too slow to show a peak. A string that was turned meanwhile did not stand.
    """
    if signals.interval > _SLOWEST:
        return Breakovers()
    calm = ~motion.turning & ~(motion.rpm >= _STILL_RPM)
    rising = motion.clear & calm & (motion.direction < 0) & signals.weighed
    found = []
    runs = noise.runs_of(rising)
    for start, stop in zip(runs.start.tolist(), runs.stop.tolist(), strict=True):
        still = _stood(start, signals, calm)
        if still < _LEAST_STILL:
            continue
        one = _measure(slice(start, stop), still, (motion, signals, settle_travel))
        if one is not None:
            found.append(one)
    if not found:
        return Breakovers()
    return Breakovers(*(np.array(column) for column in zip(*found, strict=True)))


def _stood(start: int, signals: Signals, calm: Bools) -> float:
    """How long the bit had stayed where it is, unturned, before a row [s]."""
    last = max(start - 1, 0)
    limit = _STAYS + noise.NOISE_FACTOR * signals.bit_noise
    for look in _LOOKS:
        first = int(np.searchsorted(signals.time, signals.time[last] - look))
        away = np.abs(signals.path[first : last + 1] - signals.path[last]) > limit
        moved = np.flatnonzero(away | ~calm[first : last + 1])
        if len(moved):
            return float(signals.time[last] - signals.time[first + moved[-1]])
    return float(signals.time[last] - signals.time[first])


def _measure(rows: slice, still: float, facts: tuple[Motion, Signals, float]) -> tuple | None:
    """One breakover, or None where no steady weight follows."""
    motion, signals, settle_travel = facts
    start, stop = rows.start, rows.stop
    gone = np.abs(signals.bit[start:stop] - signals.bit[start])
    whole = settle_travel + _BEYOND
    flat = (gone >= whole) & (gone <= whole + _FLAT_TRAVEL)
    if flat.sum() < noise.LEAST_SAMPLES:
        return None
    until = start + int(np.argmax(gone >= whole)) + 1
    before = motion.hookload[start:until]
    if len(before) < _PEAK_SAMPLES:
        return None
    peak = float(np.max(np.convolve(before, np.ones(_PEAK_SAMPLES) / _PEAK_SAMPLES, mode="valid")))
    steady = noise.middle(motion.hookload[start:stop][flat])
    if not np.isfinite(peak) or not np.isfinite(steady):
        return None
    pumped = bool(np.mean(motion.pumping[start:until]) > 0.5)
    return start, float(signals.bit[start]), still, peak, steady, pumped
