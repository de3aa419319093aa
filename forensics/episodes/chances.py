"""How likely it is that an episode's rule holds, over the draws of everything uncertain."""

from __future__ import annotations

from dataclasses import dataclass
from math import sqrt
from statistics import NormalDist

import numpy as np
from numpy.typing import NDArray

from forensics.episodes.material import Material
from forensics.episodes.rules import LOCKUP_PART, LockupSigns
from forensics.episodes.spans import Span

Floats = NDArray[np.float64]

Z90 = 1.6448536269514722

#: Share of a lockup's flagged rows that a draw must keep for the rule to hold in it.
MOST = 0.5

#: A chance is never told as more certain than this: the draws are few and the model is one.
CERTAIN = 0.99

#: Chances from here to as much below one leave the rule in doubt: more draws are worth their time.
DOUBT = 0.02


@dataclass(frozen=True)
class Chance:
    """Probability that a rule holds, with its 90 % interval for the number of draws behind it."""

    value: float
    low: float = float("nan")
    high: float = float("nan")
    draws: int = 0

    @property
    def in_doubt(self) -> bool:
        """Whether draws could still turn it."""
        return DOUBT < self.value < 1.0 - DOUBT


UNKNOWN = Chance(float("nan"))


def buckling_chance(material: Material, span: Span, least: float) -> Chance:
    """Chance that the string is buckled for at least `least` seconds within the span.

    Parameters
    ----------
    material : Material
    span : Span
    least : float
        [s]

    Returns
    -------
    Chance
    """
    draws = material.draws
    if draws is None:
        return UNKNOWN
    columns, counts = draws.window(span.first, span.last)
    if len(columns) == 0:
        return UNKNOWN
    told = draws.told(columns)
    ratio = np.nan_to_num(draws.peak_ratio[np.ix_(told, columns)].astype(float))
    # rows stand for rows: what the draws didn't visit lasted as long as what they did
    held = min(least, float(counts.sum()) * material.log.interval)
    return chance_of(lasting(ratio, counts * material.log.interval, held) - 1.0)


def lasting(values: Floats, seconds: Floats, least: float) -> Floats:
    """Give the level each row of values keeps to or passes for `least` seconds, shape (k,).

    Parameters
    ----------
    values : ndarray, shape (k, c)
    seconds : ndarray, shape (c,)
        How long each column lasts [s].
    least : float
        [s]
    """
    order = np.argsort(-values, axis=1, kind="stable")
    passed = np.cumsum(seconds[order], axis=1) >= least * (1.0 - 1e-9)
    at = np.where(passed.any(axis=1), passed.argmax(axis=1), values.shape[1] - 1)
    rows = np.arange(len(values))
    return values[rows, order[rows, at]]


def lockup_chance(material: Material, span: Span, flags: NDArray[np.bool_], signs: LockupSigns) -> Chance:
    """Chance that the lockup rule holds on most of the rows flagged in the span.

    What the surface shows is the same in every draw; how much of it reached the bit is not.
    """
    draws = material.draws
    rows = np.flatnonzero(flags[span.rows]) + span.first
    if draws is None or not (draws.covered[rows].all() and len(rows)):
        return UNKNOWN
    columns, since = draws.columns(rows), draws.columns(np.minimum(signs.since[rows], rows))
    told = draws.told(columns) & draws.told(since)
    gained = (draws.bit_load[:, columns] - draws.bit_load[:, since])[told].astype(float)
    little = gained < LOCKUP_PART * signs.drop[rows]
    held = np.where(material.rig.on_bottom[rows], little, signs.held[rows])
    return chance_of(held.mean(axis=1) - MOST + 1e-9)


def drag_chance(material: Material, span: Span, least: float) -> Chance:
    """Chance that the drag stays beyond its threshold for `least` seconds.

    Parameters
    ----------
    material : Material
    span : Span
    least : float
        [s]

    Returns
    -------
    Chance
    """
    rows = np.arange(span.first, span.last + 1)
    rows = rows[np.isfinite(material.drag[rows])]
    residual = drag_draws(material, rows)
    if residual.size == 0:
        return UNKNOWN
    sign = material.friction_sign[rows]
    drag = np.where(sign == 0, np.abs(residual), residual * sign) - material.drag_threshold[rows]
    return chance_of(lasting(drag, np.full(len(rows), material.log.interval), least))


def drag_draws(material: Material, rows: NDArray[np.int64]) -> Floats:
    """Hookload residuals at the draws, shape (k, m) [N]; empty where there are none.

    Parameters
    ----------
    material : Material
    rows : ndarray of int, shape (m,)
    """
    draws = material.draws
    if draws is None or len(draws.weights) == 0 or len(rows) == 0:
        return np.zeros((0, len(rows)))
    bit = material.bit[rows]
    # going up the pick-up line counts, turning the rotating one, going down the slack-off one
    line = 1 - material.friction_sign[rows].astype(int)
    moved = np.empty((len(draws.weights), len(rows)))
    for k, lines in enumerate(draws.lines):
        moved[k] = np.choose(line, [np.interp(bit, draws.depth, own) for own in lines])
    return material.loads.drag_residual[rows] - moved


def torque_chance(material: Material, span: Span, least: float) -> Chance:
    """Chance that the torque stays beyond its threshold, over the rotational factor's interval."""
    factor = material.calibration.rotational
    rows = np.arange(span.first, span.last + 1)
    rows = rows[np.isfinite(material.loads.torque_residual[rows])]
    if factor is None or factor.value <= 0.0 or len(rows) == 0:
        return UNKNOWN
    count = 24
    normal = np.array([NormalDist().inv_cdf((k + 0.5) / count) for k in range(count)])
    shift = np.outer(rotational_spread(material) * normal, material.model_torque[rows])
    beyond = material.loads.torque_residual[rows] - shift - material.torque_threshold[rows]
    return chance_of(lasting(beyond, np.full(len(rows), material.log.interval), least))


def rotational_spread(material: Material) -> float:
    """One sigma of the rotational factor over its value; zero where there is none."""
    factor = material.calibration.rotational
    if factor is None or factor.value <= 0.0:
        return 0.0
    return (factor.high - factor.low) / (2.0 * Z90 * factor.value)


def chance_of(margins: Floats) -> Chance:
    """Chance that a margin is not below zero.

    Parameters
    ----------
    margins : ndarray, shape (k,)
        By how much each draw passes the rule's threshold; NaN where it can't tell.

    Returns
    -------
    Chance
        The share of the draws that pass; where they all agree, by how many of their own sigmas they stay
        clear of the threshold.
    """
    margins = margins[np.isfinite(margins)]
    count = len(margins)
    if count == 0:
        return UNKNOWN
    share = float(np.mean(margins >= 0.0))
    bounds = _agreed(margins, share) if share in (0.0, 1.0) else (share, *_wilson(share, count))
    value, low, high = np.clip(bounds, 1.0 - CERTAIN, CERTAIN).tolist()
    return Chance(value, low, high, count)


def _agreed(margins: Floats, share: float) -> tuple[float, float, float]:
    """Chance, and its 90 % interval, where all draws agree: as if their margins were normal."""
    spread = float(np.std(margins))
    if spread <= 0.0:
        return share, share, share
    clear = float(np.mean(margins)) / spread
    # how well so few draws tell mean over sigma (to first order, of normal samples)
    half = Z90 * sqrt((1.0 + 0.5 * clear**2) / len(margins))
    value, low, high = (NormalDist().cdf(z) for z in (clear, clear - half, clear + half))
    return value, low, high


def _wilson(share: float, count: int) -> tuple[float, float]:
    """90 % interval of a share of so many draws (Wilson 1927, J. Am. Stat. Assoc. 22)."""
    square = Z90**2 / count
    middle = (share + 0.5 * square) / (1.0 + square)
    half = sqrt(share * (1.0 - share) * square + 0.25 * square**2) / (1.0 + square)
    return max(middle - half, 0.0), min(middle + half, 1.0)

