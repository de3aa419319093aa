"""The bit's own witnesses as plain content for `summary.json`."""

from __future__ import annotations

from typing import Any

from forensics.exports.stamps import number, stamp
from forensics.findings import Findings
from forensics.loads import Response, WitnessCheck
from forensics.logs.zone import tzinfo_of
from forensics.replay.witness.agree import check_rows, overall


def witness_content(findings: Findings) -> dict[str, Any]:
    """Lay out what the bit's own witnesses say.

    Parameters
    ----------
    findings : Findings
        What the run's analysis found.

    Returns
    -------
    dict
        `channels` asked, `slides` held against the hookload, `overall` (None without slides), and `episodes`
        by id. Forces [kN], lengths [m].
    """
    witness = findings.loads.witness
    if witness is None:
        return {"channels": [], "slides": [], "overall": None, "episodes": {}}
    whole = overall(witness.slides)
    checks = {e.id: check_rows(witness, e.first, e.last, findings.log.time) for e in findings.episodes}
    return {
        "channels": [_channel(response) for response in witness.responses],
        "slides": [_check(check, findings) for check in witness.slides],
        "overall": None if whole is None else _check(whole, findings),
        "episodes": {name: _check(check, findings) for name, check in checks.items() if check is not None},
    }


def _channel(response: Response) -> dict[str, Any]:
    return {
        "channel": response.name,
        "basis": response.basis.word,
        "believed": bool(response.heard),
        "why_not": response.why,
        "windows": int(response.windows),
        "scatter": number(response.spread, 4),
        "correlation": number(response.correlation, 3),
        "delay_s": number(response.delay, 1),
        "bit_load_low_kN": number(response.low / 1e3, 2),
        "bit_load_high_kN": number(response.high / 1e3, 2),
        "rows_set_aside": {why: int(rows) for why, rows in sorted(response.set_aside.items())},
    }


def _check(check: WitnessCheck, findings: Findings) -> dict[str, Any]:
    tz, time = tzinfo_of(findings.log.timezone), findings.log.time
    return {
        "start": stamp(float(time[check.first]), tz),
        "end": stamp(float(time[check.last]), tz),
        "rows": int(check.rows),
        "by_hookload_kN": number(check.by_hookload / 1e3, 3),
        "by_witness_kN": number(check.by_witness / 1e3, 3),
        "difference_kN": number(check.difference / 1e3, 3),
        "standard_error_kN": number(check.sigma / 1e3, 3),
        "scatter_kN": number(check.scatter / 1e3, 3),
        "correlation": number(check.correlation, 3),
        "paper_footage_m": number(check.paper, 3),
        "string_shortened_m": number(check.shortening, 3),
        "drillable_m": number(check.drilled, 3),
    }
