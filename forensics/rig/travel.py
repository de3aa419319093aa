"""Whether block and bit move together: guards against a depth in the wrong unit and a block upside down."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
from numpy.typing import NDArray

from forensics.errors import LogError
from forensics.logs.frozen import slips_level
from forensics.logs.table import SourceColumn, Step, TimeLog
from forensics.rig import noise

Floats = NDArray[np.float64]

# Time over which travel is compared [s], and the block's travel from which it says anything [m].
_WINDOW = 20.0
_LEAST_TRAVEL = 1.0
# Comparisons needed, and how closely bit and block must agree among them.
_LEAST_COUNT = 30
_LOOSE = 0.25
# Ratios that only a mistaken unit makes, and how near to one a ratio must be to be taken for it.
_UNITS = {"ft for m": 0.3048, "in for m": 0.0254, "mm for m": 1e-3, "cm for m": 1e-2, "in for ft": 1 / 12}
_NEAR = 0.04


def match_travel(log: TimeLog) -> TimeLog:
    """Hold the bit's travel against the block's while the hook carries the string.

    Parameters
    ----------
    log : TimeLog
        The SI table of the run.

    Returns
    -------
    TimeLog
        The same; with the block turned over, and a warning, where its height counts downwards.

    Raises
    ------
    LogError
        If the bit goes 0.3048 m, or as telling a part or multiple, for every metre the block goes.

    Notes
    -----
    Rows in slips are left out by their hookload. What lies between is neither: a string that stretches, or a
    block counted in units of its own, is left to the rules that need it.
    """
    ratios = _ratios(log)
    if len(ratios) < _LEAST_COUNT:
        return log
    ratio = float(np.median(ratios))
    if np.median(np.abs(ratios - ratio)) > _LOOSE * abs(ratio):
        return log
    for words, unit in _UNITS.items():
        if min(abs(abs(ratio) / unit - 1.0), abs(abs(ratio) * unit - 1.0)) < _NEAR:
            raise _mistaken(log, abs(ratio), words)
    if abs(ratio + 1.0) > _LOOSE:
        return log
    said = (
        "block height falls as the bit comes up: it was taken for a distance from the crown and turned over"
    )
    block = -log.values["block_position"]
    block += float(np.nanmax(-block)) + float(np.nanmin(-block))
    return replace(
        log,
        values={**log.values, "block_position": block},
        history=(*log.history, Step("turned over", int(np.isfinite(block).sum()), "block_position", said)),
        warnings=(*log.warnings, said),
    )


def _ratios(log: TimeLog) -> Floats:
    """How far the bit went down for each metre the block did, over windows out of slips."""
    block, bit, hook = log.get("block_position"), log.values["bit_depth"], log.values["hookload"]
    if block is None or not np.isfinite(hook).any():
        return np.zeros(0)
    step = max(noise.LEAST_SAMPLES, round(_WINDOW / log.interval))
    if len(log) <= step:
        return np.zeros(0)
    # Not a gap: the bit may have been anywhere meanwhile.
    whole = log.time[step:] - log.time[:-step] < 1.5 * step * log.interval
    carried = hook > slips_level(hook)
    fall, made = block[:-step] - block[step:], bit[step:] - bit[:-step]
    told = whole & carried[step:] & carried[:-step] & (np.abs(fall) > _LEAST_TRAVEL) & np.isfinite(made)
    return made[told] / fall[told]


def _mistaken(log: TimeLog, ratio: float, words: str) -> LogError:
    bit, block = (_source(log, name) for name in ("bit_depth", "block_position"))
    read_as = " and ".join(f"{c.column!r} was read as {c.unit!r}" for c in (bit, block) if c is not None)
    return LogError(
        f"the bit goes {ratio:.3g} m for every metre of the block, as where a unit is mistaken ({words}); "
        f"{read_as}: check both, and give the right one under [logs.channels]",
        file=bit.file if bit else None,
        column=bit.column if bit else None,
    )


def _source(log: TimeLog, channel: str) -> SourceColumn | None:
    return next((c for record in log.files for c in record.columns if c.channel == channel), None)
