"""Weights on a grid against the model they were taken from."""

from __future__ import annotations

from types import SimpleNamespace

import numpy as np
import pytest

from forensics.estimate import Estimate
from forensics.mechanics.offbottom import OffBottomModel
from forensics.replay.tabulated import KINDS, tabulated
from tests.wells import build_well

BITS = np.array([2130.0, 2777.7, 3290.0])


def calibration(cased, opened):
    sections = [
        SimpleNamespace(kind=kind, factor=Estimate(mu, mu, mu, "x"))
        for kind, mu in (("cased", cased), ("open", opened))
    ]
    return SimpleNamespace(sections=sections, weight_scale=Estimate(1.01, 1.0, 1.02, "x"))


def test_it_weighs_as_the_model_does_and_drag_grows_with_friction():
    model = OffBottomModel(build_well(), 3400.0)
    grid = np.linspace(2000.0, 3400.0, 48)
    table = tabulated(model, calibration(0.1, 0.15), grid)
    # a march steps where an element passes into a curve: between depths of the grid such steps are cut off
    for kind in KINDS:
        for times in (1.0, 1.1):
            weight = model.string_weight(kind, BITS, 0.1 * times, 0.15 * times, scale=1.01)
            found = table.string_weight(kind, BITS, 0.1 * times, 0.15 * times, scale=1.01)
            assert found == pytest.approx(weight, rel=5e-3 if times == 1.0 else 2e-2)
    more = tabulated(model, calibration(0.105, 0.1575), grid)
    assert more.drag_over(table, BITS) == pytest.approx(np.full(3, 1.05), abs=0.03)
    assert table.above_rotary(28.0, 3000.0) == model.above_rotary(28.0, 3000.0)
