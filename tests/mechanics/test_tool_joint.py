"""Tool joints: finite spans, bending drawn to them, and sag between them, against integration and limits."""

from __future__ import annotations

import math

import numpy as np
import pytest
from scipy import integrate

from forensics.mechanics import tool_joint
from forensics.mechanics.critical import Place

EI = 1.23e6
PLACE = Place(EI, 0.0445, 258.3, math.pi / 2)


@pytest.mark.parametrize("tension", [3e5, -9e4])
def test_bending_factor_is_the_beam_between_joints(tension):
    # EI y'''' = T y'': curvature goes as cosh or cos from the middle; slope at the joint is the hole's, c L
    half, c = 4.8, 1e-3

    def rate(_: float, y: list[float]) -> list[float]:
        return [y[1], y[2], tension / EI * y[1]]

    way = integrate.solve_ivp(rate, (0, half), [0.0, 1.0, 0.0], rtol=1e-10, atol=1e-12, max_step=0.05)
    slope, bend = way.y[0], way.y[1]
    factor = np.abs(bend).max() * c * half / slope[-1] / c
    assert tool_joint.bending_factor(tension, EI, half) == pytest.approx(factor, rel=1e-6)


def test_no_load_no_factor_and_too_much_compression_is_not_judged():
    np.testing.assert_array_equal(tool_joint.bending_factor([0.0, -1e9], EI, 4.8), [1.0, np.nan])


@pytest.mark.parametrize("force", [1e3, 1e5, 3e5])
def test_sag_is_the_beam_column(force):
    # EI y'''' + F y'' = side on a clamped span, by finite differences
    span, side, cells = 9.6, 240.0, 400
    h = span / cells
    inner = cells - 1
    second = (np.eye(inner, k=1) - 2 * np.eye(inner) + np.eye(inner, k=-1)) / h**2
    fourth = second @ second
    fourth[0, 0] += 2 / h**4  # no slope at the clamps: the point beyond mirrors the one within
    fourth[-1, -1] += 2 / h**4
    deflection = np.linalg.solve(EI * fourth + force * second, np.full(inner, side))
    assert tool_joint.sag(force, EI, side, span) == pytest.approx(deflection[cells // 2 - 1], rel=2e-4)


def test_body_of_drill_pipe_does_not_touch_between_joints():
    # stand-off 20 mm; sag of millimetres, up to loads far past buckling
    assert tool_joint.sag(0.0, EI, 240.0, 9.6) == pytest.approx(240 * 9.6**4 / (384 * EI))
    assert tool_joint.sag(2.4e5, EI, 240.0, 9.6) < 0.5 * 0.0206
    assert tool_joint.sag(4 * math.pi**2 * EI / 9.6**2, EI, 240.0, 9.6) == math.inf
