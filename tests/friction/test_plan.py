"""What several runs give for the next well's plan."""

import numpy as np
import pytest

from forensics.estimate import Estimate
from forensics.friction.plan import RunFactors, overall, plan
from forensics.friction.result import Calibration, FrictionSection


def estimate(value, half, determined=True):
    return Estimate(value, value - half, value + half, "steady weights", determined, 9)


def run(case, *sections, rotational=None, mud="oil-base mud"):
    block = Estimate(3e5, 3e5, 3e5, "case file")
    found = Calibration(
        sections=tuple(sections), block_weight=block, hookload_bias=block, pipe_above_rotary=block,
        rotational=rotational, readings=(), residuals=np.zeros(0), residual_rms=0.0, draws=np.zeros((0, 3)),
    )  # fmt: skip
    return RunFactors(case, "Curlew 1", "8.5 in", mud, found)


def section(kind, top, bottom, value, half=0.02, determined=True):
    return FrictionSection(kind, top, bottom, estimate(value, half, determined))


def test_intervals_of_open_hole_count_by_their_length():
    found = overall(run("a", section("open", 2000, 2300, 0.30), section("open", 2300, 3200, 0.20)), "open")
    assert found.value == pytest.approx(0.25 * 0.30 + 0.75 * 0.20)
    assert found.high - found.low == pytest.approx(0.04)


def test_what_was_not_determined_is_left_out_and_said():
    runs = [
        run("a", section("cased", 0, 2000, 0.2), section("open", 2000, 3000, 0.25)),
        run("b", section("cased", 0, 2000, 0.2, determined=False), section("open", 2000, 3000, 0.27)),
    ]
    told = plan(runs)
    assert [r.name for r in told.pools["cased"].runs] == ["a"]
    assert [r.name for r in told.pools["open"].runs] == ["a", "b"]
    assert "rotational" not in told.pools
    assert sum("b: the cased factor" in words for words in told.untold) == 1


def test_runs_of_another_mud_are_another_group():
    runs = [
        run(f"{m}{k}", section("open", 0, 9, v), mud=m)
        for m, v in (("oil", 0.2), ("water", 0.35))
        for k in "ab"
    ]
    groups = plan(runs).pools["open"].groups
    assert [g.group for g in groups] == ["8.5 in, oil", "8.5 in, water"]
    assert groups[0].mean < groups[1].mean


def test_the_rotational_factor_is_pooled_apart():
    told = plan([run("a", section("open", 0, 9, 0.25), rotational=estimate(0.21, 0.02))])
    assert told.pools["rotational"].runs[0].value == pytest.approx(0.21, abs=0.02)
