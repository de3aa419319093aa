"""How often intervals hold the truth: `python tests/benchmarks/bench_coverage.py [wells]`.

Calibrates random wells of `soft_wells.py` and counts, for each kind of number, how often its interval
holds what was planted, by whether it counts as determined. Takes about a second a well. Nothing here passes
or fails; a small sample stands in the tests.
"""

from __future__ import annotations

import sys
from collections.abc import Iterator
from pathlib import Path

sys.path.insert(0, str(Path(__file__).parents[1]))

import numpy as np

from forensics.case import CriteriaSettings
from forensics.friction.calibrate import calibrate
from forensics.friction.result import Calibration
from forensics.mechanics.offbottom import OffBottomModel
from soft_wells import Sample, sample

Row = tuple[str, bool, float, float, float, float]


def solve(made: Sample) -> Calibration:
    """Calibrate one sample on the program's own model of its well."""
    model = OffBottomModel(made.well, made.depth + 5.0, CriteriaSettings())
    return calibrate(made.readings, made.well, made.case, model, made.rig)


def rows(made: Sample, found: Calibration) -> Iterator[Row]:
    """Name, determined, truth, value, low and high of every number whose truth is known."""
    truth = made.truth
    for k, section in enumerate(found.sections):  # a hole cut in vain has the same truth in every part
        yield f"{section.kind} factor", *_row(truth.factors[min(k, len(truth.factors) - 1)], section.factor)
    if made.case.rig.block_weight is None:
        yield "block weight", *_row(truth.block, found.block_weight)
    else:
        yield "hookload bias", *_row(truth.bias, found.hookload_bias)
    if found.rotational is not None:
        yield "rotational factor", *_row(truth.rotational, found.rotational)
    if found.torque_loss is not None:
        yield "torque lost", *_row(truth.loss, found.torque_loss)


def _row(truth, estimate):
    return bool(estimate.determined), truth, estimate.value, estimate.low, estimate.high


def main() -> None:
    """Run and print."""
    wells, first = (int(sys.argv[k]) if len(sys.argv) > k else default for k, default in ((1, 150), (2, 0)))
    told: list[tuple[str, Row]] = []
    for seed in range(first, first + wells):
        made = sample(seed)
        told += [(made.plan, row) for row in rows(made, solve(made))]
    names = sorted({row[0] for _, row in told})
    print(f"{'90 % intervals':18s} {'held, determined':>25s} {'held, not':>25s}  rms error, mean sigma, bias")
    for name in (*names, "all"):
        some = [r for _, r in told if name in (r[0], "all")]
        line = f"{name:18s} {_share(some, True)} {_share(some, False)}"
        off = np.array([r[3] - r[2] for r in some if r[1]])
        if name != "all" and len(off):
            sigma = np.mean([(r[5] - r[4]) / 3.29 for r in some if r[1]])
            line += f"   {np.sqrt(np.mean(off**2)):.4g}, {sigma:.4g}, {np.mean(off):.3g}"
        print(line)
    for plan in sorted({p for p, _ in told}):
        print(f"factors, {plan:9s} {_share([r for p, r in told if p == plan and 'factor' in r[0]], True)}")


def _share(some: list[Row], determined: bool) -> str:
    chosen = [r for r in some if r[1] == determined]
    held = sum(r[4] <= r[2] <= r[5] for r in chosen)
    return f"{held:5d} of {len(chosen):5d} ({100.0 * held / max(len(chosen), 1):5.1f} %)"


if __name__ == "__main__":
    main()
