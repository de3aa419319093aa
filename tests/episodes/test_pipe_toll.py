"""What an episode did to the pipe, against the mechanics' own functions on a straight horizontal pipe."""

from __future__ import annotations

import math
from dataclasses import replace
from types import SimpleNamespace

import numpy as np
import pytest

from forensics.episodes import pipe as episodes_pipe
from forensics.episodes.catalogue import Kind
from forensics.episodes.pipe import PipeToll, Turned, parts_of, pipe_tolls
from forensics.loads import Profile
from forensics.mechanics import helix
from forensics.mechanics.kernels_replay import SLIDE
from forensics.mechanics.toll import toll
from forensics.replay import loaded as words
from forensics.replay import torsion
from forensics.replay.loaded import loaded
from forensics.replay.model import build_model
from tests.episodes.test_onsets import pressed
from tests.replay.test_memory import case_for
from tests.wells import DRILL_PIPE, one_pipe_well

BIT = 1500.0
ROWS = 100
PIPE = replace(DRILL_PIPE, yield_strength=931e6)


def run_with(torque: float = 15e3, pressure: float | None = 20e6, turning: bool = True) -> SimpleNamespace:
    """As much of a replay as loads ask for."""
    well = one_pipe_well(math.pi / 2, 2000.0, PIPE)
    channels = {"torque": np.full(ROWS, torque), "rpm": np.full(ROWS, 60.0)}
    if pressure is not None:
        channels["standpipe_pressure"] = np.full(ROWS, pressure)
    factor = SimpleNamespace(kind="open", factor=SimpleNamespace(value=0.2))
    return SimpleNamespace(
        model=build_model(well, case_for(), 2000.0),
        well=well,
        log=SimpleNamespace(get=channels.get, interval=1.0),
        rig=SimpleNamespace(turning=np.full(ROWS, turning)),
        calibration=SimpleNamespace(
            sections=(factor,), torque_loss=None, rotational=SimpleNamespace(value=0.2)
        ),
        prepared=SimpleNamespace(
            samples=SimpleNamespace(bit=np.full(ROWS, BIT), scale=np.ones(ROWS), mode=np.full(ROWS, SLIDE))
        ),
    )


def profile_of(run: SimpleNamespace, row: int = 50, load: float = 250e3) -> Profile:
    """Compression everywhere, helical in the lower half of the string."""
    x = run.model.pipe.x
    top = int(np.searchsorted(x, BIT))
    md = BIT - 0.5 * (x[:top] + np.minimum(x[1 : top + 1], BIT))
    state = np.where(md > BIT / 2, 2, 0).astype(np.int8)
    gap = 0.5 * (0.2159 - PIPE.tool_joint_od)
    side = np.full(top, float(run.model.pipe.weight[0]))
    wall = np.where(state == 2, gap * load**2 / (4 * PIPE.stiffness), 0.0)
    flat = np.full(top, 160e3)
    return Profile(row, 0.0, md, np.full(top, -load), flat, 1.4 * flat, side + wall, state)


def material_of(run: SimpleNamespace, **changes) -> SimpleNamespace:
    """As much of a run's material as the toll asks for."""
    state = np.where(np.arange(ROWS) >= 20, 2, 0).astype(np.int8)
    return SimpleNamespace(
        well=run.well,
        case=replace(case_for(), **changes),
        log=SimpleNamespace(get=run.log.get, interval=1.0),
        time=np.arange(float(ROWS)),
        rig=run.rig,
        loads=SimpleNamespace(state=state, peak_compression=np.linspace(1e5, 2e5, ROWS)),
    )


def test_loads_are_the_profiles_and_the_wells():
    run = run_with()
    profile = profile_of(run)
    at = loaded(run, profile)
    side = float(run.model.pipe.weight[0])
    np.testing.assert_allclose(at.loads.contact, side, rtol=1e-6)  # the helix's own is taken out again
    np.testing.assert_allclose(at.loads.clearance, 0.5 * (0.2159 - PIPE.tool_joint_od))
    np.testing.assert_allclose(at.loads.curvature, 0.0, atol=1e-12)
    density = float(run.well.fluid.typical)
    np.testing.assert_allclose(at.loads.inside - at.loads.outside, 20e6)
    assert float(at.loads.outside[0]) == pytest.approx(density * 9.80665 * run.model.hole.tvd[-1], abs=1e5)


def test_torque_falls_downwards_by_what_the_wall_takes():
    run = run_with(torque=60e3)
    profile = profile_of(run)
    at = loaded(run, profile)
    torque = np.asarray(at.loads.torque)
    assert at.torque_from == torsion.SPREAD
    assert np.all(np.diff(torque) > 0)  # from the bit up
    costs = 0.2 * 0.084 * float(run.model.pipe.weight[0]) * BIT  # exact off bottom in a straight flat hole
    assert torque[-1] < 60e3
    assert torque[0] == pytest.approx(60e3 - costs, rel=0.02)
    light = np.asarray(loaded(run_with(torque=1e3), profile).loads.torque)
    assert 0.0 < light[0] < light[-1] < 1e3  # more friction than torque: scaled, nothing left at the bit


def test_what_is_not_known_is_left_out_and_said():
    run = run_with(torque=math.nan, pressure=None)
    at = loaded(run, profile_of(run))
    assert (at.torque_from, at.pressure_from) == (torsion.NO_TORQUE, words.NO_PRESSURE)
    assert not np.any(at.loads.torque)
    still = run_with(turning=False)
    held = loaded(still, profile_of(still))
    assert held.torque_from == torsion.HELD
    np.testing.assert_array_equal(held.loads.torque, 15e3)


def test_buckled_part_stands_apart_and_bends_as_a_helix():
    run = run_with(pressure=None)
    profile = profile_of(run)
    at = loaded(run, profile)
    straight, buckled = parts_of(material_of(run), at, toll(run.well.string, at.loads), profile.md)
    assert (straight.buckled, buckled.buckled, buckled.state) == (False, True, 2)
    gap = 0.5 * (0.2159 - PIPE.tool_joint_od)
    assert buckled.bending == pytest.approx(float(helix.bending_stress(250e3, gap, PIPE.od, PIPE.inertia)))
    assert straight.bending == pytest.approx(0.0, abs=1.0)
    assert buckled.use == pytest.approx(buckled.stress / 931e6)
    assert buckled.md > BIT / 2 > straight.md
    assert buckled.torque_margin > 0


def test_turns_are_counted_while_buckled_and_ranked(monkeypatch):
    run = run_with()
    monkeypatch.setattr(
        episodes_pipe, "profiles_in_turn", lambda made, rows: (profile_of(made, r, 4e3 * r) for r in rows)
    )
    first = replace(pressed(2e5, 2e5, 2e5), first=0, last=39)
    second = replace(first, id="E002", first=40, last=79)
    drag = replace(first, id="E003", kind=Kind.DRAG)
    taken = {e.id: profile_of(run) for e in (first, second, drag)}
    tolls = pipe_tolls(run, material_of(run), taken, (first, second, drag))
    assert set(tolls) == {"E001", "E002"}
    assert tolls["E001"].turned.revolutions == pytest.approx(20.0)  # 20 s of 40 at 60 rpm were buckled
    assert tolls["E002"].turned.revolutions == pytest.approx(40.0)
    assert (tolls["E001"].turned.rank, tolls["E002"].turned.rank) == (2, 1)
    assert 0.0 < tolls["E001"].turned.share < 0.5
    assert tolls["E002"].turned.share == 1.0


def test_a_string_that_did_not_turn_is_not_ranked():
    run = run_with(turning=False)
    episode = pressed(2e5, 2e5, 2e5)
    (found,) = pipe_tolls(run, material_of(run), {episode.id: profile_of(run)}, (episode,)).values()
    assert isinstance(found, PipeToll)
    assert found.turned is None
    assert Turned(1.0, 1.0).rank is None


def test_an_episode_not_shown_in_detail_has_its_buckled_parts_the_same(monkeypatch):
    run = run_with()
    monkeypatch.setattr(
        episodes_pipe, "profiles_in_turn", lambda made, rows: (profile_of(made, r) for r in rows)
    )
    main = replace(pressed(2e5, 2e5, 2e5), first=0, last=39, peak=10)
    other = replace(main, id="E002", peak=12)
    monkeypatch.setattr(episodes_pipe, "CHUNK", 10)  # in several goes as in one
    tolls = pipe_tolls(run, material_of(run), {main.id: profile_of(run)}, (main, other))
    whole, part = tolls["E001"], tolls["E002"]
    assert [p.buckled for p in whole.parts] == [False, True]
    assert part.parts == whole.parts[1:]
    assert part.torque_from == whole.torque_from

