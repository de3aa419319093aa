"""Several witnesses of one bit load, weighed by inverse variance, and doubted where they disagree."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np
from numpy.typing import NDArray

from forensics.loads import Basis, BitWitness
from forensics.replay.windows import smoothed
from forensics.replay.witness.respond import Heard

Floats = NDArray[np.float64]

UNSEEN = 5e3  # N, one sigma of a bit load that rests on memory or the rate law
FLATLY = 3.0  # standard errors at which one of the two is wrong, and not merely unsure


def combine(heard: Sequence[Heard], count: int) -> tuple[Floats, Floats, NDArray[np.int8]]:
    """Weigh witnesses together.

    Parameters
    ----------
    heard : sequence of Heard
        Each with arrays of shape (count,).
    count : int
        Rows of the log.

    Returns
    -------
    load, sigma : ndarray, shape (count,)
        Mean by inverse variance and its standard error [N]; NaN where all are silent. Where the witnesses lie
        further apart than their errors allow, the standard error grows by that factor (Birge's ratio).
    basis : ndarray of int8, shape (count,)
        `Basis` of the witness that weighs most.

    References
    ----------
    Birge, R. T. (1932), "The calculation of errors by the method of least squares", Phys. Rev. 40.
    """
    if not heard:
        silent = np.full(count, np.nan)
        return silent, silent.copy(), np.zeros(count, dtype=np.int8)
    loads = np.array([h.load for h in heard])
    told = np.isfinite(loads)
    weights = np.where(told, 1.0 / np.square(np.array([h.sigma for h in heard])), 0.0)
    whole = weights.sum(axis=0)
    with np.errstate(invalid="ignore", divide="ignore"):
        load = np.sum(weights * np.where(told, loads, 0.0), axis=0) / whole
        apart = np.sum(weights * np.where(told, loads - load, 0.0) ** 2, axis=0)
        ratio = np.sqrt(np.maximum(apart / np.maximum(told.sum(axis=0) - 1, 1), 1.0))
        sigma = ratio / np.sqrt(whole)
    strongest = np.array([int(h.response.basis) for h in heard], dtype=np.int8)[np.argmax(weights, axis=0)]
    return load, np.where(np.isfinite(load), sigma, np.nan), strongest


def lean(
    witness: BitWitness, bit_load: Floats, basis: NDArray[np.int8], drilling: NDArray[np.bool_], step: int
) -> tuple[Floats, NDArray[np.int8]]:
    """Give the bit load where the hookload does not show it: the replay's and the witness's, weighed.

    Parameters
    ----------
    witness : BitWitness
    bit_load : ndarray, shape (n,)
        By the replay [N].
    basis : ndarray of int8, shape (n,)
        What that rests on.
    drilling : ndarray of bool, shape (n,)
        Rows while sliding on bottom.
    step : int
        Rows of the witness's moving median.

    Returns
    -------
    bit_load, basis : ndarray, shape (n,)
        Where the hookload shows the bit and the witness does not flatly contradict it, no more changes than
        the slow part that both their errors allow; where only the drilling rate speaks, nothing: the replay
        has that already. Where the witness stopped the remembered load, it alone counts.
    """
    told = drilling & np.isfinite(witness.load) & (witness.basis != Basis.RATE_LAW)
    own = np.where(basis == Basis.HOOKLOAD, witness.own_sigma, UNSEEN) ** 2
    theirs = witness.sigma**2
    # a tag is over before the witness's median has seen it: smoothed alike, the two must still disagree
    least = np.minimum(np.abs(bit_load - witness.load), np.abs(smoothed(bit_load, step) - witness.load))
    apart = least**2 > FLATLY**2 * (own + theirs)
    own = np.where(apart, np.maximum(own, least**2 - theirs), own)
    share = np.where(basis == Basis.DIFFERENTIAL, 1.0, own / (own + theirs))
    # a bit that carries nothing is not loaded by the witness's own noise
    loaded = (witness.load > FLATLY * witness.sigma) | (bit_load > witness.load)
    heeded = told & loaded & ((basis != Basis.HOOKLOAD) | apart)
    shown = np.where(told & (basis == Basis.HOOKLOAD), np.maximum(bit_load - witness.beyond, 0.0), bit_load)
    mixed = np.where(heeded, bit_load + share * (witness.load - bit_load), shown)
    return mixed, np.where(heeded & (share > 0.5), witness.basis, basis).astype(np.int8)
