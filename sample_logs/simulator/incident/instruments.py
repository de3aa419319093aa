"""What the rig's sensors make of an incident: laws of pressure, lag, averaging and noise by the physics."""

from __future__ import annotations

import numpy as np
import pandas as pd
from numpy.typing import NDArray

from ..instruments import counted_depths, sample, sheaves, slow
from .physics import Physics
from .rig import COLUMNS, TroubledRig
from .sensors import HookloadFault

Floats = NDArray[np.float64]
Rng = np.random.Generator
#: What goes on evenly through a step; the rest holds for all of it.
SMOOTH = ("block", "tally_depth", "bit_true", "bottom_true", "string_weight", "bit_load")


def true_frame(rig: TroubledRig) -> pd.DataFrame:
    """Everything at every second, SI, noise-free; hours that were not logged stay out."""
    rows = np.array(rig.rows)
    time = np.round(rows[:, 0])
    breaks = np.flatnonzero(np.diff(time) > 60.0) + 1
    first, last = np.append(0, breaks), np.append(breaks, len(time)) - 1
    every = np.concatenate([np.arange(time[a], time[b] + 1.0) for a, b in zip(first, last, strict=True)])
    before = np.searchsorted(time, every, side="left")
    frame = pd.DataFrame({name: rows[before, k] for k, name in enumerate(COLUMNS)})
    for name in SMOOTH:
        frame[name] = np.interp(every, time, rows[:, COLUMNS.index(name)])
    frame["time"], frame["tag"] = every, np.array(rig.tags)[before]
    return frame


def lagged(values: Floats, seconds: float) -> Floats:
    """First-order lag of a series of seconds."""
    if seconds < 0.3:
        return values
    keep = np.exp(-1.0 / seconds)
    out, last = np.empty_like(values), float(values[0])
    for i, value in enumerate(values.tolist()):
        last = keep * last + (1.0 - keep) * value
        out[i] = last
    return out


def hookload(true: pd.DataFrame, settings: dict, rng: Rng, physics: Physics) -> Floats:
    """Indicate the hookload: sheaves, lag, noise."""
    inst, n = settings["instrument"], len(true)
    hook = sheaves(true, settings, true["hookload"].to_numpy())
    hook = lagged(hook, inst["lag"])
    size = inst["hookload_noise_kN"] * 1e3
    if physics.noise == "coloured":  # bumps of the pipe over the rotary and of the brake
        moving = np.abs(np.gradient(true["block"].to_numpy())) > 0.01
        noise = 0.6 * rng.normal(size=n) + 0.8 * slow(rng, n, 4.0) + 0.6 * moving * rng.standard_t(4, size=n)
    else:
        noise = rng.normal(size=n)
    return hook + size * noise + slow(rng, n, 60.0) * inst["hookload_drift_kN"] * 1e3


def pressures(true: pd.DataFrame, settings: dict, rng: Rng, physics: Physics) -> tuple[Floats, Floats]:
    """Standpipe and differential pressure."""
    inst, n = settings["instrument"], len(true)
    pump = true["pump"].to_numpy()
    on = pump > 0.3
    load = true["bit_load"].to_numpy()
    motor = load * inst["pressure_per_load"] * on
    stalled = true["stalled"].to_numpy() > 0
    motor = np.where(stalled & on, 0.0, motor)
    depth = (true["bit_true"].to_numpy() / true["bit_true"].max()) ** 0.4
    base = inst["pressure_bar"] * 1e5 * pump ** inst["flow_power"] * depth
    base *= 1.0 + true["pressure_share"].to_numpy() + 6e-4 * true["density_shift"].to_numpy()
    if physics.gel:
        starts = np.flatnonzero(np.diff(on.astype(int)) > 0)
        for i in starts:
            after = np.arange(n - i)
            base[i:] *= 1.0 + physics.gel * np.exp(-after / 25.0)
    base = lagged(base, physics.pump_lag)
    held = np.where(stalled & on, true["pressure_extra"].to_numpy(), 0.0)
    rest = np.where(stalled & on, 0.0, true["pressure_extra"].to_numpy())
    differential = motor + held
    ripple = 0.35e5 * rng.normal(size=n) + 0.006 * base * slow(rng, n, 6.0)
    standpipe = base + rest + differential + ripple * on + 0.1e5 * rng.normal(size=n)
    zero = settings["instrument"].get("differential_zero_bar", 2.0) * 1e5 * slow(rng, n, 4000.0)
    off_bottom = base * 0.004 * slow(rng, n, 300.0) + 0.5 * rest
    shown = np.where(on, differential + off_bottom + zero + 0.5e5 * rng.normal(size=n), 0.0)
    return np.maximum(standpipe, 0.0), shown


def toolface(true: pd.DataFrame, rng: Rng) -> Floats:
    """Toolface [rad] by pulses each quarter minute: the motor turns it left, a stall turns it far."""
    n = len(true)
    still = true["rpm"].to_numpy() <= 5.0
    where = np.full(n, rng.uniform(0.0, 2.0 * np.pi))
    starts = np.flatnonzero(np.diff(still.astype(int)) > 0)
    for i in starts:
        where[i:] = rng.uniform(0.0, 2.0 * np.pi)
    twist = true["bit_load"].to_numpy() / 1e5 * 0.7
    far = np.where(true["stalled"].to_numpy() > 0, rng.uniform(1.0, 2.6), 0.0)
    face = where - lagged(twist + far, 8.0) + 0.12 * slow(rng, n, 25.0)
    pulse = np.arange(n) // 15 * 15
    return np.where(still & (true["pump"].to_numpy() > 0.5), face[pulse], np.nan) % (2.0 * np.pi)


def torque(true: pd.DataFrame, settings: dict, rng: Rng) -> Floats:
    """Surface torque: friction, bit, drive; rough where solids or steps rub."""
    n = len(true)
    turning = true["rpm"].to_numpy() > 5.0
    rough = 0.03 + true["torque_rough"].to_numpy()
    ripple = 1.0 + np.where(turning, rough * slow(rng, n, 4.0), 0.0)
    value = true["torque"].to_numpy() * np.maximum(ripple, 0.1)
    drive = settings["instrument"].get("drive_torque", 400.0)
    return value + np.where(turning, drive, 0.0) + rng.normal(0.0, 100.0, n)


def measure(rig: TroubledRig, true: pd.DataFrame, rng: Rng) -> pd.DataFrame:
    """Rig channels at every second, SI (rpm in rev/min), before sampling."""
    settings, physics, n = rig.settings, rig.physics, len(true)
    inst = settings["instrument"]
    hook = hookload(true, settings, rng, physics)
    bit, hole = counted_depths(true, inst.get("retag", False))
    quantum = inst["depth_quantum"]
    standpipe, differential = pressures(true, settings, rng, physics)
    pump, turning = true["pump"].to_numpy(), true["rpm"].to_numpy() > 5.0
    flow = np.where(pump > 0, pump * inst["flow_l_min"] / 6e4 * (1.0 + 0.006 * rng.normal(size=n)), 0.0)
    back = lagged(flow * true["flow_share"].to_numpy(), inst["return_lag"])
    zero = true["zero"].to_numpy() + rig.block_weight
    rise = pd.Series(hole).diff(40).fillna(0.0).to_numpy() / 40.0
    drilling = (true["bit_load"].to_numpy() > 2e3) & (pump > 0.3)
    frame = pd.DataFrame(
        {
            "time": true["time"],
            "bit_depth": np.round(bit / quantum) * quantum,
            "hole_depth": np.round(hole / quantum) * quantum,
            "block_position": np.round(true["block"] + 0.004 * rng.normal(size=n), 2),
            "hookload": hook,
            "wob": zero - hook,
            "torque": torque(true, settings, rng),
            "rpm": np.where(turning, np.round(true["rpm"] + 0.6 * rng.normal(size=n)), 0.0),
            "standpipe_pressure": standpipe,
            "flow_in": flow,
            "flow_out": np.maximum(0.0, back * (1.0 + 0.03 * slow(rng, n, 20.0))),
            "rop": np.where(drilling, np.maximum(rise, 0.0), 0.0),
            "differential_pressure": differential,
            "toolface": toolface(true, rng),
            "mud_density": settings["fluid"]["density"] + true["density_shift"] + 3.0 * slow(rng, n, 3000.0),
        }
    )
    _spoil(frame, rig, true, rng)
    return frame


def _spoil(frame: pd.DataFrame, rig: TroubledRig, true: pd.DataFrame, rng: Rng) -> None:
    """Put sensors' faults, and the rig computer's habits, on what was measured."""
    for trouble in rig.troubles:
        if isinstance(trouble, HookloadFault):
            trouble.corrupt(frame, rng)
    if rig.settings["instrument"].get("wob_clipped", False):
        frame["wob"] = np.where(true["slips"] > 0, 0.0, frame["wob"].clip(lower=0.0))


def log_rows(frame: pd.DataFrame, settings: dict, rng: Rng, physics: Physics) -> pd.DataFrame:
    """Every few seconds of the record: the mean of the interval or its last reading, with small faults."""
    every = settings["instrument"]["interval"]
    if physics.averaging and every > 1:
        mean = ["hookload", "wob", "torque", "rpm", "standpipe_pressure", "differential_pressure", "flow_in"]
        gaps = frame["time"].diff().gt(1.5).cumsum()
        for name in mean:
            smooth = frame[name].groupby(gaps).rolling(every, min_periods=1).mean()
            frame[name] = smooth.reset_index(level=0, drop=True)
    return sample(frame, settings, rng)
