"""The load along the hole through the whole run: at the moments where it changes most."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from forensics.loads import LoadHistory, Profile
from forensics.replay.moments import profiles_in_turn
from forensics.replay.run import Replay

Floats = NDArray[np.float64]
Rows = NDArray[np.int64]

MOMENTS = 400
STATIONS = 150
# Changes are looked for between this many rows: from one row to the next most of it is noise.
LOOKS = 4000
# Part of the moments that quiet time gets, so that none of the run is far from a profile.
QUIET = 0.3
# The highest load ratio told apart when changes are weighed.
RATIO_CAP = 4.0


@dataclass(frozen=True)
class Course:
    """Load profiles through a run, thinned along the hole.

    Parameters
    ----------
    rows : ndarray of int, shape (m,)
        Rows of the log, ascending.
    md : ndarray of float32, shape (m, k)
        Measured depth [m], from the bit up; NaN where a string has fewer places.
    tension, sinusoidal, helical : ndarray of float32, shape (m, k)
        As in `Profile` [N].
    state : ndarray of int8, shape (m, k)
        As in `Profile`; 0 where there is no place.
    """

    rows: Rows
    md: NDArray[np.float32]
    tension: NDArray[np.float32]
    sinusoidal: NDArray[np.float32]
    helical: NDArray[np.float32]
    state: NDArray[np.int8]


def course(run: Replay, loads: LoadHistory, peaks: Sequence[int]) -> Course:
    """Take the load profile at some hundreds of moments of a run.

    Parameters
    ----------
    run : Replay
        Made ready.
    loads : LoadHistory
        What the replay found: says where loads change.
    peaks : sequence of int
        Rows to take in any case.

    Returns
    -------
    Course
    """
    rows = moments(loads, peaks)
    shape = (len(rows), STATIONS)
    md, tension, sinusoidal, helical = (np.full(shape, np.nan, dtype=np.float32) for _ in range(4))
    state = np.zeros(shape, dtype=np.int8)
    for k, profile in enumerate(profiles_in_turn(run, rows.tolist(), spare=False)):
        at = worst_places(profile)
        part = slice(0, len(at))
        md[k, part], tension[k, part] = profile.md[at], profile.tension[at]
        sinusoidal[k, part], helical[k, part] = profile.sinusoidal[at], profile.helical[at]
        state[k, part] = profile.state[at]
    return Course(rows, md, tension, sinusoidal, helical, state)


def moments(loads: LoadHistory, peaks: Sequence[int], most: int = MOMENTS) -> Rows:
    """Choose the rows at which the load along the hole is worth showing.

    Parameters
    ----------
    loads : LoadHistory
        Of n rows.
    peaks : sequence of int
        Rows to take in any case.
    most : int
        How many to choose beside them.

    Returns
    -------
    ndarray of int, shape (m,)
        Ascending, each once: equal steps of change, counted in load ratio, bit load and reach, with some
        for time itself.
    """
    n = len(loads.bit_load)
    if n == 0:
        return np.zeros(0, dtype=np.int64)
    looked = np.arange(0, n, max(n // LOOKS, 1))
    told = (
        np.clip(loads.peak_ratio, 0.0, RATIO_CAP),
        loads.bit_load / max(float(np.nanmax(np.abs(loads.bit_load), initial=0.0)), 1.0),
        loads.reach / max(float(np.nanmax(loads.reach, initial=0.0)), 1.0),
    )
    change = np.zeros(len(looked))
    for values in told:
        change[1:] += np.abs(np.diff(np.nan_to_num(values[looked])))
    steady = np.full(len(looked), max(change.sum(), 1.0) * QUIET / (1.0 - QUIET) / len(looked))
    passed = np.cumsum(change + steady)
    at = np.searchsorted(passed, np.linspace(passed[0], passed[-1], most)).clip(max=len(looked) - 1)
    return np.unique(np.concatenate([looked[at], np.asarray(peaks, dtype=np.int64)]))


def worst_places(profile: Profile, most: int = STATIONS) -> Rows:
    """Choose at most `most` places of a profile: of each stretch the one nearest its sinusoidal threshold.

    Both ends are kept.
    """
    places = len(profile.md)
    if places <= most:
        return np.arange(places)
    edges = np.linspace(0, places, most + 1).astype(np.int64)
    at = np.minimum(edges[:-1, None] + np.arange(int(np.diff(edges).max())), edges[1:, None] - 1)
    with np.errstate(invalid="ignore", divide="ignore"):
        ratio = np.nan_to_num(-profile.tension / profile.sinusoidal, nan=-np.inf)
    chosen = at[np.arange(most), np.argmax(ratio[at], axis=1)]
    chosen[0], chosen[-1] = 0, places - 1
    return chosen
