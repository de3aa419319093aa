"""Closed-form lockup against a march, and its limits."""

from __future__ import annotations

import math
from dataclasses import replace

import numpy as np
import pytest

from forensics.mechanics import lockup
from forensics.mechanics.lockup import HelicalRun
from naive_mechanics import march_helical

FLAT = HelicalRun(1.2288e6, 0.0445, 258.3, 0.3)


@pytest.mark.parametrize("inclination", [0.0, 45.0, 73.3, 80.0, 90.0])
@pytest.mark.parametrize("bit_load", [0.0, 2e4, 1.5e5, 4e5])
def test_closed_form_is_the_march(inclination, bit_load):
    run = replace(FLAT, inclination=math.radians(inclination))
    far = min(0.8 * lockup.lockup_distance(bit_load, run), 900.0)
    slow = march_helical(far, bit_load, (run.growth, run.helical_growth))
    assert float(lockup.load_along(far, bit_load, run)) == pytest.approx(slow, rel=1e-6, abs=1.0)


def test_load_is_infinite_from_lockup_on():
    distance = lockup.lockup_distance(5e4, FLAT)
    load = lockup.load_along([0.0, 0.999 * distance, distance, 2 * distance], 5e4, FLAT)
    assert load[0] == pytest.approx(5e4)
    assert 1e6 < load[1] < np.inf
    assert np.all(np.isinf(load[2:]))


def test_limit_and_distance_are_inverse():
    for inclination in (0.0, 60.0, 90.0):
        run = replace(FLAT, inclination=math.radians(inclination))
        limit = lockup.bit_load_limit(1500.0, run)
        assert lockup.lockup_distance(limit, run) == pytest.approx(1500.0, rel=1e-9)


def test_long_vertical_run_has_its_own_limit():
    # Mitchell 1986: 2 sqrt(EI w / (mu r)), however much is slacked off
    run = replace(FLAT, inclination=0.0)
    known = 2 * math.sqrt(1.2288e6 * 258.3 / (0.3 * 0.0445))
    assert lockup.bit_load_limit(math.inf, run) == pytest.approx(known, rel=1e-12)
    assert lockup.lockup_distance(0.99 * known, run) == math.inf
    assert lockup.lockup_distance(1.01 * known, run) < math.inf
    assert lockup.load_along(1000.0, known, run) == pytest.approx(known)


def test_run_that_locks_up_under_its_own_drag_gives_the_bit_nothing():
    assert lockup.bit_load_limit(2 * lockup.lockup_distance(0.0, FLAT), FLAT) == 0.0


def test_above_the_neutral_point_the_pipe_hangs():
    run = replace(FLAT, inclination=0.3)
    load = lockup.load_along([0.0, 1000.0, 1100.0], 1e4, run)
    assert load[1] < 0
    assert load[2] - load[1] == pytest.approx(100 * run.growth)


def test_sliding_angle_is_where_growth_changes_sign():
    angle = lockup.sliding_angle(0.3)
    assert replace(FLAT, inclination=angle - 1e-3).growth < 0 < replace(FLAT, inclination=angle + 1e-3).growth
    assert lockup.sliding_angle(0.0) == pytest.approx(math.pi / 2)


def test_weightless_run_has_the_reciprocal_form():
    run = replace(FLAT, weight=0.0)
    assert lockup.lockup_distance(0.0, run) == math.inf
    assert lockup.load_along(100.0, 1e5, run) == pytest.approx(1 / (1 / 1e5 - run.helical_growth * 100))
    assert lockup.bit_load_limit(100.0, run) == pytest.approx(1 / (run.helical_growth * 100))
