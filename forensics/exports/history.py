"""`history.parquet`: one row a time sample, with what was measured and what was reconstructed."""

from __future__ import annotations

from collections.abc import Sequence
from pathlib import Path
from typing import TYPE_CHECKING

import numpy as np
from numpy.typing import ArrayLike

from forensics.episodes.catalogue import State
from forensics.findings import Findings
from forensics.loads import Basis
from forensics.logs.table import Floats, Reason
from forensics.rig.view import Activity

if TYPE_CHECKING:
    import pyarrow as pa

KILO = 1e3
STATES = (State.NONE.value, State.SINUSOIDAL.value, State.HELICAL.value)


def history_table(findings: Findings) -> pa.Table:
    """Lay out the history of a run in the units and under the names of the contract.

    Parameters
    ----------
    findings : Findings
        What the run's analysis found.

    Returns
    -------
    pyarrow.Table
        One row for each row of the log: times as UTC timestamps [us], depths [m], forces [kN], moments
        [kN.m]. What is missing is null. `basis` is null where there is no bit load.
    """
    import pyarrow as pa

    columns = _measured(findings) | _reconstructed(findings)
    used = np.asarray(findings.log.used, dtype=bool)
    columns["used"] = pa.array(used)
    columns["reason"] = _words(findings.log.reason, [r.words for r in Reason], missing=used)
    return pa.table({name: columns[name] for name in COLUMNS})


def write_history(findings: Findings, path: Path) -> None:
    """Write `history.parquet`.

    Parameters
    ----------
    findings : Findings
        What the run's analysis found.
    path : Path
        The file to write.
    """
    import pyarrow.parquet as pq

    # Measured numbers hardly repeat: looking for repeats in them takes time and makes the file larger.
    pq.write_table(history_table(findings), path, compression="zstd", use_dictionary=list(WORDS))


WORDS = ("activity", "state", "basis", "reason")
COLUMNS = (
    "time",
    "bit_depth_m",
    "hole_depth_m",
    "activity",
    "hookload_kN",
    "hookload_logged_kN",
    "wob_logged_kN",
    "wob_surface_kN",
    "wob_slack_off_ref_kN",
    "wob_bit_kN",
    "peak_load_ratio",
    "peak_md_m",
    "state",
    "reach_md_m",
    "basis",
    "drag_residual_kN",
    "torque_residual_kNm",
    "used",
    "reason",
    "wob_bit_limit_kN",
)


def _measured(findings: Findings) -> dict[str, pa.Array]:
    import pyarrow as pa

    log, rig = findings.log, findings.rig
    absent = np.full(len(log), np.nan)
    return {
        "time": pa.array(np.round(log.time * 1e6).astype(np.int64)).cast(pa.timestamp("us", tz="UTC")),
        "bit_depth_m": _numbers(log.values["bit_depth"]),
        "hole_depth_m": _numbers(rig.hole_depth),
        "activity": _words(rig.activity, [a.word for a in Activity]),
        "hookload_kN": _numbers(rig.hookload, KILO),
        "hookload_logged_kN": _numbers(log.hookload_logged, KILO),
        "wob_logged_kN": _numbers(log.values.get("wob", absent), KILO),
        "wob_surface_kN": _numbers(rig.wob_surface, KILO),
        "wob_slack_off_ref_kN": _numbers(rig.wob_slack_off, KILO),
    }


def _reconstructed(findings: Findings) -> dict[str, pa.Array]:
    loads = findings.loads
    limit = np.full(len(findings.log), np.nan) if loads.bit_load_limit is None else loads.bit_load_limit
    return {
        "wob_bit_kN": _numbers(loads.bit_load, KILO),
        "peak_load_ratio": _numbers(loads.peak_ratio),
        "peak_md_m": _numbers(loads.peak_md),
        "state": _words(loads.state, STATES),
        "reach_md_m": _numbers(loads.reach),
        "basis": _words(loads.basis, [b.word for b in Basis], missing=np.isnan(loads.bit_load)),
        "drag_residual_kN": _numbers(loads.drag_residual, KILO),
        "torque_residual_kNm": _numbers(loads.torque_residual, KILO),
        "wob_bit_limit_kN": _numbers(limit, KILO),
    }


def _numbers(values: Floats, scale: float = 1.0) -> pa.Array:
    """Give numbers in file units, missing ones as nulls."""
    import pyarrow as pa

    shown = np.asarray(values, dtype=np.float64) / scale
    return pa.array(shown, mask=~np.isfinite(shown))


def _words(codes: ArrayLike, words: Sequence[str], missing: ArrayLike | None = None) -> pa.Array:
    """Give codes as words; null where `missing`."""
    import pyarrow as pa

    indices = pa.array(np.asarray(codes).astype(np.int8), mask=missing)
    return pa.DictionaryArray.from_arrays(indices, pa.array(list(words))).cast(pa.string())
