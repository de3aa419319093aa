"""Torque along the string, and what it does to the replay's thresholds, against the closed forms."""

from __future__ import annotations

import math
from types import SimpleNamespace

import numpy as np
import pytest

from forensics.mechanics.kernels_judge import TAKEN, thresholds
from forensics.mechanics.kernels_march import place_at
from forensics.mechanics.torque import onset_drop
from forensics.replay.model import build_model
from forensics.replay.room import fresh, go
from forensics.replay.torsion import HELD, NO_TORQUE, SPREAD, origin, torque_along, torque_ends
from tests.replay.test_memory import NEVER, case_for, rows
from tests.wells import build_well, one_pipe_well

ROWS = 61


@pytest.fixture(scope="module")
def lateral():
    """Lay out a vertical, a build and a lateral."""
    return build_model(build_well(), case_for(), 3400.0)


def run_with(model, torque, turning=True, rotational=0.25):
    """As much of a replay as torque asks for."""
    factor = None if rotational is None else SimpleNamespace(value=rotational)
    columns = {} if torque is None else {"torque": np.broadcast_to(np.asarray(torque, float), ROWS)}
    return SimpleNamespace(
        model=model,
        log=SimpleNamespace(get=columns.get, interval=1.0),
        rig=SimpleNamespace(turning=np.full(ROWS, turning)),
        calibration=SimpleNamespace(rotational=factor, torque_loss=None),
        prepared=SimpleNamespace(samples=SimpleNamespace(bit=np.full(ROWS, 3300.0), scale=np.ones(ROWS))),
    )


def test_what_friction_takes_lies_where_the_wall_is_pressed(lateral):
    """In the vertical nothing is lost; at the bit what is left is surface less the model's own torque."""
    run = run_with(lateral, 20e3)
    depths = np.array([0, 400, 6600])
    top, vertical, bit = torque_along(run, 30, depths)
    taken = float(lateral.torque(3300.0, 0.25)[0])
    assert top == pytest.approx(20e3, rel=1e-3)
    assert vertical == pytest.approx(20e3, rel=0.01)
    assert bit == pytest.approx(20e3 - taken, rel=1e-6)
    assert origin(run, 30, np.array([bit])) == SPREAD


def test_the_shape_is_the_off_bottom_torques_own(lateral):
    """Torque taken above each depth, by a plain sum of friction along the string, bit at its deepest."""
    x, hole, pipe = lateral.pipe.x, lateral.hole, lateral.pipe
    deep = (len(hole.cos_i) - 1) * hole.step
    tension, lost = 0.0, []
    for i in range(len(hole.cos_i) - 1, -1, -1):
        j = min(int(np.searchsorted(x, deep - i * hole.step, side="right")) - 1, len(pipe.ei) - 1)
        tension += pipe.weight[j] * hole.cos_i[i] * hole.step
        square = tension**2 * hole.kappa2[i] + 2 * tension * pipe.weight[j] * hole.kappa_d[i]
        lost.append(math.sqrt(max(square + pipe.weight[j] ** 2 * hole.sin2[i], 0.0)) * pipe.radius[j])
    plain = np.cumsum(lost[::-1]) * hole.step
    np.testing.assert_allclose(lateral.criteria.at[0, :, TAKEN], plain, rtol=1e-9)


def test_what_does_not_turn_holds_its_torque_and_silence_is_said(lateral):
    still = run_with(lateral, -8e3, turning=False)
    np.testing.assert_allclose(torque_along(still, 30, np.array([0, 6600])), 8e3)
    assert origin(still, 30, np.array([8e3])) == HELD
    assert np.isnan(torque_ends(run_with(lateral, None), np.array([3]))).all()
    assert origin(still, 30, np.array([math.nan])) == NO_TORQUE


def test_more_friction_than_torque_leaves_none_at_the_bit_and_spikes_are_not_heard(lateral):
    jagged = np.where(np.arange(ROWS) % 7 == 0, 90e3, 1e3)
    surface, fall = torque_ends(run_with(lateral, jagged), np.array([30]))[0]
    assert surface == 1e3
    assert surface - fall * lateral.criteria.at[0, 6600, TAKEN] == pytest.approx(0.0, abs=1e-6)


@pytest.mark.parametrize("share", [0.3, 0.9])
def test_torque_turns_a_pressed_string_helical_earlier_by_the_published_drop(share):
    """Between the lowered onset and the bare one only the wound string is helical, in the replay itself."""
    model = build_model(one_pipe_well(math.pi / 2, 1000.0), case_for(), 1000.0)
    at = model.setting(0.0, 0.0)
    place = place_at(at.hole, at.pipe, 1000.0, 1.0)
    onset = thresholds(at, place, 30, 1000, -150e3)[2]
    drop = float(onset_drop(onset, at.pipe.ei[30], 20e3))
    top = np.linspace(0.0, share * drop - onset, ROWS)
    ends = np.zeros((ROWS, 3))
    bare = go(at, rows(top, np.ones(ROWS), bit=np.full(ROWS, 1000.0), ends=ends), NEVER, fresh(model))
    ends[:, 0] = 20e3
    wound = go(at, rows(top, np.ones(ROWS), bit=np.full(ROWS, 1000.0), ends=ends), NEVER, fresh(model))
    assert bare.state.max() == 1
    assert wound.state[-1] == 2
    np.testing.assert_array_equal(wound.bit_load, bare.bit_load)  # no friction: what presses is the same
