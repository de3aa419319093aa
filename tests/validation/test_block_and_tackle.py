"""Sheave factors: one section a source.

Well Engineers Notebook, chapter B (seen); API RP 9B, 14th edition, addendum 1 (seen); the hoisting example of
*Applied Drilling Engineering* (a solved copy, seen; table 1.2 and example 1.2 from memory, high); teaching
slides "Hoisting System" (seen); Luke and Juvkam-Wold 1993 (attribution from memory, medium; computed).
K, the tension ratio per sheave, is one over the efficiency.
"""

from __future__ import annotations

import pytest

from forensics.mechanics import hoisting

ROLLER = 1 / 1.04


@pytest.mark.parametrize(
    ("lines", "fast", "dead"),
    [
        pytest.param(2, 1.06, 0.98, id="H-1"),
        pytest.param(4, 1.102, 0.942, id="H-2"),
        pytest.param(6, 1.145, 0.905, id="H-3"),
        pytest.param(8, 1.188, 0.868, id="H-4"),
        pytest.param(10, 1.233, 0.833, id="H-5"),
        pytest.param(12, 1.279, 0.799, id="H-6"),
    ],
)
def test_engineers_notebook(lines, fast, dead):
    assert lines * hoisting.fast_line_factor(ROLLER, lines) == pytest.approx(fast, abs=6e-4)
    assert lines / hoisting.dead_line_to_hookload(ROLLER, lines, "up") == pytest.approx(dead, abs=6e-4)


def test_h_7_h_8_h_9_rope_practice():
    factor = hoisting.fast_line_factor(ROLLER, 10)
    assert factor == pytest.approx(0.123, abs=5e-4)
    # the source multiplies by its rounded factor
    assert 400000 * factor == pytest.approx(49200, rel=3e-3)
    assert 192000 / (400000 * round(factor, 3)) == pytest.approx(3.9, abs=0.05)


@pytest.mark.parametrize(("lines", "published"), [(6, 0.874), (8, 0.841), (10, 0.810)])
def test_h_10_h_11_block_efficiency(lines, published):
    # rounded unit-wise in the table: 1.5e-3; from 12 lines on it does not follow K = 1.04
    assert hoisting.block_efficiency(ROLLER, lines) == pytest.approx(published, rel=1.5e-3)


def test_h_12_fast_line_tension():
    # 300,000 lbf, 8 lines; the source's efficiency is 0.841
    assert pytest.approx(44589.88, rel=1e-5) == 300000 / (8 * 0.841)
    assert 300000 * hoisting.fast_line_factor(ROLLER, 8) == pytest.approx(44589.88, rel=8e-4)


def test_h_14_derrick_load():
    assert hoisting.derrick_load(300000, 0.841, 8) == pytest.approx(382090, rel=2e-6)


def test_h_15_without_friction():
    assert 400000 * hoisting.fast_line_factor(1.0, 10) == pytest.approx(40000)
    assert hoisting.derrick_load(400000, 1.0, 10) == pytest.approx(480000)


def test_h_16_dead_line_sheave_fixed():
    assert hoisting.dead_line_to_hookload(0.98, 10, "up") == pytest.approx(10.970176, abs=6e-7)
    assert hoisting.dead_line_to_hookload(0.98, 10, "down") == pytest.approx(9.146360, abs=6e-7)


def test_h_17_dead_line_sheave_turning():
    assert hoisting.dead_line_to_hookload(0.98, 10, "up", turning=True) == pytest.approx(11.194057, abs=6e-7)
    assert hoisting.dead_line_to_hookload(0.98, 10, "down", turning=True) == pytest.approx(8.963432, abs=6e-7)


def test_h_18_agrees_with_the_notebook():
    assert hoisting.dead_line_to_hookload(ROLLER, 10, "up") == pytest.approx(12.006107, abs=6e-7)
    assert hoisting.dead_line_to_hookload(ROLLER, 10, "up") == pytest.approx(10 / 0.8329, rel=1e-4)


@pytest.mark.parametrize(
    ("lines", "ratio", "up", "down"),
    [
        (8, 1.01, 0.966, 1.035),
        (8, 1.02, 0.932, 1.071),
        (10, 1.01, 0.956, 1.045),
        (10, 1.02, 0.913, 1.091),
        (12, 1.01, 0.946, 1.056),
        (12, 1.02, 0.895, 1.112),
    ],
)
def test_indicated_over_true(lines, ratio, up, down):
    # what an indicator scaled for still sheaves shows: block-and-tackle algebra, after *Pipeline Rules of
    # Thumb Handbook*, p. 6; computed
    assert lines / hoisting.dead_line_to_hookload(1 / ratio, lines, "up") == pytest.approx(up, abs=6e-4)
    assert lines / hoisting.dead_line_to_hookload(1 / ratio, lines, "down") == pytest.approx(down, abs=6e-4)
