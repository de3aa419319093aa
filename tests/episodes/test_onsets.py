"""How far past the published helical onsets an episode went."""

from __future__ import annotations

import math
from dataclasses import replace
from types import SimpleNamespace

import numpy as np
import pytest

from forensics.case import CriteriaSettings
from forensics.episodes.catalogue import Consequence, Episode, Kind, State
from forensics.episodes.onsets import with_onsets
from forensics.estimate import Estimate
from forensics.mechanics.band import ORDER, onset_loads
from forensics.mechanics.kernels_judge import thresholds
from forensics.mechanics.kernels_march import place_at
from forensics.replay.model import build_model
from forensics.replay.places import place_numbers
from tests.replay.test_memory import case_for
from tests.wells import one_pipe_well

ANGLE = math.radians(60.0)
PLAIN = CriteriaSettings()


class Cheap(SimpleNamespace):
    """As much of a replay as a place asks for."""


def run_with(torque: float | None = 15e3) -> Cheap:
    model = build_model(one_pipe_well(ANGLE, 2000.0), case_for(), 2000.0)
    factor = SimpleNamespace(kind="open", factor=SimpleNamespace(value=0.2))
    columns = {} if torque is None else {"torque": np.array([torque])}
    return Cheap(
        model=model,
        log=SimpleNamespace(get=columns.get, interval=1.0),
        rig=SimpleNamespace(turning=np.array([True])),
        calibration=SimpleNamespace(sections=(factor,), torque_loss=None, rotational=None),
        prepared=SimpleNamespace(samples=SimpleNamespace(bit=np.array([1500.0]), scale=np.array([0.98]))),
    )


def pressed(load: float, low: float, high: float, state: State = State.HELICAL) -> Episode:
    """Make a buckled episode of which only the compression and the state matter."""
    size = Estimate(load, low, high, "replay")
    return Episode(
        id="E001", kind=Kind.BUCKLING, state=state, start=0.0, end=60.0, first=0, last=60, peak=30,
        activity="drill_slide", top_md=1400.0, bottom_md=1480.0, peak_md=1445.0, peak_load_ratio=size,
        peak_compression=size, lost_weight=size, lost_to_buckling=size, probability=0.9,
        consequence=Consequence.NONE, note="helical from 1400 to 1480 m",
    )  # fmt: skip


def test_the_place_is_judged_as_the_replay_judged_it():
    run = run_with()
    at = place_numbers(run, 0, 1445.0, 180e3)
    setting = run.model.setting(0.2, 0.2)
    place = place_at(setting.hole, setting.pipe, 1500.0, 0.98)
    local, _, high = thresholds(setting, place, 5, 2890, -180e3)
    assert at.local == pytest.approx(local, rel=1e-9)
    levels = onset_loads(at.place.stiffness, at.local, at.w_cos)
    assert float(levels[ORDER.index("chen")]) == pytest.approx(high, rel=1e-3)
    assert at.torque == 15e3
    assert math.isnan(place_numbers(run_with(None), 0, 1445.0, 180e3).torque)
    assert place_numbers(run, 0, math.nan, 180e3) is None


def test_episodes_say_what_they_passed_and_what_they_may_have_passed():
    at = place_numbers(run_with(), 0, 1445.0, 180e3)
    chen, wu, mitchell = onset_loads(at.place.stiffness, at.local, at.w_cos).tolist()
    between = with_onsets(pressed(1.05 * chen, 1.02 * chen, 1.08 * chen), at, PLAIN)
    assert between.onsets == "past Chen, short of Wu and Mitchell"
    assert between.note == f"helical from 1400 to 1480 m; published helical onsets: {between.onsets}"
    assert between.onsets_beyond == ""  # a straight hole at 60 deg is what they were published for
    wide = with_onsets(pressed(1.05 * chen, 1.02 * chen, 1.01 * wu), at, PLAIN)
    assert wide.onsets == "past Chen, perhaps past Wu, short of Mitchell"
    assert with_onsets(pressed(2 * mitchell, 2 * mitchell, math.nan), at, PLAIN).onsets == "past all criteria"


def test_routine_running_keeps_its_note():
    at = place_numbers(run_with(), 0, 1445.0, 180e3)
    found = with_onsets(pressed(0.8 * at.local, 0.8 * at.local, 0.9 * at.local, State.SINUSOIDAL), at, PLAIN)
    assert found.onsets == "short of all criteria"
    assert found.note == "helical from 1400 to 1480 m"
    assert with_onsets(found, None, PLAIN) is found


def test_torque_counts_where_the_case_says_so():
    at = place_numbers(run_with(), 0, 1445.0, 180e3)
    chen = float(onset_loads(at.place.stiffness, at.local, at.w_cos)[0])
    episode = pressed(chen - 1e3, chen - 1e3, chen - 1e3)
    assert with_onsets(episode, at, PLAIN).onsets == "short of all criteria"
    wound = with_onsets(episode, at, CriteriaSettings(torque_effect=True))
    assert wound.onsets == "past Chen, short of Wu and Mitchell"
    assert 1e3 < with_onsets(episode, at, PLAIN).onsets_drop < 0.1 * chen
    silent = place_numbers(run_with(None), 0, 1445.0, 180e3)
    assert math.isnan(with_onsets(episode, silent, PLAIN).onsets_drop)


def test_a_place_outside_the_published_range_is_named():
    at = place_numbers(run_with(), 0, 1445.0, 180e3)
    bent = replace(at, place=replace(at.place, build=math.radians(3.0) / 30.0))
    said = with_onsets(pressed(2e5, 2e5, 2e5), bent, PLAIN).onsets_beyond
    assert said.startswith("Chen, Wu and Mitchell hold for 15 to 90 deg")
    assert said.endswith("here 60.0 deg and 3.0 deg/30m")
    field = with_onsets(pressed(2e5, 2e5, 2e5), bent, PLAIN, system="field").onsets_beyond
    assert field.endswith("here 60.0 deg and 3.0 deg/100ft")
    up = replace(at, place=replace(at.place, inclination=math.radians(91.0)))
    assert with_onsets(pressed(2e5, 2e5, 2e5), up, PLAIN).onsets_beyond == ""
