"""Helical lockup in closed form, after Mitchell 1986 and Wu and Juvkam-Wold 1993 (form from memory, high).

Numbers were computed by the closed form and by an adaptive integration, which agree.
"""

from __future__ import annotations

import math

import pytest

from field import DP5_CLEARANCE, DP5_EI, DP5_WEIGHT, FOOT, LBF
from forensics.mechanics.lockup import HelicalRun, load_along, lockup_distance, sliding_angle

RUN = HelicalRun(DP5_EI, DP5_CLEARANCE, DP5_WEIGHT, 0.3)
BARE = HelicalRun(DP5_EI, DP5_CLEARANCE, 0.0, 0.3)
SINUSOIDAL = 37990.5181


@pytest.mark.parametrize(
    ("bit", "distance", "at_1000"),
    [
        pytest.param(0.0, 11237.86, 5345.0615, id="T-L1"),
        pytest.param(5000.0, 10301.66, 10540.2358, id="T-L2 5000"),
        pytest.param(10000.0, 9396.47, 15935.2083, id="T-L2 10000"),
        pytest.param(math.sqrt(2) * SINUSOIDAL, 4403.29, 73744.9692, id="T-L2 helical"),
    ],
)
def test_horizontal_lockup(bit, distance, at_1000):
    assert lockup_distance(bit * LBF, RUN) / FOOT == pytest.approx(distance, abs=0.006)
    assert float(load_along(1000 * FOOT, bit * LBF, RUN)) / LBF == pytest.approx(at_1000, rel=1e-7)


@pytest.mark.parametrize(
    ("bit", "distance"), [(5000.0, 54358.70), (10000.0, 27179.35), (math.sqrt(2) * SINUSOIDAL, 5058.82)]
)
def test_t_l3_without_the_weight_in_the_wall_force(bit, distance):
    assert lockup_distance(bit * LBF, BARE) / FOOT == pytest.approx(distance, abs=0.006)


def test_t_l1_scale_is_the_sinusoidal_load():
    # sqrt(4 EI w / r), whatever the friction
    assert RUN.scale / LBF == pytest.approx(SINUSOIDAL, rel=1e-8)


@pytest.mark.parametrize(
    ("mu", "degrees"), [(0.2, 78.6901), (0.25, 75.9638), (0.3, 73.3008), (0.35, 70.7100), (0.4, 68.1986)]
)
def test_t_13_pipe_does_not_slide_beyond(mu, degrees):
    assert math.degrees(sliding_angle(mu)) == pytest.approx(degrees, abs=6e-5)
