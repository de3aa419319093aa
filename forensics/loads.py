"""The load history of a run: what the replay gives to episodes, report and exports."""

from __future__ import annotations

import enum
from collections.abc import Mapping
from dataclasses import dataclass, field
from typing import ClassVar

import numpy as np
from numpy.typing import NDArray

from forensics.mechanics.lockup import SlackOff

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
class Response:
    """How a channel answers the load on the bit, as rotated footage taught it.

    Parameters
    ----------
    name : str
        Of the channel, as the report calls it.
    basis : Basis
        What a bit load read off it rests on.
    slope : float
        Signal beyond its off-bottom zero for each newton on the bit [SI unit of the channel per N].
    spread : float
        One sigma of the slope from window to window, as a part of it.
    correlation : float
        Of signal and load over the windows; NaN where the load hardly varied.
    low, high : float
        Bit loads it was learned at: 5 and 95 % of the windows [N].
    windows : int
        Windows of rotated footage that taught it.
    delay : float
        How late the channel comes [s].
    heard : bool
        Whether it is believed.
    why : str
        Why it is not; empty where it is.
    set_aside : Mapping of str to int
        Rows of it set aside, by reason.
    """

    name: str
    basis: Basis
    slope: float = float("nan")
    spread: float = float("nan")
    correlation: float = float("nan")
    low: float = float("nan")
    high: float = float("nan")
    windows: int = 0
    delay: float = 0.0
    heard: bool = False
    why: str = ""
    set_aside: Mapping[str, int] = field(default_factory=dict)


@dataclass(frozen=True)
class WitnessCheck:
    """Bit load by hookload alone against the bit's own witness, over some rows (a slide, an episode).

    Parameters
    ----------
    first, last : int
        Rows of the log, inclusive.
    rows : int
        Rows on which both speak.
    by_hookload, by_witness : float
        Mean bit loads [N].
    difference : float
        Mean of hookload less witness [N].
    sigma : float
        One standard error expected of that difference: friction, zero and response together [N].
    scatter : float
        Standard deviation of the difference from row to row [N].
    correlation : float
        Of the two bit loads; NaN where they hardly varied.
    bound : float
        Share of the rows on which the replay itself leans on the witness.
    paper, shortening : float
        Footage on paper over these rows, by the bit's counted depth, and the part of it that was the string
        growing shorter [m].
    drilled : float
        Footage that the witness's bit load can have drilled, by the rate law [m]; NaN without a law.
    """

    first: int
    last: int
    rows: int
    by_hookload: float
    by_witness: float
    difference: float
    sigma: float
    scatter: float
    correlation: float
    bound: float = 0.0
    paper: float = float("nan")
    shortening: float = float("nan")
    drilled: float = float("nan")

    @property
    def sigmas(self) -> float:
        """The difference in its standard errors; NaN where either is silent."""
        return self.difference / self.sigma if self.sigma > 0.0 else float("nan")


@dataclass(frozen=True)
class BitWitness:
    """What the bit's own witnesses say of the load on it; arrays of shape (n,).

    Parameters
    ----------
    load, sigma : ndarray
        Bit load by all witnesses heard, weighed by inverse variance, and its standard error [N]; NaN where
        silent.
    basis : ndarray of int8
        `Basis` of the one that weighs most; meaningless where silent.
    by_hookload, own_sigma : ndarray
        Bit load by the hookload alone, at the friction of the weight readings, and its standard error [N];
        NaN outside slides.
    moved : ndarray
        How much more the string rubs than the weight readings say, where the witness proved it [-].
    beyond : ndarray
        What the witness, short of that proof, takes off the bit load by hookload [N].
    responses : tuple of Response
        Every channel asked, heard or not.
    slides : tuple of WitnessCheck
        One for each slide in which both speak.
    """

    load: Floats
    sigma: Floats
    basis: NDArray[np.int8]
    by_hookload: Floats
    own_sigma: Floats
    moved: Floats
    beyond: Floats
    responses: tuple[Response, ...] = ()
    slides: tuple[WitnessCheck, ...] = ()


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
    slack_off : SlackOff or None
        None while the string turns or is held.
    """

    row: int
    time: float
    md: Floats
    tension: Floats
    sinusoidal: Floats
    helical: Floats
    contact: Floats
    state: NDArray[np.int8]
    slack_off: SlackOff | None = None


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
    witness : BitWitness or None
        What the bit's own witnesses say; None where the log has none that could.
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
    witness: BitWitness | None = None


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
