"""A log that contradicts its case is told of, one that does not is left alone."""

from dataclasses import replace

import numpy as np
import pytest

from forensics.logs.table import FileRecord, TimeLog
from forensics.rig.contradictions import contradictions
from forensics.rig.steady import KINDS
from forensics.rig.understand import understand_rig

N = 4000
BIT = np.linspace(1900.0, 2400.0, N)


@pytest.fixture
def log_with():
    def make(**channels):
        values = {"bit_depth": BIT, "hookload": np.full(N, 6e5)} | channels
        return TimeLog(
            time=np.arange(float(N)), values=values, hookload_logged=values["hookload"],
            used=np.ones(N, dtype=bool), reason=np.zeros(N, dtype=np.int8), interval=1.0,
        )  # fmt: skip

    return make


def surveyed(well, behind=18.0):
    rng = np.random.default_rng(3)
    return well.trajectory.at(BIT - behind).inclination + np.radians(0.2) * rng.standard_normal(N)


def test_a_log_that_fits_says_nothing(log_with, well):
    log = log_with(
        inclination=surveyed(well), bit_tvd=well.trajectory.position(BIT)[:, 2] + 1.0,
        mud_density=np.full(N, well.fluid.typical * 1.01),
    )  # fmt: skip
    assert contradictions(log, well) == ()


def test_another_holes_inclination_is_told(log_with, well):
    (words,) = contradictions(log_with(inclination=surveyed(well) - np.radians(6.0)), well)
    assert "survey does not fit" in words
    assert "6" in words


def test_radians_are_named(log_with, well):
    (words,) = contradictions(log_with(inclination=np.radians(surveyed(well))), well)
    assert "radians" in words


@pytest.mark.parametrize(("tilt", "cause"), [(0.0, "datum"), (0.05, "another hole")])
def test_another_vertical_depth_is_told(log_with, well, tilt, cause):
    tvd = well.trajectory.position(BIT)[:, 2] - 54.9 + tilt * (BIT - BIT[0])
    (words,) = contradictions(log_with(bit_tvd=tvd), well)
    assert cause in words


def test_another_mud_is_told(log_with, well):
    (words,) = contradictions(log_with(mud_density=np.full(N, 1.15 * well.fluid.typical)), well)
    assert "mud density" in words


def test_torque_in_two_units_is_told(log_with, well):
    half = N // 2
    turning = np.full(N, 100.0)
    torque = np.where(np.arange(N) < half, 12e3, 12e3 / 1.3558)
    log = log_with(torque=torque, rpm=turning, bit_depth=np.full(N, 2400.0))
    files = tuple(
        FileRecord(name, "", "CSV", half, float(a), float(b), 1.0)
        for name, a, b in (("one.csv", 0, half - 1), ("two.csv", half, N - 1))
    )
    (words,) = contradictions(replace(log, files=files), well)
    assert "ft.lbf" in words
    same = replace(log, files=files, values={**log.values, "torque": np.full(N, 12e3)})
    assert contradictions(same, well) == ()


@pytest.mark.parametrize(("share", "told"), [(1.0, False), (0.85, True)])
def test_a_string_lighter_than_listed_is_told(well, drilled, tools, share, told):
    log = tools.log(drilled)
    block = drilled.block_alone
    hook = block + share * (log.values["hookload"] - block)
    light = replace(log, values={**log.values, "hookload": hook}, hookload_logged=hook)
    view = understand_rig(light, well, tools.case(block_weight=block))
    words = contradictions(light, well, view)
    assert bool(words) is told
    if told:
        assert "rotating weights" in words[0]


@pytest.mark.parametrize(("share", "told"), [(1.0, False), (0.7, True)])
def test_where_nothing_turned_pick_ups_and_slack_offs_are_held_against_the_string(
    well, drilled, tools, share, told
):
    log = tools.log(drilled)
    block = drilled.block_alone
    view = understand_rig(log, well, tools.case(block_weight=block))
    steady = view.steady.take(view.steady.kind != KINDS.index("rotating"))
    steady = replace(steady, value=block + share * (steady.value - block))
    words = contradictions(log, well, replace(view, steady=steady))
    assert bool(words) is told
    if told:
        assert "means of pick-up and slack-off weights" in words[0]
        assert "% of what" in words[0]
