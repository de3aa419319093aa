"""The true path of the hole and the survey that was delivered, which does not know all of it."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from .elements import DIAMETER, MU, T_DOWN

Floats = NDArray[np.float64]
STEP = 2.0
FIRST = -60.0


@dataclass(frozen=True)
class Hole:
    """The hole as it really is: a table of tangent, diameter and friction along measured depth."""

    md: Floats
    inclination: Floats
    azimuth: Floats
    table: Floats
    shoe: float
    total_depth: float
    friction: Floats

    def mean_friction(self, top: float, bottom: float) -> float:
        """Length-weighted mean friction of an interval."""
        inside = (self.md >= top) & (self.md <= bottom)
        return float(self.friction[inside].mean()) if inside.any() else float("nan")


def wander(md: Floats, rng: np.random.Generator, wavelength: float, pieces: int = 24) -> Floats:
    """Smooth random curve of unit RMS with wavelengths around the one given."""
    total = np.zeros_like(md)
    for _ in range(pieces):
        length = wavelength * rng.uniform(0.6, 1.8)
        total += np.sin(2.0 * np.pi * md / length + rng.uniform(0.0, 2.0 * np.pi))
    return total / np.sqrt(0.5 * pieces)


def profile(well: dict, md: Floats) -> tuple[Floats, Floats]:
    """Planned inclination and azimuth [rad]: straight lines between the profile's corners."""
    corners = np.array(well["profile"], dtype=float)
    inc = np.interp(md, corners[:, 0], corners[:, 1])
    azi = np.interp(md, corners[:, 0], corners[:, 2])
    return np.radians(inc), np.radians(azi)


def build_hole(settings: dict, rng: np.random.Generator) -> Hole:
    """Lay out true tangent, diameter and friction every two metres."""
    well, planted = settings["well"], settings["planted"]
    md = np.arange(FIRST, well["table_end"] + STEP, STEP)
    inc, azi = profile(well, md)
    size = np.radians(planted.get("tortuosity_deg", 0.0))
    length = planted.get("tortuosity_length", 120.0)
    fade = np.clip((md - planted.get("tortuous_from", 300.0)) / 300.0, 0.0, 1.0)
    inc = np.abs(inc + size * fade * wander(md, rng, length))
    azi = azi + size * fade * wander(md, rng, length) / np.maximum(np.sin(inc), 0.3)
    table = np.empty((len(md), 5))
    table[:, 0] = np.sin(inc) * np.cos(azi)
    table[:, 1] = np.sin(inc) * np.sin(azi)
    table[:, T_DOWN] = np.cos(inc)
    table[md <= 0.0, :3] = (0.0, 0.0, 1.0)
    rows = well["holes"]
    edge = np.array([r["bottom"] for r in rows[:-1]])
    index = np.searchsorted(edge, md, side="right")
    table[:, DIAMETER] = np.array([r["diameter"] for r in rows])[index]
    cased = np.array([r["kind"] == "cased" for r in rows])
    shoe = max((r["bottom"] for r in rows if r["kind"] == "cased"), default=0.0)
    base = np.where(cased[index], planted["friction_cased"], planted["friction_open"])
    uneven = planted.get("friction_variation", 0.0) * wander(md, rng, planted.get("friction_length", 500.0))
    working = (md > 0.0) & (np.degrees(inc) > 5.0) & (md < well["total_depth"])
    for part in (cased[index], ~cased[index]):
        if (part & working).any():
            uneven[part] -= uneven[part & working].mean()
    friction = base * np.clip(1.0 + uneven, 0.5, 1.5)
    table[:, MU] = friction
    return Hole(md, inc, azi, table, float(shoe), float(well["total_depth"]), friction)


def delivered_survey(settings: dict, hole: Hole, rng: np.random.Generator) -> dict[str, Floats]:
    """Stations of the planned path plus instrument scatter: the small tortuosity is missing."""
    well, planted = settings["well"], settings["planted"]
    end = well.get("survey_end", well["total_depth"])
    md = np.append(np.arange(0.0, end, well.get("survey_step", 30.0)), end)
    inc, azi = profile(well, md)
    scatter = np.radians(planted.get("survey_scatter_deg", 0.0))
    deviated = np.interp(md, hole.md, hole.inclination) > np.radians(1.0)
    inc = np.abs(inc + deviated * rng.normal(0.0, 1.0, len(md)) * scatter)
    azi = azi + deviated * rng.normal(0.0, 1.0, len(md)) * scatter / np.maximum(np.sin(inc), 0.2)
    return {"md": md, "inclination": np.degrees(inc), "azimuth": np.degrees(azi) % 360.0}
