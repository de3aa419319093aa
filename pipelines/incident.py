"""The main job: one run's case file in, one folder of results out."""

from __future__ import annotations

from collections.abc import Collection, Mapping
from dataclasses import dataclass
from pathlib import Path
from typing import TYPE_CHECKING

from forensics.errors import InputError
from pipelines.output import check_target, whole_folder
from pipelines.progress import Progress

if TYPE_CHECKING:
    from forensics.findings import Findings

#: What a reader's printer holds, by the units he chose.
USUAL_PAPER: Mapping[str, str] = {"metric": "a4", "field": "letter"}


@dataclass(frozen=True)
class IncidentResult:
    """What one run of the job gave.

    Parameters
    ----------
    findings : Findings
        All that the analysis found.
    folder : Path
        Where the results are.
    timings : mapping of str to float
        Seconds spent by stage: imports, reading, well, rig, calibration, replay, draws, episodes, profiles,
        flips, figures, pdf, exports.
    lines : tuple of str
        The result in a few lines, for the terminal.
    remarks : tuple of str
        Settings and verdicts of the case that changed nothing, and other doubts of verdicts, in sentences.
    """

    findings: Findings
    folder: Path
    timings: Mapping[str, float]
    lines: tuple[str, ...]
    remarks: tuple[str, ...] = ()


def run(
    case_path: Path | str,
    out: Path | str | None = None,
    units: str = "metric",
    quiet: bool = False,
    also: Collection[str] = (),
    paper: str | None = None,
) -> IncidentResult:
    """Read a case, reconstruct its loads, find its episodes, and write report and exports.

    Parameters
    ----------
    case_path : Path or str
        The case file.
    out : Path or str, optional
        Folder for the results; `reports/<case id>` in the working folder where left out.
    units : str
        "metric" or "field": what the report shows. Exports keep the contract's units.
    quiet : bool
        Show no progress.
    also : collection of str
        "las" for the channels as LAS 2.0, "figures" for each figure as SVG and PNG, "verdicts" for a file
        of verdicts to be filled in.
    paper : str, optional
        "a4" or "letter": the sheets of the PDF; what goes with the units where left out.

    Returns
    -------
    IncidentResult
        The findings, where the results are, the time each stage took, and the result in lines.

    Raises
    ------
    InputError
        If the case, a log or a table can't be used, or the results can't be written where asked.
    """
    if units not in ("metric", "field"):
        raise InputError(f"units are {units!r}; expected 'metric' or 'field'")
    if paper not in (None, "a4", "letter"):
        raise InputError(f"paper is {paper!r}; expected 'a4' or 'letter'")
    progress = Progress(quiet)
    with progress.loading("loading the libraries"):
        from forensics.case import load_case
        from forensics.case.unused import unused_settings
        from forensics.episodes.verdicts import verdict_remarks
        from forensics.exports.verdicts import DRAFT, keep_filled
        from forensics.mechanics.kernels_march import wake
        from pipelines import analysis, results

        wake(0.0)  # numba loads its own registries at the first call

    case = load_case(Path(case_path))
    folder = Path(out) if out is not None else Path("reports") / case.id
    check_target(folder)
    if "verdicts" in also:
        keep_filled(folder / DRAFT)
    findings = analysis.analyse(case, progress, units)
    with whole_folder(folder) as fresh:
        results.write(findings, fresh, units, progress, also, paper or USUAL_PAPER[units])
    said = results.lines(findings, folder, units)
    remarks = (*unused_settings(case), *verdict_remarks(case, findings.verdicts))
    return IncidentResult(findings, folder, progress.timings, said, remarks)
