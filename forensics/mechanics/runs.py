"""Runs of like stiffness: over what length of the string a place may bend with its neighbours.

The stiff assembly's length, not the whole string's, counts near vertical: where stiffness changes by more
than half at its top, the pipe above holds it no more than a hinge would.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray

Floats = NDArray[np.float64]

LIKE_STIFFNESS = 2.0  # a step by more than this ends a run
SHORT_PIECE = 10.0  # m; half the characteristic length of ordinary pipe: what is shorter is no run of its own


@dataclass(frozen=True)
class _Piece:
    """Neighbouring elements of like stiffness: EI at both ends [N.m2], length [m], how many."""

    lower: float
    upper: float
    length: float
    count: int


def run_lengths(stiffness: Floats, lengths: Floats) -> Floats:
    """Give the length of the run of like stiffness that each element belongs to.

    Parameters
    ----------
    stiffness : ndarray, shape (m,)
        EI of the elements, from the bit up [N.m2].
    lengths : ndarray, shape (m,)
        [m]

    Returns
    -------
    ndarray, shape (m,)
        [m]

    Notes
    -----
    A piece too short to bend by itself goes to the neighbour nearer to it in stiffness, the shortest first:
    a sub amid collars cuts nothing, one between collars and pipe joins either, and tools that are each short
    make up one assembly.

    Examples
    --------
    Collars with a slim sub amid them, under pipe:

    >>> run_lengths(np.array([30.0, 2.0, 30.0, 1.0]), np.array([50.0, 1.0, 50.0, 900.0])).tolist()
    [101.0, 101.0, 101.0, 900.0]
    """
    elements = zip(stiffness.tolist(), lengths.tolist(), strict=True)
    pieces = _joined([_Piece(ei, ei, length, 1) for ei, length in elements])
    while len(pieces) > 1:
        shortest = min(range(len(pieces)), key=lambda k: pieces[k].length)
        if pieces[shortest].length >= SHORT_PIECE:
            break
        pieces = _joined(_given_away(pieces, shortest))
    return np.repeat([piece.length for piece in pieces], [piece.count for piece in pieces])


def _joined(pieces: Sequence[_Piece]) -> list[_Piece]:
    """Join neighbours between which there is no step."""
    found: list[_Piece] = []
    for piece in pieces:
        if found and _step(found[-1].upper, piece.lower) <= LIKE_STIFFNESS:
            last = found[-1]
            found[-1] = _Piece(last.lower, piece.upper, last.length + piece.length, last.count + piece.count)
        else:
            found.append(piece)
    return found


def _given_away(pieces: Sequence[_Piece], at: int) -> list[_Piece]:
    """Hand a piece to a neighbour, whose own ends then stand for both."""
    small = pieces[at]
    steps = {}
    if at > 0:
        steps[at - 1] = _step(pieces[at - 1].upper, small.lower)
    if at + 1 < len(pieces):
        steps[at + 1] = _step(small.upper, pieces[at + 1].lower)
    into = min(steps, key=lambda k: steps[k])
    taken = pieces[into]
    both = replace(taken, length=taken.length + small.length, count=taken.count + small.count)
    first = min(at, into)
    return [*pieces[:first], both, *pieces[first + 2 :]]


def _step(one: float, other: float) -> float:
    return max(one / other, other / one)
