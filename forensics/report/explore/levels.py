"""Series at several levels of detail, the smallest and largest of each bin kept, packed for a page."""

from __future__ import annotations

import base64
import zlib

import numpy as np
from numpy.typing import NDArray

Floats = NDArray[np.float64]

# Numbers a series may have at its finest level, and those that need no coarser one.
FINEST = 200_000
COARSEST = 4_000
STEP = 4
# A whole number of 16 bits tells 65,534 values apart; the lowest is kept for "missing".
MISSING = -32768
COUNTS = 65534
# Steps that a series is told in may be this part of the span that most of it lies in.
FINE_ENOUGH = 1e-3


def steps(count: int, finest: int = FINEST, coarsest: int = COARSEST) -> tuple[int, ...]:
    """Rows in a bin, level by level, the finest first.

    Parameters
    ----------
    count : int
        Rows of the series.
    finest, coarsest : int
        Numbers wanted at most at the finest and at the coarsest level.

    Examples
    --------
    >>> steps(1000), steps(172_800), steps(1_000_000)
    ((1,), (1, 4, 16, 64, 256), (10, 40, 160, 640))
    """
    step = 1 if count <= finest else -(-2 * count // finest)
    levels = [step]
    while count * (1 if step == 1 else 2) / step > coarsest:
        step *= STEP
        levels.append(step)
    return tuple(levels)


def level(values: Floats, step: int) -> Floats:
    """Give a series at one level.

    Parameters
    ----------
    values : ndarray, shape (n,)
        May hold NaN.
    step : int
        Rows in a bin; 1 gives the series itself.

    Returns
    -------
    ndarray, shape (2 * bins,)
        Smallest and largest of each bin, in turn; NaN for a bin of nothing else.
    """
    values = np.asarray(values, dtype=np.float64)
    if step == 1 or not len(values):
        return values
    starts = np.arange(0, len(values), step)
    pairs = np.column_stack([np.fmin.reduceat(values, starts), np.fmax.reduceat(values, starts)])
    return pairs.ravel()


def level_times(time: Floats, step: int) -> Floats:
    """Give the times that belong to `level`: of each bin its first row and its middle one."""
    if step == 1 or not len(time):
        return time
    starts = np.arange(0, len(time), step)
    middles = np.minimum(starts + step // 2, len(time) - 1)
    return np.column_stack([time[starts], time[middles]]).ravel()


class Pack:
    """Arrays one after the other in one block of bytes, with a list of where each lies."""

    def __init__(self) -> None:
        self.index: dict[str, dict[str, object]] = {}
        self._parts: list[bytes] = []
        self._length = 0

    def whole(self, name: str, values: NDArray[np.generic], kind: str) -> None:
        """Put an array as it is; `kind` is one of f8, f4, i2, u1."""
        self._put(name, np.ascontiguousarray(values, dtype=f"<{kind}"), {"kind": kind})

    def numbers(self, name: str, values: NDArray[np.floating]) -> None:
        """Put measured numbers as 16 bit steps, or as 32 bit numbers where a few strays make steps coarse."""
        values = np.asarray(values, dtype=np.float64)
        finite = np.isfinite(values)
        seen = values[finite]
        low, high = (float(seen.min()), float(seen.max())) if len(seen) else (0.0, 0.0)
        scale = (high - low) / COUNTS or 1.0
        if len(seen) and high > low:
            usual = float(np.subtract(*np.quantile(seen[:: max(len(seen) // 20_000, 1)], [0.99, 0.01])))
            if scale > FINE_ENOUGH * usual > 0.0:
                self.whole(name, values, "f4")
                return
        codes = np.full(values.shape, MISSING, dtype="<i2")
        codes[finite] = np.round((seen - low) / scale) - COUNTS // 2
        self._put(name, codes, {"kind": "i2", "base": low + scale * (COUNTS // 2), "scale": scale})

    def _put(self, name: str, values: NDArray[np.generic], how: dict[str, object]) -> None:
        self.index[name] = {**how, "at": self._length, "count": values.size}
        data = values.tobytes()
        data += bytes(-len(data) % 8)  # the page reads numbers of 8 bytes only from every eighth byte
        self._parts.append(data)
        self._length += len(data)

    def text(self) -> str:
        """Give all bytes as a zlib stream in base64."""
        squeeze = zlib.compressobj(3)
        data = b"".join([*(squeeze.compress(part) for part in self._parts), squeeze.flush()])
        return base64.b64encode(data).decode("ascii")
