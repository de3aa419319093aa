"""Block and tackle: limits, twins and refusals."""

from __future__ import annotations

import pytest

from forensics.mechanics import hoisting


def test_free_sheaves_share_the_load_evenly():
    for direction in ("up", "down"):
        assert hoisting.dead_line_to_hookload(1.0, 8, direction) == 8
    assert hoisting.block_efficiency(1.0, 8) == 1


def test_direction_twins():
    # lowering with e is hoisting with 1/e: time runs the other way
    e, lines = 0.97, 12
    down = hoisting.dead_line_to_hookload(e, lines, "down")
    assert down == pytest.approx((1 - e**lines) / (1 - e), rel=1e-12)
    up = hoisting.dead_line_to_hookload(e, lines, "up")
    assert up == pytest.approx(down / e ** (lines - 1), rel=1e-12)


def test_a_turning_dead_line_sheave_adds_one_factor():
    fixed = hoisting.dead_line_to_hookload(0.98, 10, "up")
    assert hoisting.dead_line_to_hookload(0.98, 10, "up", turning=True) == pytest.approx(fixed / 0.98)


def test_line_tensions_add_up_to_the_load():
    e, lines = 0.96, 8
    dead = 1 / hoisting.dead_line_to_hookload(e, lines, "up")
    assert sum(dead / e**k for k in range(lines)) == pytest.approx(1.0)
    assert hoisting.fast_line_factor(e, lines) == pytest.approx(dead / e**lines)


def test_sheaves_narrow_the_apparent_gap():
    # an indicator scaled for still sheaves shows lines over this, times the load
    up, down = (12 / hoisting.dead_line_to_hookload(0.98, 12, way) for way in ("up", "down"))
    assert up < 1 < down


@pytest.mark.parametrize(
    ("efficiency", "lines", "direction", "words"),
    [
        (0.0, 8, "up", "sheave efficiency came as 0"),
        (1.02, 8, "up", "above 0 and at most 1"),
        (0.98, 0, "up", "lines came as 0"),
        (0.98, 8, "still", "direction came as 'still'"),
    ],
)
def test_refusals(efficiency, lines, direction, words):
    with pytest.raises(ValueError, match=words):
        hoisting.dead_line_to_hookload(efficiency, lines, direction)
