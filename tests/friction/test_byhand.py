"""Weights written down by hand become readings where the bit was, corrected as the log's are."""

from types import SimpleNamespace

import numpy as np
import pytest

from forensics.case import RigSettings
from forensics.friction.byhand import as_readings
from forensics.friction.calibrate import calibrate
from forensics.logs.records import RecordedWeight
from plain_well import RUN, TRUTH, PlainString, factors, make_case, make_readings, make_rig, make_well


@pytest.fixture
def log():
    time = np.arange(0.0, 1000.0, 10.0)
    return SimpleNamespace(time=time, values={"bit_depth": 1000.0 + time})


def test_a_weight_by_depth_is_from_when_the_bit_was_there(log):
    (reading,) = as_readings(
        (RecordedWeight("pick_up", float("nan"), 1502.0, 8e5, None),), log, make_rig(), make_case()
    )
    assert reading.by_hand
    assert reading.start == 500.0
    assert reading.value == 8e5


def test_where_the_bit_never_came_there_is_no_reading(log):
    far = RecordedWeight("pick_up", float("nan"), 5000.0, 8e5, None)
    nowhere = RecordedWeight("pick_up", 5e9, float("nan"), 8e5, None)
    assert as_readings((far, nowhere), log, make_rig(), make_case()) == ()


def test_sheaves_are_taken_out_as_of_the_log(log):
    """Ten lines at 0.99: the indicator is light going up and heavy going down."""
    case = make_case(rig=RigSettings(lines=10, sheave_efficiency=0.99))
    both = tuple(RecordedWeight(kind, float("nan"), 1500.0, 1e6, None) for kind in ("pick_up", "slack_off"))
    up, down = as_readings(both, log, make_rig(), case)
    assert up.value > 1e6 > down.value


def test_they_alone_give_a_wide_answer_and_beside_the_log_change_little():
    plain = PlainString()
    logged = make_readings(plain, RUN, TRUTH)
    rough = make_readings(plain, RUN[::4], (0.26, 0.36), noise=5e3)
    by_hand = tuple(
        type(r)(**{**vars(r), "by_hand": True, "spread": 0.0, "samples": 1, "block": np.nan}) for r in rough
    )
    alone = factors(calibrate(by_hand, make_well(), make_case(), plain, make_rig()))
    whole = calibrate(logged + by_hand, make_well(), make_case(), plain, make_rig())
    assert alone["open"].high - alone["open"].low > 0.04
    assert factors(whole)["open"].value == pytest.approx(TRUTH[1], abs=0.01)
    assert whole.held_out.readings <= len(logged)
