"""The compiled march against plain small steps, exact balances and limits."""

from __future__ import annotations

import math
from dataclasses import replace

import numpy as np
import pytest

from forensics.mechanics.grid import hole_grid, pipe_grid
from forensics.mechanics.offbottom import OffBottomModel
from forensics.well.likely import STATION_SIGMA
from forensics.well.trajectory import build_trajectory
from tests.marches import tension_from_bit
from tests.naive_string import tension_at_rotary
from tests.wells import build_well, one_pipe_well


@pytest.mark.parametrize("sigma", [-1.0, 0.0, 1.0])
@pytest.mark.parametrize(("bit", "load"), [(800.0, 0.0), (1700.0, 40e3), (3300.0, 0.0)])
def test_agrees_with_plain_small_steps(sigma, bit, load):
    well = build_well(turn=0.3)
    md, tension = tension_from_bit(OffBottomModel(well, 3400.0), 0.27, bit, sigma, -load)
    slow = tension_at_rotary(well, 0.27, bit, sigma, -load)
    assert md[0] == bit
    assert md[-1] == pytest.approx(0.0, abs=1e-9)
    assert tension[-1] == pytest.approx(slow, rel=2e-3, abs=300.0)


def test_free_of_friction_the_string_weighs_what_hangs():
    well = build_well()
    model = OffBottomModel(well, 3400.0)
    bits = np.array([500.0, 1500.0, 3333.3])
    hanging = well.rotating_weight(bits)
    assert np.allclose(model.string_weight("rotating", bits, 0.3, 0.3), hanging, rtol=2e-3)


def test_straight_hole_closed_form():
    """W L (cos I +- mu sin I): exact, equilibrium of a straight string."""
    inclination = math.radians(55)
    well = one_pipe_well(inclination, 2000.0)
    model = OffBottomModel(well, 2000.0)
    weight = model.pipe.weight[0] * 2000.0
    for kind, sign in (("pick_up", 1.0), ("slack_off", -1.0)):
        exact = weight * (math.cos(inclination) + sign * 0.3 * math.sin(inclination))
        assert model.string_weight(kind, 2000.0, 0.3, 0.3)[0] == pytest.approx(exact, rel=1e-6)


def test_torque_of_a_horizontal_string_is_mu_w_l_r():
    """Exact: contact is the weight, everywhere."""
    model = OffBottomModel(one_pipe_well(math.pi / 2, 1500.0), 1500.0)
    exact = 0.22 * model.pipe.weight[0] * 1500.0 * 0.084  # half the joints' diameter
    assert model.torque(1500.0, 0.22)[0] == pytest.approx(exact, rel=1e-6)


@pytest.mark.parametrize("azimuth", [0.0, 1.3, 3.0, 5.9])
def test_azimuth_of_a_plane_well_does_not_matter(azimuth):
    bits = np.array([1700.0, 3300.0])
    one = OffBottomModel(build_well(azimuth), 3400.0).string_weight("pick_up", bits, 0.2, 0.3)
    other = OffBottomModel(build_well(0.0), 3400.0).string_weight("pick_up", bits, 0.2, 0.3)
    assert np.allclose(one, other, rtol=1e-9)


def test_what_stands_above_the_rotary_is_the_piece_of_string_that_follows():
    """In air and full of mud, component by component; counted by hand."""
    model = OffBottomModel(build_well(), 3400.0, block_zero=1.5)
    parts = model.well.string.components
    hanging = [part.weight + 1200.0 * 9.80665 * part.inner_area for part in parts]
    # the bit at 30 m: 6.5 m of collar left below 36.5 m, then heavy pipe
    exact = 6.5 * hanging[2] + 21.5 * hanging[3]
    assert model.above_rotary(29.5, 30.0)[0] == pytest.approx(exact, rel=1e-9)
    assert model.above_rotary([1.5, np.nan], [500.0, 500.0]).tolist() == [0.0, 0.0]
    assert model.above_rotary(11.5, 2000.0)[0] == pytest.approx(10.0 * hanging[-1], rel=1e-9)


def test_drag_grows_with_friction_and_rotation_takes_it_away():
    model = OffBottomModel(build_well(), 3400.0)
    factors = np.linspace(0.0, 0.5, 11)
    up = [model.string_weight("pick_up", 3300.0, f, f)[0] for f in factors]
    down = [model.string_weight("slack_off", 3300.0, f, f)[0] for f in factors]
    turning = model.string_weight("rotating", 3300.0, 0.5, 0.5)[0]
    assert np.all(np.diff(up) > 0)
    assert np.all(np.diff(down) < 0)
    assert down[1] < turning < up[1]


def test_component_weights_survive_the_cut_into_stations():
    well = build_well()
    pipe = pipe_grid(well, 3400.0)
    below = pipe.x <= 121.5
    total = float(np.sum((pipe.weight * np.diff(pipe.x))[: int(below.sum()) - 1]))
    buoyed = well.string.buoyed(1200.0)[:-1]
    exact = sum(w * c.length for w, c in zip(buoyed, well.string.components[:-1], strict=True))
    assert total == pytest.approx(exact, rel=1e-3)


@pytest.mark.parametrize("kind", ["pick_up", "slack_off", "rotating"])
def test_strings_side_by_side_weigh_what_each_weighs_alone(kind):
    """To rounding of the largest load, away from lockup, where any rounding grows without bound."""
    model = OffBottomModel(build_well(turn=0.3), 3400.0)
    bits = np.array([300.0, 1234.5, 2000.0, 3333.3])
    cased, open_hole = (f.ravel() for f in np.meshgrid(np.linspace(0, 0.4, 9), np.linspace(0, 0.5, 11)))
    together = model.string_weights(kind, bits, cased, open_hole)
    alone = np.array([model.string_weight(kind, bits, c, o) for c, o in zip(cased, open_hole, strict=True)])
    sound = alone > -2e6
    assert together.shape == (99, 4)
    assert np.allclose(together[sound], alone[sound], rtol=0.0, atol=1e-12 * np.abs(alone[sound]).max())
    assert not np.any(together[~sound] > -1e6)


def test_a_survey_that_scatters_does_not_double_the_drag():
    """A straight hole at two degrees, stations off by a twentieth: the drag of the straight hole."""
    md = np.arange(0.0, 2401.0, 30.0)
    rng = np.random.default_rng(5)
    straight = np.full(len(md), math.radians(2.0))
    noisy = straight + np.radians(0.05) * rng.normal(size=len(md))
    bearing = np.radians(0.05) / math.radians(2.0) * rng.normal(size=len(md))
    model = OffBottomModel(build_well(), 2400.0)
    weights = []
    for inclination, azimuth in ((straight, np.zeros(len(md))), (noisy, bearing)):
        well = replace(model.well, trajectory=build_trajectory(md, inclination, azimuth))
        well = replace(well, survey_accuracy=STATION_SIGMA)
        surveyed = OffBottomModel(well, 2400.0)
        up, still = (surveyed.string_weight(kind, 2400.0, 0.3, 0.3)[0] for kind in ("pick_up", "rotating"))
        weights.append(up - still)
    assert weights[1] == pytest.approx(weights[0], rel=0.35)


def test_real_curvature_is_kept_whole():
    well = build_well()
    hole = hole_grid(well, 3400.0)
    built = 90.0 / 31 / 30.0 * math.pi / 180
    middle = int(1400.0 / hole.step)
    assert math.sqrt(hole.kappa2[middle]) == pytest.approx(built, rel=1e-9)
