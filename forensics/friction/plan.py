"""Friction to plan the next well with: the factors of several runs, pooled by section and mud."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np

from forensics.friction.assumptions import DEFAULT_FACTOR, KINDS
from forensics.friction.pool import Pool, Prior, Seen, pool
from forensics.friction.result import Calibration, FrictionSection

#: Pooled apart from the axial factors; its prior is that of open hole.
ROTATIONAL = "rotational"

#: One sigma of the mean over all muds about the program's default (trade judgement, from memory).
COMMON_SIGMA = 0.10


@dataclass(frozen=True)
class RunFactors:
    """One run's calibration, with what it is pooled by."""

    case: str
    well: str
    section: str
    mud: str
    calibration: Calibration

    @property
    def group(self) -> str:
        """Runs of one group share hole section and mud."""
        return f"{self.section or 'section not given'}, {self.mud or 'mud not given'}"


@dataclass(frozen=True)
class Plan:
    """Factors of the runs, and what they give for the next well.

    Parameters
    ----------
    runs : tuple of RunFactors
    pools : mapping of str to Pool
        By "cased", "open" and "rotational"; a kind that no run determined is absent.
    untold : tuple of str
        Factors left out of the pool, in sentences.
    """

    runs: tuple[RunFactors, ...]
    pools: dict[str, Pool]
    untold: tuple[str, ...]


def plan(runs: Sequence[RunFactors]) -> Plan:
    """Pool the factors of several runs.

    Parameters
    ----------
    runs : sequence of RunFactors

    Returns
    -------
    Plan
        Only factors that a run's own readings determined are pooled; the others are named.
    """
    pools: dict[str, Pool] = {}
    untold: list[str] = []
    for kind in (*KINDS, ROTATIONAL):
        seen = []
        for run in runs:
            found = overall(run, kind)
            if found is None:
                untold.append(
                    f"{run.case}: the {kind} factor was not determined and is left out of the pool."
                )
            else:
                seen.append(found)
        if seen:
            centre = DEFAULT_FACTOR.get(kind, DEFAULT_FACTOR["open"])
            pools[kind] = pool(seen, Prior(centre, COMMON_SIGMA))
    return Plan(tuple(runs), pools, tuple(untold))


def overall(run: RunFactors, kind: str) -> Seen | None:
    """One factor of a run for a kind of hole, intervals of open hole averaged by their length.

    Parameters
    ----------
    run : RunFactors
    kind : str
        "cased", "open" or "rotational".

    Returns
    -------
    Seen or None
        None where the run's readings did not determine it.
    """
    if kind == ROTATIONAL:
        factor = run.calibration.rotational
        if factor is None or not factor.determined:
            return None
        return Seen(run.case, run.group, factor.value, factor.low, factor.high)
    sections = [s for s in run.calibration.sections if s.kind == kind and s.factor.determined]
    if not sections or kind_length(sections) <= 0.0:
        return None
    weight = np.array([max(s.bottom - s.top, 1e-9) for s in sections])
    value, low, high = (
        float(np.average([getattr(s.factor, end) for s in sections], weights=weight))
        for end in ("value", "low", "high")
    )
    return Seen(run.case, run.group, value, low, high)


def kind_length(sections: Sequence[FrictionSection]) -> float:
    """Length of hole in sections [m]."""
    return sum(max(s.bottom - s.top, 0.0) for s in sections)
