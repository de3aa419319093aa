"""What would turn the findings, for `summary.json`."""

from __future__ import annotations

from typing import Any

from forensics.exports.stamps import number
from forensics.findings import Findings

# SI to file units, and the unit's name.
UNITS = {"dimensionless": (1.0, "-"), "force": (1e3, "kN")}


def flips_content(findings: Findings) -> list[dict[str, Any]]:
    """Lay out for each main episode and input where the finding holds.

    Parameters
    ----------
    findings : Findings
        What the run's analysis found.

    Returns
    -------
    list of dict
        `holds_from` and `holds_to` are null where the finding does not turn on that side of the range
        searched.
    """
    rows = []
    for flip in findings.flips:
        scale, unit = UNITS[flip.quantity]
        ends = [end if turn else float("nan") for end, turn in zip(flip.holds, flip.turns, strict=True)]
        values = {
            "value": flip.found.value,
            "low": flip.found.low,
            "high": flip.found.high,
            "searched_from": flip.searched[0],
            "searched_to": flip.searched[1],
            "holds_from": ends[0],
            "holds_to": ends[1],
        }
        told = {name: number(value / scale, 4) for name, value in values.items()}
        rows.append(
            {"episode": flip.episode, "finding": flip.finding, "input": flip.source, "unit": unit, **told}
        )
    return rows
