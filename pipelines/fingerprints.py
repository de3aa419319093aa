"""Fingerprints of the files that went into a run."""

from __future__ import annotations

import hashlib
from collections import Counter
from collections.abc import Mapping
from pathlib import Path

from forensics.case import Case
from forensics.episodes.verdict_file import verdicts_path
from forensics.logs.table import TimeLog


def fingerprints(case: Case, log: TimeLog) -> Mapping[str, str]:
    """Give the SHA-256 of every file that went into the run, by name, or by path where names repeat.

    Parameters
    ----------
    case : Case
    log : TimeLog
        Read from the case's logs, whose own fingerprints it carries.

    Returns
    -------
    mapping of str to str
    """
    kept = (case.records.weights, case.records.slides, verdicts_path(case))
    tables = (case.path, case.survey, case.hole, case.string, case.fluid.file, *kept, *case.logs.depth)
    digests = [(path, _digest(path)) for path in tables if path is not None]
    digests += [(record.path, record.sha256) for record in log.files if record.path is not None]
    names = Counter(path.name for path in {path for path, _ in digests})
    return {path.name if names[path.name] == 1 else _below(path, case): sha for path, sha in digests}


def _below(path: Path, case: Case) -> str:
    """Name a file by its path from the case's folder, or in full where it lies outside."""
    folder = case.path.parent
    return path.relative_to(folder).as_posix() if path.is_relative_to(folder) else path.as_posix()


def _digest(path: Path) -> str:
    return hashlib.sha256(path.read_bytes()).hexdigest()
