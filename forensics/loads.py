"""The load history of a run: what the replay gives to episodes, report and exports."""

from __future__ import annotations

import enum
from dataclasses import dataclass

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
    """The replay repeated at k friction draws: arrays of shape (k, n).

    `weights` sum to 1. Rows outside `rows` (bool, shape (n,)) were not replayed and hold NaN.
    """

    weights: Floats
    cased: Floats
    open: Floats
    rows: NDArray[np.bool_]
    state: NDArray[np.int8]
    peak_ratio: NDArray[np.float32]
    bit_load: NDArray[np.float32]

