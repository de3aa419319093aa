"""Prints the rows of the README's table of what was reached on the sample wells.

Run `python tests/recovery_table.py` from the top of the tree; the README keeps what it printed last.
"""

from __future__ import annotations

import numpy as np
from sklearn.metrics import f1_score

from forensics.episodes.catalogue import Kind
from forensics.rig.view import Activity
from test_recovery import WELLS, states, well

BUCKLED = ("lateral_slide", "liner_lockup")
NAMES = {name: name.replace("_", " ") for name in WELLS}


def friction() -> tuple[str, str]:
    """Largest miss of a friction factor, and the widest interval."""
    misses, widths = [], []
    for name in WELLS:
        case = well(name)
        for section in case.found.calibration.sections:
            key = "cased_deviated" if section.kind == "cased" else section.kind
            misses.append(abs(section.factor.value - case.facts["friction"][key]))
            widths.append(section.factor.high - section.factor.low)
    return f"at most {max(misses):.3f}", f"at most {max(widths):.3f}"


def activity(name: str) -> float:
    """Macro F1 of the activity over the classes present."""
    case = well(name)
    told = [Activity(code).word for code in case.found.rig.activity[case.rows]]
    true = case.truth["activity"].tolist()
    return f1_score(true, told, labels=sorted(set(true)), average="macro", zero_division=0)


def helical(name: str) -> float:
    """F1 of the helical samples."""
    true, told = states(well(name))
    return f1_score(true == 2, told == 2)


def bit_load(name: str) -> float:
    """RMS error of the bit load over the range of the true one; NaN where the bit carries nothing."""
    case = well(name)
    true = case.truth["bit_load_kN"].to_numpy()
    error = case.found.loads.bit_load[case.rows] / 1e3 - true
    return float(np.sqrt(np.mean(error**2)) / np.ptp(true)) if np.ptp(true) > 1.0 else float("nan")


def lock_in() -> str:
    """Weight left on the bit while the surface weight is back to nothing: told and true, means."""
    case = well("lateral_slide")
    true = case.truth["bit_load_kN"].to_numpy()
    sliding = (case.truth["activity"] == "drill_slide").to_numpy()
    locked = sliding & (true > 15.0) & (case.truth["wob_surface_kN"].to_numpy() < 0.5 * true)
    told = case.found.loads.bit_load[case.rows] / 1e3
    return f"{told[locked].mean():.0f} kN told, {true[locked].mean():.0f} kN true"


def each(measure, names: tuple[str, ...], form: str) -> str:
    """Write a measure of several wells."""
    values = [(NAMES[name], measure(name)) for name in names]
    told = ", ".join(f"{name} {value:{form}}" for name, value in values if np.isfinite(value))
    return told.replace("%", " %")


def false_alarms(name: str) -> int:
    """Count helical and lockup episodes."""
    return sum(e.kind is Kind.LOCKUP or e.state == "helical" for e in well(name).found.episodes)


def table() -> str:
    """Give the table in Markdown."""
    miss, width = friction()
    innocent = ("lateral_twin", "cuttings_friction")
    rows = (
        ("measure", "wanted", "reached"),
        ("---",) * 3,
        ("friction factor, cased and open, against the truth", "within 0.02", miss),
        ("width of its 90 % interval", "at most 0.06", width),
        ("activity by sample, macro F1", "at least 0.9", each(activity, WELLS, ".2f")),
        ("helical samples, F1", "at least 0.9", each(helical, BUCKLED, ".2f")),
        ("bit load, RMS error over its range", "at most 10 %", each(bit_load, WELLS, ".1%")),
        ("weight still on the bit after partial pick-ups", "kept", lock_in()),
        ("helical or lockup episodes where nothing buckles", "none", each(false_alarms, innocent, "d")),
    )
    return "\n".join(f"| {' | '.join(row)} |" for row in rows)


if __name__ == "__main__":
    print(table())  # noqa: T201
