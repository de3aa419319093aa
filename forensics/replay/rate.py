"""Rate of penetration against bit load, learned where the string turns and the bit load is known."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from forensics.loads import RateLaw
from forensics.logs.table import TimeLog
from forensics.replay.windows import rotary_windows
from forensics.rig.view import RigView

Floats = NDArray[np.float64]

LEAST_WINDOWS = 8
LEAST_LOAD = 5e3  # N; below this the load is mostly zero error
EXPONENTS = (0.5, 2.0)  # common practice, no source: drilling rate goes with weight to a power near one
SPREAD_FOR_EXPONENT = 0.4  # log units; less spread of load says nothing about the exponent


def learn_rate(log: TimeLog, rig: RigView, bit_load: Floats) -> RateLaw:
    """Fit rop = rate * load**exponent over windows of steady rotary drilling.

    Parameters
    ----------
    log, rig : TimeLog, RigView
        The run.
    bit_load : ndarray, shape (n,)
        Compression on the bit while turning [N].

    Returns
    -------
    RateLaw
        Not determined, with rate 0, where fewer than eight windows drilled.
    """
    rate, load = _windows(log, rig, bit_load)
    good = (rate > 0) & (load > LEAST_LOAD)
    rate, load = rate[good], load[good]
    if len(rate) < LEAST_WINDOWS:
        return RateLaw(0.0, 1.0, False, len(rate), float("nan"))
    x, y = np.log(load), np.log(rate)
    exponent = 1.0
    if np.subtract(*np.percentile(x, [90, 10])) > SPREAD_FOR_EXPONENT:
        first, second = np.triu_indices(min(len(x), 300), 1)
        apart = np.abs(x[second] - x[first]) > 0.05
        slopes = (y[second] - y[first])[apart] / (x[second] - x[first])[apart]
        exponent = float(np.clip(np.median(slopes), *EXPONENTS)) if len(slopes) else 1.0
    level = y - exponent * x
    middle = float(np.median(level))
    spread = float(1.4826 * np.median(np.abs(level - middle)))
    return RateLaw(float(np.exp(middle)), exponent, True, len(rate), spread)


def _windows(log: TimeLog, rig: RigView, bit_load: Floats) -> tuple[Floats, Floats]:
    """Mean rate [m/s] and median load [N] of each whole window of rotary drilling."""
    windows = rotary_windows(log, rig)
    first, last = windows.first, windows.first + windows.step - 1
    depth = log.values["bit_depth"]
    rate = (depth[last] - depth[first]) / (log.time[last] - log.time[first])
    load = windows.medians(bit_load)
    told = np.isfinite(rate) & np.isfinite(load)
    return rate[told], load[told]
