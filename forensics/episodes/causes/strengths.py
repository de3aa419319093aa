"""How strongly each measurement speaks for each cause: learned counts, blended with the trade's rules.

Each measurement is sorted into bins. How often a bin is met with a cause is read from the counts of
simulated incidents in `strengths.json`; the trade's rule stands in for `RULE_WORTH` incidents more, so it
decides where none were simulated and fades where many were. What a bin says for a cause is its share with
that cause over its mean share with all causes: a likelihood ratio. Measurements lean on the same readings,
so each ratio is raised to a power below one, learned with the counts.
"""

from __future__ import annotations

import json
from collections.abc import Mapping
from dataclasses import dataclass
from functools import cache, cached_property
from importlib import resources
from typing import Any

import numpy as np
from numpy.typing import NDArray

from forensics.episodes.causes.accounts import ACCOUNTS
from forensics.episodes.causes.measures import MEASURES, Measure
from forensics.episodes.causes.names import Cause

Floats = NDArray[np.float64]

FILE = "strengths.json"

#: A trade rule weighs as much as this many simulated incidents.
RULE_WORTH = 10.0

#: Power that a measurement's ratios are raised to where none was learned.
USUAL_POWER = 0.6

#: No single measurement speaks more strongly than this many to one.
MOST = 20.0

#: From this many simulated incidents on the trade rule is not named as an origin.
MANY = 50

#: From this many to one on a trade rule is firm: learned ratios don't go against it.
FIRM = 1.2

#: What speaks more weakly than this many to one is left unsaid.
LEAST = 1.01

TRADE = "trade rule, from memory"


@dataclass(frozen=True)
class Strength:
    """What one measurement says: `weights` has shape (causes, bins), natural logs of likelihood ratios.

    `incidents` has shape (causes,): how many simulated incidents of each cause stand behind it.
    """

    weights: Floats
    incidents: NDArray[np.int64]

    @cached_property
    def origins(self) -> tuple[str, ...]:
        """Where each cause's ratios come from, in words."""
        return tuple(_origin(int(count)) for count in self.incidents)


def _origin(count: int) -> str:
    if count == 0:
        return TRADE
    said = f"simulated, {count} incidents" if count > 1 else "simulated, 1 incident"
    return said if count >= MANY else f"{said}, with the {TRADE}"


@dataclass(frozen=True)
class Strengths:
    """Strengths by measurement; `doubt`, the chance that none of this applies, goes to all causes alike."""

    by_measure: Mapping[str, Strength]
    doubt: float


def rules_of(measure: Measure) -> Floats:
    """Trade rules of a measurement, shape (causes, bins): times as often as with causes at large."""
    silent = (1.0,) * measure.bins
    return np.array([account.rules.get(measure.name, silent) for account in ACCOUNTS], dtype=float)


def shares(measure: Measure, counts: Floats) -> Floats:
    """Share of each bin with each cause: counts, and the trade rule for `RULE_WORTH` incidents more.

    Parameters
    ----------
    measure : Measure
    counts : ndarray, shape (causes, bins)

    Returns
    -------
    ndarray, shape (causes, bins)
        Each row adds up to one.
    """
    if measure.about is not None:
        counts = _pooled(counts, list(Cause).index(measure.about))
    usual = counts.sum(axis=0) + 1.0
    ruled = rules_of(measure) * usual
    ruled /= ruled.sum(axis=1, keepdims=True)
    return (counts + RULE_WORTH * ruled) / (counts.sum(axis=1, keepdims=True) + RULE_WORTH)


def _pooled(counts: Floats, row: int) -> Floats:
    """Put together the counts of all causes but one, each of them getting their mean."""
    others = np.arange(len(counts)) != row
    pooled = counts.copy()
    pooled[others] = counts[others].mean(axis=0)
    return pooled


def log_ratios(measure: Measure, counts: Floats) -> Floats:
    """Give logs of likelihood ratios at power one, shape (causes, bins).

    Where the counts and a firm trade rule point opposite ways nothing is said: a simulator has its own
    habits, and so has the trade.
    """
    share = shares(measure, counts)
    ratio, rule = np.log(share / share.mean(axis=0)), np.log(rules_of(measure))
    return np.where((np.abs(rule) > np.log(FIRM)) & (rule * ratio < 0.0), 0.0, ratio)


def weights_of(measure: Measure, counts: Floats, power: float) -> Floats:
    """Give logs of likelihood ratios, shape (causes, bins), raised to a power and capped at `MOST` to one."""
    weights = np.clip(power * log_ratios(measure, counts), -np.log(MOST), np.log(MOST))
    return np.where(np.abs(weights) < np.log(LEAST), 0.0, weights)


def build(content: Mapping[str, Any]) -> Strengths:
    """Make strengths from learned counts; a measurement without any speaks by the trade's rules alone.

    Parameters
    ----------
    content : mapping
        As `strengths.json` holds it: "doubt", and by measurement "power" and "counts" (by cause, a list with
        one number a bin).

    Returns
    -------
    Strengths

    Raises
    ------
    ValueError
        If counts were learned on other bins than the measurement has now.
    """
    found = {}
    for measure in MEASURES:
        learned = content["measures"].get(measure.name, {"power": USUAL_POWER, "counts": {}})
        counts = np.zeros((len(Cause), measure.bins))
        for row, cause in enumerate(Cause):
            given = learned["counts"].get(cause.value, [0] * measure.bins)
            if len(given) != measure.bins:
                raise ValueError(
                    f"{FILE}: {measure.name!r} was learned on {len(given)} bins and has {measure.bins}; "
                    "learn it anew"
                )
            counts[row] = given
        weights = weights_of(measure, counts, float(learned["power"]))
        found[measure.name] = Strength(weights, counts.sum(axis=1).astype(np.int64))
    return Strengths(found, float(content["doubt"]))


@cache
def strengths() -> Strengths:
    """Give the strengths that come with the package."""
    text = resources.files("forensics.episodes.causes").joinpath(FILE).read_text(encoding="utf-8")
    return build(json.loads(text))
