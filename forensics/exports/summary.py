"""`summary.json`: everything a script needs from a run, and the schema it keeps to."""

from __future__ import annotations

import importlib.metadata
import json
import platform
from importlib import resources
from pathlib import Path
from typing import Any

import numpy as np

from forensics import __version__
from forensics.exports.causes import causes_content
from forensics.exports.episodes import episode_rows
from forensics.exports.flips import flips_content
from forensics.exports.friction import friction_content
from forensics.exports.pipe import pipe_content, slack_off_content
from forensics.exports.stamps import number, stamp
from forensics.exports.text import write_json
from forensics.exports.verdicts import verdicts_content
from forensics.exports.witness import witness_content
from forensics.findings import Findings
from forensics.logs.table import FileRecord, Reason
from forensics.logs.zone import tzinfo_of
from forensics.rig.view import Activity

FORMAT = 1
SCHEMA = "summary.schema.json"
LIBRARIES = ("lasio", "numba", "numpy", "pandas", "pyarrow", "scikit-learn", "scipy")


def summary_schema() -> dict[str, Any]:
    """Give the JSON schema (2020-12) that `summary.json` keeps to.

    Returns
    -------
    dict
        The schema, as it stands in the package.
    """
    text = resources.files("forensics.exports").joinpath(SCHEMA).read_text(encoding="utf-8")
    return json.loads(text)


def summary_content(findings: Findings) -> dict[str, Any]:
    """Lay out the summary of a run.

    Parameters
    ----------
    findings : Findings
        What the run's analysis found.

    Returns
    -------
    dict
        Content of `summary.json`: forces [kN], depths [m], times as ISO 8601; None where there is no
        number.
    """
    headline = findings.headline
    return {
        "format": FORMAT,
        "program": {"name": "tallyback", "version": __version__},
        "versions": _versions(),
        "case": _case(findings),
        "inputs": [{"file": name, "sha256": digest} for name, digest in sorted(findings.inputs.items())],
        "finding": {
            "sentence": headline.sentence,
            "confidence": headline.confidence,
            "details": list(headline.details),
            "can_not_tell": list(headline.can_not_tell),
        },
        "run": _run(findings),
        "quality": _quality(findings),
        "friction": friction_content(findings),
        "rate_law": _rate_law(findings),
        "witness": witness_content(findings),
        "episodes": [
            {
                **row,
                "causes": causes_content(episode, episode.id in findings.profiles),
                "pipe": pipe_content(findings.tolls.get(episode.id)),
                "slack_off": slack_off_content(
                    findings.tolls.get(episode.id), float(findings.rig.wob_surface[episode.peak])
                ),
            }
            for episode, row in zip(findings.episodes, episode_rows(findings), strict=True)
        ],
        "verdicts": verdicts_content(findings),
        "flips": flips_content(findings),
        "episodes_dropped": {reason: int(count) for reason, count in sorted(findings.dropped.items())},
        "families": [
            {
                "name": family.name,
                "description": family.description,
                "members": list(family.members),
                "stability": number(family.stability, 3),
            }
            for family in findings.families
        ],
        "warnings": list(findings.warnings),
    }


def write_summary(findings: Findings, path: Path) -> None:
    """Write `summary.json`.

    Parameters
    ----------
    findings : Findings
        What the run's analysis found.
    path : Path
        The file to write.
    """
    write_json(summary_content(findings), path)


def _versions() -> dict[str, str]:
    """Give the versions of what the numbers were computed with."""
    found = {name: importlib.metadata.version(name) for name in LIBRARIES}
    return {"python": platform.python_version(), **found}


def _case(findings: Findings) -> dict[str, str | None]:
    case = findings.case
    return {
        "id": case.id,
        "title": case.title,
        "well": case.well,
        "field": case.field_name,
        "rig": case.rig_name,
        "section": case.section,
        "mud_system": case.mud_system,
        "campaign": case.campaign,
        "notes": case.notes,
    }


def _run(findings: Findings) -> dict[str, Any]:
    """Say when and where the run was, and how its time was spent."""
    log, rig = findings.log, findings.rig
    tz = tzinfo_of(log.timezone)
    depth = log.values["bit_depth"]
    deep = depth[np.isfinite(depth)]
    hours = np.bincount(rig.activity, minlength=len(Activity)) * log.interval / 3600.0
    return {
        "start": stamp(log.time[0], tz) if len(log) else None,
        "end": stamp(log.time[-1], tz) if len(log) else None,
        "bit_depth_min_m": number(deep.min(), 2) if deep.size else None,
        "bit_depth_max_m": number(deep.max(), 2) if deep.size else None,
        "hours_by_activity": {a.word: number(hours[a], 4) for a in Activity if hours[a] > 0},
        "can_not_tell": list(rig.can_not_tell),
    }


def _quality(findings: Findings) -> dict[str, Any]:
    log = findings.log
    counts = np.bincount(np.asarray(log.reason)[~log.used], minlength=len(Reason))
    return {
        "rows": len(log),
        "rows_used": int(np.count_nonzero(log.used)),
        "rows_set_aside": {r.words: int(counts[r]) for r in Reason if counts[r]},
        "interval_s": number(log.interval, 3),
        "timezone": log.timezone,
        "files": [_file(record, findings) for record in log.files],
        "steps": [
            {"name": s.name, "channel": s.channel, "samples": int(s.samples), "detail": s.detail}
            for s in log.history
        ],
        "warnings": list(log.warnings),
    }


def _file(record: FileRecord, findings: Findings) -> dict[str, Any]:
    tz = tzinfo_of(findings.log.timezone)
    timed = np.isfinite(record.start) and np.isfinite(record.end)
    return {
        "file": record.name,
        "sha256": record.sha256,
        "format": record.format,
        "rows": int(record.rows),
        "start": stamp(record.start, tz) if timed else None,
        "end": stamp(record.end, tz) if timed else None,
        "interval_s": number(record.interval, 3),
        "columns": [
            {"column": c.column, "unit": c.unit, "channel": c.channel, "why": c.why} for c in record.columns
        ],
        "notes": list(record.notes),
    }


def _rate_law(findings: Findings) -> dict[str, Any]:
    """Give the drilling rate law: rop [m/h] = rate * (bit load [kN]) ** exponent."""
    law = findings.loads.rate_law
    # The library keeps m/s per N**exponent.
    rate = law.rate * 3600.0 * 1e3**law.exponent if np.isfinite(law.exponent) else float("nan")
    return {
        "rate_m_per_h_per_kN": number(rate, 9),
        "exponent": number(law.exponent, 4),
        "determined": bool(law.determined),
        "samples": int(law.samples),
    }
