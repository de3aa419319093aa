"""The log as the rig rules use it: gaps bridged, noise known, motion worked out."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from forensics.logs.table import TimeLog
from forensics.rig import noise
from forensics.rig.noise import Bools, Floats

# The contract's rule of motion: above 1 cm/s over 15 s.
MOVING_SPEED = 0.01
MOVING_WINDOW = 15.0
# The bit can't move by more than the block did and this [m]; without a block, not faster than this [m/s].
_STEP = 1.0
_FASTEST = 3.0
# A block noisier than this [m] is averaged over a few seconds before its speed is taken.
_QUIET_BLOCK = 0.01
_STEADYING = 5.0
# A gap longer than this is missing data, not a dropout to be bridged; without a hookload the depth still
# tells most of what goes on, so its gaps may be longer [s].
LONGEST_BRIDGE = 60.0
LONGEST_UNWEIGHED = 300.0
_NOISY = ("hookload", "bit_depth", "block_position", "torque", "rpm", "wob", "standpipe_pressure",
          "flow_in", "differential_pressure")  # fmt: skip
# Channels that rest at a level between moves.
_RESTING = ("bit_depth", "block_position", "rpm", "flow_in")


@dataclass(frozen=True)
class Signals:
    """Filled channels and their noise; arrays of shape (n,).

    Parameters
    ----------
    time : ndarray
        [s]
    interval : float
        Usual sampling interval [s].
    bit, hookload : ndarray
        Bit depth [m] and hookload as read [N], gaps bridged.
    path : ndarray
        Bit depth without the steps that no block made: a stand counted on or off in slips [m].
    block : ndarray or None
        Block height [m], gaps bridged; None where the log has none.
    noise : mapping of str to float
        One standard deviation of every channel the log has.
    weighed : ndarray of bool
        Rows with a hookload read nearby, so that it may bear witness.
    read : ndarray of bool
        Rows with a bit depth of their own: the others' is bridged.
    missing : ndarray of bool
        Rows too far from any hookload or bit depth to know anything.
    """

    time: Floats
    interval: float
    bit: Floats
    path: Floats
    hookload: Floats
    block: Floats | None
    noise: dict[str, float]
    weighed: Bools
    read: Bools
    missing: Bools

    @property
    def bit_noise(self) -> float:
        """Noise of the bit depth [m]."""
        return self.noise["bit_depth"]

    @property
    def hookload_noise(self) -> float:
        """Noise of the hookload [N]."""
        return self.noise["hookload"]

    @property
    def block_noise(self) -> float:
        """Noise of the block height, or of the bit depth where there is no block channel [m]."""
        return self.noise.get("block_position", self.bit_noise)

    def count(self, seconds: float) -> int:
        """Odd number of samples in a window of `seconds`, three at least."""
        return noise.samples_in(seconds, self.interval)

    def smooth_noise(self, seconds: float) -> float:
        """Noise left in the hookload after a running mean over `seconds` [N]."""
        return self.hookload_noise / self.count(seconds) ** 0.5


def read_signals(log: TimeLog) -> Signals:
    """Take from a log what the rig rules need.

    Parameters
    ----------
    log : TimeLog
        The SI table.

    Returns
    -------
    Signals
        Filled channels, noise, and the rows where too much is missing.
    """
    levels = {
        name: noise.short_noise(values, at_rest=name in _RESTING)
        for name in _NOISY
        if (values := log.get(name)) is not None
    }
    levels.setdefault("hookload", 0.0)
    levels.setdefault("bit_depth", 0.0)
    block = log.get("block_position")
    block = None if block is None else noise.fill(block)
    bit = np.where(log.used, log.values["bit_depth"], np.nan)
    bit = bit if np.isfinite(bit).any() else log.values["bit_depth"]
    weighed = np.isfinite(log.values["hookload"]).astype(np.float64)
    return Signals(
        time=log.time,
        interval=log.interval,
        bit=noise.fill(bit),
        path=_path(noise.fill(bit), block, log.time),
        hookload=noise.fill(log.values["hookload"]),
        block=block,
        noise=levels,
        weighed=noise.running_mean(weighed, noise.samples_in(10.0, log.interval)) > 0.5,
        read=np.isfinite(bit),
        missing=far_from_data(log, "hookload", LONGEST_UNWEIGHED) | far_from_data(log, "bit_depth"),
    )


def _path(bit: Floats, block: Floats | None, time: Floats) -> Floats:
    """Take out of the bit's depth the steps that no block made."""
    step = np.diff(bit, prepend=bit[:1])
    if block is None:
        room = _FASTEST * np.diff(time, prepend=time[:1])
    else:
        room = np.abs(np.diff(block, prepend=block[:1]))
    return bit[0] + np.cumsum(np.where(np.abs(step) > room + _STEP, 0.0, step)) if len(bit) else bit


def far_from_data(log: TimeLog, channel: str, longest: float = LONGEST_BRIDGE) -> Bools:
    """Mark rows that lie inside a gap of a channel too long to bridge (all rows where it is absent)."""
    values = log.get(channel)
    if values is None:
        return np.ones(len(log), dtype=bool)
    gaps = noise.runs_of(~np.isfinite(values))
    before = log.time[np.maximum(gaps.start - 1, 0)]
    after = log.time[np.minimum(gaps.stop, len(log) - 1)]
    long = after - before > max(longest, noise.LEAST_SAMPLES * log.interval)
    return noise.rows_of(noise.Runs(gaps.start[long], gaps.stop[long]), len(log))


def block_speed(signals: Signals) -> Floats:
    """Speed of the block, up positive, over the contract's 15 s window [m/s].

    Where the log has no block position, or one much noisier than the bit's depth, the bit stands in for
    it; in slips that says nothing, and nothing is asked of it there.
    """
    height = -signals.path if _by_the_bit(signals) else signals.block
    if _steadied(signals):
        height = noise.running_mean(height, signals.count(_STEADYING))
    return noise.rate(height, signals.time, noise.window_seconds(MOVING_WINDOW, signals.interval))


def direction_of(speed: Floats, signals: Signals) -> NDArray[np.int8]:
    """Direction of the block: +1 down, -1 up, 0 not moving.

    Parameters
    ----------
    speed : ndarray, shape (n,)
        Block speed, up positive [m/s].
    signals : Signals
        For the noise of the block and the sampling.

    Returns
    -------
    ndarray of int8, shape (n,)
        Signs by the contract's rule, its threshold raised to six times the noise of the speed.
    """
    window = noise.window_seconds(MOVING_WINDOW, signals.interval)
    level = _speed_noise(signals)
    if _steadied(signals):
        level /= signals.count(_STEADYING) ** 0.5
    limit = max(MOVING_SPEED, noise.NOISE_FACTOR * level * 2.0**0.5 / window)
    return (np.where(speed < -limit, 1, 0) + np.where(speed > limit, -1, 0)).astype(np.int8)


def _by_the_bit(signals: Signals) -> bool:
    return signals.block is None or signals.block_noise > max(_QUIET_BLOCK, 2.0 * signals.bit_noise)


def _speed_noise(signals: Signals) -> float:
    return signals.bit_noise if _by_the_bit(signals) else signals.block_noise


def _steadied(signals: Signals) -> bool:
    """Tell whether the height is averaged before its speed is taken: noisy, and sampled finely enough."""
    return _speed_noise(signals) > _QUIET_BLOCK and signals.interval * noise.LEAST_SAMPLES <= _STEADYING
