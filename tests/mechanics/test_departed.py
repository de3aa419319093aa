"""A well that differs a little: exact scalings of thresholds; elsewhere bound, the well built anew."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest

from forensics.mechanics import departed as module
from forensics.mechanics.departed import Departure, departed
from forensics.mechanics.kernels_judge import CUBE, GIVE, SQUARE
from forensics.mechanics.offbottom import OffBottomModel
from forensics.well.trajectory import build_trajectory
from tests.wells import build_well

BITS = np.array([700.0, 1600.0, 2500.0, 3300.0])


@pytest.fixture
def fine(monkeypatch):
    monkeypatch.setattr(module, "COARSE", 1)
    return OffBottomModel(build_well(turn=0.3), 3400.0)


def test_no_departure_is_the_well_itself(fine):
    same = departed(fine, Departure(fine.well.likely.mean))
    assert np.array_equal(same.criteria.at, fine.criteria.at)
    for kind in ("pick_up", "rotating", "slack_off"):
        found, whole = (one.string_weight(kind, BITS, 0.2, 0.3) for one in (same, fine))
        assert np.array_equal(found, whole)


def test_another_path_is_as_if_built_from_it(fine):
    """Slow twin: the whole model from a well surveyed that way."""
    old = fine.well.trajectory
    other = build_trajectory(old.md, old.inclination * 0.98, old.azimuth + 0.01 * np.arange(len(old.md)))
    anew = OffBottomModel(replace(fine.well, trajectory=other), 3400.0)
    quick = departed(fine, Departure(other))
    assert np.allclose(quick.criteria.at, anew.criteria.at, rtol=1e-12)
    assert quick.string_weight("pick_up", BITS, 0.2, 0.3) == pytest.approx(
        anew.string_weight("pick_up", BITS, 0.2, 0.3)
    )


def test_thresholds_follow_clearance_and_stiffness(fine):
    """Dawson and Paslay 1984: the local load goes with the root of stiffness over clearance."""
    pipe, depth = int(fine.criteria.kind[-1]), 4000
    gap = 0.5 * (fine.hole.diameter[depth] - fine.pipe.clearance_od[-1])
    wide = departed(fine, Departure(fine.well.likely.mean, opened=1.02, joints=0.002, stiffness=1.05))
    more = gap + 0.5 * (0.02 * fine.hole.diameter[depth] + 0.002)
    was, now = fine.criteria.at[pipe, depth], wide.criteria.at[pipe, depth]
    assert fine.hole.open_hole[depth]
    # the wave the contact is averaged over changes a little with the stiffness
    assert (now[SQUARE] / was[SQUARE]) ** 0.5 == pytest.approx(1.05 * gap / more, rel=2e-3)
    assert now[GIVE] / was[GIVE] == pytest.approx(more / gap / 1.05)
    assert now[CUBE] == pytest.approx(was[CUBE] * 1.05 ** (1 / 3), rel=1e-9, abs=1e-9)


def test_joints_wear_no_further_than_the_body(fine):
    worn = departed(fine, Departure(fine.well.likely.mean, joints=0.5))
    body = np.array([part.od for part in fine.well.string.components])[fine.pipe.component]
    assert worn.pipe.clearance_od == pytest.approx(body)


def test_fewer_looks_at_the_path_change_little():
    model = OffBottomModel(build_well(turn=0.3), 3400.0)
    coarse = departed(model, Departure(model.well.likely.mean))
    for kind in ("pick_up", "rotating", "slack_off"):
        whole = model.string_weight(kind, BITS, 0.2, 0.3)
        assert coarse.string_weight(kind, BITS, 0.2, 0.3) == pytest.approx(whole, rel=5e-3)
    assert coarse.hole.coarse == module.COARSE > 1


def test_sections_stay(fine):
    cut = fine.divided((2500.0,))
    other = departed(cut, Departure(fine.well.likely.mean))
    assert np.array_equal(
        other.weigh_readings(["pick_up"], [3300.0], (0.2, 0.3, 0.1)).weight,
        cut.weigh_readings(["pick_up"], [3300.0], (0.2, 0.3, 0.1)).weight,
    )
