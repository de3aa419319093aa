"""Judges the package's causes on measured incidents: right, surely wrong, reliability, and simpler rules."""

from __future__ import annotations

import itertools
from collections import Counter

import numpy as np
from numpy.typing import NDArray
from scipy.stats import beta

from forensics.episodes.causes.measures import MEASURES
from forensics.episodes.causes.strengths import build, strengths
from forensics.episodes.causes.weigh import rank
from tests.benchmarks import causes_learn as cl

Floats = NDArray[np.float64]

STATED = 0.8


def ranked(rows: list[dict[str, str]], known=None) -> tuple[Floats, NDArray[np.int64]]:
    """Probabilities by the package's own weighing, shape (incidents, causes), and the true cause."""
    used = [row for row in rows if row["episode"] and row["cause"] in cl.CAUSES]
    out = np.empty((len(used), len(cl.CAUSES)))
    for k, row in enumerate(used):
        values = {m.name: float(row[m.name]) for m in MEASURES if row.get(m.name)}
        chance = {view.cause: view.probability for view in rank(values, known=known)}
        out[k] = [chance[cause] for cause in cl.CAUSES]
    return out, np.array([cl.CAUSES.index(row["cause"]) for row in used])


def scores(chance: Floats, cause: NDArray[np.int64]) -> dict[str, float]:
    """Log and Brier score, share right, and shares stated and stated wrong."""
    n = len(cause)
    own = chance[np.arange(n), cause]
    top = chance.argmax(axis=1)
    stated = chance.max(axis=1) > STATED
    wrong = int((stated & (top != cause)).sum())
    return {
        "log": float(-np.log(own).mean()),
        "brier": float((chance**2).sum(axis=1).mean() + (1.0 - 2.0 * own).mean()),
        "right": float((top == cause).mean()),
        "stated": float(stated.mean()),
        "wrong": wrong / n,
        "wrong_most": float(beta.ppf(0.95, wrong + 1, n - wrong)),
    }


def reliability(chance: Floats, cause: NDArray[np.int64], edges=(0.0, 0.3, 0.5, 0.65, 0.8, 0.9, 1.01)):
    """Leading probability against share right: (lower edge, upper edge, count, mean, right) by bin."""
    top, said = chance.argmax(axis=1), chance.max(axis=1)
    found = []
    for low, high in itertools.pairwise(edges):
        here = (said >= low) & (said < high)
        if here.any():
            found.append((low, high, int(here.sum()), said[here].mean(), (top == cause)[here].mean()))
    return found


def simpler(rows: list[dict[str, str]]) -> dict[str, tuple[Floats, NDArray[np.int64]]]:
    """Give what simpler rules say: all causes alike, the best measurement, the trade's rules alone."""
    full, cause = ranked(rows)
    found = {"all causes alike": (np.full_like(full, 1.0 / len(cl.CAUSES)), cause)}
    table, known = cl.table_of(rows), strengths()
    best = None
    for j, measure in enumerate(MEASURES):
        weights = known.by_measure[measure.name].weights
        said = np.zeros_like(full)
        seen = table.bins[:, j] >= 0
        said[seen] = weights[:, table.bins[seen, j]].T
        chance = np.exp(said) / np.exp(said).sum(axis=1, keepdims=True)
        score = scores(chance, cause)["log"]
        if best is None or score < best[0]:
            best = (score, measure.name, chance)
    found[f"best single measurement ({best[1]})"] = (best[2], cause)
    found["trade rules alone"] = ranked(rows, build({"doubt": known.doubt, "measures": {}}))
    return found


def report(rows: list[dict[str, str]]) -> str:
    """Put everything in words."""
    lines = _detection(rows)
    chance, cause = ranked(rows)
    own = scores(chance, cause)
    stated = (
        f"stated (over {STATED:.0%}) {own['stated']:.1%}; stated and wrong {own['wrong']:.2%}, at most "
        f"{own['wrong_most']:.2%} (Clopper-Pearson, 95 %)"
    )
    lines += ["", f"{len(cause)} incidents with an episode: leading cause right {own['right']:.1%}", stated]
    lines.append(f"log score {own['log']:.3f}, Brier {own['brier']:.3f}")
    lines.append(f"leading cause is one of those present (some hold two): {_present(rows, chance):.1%}")
    for name, (other, truth) in simpler(rows).items():
        s = scores(other, truth)
        lines.append(
            f"  {name}: log {s['log']:.3f}, Brier {s['brier']:.3f}, right {s['right']:.1%}, stated wrong "
            f"{s['wrong']:.2%}"
        )
    lines += ["", "said      count   mean  right"]
    for low, high, n, mean, right in reliability(chance, cause):
        lines.append(f"{low:.2f}-{min(high, 1.0):.2f} {n:6d} {mean:7.2f} {right:6.2f}")
    lines += ["", "true cause: right; taken for"]
    top = chance.argmax(axis=1)
    for k, name in enumerate(cl.CAUSES):
        mine = cause == k
        if mine.any():
            mistaken = Counter(cl.CAUSES[t] for t in top[mine] if t != k).most_common(4)
            lines.append(
                f"  {name:32s} {(top[mine] == k).mean():5.0%} of {mine.sum():4d}; "
                + ", ".join(f"{c} {n}" for c, n in mistaken)
            )
    return "\n".join(lines)


def _present(rows: list[dict[str, str]], chance: Floats) -> float:
    """Share of incidents whose leading cause is any of the causes planted."""
    used = [row for row in rows if row["episode"] and row["cause"] in cl.CAUSES]
    leading = [cl.CAUSES[top] for top in chance.argmax(axis=1)]
    held = [{row["cause"], *row["present"].split(";")} for row in used]
    return float(np.mean([cause in causes for cause, causes in zip(leading, held, strict=True)]))


def _detection(rows: list[dict[str, str]]) -> list[str]:
    """How many incidents gave an episode, by cause; false episodes of quiet runs."""
    refused = sum(bool(row["error"]) for row in rows)
    lines = [f"{len(rows)} incidents, {refused} refused", "found (an episode overlaps):"]
    for name in cl.CAUSES:
        mine = [r for r in rows if r["cause"] == name and not r["error"]]
        if mine:
            hit = [r for r in mine if r["episode"]]
            kinds = Counter(r["kind"] for r in hit)
            lines.append(f"  {name:32s} {len(hit):4d} of {len(mine):4d}  {dict(kinds)}")
    quiet = [r for r in rows if r["cause"] not in cl.CAUSES and not r["error"]]
    if quiet:
        hours = sum(float(r["hours"] or 0) for r in quiet)
        false = sum(int(r["others"] or 0) + int(r["alone"] or 0) for r in quiet)
        bad = sum(bool(int(r["others"] or 0) + int(r["alone"] or 0)) for r in quiet)
        lines.append(f"quiet runs: {bad} of {len(quiet)} with an episode; {false} in {hours:.0f} h")
    return lines
