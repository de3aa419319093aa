"""The bit's own witnesses on an invented run whose bit load is known at every second."""

from __future__ import annotations

from types import SimpleNamespace

import numpy as np
import pytest

from forensics.loads import Basis, BitWitness, RateLaw, Response
from forensics.logs.table import TimeLog
from forensics.replay.windows import rotary_windows
from forensics.replay.witness.agree import check_rows, overall
from forensics.replay.witness.by_rate import SLOWER, Footage, hear_rate
from forensics.replay.witness.combine import UNSEEN, combine, lean
from forensics.replay.witness.downhole import hear_gauge
from forensics.replay.witness.friction import Telling, friction_ratio
from forensics.replay.witness.pressure import Lesson, hear_pressure
from forensics.replay.witness.respond import Heard
from forensics.replay.witness.zero import zero_line
from forensics.rig.view import Activity

STAND = 2400
STANDS = 10
FLOW = 0.035
PER_LOAD = 30.0  # Pa/N


class Job:
    """Stand after stand: 300 s off bottom, 1200 s turning, 900 s sliding at another load."""

    def __init__(self, seed=3):
        self.random = np.random.default_rng(seed)
        n = STAND * STANDS
        self.time = np.arange(n, dtype=float)
        part = np.arange(n) % STAND
        self.off = part < 300
        self.turns = (part >= 300) & (part < 1500)
        self.slides = part >= 1500
        swing = np.interp(self.time, self.time[::97], self.random.normal(0.0, 6e3, len(self.time[::97])))
        self.load = np.where(self.off, 0.0, np.where(self.turns, 80e3, 35e3) + swing)
        activity = np.where(self.turns, Activity.DRILL_ROTATE, Activity.DRILL_SLIDE)
        self.rig = SimpleNamespace(
            activity=np.where(self.off, Activity.CIRCULATE, activity).astype(np.int8),
            pumping=np.ones(n, dtype=bool),
            on_bottom=~self.off,
            slips=np.zeros(n, dtype=bool),
            hole_depth=np.full(n, 3000.0),
            usual_flow=FLOW,
            noise={"bit_depth": 0.0},
        )
        self.bit = np.where(self.off, 2995.0, 3000.0)

    def walk(self, rate):
        """Give a zero that walks by `rate` a root second."""
        return np.cumsum(self.random.normal(0.0, rate, len(self.time)))

    def lesson(self, **channels):
        """Lay the channels beside the run, the bit load known only while turning."""
        n = len(self.time)
        values = {"bit_depth": self.bit, "hookload": self.load, "flow_in": np.full(n, FLOW), **channels}
        used = np.ones(n, dtype=bool)
        log = TimeLog(self.time, values, self.load, used, np.zeros(n, dtype=np.int8), 1.0)
        known = np.where(self.slides, np.nan, self.load)
        return Lesson(log, self.rig, rotary_windows(log, self.rig), known)


@pytest.fixture
def job():
    return Job()


def errors(job, heard):
    """Give error in newtons and in standard errors over the slides, away from their ends."""
    rows = job.slides & np.roll(job.slides, 60) & np.roll(job.slides, -60) & np.isfinite(heard.load)
    assert rows.sum() > 0.5 * job.slides.sum()
    error = heard.load[rows] - job.load[rows]
    return error, error / heard.sigma[rows]


def test_differential_pressure_with_a_forgotten_zero_tells_the_slid_load(job):
    pressure = PER_LOAD * job.load + 8e5 + job.walk(1.5e3) + job.random.normal(0.0, 0.5e5, len(job.time))
    heard = hear_pressure(job.lesson(differential_pressure=pressure), "differential_pressure")
    error, sigmas = errors(job, heard)
    assert heard.response.slope == pytest.approx(PER_LOAD, rel=0.03)
    assert np.sqrt(np.mean(error**2)) < 4e3
    assert 0.4 < np.sqrt(np.mean(sigmas**2)) < 1.6
    assert heard.response.basis is Basis.DIFFERENTIAL


def test_standpipe_pressure_speaks_only_at_the_flow_of_its_zero(job):
    flow = np.where((job.time > 9600) & (job.time < 10500), 0.8 * FLOW, FLOW)
    losses = 180e5 * (flow / FLOW) ** 1.8
    pressure = losses + PER_LOAD * job.load + job.random.normal(0.0, 0.5e5, len(job.time))
    heard = hear_pressure(job.lesson(standpipe_pressure=pressure, flow_in=flow), "standpipe_pressure")
    error, _ = errors(job, heard)
    assert np.abs(error).max() < 8e3
    assert np.isnan(heard.load[9700:10400]).all()
    assert sum(heard.response.set_aside.values()) >= 600


def test_a_pressure_that_does_not_follow_the_load_is_not_heard(job):
    noise = 5e5 + job.random.normal(0.0, 2e5, len(job.time))
    found = hear_pressure(job.lesson(differential_pressure=noise), "differential_pressure")
    assert isinstance(found, Response)
    assert not found.heard
    assert "load" in found.why


def test_a_pressure_without_a_reading_off_bottom_has_no_zero(job):
    job.rig.on_bottom = np.ones(len(job.time), dtype=bool)
    found = hear_pressure(job.lesson(differential_pressure=PER_LOAD * job.load), "differential_pressure")
    assert "off bottom" in found.why


def mud_pulse(job, delay=90, hold=20, tare=60e3, scale=1.0):
    """Weight on bit as telemetry brings it: untared, held between updates, late."""
    late = np.concatenate([np.full(delay, job.load[0]), job.load[: len(job.load) - delay]]) + tare
    late = scale * (late + job.random.normal(0.0, 1e3, len(late)))
    return late[np.arange(len(late)) // hold * hold]


def test_downhole_weight_is_tared_and_brought_back_in_time(job):
    heard = hear_gauge(job.lesson(downhole_wob=mud_pulse(job)), "downhole_wob")
    assert heard.response.delay == pytest.approx(100.0, abs=15.0)  # the delay, and half a hold
    error, _ = errors(job, heard)
    assert abs(error.mean()) < 1.5e3
    assert np.sqrt(np.mean(error**2)) < 4e3
    assert heard.response.basis is Basis.DOWNHOLE


@pytest.mark.parametrize(
    ("scale", "word"), [(1e-3, "unit"), (4.448, "unit"), (0.5, "0.50 times"), (-1.0, "do not go")]
)
def test_a_downhole_weight_that_can_not_be_newtons_is_set_aside(job, scale, word):
    found = hear_gauge(job.lesson(downhole_wob=mud_pulse(job, scale=scale)), "downhole_wob")
    assert isinstance(found, Response)
    assert word in found.why


def test_a_frozen_gauge_is_silent_while_it_stands_still_and_counted(job):
    signal = mud_pulse(job)
    signal[12000:15000] = signal[12000]
    heard = hear_gauge(job.lesson(downhole_wob=signal), "downhole_wob")
    assert np.isnan(heard.load[12200:14800]).all()
    assert heard.response.set_aside["stood still with the pumps on"] >= 2900
    assert np.abs(errors(job, heard)[0].mean()) < 1.5e3


def test_a_gauge_frozen_all_along_is_refused(job):
    found = hear_gauge(job.lesson(downhole_wob=np.full(len(job.time), 50e3)), "downhole_wob")
    assert found.why == "it stood still"


def test_a_gauge_without_a_reading_off_bottom_can_not_be_tared(job):
    job.rig.on_bottom = np.ones(len(job.time), dtype=bool)
    found = hear_gauge(job.lesson(downhole_wob=mud_pulse(job)), "downhole_wob")
    assert "tared" in found.why


def test_downhole_torque_learns_its_own_slope(job):
    heard = hear_gauge(job.lesson(downhole_torque=0.05 * job.load + 700.0), "downhole_torque")
    assert heard.response.slope == pytest.approx(0.05, rel=0.01)
    assert np.abs(errors(job, heard)[0]).max() < 6e3


def test_the_error_of_a_walking_zero_covers_it(job):
    inside = []
    for seed in range(12):
        job.random = np.random.default_rng(seed)
        zero = job.walk(1e3)
        found = zero_line(job.time, zero + job.random.normal(0.0, 2e3, len(zero)), job.off, 20.0)
        rows = np.flatnonzero(job.slides)[::450]
        inside.append(np.abs(found.line[rows] - zero[rows]) < 1.645 * found.sigma[rows])
    assert 0.82 < np.mean(inside) < 0.97


def heard(load, sigma, basis=Basis.DIFFERENTIAL):
    response = Response("one", basis, heard=True)
    return Heard(response, np.atleast_1d(np.asarray(load, float)), np.atleast_1d(np.asarray(sigma, float)))


def test_witnesses_are_weighed_by_inverse_variance():
    load, sigma, basis = combine([heard(40e3, 3e3), heard(45e3, 4e3, Basis.DOWNHOLE)], 1)
    assert load[0] == pytest.approx((40e3 / 9 + 45e3 / 16) / (1 / 9 + 1 / 16))
    assert sigma[0] == pytest.approx(1e3 / np.sqrt(1 / 9 + 1 / 16))
    assert basis[0] == Basis.DIFFERENTIAL


def test_witnesses_that_disagree_are_sure_of_less():
    _, sigma, _ = combine([heard(40e3, 1e3), heard(50e3, 1e3)], 1)
    assert sigma[0] == pytest.approx(np.sqrt(50.0) * 1e3 / np.sqrt(2.0))


def test_a_silent_witness_leaves_the_word_to_the_other():
    load, sigma, basis = combine([heard(np.nan, 1e3), heard(50e3, 2e3, Basis.DOWNHOLE)], 1)
    assert (load[0], sigma[0], basis[0]) == (50e3, 2e3, Basis.DOWNHOLE)
    nothing, _, _ = combine([], 3)
    assert np.isnan(nothing).all()


def told(own, theirs, theirs_sigma, n=600, drag=100e3):
    flat = np.full(n, 1.0)
    return Telling(
        np.arange(n, dtype=float), own * flat, 5e3 * flat, theirs * flat, theirs_sigma * flat, drag * flat,
        np.ones(n, dtype=bool),
    )  # fmt: skip


def test_friction_moves_to_where_the_two_bit_loads_meet():
    slide = np.ones(600, dtype=bool)
    # far apart: the string rubs more than was read, by all of the difference
    ratio, beyond = friction_ratio(told(70e3, 30e3, 1.0), slide)
    assert ratio == pytest.approx(1.4, abs=1e-3)
    assert not beyond.any()
    # not far enough apart for a proof: the load gives way by inverse variance, friction stays
    ratio, beyond = friction_ratio(told(36e3, 30e3, 5e3), slide)
    assert np.all(ratio == 1.0)
    assert beyond == pytest.approx(3e3)
    # a witness that knows little moves little
    assert friction_ratio(told(36e3, 30e3, 50e3), slide)[1] == pytest.approx(0.0, abs=100.0)


def test_the_witness_stands_in_where_the_hookload_is_silent():
    n = 300
    flat = np.ones(n)
    witness = BitWitness(
        20e3 * flat, UNSEEN * flat, np.full(n, Basis.DOWNHOLE, dtype=np.int8), 10e3 * flat, 5e3 * flat, flat,
        2e3 * flat,
    )  # fmt: skip
    basis = np.array([Basis.HOOKLOAD, Basis.MEMORY, Basis.DIFFERENTIAL], dtype=np.int8).repeat(100)
    load, resting = lean(witness, 10e3 * flat, basis, np.ones(n, dtype=bool), 61)
    assert load[50] == 8e3  # two sigma apart: the hookload shows the bit, and gives way a little
    assert load[150] == pytest.approx(15e3)
    assert (load[250], resting[250]) == (20e3, Basis.DOWNHOLE)
    flatly, resting = lean(witness, 60e3 * flat, basis, np.ones(n, dtype=bool), 61)
    assert flatly[50] < 25e3
    assert resting[50] == Basis.DOWNHOLE
    off, _ = lean(witness, 60e3 * flat, basis, np.zeros(n, dtype=bool), 61)
    assert np.array_equal(off, 60e3 * flat)


def test_compression_is_not_footage():
    n, law, load = 1200, RateLaw(1e-7, 1.0, True, 100, 0.05), 40e3
    drilled = law.rate * SLOWER * load * np.arange(n)
    shorter = np.linspace(0.0, 0.6, n)  # the string takes up weight, all along it
    top = -shorter / 1e-5
    own = shorter / 1e-5
    time = np.arange(n, dtype=float)
    values = {"bit_depth": 3000.0 + drilled + shorter, "hookload": top}
    log = TimeLog(time, values, top, np.ones(n, dtype=bool), np.zeros(n, dtype=np.int8), 1.0)
    rig = SimpleNamespace(noise={})
    footage = Footage(top, own, 1e-5)
    assert footage.shortening(0, n - 1) == pytest.approx(0.6)
    found = hear_rate(log, rig, law, [(0, n)], footage)
    assert found.load == pytest.approx(load, rel=1e-6)
    blind = hear_rate(log, rig, law, [(0, n)], Footage(np.zeros(n), np.zeros(n), 1e-5))
    assert np.all(blind.load > 1.1 * load)


def test_agreement_over_a_slide_and_over_the_run():
    n = 400
    random = np.random.default_rng(1)
    true = 40e3 + 10e3 * np.sin(np.arange(n) / 30.0)
    flat = np.ones(n)
    heard, basis = true + random.normal(0, 1e3, n), np.full(n, Basis.DIFFERENTIAL, dtype=np.int8)
    witness = BitWitness(heard, 3e3 * flat, basis, true + 5e3, 4e3 * flat, flat, 0.0 * flat)
    time = np.arange(n, dtype=float)
    first, second = check_rows(witness, 0, 199, time), check_rows(witness, 200, 399, time)
    assert first.difference == pytest.approx(5e3, abs=300.0)
    assert first.correlation > 0.97
    assert 3e3 < first.sigma < 5e3  # the shared part does not average out
    both = overall((first, second))
    assert both.rows == 400
    assert both.sigma == pytest.approx(np.hypot(first.sigma, second.sigma) / 2.0)
    assert check_rows(witness, 0, 2, time) is None
    assert overall(()) is None
