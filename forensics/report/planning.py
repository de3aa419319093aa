"""The page of a joint calibration: each run's factors, and what to plan the next well with."""

from __future__ import annotations

from collections.abc import Mapping
from functools import partial

from forensics.friction.plan import Plan
from forensics.report.elements import Bullets, Column, Element, Notice, Picture, Report, Section, Table, Text
from forensics.report.figures.factors import factors
from forensics.report.words import Show, count, fixed

NAMES = {"cased": "cased hole", "open": "open hole", "rotational": "turning (torque)"}

CAUTIONS = (
    "A friction factor belongs to the model it was found with: a soft string, this clearance, this survey.",
    "The ranges hold for wells like these; another mud, path, hole cleaning or string is another population.",
    "Plans stay subject to the manufacturer's ratings, company and local rules and licensed judgement.",
)


def describe_plan(plan: Plan, failures: Mapping[str, str], units: str = "metric") -> Report:
    """Describe a joint calibration.

    Parameters
    ----------
    plan : Plan
    failures : mapping of str to str
        Cases that could not be used, and why.
    units : str
        "metric" or "field".

    Returns
    -------
    Report
    """
    first: list[Element] = [Text(_lead(plan)), plan_table(plan)]
    if failures:
        first.append(
            Notice("Cases that could not be used", tuple(f"{name}: {why}" for name, why in failures.items()))
        )
    first.append(Notice("How to use these factors", CAUTIONS))
    show = Show(units)
    sections = (
        Section("next", "Friction to plan the next well with", tuple(first)),
        Section("runs", "The runs behind it", (*_pictures(plan), run_table(plan, show), _left_out(plan))),
    )
    facts = (("runs", str(len(plan.runs))), ("units", units))
    return Report("Friction over several runs", "Joint calibration", facts, sections, "Made by tallyback.")


def _lead(plan: Plan) -> str:
    if not plan.pools:
        return "No run determined a friction factor by its own readings: there is nothing to pool."
    return (
        f"{count(len(plan.runs), 'run')} pooled in part: runs of one section and mud scatter about their own "
        "mean, these means about a common one. P10, P50 and P90 are for the factor of the next run; the "
        "mean's 90 % interval says only how well the mean is known."
    )


def plan_table(plan: Plan) -> Table:
    """Pooled factors, one row a kind of hole and group of runs."""
    rows = tuple(
        (
            NAMES[kind],
            group.group or "any other section or mud",
            fixed(group.runs, 0),
            f"{fixed(group.mean, 3)} ({fixed(group.low, 3)} to {fixed(group.high, 3)})",
            fixed(group.p10, 2),
            fixed(group.p50, 2),
            fixed(group.p90, 2),
            fixed(group.scatter, 3),
        )
        for kind, pool in plan.pools.items()
        for group in (*pool.groups, pool.other)
    )
    columns = (
        Column("factor"), Column("section, mud"), Column("runs", "number"), Column("mean (90 %)", "number"),
        Column("P10", "number"), Column("P50", "number"), Column("P90", "number"),
        Column("run to run, 1 sigma", "number"),
    )  # fmt: skip
    return Table("Friction factors for planning", columns, rows, "Friction factors have no unit.")


def run_table(plan: Plan, show: Show) -> Table:
    """Every factor of every run, as its own readings gave it."""
    rows = []
    for run in plan.runs:
        parts = [
            (s.kind, show.depths(s.top, s.bottom), s.factor)
            for s in run.calibration.sections
            if s.bottom > s.top
        ]
        if run.calibration.rotational is not None:
            parts.append(("rotational", "", run.calibration.rotational))
        for kind, where, factor in parts:
            value = f"{fixed(factor.value, 3)} ({fixed(factor.low, 3)} to {fixed(factor.high, 3)})"
            origin = factor.source if factor.determined else f"{factor.source}; not determined"
            rows.append(
                (run.case, run.well, run.group, NAMES[kind], where, value, fixed(factor.samples, 0), origin)
            )
    columns = (
        Column("case", "code"), Column("well"), Column("section, mud"), Column("factor"),
        Column("depths", "number"), Column("value (90 %)", "number"), Column("readings", "number"),
        Column("from"),
    )  # fmt: skip
    return Table("Factors by run", columns, tuple(rows), "", "No run could be used.", dense=True)


def _pictures(plan: Plan) -> list[Element]:
    return [
        Picture(
            partial(factors, pool),
            f"Friction factors, {NAMES[kind]}: each run's, drawn towards its group, with its 90 % interval; "
            "the bar under a group reaches from P10 to P90 of its next run, the mark is P50.",
            f"Friction factors of {len(pool.runs)} runs and the range for the next, {NAMES[kind]}.",
        )
        for kind, pool in plan.pools.items()
    ]


def _left_out(plan: Plan) -> Element:
    if not plan.untold:
        return Text("Every run determined each of its factors.")
    return Bullets(plan.untold, "Left out of the pool, since the run's readings could not tell:")
