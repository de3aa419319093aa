"""Whether hookload and block weight can be what they are said to be: the last guard against a wrong unit."""

from __future__ import annotations

import numpy as np

from forensics import units
from forensics.case import Case
from forensics.errors import CaseError, LogError
from forensics.logs.table import SourceColumn, TimeLog
from forensics.well.model import Well

LEAST, MOST = 0.1, 20.0
# A string lighter than this tells nothing about a sensor that carries the block too [N].
LIGHT = 50e3


def check_hookload(log: TimeLog, well: Well) -> None:
    """Refuse a hookload that is orders of magnitude off what the string weighs.

    Parameters
    ----------
    log : TimeLog
        The SI table of the run.
    well : Well
        What hangs from the hook.

    Raises
    ------
    LogError
        If, in the deepest quarter of the run, the hookload never gets to a tenth of the string's weight
        without friction, or is commonly twenty times that weight.

    Notes
    -----
    The factors are wide on purpose: block weight, drag and slack-off stay well inside them, while newtons
    for kilonewtons, or kilograms for tonnes, do not.
    """
    depth, hook = log.values["bit_depth"], log.values["hookload"]
    known = np.isfinite(depth) & np.isfinite(hook) & log.used
    if not known.any():
        return
    deep = known & (depth >= np.percentile(depth[known], 75.0))
    weight = float(well.rotating_weight([np.median(depth[deep])])[0])
    low, high = np.percentile(hook[deep], [50.0, 99.0])
    if weight < LIGHT or (high >= LEAST * weight and low <= MOST * weight):
        return
    column = next((c for record in log.files for c in record.columns if c.channel == "hookload"), None)
    raise LogError(
        f"hookload is about {_show(high if high < LEAST * weight else low)} with the bit at "
        f"{np.median(depth[deep]):.0f} m, where the string alone weighs {_show(weight)}; "
        f"check the unit{_read_as(column)}",
        file=column.file if column else None,
        column=column.column if column else None,
    )


def check_block(log: TimeLog, case: Case) -> None:
    """Refuse a block weight that is more than the hook ever carried.

    Parameters
    ----------
    log : TimeLog
        The SI table of the run.
    case : Case
        Its `[rig]` may give the block weight.

    Raises
    ------
    CaseError
        If the hookload includes the block and still never gets to its weight.
    """
    given, hook = case.rig.block_weight, log.values["hookload"]
    if given is None or not case.rig.hookload_includes_block or not np.isfinite(hook).any():
        return
    most = float(np.nanpercentile(hook, 99.0))
    if given < most:
        return
    raise CaseError(
        f"block weight {_show(given)} is more than the hook carries with the string on it ({_show(most)}); "
        "check its unit, or set hookload_includes_block = false where the sensor was tared",
        file=case.path,
        column="rig.block_weight",
    )


def _read_as(column: SourceColumn | None) -> str:
    return f" (it was read as {column.unit!r})" if column and column.unit else ""


def _show(force: float) -> str:
    return f"{force:.0f} N" if abs(force) < 1e4 else units.show(force, "force")
