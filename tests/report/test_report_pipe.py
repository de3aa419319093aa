"""What the report says of the pipe: missing ratings are named, turns are ranked, effects are stated."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest

from forensics.case import CriteriaSettings
from forensics.episodes.catalogue import Consequence
from forensics.episodes.pipe import PartToll, PipeToll, Turned
from forensics.mechanics.fatigue import permissible_dogleg
from forensics.mechanics.lockup import QuickLimit, SlackOff
from forensics.mechanics.pipe import Tube
from forensics.report import derived
from forensics.report.describe import make_scene
from forensics.report.elements import Notice, Table
from forensics.report.sections import method, pipe
from forensics.report.sections.episodes import slack_off_sentence

NAN = float("nan")


@pytest.fixture
def with_tolls(findings):
    top, heavy = findings.well.string.components[-1], findings.well.string.components[-2]
    part = PartToll(replace(top, yield_strength=931e6), True, 2801.4, 2, 80e6, 310e6, 0.333, 0.2, 9e5, 2.1e4)
    bare = PartToll(heavy, False, 3200.0, 0, 5e6, 60e6, NAN, NAN, NAN, NAN)
    first, second, third = (e.id for e in findings.episodes)
    tolls = {
        first: PipeToll((bare, part), "surface torque", "standpipe", Turned(400.0, 1e-5, 2, 0.25)),
        second: PipeToll((bare,), "surface torque", "standpipe", Turned(900.0, 4e-5, 1, 1.0)),
        third: PipeToll((bare,), "surface torque", "standpipe", Turned(NAN, NAN)),
    }
    last = replace(findings.episodes[2], consequence=Consequence.WEIGHT_LOST)
    return replace(findings, episodes=(*findings.episodes[:2], last), tolls=tolls)


def test_missing_ratings_are_named(with_tolls):
    scene = make_scene(with_tolls, "metric")
    table = pipe.stress_table(scene, with_tolls.episodes[0])
    bare, buckled = table.rows
    assert bare[4:] == ("not given",) * 4
    assert buckled[0] == "pipe, buckled (helical there)"
    assert buckled[1:] == ("2801", "80", "310", "33 %", "20 %", "900", "21.0")
    assert "new (none given in [limits])" in table.note
    assert pipe.stress_table(make_scene(replace(with_tolls, tolls={}), "metric"), scene.mains[0]) is None


def test_turns_are_ranked_with_their_caution(with_tolls):
    section = pipe.describe(make_scene(with_tolls, "metric"))
    table = next(e for e in section.elements if isinstance(e, Table))
    ids = [e.id for e in with_tolls.episodes]
    assert [row[:3] for row in table.rows] == [
        ("1", ids[1], "900"),
        ("2", ids[0], "400"),
        ("", ids[2], "no rpm in the log"),
    ]
    assert [row[3] for row in table.rows] == ["1.000", "0.250", "not ranked"]
    notice = next(e for e in section.elements if isinstance(e, Notice))
    assert "no remaining life" in notice.items[0]


def test_without_turns_the_table_says_so(findings):
    section = pipe.describe(make_scene(findings, "field"))
    table = next(e for e in section.elements if isinstance(e, Table))
    assert not table.rows
    assert "did not turn" in table.empty


def test_effects_are_stated_with_their_size(findings, build_case):
    episodes = tuple(replace(e, onsets_drop=4.2e3) for e in findings.episodes)
    case = build_case(criteria=CriteriaSettings(torque_effect=True, tool_joint_effect=False))
    torque, joints = method.effects(make_scene(replace(findings, case=case, episodes=episodes), "metric"))
    assert torque[1].startswith("applied")
    assert "takes off 4.20 kN" in torque[1]
    assert joints[1].startswith("not applied")
    assert "so that the joints hold it off" in joints[1]
    still = tuple(replace(e, onsets_drop=0.0) for e in findings.episodes)
    torque, _ = method.effects(make_scene(replace(findings, episodes=still), "metric"))
    assert torque[1].endswith("nothing to take off")


def test_sag_is_for_jointed_pipe_only(findings):
    episode = findings.episodes[0]
    hangs, room = derived.sag_between_joints(findings, episode)
    assert 0.0 < hangs < room == pytest.approx((0.1683 - 0.127) / 2)
    at_motor = replace(episode, peak_md=float(findings.log.values["bit_depth"][episode.peak]) - 4.0)
    assert derived.sag_between_joints(findings, at_motor) is None


def test_pumps_are_told_as_learned_and_as_the_jets_have_it(findings, build_case):
    bare = method.pump_words(make_scene(findings, "metric"))
    assert "can't be told without the nozzle area" in bare
    rig = replace(findings.rig, usual_flow=0.035)
    told = make_scene(replace(findings, rig=rig, case=build_case(nozzle_area=5e-4)), "metric")
    thrust = findings.well.fluid.typical * 0.035**2 / 5e-4
    assert f"lift the bit with {thrust / 1e3:.2f} kN" in method.pump_words(told)


def test_turning_pipe_is_held_against_the_hole(findings):
    """Tension by the true depth below, curvature by the survey's own angles; the worst of both."""
    found = derived.turning_bend(findings)
    well, bit = findings.well, findings.log.get("bit_depth")
    assert found.bit == bit[findings.rig.turning].max()
    # the one bend of the well that hanging pipe feels: 35 to 60 degrees over 300 m
    assert 1500.0 < found.md < 1800.0
    angle = float(np.radians(25.0)) / 300.0
    assert found.hole == pytest.approx(angle, rel=0.05)
    below = well.rotating_weight(found.bit)[0] - 310.0 * (1 - 1320.0 / 7850.0) * _depth(well, found.md)
    assert found.tension == pytest.approx(below, rel=2e-3)
    stands = permissible_dogleg(Tube(0.127, 0.1086), found.tension, 206.8e9)
    assert found.stands == pytest.approx(float(stands), rel=1e-3)


def test_the_bend_is_told_with_its_share(findings):
    found, scene = derived.turning_bend(findings), make_scene(findings, "metric")
    text = pipe.bend_sentence(scene)[0].text
    assert f"{100.0 * found.hole / found.stands:.0f} % of it" in text
    assert "E75 pipe" in text


def test_pipe_that_never_turned_is_not_held_against_the_hole(findings):
    still = replace(findings.rig, turning=np.zeros_like(findings.rig.turning))
    assert derived.turning_bend(replace(findings, rig=still)) is None


def test_slacking_off_is_told_with_the_closed_form_beside_it(with_tolls):
    episode = with_tolls.episodes[2]
    even = QuickLimit(210e3, 1500.0, float(np.radians(90.0)))

    def said(slack: SlackOff) -> list[str]:
        toll = replace(with_tolls.tolls[episode.id], slack_off=slack)
        found = replace(with_tolls, tolls={**with_tolls.tolls, episode.id: toll})
        return slack_off_sentence(make_scene(found, "metric"), episode)

    march, closed = said(SlackOff(50e3, 3e3, 66e3, 100e3, even))
    weight = with_tolls.rig.wob_surface[episode.peak] + 100e3
    beyond = make_scene(with_tolls, "metric").show.value(weight, "force")
    assert f"beyond {beyond} of surface weight less than a twentieth" in march
    assert "lowest 1500 m at 90°" in closed
    assert "210 kN" in closed
    locked = said(SlackOff(50e3, 0.0, 66e3, 0.0))[0]
    assert locked.endswith(", and less than a twentieth of any addition gets there")
    assert said(SlackOff(50e3, 3e3, 66e3)) == [march.split(", and beyond")[0]]


def _depth(well, md):
    return float(well.trajectory.at(np.array([md])).tvd[0])
