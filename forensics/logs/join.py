"""Several files to one: in time order, one row for each distinct stamp."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np
from numpy.typing import NDArray

from forensics.errors import LogError
from forensics.logs.clock_steps import mend_clocks
from forensics.logs.piece import CLASH, Piece, interval_of, share_different
from forensics.logs.table import Step

Floats = NDArray[np.float64]
# A step back is a late row, not a clock set back, while it stays below this many rows and intervals.
LATE_ROWS = 20
LATE_INTERVALS = 20.0
# Steps that all go back show a file written from its end.
SURELY_TURNED = 10


def check_direction(piece: Piece) -> int:
    """Count the rows of a file that come late; refuse a clock that runs backwards for good.

    Returns
    -------
    int
        Rows whose stamp lies before one already seen.

    Raises
    ------
    LogError
        If time falls throughout, or falls back by far and never comes up to where it was.
    """
    time = piece.time
    steps = np.diff(time)
    back = np.flatnonzero(steps < 0)
    if len(back) == 0:
        return 0
    line = int(piece.line[back[0] + 1])
    if len(back) > 0.5 * len(steps[steps != 0]):
        raise LogError(
            f"time runs backwards: {len(back)} of {len(steps)} steps go back, the first here; sort the file",
            file=piece.path,
            line=line,
        )
    highest = np.maximum.accumulate(time)
    usual = interval_of(time)
    # Rows from which no later row reaches the highest stamp seen before them.
    beyond = np.maximum.accumulate(time[::-1])[::-1]
    lost = np.flatnonzero(beyond[1:] < highest[:-1] - LATE_INTERVALS * usual) + 1
    if len(lost) >= LATE_ROWS:
        first = int(lost[0])
        fall = highest[first - 1] - time[first]
        raise LogError(
            f"time falls back by {fall:.0f} s and does not recover in the {len(time) - first} rows after it; "
            "split the file there, or mend its clock",
            file=piece.path,
            line=int(piece.line[first]),
        )
    _check_overlap(piece, back)
    return int((time < highest).sum())


def _check_overlap(piece: Piece, back: NDArray[np.int64]) -> None:
    """Refuse a clock set back: the same stamps over again with other values."""
    steps = np.diff(piece.time)
    far = back[-steps[back] > LATE_INTERVALS * interval_of(piece.time)]
    for turn in far:
        before, after = slice(0, int(turn) + 1), slice(int(turn) + 1, None)
        _, first, second = np.intersect1d(piece.time[before], piece.time[after], return_indices=True)
        if len(first) < LATE_ROWS:
            continue
        clash = share_different(piece.values, first, second + int(turn) + 1)
        if clash > CLASH:
            raise LogError(
                f"time falls back by {-steps[turn]:.0f} s and {len(first)} stamps come twice, not alike; "
                "split the file there, or mend its clock",
                file=piece.path,
                line=int(piece.line[turn + 1]),
            )


def _newest_last(pieces: Sequence[Piece]) -> tuple[list[Piece], list[Step]]:
    """Turn over files written with their newest row first: in every row the clock goes back."""
    out, steps = [], []
    for piece in pieces:
        change = np.diff(piece.time)
        change = change[change != 0]
        if len(change) >= SURELY_TURNED and (change < 0).mean() >= 0.99:
            turned = {name: data[::-1] for name, data in piece.values.items()}
            piece = Piece(piece.path, piece.time[::-1], piece.line[::-1], turned)
            detail = f"{piece.path.name}: newest row first"
            steps.append(Step("turned to time order", len(piece.time), detail=detail))
        out.append(piece)
    return out, steps


def join(pieces: Sequence[Piece]) -> tuple[Floats, dict[str, Floats], list[Step], list[str]]:
    """Join files in time order.

    Parameters
    ----------
    pieces : sequence of Piece
        In the order the case file lists them; of rows with the same stamp the first one's values win,
        and the others fill what it lacks.

    Returns
    -------
    time : ndarray, shape (n,)
        Strictly increasing [s].
    values : dict of str to ndarray, shape (n,)
        Channels [SI], NaN where no file has a value.
    steps : list of Step
        Duplicates merged, rows sorted.
    warnings : list of str
        Recordings that contradict each other, and clocks that were set while they recorded.
    """
    pieces, turned = _newest_last(pieces)
    mended = mend_clocks(pieces)
    pieces, steps, warnings = mended.pieces, [*turned, *mended.steps], mended.warnings
    late = sum(check_direction(piece) for piece in pieces)
    if late:
        steps.append(
            Step("sorted into time order", late, detail="rows whose stamp lay before one already read")
        )
    if len(pieces) == 1 and not late and (np.diff(pieces[0].time) > 0).all():
        return pieces[0].time, dict(pieces[0].values), steps, warnings
    names = list(dict.fromkeys(name for piece in pieces for name in piece.values))
    time = np.concatenate([piece.time for piece in pieces])
    values = {
        name: np.concatenate([p.values.get(name, np.full(len(p.time), np.nan)) for p in pieces])
        for name in names
    }
    if (np.diff(time) > 0).all():
        return time, values, steps, warnings
    order = np.argsort(time, kind="stable")
    time = time[order]
    values = {name: data[order] for name, data in values.items()}
    first = np.flatnonzero(np.diff(time, prepend=-np.inf) > 0)
    extra = len(time) - len(first)
    if extra:
        steps.append(
            Step("merged duplicate stamps", extra, detail="one row a stamp; the first value found is kept")
        )
        twice = np.flatnonzero(np.diff(time) == 0)
        differing = share_different(values, twice, twice + 1)
        if differing > CLASH and extra >= LATE_ROWS:
            warnings.append(
                f"{extra} stamps come more than once, {differing:.0%} of them with different values; "
                "the first file listed wins"
            )
        values = {name: _first_finite(data, first) for name, data in values.items()}
        time = time[first]
    return time, values, steps, warnings


def _first_finite(data: Floats, first: NDArray[np.int64]) -> Floats:
    """Take, of each group of rows, the first value that is there."""
    out = data[first].copy()
    lengths = np.diff(first, append=len(data))
    for shift in range(1, int(lengths.max())):
        lacking = np.flatnonzero(~np.isfinite(out) & (lengths > shift))
        if len(lacking) == 0:
            break
        out[lacking] = data[first[lacking] + shift]
    return out
