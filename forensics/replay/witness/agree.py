"""Whether hookload and witness tell the same bit load: over a slide, an episode, any rows."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace

import numpy as np
from numpy.typing import NDArray

from forensics.loads import BitWitness, WitnessCheck

Floats = NDArray[np.float64]

FEWEST = 5
NOISE_SECONDS = 60.0  # a witness's reading is a median over about this long
SHARED = 0.7  # of both standard errors: what does not average out within one slide


def check_rows(witness: BitWitness, first: int, last: int, time: Floats) -> WitnessCheck | None:
    """Hold hookload and witness against one another over rows `first` to `last`.

    Parameters
    ----------
    witness : BitWitness
    first, last : int
        Rows of the log, inclusive.
    time : ndarray, shape (n,)
        [s]

    Returns
    -------
    WitnessCheck or None
        None where fewer than five rows have both.
    """
    part = slice(first, last + 1)
    own, heard = witness.by_hookload[part], witness.load[part]
    both = np.isfinite(own) & np.isfinite(heard)
    if both.sum() < FEWEST:
        return None
    apart = (own - heard)[both]
    variance = witness.own_sigma[part][both] ** 2 + witness.sigma[part][both] ** 2
    seconds = float(time[min(last, len(time) - 1)] - time[first])
    # friction, zero and slope are shared by a slide's rows: only part of the error averages out
    fresh = (1.0 - SHARED**2) / max(1.0, seconds / NOISE_SECONDS)
    sigma = float(np.sqrt(np.mean(variance) * (SHARED**2 + fresh)))
    return WitnessCheck(
        first=first,
        last=last,
        rows=int(both.sum()),
        by_hookload=float(own[both].mean()),
        by_witness=float(heard[both].mean()),
        difference=float(apart.mean()),
        sigma=sigma,
        scatter=float(apart.std()),
        correlation=_correlation(own[both], heard[both]),
    )


def overall(slides: Sequence[WitnessCheck]) -> WitnessCheck | None:
    """Put the slides' checks together: what the run as a whole shows.

    Parameters
    ----------
    slides : sequence of WitnessCheck

    Returns
    -------
    WitnessCheck or None
        Means weighed by rows; the standard error is that of one slide over the root of their number.
    """
    if not slides:
        return None
    rows = np.array([s.rows for s in slides], dtype=float)
    share = rows / rows.sum()

    def mean(name: str) -> float:
        return float(share @ np.array([getattr(s, name) for s in slides]))

    own, heard = (np.array([getattr(s, name) for s in slides]) for name in ("by_hookload", "by_witness"))
    return replace(
        slides[0],
        last=slides[-1].last,
        rows=int(rows.sum()),
        by_hookload=mean("by_hookload"),
        by_witness=mean("by_witness"),
        difference=mean("difference"),
        sigma=float(np.sqrt(share**2 @ np.array([s.sigma**2 for s in slides]))),
        scatter=float(np.sqrt(share @ np.array([s.scatter**2 + s.difference**2 for s in slides]))),
        correlation=_correlation(own, heard),
        bound=mean("bound"),
        paper=float(np.nansum([s.paper for s in slides])),
        shortening=float(np.nansum([s.shortening for s in slides])),
        drilled=float(np.nansum([s.drilled for s in slides])),
    )


def _correlation(first: Floats, second: Floats) -> float:
    if len(first) < FEWEST or min(np.ptp(first), np.ptp(second)) < 1e3:
        return float("nan")
    return float(np.corrcoef(first, second)[0, 1])
