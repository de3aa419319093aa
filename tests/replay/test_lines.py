"""What counts as drag beyond the model's lines, moving and standing still."""

from __future__ import annotations

from types import SimpleNamespace

import numpy as np
import pytest

from forensics.mechanics.kernels_replay import HOLD, SLIDE, TURN
from forensics.replay.lines import drag_lines

UP, DOWN, HANGING = 500e3, 400e3, 300e3


def residual(string, direction=0, mode=SLIDE, full=0, state=0, slips_last=False):
    """Drag residual of one row, NaN for none; lines lie at 500 and 400 kN over 300 kN of block."""
    model = SimpleNamespace(
        string_weight=lambda kind, depth, *_: np.full(
            len(depth), {"pick_up": UP, "slack_off": DOWN, "rotating": 450e3}[kind]
        )
    )
    samples = SimpleNamespace(
        bit=np.full(2, 2000.0), scale=np.ones(2), free=np.ones(2, bool), mode=np.array([mode, mode])
    )
    prepared = SimpleNamespace(
        samples=samples, hookload=np.full(2, string + HANGING), hanging=np.full(2, HANGING)
    )
    calibration = SimpleNamespace(sections=())
    before = 0 if slips_last else 1  # the row before: held in slips, or moving
    rig = SimpleNamespace(direction=np.array([before, direction]), slips=np.array([slips_last, False]))
    found = SimpleNamespace(full=np.array([0, full]), state=np.array([state, state]))
    return float(drag_lines(prepared, rig, calibration, model, found)[1][1])


@pytest.mark.parametrize(
    ("string", "beyond"),
    [(560e3, 60e3), (340e3, -60e3)],
    ids=["held up", "held down"],
)
def test_a_string_held_still_beyond_its_lines_is_held_by_something(string, beyond):
    assert residual(string) == pytest.approx(beyond)


def test_between_its_lines_a_still_string_tells_nothing():
    assert np.isnan(residual(450e3))
    assert np.isnan(residual(500e3))


def test_in_slips_and_turning_a_still_string_tells_nothing():
    assert np.isnan(residual(560e3, mode=HOLD))
    assert np.isnan(residual(560e3, mode=TURN))


def test_a_hook_that_carries_next_to_nothing_may_be_in_slips():
    assert np.isnan(residual(20e3))


def test_set_down_on_a_helix_is_the_helix():
    assert np.isnan(residual(340e3, state=2))
    assert residual(560e3, state=2) == pytest.approx(60e3)


def test_moving_strings_are_held_against_their_own_line():
    assert residual(520e3, direction=-1, full=-1) == pytest.approx(20e3)
    assert residual(410e3, direction=1, full=1) == pytest.approx(10e3)
    assert np.isnan(residual(520e3, direction=-1, full=0))


def test_a_string_just_taken_from_slips_may_hang_in_part():
    assert np.isnan(residual(340e3, slips_last=True))


def test_a_string_that_still_slides_the_other_way_has_no_line():
    assert np.isnan(residual(520e3, direction=-1, full=1))
