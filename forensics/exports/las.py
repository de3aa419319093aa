"""`history.las`: the reconstructed channels as LAS 2.0, indexed by time."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from pathlib import Path

import numpy as np
from numpy.typing import NDArray

from forensics.exports.stamps import stamp
from forensics.findings import Findings
from forensics.logs.zone import tzinfo_of

Floats = NDArray[np.float64]

# Whole, so that it is the same at any number of decimals.
NULL = -9999
#: Longest line that the standard allows with WRAP NO.
LONGEST_LINE = 256
#: Rows written at a time.
ROWS = 2**15
KILO = 1e3


@dataclass(frozen=True)
class Curve:
    """A curve: mnemonic, unit, description, how its values are had and to how many decimals."""

    mnemonic: str
    unit: str
    about: str
    values: Callable[[Findings], Floats | None]
    decimals: int = 2
    scale: float = 1.0


CURVES: tuple[Curve, ...] = (
    Curve("BDEP", "m", "Bit depth", lambda f: f.log.values["bit_depth"]),
    Curve("HDEP", "m", "Hole depth", lambda f: f.rig.hole_depth),
    Curve("BPOS", "m", "Block position", lambda f: f.rig.block),
    Curve("ACTC", "", "Activity code, see the remarks", lambda f: f.rig.activity.astype(float), 0),
    Curve("HKLD", "kN", "Hookload, corrected", lambda f: f.rig.hookload, 1, KILO),
    Curve("HKLL", "kN", "Hookload as logged", lambda f: f.log.hookload_logged, 1, KILO),
    Curve("SWOB", "kN", "Surface weight on bit, re-zeroed", lambda f: f.rig.wob_surface, 1, KILO),
    Curve("BWOB", "kN", "Bit load, reconstructed", lambda f: f.loads.bit_load, 1, KILO),
    Curve("LRAT", "", "Largest load ratio along the string", lambda f: f.loads.peak_ratio, 3),
    Curve("LRMD", "m", "Depth of the largest load ratio", lambda f: f.loads.peak_md, 1),
    Curve("BSTA", "", "0 none, 1 sinusoidal, 2 helical", lambda f: f.loads.state.astype(float), 0),
    Curve("RCMD", "m", "Depth to which surface motion is felt", lambda f: f.loads.reach, 1),
    Curve("DRES", "kN", "Hookload measured less modelled", lambda f: f.loads.drag_residual, 1, KILO),
    Curve("TRES", "kN.m", "Torque measured less modelled", lambda f: f.loads.torque_residual, 2, KILO),
    Curve("WLIM", "kN", "Most bit load slacking off could give", lambda f: f.loads.bit_load_limit, 1, KILO),
)


def write_las(findings: Findings, path: Path) -> None:
    """Write the reconstructed channels as LAS 2.0.

    Parameters
    ----------
    findings : Findings
        What the run's analysis found.
    path : Path
        The file to write.

    Notes
    -----
    The index is the time since the first row [s]; the first row's stamp stands as DATE in the well section
    and as STIM in the parameters. No line is wrapped, none longer than the standard's 256 letters.

    References
    ----------
    Canadian Well Logging Society, *LAS Version 2.0: a digital standard for logs*, update January 2014.
    """
    log = findings.log
    elapsed = log.time - log.time[0]
    with path.open("w", encoding="ascii", errors="replace", newline="\n") as file:
        file.write("\n".join(_head(findings, float(elapsed[-1]))) + "\n")
        columns = [(curve, curve.values(findings)) for curve in CURVES]
        for start in range(0, len(log), ROWS):
            rows = slice(start, start + ROWS)
            block = np.column_stack([elapsed[rows], *(_cells(c, v, rows, len(log)) for c, v in columns)])
            np.savetxt(file, block, fmt=["%10.3f", *(f"%.{curve.decimals}f" for curve, _ in columns)])


def _cells(curve: Curve, values: Floats | None, rows: slice, count: int) -> Floats:
    if values is None:
        return np.full(len(range(*rows.indices(count))), float(NULL))
    shown = np.asarray(values[rows], dtype=float) / curve.scale
    return np.where(np.isfinite(shown), shown, NULL)


def _head(findings: Findings, last: float) -> list[str]:
    from forensics.rig.view import Activity

    case, log = findings.case, findings.log
    began = stamp(float(log.time[0]), tzinfo_of(log.timezone))
    codes = ", ".join(f"{int(a)} {a.word}" for a in Activity)
    lines = [
        "~Version", _line("VERS", "", "2.0", "CWLS LOG ASCII STANDARD - VERSION 2.0"),
        _line("WRAP", "", "NO", "One line per step"),
        "~Well", _line("STRT", "s", "0.000", "First row"), _line("STOP", "s", f"{last:.3f}", "Last row"),
        _line("STEP", "s", "0", "Rows are not evenly spaced"), _line("NULL", "", f"{NULL}", "No value"),
        _line("COMP", "", "", "Company"), _line("WELL", "", case.well or "", "Well"),
        _line("FLD", "", case.field_name or "", "Field"), _line("LOC", "", "", "Location"),
        _line("PROV", "", "", "Province"), _line("SRVC", "", "", "Service company"),
        _line("DATE", "", began, "Stamp of the first row"), _line("UWI", "", "", "Unique well identifier"),
        "~Curve", _line("ETIM", "s", "", "Time since the first row"),
        *(_line(curve.mnemonic, curve.unit, "", curve.about) for curve in CURVES),
        "~Parameter", _line("STIM", "", began, "Stamp of the first row"),
        _line("CASE", "", case.id, "Case of the analysis"),
        "~Other", "Reconstructed by tallyback from the rig's logs; a model result, not a measurement.",
        *_wrapped(f"Activity codes: {codes}."),
        "~A  ETIM " + " ".join(curve.mnemonic for curve in CURVES),
    ]  # fmt: skip
    return [line[:LONGEST_LINE] for line in lines]


def _line(mnemonic: str, unit: str, value: str, about: str) -> str:
    """Write a header line; a colon in a value would end it."""
    clean = " ".join(value.replace(":", ".").split()) if mnemonic not in {"DATE", "STIM"} else value
    return f" {mnemonic:<5}.{unit:<5} {clean:<24} : {about}"


def _wrapped(text: str) -> list[str]:
    import textwrap

    return textwrap.wrap(text, 100)
