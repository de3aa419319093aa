"""Minimum curvature against an independent library from the registry, wellpathpy."""

import numpy as np
import pytest
import wellpathpy

from forensics.well.trajectory import build_trajectory

DEG = np.pi / 180.0


def lateral():
    md = np.array([0.0, 600.0, 700.0, 820.0, 1000.0, 1180.0, 1300.0, 1500.0, 1900.0, 2600.0])
    inc = np.array([0.0, 1.0, 9.0, 24.0, 42.0, 65.0, 84.0, 90.5, 89.2, 91.0])
    azi = np.array([0.0, 310.0, 300.0, 306.0, 308.0, 315.0, 314.0, 312.0, 313.0, 316.0])
    return md, inc, azi


def s_shape():
    md = np.arange(0.0, 3001.0, 30.0)
    inc = np.interp(md, [0, 400, 1200, 1700, 2400, 3000], [0, 0, 38, 38, 3, 0])
    return md, inc, np.interp(md, [0, 400, 3000], [80, 80, 140])


def scattered():
    rng = np.random.default_rng(20310506)
    md = np.cumsum(rng.uniform(9.0, 31.0, 120))
    inc = np.abs(np.cumsum(rng.normal(0.4, 1.0, 120)))
    return md - md[0], inc, np.mod(350.0 + np.cumsum(rng.normal(0.0, 3.0, 120)), 360.0)


@pytest.mark.parametrize("stations", [lateral, s_shape, scattered])
def test_places_and_severity_agree(stations):
    md, inc, azi = stations()
    inc[0] = 0.0
    theirs = wellpathpy.deviation(md, inc, azi).minimum_curvature(course_length=30)
    ours = build_trajectory(md, inc * DEG, azi * DEG)
    # Both are closed forms; what is left is rounding over the length of the well.
    np.testing.assert_allclose(ours.tvd, theirs.depth, atol=1e-7)
    np.testing.assert_allclose(ours.north, theirs.northing, atol=1e-7)
    np.testing.assert_allclose(ours.east, theirs.easting, atol=1e-7)
    np.testing.assert_allclose(ours.dogleg_severity * 30 / DEG, theirs.dls[1:], atol=1e-6)


@pytest.mark.parametrize("stations", [lateral, s_shape, scattered])
def test_places_between_stations_agree(stations):
    md, inc, azi = stations()
    inc[0] = 0.0
    depth = np.linspace(1.0, md[-1] - 1.0, 57)
    theirs = wellpathpy.deviation(md, inc, azi).minimum_curvature().resample(depths=list(depth))
    ours = build_trajectory(md, inc * DEG, azi * DEG).position(depth)
    np.testing.assert_allclose(
        ours, np.column_stack([theirs.northing, theirs.easting, theirs.depth]), atol=1e-6
    )
