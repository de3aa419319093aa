"""The truth beside a log: what the rig did, the load on the bit, the string's shape, by the true state."""

from __future__ import annotations

import numpy as np
import pandas as pd
from numpy.typing import NDArray

from .hole import Hole

Floats = NDArray[np.float64]
WINDOW = 30
STATES = np.array(["none", "sinusoidal", "helical"])


def activities(true: pd.DataFrame, least_load: float) -> NDArray:
    """Activity of every second by the contract's order, from noise-free motion and loads."""
    depth = true["tally_depth"].to_numpy()
    n = len(depth)
    now = np.arange(n)
    ahead, behind = np.minimum(now + 7, n - 1), np.maximum(now - 8, 0)
    time = true["time"].to_numpy()
    span = np.maximum(time[ahead] - time[behind], 1.0)
    pace = np.where(span < 30.0, (depth[ahead] - depth[behind]) / span, np.gradient(depth))
    slips = true["slips"].to_numpy() > 0
    turning = true["rpm"].to_numpy() > 5.0
    pumping = true["pump"].to_numpy() > 0.3
    drilling = (true["bit_load"].to_numpy() > least_load) & pumping
    moving, down = np.abs(pace) > 0.01, pace > 0
    rules = [
        (slips, "connection"), (drilling & turning, "drill_rotate"), (drilling, "drill_slide"),
        (turning & moving & down, "ream_down"), (turning & moving, "ream_up"),
        (turning, "rotate_off_bottom"), (moving & down, "trip_in"), (moving, "trip_out"),
        (pumping, "circulate"),
    ]  # fmt: skip
    return np.select([r for r, _ in rules], [w for _, w in rules], default="static")


def lockups(true: pd.DataFrame, noise: float) -> NDArray[np.bool_]:
    """Seconds in lockup: the block goes down, the hook loses weight, and the bit sees none of it."""
    depth, weight = true["tally_depth"].to_numpy(), true["string_weight"].to_numpy()
    bit, place = true["bit_load"].to_numpy(), true["bit_true"].to_numpy()
    still = (true["rpm"].to_numpy() <= 5.0) & (true["slips"].to_numpy() == 0)
    slack = true["slack"].to_numpy()
    out = np.zeros(len(depth), dtype=bool)
    lowest, highest, deepest, turned = np.inf, np.inf, -np.inf, 0
    for i in range(len(depth)):
        if not still[i]:
            lowest, highest, deepest, turned = np.inf, depth[i], depth[i], i
            continue
        deepest = max(deepest, depth[i])
        if depth[i] < deepest - 0.01:  # going up: the next way down starts from here
            highest, deepest, turned = depth[i], depth[i], i
        fresh = weight[i] <= lowest + noise
        lowest = min(lowest, weight[i])
        first = max(i - WINDOW, 0)
        window = slice(first, i + 1)
        if not still[window].all() or not fresh:
            continue
        lowered, drop = depth[i] - depth[window], weight[window] - weight[i]
        enough = (lowered >= 0.08) & (drop >= max(1e4, 6.0 * noise))
        if bit[i] > 1e3:
            k = int(np.argmax(drop))
            out[i] = enough[k] and bit[i] - bit[window][k] < 0.2 * drop[k]
        elif depth[i] - highest > slack[i]:
            window = slice(max(first, turned), i + 1)
            lowered, drop = depth[i] - depth[window], weight[window] - weight[i]
            enough = (lowered >= 0.08) & (drop >= max(1e4, 6.0 * noise))
            past = depth[window] - highest > 1.05 * slack[i] + 0.05
            out[i] = bool((past & enough & (place[i] - place[window] < 0.2 * lowered)).any())
    return out


def spans(flag: NDArray[np.bool_], time: Floats, bridge: float, least: float) -> list[tuple[float, float]]:
    """Intervals where a flag is up; close ones are one, short ones dropped."""
    found: list[list[float]] = []
    edges = np.flatnonzero(np.diff(np.concatenate([[0], flag.astype(int), [0]])))
    for a, b in zip(edges[::2], edges[1::2], strict=True):
        if found and time[a] - found[-1][1] < bridge:
            found[-1][1] = time[b - 1]
        else:
            found.append([time[a], time[b - 1]])
    return [(a, b) for a, b in found if b - a >= least]


def truth_frame(true: pd.DataFrame, settings: dict) -> pd.DataFrame:
    """Truth by second, in the units its column names give."""
    noise = settings["instrument"].get("hookload_noise_kN", 0.8) * 1e3
    surface = true["hanging"] - true["string_weight"]
    return pd.DataFrame(
        {
            "time": true["time"],
            "activity": activities(true, max(1e3, noise)),
            "state": STATES[true["state"].astype(int)],
            "bit_load_kN": (true["bit_load"] / 1e3).round(2),
            "wob_surface_kN": (surface / 1e3).round(2),
            "lost_weight_kN": ((surface - true["bit_load"]) / 1e3).round(2),
            "peak_load_ratio": true["ratio"].round(3),
            "peak_md_m": true["ratio_md"].round(1),
            "peak_compression_kN": (true["compression"] / 1e3).round(2),
            "helical_top_m": true["helical_top"].round(1),
            "helical_bottom_m": true["helical_bottom"].round(1),
            "reach_md_m": true["reach"].round(1),
            "bit_md_m": true["bit_true"].round(3),
            "hole_md_m": true["bottom_true"].round(3),
            "string_weight_kN": (true["string_weight"] / 1e3).round(2),
            "surface_torque_kNm": (true["torque"] / 1e3).round(2),
            "lockup": lockups(true, noise).astype(int),
            "drag_residual_kN": (true["drag"] / 1e3).round(2),
            "torque_residual_kNm": ((true["friction_torque"] - true["usual_torque"]) / 1e3).round(2),
            "cuttings_level": true["bed"].round(3),
            "residual_kN": (true["residual"] / 1e3).round(3),
        }
    )


def summary(truth: pd.DataFrame, true: pd.DataFrame, hole: Hole, settings: dict) -> dict:
    """Truth of the whole run: friction, block, extremes, intervals [s from the start]."""
    time = truth["time"].to_numpy()
    buckled = (truth["state"] != "none").to_numpy()
    helical = (truth["state"] == "helical").to_numpy()
    deepest = float(true["bottom_true"].max())
    steep = float(hole.md[np.argmax(np.degrees(hole.inclination) > 5.0)])
    noise = settings["instrument"].get("hookload_noise_kN", 0.8)
    bar = np.maximum(0.1 * true["hanging"].to_numpy() / 1e3, 6.0 * noise)
    dragging = (truth["drag_residual_kN"].abs() > bar).to_numpy()
    usual = true["usual_torque"].to_numpy() / 1e3
    twisting = (truth["torque_residual_kNm"].abs() > np.maximum(0.1 * usual, 1.5)).to_numpy()
    worst = truth.loc[truth["peak_load_ratio"].idxmax()]
    drilling = truth["activity"].isin(["drill_rotate", "drill_slide"])
    has_cased, has_open = hole.shoe > 0.0, deepest > hole.shoe
    return {
        "friction": {
            "cased": round(hole.mean_friction(0.0, hole.shoe), 4) if has_cased else None,
            "cased_deviated": round(hole.mean_friction(steep, hole.shoe), 4) if has_cased else None,
            "open": round(hole.mean_friction(hole.shoe, deepest), 4) if has_open else None,
            "shoe_m": hole.shoe,
        },
        "block_weight_kN": settings["rig"]["block_weight"],
        "planted": settings["planted"],
        "seconds_by_activity": {k: int(v) for k, v in truth["activity"].value_counts().items()},
        "seconds_by_state": {k: int(v) for k, v in truth["state"].value_counts().items()},
        "bit_load_range_kN": [
            round(float(truth.loc[drilling, "bit_load_kN"].min()), 1) if drilling.any() else 0.0,
            round(float(truth["bit_load_kN"].max()), 1),
        ],
        "peak_load_ratio": float(worst["peak_load_ratio"]),
        "peak_md_m": float(worst["peak_md_m"]),
        "largest_lost_weight_kN": float(truth["lost_weight_kN"].max()),
        "buckling_episodes": [list(s) for s in spans(buckled, time, 60.0, 20.0)],
        "helical_episodes": [list(s) for s in spans(helical, time, 60.0, 20.0)],
        "lockup_intervals": [list(s) for s in spans(truth["lockup"].to_numpy() > 0, time, 60.0, 0.0)],
        "drag_episodes": [list(s) for s in spans(dragging, time, 60.0, 20.0)],
        "torque_episodes": [list(s) for s in spans(twisting, time, 60.0, 20.0)],
        "largest_imbalance_kN": float(truth["residual_kN"].max()),
    }
