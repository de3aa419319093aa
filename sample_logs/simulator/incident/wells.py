"""Random invented wells, strings and rigs, as settings of the simulator."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

import numpy as np

from .physics import Physics

Rng = np.random.Generator
FIRST_NAMES = ("Larkspur", "Quillback", "Tamarack", "Sandpiper", "Marigold", "Foxglove", "Yarrow")


@dataclass(frozen=True)
class Size:
    """A hole size with what goes into it: diameters [m], weights in air [kg/m]."""

    name: str
    bit: float
    casing: float
    collar: tuple[float, float, float]
    heavy: tuple[float, float, float, float]
    pipes: tuple[tuple[float, float, float, float], ...]
    flow: float  # L/min


SIZES = {
    "12.25 in": Size(
        "12.25 in", 0.3112, 0.3153, (0.2032, 0.0714, 221.0), (0.1270, 0.0762, 73.4, 0.1683),
        ((0.1270, 0.1086, 31.6, 0.1683), (0.1397, 0.1214, 36.5, 0.1778)), 3300.0,
    ),
    "8.5 in": Size(
        "8.5 in", 0.2159, 0.2205, (0.1651, 0.0714, 136.0), (0.1270, 0.0762, 73.4, 0.1683),
        ((0.1270, 0.1086, 31.6, 0.1683), (0.1016, 0.0848, 23.2, 0.1334), (0.1143, 0.0972, 29.0, 0.1588)),
        2050.0,
    ),
    "6.125 in": Size(
        "6.125 in", 0.1556, 0.1594, (0.1207, 0.0572, 69.6), (0.0889, 0.0524, 37.6, 0.1207),
        ((0.0889, 0.0702, 23.0, 0.1270), (0.1016, 0.0848, 23.2, 0.1334)), 1000.0,
    ),
}  # fmt: skip


def between(rng: Rng, low: float, high: float) -> float:
    """Draw evenly between two bounds."""
    return float(rng.uniform(low, high))


def _vertical(rng: Rng) -> tuple[list, float, float, str]:
    depth = between(rng, 1900.0, 3400.0)
    turn = between(rng, 0.0, 360.0)
    corners = [
        [0, 0, turn], [600, between(rng, 0.2, 0.8), turn], [depth + 400, between(rng, 1.0, 3.5), turn + 40],
    ]  # fmt: skip
    return corners, depth, depth * between(rng, 0.35, 0.65), str(rng.choice(["12.25 in", "8.5 in"]))


def _s_shape(rng: Rng) -> tuple[list, float, float, str]:
    kick, turn, angle = between(rng, 350, 900), between(rng, 0, 360), between(rng, 22, 45)
    built = kick + angle / between(rng, 2.0, 3.2) * 30.0
    held = built + between(rng, 500, 1000)
    dropped = held + (angle - 12.0) / between(rng, 1.2, 2.2) * 30.0
    depth = dropped + between(rng, 150, 600)
    corners = [
        [0, 0, turn], [kick, 0.5, turn], [built, angle, turn + 4], [held, angle, turn + 6],
        [dropped, 12, turn + 12], [depth + 400, 10, turn + 14],
    ]  # fmt: skip
    return corners, depth, between(rng, built, held + 300.0), str(rng.choice(["12.25 in", "8.5 in"]))


def _tangent(rng: Rng) -> tuple[list, float, float, str]:
    kick, turn, angle = between(rng, 300, 900), between(rng, 0, 360), between(rng, 40, 65)
    built = kick + angle / between(rng, 2.0, 3.5) * 30.0
    depth = built + between(rng, 700, 1900)
    corners = [
        [0, 0, turn], [kick, 0.5, turn], [built, angle, turn + 3],
        [depth + 400, angle + between(rng, -3, 4), turn + between(rng, -6, 8)],
    ]  # fmt: skip
    return corners, depth, built + between(rng, -100, 350), str(rng.choice(["12.25 in", "8.5 in"]))


def _lateral(rng: Rng) -> tuple[list, float, float, str]:
    kick, turn = between(rng, 800, 1900), between(rng, 0, 360)
    landed = kick + 90.0 / between(rng, 3.5, 9.0) * 30.0
    depth = landed + between(rng, 700, 1900)
    corners = [
        [0, 0, turn], [kick, between(rng, 0.3, 6.0), turn], [landed, between(rng, 88, 91), turn + 3],
        [landed + 0.5 * (depth - landed), between(rng, 89, 91.5), turn + 5], [depth + 400, 90, turn + 6],
    ]  # fmt: skip
    return corners, depth, landed + between(rng, -300, 60), str(rng.choice(["8.5 in", "8.5 in", "6.125 in"]))


PATHS: dict[str, Callable[[Rng], tuple[list, float, float, str]]] = {
    "vertical": _vertical, "s_shape": _s_shape, "tangent": _tangent, "lateral": _lateral,
}  # fmt: skip


def _part(name: str, kind: str, length: float, sizes: tuple) -> dict:
    row = {"name": name, "kind": kind, "length": length}
    row |= dict(zip(("od", "id", "weight", "tool_joint_od"), sizes, strict=False))
    return row


def drill_string(rng: Rng, path: str, size: Size, well: tuple) -> list[dict]:
    """Bit, motor, collars, heavy pipe and drill pipe as the path asks for them."""
    corners, depth, _, _ = well
    od, bore, weight = size.collar
    pipe = size.pipes[int(rng.integers(len(size.pipes)))]
    parts = [
        _part("bit", "bit", 0.35, (size.bit, 0.065, size.bit**2 * 3600.0)),
        _part("motor", "motor", 9.4, (od, 0.07, weight * 0.95, size.bit - 0.004)),
        _part("mwd", "collar", 18.0, (od, bore, weight)),
    ]
    if path == "lateral":
        curve = corners[2][0]
        parts.append(_part("hwdp", "hwdp", 28.5, size.heavy))
        light = max(depth - curve + between(rng, 0.0, 300.0), 300.0)
        parts.append(_part("dp lower", "drillpipe", light, pipe))
        parts.append(_part("hwdp upper", "hwdp", between(rng, 200.0, 550.0), size.heavy))
    else:
        most = 170.0 if path == "vertical" else 90.0
        parts.append(_part("collar", "collar", between(rng, 28.0, most), size.collar))
        parts.append(_part("hwdp", "hwdp", between(rng, 60.0, 230.0), size.heavy))
    top = pipe if path != "lateral" else size.pipes[0]
    parts.append(_part("dp", "drillpipe", 4500.0, top))
    return parts


def liner_string(rng: Rng, size: Size, well: tuple) -> list[dict]:
    """List a liner for the lateral on heavy and drill pipe."""
    _, depth, shoe, _ = well
    liner = (0.1143, 0.1016, 17.3, 0.1270) if size.name == "6.125 in" else (0.1270, 0.1122, 22.3, 0.1413)
    length = depth - shoe + between(rng, 60.0, 150.0)
    heavy = size.heavy
    return [
        _part("float shoe", "sub", 0.6, (liner[3], 0.05, 50.0)),
        _part("liner", "liner", length, liner),
        _part("hanger", "sub", 20.0, (0.1397, 0.0901, 70.0, size.casing - 0.008)),
        _part("hwdp", "hwdp", between(rng, 200.0, 600.0), heavy),
        _part("dp", "drillpipe", 4500.0, size.pipes[0]),
    ]


def _planted(rng: Rng, oil: bool, physics: Physics) -> dict:
    """Errors that the case does not tell."""
    cased = between(rng, 0.13, 0.20) if oil else between(rng, 0.18, 0.28)
    return {
        "modulus_factor": 1.0 + 0.012 * rng.normal(), "weight_factor": 1.0 + 0.007 * rng.normal(),
        "friction_cased": cased, "friction_open": cased * between(rng, 1.1, 1.5),
        "friction_variation": between(rng, 0.03, 0.10), "friction_length": between(rng, 200, 600),
        "tortuosity_deg": between(rng, 0.02, 0.10), "tortuosity_length": between(rng, 110, 180),
        "tortuous_from": 400.0, "survey_scatter_deg": between(rng, 0.0, 0.05),
        "rate_m_h": between(rng, 14, 42), "rate_exponent": between(rng, 0.8, 1.2), "rate_variation": 0.12,
        "slide_rate": between(rng, 0.6, 0.95), "trapped_torque": between(rng, 0.0, 0.12),
        "untwist_m": between(rng, 0.2, 0.6), "bit_torque_m": between(rng, 0.025, 0.05),
        "pump_shift_kN": between(rng, -6.0, 0.5), "slider_stiffness": physics.slider_stiffness,
    }  # fmt: skip


def _instrument(rng: Rng, size: Size, path: str) -> dict:
    noise = float(np.exp(between(rng, np.log(0.4), np.log(2.5))))
    return {
        "interval": int(rng.choice([1, 2, 3, 5, 10], p=[0.2, 0.35, 0.1, 0.25, 0.1])),
        "hookload_noise_kN": noise, "hookload_drift_kN": between(rng, 0.1, 0.6) * noise,
        "flow_l_min": size.flow * between(rng, 0.8, 1.15), "pressure_bar": between(rng, 120, 260),
        "pressure_per_load": between(rng, 18, 40) * (0.5 if path == "vertical" else 1.0),
        "forgets_zero": between(rng, 0.2, 0.9), "zero_error_kN": between(rng, 4, 15),
        "spikes": int(rng.integers(0, 6)), "torque_spikes": int(rng.integers(0, 3)),
        "nulls": int(rng.integers(0, 8)), "frozen": 0, "dropouts": int(rng.integers(0, 2)),
        "drive_torque": between(rng, 100, 900), "retag": bool(rng.uniform() < 0.4),
        "wob_clipped": bool(rng.uniform() < 0.4), "depth_quantum": float(rng.choice([0.01, 0.02, 0.05, 0.1])),
    }  # fmt: skip


def _rig(rng: Rng, stand: float, per_stand: int) -> dict:
    rig = {"block_weight": round(between(rng, 150, 450)), "stand": stand, "elements_per_stand": per_stand}
    if rng.uniform() < 0.25:
        rig["lines"] = int(rng.choice([8, 10, 12]))
        rig["sheave_efficiency"] = round(between(rng, 0.975, 0.99), 3)
    return rig


def _told(rng: Rng, oil: bool, section: str) -> dict:
    """Say what the office tells of the run."""
    return {
        "title": "A run to be explained",
        "well": f"{rng.choice(FIRST_NAMES)} {int(rng.integers(1, 60))}",
        "section": section,
        "mud_system": "oil-base mud" if oil else "water-base mud",
        "tell_block_weight": bool(rng.uniform() < 0.6),
    }


def draw_settings(path: str, liner: bool, physics: Physics, seed: int) -> dict:
    """Draw the settings of one well."""
    rng = np.random.default_rng(seed)
    well = PATHS[path](rng)
    corners, depth, shoe, name = well
    size = SIZES[name]
    section = ("liner in " if liner else "") + size.name
    oil = bool(rng.uniform() < 0.5)
    stand = float(rng.choice([28.5, 28.5, 19.0]))
    long = depth > 2600.0
    parts = liner_string(rng, size, well) if liner else drill_string(rng, path, size, well)
    rig = _rig(rng, stand, 1 if long or stand < 25.0 else physics.per_stand)
    start = np.datetime64("2023-01-01T00:00:00") + int(rng.integers(0, 3.0e7))
    settings = {
        "name": f"{path}-{seed}", "seed": seed, "start": f"{start}+00:00",
        "well": {
            "total_depth": depth, "table_end": depth + 300.0, "survey_end": depth - between(rng, 0, 30),
            "profile": corners,
            "holes": [
                {"bottom": round(shoe, 1), "diameter": size.casing, "kind": "cased", "name": "casing"},
                {"bottom": 9999.0, "diameter": size.bit, "kind": "open", "name": size.name},
            ],
        },
        "fluid": {"density": round(between(rng, 1060, 1560))},
        "string": {"components": parts}, "rig": rig,
        "planted": _planted(rng, oil, physics), "instrument": _instrument(rng, size, path),
        "script": {},
        "case": {"id": f"{physics.name}-{seed}"} | _told(rng, oil, section),
        "delivery": {"tables": str(rng.choice(["metric", "field"]))},
    }  # fmt: skip
    if rng.uniform() < 0.4:  # what the office assumed beforehand
        planted = settings["planted"]
        settings["case"]["assumed"] = {
            "cased": round(planted["friction_cased"] * between(rng, 0.85, 1.15), 2),
            "open": round(planted["friction_open"] * between(rng, 0.85, 1.15), 2),
        }
    return settings
