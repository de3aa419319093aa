"""How far channels lag behind one another: found and reported, never shifted."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from forensics.logs.frozen import slips_level
from forensics.logs.table import Step

Floats = NDArray[np.float64]
# Rows of one stretch, stretches taken, rows over which a change is measured, farthest lag looked for [s].
STRETCH, STRETCHES, OVER = 1024, 16, 3
FARTHEST = 180.0
# A lag is told where changes go together this well, plainly better than unshifted, in most stretches.
CLEAR, BETTER, MOST = 0.35, 1.25, 0.6
# Shorter lags are within what stamps and averaging make [rows; s].
LEAST_ROWS, LEAST = 2.0, 4.0
WORDS = {"hoisting": "bit depth", "carried": "hookload"}
# Least stretches that must have something to tell.
FEWEST = 4


@dataclass(frozen=True)
class Pair:
    """Two channels that go together: the one that leads, the one that follows, and the sign.

    `least` is the least lag told [s], `clear` how well they must go together.
    """

    leads: str
    follows: str
    sign: float = 1.0
    least: float = LEAST
    clear: float = CLEAR


PAIRS = (
    Pair("rpm", "torque"),
    # A string stretches before its whole drag shows at the hook: seconds of that are no lag of the recorder.
    Pair("hoisting", "carried", least=20.0, clear=0.45),
    Pair("flow_in", "standpipe_pressure"),
    Pair("hookload", "wob", -1.0),
    Pair("wob", "downhole_wob"),
    Pair("torque", "downhole_torque"),
)


@dataclass(frozen=True)
class Lag:
    """How far one channel comes after another [s], how well they go together then, and on how many rows."""

    pair: Pair
    seconds: float
    agreement: float
    rows: int


def find_lags(time: Floats, values: Mapping[str, Floats], interval: float) -> list[Lag]:
    """Estimate lags between channels that go together.

    Parameters
    ----------
    time : ndarray, shape (n,)
        Stamps, strictly increasing [s].
    values : mapping of str to ndarray, shape (n,)
        Channels [SI].
    interval : float
        Usual sampling interval [s].

    Returns
    -------
    list of Lag
        Those that are clear: positive where the second channel of the pair comes late.

    Notes
    -----
    Cross-correlation of changes, in the stretches of the run in which the leading channel changed most. A
    stretch counts where it agrees with some lag at all; the lag is the median over these, told if most of
    them lie within two samples of it.
    """
    starts = _stretches(time, interval)
    if len(starts) < FEWEST:
        return []
    known = dict(values) | _hoisting(values)
    found = []
    for pair in PAIRS:
        if pair.leads in known and pair.follows in known:
            lag = _lag(pair, known[pair.leads], known[pair.follows], (starts, interval))
            if lag is not None:
                found.append(lag)
    return found


def _hoisting(values: Mapping[str, Floats]) -> dict[str, Floats]:
    """Speed of the bit upwards, and the hookload, both open in slips, where neither tells of the other."""
    hook = values["hookload"]
    with np.errstate(invalid="ignore"):
        carried = hook > slips_level(hook)
    speed = -np.gradient(values["bit_depth"])
    return {"hoisting": np.where(carried, speed, np.nan), "carried": np.where(carried, hook, np.nan)}


def _stretches(time: Floats, interval: float) -> NDArray[np.intp]:
    """Rows at which stretches without a gap begin, side by side over the whole run."""
    if not np.isfinite(interval) or len(time) < FEWEST * STRETCH // 2 or interval <= 0.0:
        return np.zeros(0, dtype=np.intp)
    count = max(FEWEST, len(time) // STRETCH)
    starts = np.unique(np.linspace(0, len(time) - STRETCH, count).astype(np.intp))
    usual = (STRETCH - 1) * interval
    return starts[np.abs((time[starts + STRETCH - 1] - time[starts]) / usual - 1.0) < 0.02]


def _changes(data: Floats, rows: NDArray[np.intp]) -> Floats:
    """Change of a channel over a few rows, stretch by stretch, 0 where it isn't known."""
    cut = data[rows]
    return np.nan_to_num(cut[:, OVER:] - cut[:, :-OVER])


def _lag(pair: Pair, leads: Floats, follows: Floats, where: tuple[NDArray[np.intp], float]) -> Lag | None:
    starts, interval = where
    rows = starts[:, None] + np.arange(STRETCH)[None, :]
    one = _changes(leads, rows)
    busiest = np.argsort(-np.abs(one).sum(axis=1), kind="stable")[:STRETCHES]
    one, two = one[busiest], pair.sign * _changes(follows, rows[busiest])
    size = np.sqrt((one**2).sum(axis=1) * (two**2).sum(axis=1))
    alive = size > 0.0
    if alive.sum() < FEWEST:
        return None
    reach = min(int(FARTHEST / interval), STRETCH // 4)
    shifts = np.arange(-reach, reach + 1)
    wide = 2 * STRETCH
    product = np.fft.irfft(np.fft.rfft(two[alive], wide) * np.conj(np.fft.rfft(one[alive], wide)), wide)
    agreement = product[:, shifts % wide] / size[alive, None]
    # A stretch in which little happens agrees with anything: it has no say.
    telling = agreement.max(axis=1) > CLEAR
    if telling.sum() < FEWEST:
        return None
    agreement = agreement[telling]
    best = shifts[agreement.argmax(axis=1)]
    lag = float(np.median(best))
    at = int(np.argmin(np.abs(shifts - lag)))
    whole = agreement.mean(axis=0)
    clear = whole[at] > max(pair.clear, BETTER * whole[reach]) and (np.abs(best - lag) <= 2.0).mean() >= MOST
    if not clear or abs(lag) < LEAST_ROWS or abs(lag) * interval < pair.least or abs(lag) >= reach:
        return None
    return Lag(pair, lag * interval, float(whole[at]), int(telling.sum()) * STRETCH)


def tell_lags(lags: Sequence[Lag]) -> tuple[list[Step], list[str]]:
    """Put lags in words, for the history and for the reader."""
    steps, said = [], []
    for lag in lags:
        first, second = (WORDS.get(n, n.replace("_", " ")) for n in (lag.pair.leads, lag.pair.follows))
        late, early = (second, first) if lag.seconds > 0 else (first, second)
        words = f"{late} comes {abs(lag.seconds):.0f} s after {early}"
        channel = lag.pair.follows if lag.pair.follows not in WORDS else "hookload"
        steps.append(Step("lag between channels", lag.rows, channel, f"{words}; nothing was shifted"))
        said.append(
            f"{words} (their changes agree by {lag.agreement:.2f} of 1): a recorder delays or filters it; "
            "nothing was shifted, so quick changes of the two do not stand in one row"
        )
    return steps, said
