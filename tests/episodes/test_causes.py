"""Causes: signatures planted by hand lead to the cause the trade reads from them."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest

from forensics.case import FrictionSettings
from forensics.episodes.catalogue import Kind
from forensics.episodes.causes.names import PRIOR, Cause
from forensics.episodes.causes.signals import Signals
from forensics.episodes.causes.table import SIGNS, graded
from forensics.episodes.causes.tells import Tells, measure_tells
from forensics.episodes.causes.weigh import UNTOLD, name_cause, rank, weigh
from forensics.episodes.find import find_episodes
from forensics.rig.view import Activity


def test_nothing_measured_is_not_enough_data():
    for kind in (Kind.DRAG, Kind.TORQUE):
        assert name_cause(rank(kind, Tells())) == Cause.NO_DATA.value


@pytest.mark.parametrize("kind", list(Kind))
def test_probabilities_add_up_and_every_weight_has_an_origin(kind):
    views = rank(kind, Tells(**dict.fromkeys(vars(Tells()), 1.0)), 0.8)
    assert sum(v.probability for v in views) == pytest.approx(1.0)
    assert [v.probability for v in views] == sorted((v.probability for v in views), reverse=True)
    assert {v.cause for v in views} == {c.value for c in Cause}
    origins = {e.origin for v in views for e in v.evidence}
    assert origins <= {"mechanics", "trade rule, from memory"}
    assert set(PRIOR[kind]) == set(Cause)


SIGNATURES = (
    (Kind.LOCKUP, Cause.BUCKLING, {"ratio": 2.5, "lost_share": 0.6, "friction": 0.0, "release": 1.0}),
    (Kind.LOCKUP, Cause.FRICTION, {"ratio": 0.6, "lost_share": 0.0, "friction": 3.0}),
    (Kind.DRAG, Cause.FRICTION, {
        "up": 1.5, "down": 1.4, "torque": 1.2, "length": 300.0, "onset": 30.0, "ratio": 0.1, "turning": 0.0,
        "shift": 0.0, "growth": 0.0, "elsewhere": 0.6, "pressure": 0.0, "bed": 0.0, "dogleg": 0.0,
    }),
    (Kind.DRAG, Cause.CLEANING, {
        "up": 2.0, "down": 0.2, "torque": 1.0, "length": 200.0, "growth": 0.8, "elsewhere": 0.1,
        "cleaned": -1.0, "pressure": 1.0, "bed": 300.0, "ratio": 0.0, "turning": 0.1,
    }),
    (Kind.DRAG, Cause.TORTUOSITY, {
        "up": 1.2, "down": 1.1, "elsewhere": 1.1, "dogleg": np.radians(6.0) / 30.0, "length": 25.0,
        "torque": 1.0, "ratio": 0.0, "cleaned": 0.0, "turning": 0.0,
    }),
    (Kind.DRAG, Cause.HANG_UP, {
        "down": 1.5, "up": 0.0, "onset": 0.5, "length": 3.0, "shoe": 4.0, "torque": 0.0, "pressure": 0.0,
        "still": 0.0, "ratio": 0.3, "elsewhere": 0.9,
    }),
    (Kind.DRAG, Cause.STICKING, {
        "up": 2.0, "still": 2400.0, "onset": 0.2, "length": 2.0, "pressure": 0.0, "elsewhere": 0.0,
        "ratio": 0.0, "turning": 0.0, "shoe": 900.0,
    }),
    (Kind.DRAG, Cause.PACK_OFF, {
        "up": 2.0, "down": 1.8, "onset": 0.5, "length": 5.0, "pressure": 4.0, "still": 0.0, "ratio": 0.0,
        "elsewhere": 0.0, "shoe": 900.0, "torque": 1.5,
    }),
    (Kind.DRAG, Cause.SENSOR, {
        "up": 1.2, "down": -1.1, "shift": 1.1, "turning": 1.0, "slips": 2.0, "ratio": 0.0,
    }),
)  # fmt: skip


@pytest.mark.parametrize(("kind", "cause", "tells"), SIGNATURES)
def test_signatures_of_the_trade(kind, cause, tells):
    views = rank(kind, Tells(**tells))
    assert views[0].cause == cause.value
    assert name_cause(views).startswith((cause.value, UNTOLD))


@pytest.mark.parametrize("sign", SIGNS, ids=lambda s: s.name)
def test_signs_stay_silent_without_a_reading(sign):
    assert not np.isfinite(sign.strength(Tells()))


def test_graded_runs_from_contrary_to_plain():
    assert graded(0.2, 0.2, 0.8) == pytest.approx(-1.0)
    assert graded(0.5, 0.2, 0.8) == pytest.approx(0.0)
    assert graded(9.0, 0.2, 0.8) == 1.0
    assert graded(0.0, 12.0, 2.0) == 1.0  # falling scale
    assert np.isnan(graded(np.nan, 0.0, 1.0))


def test_close_causes_are_not_told_apart():
    views = rank(Kind.DRAG, Tells(up=1.2, down=1.1, length=150.0, onset=20.0))
    assert name_cause(views).startswith(UNTOLD)


def first_of(material, kind):
    return next(e for e in find_episodes(material)[0] if e.kind is kind)


def test_a_helical_lockup_is_put_down_to_buckling(make_run):
    run = make_run().buckle(slice(1000, 1300), ratio=2.0, helical=slice(1020, 1280))
    run.rig["wob_surface"][1000:1300] = 150.0e3
    run.loads["straight_drag"][:] = 40.0e3
    run.rig["turning"][1300:1400] = True
    material = run.with_draws().material()
    cause, views = weigh(material, Signals(material), first_of(material, Kind.BUCKLING))
    assert cause == "buckling"
    assert views[0].probability < 0.99
    assert any(e.weight < 0.0 for v in views for e in v.evidence)


def test_friction_alone_is_not_put_down_to_buckling(make_run):
    """The same lost weight, all of it ordinary drag at a factor well above the assumed one."""
    run = make_run().buckle(slice(1000, 1300), ratio=1.05)
    run.rig["wob_surface"][:] = 150.0e3
    run.loads["straight_drag"][:] = 120.0e3
    run.case = replace(run.case, friction=FrictionSettings(open=0.20, cased=0.15))
    material = run.with_draws((0.8, 0.9, 1.0, 1.1)).material()
    episode = first_of(material, Kind.BUCKLING)
    cause, _ = weigh(material, Signals(material), episode)
    assert cause != "buckling"
    assert "friction" in cause


def test_tells_read_other_passes_and_circulation(make_run):
    run = make_run(n=9000).trip("out", slice(1000, 1400))
    run.values["bit_depth"][:] = 3500.0 - 0.1 * np.arange(9000)
    run.values["bit_depth"][5000:] = 3500.0 - 0.1 * (np.arange(4000))  # the same hole once more
    run.loads["drag_residual"][6000:6400] = 0.0
    run.rig["pumping"][:] = True
    material = run.material()
    tells = measure_tells(material, Signals(material), first_of(material, Kind.DRAG))
    assert tells.elsewhere == pytest.approx(0.0)
    assert tells.cleaned == pytest.approx(-1.5, abs=0.1)
    assert tells.length == pytest.approx(39.9, abs=0.2)
    assert tells.onset < 1.0


def test_tells_read_standstill_and_pressure(make_run):
    run = make_run(n=7200).trip("out", slice(2000, 2200))
    run.rig["direction"][500:1990] = 0
    run.loads["drag_residual"][500:1990] = np.nan
    run.values["standpipe_pressure"][2000:2200] = 24.0e6
    material = run.material()
    tells = measure_tells(material, Signals(material), first_of(material, Kind.DRAG))
    assert tells.still == pytest.approx(1490.0, abs=15.0)
    assert tells.pressure > 1.0


def test_a_shifted_sensor_is_seen_in_slips(make_run):
    run = make_run().trip("out", slice(2000, 2400))
    run.rig["slips"][100:200] = run.rig["slips"][1600:1700] = run.rig["slips"][3500:3550] = True
    run.rig["activity"][run.rig["slips"]] = Activity.CONNECTION
    run.rig["hookload"][run.rig["slips"]] = 300.0e3
    run.rig["hookload"][3500:3550] = 350.0e3
    material = run.material()
    signals = Signals(material)
    assert abs(signals.slips_shift(slice(100, 200))) < 0.1
    assert signals.slips_shift(slice(3400, 3600)) > 3.0
