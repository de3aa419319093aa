"""Everything one run's analysis found: what the report describes and the exports write."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field
from typing import TYPE_CHECKING

from forensics.case import Case
from forensics.episodes.catalogue import Episode, Family, Headline
from forensics.friction.result import Calibration
from forensics.loads import DrawHistory, Fan, LoadHistory, Profile
from forensics.logs.records import RecordedSlide, RecordedWeight
from forensics.logs.table import TimeLog
from forensics.rig.view import RigView
from forensics.well.model import Well

if TYPE_CHECKING:
    from forensics.episodes.flips import Flip
    from forensics.episodes.pipe import PipeToll
    from forensics.episodes.verdicts import PlacedVerdict
    from forensics.replay.course import Course


@dataclass(frozen=True)
class Findings:
    """All that one incident run found.

    `profiles` maps an episode id to the load profile at that episode's peak; `dropped` counts what the
    episode rules set aside, by reason; `inputs` maps a file's name to its SHA-256; `weights` and `slides`
    are what the rig kept by hand; `tolls` tells by episode id what those that pressed the string did to
    the pipe; `draws` is the replay repeated under all that is uncertain; `flips` tells how far inputs would
    have to be off to turn the main episodes; `verdicts` are the engineer's, each with its episode;
    `course` holds load profiles through the whole run.
    """

    case: Case
    log: TimeLog
    well: Well
    rig: RigView
    calibration: Calibration
    loads: LoadHistory
    fan: Fan
    episodes: tuple[Episode, ...]
    families: tuple[Family, ...]
    profiles: Mapping[str, Profile]
    headline: Headline
    dropped: Mapping[str, int] = field(default_factory=dict)
    inputs: Mapping[str, str] = field(default_factory=dict)
    warnings: tuple[str, ...] = ()
    weights: tuple[RecordedWeight, ...] = ()
    slides: tuple[RecordedSlide, ...] = ()
    tolls: Mapping[str, PipeToll] = field(default_factory=dict)
    draws: DrawHistory | None = None
    flips: tuple[Flip, ...] = ()
    verdicts: tuple[PlacedVerdict, ...] = ()
    course: Course | None = None
