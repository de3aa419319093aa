"""Readings that ran into the end of their scale, and rows that repeat the row before."""

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from forensics.logs.quality import clean
from forensics.logs.repeats import find_repeats
from forensics.logs.saturated import find_ceiling, find_full_scale

RNG = np.random.default_rng(7)
LIVELY = 12.0 + RNG.standard_normal(2000)


@pytest.mark.parametrize("end", [32767.0, -32768.0, 65535.0, 3276.7, 327.67, -327.68, 65.535])
def test_the_end_of_a_count_is_found_plain_or_scaled(end):
    values = LIVELY.copy()
    values[[40, 41, 900]] = end
    assert np.flatnonzero(find_full_scale(values)).tolist() == [40, 41, 900]


def test_one_such_reading_or_one_amid_larger_ones_is_a_reading():
    assert not find_full_scale(np.array([1.0, 327.67, 3.0])).any()
    assert not find_full_scale(np.array([327.67, 327.67, 327.67, 900.0])).any()


@given(st.lists(st.floats(allow_infinity=False), max_size=30))
def test_full_scale_is_only_ever_an_end_of_a_count(values):
    values = np.array(values, dtype=float)
    digits = [str(abs(v)).replace(".", "").rstrip("0") for v in values[find_full_scale(values)]]
    assert set(digits) <= {"32767", "32768", "65535"}


def test_a_ceiling_that_cuts_a_lively_channel_is_found():
    found = find_ceiling(np.minimum(LIVELY + 3.0 * np.sin(np.arange(2000) / 50.0), 14.0))
    assert found.value == 14.0
    assert found.rows > 100
    assert found.longest >= 4


@pytest.mark.parametrize(
    "values",
    [
        LIVELY,
        np.round(LIVELY),
        np.full(500, 7.0),
        np.r_[np.zeros(400), np.full(400, 60.0)],
        np.full(500, np.nan),
        np.zeros(0),
        -np.abs(LIVELY).clip(12.0),
    ],
    ids=["noise", "coarse", "constant", "set point", "missing", "empty", "below zero"],
)
def test_no_ceiling_where_the_largest_value_is_one_like_others(values):
    assert find_ceiling(values) is None


def rig(rows, **more):
    time = np.arange(float(rows))
    base = {
        "hookload": 1.2e6 + 5e3 * RNG.standard_normal(rows),
        "bit_depth": 2000.0 + 0.01 * time,
        "torque": 12e3 + 400.0 * RNG.standard_normal(rows),
        "rpm": 120.0 + RNG.standard_normal(rows),
    }
    return time, base | more


def test_a_cut_torque_is_told_and_kept():
    time, values = rig(3000)
    values["torque"] = np.minimum(values["torque"] + 2e3 * np.sin(time / 90.0), 13e3)
    work = clean(time, values, 1.0)
    assert np.nanmax(work.values["torque"]) == 13e3
    assert any("torque was held at 13.00 kN.m" in words for words in work.warnings)
    assert ("at its ceiling", "torque") in {(step.name, step.channel) for step in work.steps}


@pytest.mark.parametrize("stride", [2, 5])
def test_a_step_filled_record_is_told_with_its_share(stride):
    time, values = rig(3000)
    whole = np.arange(3000) // stride * stride
    work = clean(time, {name: data[whole] for name, data in values.items()}, 1.0)
    said = [words for words in work.warnings if "step-filled" in words]
    assert said[0].startswith(f"{100 - 100 // stride} % of")
    assert f"every {stride} s" in said[0]


def test_rows_of_a_rig_at_rest_do_not_count():
    held = {"hookload": np.full(900, 5e5), "torque": np.r_[np.zeros(899), 1.0]}
    assert find_repeats(held, np.full(900, 2000.0)).rows == 0


def test_a_record_as_often_as_written_repeats_nothing():
    _, values = rig(3000)
    assert find_repeats(values, values["bit_depth"]).same == 0


@pytest.mark.parametrize(
    ("channel", "value", "read_in", "likely"),
    [
        ("mud_density", 11.2 * 1000.0, "g/cm3", "ppg"),
        ("mud_density", 1.25 * 119.826, "ppg", "g/cm3"),
        ("standpipe_pressure", 3000.0 * 1e5, "bar", "psi"),
        ("standpipe_pressure", 250.0, "Pa", "bar"),
        ("rpm", 1.36, "rpm", "rev/s"),
        ("flow_in", 500.0 * 2.65e-3, "bbl/min", "gal/min"),
        ("torque", 12.0, "N.m", "kN.m"),
    ],
)
def test_a_unit_that_can_not_be_is_told_with_the_likely_one(channel, value, read_in, likely):
    time, values = rig(400, flow_in=np.full(400, 0.03))
    values[channel] = value * (1.0 + 0.01 * RNG.standard_normal(400))
    work = clean(time, values, 1.0, {channel: read_in})
    assert channel not in work.values
    (words,) = [w for w in work.warnings if w.startswith(channel.replace("_", " "))]
    assert f" {likely} (" in words.split("likely in")[1]
    assert f"under [logs.channels] {channel}" in words


@pytest.mark.parametrize(
    ("channel", "value", "read_in", "likely"),
    [
        ("flow_in", 2050 * 6.309e-5, "gpm", "L/min"),
        ("flow_in", 0.034, "L/min", None),
        ("standpipe_pressure", 218 * 6894.76, "psi", "bar"),
        ("standpipe_pressure", 22e5, "bar", "MPa"),
        ("standpipe_pressure", 218e5, "bar", None),
    ],
)
def test_what_is_possible_but_not_usual_is_told_and_kept(channel, value, read_in, likely):
    time, values = rig(400, flow_in=np.full(400, 0.034), standpipe_pressure=np.full(400, 2e7))
    values[channel] = value * (1.0 + 0.01 * RNG.standard_normal(400))
    work = clean(time, values, 1.0, {channel: read_in})
    assert channel in work.values
    said = [words for words in work.warnings if "is not usual" in words]
    assert bool(said) is (likely is not None)
    if likely:
        assert f" {likely} (" in said[0].split("likely in")[1]
