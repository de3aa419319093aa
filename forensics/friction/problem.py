"""From steady readings to a least-squares problem: which are taken, and how far each is trusted."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from forensics.friction.assumptions import Prior
from forensics.friction.result import Reading
from forensics.friction.robust import Problem
from forensics.friction.spread import STAND
from forensics.friction.surface import OffBottom, build_surface

Floats = NDArray[np.float64]

#: Which way more friction moves a reading.
SIGNS = {"pick_up": 1.0, "slack_off": -1.0, "rotating": 0.0}

#: Readings fitted at most, of each kind: more of one run add nothing but time.
MOST = 80

#: A reading is trusted no better than this [N], or this part of its value: settling, speed, pumps.
SIGMA_FLOOR = (500.0, 0.0015)

#: A weight written down by hand: a needle read at a glance, at a depth and speed noted roughly [N, -].
BY_HAND = (5.0e3, 0.01)

#: Load ratio from which a slack-off weight shows the helix as well as friction.
NEAR_BUCKLING = 0.8


def sound(reading: Reading) -> bool:
    """Whether a reading has a value and a place."""
    return bool(np.isfinite(reading.value) and np.isfinite(reading.bit_depth) and reading.bit_depth > 0.0)


def thin(readings: tuple[Reading, ...]) -> tuple[Reading, ...]:
    """Keep at most `MOST` readings of each kind, evenly over the run, in time order."""
    kept: list[Reading] = []
    for kind in {r.kind for r in readings}:
        same = sorted((r for r in readings if r.kind == kind), key=lambda r: (r.start, r.bit_depth))
        if len(same) > MOST:
            same = [same[i] for i in np.linspace(0, len(same) - 1, MOST).round().astype(int)]
        kept.extend(same)
    return tuple(sorted(kept, key=lambda r: (r.start, r.kind)))


def build_problem(weights: tuple[Reading, ...], model: OffBottom, prior: Prior) -> Problem:
    """Lay out weight readings for the fit.

    Parameters
    ----------
    weights : tuple of Reading, length n
        Hookload readings in time order.
    model : OffBottom
    prior : Prior

    Returns
    -------
    Problem
    """
    depth = depths(weights)
    value = np.array([r.value for r in weights], dtype=float)
    block = np.array([r.block for r in weights], dtype=float)
    known = np.isfinite(block)
    block = np.where(known, block, block[known].mean() if known.any() else 0.0)
    above = model.above_rotary(block, depth) if known.any() else np.zeros(len(weights))
    kinds = tuple(r.kind for r in weights)
    surface = build_surface(model, kinds, depth)
    return Problem(
        value=value,
        above=above,
        sign=np.array([SIGNS[k] for k in kinds], dtype=float),
        sigma=_sigma(weights, value),
        place=_centred(depth, STAND),
        when=_centred(np.array([r.start for r in weights], dtype=float), 0.0),
        pumping=np.array([r.pumping for r in weights], dtype=float),
        hanging=surface.at(np.zeros(2))[0],
        near=np.zeros(len(weights), dtype=bool),
        rough=np.array([r.by_hand for r in weights], dtype=bool),
        surface=surface,
        prior=prior,
    )


def depths(readings: tuple[Reading, ...]) -> Floats:
    """Bit depths of readings, shape (n,) [m]."""
    return np.array([r.bit_depth for r in readings], dtype=float)


def _sigma(weights: tuple[Reading, ...], value: Floats) -> Floats:
    """How far each reading is trusted, one sigma [N]."""
    own = np.array([r.spread / np.sqrt(min(max(r.samples, 1), 10)) for r in weights], dtype=float)
    own = np.where(np.isfinite(own), own, 0.0)
    hand = np.array([r.by_hand for r in weights], dtype=bool)
    floor, part = (np.where(hand, BY_HAND[k], SIGMA_FLOOR[k]) for k in range(2))
    return np.hypot(own, np.maximum(floor, part * np.abs(value)))


def _centred(values: Floats, least: float) -> Floats:
    """Where each value lies between the least and the largest, from -1 to 1; zero where they are all one."""
    if len(values) == 0 or np.ptp(values) <= least:
        return np.zeros(len(values))
    return 2.0 * (values - values.min()) / np.ptp(values) - 1.0
