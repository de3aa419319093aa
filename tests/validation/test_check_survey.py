"""Minimum curvature against published worked examples.

Sources
-------
[S1] Web tutorial "Minimum Curvature Method": one worked pair of stations.
[S2] Web tutorial "Balanced Tangential Method Calculation": the same stations.
[S3] Web tutorial "Radius of Curvature Method": the stations only; the numbers are recomputed.
[ADE] Bourgoyne, Millheim, Chenevert and Young, *Applied Drilling Engineering*, ch. 8, comparison of methods
      (from memory).

Depths below are in the sources' feet: minimum curvature has no unit of its own.
"""

import numpy as np
import pytest

from forensics.well.trajectory import build_trajectory

DEG = np.pi / 180.0


def pair(md, inc, azi):
    """Displacement from the first station to the second, and the path."""
    path = build_trajectory(md, np.multiply(inc, DEG), np.multiply(azi, DEG))
    return np.diff(path.position(md), axis=0)[0], path


FIRST = pair([3500.0, 3600.0], [15.0, 25.0], [20.0, 45.0])
THIRD = pair([7500.0, 7595.0], [45.0, 52.0], [130.0, 139.0])


def ratio_factor(dogleg):
    return 2.0 / dogleg * np.tan(dogleg / 2.0)


# id, found, published, tolerance, why that tolerance
ROWS = [
    ("V-1 dogleg rad, S1", FIRST[1].dogleg[0], 0.22605, 5e-6, "last printed digit"),
    ("V-1 dogleg deg, S1", FIRST[1].dogleg[0] / DEG, 12.95, 5e-3, "last printed digit"),
    ("V-2 ratio factor, S1", ratio_factor(FIRST[1].dogleg[0]), 1.00408, 2.1e-4, "the page is 2.0e-4 low"),
    ("V-3 north, S1", FIRST[0][0], 27.22, 5e-3, "last printed digit"),
    ("V-4 east, S1", FIRST[0][1], 19.45, 5e-3, "last printed digit"),
    ("V-5 down, S1", FIRST[0][2], 94.01, 5e-3, "last printed digit"),
    ("V-6 severity deg/100 ft, computed", FIRST[1].dogleg_severity[0] * 100 / DEG, 12.951651, 1e-6, "digits"),
    # Minimum curvature is the balanced tangential displacement times the ratio factor.
    (
        "V-7 north by balanced tangential, S2",
        FIRST[0][0] / ratio_factor(FIRST[1].dogleg[0]),
        27.1,
        6e-3,
        "digits",
    ),
    (
        "V-7 east by balanced tangential, S2",
        FIRST[0][1] / ratio_factor(FIRST[1].dogleg[0]),
        19.37,
        5e-3,
        "digits",
    ),
    (
        "V-7 down by balanced tangential, S2",
        FIRST[0][2] / ratio_factor(FIRST[1].dogleg[0]),
        93.61,
        5e-3,
        "digits",
    ),
    ("V-10 dogleg deg, computed", THIRD[1].dogleg[0] / DEG, 9.705939, 1e-6, "digits"),
    (
        "V-10 severity deg/100 ft, computed",
        THIRD[1].dogleg_severity[0] * 100 / DEG,
        10.216778,
        1e-6,
        "digits",
    ),
    ("V-10 ratio factor, computed", ratio_factor(THIRD[1].dogleg[0]), 1.00239826, 1e-8, "digits"),
    ("V-10 north, computed", THIRD[0][0], -49.958367, 1e-6, "digits"),
    ("V-10 east, computed", THIRD[0][1], 50.406797, 1e-6, "digits"),
    ("V-10 down, computed", THIRD[0][2], 62.982179, 1e-6, "digits"),
]


@pytest.mark.parametrize(
    ("found", "published", "tolerance"), [r[1:4] for r in ROWS], ids=[r[0] for r in ROWS]
)
def test_worked_pairs_of_stations(found, published, tolerance):
    assert found == pytest.approx(published, abs=tolerance)


def test_v14_v18_a_circular_build_has_no_error():
    """[ADE] comparison table (from memory): 0 to 60 deg at 3 deg/100 ft in twenty courses, due north."""
    md = np.arange(21) * 100.0
    path = build_trajectory(md, 3.0 * DEG * np.arange(21), np.zeros(21))
    radius = 100.0 / (3.0 * DEG)
    assert path.tvd[-1] == pytest.approx(1653.99, abs=5e-3)
    assert path.north[-1] == pytest.approx(954.93, abs=5e-3)
    assert path.tvd[-1] == pytest.approx(radius * np.sin(60 * DEG), rel=1e-12)
    assert path.north[-1] == pytest.approx(radius * (1 - np.cos(60 * DEG)), rel=1e-12)
    assert path.east[-1] == 0.0


def test_v19_a_build_and_hold_plan_arrives():
    """[ADE] ex. 8.1 (from memory, recomputed): kick-off 1,600 ft, 1.5 deg/100 ft to 19.776 deg, 10,100 ft."""
    md = [1600.0, 1600.0 + 1318.4131, 10099.5564]
    path = build_trajectory(md, np.array([0.0, 19.776197, 19.776197]) * DEG, np.zeros(3))
    np.testing.assert_allclose(path.tvd, [1600.0, 2892.3904, 9650.0], atol=2e-3)
    np.testing.assert_allclose(path.north, [0.0, 225.2816, 2655.0], atol=2e-3)
