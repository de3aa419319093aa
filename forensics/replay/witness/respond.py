"""Learn how a channel answers the load on the bit, and read the load off it."""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray

from forensics.loads import Response
from forensics.replay.windows import Windows, smoothed
from forensics.replay.witness.zero import Zero

Floats = NDArray[np.float64]
Bools = NDArray[np.bool_]

LEAST_WINDOWS = 8
LEAST_LOAD = 10e3  # N; below this the load is mostly zero error
MAX_SPREAD = 0.35  # of the slope between windows; more, and the channel does not follow the load
TELLING_SPREAD = 0.3  # of the load, 10 to 90 % over its middle: from here on a correlation says something
LEAST_CORRELATION = 0.3
BEYOND = 0.3  # of the load beyond the range learned, one sigma: a response need not stay straight
FAR_BEYOND = 2.0  # times the highest load learned: a stall, or no answer to load at all
FULL_SIGMA = 1.4826
FEW = "fewer than eight minutes of rotary drilling under load to learn it from"


@dataclass(frozen=True)
class Heard:
    """One witness: its response, and the load read off it with its standard error, shape (n,) [N]."""

    response: Response
    load: Floats
    sigma: Floats


def learn(response: Response, beyond: Floats, load: Floats, windows: Windows) -> Response:
    """Learn the slope of a channel, beyond its zero, against the bit load.

    Parameters
    ----------
    response : Response
        Name and basis, and what is known of it so far.
    beyond : ndarray, shape (n,)
        The channel beyond its off-bottom zero.
    load : ndarray, shape (n,)
        Bit load while turning [N].
    windows : Windows
        Of rotary drilling.

    Returns
    -------
    Response
        With `heard` False and the reason where the channel does not follow the load.
    """
    signal, pressed = windows.medians(beyond), windows.medians(load)
    told = np.isfinite(signal) & (pressed > LEAST_LOAD)
    signal, pressed = signal[told], pressed[told]
    response = replace(response, windows=len(signal))
    if len(signal) < LEAST_WINDOWS:
        return replace(response, why=FEW)
    slopes = signal / pressed
    slope = float(np.median(slopes))
    spread = float(FULL_SIGMA * np.median(np.abs(slopes - slope)) / abs(slope)) if slope else np.inf
    low, middle, high = np.percentile(pressed, [5, 50, 95]).tolist()
    telling = np.subtract(*np.percentile(pressed, [90, 10])) > TELLING_SPREAD * middle
    correlation = _correlation(signal, pressed) if telling else float("nan")
    return replace(
        response, slope=slope, spread=spread, correlation=correlation, low=low, high=high,
        heard=True, why="",
    )  # fmt: skip


def judge(response: Response) -> Response:
    """Set a response aside where it does not go with the load."""
    if not response.heard:
        return response
    if not response.slope > 0.0:
        return replace(response, heard=False, why="it does not rise with the load on the bit")
    if not response.spread < MAX_SPREAD:
        why = f"its answer to load scatters by {100 * response.spread:.0f} % from minute to minute"
        return replace(response, heard=False, why=why)
    if response.correlation < LEAST_CORRELATION:
        why = f"it hardly follows the load in rotated footage (correlation {response.correlation:.2f})"
        return replace(response, heard=False, why=why)
    return response


def read_off(response: Response, beyond: Floats, zero: Zero, silent: Bools, step: int) -> Heard:
    """Read the bit load off a channel.

    Parameters
    ----------
    response : Response
        Heard.
    beyond : ndarray, shape (n,)
        The channel beyond its zero.
    zero : Zero
        For its error.
    silent : ndarray of bool, shape (n,)
        Rows on which it says nothing.
    step : int
        Rows of the moving median.

    Returns
    -------
    Heard
        Load NaN where silent, and where it is far beyond anything learned (counted).
    """
    level, noise = steadied(beyond, step)
    load = np.maximum(level / response.slope, 0.0)
    far = ~silent & (load > FAR_BEYOND * response.high)
    outside = np.maximum(load - response.high, 0.0)
    parts = (response.spread * load, BEYOND * outside, zero.sigma / response.slope)
    variance = (noise / response.slope) ** 2 + sum(part**2 for part in parts)
    aside = dict(response.set_aside)
    if far.any():
        aside["load far beyond what was learned, as in a stall"] = int(far.sum())
    return Heard(
        replace(response, set_aside=aside),
        np.where(silent | far | ~np.isfinite(level), np.nan, load),
        np.sqrt(variance),
    )


def steadied(values: Floats, step: int) -> tuple[Floats, float]:
    """Take the moving median across gaps, NaN where there is no value, and the noise left in it."""
    known = np.isfinite(values)
    if known.sum() < 2:
        return np.full(len(values), np.nan), 0.0
    rows = np.arange(len(values))
    filled = values if known.all() else np.interp(rows, rows[known], values[known])
    level = smoothed(filled, step)
    noise = FULL_SIGMA * float(np.median(np.abs(filled - level))) / np.sqrt(step / 3.0)
    return np.where(known, level, np.nan), noise


def _correlation(first: Floats, second: Floats) -> float:
    """Rank correlation: one wild minute moves it little."""
    ranks = [np.argsort(np.argsort(values)).astype(float) for values in (first, second)]
    if len(first) < 3:
        return float("nan")
    return float(np.corrcoef(*ranks)[0, 1])
