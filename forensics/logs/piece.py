"""One file's rows in SI, and what is asked of stamps wherever files are joined."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from pathlib import Path

import numpy as np
from numpy.typing import NDArray

Floats = NDArray[np.float64]
# Above this share of stamps told twice with different values, two recordings clash.
CLASH = 0.5
# Values this near are one reading rounded in two unit systems: part of the largest hookload; depth [m].
SAME = {"hookload": 2.5e-3, "bit_depth": 0.1}


@dataclass(frozen=True)
class Piece:
    """One file's rows in SI.

    Parameters
    ----------
    path : Path
        The file.
    time : ndarray, shape (n,)
        Stamps, finite [s since 1970 UTC].
    line : ndarray of int, shape (n,)
        Line of the file each row came from.
    values : mapping of str to ndarray, shape (n,)
        Channels [SI].
    """

    path: Path
    time: Floats
    line: NDArray[np.int64]
    values: Mapping[str, Floats]


def interval_of(time: Floats) -> float:
    """Usual step between stamps [s]; NaN for fewer than two.

    Examples
    --------
    >>> interval_of(np.array([0.0, 1.0, 2.0, 60.0]))
    1.0
    """
    steps = np.diff(time)
    steps = steps[steps > 0]
    return float(np.median(steps)) if len(steps) else float("nan")


def share_different(values: Mapping[str, Floats], one: NDArray[np.int64], two: NDArray[np.int64]) -> float:
    """Give the largest share, over the channels of `SAME`, of rows `one` and `two` that differ."""
    shares = []
    for channel, near in SAME.items():
        if channel in values:
            a, b = values[channel][one], values[channel][two]
            known = np.isfinite(a) & np.isfinite(b)
            if known.any():
                scale = float(np.abs(a[known]).max()) if channel == "hookload" else 1.0
                shares.append(float((np.abs(a[known] - b[known]) > near * scale).mean()))
    return max(shares, default=0.0)
