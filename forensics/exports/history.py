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
from forensics.replay.bands import band
from forensics.rig.view import Activity

if TYPE_CHECKING:
    import pyarrow as pa

KILO = 1e3
# Rows laid out at a time, each lot a row group of its own: a long run need not be in memory twice.
ROWS = 2**17
ALL = slice(None)
STATES = (State.NONE.value, State.SINUSOIDAL.value, State.HELICAL.value)


def history_table(findings: Findings, rows: slice = ALL) -> pa.Table:
    """Lay out the history of a run in the units and under the names of the contract.

    Parameters
    ----------
    findings : Findings
        What the run's analysis found.
    rows : slice
        Rows of the log to lay out; all where left out.

    Returns
    -------
    pyarrow.Table
        One row for each row of the log: times as UTC timestamps [us], depths [m], forces [kN], moments
        [kN.m]. What is missing is null. `basis` is null where there is no bit load.
    """
    import pyarrow as pa

    columns = _measured(findings, rows) | _reconstructed(findings, rows)
    used = np.asarray(findings.log.used[rows], dtype=bool)
    columns["used"] = pa.array(used)
    columns["reason"] = _words(findings.log.reason[rows], [r.words for r in Reason], missing=used)
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
    options = {"compression": "zstd", "use_dictionary": list(WORDS)}
    first = history_table(findings, slice(0, ROWS))
    with pq.ParquetWriter(path, first.schema, **options) as writer:
        writer.write_table(first)
        for start in range(ROWS, len(findings.log), ROWS):
            writer.write_table(history_table(findings, slice(start, start + ROWS)))


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
    "wob_bit_low_kN",
    "wob_bit_high_kN",
    "peak_load_ratio_low",
    "peak_load_ratio_high",
    "wob_bit_margin_kN",
    "wob_witness_kN",
    "wob_witness_error_kN",
)


def _measured(findings: Findings, rows: slice) -> dict[str, pa.Array]:
    import pyarrow as pa

    log, rig = findings.log, findings.rig
    return {
        "time": pa.array(np.round(log.time[rows] * 1e6).astype(np.int64)).cast(pa.timestamp("us", tz="UTC")),
        "bit_depth_m": _numbers(log.values["bit_depth"][rows]),
        "hole_depth_m": _numbers(rig.hole_depth[rows]),
        "activity": _words(rig.activity[rows], [a.word for a in Activity]),
        "hookload_kN": _numbers(rig.hookload[rows], KILO),
        "hookload_logged_kN": _numbers(log.hookload_logged[rows], KILO),
        "wob_logged_kN": _numbers(_or_absent(log.values.get("wob"), log.time)[rows], KILO),
        "wob_surface_kN": _numbers(rig.wob_surface[rows], KILO),
        "wob_slack_off_ref_kN": _numbers(rig.wob_slack_off[rows], KILO),
    }


def _reconstructed(findings: Findings, rows: slice) -> dict[str, pa.Array]:
    loads = findings.loads
    witness = loads.witness
    without = np.isnan(loads.bit_load[rows])
    bit_low, bit_high = band(findings.draws, "bit_load", loads.bit_load, rows)
    ratio_low, ratio_high = band(findings.draws, "peak_ratio", loads.peak_ratio, rows)
    limit = _or_absent(loads.bit_load_limit, loads.bit_load)[rows]
    return {
        "wob_bit_kN": _numbers(loads.bit_load[rows], KILO),
        "peak_load_ratio": _numbers(loads.peak_ratio[rows]),
        "peak_md_m": _numbers(loads.peak_md[rows]),
        "state": _words(loads.state[rows], STATES),
        "reach_md_m": _numbers(loads.reach[rows]),
        "basis": _words(loads.basis[rows], [b.word for b in Basis], missing=without),
        "drag_residual_kN": _numbers(loads.drag_residual[rows], KILO),
        "torque_residual_kNm": _numbers(loads.torque_residual[rows], KILO),
        "wob_witness_kN": _numbers(_or_absent(witness and witness.load, loads.bit_load)[rows], KILO),
        "wob_witness_error_kN": _numbers(_or_absent(witness and witness.sigma, loads.bit_load)[rows], KILO),
        "wob_bit_low_kN": _numbers(bit_low, KILO),
        "wob_bit_high_kN": _numbers(bit_high, KILO),
        "peak_load_ratio_low": _numbers(np.maximum(ratio_low, 0.0)),
        "peak_load_ratio_high": _numbers(ratio_high),
        "wob_bit_limit_kN": _numbers(limit, KILO),
        "wob_bit_margin_kN": _numbers(np.maximum(limit - loads.bit_load[rows], 0.0), KILO),
    }


def _or_absent(values: Floats | None, like: Floats) -> Floats:
    return np.broadcast_to(np.nan, like.shape) if values is None else values


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
