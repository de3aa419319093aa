"""The truth of an incident: which cause, when, where, and how plainly it shows."""

from __future__ import annotations

from collections.abc import Callable

import numpy as np
import pandas as pd

from ..truth import spans
from .cases import BUCKLING, NOTHING, POOR
from .rig import TroubledRig


def buckled(true: pd.DataFrame, least: float = 15.0) -> list[dict]:
    """Intervals in which some of the string was buckled, with the depths of all buckled places."""
    time = true["time"].to_numpy()
    found = []
    for a, b in spans((true["state"] >= 1).to_numpy(), time, 60.0, least):
        rows = true[(time >= a) & (time <= b)]
        found.append({"start": a, "end": b, "top": rows["top"].min(), "bottom": rows["bottom"].max(),
                      "ratio": rows["ratio"].max(), "helical": bool(rows["state"].max() == 2)})  # fmt: skip
    return found


def _largest(values: pd.Series) -> float | None:
    good = values.abs().max()
    return round(float(good), 2) if np.isfinite(good) else None


def shown(true: pd.DataFrame, start: float, end: float) -> dict:
    """How plainly it shows between two moments: largest drag, torque and pressure beyond the everyday."""
    rows = true[(true["time"] >= start) & (true["time"] <= end)]
    pressure = rows["pressure_extra"] / 1e5
    return {
        "largest_drag_kN": _largest(rows["drag"] / 1e3),
        "largest_set_down_kN": _largest(rows["obstacle"] / 1e3),
        "largest_torque_kNm": _largest((rows["friction_torque"] - rows["usual_torque"]) / 1e3),
        "largest_pressure_bar": _largest(pressure),
        "largest_load_ratio": _largest(rows["ratio"]),
        "rotating_weight_kN": _largest(rows["hanging"] / 1e3),
    }


def felt(rig: TroubledRig, true: pd.DataFrame) -> list[dict]:
    """Every interval in which a cause was felt, in time order, with its depths."""
    pieces = [
        {"cause": trouble.cause, "start": a, "end": b, "top_md": trouble.top, "bottom_md": trouble.bottom,
         "size": round(trouble.size, 3)}
        for trouble in rig.troubles
        for a, b in trouble.spans()
    ]  # fmt: skip
    pieces += [
        {"cause": BUCKLING, "start": s["start"], "end": s["end"], "top_md": s["top"],
         "bottom_md": s["bottom"], "ratio": round(float(s["ratio"]), 2), "helical": s["helical"]}
        for s in buckled(true)
    ]  # fmt: skip
    for piece in pieces:
        piece |= {key: round(float(piece[key]), 1) for key in ("top_md", "bottom_md")}
    return sorted(pieces, key=lambda p: p["start"])


def facts_of(rig: TroubledRig, true: pd.DataFrame, cause: str, clock: Callable[[float], str]) -> dict:
    """Everything truth.json says about the run, save its seed and kind of work."""
    pieces = felt(rig, true)
    main = [p for p in pieces if p["cause"] == cause]
    if cause in (NOTHING, POOR) or not main:
        begin, end = float(true["time"].iloc[0]), float(true["time"].iloc[-1])
        deepest = round(float(true["bit_true"].max()), 1)
        main = [{"start": begin, "end": end, "top_md": 0.0, "bottom_md": deepest}]
    begin, end = main[0]["start"], max(p["end"] for p in main)
    present = {t.cause for t in rig.troubles if t.times} | ({cause} & {BUCKLING})
    hole = rig.hole
    return {
        "cause": cause,
        "start": clock(begin), "end": clock(end),
        "top_md": min(p["top_md"] for p in main), "bottom_md": max(p["bottom_md"] for p in main),
        "causes_present": sorted(present),
        "spans": [p | {"start": clock(p["start"]), "end": clock(p["end"])} for p in pieces],
        "troubles": [{"cause": t.cause, "size": round(t.size, 3), "mode": getattr(t, "mode", None)}
                     for t in rig.troubles],
        "shown": shown(true, begin, end),
        "friction": {"cased": round(hole.mean_friction(0.0, hole.shoe), 3),
                     "open": round(hole.mean_friction(hole.shoe, hole.total_depth), 3)},
        "block_weight_kN": rig.settings["rig"]["block_weight"],
        "largest_imbalance_kN": round(float(true["residual"].max() / 1e3), 3),
    }  # fmt: skip
