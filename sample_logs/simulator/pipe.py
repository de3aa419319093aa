"""The string as a chain of elements: stiffness, weights and sizes, with its planted errors."""

from __future__ import annotations

import math

import numpy as np
from numpy.typing import NDArray

from . import elements as el

Floats = NDArray[np.float64]
GRAVITY = 9.80665
STEEL = 7850.0


def section(component: dict) -> tuple[float, float, float]:
    """Area, inner area [m2] and second moment [m4] of a component's body."""
    od, bore = component["od"], component["id"]
    area = math.pi / 4.0 * (od * od - bore * bore)
    return area, math.pi / 4.0 * bore * bore, math.pi / 64.0 * (od**4 - bore**4)


def element_row(component: dict, length: float, settings: dict) -> Floats:
    """One element of the chain; `weight` of a component is in air, kg/m, tool joints included."""
    planted, mud = settings["planted"], settings["fluid"]["density"]
    modulus = component.get("modulus", 206.8e9) * planted.get("modulus_factor", 1.0)
    area, bore, inertia = section(component)
    air = component["weight"] * GRAVITY * planted.get("weight_factor", 1.0)
    density = component.get("density", STEEL)
    inside = settings["fluid"].get("density_inside", mud)
    buoyed = air * (1.0 - mud / density) + GRAVITY * (inside - mud) * bore
    row = np.zeros(7)
    row[el.LENGTH] = length
    row[el.COMPLIANCE] = length / (modulus * area)
    row[el.BENDING] = modulus * inertia
    row[el.CONTACT_OD] = component.get("tool_joint_od", component["od"])
    row[el.WEIGHT] = buoyed * length
    row[el.WEIGHT_AIR] = (air + GRAVITY * inside * bore) * length
    return row


def mark_runs(rows: Floats) -> None:
    """Note for each element how long the run of like bending stiffness is that holds it."""
    start = 0
    for i in range(1, len(rows) + 1):
        last = i == len(rows) or abs(rows[i, el.BENDING] / rows[start, el.BENDING] - 1.0) > 0.2
        if last:
            rows[start:i, el.STIFF_RUN] = rows[start:i, el.LENGTH].sum()
            start = i


def build_elements(settings: dict, length: float) -> Floats:
    """Elements of the whole string, bit first, of the total length given; the last component fills up."""
    pieces: list[Floats] = []
    components = settings["string"]["components"]
    stand = settings["rig"]["stand"]
    size = stand / settings["rig"].get("elements_per_stand", 1)
    used = 0.0
    for k, component in enumerate(components):
        last = k == len(components) - 1
        span = length - used if last else min(component["length"], length - used)
        if span <= 1e-6:
            continue
        if last or component["length"] > length - used:
            full = int(span / size + 1e-9)
            first = span - full * size
            spans = ([first] if first > 1e-6 else []) + [size] * full
        else:
            count = max(1, round(span / size))
            spans = [span / count] * count
        pieces += [element_row(component, s, settings) for s in spans]
        used += span
    rows = np.array(pieces)
    mark_runs(rows)
    return rows


def stand_elements(settings: dict, length_now: float) -> Floats:
    """Elements of one more stand: of the component the tally has at that place above the bit."""
    span = settings["rig"]["stand"]
    count = settings["rig"].get("elements_per_stand", 1)
    top = 0.0
    for component in settings["string"]["components"]:
        top += component["length"]
        if top > length_now + 0.5 * span:
            break
    return np.array([element_row(component, span / count, settings) for _ in range(count)])
