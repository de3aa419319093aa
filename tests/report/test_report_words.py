"""Numbers and times as words; numbers the report derives."""

import dataclasses
from math import inf, nan, pi

import numpy as np
import pytest

from forensics.case import LimitSettings, RigSettings
from forensics.episodes.catalogue import Consequence, Kind, State
from forensics.episodes.groups import is_routine
from forensics.estimate import Estimate
from forensics.report import derived
from forensics.report.describe import make_scene
from forensics.report.scene import main_episodes
from forensics.report.sections.first import describe_margins
from forensics.report.sections.run import slides_up_to
from forensics.report.words import THIN, Show, count, duration, fixed

METRIC = Show("metric", "Europe/Oslo")


@pytest.mark.parametrize(
    ("value", "places", "text"),
    [(-3.2, 0, "\N{MINUS SIGN}3"), (-0.04, 1, "0.0"), (1234.5, 1, "1234.5"), (12345.0, 0, f"12{THIN}345"),
     (nan, 1, "not known"), (inf, 1, "not known")],
)  # fmt: skip
def test_fixed(value, places, text):
    assert fixed(value, places) == text


@pytest.mark.parametrize(
    ("seconds", "text"),
    [(0.0, "0 s"), (2.5, "2.5 s"), (59.6, "1 min"), (3599.0, "59 min 59 s"), (3600.0, "1 h 00 min"),
     (200_000.0, "2 d 8 h"), (nan, "not known")],
)  # fmt: skip
def test_duration(seconds, text):
    assert duration(seconds) == text


def test_estimate_shows_what_its_interval_supports():
    assert METRIC.estimate(Estimate(118_234.0, 102_100.0, 134_900.0, ""), "force") == (
        "118 kN",
        "102 to 135 kN",
    )
    assert METRIC.estimate(Estimate(0.2134, 0.2, 0.226, ""), "dimensionless") == ("0.213", "0.200 to 0.226")
    assert METRIC.estimate(Estimate(5e3, 5e3, 5e3, ""), "force") == ("5.00 kN", "no interval")
    assert METRIC.estimate(Estimate(nan, nan, nan, ""), "force") == ("not known", "")


def test_with_interval_names_the_unit_once():
    estimate = Estimate(118e3, 102e3, 135e3, "")
    assert METRIC.with_interval(estimate, "force") == "118 kN (102 to 135)"
    assert Show("field").with_interval(estimate, "force") == "27 klbf (23 to 30)"


def test_degrees_stand_close():
    assert METRIC.value(np.radians(90.5), "angle", 1) == "90.5°"


def test_times_follow_summer_time():
    summer, winter = 1_714_723_200.0, 1_704_096_000.0
    assert METRIC.stamp(summer) == "2024-05-03 10:00:00 +02:00"
    assert METRIC.stamp(winter) == "2024-01-01 09:00:00 +01:00"
    assert Show("metric", "-03:30").stamp(summer) == "2024-05-03 04:30:00 -03:30"


@pytest.mark.parametrize(
    ("text", "hours"), [("UTC", 0.0), ("Z", 0.0), ("+02", 2.0), ("+0530", 5.5), ("-07:00", -7.0)]
)
def test_zones(text, hours):
    assert Show("metric", text).zone.utcoffset(None).total_seconds() == hours * 3600


def test_count():
    assert count(1, "row") == "1 row"
    assert count(12000, "row") == f"12{THIN}000 rows"


def test_bending_stress_of_a_helix(build):
    """OD r F / (4 I), by hand for 5 in pipe with 168.3 mm joints in 215.9 mm hole."""
    made = build(n=1200, episodes=1)
    inertia = pi / 64 * (0.127**4 - 0.1086**4)
    expected = 0.127 * (0.2159 - 0.1683) / 2 * 100e3 / (4 * inertia)
    assert derived.helix_bending_stress(made, made.episodes[0], 100e3) == pytest.approx(expected)
    nowhere = dataclasses.replace(made.episodes[0], peak_md=nan)
    assert np.isnan(derived.helix_bending_stress(made, nowhere, 100e3))


def test_turns_count_buckled_rotation_only(build):
    made = build(n=1200, episodes=0)
    log = made.log
    state = np.zeros(1200, dtype=np.int8)
    state[100:160] = 1
    state[170:180] = 2
    rpm = np.where(np.arange(1200) < 175, 60.0, 0.0)
    made = dataclasses.replace(
        made,
        log=dataclasses.replace(log, values={**log.values, "rpm": rpm}),
        loads=dataclasses.replace(made.loads, state=state),
        rig=dataclasses.replace(made.rig, turning=rpm > 5),
    )
    assert derived.turns_while_buckled(made) == pytest.approx(65.0)
    assert derived.turns_while_buckled(made, 0, 109) == pytest.approx(10.0)


def test_seconds_in_state_do_not_count_gaps(build):
    made = build(n=1200, episodes=0)
    made = dataclasses.replace(
        made, loads=dataclasses.replace(made.loads, state=np.full(1200, 2, dtype=np.int8))
    )
    assert derived.seconds_in_state(made, 2) == pytest.approx(1200.0)
    assert len(derived.gaps(made.log)) == 1


def test_margins_against_limits(build, build_case):
    made = build(n=7200, case=build_case(limits=LimitSettings(hookload=2200e3, torque=10e3)))
    by_name = {margin.name: margin for margin in derived.margins(made)}
    assert set(by_name) == {"hookload", "surface torque", "tension in pipe at surface"}
    assert by_name["hookload"].largest == np.nanmax(made.rig.hookload)
    assert by_name["surface torque"].left < 0


def test_clearance_at_the_pipe_body_lowers_the_threshold(build):
    """By hand: where the near-vertical term is nil the threshold goes with 1 / sqrt(r)."""
    made = build(n=1200, episodes=1)
    profile = made.profiles["E001"]
    stiffness = 206.8e9 * pi / 64 * (0.127**4 - 0.1086**4)
    joint, body = (0.2159 - 0.1683) / 2, (0.2159 - 0.127) / 2
    contact = np.full(len(profile.md), 200.0)
    local = 2.0 * np.sqrt(stiffness * contact / joint)
    flat = dataclasses.replace(profile, sinusoidal=local, contact=contact, state=np.zeros_like(profile.state))
    open_pipe = (profile.md > 2700) & (profile.md < 3100)
    found = derived.other_threshold(made, flat)[open_pipe]
    assert found == pytest.approx(local[open_pipe] * np.sqrt(joint / body))
    assert derived.other_clearance(made) == "pipe body"


def test_no_limits_no_margins(build, build_case):
    made = build(n=100, case=build_case(limits=LimitSettings()))
    assert [margin.origin for margin in derived.margins(made)] == ["string table, as given"]


def test_main_episodes_leave_routine_running_out(build, build_episode):
    log = build(n=1200, episodes=0).log
    routine = build_episode(0, log, state=State.SINUSOIDAL, consequence=Consequence.NONE)
    drag = build_episode(1, log, kind=Kind.DRAG, state=State.NONE, consequence=Consequence.NONE)
    locked = build_episode(2, log, consequence=Consequence.LOCKED_UP)
    assert is_routine(routine)
    assert main_episodes((routine, drag, locked)) == (drag, locked)
    assert main_episodes((drag, locked), cap=1) == (locked,)
    assert main_episodes((routine,)) == (routine,)
    assert main_episodes(()) == ()


def test_crown_carries_hook_fast_line_and_dead_line(build, build_case):
    bare = build(n=100)
    assert np.isnan(derived.crown_load(bare))
    made = build(n=100, case=build_case(rig=RigSettings(lines=8, sheave_efficiency=1 / 1.04)))
    largest = np.nanmax(made.rig.hookload)
    # fast line as the Well Engineers Notebook has it, 1.188 / 8; the dead line an eighth, free of friction
    assert derived.crown_load(made) / largest == pytest.approx(1 + 1.188 / 8 + 1 / 8, rel=1e-3)
    note = describe_margins(make_scene(made, "metric")).note
    assert f"puts {METRIC.value(derived.crown_load(made), 'force')} on the crown" in note


def test_pipe_slides_up_to_a_steepness_that_friction_sets(build):
    """As the trade's tables have it: at 0.25 up to 75.96 degrees, at 0.2 and 0.3 up to 78.69 and 73.30."""
    made = build(n=100)
    section = dataclasses.replace(made.calibration.sections[-1], factor=Estimate(0.25, 0.2, 0.3, "readings"))
    made = dataclasses.replace(made, calibration=dataclasses.replace(made.calibration, sections=(section,)))
    (row,) = slides_up_to(make_scene(made, "metric"))
    assert row.value == "76.0°"
    assert row.interval == "73.3 to 78.7°"
