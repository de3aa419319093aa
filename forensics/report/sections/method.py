"""Assumptions made, limits of the method, cautions."""

from __future__ import annotations

import math

from forensics.episodes.catalogue import Episode
from forensics.mechanics.hydraulics import bit_pressure_drop
from forensics.replay.ready import usual_thrust
from forensics.report import derived
from forensics.report.elements import Bullets, Column, Notice, Section, Table, Text
from forensics.report.scene import Scene
from forensics.report.sections.cautions import GENERAL, METHOD_LIMITS
from forensics.report.sections.first import worst_episode
from forensics.report.words import duration, fixed, plain

LEAST_DROP = 50.0  # N; less is nothing

# Quantity of each channel whose noise is shown.
_NOISE = {
    "hookload": "force",
    "wob": "force",
    "torque": "moment",
    "rpm": "rotation",
    "standpipe_pressure": "pressure",
    "differential_pressure": "pressure",
    "flow_in": "flow",
    "flow_out": "flow",
    "block_position": "length",
    "bit_depth": "length",
    "hole_depth": "length",
    "downhole_wob": "force",
    "downhole_torque": "moment",
}


def describe(scene: Scene) -> Section:
    """Describe assumptions, limits and cautions."""
    elements = (
        assumption_table(scene),
        noise_table(scene),
        Text(
            "Signs: tension is positive and compression negative where loads along the hole are shown; "
            "weight on bit and compression stated as such are positive; residuals are measured less "
            "modelled. Depths are measured along the hole from the datum of the survey. Intervals are 90 "
            "% intervals."
        ),
        Bullets(METHOD_LIMITS, "Limits of the method:"),
        Notice("Cautions", GENERAL),
    )
    return Section("method", "Assumptions, limits and cautions", elements)


def assumption_table(scene: Scene) -> Table:
    """List the choices the result rests on."""
    case, found, show = scene.findings.case, scene.findings, scene.show
    rules = case.criteria
    given = case.friction
    rows = [
        ("helical onset", plain(rules.helical_onset), "[criteria] of the case, or default"),
        ("helical release", plain(rules.helical_release), "[criteria] of the case, or default"),
        ("clearance measured at", plain(rules.clearance), "[criteria] of the case, or default"),
        *effects(scene),
        (
            "episodes closer than this are one",
            duration(rules.bridge_gap),
            "[criteria] of the case, or default",
        ),
        ("shortest episode kept", duration(rules.minimum_duration), "[criteria] of the case, or default"),
        (
            "friction used as given, not calibrated",
            "yes" if given.fixed else "no",
            "[friction] of the case, or default",
        ),
        (
            "hookload has the block in it",
            "yes" if case.rig.hookload_includes_block else "no",
            "[rig] of the case",
        ),
    ]
    if case.rig.lines:
        text = f"{case.rig.lines} lines"
        if case.rig.sheave_efficiency:
            text += f", {fixed(case.rig.sheave_efficiency, 3)} per sheave"
        rows.append(("hoisting tackle", text, "[rig] of the case"))
    rows.append(("usual flow of the run", show.value(found.rig.usual_flow, "flow"), "flow in"))
    origin = "time log, and [string] of the case"
    rows.append(("what the pumps do to the hookload", pump_words(scene), origin))
    columns = (Column("assumption"), Column("value"), Column("from"))
    return Table("What the result rests on", columns, tuple(rows))


def pump_words(scene: Scene) -> str:
    """Say what the pumps add to the hookload, as learned from the log and as the jets would have it."""
    found, show = scene.findings, scene.show
    learned = found.rig.pump_shift
    said = "no shift stands out in the log; none is taken out"
    if learned is not None:
        said = f"{show.with_interval(learned, 'force')}, learned from the log and taken out of the hookload"
    area = found.case.nozzle_area
    if area is None:
        return (
            f"{said}. How much of it presses the string from the bit can't be told without the nozzle area "
            "([string] nozzle_area): none is taken to"
        )
    thrust = usual_thrust(found.rig, found.well, area)
    taken = show.value(float(bit_pressure_drop(thrust, area)), "pressure")
    return (
        f"{said}. At the usual flow the nozzles take {taken} and the jets lift the bit with "
        f"{show.value(thrust, 'force')}, which presses the string from below beside the bit load; the rest "
        "is returns on the outside, and the hose. Pressure itself adds nothing to the effective tension"
    )


def effects(scene: Scene) -> list[tuple[str, str, str]]:
    """Say which effects of torque and tool joints are applied, and what each comes to at the main episode."""
    rules = scene.findings.case.criteria
    worst = worst_episode(scene)
    torque = "applied" if rules.torque_effect else "not applied"
    torque += " to the helical thresholds, to the published onsets and to the wall force of a helix"
    joints = "applied" if rules.tool_joint_effect else "not applied"
    joints += " to the bending of jointed pipe that is not buckled; no threshold depends on it"
    if worst is not None:
        torque += _torque_size(scene, worst)
        joints += _sag(scene, worst)
    origin = "[criteria] of the case, or default"
    return [
        ("effect of torque", torque, f"{origin}; He, Halsey and Kyllingstad 1995, energy of a helix"),
        ("effect of tool joints", joints, f"{origin}; Paslay and Cernocky 1991, beam between joints"),
    ]


def _torque_size(scene: Scene, episode: Episode) -> str:
    """Say what torque takes off the onsets at an episode's peak, in a sentence."""
    drop = episode.onsets_drop
    if not math.isfinite(drop):
        return ""
    if drop < LEAST_DROP:
        return f". At the peak of {episode.id} the string carried no torque there: nothing to take off"
    size = scene.show.value(drop, "force")
    return f". At the peak of {episode.id} torque at the place takes off {size} of the onset"


def _sag(scene: Scene, episode: Episode) -> str:
    """Say whether the joints hold the body off the wall at an episode's peak, in a sentence."""
    found = derived.sag_between_joints(scene.findings, episode)
    if found is None:
        return ""
    scale, unit, places = (1e3, "mm", 0) if scene.show.system == "metric" else (1.0 / 0.0254, "in", 2)
    hang, room = (fixed(scale * part, places) for part in found)
    start = f". At the peak of {episode.id} {room} {unit} are free between the body and the wall; "
    if found[0] < found[1]:
        return f"{start}it sags {hang} {unit} between joints, so that the joints hold it off"
    return f"{start}it would sag more between joints, so that it lies on the wall: see the other clearance"


def noise_table(scene: Scene) -> Table:
    """Noise by channel, from which thresholds follow."""
    show = scene.show
    rows = tuple(
        (name, show.value(value, _NOISE[name]) if name in _NOISE else f"{value:.3g} (SI)")
        for name, value in sorted(scene.findings.rig.noise.items())
    )
    note = "Thresholds are at least six times the noise, and windows at least three samples long."
    columns = (Column("channel", "code"), Column("noise, one sigma", "number"))
    return Table(
        "Short-term noise found in the log", columns, rows, note if rows else "", "No noise was estimated."
    )
