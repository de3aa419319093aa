"""The case file as frozen objects, every number in SI."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field
from pathlib import Path


@dataclass(frozen=True)
class ChannelChoice:
    """A column the user named for a channel, with a unit where the file gives none."""

    column: str
    unit: str | None = None


@dataclass(frozen=True)
class LogSettings:
    """`[logs]`: files in the order given; zone for stamps that carry none; units of WITS captures.

    `timezones` names the zone of single files, by their path.
    """

    time: tuple[Path, ...]
    depth: tuple[Path, ...] = ()
    timezone: str = "UTC"
    wits_units: str | None = None
    timezones: Mapping[Path, str] = field(default_factory=dict)
    channels: Mapping[str, ChannelChoice] = field(default_factory=dict)

    def zone_of(self, path: Path) -> str:
        """Zone of a file's stamps that carry none."""
        return self.timezones.get(path, self.timezone)


@dataclass(frozen=True)
class TieIn:
    """Where the survey starts [m, rad, rad]."""

    md: float
    inclination: float
    azimuth: float


@dataclass(frozen=True)
class FluidSettings:
    """`[fluid]`: outside density [kg/m3] or a file; inside density where it differs."""

    density: float | None = None
    file: Path | None = None
    density_inside: float | None = None


@dataclass(frozen=True)
class RigSettings:
    """`[rig]`: block weight [N], lines strung, efficiency per sheave, block in the hookload or not."""

    block_weight: float | None = None
    lines: int | None = None
    sheave_efficiency: float | None = None
    hookload_includes_block: bool = True


@dataclass(frozen=True)
class FrictionSettings:
    """`[friction]`: what to assume before, or instead of, calibration (None: the program's own default)."""

    cased: float | None = None
    open: float | None = None
    fixed: bool = False


@dataclass(frozen=True)
class CriteriaSettings:
    """`[criteria]`: thresholds and episode rules [s].

    `torque_effect` lowers the helical onset by what torque at the place does and presses the helix on the
    wall, in the replay and in the published onsets that an episode is held against.
    `tool_joint_effect` bends jointed pipe more than the hole is curved, as its joints make it.
    """

    helical_onset: str = "chen"
    helical_release: str = "unbuckled"
    clearance: str = "tool_joint"
    bridge_gap: float = 60.0
    minimum_duration: float = 20.0
    torque_effect: bool = False
    tool_joint_effect: bool = True


@dataclass(frozen=True)
class LimitSettings:
    """`[limits]`: what the report checks margins against [N, N, N.m, N]; None where not given."""

    hookload: float | None = None
    overpull: float | None = None
    torque: float | None = None
    wob: float | None = None
    pipe_class: str | None = None


@dataclass(frozen=True)
class RecordSettings:
    """`[records]`: hand-kept tables."""

    weights: Path | None = None
    slides: Path | None = None
    verdicts: Path | None = None


@dataclass(frozen=True)
class Case:
    """One run of one string in one hole section, as its case file states it.

    `survey_accuracy` is the random error of a station's direction, one sigma [rad], None where not stated;
    `nozzle_area` that of all the bit's nozzles together [m2], None where it is not given.
    """

    path: Path
    id: str
    title: str
    logs: LogSettings
    survey: Path
    hole: Path
    string: Path
    fluid: FluidSettings
    tie_in: TieIn | None = None
    survey_accuracy: float | None = None
    rig: RigSettings = field(default_factory=RigSettings)
    friction: FrictionSettings = field(default_factory=FrictionSettings)
    criteria: CriteriaSettings = field(default_factory=CriteriaSettings)
    limits: LimitSettings = field(default_factory=LimitSettings)
    records: RecordSettings = field(default_factory=RecordSettings)
    well: str | None = None
    field_name: str | None = None
    rig_name: str | None = None
    section: str | None = None
    mud_system: str | None = None
    notes: str | None = None
    campaign: str | None = None
    nozzle_area: float | None = None
