"""The hole as the march of strings side by side reads it."""

from __future__ import annotations

from typing import NamedTuple

import numpy as np
from numpy.typing import NDArray

from forensics.mechanics.eigen import LIMIT
from forensics.mechanics.grid import HoleGrid
from forensics.mechanics.kernels_judge import CONSTANT, CUBE, LINEAR, SQUARE, Criteria

Floats = NDArray[np.float64]
Ints = NDArray[np.int64]


class Ground(NamedTuple):
    """What the hole does to strings, row by row of depth.

    `rows` has shape (4 depths,): cos I, sin² I, squared and downward curvature of each depth together;
    `section` (depths,) the friction section and `until` the last row on from there in the same; `least`
    (kinds of pipe, depths) a load below which no helix starts there, weights unscaled [N].
    """

    rows: Floats
    section: Ints
    until: Ints
    least: Floats


def build_ground(hole: HoleGrid, section: Ints, criteria: Criteria) -> Ground:
    """Put hole, friction section of each depth and criteria together."""
    rows = np.stack([hole.cos_i, hole.sin2, hole.kappa2, hole.kappa_d], axis=1)
    return Ground(rows.ravel(), section, runs_until(section), least_onset(criteria))


def divide(ground: Ground, section: Ints) -> Ground:
    """Give the same hole other friction sections."""
    return ground._replace(section=section, until=runs_until(section))


def runs_until(section: Ints) -> Ints:
    """Give the last row of the run of like sections each row is in, shape (depths,)."""
    ends = np.append(np.flatnonzero(np.diff(section)), len(section) - 1)
    return ends[np.searchsorted(ends, np.arange(len(section)))]


def least_onset(criteria: Criteria) -> Floats:
    """Give a load below which no helix starts, whatever the contact there, shape (kinds, depths) [N].

    The fourth power of the Dawson-Paslay load is a parabola of the tension: its least value under compression
    and the least near-vertical term bound the onset from below.
    """
    square, linear, constant = (criteria.at[..., column] for column in (SQUARE, LINEAR, CONSTANT))
    turns = (linear > 0.0) & (square > 0.0)
    dip = np.where(turns, linear**2 / (4.0 * np.where(turns, square, 1.0)), 0.0)
    local = np.maximum(constant - dip, 0.0) ** 0.25
    return criteria.onset * (local + LIMIT * criteria.at[..., CUBE])
