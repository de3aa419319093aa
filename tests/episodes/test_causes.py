"""Causes: signatures planted by hand lead to the cause the trade reads from them."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest

from forensics.case import FrictionSettings
from forensics.episodes.catalogue import CauseView, Kind
from forensics.episodes.causes import UNTOLD, Usual, weigh
from forensics.episodes.causes.accounts import ACCOUNTS
from forensics.episodes.causes.measures import MEASURES, Measure, Subject, take_all
from forensics.episodes.causes.measures.loads import KINDS
from forensics.episodes.causes.names import Cause
from forensics.episodes.causes.strengths import MOST, TRADE, build, strengths, weights_of
from forensics.episodes.causes.weigh import name_cause, rank
from forensics.episodes.causes.words import cause_sentence
from forensics.episodes.find import find_episodes
from forensics.rig.view import Activity

BY_NAME = {measure.name: measure for measure in MEASURES}

# No simulated incidents: the trade's rules alone.
RULES = build({"doubt": 0.03, "measures": {}})

KIND = {name: float(k) for k, name in enumerate(KINDS)}


def test_every_cause_has_its_account_in_the_order_of_the_names():
    assert [account.cause for account in ACCOUNTS] == list(Cause)


@pytest.mark.parametrize("account", ACCOUNTS, ids=lambda a: a.cause.value)
def test_rules_speak_of_measurements_and_bins_that_are_there(account):
    for name, ratios in account.rules.items():
        assert len(ratios) == BY_NAME[name].bins, name
        assert min(ratios) > 0.0
        assert max(ratios) <= MOST


def test_measurements_are_named_once_and_their_bins_rise():
    assert len(BY_NAME) == len(MEASURES)
    for measure in MEASURES:
        assert np.all(np.diff(measure.edges) > 0.0), measure.name
        assert "{}" in measure.words
        assert not measure.levels or len(measure.levels) == measure.bins


def test_a_value_on_an_edge_belongs_above_it():
    measure = Measure("x", lambda _: 0.0, (1.0, 2.0), "{}")
    assert [measure.bin_of(v) for v in (0.0, 1.0, 1.5, 2.0, 9.0)] == [0, 1, 1, 2, 2]


def test_nothing_measured_is_not_enough_data():
    silent = {"measurements without a reading": 1.0, "channels missing": 6.0}
    for known in (RULES, strengths()):
        assert name_cause(rank(silent, known=known)) == Cause.NO_DATA.value


def test_ratios_shown_are_those_used():
    """Their products, over the sum of all, are the probabilities, less the doubt that all share."""
    values = {"drag going up": 1.4, "torque": 1.0, "stood still before": 30.0}
    views = rank(values, known=RULES)
    products = np.array([np.prod([e.ratio for e in view.evidence]) for view in views])
    expected = (1.0 - RULES.doubt) * products / products.sum() + RULES.doubt / len(Cause)
    np.testing.assert_allclose([v.probability for v in views], expected, rtol=1e-12)
    assert sum(v.probability for v in views) == pytest.approx(1.0)
    assert {v.cause for v in views} == {c.value for c in Cause}
    assert {e.origin for v in views for e in v.evidence} == {TRADE}


SIGNATURES = (
    (Cause.BUCKLING, {
        "kind of episode": KIND["helical buckling"], "load ratio": 2.5, "share lost to buckling": 0.7,
        "chance over the draws": 0.99, "weight answered at the bit": 0.1, "how it ended": 2.0,
        "time helical": 900.0, "time hard to turn": 0.0, "distance off bottom": 0.0, "torque peak": 1.0,
    }),
    (Cause.FRICTION, {
        "kind of episode": KIND["drag"], "calibrated friction": 0.15, "drag going up": 1.5, "torque": 1.2,
        "drag going down": 1.4, "length of hole": 300.0, "onset": 60.0, "rotating weight": 0.0,
        "same shift both ways": 0.0, "pressure at like flow": 0.0, "same depth on other passes": 0.9,
    }),
    (Cause.CLEANING, {
        "kind of episode": KIND["drag"], "drag going up": 2.5, "drag going down": 0.1, "torque": 1.6,
        "growth in time": 0.8, "same depth on other passes": 0.1, "after circulating": -1.5,
        "pressure at like flow": 0.05, "hole where cuttings settle": 600.0, "length of hole": 200.0,
    }),
    (Cause.TORTUOSITY, {
        "kind of episode": KIND["drag"], "drag going up": 1.2, "drag going down": 1.1, "torque": 1.0,
        "same depth on other passes": 1.1, "dogleg at the bit": np.radians(6.0) / 30.0,
        "length of hole": 25.0, "growth in time": 0.0, "after circulating": 0.1,
    }),
    (Cause.HANG_UP, {
        "kind of episode": KIND["lockup"], "drag going up": 0.0, "drag going down": 1.5, "torque": 0.0,
        "stiffness going down": 1.1, "onset": 0.5, "length of hole": 1.0, "near the shoe": 3.0,
        "load ratio": 0.3, "tries at this depth": 4.0, "distance off bottom": 500.0,
    }),
    (Cause.STICKING, {
        "kind of episode": KIND["drag"], "drag going up": 2.5, "stood still before": 2400.0,
        "longest standstill": 2400.0, "breakover peak": 2.5, "pressure at like flow": 0.0,
        "pressure peak": 0.0, "onset": 0.2, "length of hole": 1.0,
    }),
    (Cause.PACK_OFF, {
        "kind of episode": KIND["drag"], "drag going up": 2.2, "drag going down": 1.8, "onset": 0.5,
        "length of hole": 5.0, "pressure at like flow": 0.3, "pressure peak": 0.5, "torque": 1.6,
        "stood still before": 0.0,
    }),
    (Cause.UNDERGAUGE, {
        "kind of episode": KIND["lockup"], "drag going up": 0.0, "drag going down": 2.2,
        "length of hole": 30.0, "distance off bottom": 25.0, "near the shoe": 700.0,
        "pressure at like flow": 0.0, "load ratio": 0.3, "how it ended": 2.0,
    }),
    (Cause.STALL, {
        "kind of episode": KIND["torque"], "differential pressure": 3.5, "slowest drilling": 0.0,
        "drilling rate": 0.05, "torque peak": 2.5,
        "distance off bottom": 0.0,
    }),
    (Cause.SENSOR, {
        "kind of episode": KIND["drag"], "drag going up": 1.2, "drag going down": -1.1,
        "same shift both ways": 1.1, "rotating weight": 1.0, "in-slips change": 2.0, "torque": 0.0,
    }),
    (Cause.NO_DATA, {"channels missing": 6.0, "sampling": 60.0, "measurements without a reading": 0.7}),
)  # fmt: skip


@pytest.mark.parametrize(("cause", "values"), SIGNATURES, ids=lambda x: x if isinstance(x, str) else "")
def test_signatures_of_the_trade(cause, values):
    views = rank(values, known=RULES)
    assert views[0].cause == cause.value
    assert name_cause(views).startswith((cause.value, UNTOLD))


GOOD_LOG = {
    "channels missing": 0.0, "sampling": 1.0, "time without samples": 0.0, "friction not determined": 0.0,
    "measurements without a reading": 0.2,
}  # fmt: skip


@pytest.mark.parametrize(("cause", "values"), SIGNATURES, ids=lambda x: x if isinstance(x, str) else "")
def test_what_was_learned_agrees_with_the_trade(cause, values):
    """A few measurements of many: the learned ratios alone put the trade's cause first or second."""
    leading = [view.cause for view in rank(GOOD_LOG | values)[:2]]
    assert cause.value in leading


def test_learned_counts_take_over_from_the_rule():
    """By hand: ten incidents' worth of rule against 990 counted ones leave a hundredth of the rule."""
    measure = BY_NAME["returns"]
    counts = np.full((len(Cause), measure.bins), 250.0)
    counts[0] = (20.0, 20.0, 20.0, 930.0)
    weights = weights_of(measure, counts, 1.0)
    share, others = (930.0 + 10.0 * 0.25) / 1000.0, 0.25
    usual = (share + (len(Cause) - 1) * others) / len(Cause)
    assert np.exp(weights[0, 3]) == pytest.approx(share / usual, rel=0.02)
    assert np.exp(weights[0, 0]) < 0.2
    half = weights_of(measure, counts, 0.5)
    np.testing.assert_allclose(half, 0.5 * weights, rtol=1e-9)


def test_the_logs_poverty_speaks_of_nothing_but_not_enough_data():
    measure = BY_NAME["sampling"]
    rng = np.random.default_rng(5)
    weights = weights_of(measure, rng.integers(5, 200, (len(Cause), measure.bins)).astype(float), 0.6)
    others = [k for k, cause in enumerate(Cause) if cause is not Cause.NO_DATA]
    np.testing.assert_allclose(weights[others], np.tile(weights[others[0]], (len(others), 1)))
    assert not np.allclose(weights[-1], weights[0])


def test_origins_tell_how_many_incidents_stand_behind():
    counts = {"buckling": [10, 20, 30, 40], "motor stall": [1, 2, 3, 4]}
    known = build({"doubt": 0.0, "measures": {"sampling": {"power": 0.5, "counts": counts}}})
    said = dict(zip(Cause, known.by_measure["sampling"].origins, strict=True))
    assert said[Cause.BUCKLING] == "simulated, 100 incidents"
    assert said[Cause.STALL] == f"simulated, 10 incidents, with the {TRADE}"
    assert said[Cause.PACK_OFF] == TRADE


def test_counts_on_other_bins_are_refused():
    learned = {"doubt": 0.0, "measures": {"sampling": {"power": 0.5, "counts": {"buckling": [1, 2]}}}}
    with pytest.raises(ValueError, match=r"'sampling' was learned on 2 bins and has 4"):
        build(learned)


def chances(*pairs):
    left = (1.0 - sum(p for _, p in pairs)) / max(len(Cause) - len(pairs), 1)
    named = {c for c, _ in pairs}
    return tuple(
        sorted(
            [CauseView(c.value, p) for c, p in pairs]
            + [CauseView(c.value, left) for c in Cause if c not in named],
            key=lambda v: -v.probability,
        )
    )


@pytest.mark.parametrize(
    ("pairs", "cause", "sentence"),
    [
        (((Cause.HANG_UP, 0.9),), "ledge or shoe hang-up",
         "Best-supported cause: ledge or shoe hang-up (90 %)."),
        (
            ((Cause.STALL, 0.6), (Cause.BUCKLING, 0.2)),
            "motor stall",
            "Likeliest cause: motor stall (60 %); not ruled out: buckling (20 %).",
        ),
        (
            ((Cause.HANG_UP, 0.45), (Cause.UNDERGAUGE, 0.40)),
            "can't be told apart: ledge or shoe hang-up or undergauge hole",
            "The causes ledge or shoe hang-up (45 %) and undergauge hole (40 %) can't be told apart.",
        ),
        (((Cause.NO_DATA, 0.4), (Cause.SENSOR, 0.3)), "not enough data",
         "The log does not show enough to name a cause."),
    ],
)  # fmt: skip
def test_words_are_no_surer_than_the_probabilities(pairs, cause, sentence, make_run):
    views = chances(*pairs)
    assert name_cause(views) == cause
    material = make_run().trip("out", slice(1000, 1400)).material()
    episode = replace(first_of(material, Kind.DRAG), cause=cause, causes=views)
    assert cause_sentence(episode) == sentence


def first_of(material, kind):
    return next(e for e in find_episodes(material)[0] if e.kind is kind)


def taken(material, kind):
    return take_all(Subject(material, Usual(material), first_of(material, kind)))


def test_a_helical_lockup_is_put_down_to_buckling(make_run):
    run = make_run().buckle(slice(1000, 1300), ratio=2.0, helical=slice(1020, 1280))
    run.rig["wob_surface"][1000:1300] = 150.0e3
    run.loads["straight_drag"][:] = 40.0e3
    run.rig["turning"][1300:1400] = True
    material = run.with_draws().material()
    _, views = weigh(material, Usual(material), first_of(material, Kind.BUCKLING))
    assert views[0].cause == "buckling"
    assert views[0].probability < 0.99
    assert any(e.weight < 0.0 for v in views for e in v.evidence)


def test_friction_alone_is_not_put_down_to_buckling(make_run):
    """The same lost weight, all of it ordinary drag at a factor well above the assumed one."""
    run = make_run().buckle(slice(1000, 1300), ratio=1.05)
    run.rig["wob_surface"][:] = 150.0e3
    run.loads["straight_drag"][:] = 120.0e3
    run.case = replace(run.case, friction=FrictionSettings(open=0.20, cased=0.15))
    material = run.with_draws((0.8, 0.9, 1.0, 1.1)).material()
    values = taken(material, Kind.BUCKLING)
    assert values["calibrated friction"] == pytest.approx(0.10)
    assert values["share lost to buckling"] == pytest.approx(0.0)
    ranked = {v.cause: v.probability for v in rank(values, known=RULES)}
    assert ranked[Cause.FRICTION.value] > ranked[Cause.BUCKLING.value]


def test_other_passes_and_circulation_are_read(make_run):
    run = make_run(n=9000).trip("out", slice(1000, 1400))
    run.values["bit_depth"][:] = 3500.0 - 0.1 * np.arange(9000)
    run.values["bit_depth"][5000:] = 3500.0 - 0.1 * (np.arange(4000))  # the same hole once more
    run.loads["drag_residual"][6000:6400] = 0.0
    run.rig["pumping"][:] = True
    values = taken(run.material(), Kind.DRAG)
    assert values["same depth on other passes"] == pytest.approx(0.0)
    assert values["after circulating"] == pytest.approx(-1.5, abs=0.1)
    assert values["length of hole"] == pytest.approx(39.9, abs=0.2)
    assert values["onset"] < 1.0


def test_standstill_and_pressure_are_read(make_run):
    run = make_run(n=7200).trip("out", slice(2000, 2200))
    run.rig["direction"][500:1990] = 0
    run.loads["drag_residual"][500:1990] = np.nan
    run.values["standpipe_pressure"][2000:2200] = 24.0e6
    values = taken(run.material(), Kind.DRAG)
    assert values["stood still before"] == pytest.approx(1490.0, abs=15.0)
    assert values["longest standstill"] == pytest.approx(1490.0, abs=15.0)
    assert values["pressure at like flow"] == pytest.approx(0.2, abs=0.01)
    assert values["pressure peak"] == pytest.approx(0.2, abs=0.02)


def test_a_shifted_sensor_is_seen_in_slips(make_run):
    run = make_run().trip("out", slice(2000, 2400))
    run.rig["slips"][100:200] = run.rig["slips"][1600:1700] = run.rig["slips"][3500:3550] = True
    run.rig["activity"][run.rig["slips"]] = Activity.CONNECTION
    run.rig["hookload"][run.rig["slips"]] = 300.0e3
    run.rig["hookload"][3500:3550] = 350.0e3
    values = taken(run.material(), Kind.DRAG)
    assert values["in-slips change"] > 3.0


def test_a_step_counts_only_with_all_else_unchanged(make_run):
    def with_step(change):
        run = make_run().trip("out", slice(2000, 2400))
        run.rig["direction"][1800:1900] = 0
        run.rig["hookload"][1850:] += 80.0e3
        change(run)
        return taken(run.material(), Kind.DRAG)["step of the reading"]

    threshold = make_run().trip("out", slice(2000, 2400)).material().drag_threshold[2000]
    assert with_step(lambda _: None) == pytest.approx(80.0e3 / threshold, rel=0.2)

    def pumps_off(run):
        run.rig["pumping"][1850:] = False

    assert with_step(pumps_off) == pytest.approx(0.0, abs=0.05)


def test_a_stalled_motor_is_read_from_pressure_and_progress(make_run):
    run = make_run(n=7200)
    run.rig["hole_depth"][:] = 4000.0 + 0.005 * np.arange(7200)
    run.rig["hole_depth"][3000:] = np.maximum(run.rig["hole_depth"][3000:] - 0.005 * 600, 4015.0)
    run.values["bit_depth"][:] = run.rig["hole_depth"]
    run.rig["direction"][:] = 0
    run.loads["torque_residual"][:] = 0.0
    run.loads["torque_residual"][3100:3400] = 9.0e3
    run.values["torque"][:] = 10.0e3
    run.rig["turning"][:] = True
    run.values["differential_pressure"][3050:3400] = 7.0e6
    values = taken(run.material(), Kind.TORQUE)
    assert values["differential pressure"] == pytest.approx(3.5, rel=0.05)
    assert values["slowest drilling"] == pytest.approx(0.0, abs=0.01)
    assert values["distance off bottom"] == pytest.approx(0.0, abs=0.01)


def test_hookload_that_falls_like_a_held_string_is_stiff(make_run):
    run = make_run().trip("in", slice(2000, 2100))
    material = run.material()
    rate = material.spring_rate[2000]
    run.rig["block"][1990:2100] = 20.0 - 0.02 * np.arange(110)
    run.rig["hookload"][1990:2100] = 650.0e3 - rate * 0.02 * np.arange(110)
    values = taken(run.material(), Kind.DRAG)
    assert values["stiffness going down"] == pytest.approx(1.0, rel=0.05)


def test_a_bare_log_leaves_measurements_without_a_reading(make_run):
    run = make_run().trip("out", slice(2000, 2400))
    full = taken(run.material(), Kind.DRAG)
    run.values = {name: run.values[name] for name in ("bit_depth", "hookload")}
    bare = taken(run.material(), Kind.DRAG)
    assert bare["channels missing"] == 6.0
    assert full["channels missing"] == 0.0
    name = "measurements without a reading"
    assert bare[name] > full[name]
    for measure in ("pressure at like flow", "differential pressure", "torque peak", "stood still before"):
        assert np.isnan(bare[measure]), measure
