"""What the rig's sensors and its computer make of the truth: noise, tares, depth counting, faults."""

from __future__ import annotations

import numpy as np
import pandas as pd
from numpy.typing import NDArray

from .rig import COLUMNS, Rig

Floats = NDArray[np.float64]


def true_frame(rig: Rig) -> pd.DataFrame:
    """Everything recorded second by second, SI, noise-free."""
    frame = pd.DataFrame(np.array(rig.rows), columns=list(COLUMNS))
    frame["tag"] = rig.tags
    return frame


def slow(rng: np.random.Generator, n: int, seconds: float) -> Floats:
    """Slow unit noise with the correlation time given."""
    keep = np.exp(-1.0 / seconds)
    kick = rng.normal(0.0, np.sqrt(1.0 - keep * keep), n)
    out = np.empty(n)
    last = 0.0
    for i in range(n):
        last = keep * last + kick[i]
        out[i] = last
    return out


def counted_depths(true: pd.DataFrame, retag: bool) -> tuple[Floats, Floats]:
    """Bit and hole depth as counted from block travel: compressing the string counts as footage."""
    bit = true["tally_depth"].to_numpy().copy()
    hole = np.empty_like(bit)
    load = true["bit_load"].to_numpy()
    deepest = max(float(true["bottom_true"].iloc[0]) - 1.0, bit[0])
    off_since = 0
    for i in range(len(bit)):
        off_since = 0 if load[i] > 2e3 else off_since + 1
        if retag and i and load[i] > 2e3 >= load[i - 1] and off_since == 0 and deepest - bit[i] < 3.0:
            deepest = min(deepest, bit[i])
        deepest = max(deepest, bit[i])
        hole[i] = deepest
    return bit, hole


def sheaves(true: pd.DataFrame, settings: dict, hook: Floats) -> Floats:
    """Dead-line reading times lines: low going up, high going down, with the dead-line sheave fixed."""
    lines, e = settings["rig"].get("lines"), settings["rig"].get("sheave_efficiency")
    if not lines or not e:
        return hook
    up = lines / ((e**-lines - 1.0) / (1.0 / e - 1.0))
    down = lines / ((1.0 - e**lines) / (1.0 - e))
    speed = -np.gradient(true["block"].to_numpy())
    out, factor = np.empty_like(hook), 1.0
    for i in range(len(hook)):
        target = factor
        if speed[i] > 0.004:
            target = down
        elif speed[i] < -0.004:
            target = up
        factor += 0.5 * (target - factor)
        out[i] = hook[i] * factor
    return out


def measure(true: pd.DataFrame, settings: dict, rng: np.random.Generator) -> pd.DataFrame:
    """Rig channels at every second, SI (rpm in rev/min), before sampling and faults."""
    inst, rig, planted = settings["instrument"], settings["rig"], settings["planted"]
    n = len(true)
    hook = sheaves(true, settings, true["hookload"].to_numpy())
    hook = hook + rng.normal(0.0, inst.get("hookload_noise_kN", 0.8) * 1e3, n)
    hook += slow(rng, n, 40.0) * inst.get("hookload_drift_kN", 0.3) * 1e3
    hook += inst.get("hookload_bias_kN", 0.0) * 1e3
    turning = true["rpm"].to_numpy() > 5.0
    pump = true["pump"].to_numpy()
    load = true["bit_load"].to_numpy()
    bit, hole = counted_depths(true, inst.get("retag", False))
    quantum = inst.get("depth_quantum", 0.01)
    flow = pump * inst["flow_l_min"] / 6e4
    flow = np.where(pump > 0, flow * (1.0 + 0.006 * rng.normal(0.0, 1.0, n)), 0.0)
    differential = load * inst.get("pressure_per_load", 32.0) * (pump > 0.3)
    base = inst["pressure_bar"] * 1e5 * pump**1.8 * (true["bit_true"].to_numpy() / bit.max()) ** 0.3
    pressure = base + differential + rng.normal(0.0, 0.8e5, n) * (pump > 0) + rng.normal(0.0, 0.1e5, n)
    shown = differential + inst.get("differential_zero_bar", 2.0) * 1e5 * slow(rng, n, 4000.0)
    shown = np.where(pump > 0.3, shown + rng.normal(0.0, 0.7e5, n), 0.0)
    torque = true["torque"].to_numpy() * planted.get("torque_factor", 1.0)
    ripple = 1.0 + np.where(turning, 0.04 * slow(rng, n, 3.0), 0.0)
    torque = (
        torque * ripple + rng.normal(0.0, 120.0, n) + np.where(turning, inst.get("drive_torque", 400.0), 0.0)
    )
    rise = pd.Series(hole).diff(30).fillna(0.0).to_numpy() / 30.0
    frame = pd.DataFrame(
        {
            "time": true["time"],
            "bit_depth": np.round(bit / quantum) * quantum,
            "hole_depth": np.round(hole / quantum) * quantum,
            "block_position": np.round((true["block"] + rng.normal(0.0, 0.004, n)) / quantum) * quantum,
            "hookload": hook,
            "wob": true["zero"].to_numpy() + rig["block_weight"] * 1e3 - hook,
            "torque": torque,
            "rpm": np.where(turning, np.round(true["rpm"] + 0.6 * rng.normal(0.0, 1.0, n)), 0.0),
            "standpipe_pressure": pressure,
            "flow_in": flow,
            "rop": np.where((load > 2e3) & (pump > 0.3), rise, 0.0),
            "differential_pressure": shown,
            "mud_density": settings["fluid"]["density"] + 3.0 * slow(rng, n, 3000.0),
        }
    )
    if inst.get("wob_clipped", False):
        frame["wob"] = np.where(true["slips"] > 0, 0.0, frame["wob"].clip(lower=0.0))
    return frame


def sample(frame: pd.DataFrame, settings: dict, rng: np.random.Generator) -> pd.DataFrame:
    """Every few seconds of the record, with the dropouts, nulls, spikes and frozen spells asked for."""
    inst = settings["instrument"]
    rows = frame.iloc[:: inst.get("interval", 1)].copy()
    n = len(rows)
    for _ in range(inst.get("spikes", 0)):
        i = int(rng.integers(n))
        rows.iloc[i, rows.columns.get_loc("hookload")] *= float(rng.choice([0.02, 1.9, 2.6]))
    for _ in range(inst.get("torque_spikes", 0)):
        rows.iloc[int(rng.integers(n)), rows.columns.get_loc("torque")] = -1.317e6
    for _ in range(inst.get("nulls", 0)):
        i, length = int(rng.integers(n)), int(rng.integers(1, 12))
        column = str(rng.choice(["hookload", "torque", "standpipe_pressure", "rop", "rpm", "bit_depth"]))
        rows.iloc[i : i + length, rows.columns.get_loc(column)] = np.nan
    for _ in range(inst.get("frozen", 0)):
        i, length = int(rng.integers(n - 40)), int(rng.integers(15, 30))
        k = rows.columns.get_loc("hookload")
        rows.iloc[i : i + length, k] = rows.iloc[i, k]
    keep = np.ones(n, dtype=bool)
    for _ in range(inst.get("dropouts", 0)):
        i = int(rng.integers(n))
        keep[i : i + int(rng.integers(10, 90))] = False
    return rows[keep]
