"""The run's facts: well, hole, string, survey, mud, weights and friction."""

from __future__ import annotations

import math
from dataclasses import replace

import numpy as np

from forensics.mechanics.lockup import sliding_angle
from forensics.report.elements import Column, Number, Numbers, Section, Table
from forensics.report.scene import Scene
from forensics.report.sections.first import friction_numbers, number, section_name
from forensics.report.words import Show, count, duration, fixed
from forensics.well.model import Well


def describe(scene: Scene) -> Section:
    """Describe what was run, in what hole, in what mud."""
    elements = (
        Numbers("Period, path and mud", run_numbers(scene), worded=True),
        hole_table(scene.findings.well, scene.show),
        string_table(scene.findings.well, scene.show),
        Numbers("Friction and weights, with what decided each", calibration_numbers(scene)),
    )
    return Section("run", "The run", elements)


def run_numbers(scene: Scene) -> tuple[Number, ...]:
    """Period, depths, survey and mud."""
    found, show = scene.findings, scene.show
    log = found.log
    rows: list[Number] = []
    if len(log):
        span = f"{show.stamp(float(log.time[0]))} to {show.stamp(float(log.time[-1]))}"
        rows.append(Number("period", span, "", f"time logs; {duration(float(log.time[-1] - log.time[0]))}"))
    bit = log.get("bit_depth")
    if bit is not None:
        text = show.depths(float(np.nanmin(bit)), float(np.nanmax(bit)))
        rows.append(Number("bit depth", text, "", "time logs"))
    rows += survey_numbers(found.well, show) + mud_numbers(found.well, show)
    return tuple(rows)


def survey_numbers(well: Well, show: Show) -> list[Number]:
    """Say what the survey amounts to."""
    path = well.trajectory
    stations = len(path.md)
    rows = [
        Number(
            "survey",
            f"{count(stations, 'station')}, {show.depths(float(path.md[0]), float(path.md[-1]))}",
            "",
            "survey table; minimum curvature between stations",
        ),
        Number(
            "largest inclination", show.value(float(path.inclination.max()), "angle", 1), "", "survey table"
        ),
    ]
    if stations > 1:
        steepest = int(np.argmax(path.dogleg_severity))
        text = show.value(float(path.dogleg_severity[steepest]), "angle_per_length", 2)
        where = show.depths(float(path.md[steepest]), float(path.md[steepest + 1]))
        rows.append(Number("sharpest curvature between stations", f"{text}, {where}", "", "survey table"))
    rows.append(
        Number("deepest station, vertical", show.value(float(path.tvd[-1]), "length", 0), "", "survey table")
    )
    return rows


def mud_numbers(well: Well, show: Show) -> list[Number]:
    """Density outside and inside."""
    fluid = well.fluid
    low, high = float(np.min(fluid.density)), float(np.max(fluid.density))
    origin = "case file" if fluid.by == "constant" else f"mud table, by {fluid.by}"
    text = show.value(low, "density") if low == high else show.range(low, high, "density")
    rows = [Number("mud density", text, "", origin)]
    if fluid.inside is not None:
        rows.append(Number("density inside the string", show.value(fluid.inside, "density"), "", "case file"))
    return rows


def hole_table(well: Well, show: Show) -> Table:
    """List the hole, top down."""
    hole = well.hole
    rows = tuple(
        (
            hole.name[k] or "",
            section_name(hole.kind[k]),
            show.value(float(hole.top[k]), "length", 0),
            show.value(float(hole.bottom[k]), "length", 0),
            show.value(float(hole.diameter[k]), "diameter"),
            fixed(float(hole.friction[k]), 2) if math.isfinite(hole.friction[k]) else "not given",
        )
        for k in range(len(hole.top))
    )
    columns = (
        Column("section"), Column("kind"), Column("top", "number"), Column("bottom", "number"),
        Column("diameter", "number"), Column("friction given", "number"),
    )  # fmt: skip
    return Table("The hole (hole table)", columns, rows)


def string_table(well: Well, show: Show) -> Table:
    """List the string, bit first."""
    string = well.string
    rows = tuple(
        (
            part.name,
            part.kind,
            show.value(part.length, "length", 1),
            show.value(part.od, "diameter"),
            show.value(part.id, "diameter"),
            show.value(part.tool_joint_od, "diameter") if part.tool_joint_od else "not given",
            show.value(part.weight, "linear_weight", 1),
            show.value(part.tensile_rating, "force", 0) if part.tensile_rating else "not given",
        )
        for part in string.components
    )
    columns = (
        Column("component"), Column("kind"), Column("length", "number"), Column("OD", "number"),
        Column("ID", "number"), Column("tool joint OD", "number"), Column("weight in air", "number"),
        Column("tensile rating", "number"),
    )  # fmt: skip
    note = "From the bit up; the last row continues to surface. Weights include tool joints."
    return Table("The string (string table)", columns, rows, note)


def slides_up_to(scene: Scene) -> list[Number]:
    """Inclination up to which pipe slides down the open hole under its own weight."""
    factors = [s.factor for s in scene.findings.calibration.sections if s.kind == "open"]
    if not factors:
        return []
    mu = factors[-1]
    angle, low, high = (sliding_angle(max(one, 0.0)) for one in (mu.value, mu.high, mu.low))
    return [
        number(
            "inclination up to which pipe slides by its own weight, open hole",
            replace(mu, value=angle, low=low, high=high, source="atan(1 / friction factor)"),
            "angle",
            scene.show,
        )
    ]


def calibration_numbers(scene: Scene) -> tuple[Number, ...]:
    """Friction, block weight by the rig's view and the calibration's, pipe above the rotary."""
    found, show = scene.findings, scene.show
    rows = [*friction_numbers(scene), *slides_up_to(scene)]
    rows.append(number("block weight before calibration", found.rig.block_weight, "force", show))
    rows.append(
        number(
            "share of pipe above the rotary that shows",
            found.calibration.pipe_above_rotary,
            "dimensionless",
            show,
        )
    )
    law = found.loads.rate_law
    if law.determined:
        origin = f"rotated footage; {count(law.samples, 'sample')}, spread {fixed(100 * law.spread, 0)} %"
        text = f"(bit load)^{fixed(law.exponent, 2)}"
        rows.append(Number("drilling rate law", text, "", origin))
    else:
        origin = "no rotated footage taught it; the bit load while drilling off rests on less"
        rows.append(Number("drilling rate law", "assumed", "", origin, determined=False))
    return tuple(rows)
