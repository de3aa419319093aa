"""The joint calibration: friction of one or several cases, pooled in part, ready for the next well's plan."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from pathlib import Path
from typing import TYPE_CHECKING

from forensics.errors import InputError
from pipelines.output import check_target, whole_folder
from pipelines.progress import Progress

if TYPE_CHECKING:
    from forensics.friction.plan import Plan, RunFactors


@dataclass(frozen=True)
class CalibrationResult:
    """What a joint calibration gave: the pooled factors, where they are, cases that failed, and lines."""

    plan: Plan
    folder: Path
    failures: dict[str, str]
    lines: tuple[str, ...]


def run(
    case_paths: Sequence[Path | str],
    out: Path | str | None = None,
    units: str = "metric",
    quiet: bool = False,
) -> CalibrationResult:
    """Calibrate each case on its own readings, pool the factors, and write tables and figures.

    Parameters
    ----------
    case_paths : sequence of Path or str
        Case files.
    out : Path or str, optional
        Folder for the results; `reports/calibration` in the working folder where left out.
    units : str
        "metric" or "field".
    quiet : bool
        Show no progress.

    Returns
    -------
    CalibrationResult
        A case that can't be used is named with its reason; the others go on.

    Raises
    ------
    InputError
        If no case can be used, two have one id, or the results can't be written.
    """
    if units not in ("metric", "field"):
        raise InputError(f"units are {units!r}; expected 'metric' or 'field'")
    folder = Path(out) if out is not None else Path("reports") / "calibration"
    check_target(folder)
    progress = Progress(quiet)
    with progress.loading("loading the libraries"):
        from forensics.exports import plan as exports
        from forensics.friction.plan import plan
        from forensics.report.planning import describe_plan
        from forensics.report.render import render_report

    runs, failures = _calibrated([Path(path) for path in case_paths], progress)
    made = plan(runs)
    with whole_folder(folder) as fresh, progress.stage("exports", "writing tables and figures"):
        exports.write_factors(made, fresh / "factors.csv")
        exports.write_plan(made, fresh / "plan.csv")
        exports.write_calibration(made, failures, fresh / "calibration.json")
        page = render_report(describe_plan(made, failures, units))
        (fresh / "calibration.html").write_text(page, encoding="utf-8", newline="\n")
    return CalibrationResult(made, folder, failures, lines(made, failures, folder))


def _calibrated(paths: Sequence[Path], progress: Progress) -> tuple[list[RunFactors], dict[str, str]]:
    """Calibrate case by case; one that can't be used is kept with its reason."""
    runs: list[RunFactors] = []
    failures: dict[str, str] = {}
    for path in paths:
        try:
            found = _one(path, progress)
        except InputError as refusal:
            if len(paths) == 1:
                raise
            failures[str(path)] = refusal.text
            continue
        if any(found.case == run.case for run in runs):
            raise InputError(
                f"has id {found.case!r}, as an earlier case has; give each case its own", file=path
            )
        runs.append(found)
    if not runs:
        raise InputError(f"no case could be used; the first failed with: {next(iter(failures.values()))}")
    return runs, failures


def _one(path: Path, progress: Progress) -> RunFactors:
    from forensics.case import load_case
    from forensics.friction.plan import RunFactors
    from pipelines import analysis

    case = load_case(path)
    run_ = analysis.understand(case, progress)
    _, calibration = analysis.calibrate_run(run_, progress)
    return RunFactors(case.id, case.well or "", case.section or "", case.mud_system or "", calibration)


def lines(plan: Plan, failures: dict[str, str], folder: Path) -> tuple[str, ...]:
    """Give the result in a few lines."""
    number = len(plan.runs)
    said = [f"Calibrated {number} case{'s' if number != 1 else ''}"]
    said += [
        f"{kind}, {group.group}: {group.mean:.3f} ({group.low:.3f} to {group.high:.3f}), {group.runs} of the "
        f"runs; next run P10 {group.p10:.2f}, P50 {group.p50:.2f}, P90 {group.p90:.2f}"
        for kind, pool in plan.pools.items()
        for group in pool.groups
    ]
    said += [f"Failed: {name}: {' '.join(why.split())}" for name, why in failures.items()]
    return (*said, *plan.untold, f"Report: {folder / 'calibration.html'}")
