"""Minimum curvature: exact arcs, a slow twin, and what a direction between stations must obey."""

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from forensics.errors import TableError
from forensics.well.trajectory import build_trajectory

DEG = np.pi / 180.0


def s_shape():
    md = np.array([0.0, 300.0, 500.0, 800.0, 1200.0, 1500.0, 1900.0, 2300.0])
    inc = np.array([0.0, 0.0, 12.0, 35.0, 55.0, 40.0, 15.0, 2.0]) * DEG
    azi = np.array([0.0, 90.0, 95.0, 110.0, 130.0, 135.0, 170.0, 300.0]) * DEG
    return build_trajectory(md, inc, azi)


def naive_position(path, depth, steps=4000):
    """Walk down the hole in small straight steps, as the slow and obvious twin."""
    edges = np.linspace(0.0, depth, steps + 1)
    middle = (edges[1:] + edges[:-1]) / 2
    return sum(t * depth / steps for t in path.at(middle).tangent)


def test_a_quarter_circle_is_exact():
    radius = 300.0
    md = np.linspace(0.0, radius * np.pi / 2, 4)
    path = build_trajectory(md, np.array([0.0, 30.0, 60.0, 90.0]) * DEG, np.full(4, 40.0 * DEG))
    turn = np.linspace(0.0, np.pi / 2, 19)
    found = path.at(radius * turn)
    np.testing.assert_allclose(found.tvd, radius * np.sin(turn), atol=1e-9)
    np.testing.assert_allclose(found.inclination, turn, atol=1e-12)
    np.testing.assert_allclose(found.azimuth[1:], 40.0 * DEG, atol=1e-12)
    np.testing.assert_allclose(np.linalg.norm(found.curvature[:-1], axis=1), 1 / radius)
    away = path.position(radius * turn)[:, :2] @ [np.cos(40 * DEG), np.sin(40 * DEG)]
    np.testing.assert_allclose(away, radius * (1 - np.cos(turn)), atol=1e-9)


def test_a_flat_turn_follows_its_great_circle():
    # Equal inclinations of 90 deg: the circle lies in the horizontal plane, so azimuth turns evenly.
    path = build_trajectory(
        [0.0, 100.0, 200.0, 290.0], np.array([0, 45, 90, 90]) * DEG, np.array([0, 0, 0, 45]) * DEG
    )
    found = path.at([200.0, 230.0, 260.0])
    np.testing.assert_allclose(found.azimuth / DEG, [0.0, 15.0, 30.0], atol=1e-9)
    np.testing.assert_allclose(found.inclination / DEG, 90.0)
    np.testing.assert_allclose(found.tvd, found.tvd[0])


def test_inclination_sags_between_equal_stations_that_turn():
    # On a great circle the middle of two equal inclinations is steeper or flatter than both, never equal.
    path = build_trajectory(
        [0.0, 100.0, 200.0], np.array([0.0, 40.0, 40.0]) * DEG, np.array([0.0, 0.0, 60.0]) * DEG
    )
    t = path.at([100.0, 150.0, 200.0]).tangent
    middle = t[0] + t[2]
    np.testing.assert_allclose(t[1], middle / np.linalg.norm(middle), atol=1e-12)


def test_position_is_the_sum_of_tangents():
    path = s_shape()
    for depth in (250.0, 777.0, 1500.0, 2300.0, 2600.0):
        np.testing.assert_allclose(path.position([depth])[0], naive_position(path, depth), atol=2e-3)


def test_stations_are_met_exactly():
    path = s_shape()
    found = path.at(path.md)
    np.testing.assert_allclose(found.inclination, path.inclination, atol=1e-12)
    np.testing.assert_allclose(np.sin(found.azimuth - path.azimuth), 0.0, atol=1e-9)
    np.testing.assert_allclose(path.position(path.md), np.column_stack([path.north, path.east, path.tvd]))


def test_curvature_is_the_slope_of_the_tangent():
    path = s_shape()
    depth, h = np.array([350.0, 700.0, 1000.0, 1333.0, 2200.0]), 0.01
    slope = (path.at(depth + h).tangent - path.at(depth - h).tangent) / (2 * h)
    np.testing.assert_allclose(path.at(depth).curvature, slope, atol=1e-9)


def test_above_the_first_station_vertical_and_below_the_last_straight_on():
    path = build_trajectory([100.0, 400.0], np.array([0.0, 30.0]) * DEG, np.array([20.0, 20.0]) * DEG)
    above, below = path.at([0.0, 50.0]), path.at([500.0, 900.0])
    np.testing.assert_array_equal(above.tangent, [[0, 0, 1], [0, 0, 1]])
    assert above.tvd.tolist() == [0.0, 50.0]
    np.testing.assert_allclose(below.inclination, 30.0 * DEG)
    np.testing.assert_array_equal(below.curvature, 0.0)
    np.testing.assert_allclose(np.diff(below.tvd), 400.0 * np.cos(30.0 * DEG))


def test_one_station_is_enough():
    path = build_trajectory([0.0], [0.5], [1.0])
    assert path.at([1000.0]).tvd[0] == pytest.approx(1000.0 * np.cos(0.5))
    assert path.dogleg.size == 0


def test_a_first_station_a_hair_above_the_rotary_is_the_rotary():
    path = build_trajectory([-1.5e-6, 30.0], [0.0, 0.0], [0.0, 0.0])
    assert path.md[0] == 0.0
    assert path.at([30.0]).tvd[0] == pytest.approx(30.0)


def test_a_vertical_hole_lends_its_azimuth_from_the_nearest_station():
    path = build_trajectory([0.0, 100.0], [0.0, 0.0], [1.0, 2.0])
    np.testing.assert_allclose(path.at([10.0, 90.0]).azimuth, [1.0, 2.0])
    assert np.all(path.at([10.0, 90.0]).curvature == 0.0)


def test_empty_and_single_depths_have_their_shapes():
    path = s_shape()
    assert path.at([]).tangent.shape == (0, 3)
    assert path.at(500.0).tvd.shape == (1,)


@settings(max_examples=40, deadline=None)
@given(
    inc=st.lists(st.floats(0.0, 90.0), min_size=2, max_size=6),
    azi=st.lists(st.floats(0.0, 360.0), min_size=6, max_size=6),
    share=st.floats(0.05, 0.95),
)
def test_a_station_put_on_the_path_changes_nothing(inc, azi, share):
    inclination = np.array(inc) * DEG
    azimuth = np.array(azi[: len(inc)]) * DEG
    md = 100.0 * np.arange(len(inc))
    try:
        path = build_trajectory(md, inclination, azimuth)
    except TableError:
        return
    extra = (len(inc) - 2 + share) * 100.0
    on_it = path.at([extra])
    at = len(inc) - 1
    finer = build_trajectory(
        np.insert(md, at, extra),
        np.insert(inclination, at, on_it.inclination),
        np.insert(azimuth, at, on_it.azimuth),
    )
    depth = np.linspace(0.0, md[-1], 23)
    np.testing.assert_allclose(finer.position(depth), path.position(depth), atol=1e-6)
    found = path.at(depth)
    np.testing.assert_allclose(np.linalg.norm(found.tangent, axis=1), 1.0)
    np.testing.assert_allclose((found.tangent * found.curvature).sum(axis=1), 0.0, atol=1e-12)


def test_tiny_turns_keep_their_size():
    path = build_trajectory([0.0, 100.0], [0.0, 1e-9], [0.0, 0.0])
    assert path.dogleg[0] == pytest.approx(1e-9)
    assert path.position([100.0])[0, 0] == pytest.approx(5e-8)


REFUSED = {
    "goes back": ([0, 100, 90], [0, 0, 0], [0, 0, 0], r"station 3: 90.00 m goes back up .*\(100.00 m\)"),
    "repeats": ([0, 100, 100], [0, 0, 0], [0, 0, 0], "station 3: 100.00 m repeats the depth"),
    "turns": ([0, 100, 200], [0, 10, 80], [0, 0, 0], "station 3: at 200.00 m the hole turns 70 deg"),
    "turns over": ([0, 100, 200], [0, 45, 45], [0, 0, 180], "station 3: .* turns 90 deg"),
    "starts flat": ([500, 600], [90, 90], [0, 0], "station 1: .* 90 deg from the vertical.*tie_in"),
    "starts above": ([-50, 100], [0, 0], [0, 0], "station 1: starts at -50.00 m"),
    "past upside down": ([0, 100], [0, 191.9], [0, 0], "station 2: inclination 191.9 deg"),
    "negative": ([0, 100], [0, -3], [0, 0], "station 2: inclination -3 deg"),
    "wild azimuth": ([0, 100], [0, 3], [0, 9999], "station 2: .*azimuth 9999 deg"),
    "not a number": ([0, 100], [0, np.nan], [0, 0], "station 2: inclination nan deg"),
    "infinite depth": ([0, np.inf], [0, 0], [0, 0], "station 2"),
    "nothing": ([], [], [], "one station or more is needed"),
    "unequal": ([0, 1], [0], [0, 0], "one length"),
}


@pytest.mark.parametrize("name", REFUSED)
def test_a_path_no_hole_could_have_is_refused(name):
    md, inc, azi, words = REFUSED[name]
    with pytest.raises(TableError, match=words):
        build_trajectory(md, np.multiply(inc, DEG), np.multiply(azi, DEG))


def test_a_turn_of_just_sixty_degrees_is_a_hole():
    assert build_trajectory([0, 100], [0, 59.99 * DEG], [0, 0]).dogleg[0] == pytest.approx(59.99 * DEG)
