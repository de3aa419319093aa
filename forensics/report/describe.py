"""Findings to content: the list of sections, in the order they are read."""

from __future__ import annotations

from importlib import metadata
from typing import TYPE_CHECKING

from forensics.report.elements import Report
from forensics.report.scene import Scene, main_episodes
from forensics.report.sections import (
    account,
    calibration,
    episodes,
    first,
    flips,
    method,
    overview,
    pipe,
    run,
    witness,
)
from forensics.report.words import Show

if TYPE_CHECKING:
    from forensics.findings import Findings

# To add a section: a function from scene to Section, put here where it is to be read.
SECTIONS = (
    first.describe,
    run.describe,
    overview.describe,
    episodes.describe,
    pipe.describe,
    flips.describe,
    calibration.describe,
    witness.describe,
    episodes.describe_tables,
    account.describe,
    method.describe,
)

BESIDE = (("explore.html", "Move through the run in time, and along the hole at any moment"),)


def make_scene(findings: Findings, units: str) -> Scene:
    """Choose the main episodes and the way to show things."""
    show = Show(units, findings.log.timezone or "UTC")
    return Scene(findings, show, main_episodes(findings.episodes))


def describe(findings: Findings, units: str = "metric") -> Report:
    """Describe a whole report.

    Parameters
    ----------
    findings : Findings
        What the run's analysis found.
    units : str
        "metric" or "field".

    Returns
    -------
    Report
        Sections of plain content; figures are drawn when it is rendered.
    """
    scene = make_scene(findings, units)
    case = findings.case
    sections = tuple(section(scene) for section in SECTIONS)
    return Report(case.title, "Post-run event report", _facts(scene), sections, _footer(units), BESIDE)


def _facts(scene: Scene) -> tuple[tuple[str, str], ...]:
    """Give the strip of facts under the title; what the case does not give is left out."""
    case, log, show = scene.findings.case, scene.findings.log, scene.show
    period = ""
    if len(log):
        period = f"{show.stamp(float(log.time[0]))} to {show.stamp(float(log.time[-1]))}"
    pairs = (
        ("case", case.id),
        ("well", case.well),
        ("field", case.field_name),
        ("rig", case.rig_name),
        ("section", case.section),
        ("mud", case.mud_system),
        ("period", period),
        ("times shown in", show.timezone),
        ("units", show.system),
        ("notes", case.notes),
    )
    return tuple((name, text) for name, text in pairs if text)


def _footer(units: str) -> str:
    names = ("tallyback", "numpy", "matplotlib")
    versions = ", ".join(f"{name} {version(name)}" for name in names)
    return f"Made by {versions}; units {units}."


def version(name: str) -> str:
    """Give the version of an installed package."""
    try:
        return metadata.version(name)
    except metadata.PackageNotFoundError:
        return "from source"
