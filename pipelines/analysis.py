"""The stages of the analysis, in order: from a case to everything its run has to tell."""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np

from forensics.case import Case
from forensics.case.unused import unused_settings
from forensics.episodes.catalogue import Episode, Kind, standing
from forensics.episodes.describe import tell, weigh_episodes
from forensics.episodes.find import flag_rows, rows_in_doubt, rows_in_question
from forensics.episodes.flips import find_flips, with_flip
from forensics.episodes.groups import are_many, load_clustering
from forensics.episodes.material import Material
from forensics.episodes.onsets import with_onsets
from forensics.episodes.pipe import pipe_tolls
from forensics.episodes.travel import travel_of, with_free_length
from forensics.episodes.verdict_file import WrittenVerdict, read_verdicts, verdicts_path
from forensics.episodes.verdicts import Judged, judge, verdict_remarks
from forensics.findings import Findings
from forensics.friction.byhand import as_readings
from forensics.friction.calibrate import calibrate
from forensics.friction.readings import find_readings
from forensics.friction.result import Calibration
from forensics.logs.read import read_time_logs
from forensics.logs.records import RecordedSlide, RecordedWeight, read_slides, read_weights
from forensics.logs.table import TimeLog
from forensics.mechanics.offbottom import OffBottomModel
from forensics.replay.course import course
from forensics.replay.draws import more_draws, replay_draws
from forensics.replay.lines import fan
from forensics.replay.model import build_model
from forensics.replay.moments import critical_load, profiles
from forensics.replay.places import place_numbers
from forensics.replay.ready import block_zero, ready
from forensics.replay.run import Replay, replay
from forensics.replay.springs import springs
from forensics.report.scene import main_episodes
from forensics.rig.absent import absent_channels, idle_channels
from forensics.rig.activity import refine_activity
from forensics.rig.contradictions import contradictions
from forensics.rig.plausible import check_block, check_hookload
from forensics.rig.travel import match_travel
from forensics.rig.understand import understand_rig
from forensics.rig.view import RigView
from forensics.well.model import Well, load_well
from pipelines.fingerprints import fingerprints
from pipelines.progress import Progress

# The fan of model weights starts here: shallower, friction tells nothing [m].
SHALLOW = 100.0

# Episodes whose peak has its own profile among those of the whole run, the gravest first.
PEAKS = 200

# Kinds that press the string; the others have no load to be critical.
PRESSED = (Kind.BUCKLING, Kind.LOCKUP)


@dataclass(frozen=True)
class Run:
    """A run as read and understood, before its loads; with what the rig kept by hand."""

    case: Case
    log: TimeLog
    well: Well
    rig: RigView
    weights: tuple[RecordedWeight, ...] = ()
    slides: tuple[RecordedSlide, ...] = ()


def analyse(case: Case, progress: Progress, units: str = "metric") -> Findings:
    """Run every stage of the analysis on a case.

    Parameters
    ----------
    case : Case
        One run of one string.
    progress : Progress
        Shows and times the stages.
    units : str
        "metric" or "field": units of the finding's sentences.

    Returns
    -------
    Findings
        All that the run has to tell.

    Raises
    ------
    InputError
        If a log or a table can't be used, or they contradict one another.
    """
    with progress.stage("reading", "reading the verdicts"):
        verdicts = read_verdicts(case)
    run = understand(case, progress)
    model, calibration = calibrate_run(run, progress)
    with progress.stage("replay", "replaying the run"):
        made = ready(run.log, run.well, run.rig, calibration, case, model)
        loads = replay(made)
        rig = refine_activity(run.rig, loads.bit_load, run.log)
    # Not named here: a second holder would keep alive what the rules work out on it before the draws.
    doubts = contradictions(run.log, run.well, rig)
    findings = _tell(
        Material(run.log, rig, loads, None, calibration, run.well, case, system=units, doubts=doubts),
        made,
        verdicts,
        progress,
    )
    return replace(findings, weights=run.weights, slides=run.slides)


def understand(case: Case, progress: Progress) -> Run:
    """Read logs and tables, check them against one another, and tell what the rig was doing.

    Parameters
    ----------
    case : Case
    progress : Progress

    Returns
    -------
    Run

    Raises
    ------
    InputError
        If a log or a table can't be used, or they contradict one another.
    """
    with progress.stage("reading", "reading the logs"):
        log = read_time_logs(case)
        weights, slides = read_weights(case, log), read_slides(case)
    with progress.stage("well", "reading the well"):
        well = load_well(case)
        well.check_reach(float(np.nanmax(log.values["bit_depth"])))
        check_hookload(log, well)
        check_block(log, case)
        log = match_travel(log)
    with progress.stage("rig", "telling what the rig was doing"):
        rig = understand_rig(log, well, case)
        rig = replace(rig, can_not_tell=(*rig.can_not_tell, *absent_channels(log)))
    return Run(case, log, well, rig, weights, slides)


def calibrate_run(run: Run, progress: Progress) -> tuple[OffBottomModel, Calibration]:
    """Tabulate the well down to the deepest the bit got, and learn friction and weights from the run.

    Parameters
    ----------
    run : Run
    progress : Progress

    Returns
    -------
    OffBottomModel, Calibration
    """
    with progress.stage("calibration", "calibrating friction"):
        deepest = float(np.nanmax(run.log.values["bit_depth"]))
        model = build_model(run.well, run.case, deepest, block_zero(run.rig))
        readings = find_readings(run.log, run.rig, run.well)
        readings += as_readings(run.weights, run.log, run.rig, run.case)
        return model, calibrate(readings, run.well, run.case, model, run.rig)


def _tell(
    material: Material, made: Replay, verdicts: tuple[WrittenVerdict, ...], progress: Progress
) -> Findings:
    """Find and weigh the episodes, and gather all that the run has to tell."""
    with progress.stage("episodes", "finding episodes"):
        material = replace(material, flagged=flag_rows(material))
        wanted = rows_in_question(material)
    with progress.stage("draws", "replaying with all that is uncertain"):
        material = replace(material, draws=replay_draws(made, wanted))
        material = replace(material, draws=more_draws(made, material.draws, rows_in_doubt(material)))
    with progress.stage("episodes", "weighing episodes"):
        weighed = weigh_episodes(material)
        judged = _judge(material, weighed.episodes, verdicts)
        weighed = replace(weighed, episodes=judged.episodes)
    if are_many(weighed.episodes):
        with progress.loading("loading the clustering"):
            load_clustering()
    with progress.stage("episodes", "grouping episodes"):
        told = tell(material, weighed)
        episodes = tuple(_placed(e, made, material) for e in told.episodes)
    with progress.stage("profiles", "taking load profiles"):
        episodes = _with_travel(episodes, made, material)
        mains = main_episodes(episodes)
        taken = profiles(made, [episode.peak for episode in mains])
        peaks = {episode.id: profile for episode, profile in zip(mains, taken, strict=True)}
        tolls = pipe_tolls(made, material, peaks, standing(episodes))
        told_peaks = [episode.peak for episode in main_episodes(episodes, PEAKS)]
        through = course(made, material.loads, told_peaks)
    with progress.stage("flips", "searching what would turn the finding"):
        flips = find_flips(made, material, episodes)
    log, well = material.log, material.well
    return Findings(
        case=material.case,
        log=log,
        well=well,
        rig=material.rig,
        calibration=material.calibration,
        loads=material.loads,
        fan=fan(material.calibration, made.model, (SHALLOW, float(np.nanmax(log.values["bit_depth"])))),
        episodes=episodes,
        families=told.families,
        profiles=peaks,
        headline=with_flip(told.headline, flips, material.system),
        dropped=told.dropped,
        inputs=fingerprints(material.case, log),
        warnings=_remarks(material) + verdict_remarks(material.case, judged.placed),
        tolls=tolls,
        draws=material.draws,
        flips=flips,
        verdicts=judged.placed,
        course=through,
    )


def _judge(
    material: Material, episodes: tuple[Episode, ...], verdicts: tuple[WrittenVerdict, ...]
) -> Judged:
    """Put the engineer's verdicts to the episodes."""
    path = verdicts_path(material.case)
    if path is None:
        return Judged(episodes, ())
    return judge(verdicts, episodes, path, material.log.timezone)


def _placed(episode: Episode, made: Replay, material: Material) -> Episode:
    """Hold an episode that presses the string against the criteria at the place of its peak."""
    if episode.kind not in PRESSED:
        return episode
    row, md = episode.peak, episode.peak_md
    at = place_numbers(made, row, md, episode.peak_compression.value)
    episode = replace(episode, critical_load=critical_load(made, row, md))
    return with_onsets(episode, at, material.case.criteria, material.system)


def _with_travel(
    episodes: tuple[Episode, ...], made: Replay, material: Material
) -> tuple[Episode, ...]:
    """Tell how far down the string was free in the episodes in which it may have hung."""
    moves = {episode.id: travel_of(material, episode) for episode in episodes}
    told = {name: move for name, move in moves.items() if move is not None}
    taken = profiles(made, [move.row for move in told.values()])
    for (name, move), profile in zip(tuple(told.items()), taken, strict=True):
        told[name] = with_free_length(move, springs(made, profile, float(move.sense)))
    return tuple(replace(e, travel=told[e.id]) if e.id in told else e for e in episodes)


def _remarks(material: Material) -> tuple[str, ...]:
    """Everything a reader should know of the input, each said once."""
    log = material.log
    unused = (*unused_settings(material.case), *idle_channels(log))
    return tuple(dict.fromkeys((*log.warnings, *material.well.warnings, *material.doubts, *unused)))
