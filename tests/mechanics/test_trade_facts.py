"""What the trade says about buckling, against the computation.

Common practice, no source, every one of them; tolerances are as wide as their words. Where the computation
says otherwise it stands, and the test says why.
"""

from __future__ import annotations

import math

import numpy as np
import pytest

from forensics.case.settings import CriteriaSettings
from forensics.mechanics import threshold
from forensics.mechanics.columns import Ends, column_load
from forensics.mechanics.eigen import LIMIT, column_eigenvalue, interpolate
from forensics.mechanics.helix_limit import GREATEST_MEAN, LEAST_MEAN, least_stable_mean, unloading_limit
from forensics.mechanics.helix_shape import by_collocation, first_order
from forensics.mechanics.pipe import Tube
from forensics.mechanics.selfconsistent import local_load
from forensics.mechanics.sinusoid import sinusoid, sinusoid_table

STEEL = 206.8e9
MUD = 1 - 1200 / 7850


def lubinski(stiffness: float, weight: float) -> float:
    return (stiffness / weight) ** (1 / 3)


def collar(outside: float = 0.1524, bore: float = 0.0714) -> tuple[float, float]:
    """Stiffness and buoyed weight of 6 in collars [N.m2], [N/m]."""
    tube = Tube(outside, bore)
    return STEEL * tube.inertia, tube.weight(7850) * MUD


def test_characteristic_length_of_drill_pipe_is_about_20_m():
    # 3-1/2, 4-1/2, 5 and 5-1/2 in pipe; weights in air with joints
    for outside, bore, weight in (
        (0.0889, 0.0702, 210.0),
        (0.1143, 0.0972, 262.0),
        (0.127, 0.1086, 305.0),
        (0.1397, 0.1214, 340.0),
    ):
        assert 10 < lubinski(STEEL * Tube(outside, bore).inertia, weight * MUD) < 25


def test_characteristic_length_of_collars_is_nearer_20_m_than_40():
    # said to be about 40 m; stiffness and weight both go with the steel, so that l grows with OD^(2/3) only:
    # 18 m for 6 in, 24 m for 9 in
    for outside in (0.1524, 0.1715, 0.2032, 0.2286):
        assert 15 < lubinski(*collar(outside)) < 25


def test_collars_in_a_wide_hole():
    # 6 in in 12 in: l/r over 200, and the formulas for vertical and level holes cross at a few tenths of a
    # degree
    stiffness, weight = collar()
    ratio = lubinski(stiffness, weight) / ((0.3048 - 0.1524) / 2)
    assert 200 < ratio < 260
    crossing = {c: math.degrees(math.atan(c**2 / 4 / ratio)) for c in (1.0188, LIMIT, 1.94, 2.55)}
    assert all(0.05 < angle < 0.5 for angle in crossing.values())
    # it hangs on the constant: six-fold between the infinite string's and the largest in use
    assert crossing[2.55] / crossing[1.0188] == pytest.approx((2.55 / 1.0188) ** 2, rel=1e-4)
    # there both formulas give the same load
    angle = math.radians(crossing[1.94])
    level = local_load(stiffness, weight * math.sin(angle), 0.0762)
    steep = 1.94 * (stiffness * (weight * math.cos(angle)) ** 2) ** (1 / 3)
    assert level == pytest.approx(steep, rel=1e-5)


def test_a_fraction_of_a_degree_makes_the_length_irrelevant():
    stiffness, weight = STEEL * Tube(0.127, 0.1086).inertia, 305.0 * MUD
    scale = lubinski(stiffness, weight)
    lengths = scale * np.array([8.0, 80.0, 1e4])

    def loads(degrees: float) -> np.ndarray:
        side, along = weight * math.sin(math.radians(degrees)), weight * math.cos(math.radians(degrees))
        return threshold.sinusoidal_load(stiffness, side, 0.0445, along, lengths)

    assert np.ptp(loads(0.5)) < 1e-3 * loads(0.5).min()
    assert np.ptp(loads(0.0)) > 0.3 * loads(0.0).min()


def test_c_is_close_to_1_61_for_n_above_100():
    for n in (100.0, 1e3, 1e4, 1e6):
        assert column_eigenvalue(n, 40.0) == pytest.approx(1.61, abs=0.01)


def test_infinite_vertical_limit_is_just_over_1_and_real_strings_lie_between_1_1_and_2():
    assert column_load(0.0, 100.0, Ends("pinned", "free")) == pytest.approx(1.0188, abs=1e-4)
    real = interpolate(0.0, np.geomspace(8.0, 1e4, 30))
    assert np.all((real > 1.1) & (real < 2.0))


def test_figures_at_hand_and_where_they_hold():
    # 1.94 is one length's; the approach to 1.0188 is logarithmic: 1.183 at a million lengths still
    assert column_eigenvalue(0.0, 7.93) == pytest.approx(1.94, abs=5e-4)
    assert column_eigenvalue(0.0, 1e6) == pytest.approx(1.183, abs=5e-4)
    lengths = np.array([1e3, 1e4, 1e5, 1e6])
    inverse = [1 / (column_eigenvalue(0.0, float(length)) - 1.018793) for length in lengths]
    # 1/(c - 1.0188) grows by the same for each ten-fold length
    np.testing.assert_allclose(np.diff(inverse), np.diff(inverse).mean(), rtol=0.03)


def test_near_vertical_buckling_spreads_over_six_to_eight_lengths():
    # the shortest column that buckles within 0.03 % of the load of an endless one
    for n in (1.0, 2.0, 4.0):
        endless = 2 * math.sqrt(n) + column_eigenvalue(n, 100.0)
        lengths = np.arange(3.0, 10.0, 0.25)
        off = np.array([column_load(n, float(length)) for length in lengths]) / endless - 1
        settled = lengths[np.flatnonzero(np.abs(off) > 3e-4)[-1] + 1]
        assert 6.0 <= settled <= 8.0


def test_dawson_paslay_is_gamma_one_quarter():
    load = float(local_load(1.23e6, 258.3, 0.0445))
    assert 1.23e6 * 258.3 / (0.0445 * load**2) == pytest.approx(0.25)
    assert sinusoid(1e-3).gamma == pytest.approx(0.25, rel=1e-5)


def test_sinusoid_has_no_limit_of_its_own_near_one_seventh():
    # said to reach its limit near gamma = 1/7. What is singular there is the first order of the helix at
    # k^2 = 1/7, another quantity; the sinusoid goes on through 1/7, with the wall pressed all along
    table = sinusoid_table()
    gamma = 0.25 / table.ratio**2
    row = int(np.argmin(np.abs(gamma - 1 / 7)))
    assert table.least_contact[row] > 0.6
    assert math.degrees(table.amplitude[row]) == pytest.approx(41, abs=2)
    assert gamma[-1] < 0.3 / 7
    near = [abs(first_order(1 / 7 + step, 0.01).series[1]) for step in (1e-3, 1e-5)]
    assert near[1] == pytest.approx(100 * near[0])


def test_pipe_can_lift_off_the_low_side_some_40_percent_above():
    # by energy: a helix gains 1/8 by winding and loses gamma by rising, which cancels at sqrt(2) F_DP
    lifts = 0.5 / math.sqrt(1 / 8)
    assert lifts == pytest.approx(1.4, abs=0.02)
    # but at that load the sinusoid costs less yet, and keeps to the wall until 1.77
    table = sinusoid_table()
    wave = sinusoid(float(np.interp(lifts, table.ratio, table.amplitude)))
    assert wave.energy() < wave.gamma - 1 / 8
    assert np.interp(0.0, -table.least_contact, table.ratio) == pytest.approx(1.77, abs=0.01)


def test_helices_have_square_slopes_between_a_seventh_and_one():
    assert pytest.approx(1 / 7) == LEAST_MEAN
    assert pytest.approx(1.0) == GREATEST_MEAN
    assert least_stable_mean(0.0) == pytest.approx(1 / 6)


def test_a_helix_that_does_not_turn_is_gone_below_1_3704():
    # said to stay until all weight is off; its wall force on the high side ends at 1.3704 F_DP
    limit = unloading_limit()
    assert limit.ratio == pytest.approx(1.3704, abs=5e-5)
    held, gone = (by_collocation(limit.mean, 0.25 / (part * limit.ratio) ** 2) for part in (1.001, 0.999))
    assert held.least_wall_force() > 0.0 > gone.least_wall_force()


def test_once_helical_the_cautious_driller_takes_all_weight_off():
    # the default keeps a helix until the load is below the sinusoidal one; a helix that does not turn is
    # gone at 1.3704 F_DP already, so that the rule errs on the safe side
    assert CriteriaSettings().helical_release == "unbuckled"
    local = 1.7e5
    kept = float(threshold.release_load(local, local, "unbuckled"))
    assert kept < float(threshold.release_load(local, local, "envelope"))
    assert threshold.release_load(local, local, "envelope") == pytest.approx(unloading_limit().ratio * local)
