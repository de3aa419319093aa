"""What the job leaves: the files, and the few lines of result for the terminal."""

from __future__ import annotations

from collections import Counter
from collections.abc import Callable, Collection, Mapping
from pathlib import Path

import numpy as np

from forensics.episodes.catalogue import Episode, Kind, standing
from forensics.episodes.groups import is_routine
from forensics.exports.episodes import write_episodes
from forensics.exports.friction import write_friction
from forensics.exports.history import write_history
from forensics.exports.las import write_las
from forensics.exports.stamps import stamp
from forensics.exports.summary import write_summary
from forensics.exports.verdicts import DRAFT, write_draft
from forensics.findings import Findings
from forensics.logs.zone import tzinfo_of
from forensics.report.words import MINUS, Show, count, fixed
from pipelines.progress import Progress

EXPORTS: Mapping[str, Callable[[Findings, Path], None]] = {
    "summary.json": write_summary,
    "episodes.csv": write_episodes,
    "history.parquet": write_history,
    "friction.json": write_friction,
}


# What is written only when it is asked for: the same channels as LAS, the figures as files, a file of
# verdicts to be filled in.
EXTRAS = ("las", "figures", "verdicts")


def write(
    findings: Findings,
    folder: Path,
    system: str,
    progress: Progress,
    also: Collection[str] = (),
    paper: str = "a4",
) -> None:
    """Write the report and every export into a folder.

    Parameters
    ----------
    findings : Findings
        What the run's analysis found.
    folder : Path
        An existing folder.
    system : str
        "metric" or "field": what the report shows.
    progress : Progress
        Times the stages "imports", "figures", "pdf" and "exports".
    also : collection of str
        Of `EXTRAS`: "las" for `history.las`, "figures" for each figure as SVG and PNG, "verdicts" for
        `verdicts_draft.csv`.
    paper : str
        "a4" or "letter": the sheets of `report.pdf`.
    """
    with progress.loading("loading the report"):
        from forensics.report.describe import describe, make_scene
        from forensics.report.drawing import draw_figures
        from forensics.report.explore.page import render_explorer
        from forensics.report.pdf import to_pdf
        from forensics.report.render import render_report
    with progress.stage("figures", "drawing the report"):
        report = describe(findings, system)
        drawn = draw_figures(report, vector=True)
        (folder / "report.html").write_text(render_report(drawn), encoding="utf-8", newline="\n")
        explorer = render_explorer(make_scene(findings, system))
        (folder / "explore.html").write_text(explorer, encoding="utf-8", newline="\n")
    with progress.stage("pdf", "setting the report on paper"):
        (folder / "report.pdf").write_bytes(to_pdf(drawn, paper))
    with progress.stage("exports", "writing the exports"):
        for name, export in EXPORTS.items():
            export(findings, folder / name)
        if "las" in also:
            write_las(findings, folder / "history.las")
        if "verdicts" in also:
            write_draft(findings, folder / DRAFT)
        if "figures" in also:
            from forensics.report.figure_files import write_figures

            (folder / "figures").mkdir()
            write_figures(report, folder / "figures")


def lines(findings: Findings, folder: Path, system: str = "metric") -> tuple[str, ...]:
    """Give the result in at most ten lines.

    Parameters
    ----------
    findings : Findings
        What the run's analysis found.
    folder : Path
        Where the results are.
    system : str
        "metric" or "field".

    Returns
    -------
    tuple of str
        The finding, the run, its rows, friction and block weight, the episodes, the worst, the report.
    """
    case, headline = findings.case, findings.headline
    show = Show(system, findings.log.timezone)
    said = [
        f"{case.id}: {case.title}",
        headline.sentence,
        f"Confidence: {headline.confidence}",
        _run(findings, show),
        _rows(findings),
        _friction(findings),
        f"Block weight: {show.with_interval(findings.calibration.block_weight, 'force')}",
        _episodes(findings.episodes),
        _worst(findings, show),
        f"Report: {folder / 'report.html'}",
    ]
    # A terminal may know neither thin spaces nor a true minus.
    return tuple(" ".join(line.split()).replace(MINUS, "-") for line in said if line)


def _run(findings: Findings, show: Show) -> str:
    log = findings.log
    tz = tzinfo_of(log.timezone)
    depth = log.values["bit_depth"]
    span = show.depths(float(np.nanmin(depth)), float(np.nanmax(depth)))
    return f"Run: {stamp(log.time[0], tz)} to {stamp(log.time[-1], tz)}, bit {span}"


def _rows(findings: Findings) -> str:
    rows = len(findings.log)
    aside = rows - int(np.count_nonzero(findings.log.used))
    files = count(len(findings.log.files), "file")
    return f"Read: {count(rows, 'row')} from {files}, {fixed(aside, 0)} set aside"


def _friction(findings: Findings) -> str:
    parts = []
    for section in findings.calibration.sections:
        factor = section.factor
        how = f"({factor.low:.2f} to {factor.high:.2f})" if factor.determined else "(assumed)"
        parts.append(f"{section.kind} {factor.value:.2f} {how}")
    return f"Friction: {', '.join(parts)}"


def _episodes(episodes: tuple[Episode, ...]) -> str:
    if not episodes:
        return "Episodes: none"
    rejected = len(episodes) - len(standing(episodes))
    episodes = standing(episodes)
    counts = Counter(episode.kind.value for episode in episodes)
    routine = sum(is_routine(episode) for episode in episodes)
    told = ", ".join(f"{counts[kind.value]} {kind.value}" for kind in Kind if counts[kind.value])
    said = f"Episodes: {told or 'none that stands'}"
    said += f" ({routine} of them routine sinusoidal running)" if routine else ""
    return said + (f"; {rejected} rejected by the engineer" if rejected else "")


def _worst(findings: Findings, show: Show) -> str:
    """Name the episode that lost the most weight, if any did."""
    losing = [e for e in standing(findings.episodes) if e.lost_weight.value > 0]  # not so where it is NaN
    if not losing:
        return ""
    worst = max(losing, key=lambda e: e.lost_weight.value)
    tz = tzinfo_of(findings.log.timezone)
    lost = show.with_interval(worst.lost_weight, "force")
    return f"Most weight lost: {lost} in {worst.id}, from {stamp(worst.start, tz)}"
