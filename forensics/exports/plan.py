"""Tables of a joint calibration: each run's factors, and what they give for the next well."""

from __future__ import annotations

import csv
from collections.abc import Mapping, Sequence
from pathlib import Path
from typing import Any

from forensics.estimate import Estimate
from forensics.exports.stamps import number
from forensics.exports.text import inert, write_json
from forensics.friction.plan import ROTATIONAL, Plan, RunFactors
from forensics.friction.pool import Pooled

FORMAT = 1

FACTOR_COLUMNS = (
    "case", "well", "section", "mud", "kind", "top_m", "bottom_m", "friction_factor", "low", "high",
    "determined", "samples", "source",
)  # fmt: skip
PLAN_COLUMNS = ("kind", "group", "runs", "mean", "low", "high", "p10", "p50", "p90", "scatter")

Row = dict[str, Any]


def factor_rows(plan: Plan) -> list[Row]:
    """Lay out every factor of every run, one row a section of hole.

    Parameters
    ----------
    plan : Plan

    Returns
    -------
    list of dict
        Under `FACTOR_COLUMNS`; depths [m], None where there is no number.
    """
    return [row for run in plan.runs for row in _run_rows(run)]


def _run_rows(run: RunFactors) -> list[Row]:
    about = {"case": run.case, "well": run.well, "section": run.section, "mud": run.mud}
    rows = [
        about | {"kind": s.kind, "top_m": number(s.top, 1), "bottom_m": number(s.bottom, 1)} | _told(s.factor)
        for s in run.calibration.sections
        if s.bottom > s.top
    ]
    turned = run.calibration.rotational
    if turned is not None:
        rows.append(about | {"kind": ROTATIONAL, "top_m": None, "bottom_m": None} | _told(turned))
    return rows


def _told(factor: Estimate) -> Row:
    return {
        "friction_factor": number(factor.value, 4),
        "low": number(factor.low, 4),
        "high": number(factor.high, 4),
        "determined": factor.determined,
        "samples": factor.samples,
        "source": factor.source,
    }


def plan_rows(plan: Plan) -> list[Row]:
    """Lay out the pooled factors: one row a kind of hole and group of runs, and one for any other group.

    Parameters
    ----------
    plan : Plan

    Returns
    -------
    list of dict
        Under `PLAN_COLUMNS`; mean with its 90 % interval, and P10, P50 and P90 of the next run.
    """
    return [_pooled(kind, group) for kind, pool in plan.pools.items() for group in (*pool.groups, pool.other)]


def _pooled(kind: str, group: Pooled) -> Row:
    numbers = {name: number(getattr(group, name), 4) for name in PLAN_COLUMNS[3:]}
    return {"kind": kind, "group": group.group or "any other", "runs": group.runs, **numbers}


def write_factors(plan: Plan, path: Path) -> None:
    """Write `factors.csv`."""
    _write(path, FACTOR_COLUMNS, factor_rows(plan))


def write_plan(plan: Plan, path: Path) -> None:
    """Write `plan.csv`."""
    _write(path, PLAN_COLUMNS, plan_rows(plan))


def write_calibration(plan: Plan, failures: Mapping[str, str], path: Path) -> None:
    """Write `calibration.json`: factors, pooled factors, what was left out, cases that failed and why."""
    content = {
        "format": FORMAT,
        "factors": factor_rows(plan),
        "plan": plan_rows(plan),
        "left_out": list(plan.untold),
        "can_not_tell": {run.case: list(run.calibration.can_not_tell) for run in plan.runs},
        "failures": dict(failures),
    }
    write_json(content, path)


def _write(path: Path, columns: Sequence[str], rows: Sequence[Row]) -> None:
    with path.open("w", encoding="utf-8", newline="") as file:
        writer = csv.DictWriter(file, columns, lineterminator="\n")
        writer.writeheader()
        writer.writerows({name: inert(cell) for name, cell in row.items()} for row in rows)
