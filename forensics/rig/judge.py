"""On bottom or not: readings, references and the vote on each row, asked twice."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from forensics.estimate import Estimate
from forensics.logs.table import TimeLog
from forensics.rig import noise
from forensics.rig.activity import SMOOTHING, Surface, bottom_evidence
from forensics.rig.breakover import Breakovers, find_breakovers
from forensics.rig.depth import DepthView
from forensics.rig.drives import Drives
from forensics.rig.noise import Bools, Floats
from forensics.rig.signals import Signals
from forensics.rig.steady import Motion, Steady, find_steady
from forensics.rig.tare import (
    Reference,
    build_reference,
    hanging_share,
    modelled_reference,
    rezero_pressure,
)
from forensics.units import G
from forensics.well.model import Well

# Off bottom by at least this much, tried in turn until readings turn up, as shares of `near`.
_CLEARANCES = (1.0, 0.4, 0.15)
# Second look: a bit judged free gives readings from this far off bottom on [m].
_FREE_GAP = 0.5
_COMMON_RPM = 60.0
# Travel after a reversal before a weight is steady, as a share of `near`; its drift shows the rest.
_SETTLE_SHARE = 0.5


@dataclass(frozen=True)
class Moves:
    """Block and hookload once slips are known; arrays of shape (n,)."""

    hookload: Floats
    speed: Floats
    direction: NDArray[np.int8]
    block: Floats
    slips: Bools


@dataclass(frozen=True)
class Facts:
    """What is known before the bottom is judged; `below` is the string's modelled weight [N], shape (n,)."""

    log: TimeLog
    well: Well
    signals: Signals
    moves: Moves
    drives: Drives
    depths: DepthView
    below: Floats


@dataclass(frozen=True)
class Judged:
    """Votes on each row, steady readings, references, the model they are carried by [N], rows surely free."""

    vote: NDArray[np.int8]
    steady: Steady
    references: tuple[Reference, Reference, Reference]
    base: Floats
    clear: Bools


def judge_bottom(facts: Facts, block_weight: Estimate | None) -> Judged:
    """Take readings surely off bottom, references from them, and with these look at the bottom again.

    Parameters
    ----------
    facts : Facts
        Signals, motion, drives and depths.
    block_weight : Estimate or None
        For a modelled reference where there is no reading [N].

    Returns
    -------
    Judged
        Votes, readings and references.
    """
    depths, signals = facts.depths, facts.signals
    hanging = hanging_weight(facts.well, facts.log)
    steady = Steady()
    for share in _CLEARANCES:
        steady = _steady(facts, (depths.gap > share * depths.near) | depths.run_in)
        if len(steady.of("rotating")) or len(steady.of("slack_off")):
            break
    share = hanging_share(steady, facts.below, hanging)
    base = facts.below + share * hanging * np.nan_to_num(facts.moves.block)
    surface = _surface(facts)
    references = _references(steady, base, signals, block_weight)
    vote = bottom_evidence(surface, depths, references, signals)
    # Once more: a bit known to be free close to bottom gives the references of that very place.
    free = (noise.hold(vote, initial=-1) < 0) & ((depths.gap > _FREE_GAP) | depths.run_in)
    steady = _steady(facts, free)
    references = _references(steady, base, signals, block_weight)
    return Judged(bottom_evidence(surface, depths, references, signals), steady, references, base, free)


def breakovers(facts: Facts, judged: Judged) -> Breakovers:
    """Find the starts upward of a string that stood still, off bottom."""
    settle = _SETTLE_SHARE * facts.depths.near
    return find_breakovers(_motion(facts, judged.clear), facts.signals, settle)


def hanging_weight(well: Well, log: TimeLog) -> float:
    """Weigh the top pipe per length in air, full of mud [N/m]."""
    top = well.string.components[-1]
    fill = well.fluid.inside
    if fill is None:
        fill = float(well.fluid.outside_at(log.time[:1], 0.0)[0])
    return top.weight + fill * G * top.inner_area


def _steady(facts: Facts, clear: Bools) -> Steady:
    settle = _SETTLE_SHARE * facts.depths.near
    return find_steady(_motion(facts, clear), facts.signals, facts.below, settle)


def _motion(facts: Facts, clear: Bools) -> Motion:
    moves, drives = facts.moves, facts.drives
    return Motion(
        hookload=moves.hookload,
        speed=moves.speed,
        direction=moves.direction,
        block=moves.block,
        turning=drives.turning,
        rpm=drives.rpm,
        torque=drives.torque,
        pumping=drives.pumping,
        flow_steady=drives.flow_steady,
        clear=clear & ~moves.slips,
        slips=moves.slips,
    )


def _references(
    steady: Steady, base: Floats, signals: Signals, block_weight: Estimate | None
) -> tuple[Reference, Reference, Reference]:
    rotating = build_reference("rotating", steady, base, signals)
    if not rotating.known and block_weight is not None:
        rotating = modelled_reference(rotating, base, block_weight)
    return (
        rotating,
        build_reference("slack_off", steady, base, signals),
        build_reference("pick_up", steady, base, signals),
    )


def _surface(facts: Facts) -> Surface:
    log, signals, moves, drives = facts.log, facts.signals, facts.moves, facts.drives
    free = (facts.depths.gap > facts.depths.near) & drives.pumping & drives.flow_steady & ~moves.slips
    pressure, level = rezero_pressure(log, signals, free)
    pace = -noise.rate(noise.fill(moves.block), log.time, noise.window_seconds(SMOOTHING, signals.interval))
    radius = 0.5 * facts.well.string.components[-1].contact_diameter()
    # A string known to turn only by its torque is taken to turn at a common speed.
    rpm = noise.fill(drives.rpm) if np.isfinite(drives.rpm).any() else np.full(len(log), _COMMON_RPM)
    spin = np.abs(rpm) * (2.0 * np.pi / 60.0) * radius
    return Surface(
        reading=moves.hookload,
        smooth=noise.running_mean(moves.hookload, signals.count(SMOOTHING)),
        direction=moves.direction,
        speed=moves.speed,
        axial=np.nan_to_num(pace / np.hypot(pace, np.maximum(spin, 1e-3))),
        turning=drives.turning,
        pumping=drives.pumping | drives.pumping_unknown,
        slips=moves.slips,
        differential=pressure,
        differential_level=level,
    )
