"""Top drive and pumps: turning or not, pumping or not, and what stands in where a channel is missing."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from forensics.logs.table import TimeLog
from forensics.rig import noise
from forensics.rig.noise import Bools, Floats
from forensics.rig.signals import Signals, far_from_data

# The contract's rules: turning above 5 rpm, pumping above 30 % of the run's usual flow.
TURNING_RPM = 5.0
PUMPING_SHARE = 0.3
# Pressure goes with about the square of the flow.
_PRESSURE_SHARE = PUMPING_SHARE**2
# A pump counts as running at all above this share of its highest flow.
_RUNNING = 0.1
# Torque above this share of what turns the string off bottom stands for rotation where rpm is missing.
_TURNING_TORQUE = 0.35
_TORQUE_WINDOW = 9.0
_FLOW_CHANGE = 0.1
# Interval from which a log is slow [s].
_SLOW = 5.0


@dataclass(frozen=True)
class Drives:
    """Turning and pumping by row, where neither could be told, and in words what stood in.

    `turning_unknown` and `pumping_unknown` mark rows with no channel to tell by; `rpm` is NaN where
    missing; `usual_flow` [m3/s].
    """

    turning: Bools
    turning_unknown: Bools
    pumping: Bools
    pumping_unknown: Bools
    flow_steady: Bools
    rpm: Floats
    torque: Floats
    usual_flow: float
    remarks: tuple[str, ...]


def find_drives(log: TimeLog, signals: Signals, slips: Bools, free: Bools) -> Drives:
    """Decide for each row whether the string turned and the pumps ran.

    Parameters
    ----------
    log : TimeLog
        Channels `rpm`, `torque`, `flow_in`, `standpipe_pressure`.
    signals : Signals
        Noise and sampling.
    slips : ndarray of bool, shape (n,)
        Rows in slips, where the drive may turn without the string.
    free : ndarray of bool, shape (n,)
        Rows surely off bottom, where torque is the string's own.

    Returns
    -------
    Drives
        With remarks on what the log could not show.
    """
    turning, turning_unknown, words = _turning(log, signals, free & ~slips)
    pumping, pumping_unknown, usual, more = _pumping(log, signals)
    return Drives(
        turning=turning & ~slips,
        turning_unknown=turning_unknown,
        pumping=pumping,
        pumping_unknown=pumping_unknown,
        flow_steady=_flow_steady(log, signals, pumping, usual),
        rpm=log.values.get("rpm", np.full(len(log), np.nan)),
        torque=log.values.get("torque", np.full(len(log), np.nan)),
        usual_flow=usual,
        remarks=words + more,
    )


def _turning(log: TimeLog, signals: Signals, free: Bools) -> tuple[Bools, Bools, tuple[str, ...]]:
    rpm, torque = log.get("rpm"), log.get("torque")
    nothing = np.zeros(len(log), dtype=bool)
    unknown = far_from_data(log, "rpm")
    turning = nothing if rpm is None else _spins(_despiked(noise.fill(rpm), signals))
    if not unknown.any():
        return turning, unknown, ()
    gap = "No rotary speed in the log" if rpm is None else "Rotary speed is missing for a time"
    if torque is None:
        return turning & ~unknown, unknown, (f"{gap} and no torque: rotation there can't be told.",)
    turning = np.where(unknown, _twists(torque, signals, free), turning)
    return turning, unknown & far_from_data(log, "torque"), (f"{gap}: rotation there is judged by torque.",)


def _spins(rpm: Floats) -> Bools:
    idle = rpm[np.abs(rpm) < TURNING_RPM]
    limit = max(TURNING_RPM, noise.NOISE_FACTOR * noise.short_noise(idle))
    return rpm > min(limit, 2 * TURNING_RPM)


def _despiked(values: Floats, signals: Signals) -> Floats:
    """Take single readings out; in a slow log a single reading is a spell of its own."""
    if signals.interval > _SLOW:
        return values
    return noise.running_median(values, noise.LEAST_SAMPLES)


def _twists(torque: Floats, signals: Signals, free: Bools) -> Bools:
    """Mark rows with a fair share of the torque that turns the string off bottom; trapped torque is less."""
    count = signals.count(_TORQUE_WINDOW)
    smooth = noise.running_mean(noise.running_median(noise.fill(torque), noise.LEAST_SAMPLES), count)
    least = max(noise.NOISE_FACTOR * signals.noise.get("torque", 0.0) / count**0.5, 1.0)
    told = np.isfinite(torque)
    turned = smooth[free & told & (smooth > least)]
    if turned.size < noise.LEAST_SAMPLES:
        turned = _TURNING_TORQUE * smooth[told & (smooth > least)]
    if not turned.size:
        return np.zeros(len(torque), dtype=bool)
    share = _TURNING_TORQUE * float(np.median(turned))
    if share > least * count**0.5:
        # Torque stands clear of the noise row by row: averaging would only blur when it came and went.
        return noise.running_median(noise.fill(torque), noise.LEAST_SAMPLES) > share
    return smooth > max(share, least)


def _pumping(log: TimeLog, signals: Signals) -> tuple[Bools, Bools, float, tuple[str, ...]]:
    flow, pressure = log.get("flow_in"), log.get("standpipe_pressure")
    unknown = far_from_data(log, "flow_in")
    usual = np.nan if flow is None else usual_level(flow, signals.noise.get("flow_in", 0.0))
    runs = np.zeros(len(log), dtype=bool)
    if flow is not None and np.isfinite(usual):
        runs = _despiked(noise.fill(flow), signals) > PUMPING_SHARE * usual
    if not unknown.any():
        return runs, unknown, usual, ()
    gap = "No flow in the log" if flow is None else "Flow is missing for a time"
    if pressure is None:
        return (
            runs & ~unknown,
            unknown,
            usual,
            (f"{gap} and no standpipe pressure: pumping there shows only by a hole that deepens.",),
        )
    level = usual_level(pressure, signals.noise.get("standpipe_pressure", 0.0))
    pressed = _despiked(noise.fill(pressure), signals) > _PRESSURE_SHARE * level
    runs = np.where(unknown, pressed & np.isfinite(level), runs)
    unknown = unknown & far_from_data(log, "standpipe_pressure")
    return runs, unknown, usual, (f"{gap}: pumping there is judged by standpipe pressure.",)


def usual_level(values: Floats, level_noise: float) -> float:
    """Give the run's usual flow (or pressure): the median of what is well above nothing.

    Parameters
    ----------
    values : ndarray, shape (n,)
        Channel; NaN allowed.
    level_noise : float
        Its noise, in the same unit.

    Returns
    -------
    float
        In the channel's unit.
    """
    good = values[np.isfinite(values)]
    if not good.size:
        return np.nan
    top = float(np.quantile(good, 0.995))
    if top <= noise.NOISE_FACTOR * level_noise:
        return np.nan
    running = good[good > _RUNNING * top]
    return float(np.median(running)) if running.size >= noise.LEAST_SAMPLES else np.nan


def _flow_steady(log: TimeLog, signals: Signals, pumping: Bools, usual: float) -> Bools:
    """Mark rows around which the flow neither starts, stops nor changes by a tenth."""
    count = signals.count(5.0)
    share = noise.running_mean(pumping.astype(np.float64), count)
    steady = (share < 1e-6) | (share > 1 - 1e-6)
    flow = log.get("flow_in")
    if flow is None or not np.isfinite(usual):
        return steady
    filled = noise.running_median(noise.fill(flow), count)
    change = np.abs(noise.rate(filled, signals.time, noise.window_seconds(10.0, signals.interval)))
    level = min(noise.NOISE_FACTOR * signals.noise.get("flow_in", 0.0), PUMPING_SHARE * usual)
    return steady & (change * 10.0 < max(_FLOW_CHANGE * usual, level))
