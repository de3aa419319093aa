"""The one SI table every log becomes, with its history."""

from __future__ import annotations

import enum
from collections.abc import Mapping
from dataclasses import dataclass, field
from pathlib import Path

import numpy as np
from numpy.typing import NDArray

Floats = NDArray[np.float64]


class Reason(enum.IntEnum):
    """Why a row was set aside; the number is what `TimeLog.reason` holds."""

    NONE = 0
    NULL_HOOKLOAD = 1
    NULL_DEPTH = 2
    SPIKE_HOOKLOAD = 3
    SPIKE_DEPTH = 4
    FROZEN = 5
    OUT_OF_RANGE = 6

    @property
    def words(self) -> str:
        """The reason in words, for reports and exports."""
        return self.name.replace("_", " ").lower()


@dataclass(frozen=True)
class Step:
    """One step of a log's history: what was done, to which channel, to how many samples."""

    name: str
    samples: int
    channel: str | None = None
    detail: str = ""


@dataclass(frozen=True)
class SourceColumn:
    """A column as found in a file and what it was taken for (`channel` None: not used, and why)."""

    file: str
    column: str
    unit: str | None
    channel: str | None
    why: str


@dataclass(frozen=True)
class FileRecord:
    """One log of a file: where, what, how much, over which time. A file may hold several."""

    name: str
    sha256: str
    format: str
    rows: int
    start: float
    end: float
    interval: float
    columns: tuple[SourceColumn, ...] = ()
    notes: tuple[str, ...] = ()
    path: Path | None = None


@dataclass(frozen=True)
class TimeLog:
    """Time-indexed rig data in SI units, one row a distinct stamp, in time order.

    Parameters
    ----------
    time : ndarray, shape (n,)
        Seconds since 1970-01-01 UTC, strictly increasing [s].
    values : mapping of str to ndarray, shape (n,)
        Canonical channel name to values, NaN where missing or set aside [SI].
        Absent channels are absent keys; `bit_depth` and `hookload` are always there.
    hookload_logged : ndarray, shape (n,)
        The hookload as the file has it, before anything was set aside or corrected [N].
    used : ndarray of bool, shape (n,)
        False where the row as a whole was set aside.
    reason : ndarray of int8, shape (n,)
        `Reason` of each row set aside.
    interval : float
        Usual sampling interval [s].
    timezone : str
        Zone the reader sees times in (IANA name or offset).
    """

    time: Floats
    values: Mapping[str, Floats]
    hookload_logged: Floats
    used: NDArray[np.bool_]
    reason: NDArray[np.int8]
    interval: float
    timezone: str = "UTC"
    history: tuple[Step, ...] = ()
    files: tuple[FileRecord, ...] = ()
    warnings: tuple[str, ...] = field(default=())

    def __len__(self) -> int:
        """Count the rows."""
        return len(self.time)

    def get(self, channel: str) -> Floats | None:
        """Values of a channel [SI], or None where the log has none with any finite value."""
        values = self.values.get(channel)
        if values is None or not np.isfinite(values).any():
            return None
        return values
