"""The load history of a run: what the replay gives to episodes, report and exports."""

from __future__ import annotations

import enum
from dataclasses import dataclass
from typing import ClassVar

import numpy as np
from numpy.typing import NDArray

Floats = NDArray[np.float64]


class Basis(enum.IntEnum):
    """What the bit load of a sample rests on; the number is what `LoadHistory.basis` holds."""

    HOOKLOAD = 0
    MEMORY = 1
    RATE_LAW = 2
    DIFFERENTIAL = 3
    DOWNHOLE = 4

    @property
    def word(self) -> str:
        """The name in outputs."""
        return self.name.lower()


@dataclass(frozen=True)
class RateLaw:
    """Rate of penetration against bit load, learned in rotated footage: rop = rate * load**exponent.

    `rate` carries the exponent's units (m/s per N**exponent); `determined` is False where no rotated
    footage taught it.
    """

    rate: float
    exponent: float
    determined: bool
    samples: int
    spread: float


@dataclass(frozen=True)
class Profile:
    """Axial load along the hole at one moment; arrays of shape (k,), from the bit up.

    Parameters
    ----------
    row : int
        Row of the log.
    time : float
        [s since 1970 UTC]
    md : ndarray
        Measured depth [m].
    tension : ndarray
        Effective tension, compression negative [N].
    sinusoidal, helical : ndarray
        Compression at which each threshold lies at the actual load [N], NaN where not judged.
    contact : ndarray
        Contact force per length [N/m].
    state : ndarray of int8
        0 none, 1 sinusoidal, 2 helical.
    """

    row: int
    time: float
    md: Floats
    tension: Floats
    sinusoidal: Floats
    helical: Floats
    contact: Floats
    state: NDArray[np.int8]


@dataclass(frozen=True)
class RatioMap:
    """Largest load ratio by time bin and depth bin: `values` has shape (times, depths).

    Edges have one more entry than bins [s since 1970 UTC] and [m].
    """

    time_edges: Floats
    md_edges: Floats
    values: Floats


@dataclass(frozen=True)
class LoadHistory:
    """Reconstructed loads at each row of the log; arrays of shape (n,), SI.

    Parameters
    ----------
    bit_load : ndarray
        Compression on the bit [N].
    peak_ratio, peak_md, peak_compression : ndarray
        Largest load ratio, where it is [m], and the compression there [N].
    state : ndarray of int8
        Worst state anywhere: 0 none, 1 sinusoidal, 2 helical.
    top, bottom : ndarray
        Depth span of all buckled places [m], NaN where none.
    helical_top, helical_bottom : ndarray
        Depth span of helical places [m], NaN where none.
    reach : ndarray
        Depth to which surface motion has been felt since the last reversal [m].
    basis : ndarray of int8
        `Basis` codes.
    drag_residual : ndarray
        Hookload measured less modelled [N], NaN where no model line applies.
    torque_residual : ndarray
        Torque measured less modelled [N.m], NaN where no model line applies.
    model_hookload : ndarray
        Hookload the model expects off bottom at the calibrated friction [N], NaN where none applies.
    straight_drag : ndarray
        Ordinary sliding drag between surface and bit at this moment, helical contact left out [N].
    stretch : ndarray
        Elastic stretch the string would need before the bit moves [m].
    ratio_map : RatioMap
        Load ratio over time and depth.
    rate_law : RateLaw
        What rotated footage taught about drilling rate.
    visits : int
        Stations visited by the replay, for the benchmark.
    bit_load_limit : ndarray or None
        Most bit load any slacking off could give while sliding, NaN elsewhere [N].
    """

    bit_load: Floats
    peak_ratio: Floats
    peak_md: Floats
    peak_compression: Floats
    state: NDArray[np.int8]
    top: Floats
    bottom: Floats
    helical_top: Floats
    helical_bottom: Floats
    reach: Floats
    basis: NDArray[np.int8]
    drag_residual: Floats
    torque_residual: Floats
    model_hookload: Floats
    straight_drag: Floats
    stretch: Floats
    ratio_map: RatioMap
    rate_law: RateLaw
    visits: int = 0
    bit_load_limit: Floats | None = None


@dataclass(frozen=True)
class Fan:
    """Model hookload against bit depth at the calibrated friction, arrays of shape (k,) [m, N].

    `low`/`high` pairs give the 90 % band of the friction interval.
    """

    bit_depth: Floats
    pick_up: Floats
    rotating: Floats
    slack_off: Floats
    pick_up_low: Floats
    pick_up_high: Floats
    slack_off_low: Floats
    slack_off_high: Floats


@dataclass(frozen=True)
class DrawHistory:
    """The replay repeated at k joint draws of what is uncertain, over m of the log's rows.

    Parameters
    ----------
    weights : ndarray, shape (k,)
        Of the draws; they sum to 1.
    factors : ndarray, shape (k, S)
        Friction factors by section.
    block : ndarray, shape (k,)
        Block weight [N].
    covered : ndarray of bool, shape (n,)
        Rows of the log that the replay went through.
    taken : ndarray of int, shape (m,)
        Rows it took, ascending; each stands for the covered rows up to the next.
    state : ndarray of int8, shape (k, m)
        As `LoadHistory.state`; -1 where a draw was not replayed.
    peak_ratio, compression, bit_load, top, bottom : ndarray of float32, shape (k, m)
        As in `LoadHistory`.
    multiple : ndarray of float32, shape (k, m)
        Ordinary sliding drag over that of the calibrated replay.
    depth : ndarray, shape (p,)
        Bit depths of the lines [m].
    lines : ndarray, shape (k, 3, p)
        By how much the hookload modelled off bottom lies above the calibrated one: pick-up, rotating and
        slack-off [N].
    """

    weights: Floats
    factors: Floats
    block: Floats
    covered: NDArray[np.bool_]
    taken: NDArray[np.int64]
    state: NDArray[np.int8]
    peak_ratio: NDArray[np.float32]
    compression: NDArray[np.float32]
    bit_load: NDArray[np.float32]
    top: NDArray[np.float32]
    bottom: NDArray[np.float32]
    multiple: NDArray[np.float32]
    depth: Floats
    lines: Floats

    BY_ROW: ClassVar[tuple[str, ...]] = (
        "state", "peak_ratio", "compression", "bit_load", "top", "bottom", "multiple",
    )  # fmt: skip

    def columns(self, rows: NDArray[np.int64]) -> NDArray[np.int64]:
        """Find where each covered row of the log is told of, shape (len(rows),)."""
        return np.maximum(np.searchsorted(self.taken, rows, side="right") - 1, 0)

    def told(self, columns: NDArray[np.int64]) -> NDArray[np.bool_]:
        """Mark the draws replayed over all the given columns, shape (k,)."""
        return (self.state[:, columns] >= 0).all(axis=1)

    def window(self, first: int, last: int) -> tuple[NDArray[np.int64], NDArray[np.int64]]:
        """Find what tells of the rows from first to last, and how many rows each column stands for.

        Parameters
        ----------
        first, last : int
            Rows of the log, both in it.

        Returns
        -------
        columns, counts : ndarray of int, shape (c,)
            Empty where none of the rows was replayed.
        """
        rows = np.flatnonzero(self.covered[first : last + 1]) + first
        columns, counts = np.unique(self.columns(rows), return_counts=True)
        return columns, counts
