"""Learns how strongly each measurement speaks for each cause, from simulated incidents.

Counts of bins by cause are kept as they are. Measurements lean on the same readings, so their ratios can't
simply be multiplied: each is raised to a power of its own between 0 and 1. The powers, and the doubt that
is shared among all causes, are those with which the incidents left out of the counts are foretold best
(least log score, five folds), with a mild pull of the powers towards a common middle.
"""

from __future__ import annotations

import json
from dataclasses import dataclass
from typing import Any

import numpy as np
from numpy.typing import NDArray
from scipy.optimize import minimize

from forensics.episodes.causes.measures import MEASURES
from forensics.episodes.causes.names import Cause
from forensics.episodes.causes.strengths import USUAL_POWER, log_ratios

Floats = NDArray[np.float64]
Ints = NDArray[np.int64]

CAUSES = tuple(cause.value for cause in Cause)
FOLDS = 5

#: Pull of the powers towards the middle one, in nats per incident at a distance of one.
PULL = 0.04
LEAST_DOUBT = 0.02


@dataclass(frozen=True)
class Table:
    """Incidents with an episode: `bins` has shape (incidents, measurements), -1 where nothing was read."""

    bins: Ints
    cause: Ints


def table_of(rows: list[dict[str, str]]) -> Table:
    """Sort measured values into bins; incidents without an episode or a cause are left out."""
    used = [row for row in rows if row["episode"] and row["cause"] in CAUSES]
    bins = np.full((len(used), len(MEASURES)), -1)
    for k, row in enumerate(used):
        for j, measure in enumerate(MEASURES):
            text = row.get(measure.name) or ""
            if text:
                bins[k, j] = measure.bin_of(float(text))
    return Table(bins, np.array([CAUSES.index(row["cause"]) for row in used]))


def counts_of(table: Table, rows: Ints) -> list[Floats]:
    """Count by measurement, each of shape (causes, bins)."""
    found = []
    for j, measure in enumerate(MEASURES):
        count = np.zeros((len(CAUSES), measure.bins))
        known = rows[table.bins[rows, j] >= 0]
        np.add.at(count, (table.cause[known], table.bins[known, j]), 1.0)
        found.append(count)
    return found


def ratios(table: Table, rows: Ints, counts: list[Floats]) -> Floats:
    """Log likelihood ratios at power one, shape (rows, measurements, causes)."""
    out = np.zeros((len(rows), len(MEASURES), len(CAUSES)))
    for j, measure in enumerate(MEASURES):
        log = log_ratios(measure, counts[j])
        known = table.bins[rows, j] >= 0
        out[known, j] = log[:, table.bins[rows[known], j]].T
    return out


def chances(log_ratios: Floats, powers: Floats, doubt: float) -> Floats:
    """Probabilities, shape (rows, causes)."""
    scores = np.einsum("rmc,m->rc", log_ratios, powers)
    scores = np.exp(scores - scores.max(axis=1, keepdims=True))
    return (1.0 - doubt) * scores / scores.sum(axis=1, keepdims=True) + doubt / len(CAUSES)


def held_out(table: Table) -> Floats:
    """Ratios of every incident by the counts of the other folds."""
    n = len(table.cause)
    fold = np.arange(n) % FOLDS
    out = np.zeros((n, len(MEASURES), len(CAUSES)))
    for k in range(FOLDS):
        here, rest = np.flatnonzero(fold == k), np.flatnonzero(fold != k)
        out[here] = ratios(table, here, counts_of(table, rest))
    return out


def fit_powers(log_ratios: Floats, cause: Ints, doubt: float) -> Floats:
    """Powers with the least log score."""
    n = len(cause)
    weight = 1.0 / np.bincount(cause, minlength=len(CAUSES))[cause]
    weight /= weight.sum()

    def loss(powers: Floats) -> tuple[float, Floats]:
        scores = np.einsum("rmc,m->rc", log_ratios, powers)
        top = scores.max(axis=1, keepdims=True)
        soft = np.exp(scores - top)
        soft /= soft.sum(axis=1, keepdims=True)
        own = soft[np.arange(n), cause]
        mixed = (1.0 - doubt) * own + doubt / len(CAUSES)
        lead = log_ratios[np.arange(n), :, cause] - np.einsum("rmc,rc->rm", log_ratios, soft)
        slope = -(weight * (1.0 - doubt) * own / mixed) @ lead
        off = powers - USUAL_POWER / 2.0
        return float(-weight @ np.log(mixed)) + PULL * float(off @ off), slope + 2.0 * PULL * off

    start = np.full(len(MEASURES), USUAL_POWER / 2.0)
    return minimize(loss, start, jac=True, bounds=[(0.0, 1.0)] * len(MEASURES)).x


def learn(table: Table) -> dict[str, Any]:
    """Learn counts, powers and doubt, as `strengths.json` holds them."""
    log_ratios = held_out(table)
    powers = fit_powers(log_ratios, table.cause, LEAST_DOUBT)
    counts = counts_of(table, np.arange(len(table.cause)))
    return {
        "format": 1,
        "doubt": LEAST_DOUBT,
        "measures": {
            measure.name: {
                "power": round(float(power), 3),
                "counts": {c: [int(x) for x in count[k]] for k, c in enumerate(CAUSES) if count[k].any()},
            }
            for measure, power, count in zip(MEASURES, powers, counts, strict=True)
        },
    }


def as_text(content: dict[str, Any]) -> str:
    """Write strengths as JSON with one cause a line."""
    text = json.dumps(content, indent=1)
    out, depth = [], 0
    for line in text.splitlines():
        stripped = line.strip()
        if depth:
            out[-1] += stripped if stripped in ("]", "],") else f" {stripped}".replace("[ ", "[")
            depth -= stripped in ("]", "],")
        else:
            out.append(line)
            depth += stripped.endswith("[")
    return "\n".join(line.replace("[ ", "[") for line in out) + "\n"
