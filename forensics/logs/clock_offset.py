"""Two files with two clocks: the same bit depths at stamps that lie hours apart."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np
from numpy.typing import NDArray

from forensics.logs.piece import Piece

Floats = NDArray[np.float64]
# Zones lie whole quarters of an hour apart; rigs are told from UTC by 14 h at most [s].
QUARTER, FARTHEST = 900.0, 14 * 3600.0
GRID = 30.0
# Depths that agree [m], over how much of the time, and how much the bit must have moved to tell [m].
NEAR, AGREEING, MOVED = 0.3, 0.9, 30.0
# Shortest stretch two files must share to be held against one another [s].
SHORTEST = 1800.0


def find_offsets(pieces: Sequence[Piece], timezone: str = "UTC") -> list[str]:
    """Say where one file's clock stands off another's.

    Parameters
    ----------
    pieces : sequence of Piece
        Files of one run.
    timezone : str
        Zone that stamps without one were given.

    Returns
    -------
    list of str
        A sentence for each recorder whose bit depths agree with another's only when its stamps are shifted by
        quarters of an hour. Nothing is shifted: which of the two is right only the case file can say.
    """
    said = []
    told = [(chain[0], grid) for chain in _chains(pieces) if (grid := _on_grid(chain)) is not None]
    for j, (other, its) in enumerate(told):
        for one, mine in told[:j]:
            offset = _offset(mine, its)
            if offset:
                said.append(_words(one, other, offset, timezone))
                break
    return said


def _chains(pieces: Sequence[Piece]) -> list[list[Piece]]:
    """Put files with the same channels that follow one another together: one recorder, one clock."""
    chains: list[list[Piece]] = []
    for piece in sorted((p for p in pieces if len(p.time)), key=lambda p: float(p.time[0])):
        like = [chain for chain in chains if chain[0].values.keys() == piece.values.keys()]
        own = next((chain for chain in like if chain[-1].time[-1] <= piece.time[0]), None)
        if own is None:
            chains.append([piece])
        else:
            own.append(piece)
    order = {id(piece): place for place, piece in enumerate(pieces)}
    return sorted(chains, key=lambda chain: min(order[id(piece)] for piece in chain))


def _on_grid(chain: list[Piece]) -> tuple[int, Floats] | None:
    """Bit depth at whole multiples of the grid: number of the first, and values, NaN within gaps."""
    told = [piece for piece in chain if "bit_depth" in piece.values]
    if not told:
        return None
    time = np.concatenate([piece.time for piece in told])
    depth = np.concatenate([piece.values["bit_depth"] for piece in told])
    known = np.isfinite(depth) & np.isfinite(time)
    time, depth = time[known], depth[known]
    if len(time) < 2 or time[-1] - time[0] < SHORTEST or (np.diff(time) < 0).any():
        return None
    first, last = int(np.ceil(time[0] / GRID)), int(np.floor(time[-1] / GRID))
    if last - first > 200_000:
        return None
    at = GRID * np.arange(first, last + 1)
    after = np.clip(np.searchsorted(time, at), 1, len(time) - 1)
    values = np.interp(at, time, depth)
    values[time[after] - time[after - 1] > 10.0 * GRID] = np.nan
    return first, values


def _offset(one: tuple[int, Floats], other: tuple[int, Floats]) -> float:
    """Time to add to the other's stamps to make depths agree [s]; 0 where none is needed, or none helps."""
    shared, agreeing, _ = _agree(one, other, 0)
    if shared * GRID >= SHORTEST and agreeing >= AGREEING:
        return 0.0
    best, found = 0.0, 0
    for quarters in range(-int(FARTHEST / QUARTER), int(FARTHEST / QUARTER) + 1):
        shift = int(quarters * QUARTER / GRID)
        shared, agreeing, moved = _agree(one, other, shift)
        if shared * GRID >= SHORTEST and moved >= MOVED and agreeing > max(best, AGREEING):
            best, found = agreeing, shift
    return found * GRID


def _agree(one: tuple[int, Floats], other: tuple[int, Floats], shift: int) -> tuple[int, float, float]:
    """Grid points shared under a shift, the part of them that agree, and how far the bit moved in them."""
    (a, x), (b, y) = one, other
    b += shift
    low, high = max(a, b), min(a + len(x), b + len(y))
    if high - low < SHORTEST / GRID:
        return 0, 0.0, 0.0
    mine, its = x[low - a : high - a], y[low - b : high - b]
    apart = np.abs(mine - its)
    known = np.isfinite(apart)
    if known.sum() * GRID < SHORTEST:
        return 0, 0.0, 0.0
    moving = np.abs(np.diff(mine, prepend=mine[:1]))
    return int(known.sum()), float((apart[known] <= NEAR).mean()), float(np.nansum(moving[known]))


def _words(one: Piece, other: Piece, offset: float, timezone: str) -> str:
    hours = abs(offset) / 3600.0
    way = "behind" if offset > 0 else "ahead of"
    zone = f"{'-' if offset > 0 else '+'}{int(hours):02d}:{round(hours % 1 * 60):02d}"
    example = f': "{other.path.name}" = "{zone}"' if timezone == "UTC" else ""
    return (
        f"{other.path.name} and {one.path.name} show the same bit depths {hours:g} h apart: the clock of "
        f"{other.path.name} is {hours:g} h {way} that of {one.path.name}, so that rows of different moments "
        "stand together. If its stamps are local time without a zone, name the zone under [logs.timezones]"
        f"{example}"
    )
