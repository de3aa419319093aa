"""The limit of the bit load against closed forms."""

from __future__ import annotations

import math

import numpy as np
import pytest

from forensics.replay.margin import bit_load_limit
from forensics.replay.model import build_model
from tests.replay.test_memory import case_for, rows
from tests.wells import build_well, one_pipe_well


def test_a_straight_steep_hole_hands_down_its_weight_less_drag():
    """Exact: w L (cos I - mu sin I), where the loads stay short of any helix."""
    angle, length = math.radians(30), 300.0
    model = build_model(one_pipe_well(angle, length), case_for(), length)
    samples = rows([0.0, 0.0], [1, 1], bit=np.full(2, length))
    limit = bit_load_limit(model, samples, np.array([True, True]), (0.2, 0.2))
    exact = model.pipe.weight[0] * length * (math.cos(angle) - 0.2 * math.sin(angle))
    assert limit == pytest.approx(exact, rel=1e-4)


def test_helices_lower_the_limit_and_rows_not_asked_for_have_none():
    """A vertical string over a lateral: 2 sqrt(EI w / (mu r)) bounds what a helix lets through."""
    model = build_model(build_well(), case_for(), 3400.0)
    bits = np.array([2000.0, 2700.0, 3400.0])
    samples = rows([0.0] * 3, [1] * 3, bit=bits, step=np.full(3, 60.0))
    limit = bit_load_limit(model, samples, np.array([True, False, True]), (0.25, 0.25))
    assert math.isnan(limit[1])
    assert limit[2] < limit[0]
    pipe, gap = model.pipe, 0.5 * (0.2159 - 0.168)
    bound = 2.0 * math.sqrt(pipe.ei[-1] * pipe.weight[-1] / (0.25 * gap))
    assert limit[0] < bound
