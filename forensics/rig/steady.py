"""Steady moments off bottom: weights picked up, slacked off and rotating, and the torque to turn."""

from __future__ import annotations

from dataclasses import dataclass, field

import numpy as np
from numpy.typing import NDArray

from forensics.rig import noise
from forensics.rig.noise import Bools, Floats
from forensics.rig.signals import Signals

KINDS = ("pick_up", "slack_off", "rotating")
# Time left out after a change of motion or rotation, and the longest window of one reading [s].
_SETTLE = 5.0
_SETTLE_TURNING = 12.0
_LONGEST = 30.0
_SHORTEST = 5.0
# A moving reading covers this travel at least [m], at speeds between these [m/s], steady to this share.
_LEAST_TRAVEL = 1.0
_SPEEDS = (0.02, 1.5)
_SPEED_CHANGE = 0.3
# Drift of the hookload over a reading, as a share of the string's weight.
_DRIFT = 0.015
# No more readings of one kind in a stand than this.
_PER_STAND = 3
# Turning is no turning below this [rev/min].
_STILL_RPM = 2.0


@dataclass(frozen=True)
class Motion:
    """What moves at each row; arrays of shape (n,).

    `hookload` corrected [N], `speed` of the block, up positive [m/s], `direction` +1 down, `block` [m],
    `rpm` [rev/min] and `torque` [N.m] NaN where unknown; `clear` rows surely off bottom and out of slips.
    """

    hookload: Floats
    speed: Floats
    direction: NDArray[np.int8]
    block: Floats
    turning: Bools
    rpm: Floats
    torque: Floats
    pumping: Bools
    flow_steady: Bools
    clear: Bools
    slips: Bools


@dataclass(frozen=True)
class Steady:
    """Steady readings in time order; arrays of shape (k,), `kind` an index into `KINDS`.

    `start` and `stop` are rows (stop excluded), `value` the median hookload [N] with robust `spread`,
    `torque` its median [N.m] with `torque_spread`, `stand` the number of the stand.
    """

    kind: NDArray[np.int8] = field(default_factory=lambda: np.zeros(0, dtype=np.int8))
    start: NDArray[np.int64] = field(default_factory=lambda: np.zeros(0, dtype=np.int64))
    stop: NDArray[np.int64] = field(default_factory=lambda: np.zeros(0, dtype=np.int64))
    stand: NDArray[np.int64] = field(default_factory=lambda: np.zeros(0, dtype=np.int64))
    bit: Floats = field(default_factory=lambda: np.zeros(0))
    block: Floats = field(default_factory=lambda: np.zeros(0))
    value: Floats = field(default_factory=lambda: np.zeros(0))
    spread: Floats = field(default_factory=lambda: np.zeros(0))
    torque: Floats = field(default_factory=lambda: np.zeros(0))
    torque_spread: Floats = field(default_factory=lambda: np.zeros(0))
    pumping: Bools = field(default_factory=lambda: np.zeros(0, dtype=bool))
    speed: Floats = field(default_factory=lambda: np.zeros(0))
    rpm: Floats = field(default_factory=lambda: np.zeros(0))

    def __len__(self) -> int:
        """Count the readings."""
        return len(self.kind)

    def take(self, rows: NDArray) -> Steady:
        """Take the readings chosen by index or mask."""
        return Steady(**{name: values[rows] for name, values in vars(self).items()})

    def of(self, kind: str) -> Steady:
        """Take the readings of one kind."""
        return self.take(self.kind == KINDS.index(kind))


def find_steady(motion: Motion, signals: Signals, string_weight: Floats, settle_travel: float) -> Steady:
    """Find every steady pick-up, slack-off and rotating moment off bottom.

    Parameters
    ----------
    motion : Motion
        What moves at each row.
    signals : Signals
        Time, bit depth and noise.
    string_weight : ndarray, shape (n,)
        Modelled hanging weight [N], the scale for drift.
    settle_travel : float
        Travel after a reversal before the whole string moves, which holds the breakover peak too [m].

    Returns
    -------
    Steady
        At most three readings of a kind in each stand, the flattest.
    """
    found: list[tuple] = []
    quiet = ~(motion.rpm >= _STILL_RPM) & ~motion.turning
    fast = (np.abs(motion.speed) > _SPEEDS[0]) & (np.abs(motion.speed) < _SPEEDS[1])
    moving = motion.clear & quiet & fast
    for code, mask in enumerate(
        (
            moving & (motion.direction < 0),
            moving & (motion.direction > 0),
            motion.clear & motion.turning & (motion.direction == 0),
        )
    ):
        for start, stop in _windows(mask, code, signals, settle_travel):
            reading = _measure(code, slice(start, stop), motion, signals, string_weight)
            if reading is not None:
                found.append(reading)
    if not found:
        return Steady()
    return _best_of_stand(_collect(found, motion.slips))


def _windows(mask: Bools, code: int, signals: Signals, settle_travel: float) -> list[tuple[int, int]]:
    """Cut the settled part of each stretch into windows."""
    least = max(noise.LEAST_SAMPLES, round(_SHORTEST / signals.interval))
    longest = max(least, round(_LONGEST / signals.interval))
    settle = _SETTLE_TURNING if code == 2 else _SETTLE
    out = []
    runs = noise.runs_of(mask)
    for start, stop in zip(runs.start.tolist(), runs.stop.tolist(), strict=True):
        if stop - start <= least:
            continue
        first = int(np.searchsorted(signals.time, signals.time[start] + settle))
        if code != 2:
            gone = np.abs(signals.bit[start:stop] - signals.bit[start]) >= settle_travel
            first = max(first, start + int(np.argmax(gone)) if gone.any() else stop)
            stop -= 1
        room = stop - first
        if room < least:
            continue
        count = max(1, min(_PER_STAND, room // longest))
        size = min(longest, room // count)
        for k in range(count):
            begin = stop - size - k * (room - size) // max(count - 1, 1)
            out.append((begin, begin + size))
    return out


def _measure(code: int, rows: slice, motion: Motion, signals: Signals, string_weight: Floats) -> tuple | None:
    """One reading, or None where the moment isn't steady."""
    hookload = motion.hookload[rows]
    count = len(hookload)
    if not motion.flow_steady[rows].all() or not signals.weighed[rows].all():
        return None
    travel = abs(signals.bit[rows][-1] - signals.bit[rows][0])
    speed = motion.speed[rows]
    mean_speed = float(np.mean(speed))
    if code != 2 and (
        travel < min(_LEAST_TRAVEL, 0.5 * _LONGEST * _SPEEDS[0])
        or float(np.std(speed)) > _SPEED_CHANGE * abs(mean_speed)
    ):
        return None
    value = noise.middle(hookload)
    third = max(count // 3, 1)
    drift = 1.5 * abs(float(np.mean(hookload[-third:]) - np.mean(hookload[:third])))
    scatter = noise.NOISE_FACTOR * signals.hookload_noise / third**0.5
    if drift > max(scatter, _DRIFT * float(string_weight[rows.start])):
        return None
    spread = 1.4826 * noise.middle(np.abs(hookload - value))
    torque = motion.torque[rows]
    torque = torque[np.isfinite(torque)]
    turn = noise.middle(torque) if torque.size >= noise.LEAST_SAMPLES else np.nan
    turn_spread = 1.4826 * noise.middle(np.abs(torque - turn)) if np.isfinite(turn) else np.nan
    rpm = motion.rpm[rows]
    rpm = rpm[np.isfinite(rpm)]
    return (
        code, rows.start, rows.stop, 0,
        noise.middle(signals.bit[rows]), noise.middle(motion.block[rows]),
        value, spread, turn, turn_spread, bool(np.mean(motion.pumping[rows]) > 0.5), mean_speed,
        noise.middle(rpm) if rpm.size else 0.0,
    )  # fmt: skip


def _collect(found: list[tuple], slips: Bools) -> Steady:
    """Give the readings as arrays, in time order, numbered by stand."""
    columns = dict(zip(Steady.__dataclass_fields__, map(np.array, zip(*found, strict=True)), strict=True))
    stands = np.cumsum(np.diff(slips.astype(np.int8), prepend=0) == 1)
    columns["stand"] = stands[columns["start"]]
    columns["kind"] = columns["kind"].astype(np.int8)
    steady = Steady(**columns)
    return steady.take(np.argsort(steady.start, kind="stable"))


def _best_of_stand(steady: Steady) -> Steady:
    """Keep the least scattered few of each kind in each stand."""
    order = np.lexsort((steady.spread, steady.stand, steady.kind))
    key = steady.kind[order].astype(np.int64) * (int(steady.stand.max()) + 1) + steady.stand[order]
    first = np.flatnonzero(np.diff(key, prepend=-1))
    rank = np.arange(len(key)) - np.repeat(first, np.diff(np.append(first, len(key))))
    return steady.take(np.sort(order[rank < _PER_STAND]))
