"""Numbers the report derives from the findings: times in each state, turns while buckled, margins."""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np
from numpy.typing import NDArray

from forensics.episodes.catalogue import Episode, Kind, Word
from forensics.mechanics import helix
from forensics.mechanics.fatigue import HALF_JOINT, permissible_dogleg
from forensics.mechanics.hoisting import block_efficiency, derrick_load
from forensics.mechanics.pipe import Tube, worn
from forensics.mechanics.selfconsistent import local_load
from forensics.mechanics.toll import fatigue_grade
from forensics.mechanics.tool_joint import sag
from forensics.well.string import PIPE, Component, buoyed_weight

if TYPE_CHECKING:
    from forensics.findings import Findings
    from forensics.loads import Profile
    from forensics.logs.table import TimeLog

Floats = NDArray[np.float64]

BEND_STEP = 10.0  # m between places at which turning pipe is looked at


@dataclass(frozen=True)
class Margin:
    """A limit beside the largest value of the run [SI]; `row` is where it occurred."""

    name: str
    quantity: str
    limit: float
    largest: float
    row: int
    origin: str

    @property
    def left(self) -> float:
        """What is left below the limit, negative where it was passed [SI]."""
        return self.limit - self.largest


@dataclass(frozen=True)
class TurningBend:
    """Where the hole bends turning drill pipe to the most of what it stands.

    `part` of the string lies at `md` with the bit at `bit` [m] and carries `tension` there [N]; the hole
    bends by `hole`, the pipe stands `stands` [rad/m].
    """

    part: Component
    bit: float
    md: float
    tension: float
    hole: float
    stands: float


def row_seconds(findings: Findings) -> Floats:
    """Time each row stands for, shape (n,): to the next row, or the usual interval before a gap [s]."""
    log = findings.log
    if len(log) < 2:
        return np.full(len(log), log.interval)
    steps = np.append(np.diff(log.time), log.interval)
    return np.where(steps > 5.0 * log.interval, log.interval, steps)


def seconds_in_state(findings: Findings, least: int) -> float:
    """Time with the worst state at least sinusoidal (1) or helical (2), rejected buckling left out [s]."""
    counted = findings.loads.state >= least
    for episode in findings.episodes:
        if episode.word is Word.REJECT and episode.kind is Kind.BUCKLING:
            counted[episode.first : episode.last + 1] = False
    return float(row_seconds(findings)[counted].sum())


def turns_while_buckled(findings: Findings, first: int = 0, last: int | None = None) -> float:
    """Revolutions of the top drive over rows first to last (inclusive) while the string was buckled.

    Returns
    -------
    float
        NaN where the log has no rpm.
    """
    rpm = findings.log.get("rpm")
    if rpm is None:
        return math.nan
    stop = len(findings.log) if last is None else last + 1
    rows = slice(first, stop)
    counted = (findings.loads.state[rows] > 0) & findings.rig.turning[rows]
    turns = np.nan_to_num(rpm[rows]) * row_seconds(findings)[rows] / 60.0
    return float(turns[counted].sum())


def helix_bending_stress(findings: Findings, episode: Episode, compression: float) -> float:
    """Bending stress of a helix at an episode's peak place.

    Parameters
    ----------
    findings : Findings
        Gives hole, string and bit depth.
    episode : Episode
        Gives place and moment.
    compression : float
        [N]

    Returns
    -------
    float
        By `mechanics.helix` [Pa], NaN where the place isn't known.
    """
    bit = findings.log.get("bit_depth")
    if bit is None or not math.isfinite(episode.peak_md) or not math.isfinite(bit[episode.peak]):
        return math.nan
    well = findings.well
    above_bit = max(float(bit[episode.peak]) - episode.peak_md, 0.0)
    part = well.string.components[int(well.string.index_at(above_bit)[0])]
    diameter = float(well.hole.diameter_at(episode.peak_md)[0])
    contact = part.contact_diameter(findings.case.criteria.clearance)
    clearance = max((diameter - contact) / 2.0, 0.0)
    return float(helix.bending_stress(compression, clearance, part.od, part.inertia))


def sag_between_joints(findings: Findings, episode: Episode) -> tuple[float, float] | None:
    """How far the pipe's body sags between joints at an episode's peak, and how far it can [m].

    Parameters
    ----------
    findings : Findings
        Gives hole, string, mud and bit depth.
    episode : Episode
        Gives place, moment and compression.

    Returns
    -------
    tuple of float, or None
        None where the place is not known or is no jointed pipe; the sag is infinite where the span itself
        would buckle.
    """
    bit, force = findings.log.get("bit_depth"), episode.peak_compression.value
    if bit is None or not np.isfinite([episode.peak_md, bit[episode.peak], force]).all():
        return None
    well = findings.well
    above_bit = max(float(bit[episode.peak]) - episode.peak_md, 0.0)
    part = well.string.components[int(well.string.index_at(above_bit)[0])]
    if part.kind not in PIPE or part.tool_joint_od is None or part.tool_joint_od <= part.od:
        return None
    weight = float(np.ravel(buoyed_weight(part, well.fluid.typical, well.fluid.inside))[0])
    side = weight * math.sin(float(well.trajectory.at(np.array([episode.peak_md])).inclination[0]))
    hang = float(sag(force, part.stiffness, side, 2.0 * HALF_JOINT))
    return hang, (part.tool_joint_od - part.od) / 2.0


def turning_bend(findings: Findings) -> TurningBend | None:
    """Find where the hole comes nearest to bending turning drill pipe more than it stands.

    Parameters
    ----------
    findings : Findings
        Gives hole, string, mud, wear class, and the deepest bit at which the string turned.

    Returns
    -------
    TurningBend or None
        Off bottom and without friction; None where the string never turned or no drill pipe hangs in it.
    """
    bit = findings.log.get("bit_depth")
    turned = None if bit is None else bit[findings.rig.turning & np.isfinite(bit)]
    if turned is None or not turned.size or turned.max() <= BEND_STEP:
        return None
    well, deepest = findings.well, float(turned.max())
    md = np.arange(0.5 * BEND_STEP, deepest, BEND_STEP)
    parts, index = well.string.components, well.string.index_at(deepest - md)
    tangent, curvature = well.likely.mean.bends(md)
    weight = np.array([float(buoyed_weight(p, well.fluid.typical, well.fluid.inside)) for p in parts])
    hung = weight[index] * tangent[:, 2] * BEND_STEP
    pull = np.cumsum(hung[::-1])[::-1] - 0.5 * hung
    bend, stands = np.linalg.norm(curvature, axis=1), np.full(len(md), np.nan)
    for row in np.unique(index):
        part, some = parts[int(row)], (index == row) & (pull > 0.0)
        if part.kind == "drillpipe":
            tube = worn(Tube(part.od, part.id), findings.case.limits.pipe_class or "new")
            stands[some] = permissible_dogleg(tube, pull[some], part.youngs_modulus, fatigue_grade(part))
    if not np.isfinite(stands).any():
        return None
    at = int(np.nanargmax(bend / np.maximum(stands, 1e-9)))
    return TurningBend(
        parts[int(index[at])], deepest, float(md[at]), float(pull[at]), float(bend[at]), float(stands[at])
    )


def crown_load(findings: Findings) -> float:
    """Load on the crown at the run's largest hookload, hoisting: hook and block, fast and dead line [N].

    Parameters
    ----------
    findings : Findings
        Gives hookload, lines and efficiency per sheave.

    Returns
    -------
    float
        NaN where one of them is not there.
    """
    rig, hookload = findings.case.rig, findings.rig.hookload
    if rig.lines is None or rig.sheave_efficiency is None or not np.isfinite(hookload).any():
        return math.nan
    efficiency = block_efficiency(rig.sheave_efficiency, rig.lines)
    return derrick_load(float(np.nanmax(hookload)), efficiency, rig.lines)


def other_clearance(findings: Findings) -> str:
    """Name the diameter the clearance is not measured at in this case, in words."""
    return "tool joint" if findings.case.criteria.clearance == "body" else "pipe body"


def other_threshold(findings: Findings, profile: Profile) -> Floats:
    """Sinusoidal threshold along a profile if the clearance were taken at the other diameter.

    Parameters
    ----------
    findings : Findings
        Gives hole, string, and which diameter the case chose.
    profile : Profile
        Shape (k,).

    Returns
    -------
    ndarray, shape (k,)
        [N], NaN where the profile has no threshold.

    Notes
    -----
    Joints hold the pipe off the wall: theirs is the clearance while the body between them does not touch (see
    `mechanics.tool_joint`), the body's where it does. Only the local load follows it, by a third for ordinary
    drill pipe; the term for near-vertical hole stays. The wall force of a helix is not part of the contact.

    References
    ----------
    Mitchell, R. F. (2000), "Helical buckling of pipe with connectors in vertical wells", SPE Drill. & Compl.
    15 (from memory: joints raise the load or not, by their spacing over the pitch).
    """
    well = findings.well
    above_bit = np.clip(float(np.nanmax(profile.md)) - profile.md, 0.0, None)
    index = well.string.index_at(above_bit)
    chosen = findings.case.criteria.clearance
    other = "tool_joint" if chosen == "body" else "body"
    hole = well.hole.diameter_at(profile.md)
    radii = []
    for kind in (chosen, other):
        diameter = np.array([part.contact_diameter(kind) for part in well.string.components])
        radii.append(np.maximum((hole - diameter[index]) / 2.0, 1e-3))
    stiffness = well.string.values("stiffness")[index]
    wound = np.where(profile.state == 2, helix.contact_force(-profile.tension, stiffness, radii[0]), 0.0)
    contact = np.clip(profile.contact - wound, 0.0, None)
    here, there = (local_load(stiffness, contact, radius) for radius in radii)
    return profile.sinusoidal + there - here


def margins(findings: Findings) -> tuple[Margin, ...]:
    """Limits of the case and ratings of the string beside the largest values of the run."""
    limits = findings.case.limits
    rig, log = findings.rig, findings.log
    hanging = rig.hookload - findings.calibration.block_weight.value
    torque = log.get("torque")
    top = findings.well.string.components[-1]
    weakest = [c for c in findings.well.string.components if c.torque_rating is not None]
    candidates = [
        ("hookload", "force", limits.hookload, rig.hookload, "[limits] of the case"),
        (
            "overpull over rotating weight",
            "force",
            limits.overpull,
            _overpull(findings),
            "[limits] of the case",
        ),
        ("surface torque", "moment", limits.torque, torque, "[limits] of the case"),
        ("re-zeroed weight on bit", "force", limits.wob, rig.wob_surface, "[limits] of the case"),
        (f"tension in {top.name} at surface", "force", top.tensile_rating, hanging, "string table, as given"),
    ]
    if weakest:
        part = min(weakest, key=lambda c: c.torque_rating or math.inf)
        candidates.append(
            (
                f"surface torque against {part.name}",
                "moment",
                part.torque_rating,
                torque,
                "string table, as given",
            )
        )
    made = [_margin(*candidate) for candidate in candidates]
    return tuple(margin for margin in made if margin is not None)


def _margin(
    name: str, quantity: str, limit: float | None, values: Floats | None, origin: str
) -> Margin | None:
    if limit is None:
        return None
    if values is None or not np.isfinite(values).any():
        return Margin(name, quantity, limit, math.nan, 0, origin)
    row = int(np.nanargmax(values))
    return Margin(name, quantity, limit, float(values[row]), row, origin)


def _overpull(findings: Findings) -> Floats | None:
    """Hookload above the model's rotating weight out of slips, shape (n,) [N]."""
    fan, bit = findings.fan, findings.log.get("bit_depth")
    good = np.isfinite(fan.rotating)
    if bit is None or not good.any():
        return None
    rotating = np.interp(bit, fan.bit_depth[good], fan.rotating[good], left=np.nan, right=np.nan)
    return np.where(findings.rig.slips, np.nan, findings.rig.hookload - rotating)


def gaps(log: TimeLog) -> list[tuple[float, float]]:
    """Start and end of each gap: no row for more than five usual intervals [s since 1970 UTC]."""
    rows = np.flatnonzero(np.diff(log.time) > 5.0 * log.interval)
    return [(float(log.time[row]), float(log.time[row + 1])) for row in rows]
