"""Friction of several runs pooled in part: what they share, how they differ, what the next one may have.

Three levels: runs of one group (like section and mud) scatter about the group's mean, the groups' means
about the common one. Neither scatter is known; both are summed over on a grid, so that few runs give wide
answers rather than a spread of nought.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray
from scipy.optimize import brentq
from scipy.special import ndtr

from forensics.friction.assumptions import Z90

Floats = NDArray[np.float64]

#: Scale of the half-normal priors of both scatters [-]: wells of one mud differ by a few hundredths (trade
#: judgement, from memory).
SCATTER_WITHIN = 0.05
SCATTER_BETWEEN = 0.05

#: Grid of each scatter: from nought to four prior scales.
POINTS = 25
REACH = 4.0

#: An interval never counts as narrower than this, one sigma: a factor is no better known.
LEAST_SIGMA = 0.003


@dataclass(frozen=True)
class Seen:
    """One run's friction factor: value and 90 % interval, and the group of like runs it belongs to."""

    name: str
    group: str
    value: float
    low: float
    high: float

    @property
    def sigma(self) -> float:
        """One standard deviation of the interval."""
        return max((self.high - self.low) / (2.0 * Z90), LEAST_SIGMA)


@dataclass(frozen=True)
class Prior:
    """What is assumed of the common mean: centre and one sigma."""

    centre: float
    sigma: float


@dataclass(frozen=True)
class Pooled:
    """What a group's runs say together.

    Parameters
    ----------
    group : str
    runs : int
        Runs in the group.
    mean, low, high : float
        The group's mean and its 90 % interval.
    p10, p50, p90 : float
        Of the factor of the next run of this group.
    scatter : float
        From run to run, at the middle of what is likely (one sigma).
    """

    group: str
    runs: int
    mean: float
    low: float
    high: float
    p10: float
    p50: float
    p90: float
    scatter: float


@dataclass(frozen=True)
class Pool:
    """Pooled factors: by group, for a run of no known group, and each run's own, drawn towards its group."""

    groups: tuple[Pooled, ...]
    other: Pooled
    runs: tuple[Seen, ...]


def pool(seen: Sequence[Seen], prior: Prior) -> Pool:
    """Pool friction factors of several runs in part.

    Parameters
    ----------
    seen : sequence of Seen
        At least one; only factors that their runs determined.
    prior : Prior
        Of the common mean.

    Returns
    -------
    Pool

    Raises
    ------
    ValueError
        If nothing was seen.

    Notes
    -----
    y_i ~ N(theta_i, s_i²), theta_i ~ N(m_g, w²), m_g ~ N(mu, b²), mu ~ N(prior), w and b half-normal. For
    each pair (w, b) all is normal and closed; the pairs are weighted by their marginal likelihood.

    References
    ----------
    Gelman, A. et al., Bayesian Data Analysis, chapter 5 (hierarchical normal model; from memory).
    """
    if not seen:
        raise ValueError("no factor was seen; pooling needs at least one")
    names = sorted({s.group for s in seen})
    told = _posterior(seen, names, prior)
    counts = [sum(s.group == name for s in seen) for name in names]
    groups = tuple(_pooled(name, counts[g], told, g) for g, name in enumerate(names))
    other = _pooled("", len(seen), told, len(names))
    first = len(names) + 1
    runs = tuple(
        Seen(s.name, s.group, *(told.quantile(first + k, p) for p in (0.5, 0.05, 0.95)))
        for k, s in enumerate(seen)
    )
    return Pool(groups, other, runs)


@dataclass(frozen=True)
class _Posterior:
    """Mixtures over q pairs of scatters: the means of groups, of a group not seen, then the runs' own.

    `weight` has shape (q,); `mean` and `variance` (q, quantities); `within` (q,).
    """

    weight: Floats
    mean: Floats
    variance: Floats
    within: Floats

    def quantile(self, quantity: int, p: float, more: bool = False) -> float:
        """Quantile of a quantity, or with `more` of the next run's factor about it."""
        variance = self.variance[:, quantity] + (self.within**2 if more else 0.0)
        mean, sigma = self.mean[:, quantity], np.sqrt(np.maximum(variance, 1e-18))
        low, high = float((mean - 9.0 * sigma).min()), float((mean + 9.0 * sigma).max())
        return float(
            brentq(lambda x: float(self.weight @ ndtr((x - mean) / sigma)) - p, low, high, xtol=1e-9)
        )


def _posterior(seen: Sequence[Seen], names: Sequence[str], prior: Prior) -> _Posterior:
    """Work the posterior out at every pair of scatters."""
    value, sigma = np.array([s.value for s in seen]), np.array([s.sigma for s in seen])
    own = np.array([[s.group == name for name in names] for s in seen], dtype=float)  # (runs, groups)
    alike = own @ own.T
    grid = np.linspace(0.0, REACH, POINTS)
    pairs = np.array([(w, b) for w in SCATTER_WITHIN * grid for b in SCATTER_BETWEEN * grid])
    count = len(value)
    log_weight = -0.5 * ((pairs / [SCATTER_WITHIN, SCATTER_BETWEEN]) ** 2).sum(axis=1)
    mean, variance = (np.empty((len(pairs), len(names) + 1 + count)) for _ in range(2))
    for k, (w, b) in enumerate(pairs):
        common = prior.sigma**2
        covariance = common + b**2 * alike + np.diag(sigma**2 + w**2)
        cross = common + np.hstack([b**2 * own, np.zeros((count, 1)), b**2 * alike + w**2 * np.eye(count)])
        total = common + b**2 + np.repeat([0.0, w**2], [len(names) + 1, count])
        factor = np.linalg.cholesky(covariance)
        white = np.linalg.solve(factor, np.column_stack([value - prior.centre, cross]))
        log_weight[k] += -0.5 * white[:, 0] @ white[:, 0] - np.log(np.diag(factor)).sum()
        mean[k] = prior.centre + white[:, 0] @ white[:, 1:]
        variance[k] = total - np.einsum("ij,ij->j", white[:, 1:], white[:, 1:])
    weight = np.exp(log_weight - log_weight.max())
    return _Posterior(weight / weight.sum(), mean, np.maximum(variance, 0.0), pairs[:, 0])


def _pooled(name: str, runs: int, told: _Posterior, quantity: int) -> Pooled:
    centre = float(told.weight @ told.mean[:, quantity])
    low, high = (told.quantile(quantity, p) for p in (0.05, 0.95))
    p10, p50, p90 = (max(told.quantile(quantity, p, more=True), 0.0) for p in (0.1, 0.5, 0.9))
    scatter = float(told.weight @ told.within)
    return Pooled(name, runs, centre, max(low, 0.0), high, p10, p50, p90, scatter)
