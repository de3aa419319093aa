"""The inspection of a case, or of bare logs: what was read, before any mechanics."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass
from pathlib import Path
from typing import TYPE_CHECKING, TypeVar

from forensics.errors import InputError
from pipelines.output import check_target, put_file
from pipelines.progress import Progress

if TYPE_CHECKING:
    from forensics.case import Case
    from forensics.logs.table import TimeLog
    from forensics.report.inspection import Inspection
    from forensics.well.model import Well

PAGE = "inspect.html"
Found = TypeVar("Found")


@dataclass(frozen=True)
class InspectionResult:
    """What an inspection gave: what was read, the same in plain text, and where page and draft are."""

    found: Inspection
    text: str
    page: Path
    draft: Path | None = None


def run(
    paths: Sequence[Path | str],
    out: Path | str | None = None,
    units: str = "metric",
    quiet: bool = False,
    draft: Path | str | None = None,
) -> InspectionResult:
    """Read a case, or bare logs and tables, and show what was read.

    Parameters
    ----------
    paths : sequence of Path or str
        One case file, or logs with, if at hand, survey, hole, string and mud tables.
    out : Path or str, optional
        Folder for the page; `reports/<case id>` in the working folder where left out.
    units : str
        "metric" or "field".
    quiet : bool
        Show no progress.
    draft : Path or str, optional
        Where to write a case file made from bare files; it must not exist.

    Returns
    -------
    InspectionResult

    Raises
    ------
    InputError
        If no log can be read, the draft exists already, or the page can't be written.
    """
    if units not in ("metric", "field"):
        raise InputError(f"units are {units!r}; expected 'metric' or 'field'")
    files = [Path(path) for path in paths]
    progress = Progress(quiet)
    with progress.loading("loading the libraries"):
        from forensics.report.inspection import describe_inspection
        from forensics.report.plain import to_text
        from forensics.report.render import render_report

    with progress.stage("reading", "reading logs and tables"):
        if len(files) == 1 and files[0].suffix == ".toml":
            if draft is not None:
                raise InputError("--draft makes a case file from bare logs; leave it out with a case file")
            found = _inspect_case(files[0])
        else:
            found = _inspect_bare(files, Path(draft) if draft is not None else None)
    folder = Path(out) if out is not None else Path("reports") / found.case.id
    check_target(folder)
    report = describe_inspection(found, units)
    with progress.stage("figures", "drawing the page"):
        put_file(folder, PAGE, render_report(report).encode("utf-8"))
    return InspectionResult(found, to_text(report), folder / PAGE, Path(draft) if draft is not None else None)


def run_excerpt(
    paths: Sequence[Path | str], span: tuple[str, str], out: Path | str | None = None
) -> tuple[Path, tuple[str, ...]]:
    """Write an anonymous excerpt of a case between two stamps.

    Parameters
    ----------
    paths : sequence of Path or str
        One case file.
    span : tuple of str
        Start and end, ISO 8601.
    out : Path or str, optional
        Folder for the excerpt; `reports/excerpt` in the working folder where left out.

    Returns
    -------
    Path, tuple of str
        Where the excerpt is, and what was done to each file.

    Raises
    ------
    InputError
        If no single case file is given, it can't be read, or the span holds too little.
    """
    from pipelines.excerpting import write_excerpt

    files = [Path(path) for path in paths]
    if len(files) != 1 or files[0].suffix != ".toml":
        raise InputError("--excerpt cuts one case; give its case file alone")
    folder = Path(out) if out is not None else Path("reports") / "excerpt"
    return folder, write_excerpt(files[0], span, folder)


def _inspect_case(path: Path) -> Inspection:
    """Read all a case names; what its well or its numbers would be refused for is kept in words."""
    from forensics.case import load_case
    from forensics.case.unused import unused_settings
    from forensics.logs.read import read_time_logs
    from forensics.report.inspection import Inspection
    from forensics.rig.contradictions import contradictions
    from forensics.rig.travel import match_travel
    from forensics.rig.understand import understand_rig
    from forensics.well.model import load_well
    from pipelines.fingerprints import fingerprints

    case = load_case(path)
    log = read_time_logs(case)
    refusals: list[str] = []
    well = _tried(lambda: load_well(case), refusals)
    if well is not None:
        _tried(lambda: check(case, log, well), refusals)
    rig = None if well is None else _tried(lambda: understand_rig(match_travel(log), well, case), [])
    doubts = () if well is None else contradictions(log, well, rig)
    remarks = (*doubts, *unused_settings(case))
    return Inspection(case, log, well, fingerprints(case, log), tuple(refusals), remarks)


def check(case: Case, log: TimeLog, well: Well) -> None:
    """Hold log, well and case against one another, as the analysis does before it begins.

    Raises
    ------
    InputError
        If they contradict one another.
    """
    import numpy as np

    from forensics.rig.plausible import check_block, check_hookload
    from forensics.rig.travel import match_travel

    well.check_reach(float(np.nanmax(log.values["bit_depth"])))
    check_hookload(log, well)
    check_block(log, case)
    match_travel(log)


def _inspect_bare(files: list[Path], draft: Path | None) -> Inspection:
    """Read logs and tables that no case names; write a draft where one is wanted."""
    from forensics.report.inspection import Inspection
    from forensics.well.model import load_well
    from pipelines import drafting

    if draft is not None:
        drafting.check_free(draft)
    made = drafting.gather(files)
    case, log = drafting.read_bare(made)
    refusals: list[str] = []
    whole = drafting.with_mud(case, log)
    well = None if whole is None else _tried(lambda: load_well(whole), refusals)
    taken = tuple(
        f"{choice.column!r} has no unit in the file; {choice.unit} makes its values usual and was taken"
        for choice in case.logs.channels.values()
    )
    if draft is not None:
        drafting.write_draft(draft, made, case, log)
    return Inspection(case, log, well, {}, tuple(refusals), taken)


def _tried(job: Callable[[], Found], refusals: list[str]) -> Found | None:
    """Do a job; where it refuses, keep its words."""
    try:
        return job()
    except InputError as refusal:
        refusals.append(refusal.text)
        return None
