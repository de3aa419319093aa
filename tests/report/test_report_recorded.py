"""What was written down by hand stands beside what the log shows."""

from dataclasses import replace

import numpy as np
import pytest

from forensics.logs.records import RecordedSlide, RecordedWeight
from forensics.report.describe import make_scene
from forensics.report.sections import calibration, recorded
from forensics.rig.view import Activity


@pytest.fixture
def weighed(findings):
    reading = next(r for r in findings.calibration.readings if r.kind == "pick_up")
    near = RecordedWeight("pick_up", float("nan"), reading.bit_depth, reading.value + 10e3, True)
    far = RecordedWeight("slack_off", float("nan"), 90_000.0, 800e3, None)
    return replace(findings, weights=(near, far)), reading


def test_nothing_recorded_shows_nothing(findings):
    assert recorded.tables(make_scene(findings, "metric")) == []


def test_a_weight_stands_beside_the_log_s_reading(weighed):
    findings, reading = weighed
    assert recorded.nearest_reading(findings.calibration.readings, findings.weights[0]) == reading
    table, said = recorded.tables(make_scene(findings, "metric"))
    assert "pick-up 10.0 kN above (1)" in said.text
    near, far = table.rows
    assert near[1:3] == ("pick-up", "on")
    assert "kN" in near[4]
    assert far[4:] == ("not known", "not known", "not known")


def test_weights_follow_the_units(weighed):
    table, _ = recorded.tables(make_scene(weighed[0], "field"))
    assert "klbf" in table.rows[0][3]
    assert " ft" in table.rows[0][0]


def test_a_slide_tells_how_much_of_it_the_log_has_as_slid(findings):
    log, activity = findings.log, findings.rig.activity
    first = int((activity == int(Activity.DRILL_SLIDE)).argmax())
    rows = log.time[first : first + 60]
    assert (activity[first : first + 60] == int(Activity.DRILL_SLIDE)).all()
    slides = (RecordedSlide("time", float(rows[0]), float(rows[-1])), RecordedSlide("depth", 1e5, 2e5))
    (table,) = recorded.tables(make_scene(replace(findings, slides=slides), "metric"))
    assert table.rows[0][2] == "100 %"
    assert table.rows[1][2] == "no drilling in the log"
    assert "outside the slides" in table.note


def with_channel(findings, **values):
    return replace(findings, log=replace(findings.log, values={**findings.log.values, **values}))


def words(findings):
    section = calibration.describe(make_scene(findings, "metric"))
    return " ".join(element.text for element in section.elements if element.form == "text")


def test_the_log_s_mud_is_held_against_the_case_s(findings):
    told = words(with_channel(findings, mud_density=np.full(len(findings.log), 1250.0)))
    assert "Mud density in the log is 1.25 g/cm³ (median); loads rest on that of the case, 1.32 g/cm³" in told
