"""Hand-kept tables: weights and slides."""

from dataclasses import replace

import numpy as np
import pytest

from forensics.case import Case, FluidSettings, LogSettings, RecordSettings
from forensics.errors import TableError
from forensics.logs.records import RecordedSlide, read_slides, read_weights
from forensics.logs.table import TimeLog

NOON = 1714737600.0  # 2024-05-03T12:00:00Z


@pytest.fixture
def log():
    time = NOON + 10.0 * np.arange(361)
    rows = len(time)
    depth = np.linspace(3000.0, 3036.0, rows)
    depth[5] = np.nan
    values = {"bit_depth": depth, "hookload": np.full(rows, 1e6)}
    return TimeLog(
        time, values, values["hookload"], np.ones(rows, bool), np.zeros(rows, np.int8), interval=10.0
    )


@pytest.fixture
def case(tmp_path):
    def make(weights=None, slides=None, timezone="UTC"):
        paths = {}
        for name, text in (("weights", weights), ("slides", slides)):
            if text is not None:
                paths[name] = tmp_path / f"{name}.csv"
                paths[name].write_text(text)
        made = Case(
            path=tmp_path / "case.toml", id="x", title="x", logs=LogSettings((), timezone=timezone),
            survey=tmp_path, hole=tmp_path, string=tmp_path, fluid=FluidSettings(density=1200.0),
        )  # fmt: skip
        return replace(made, records=RecordSettings(**paths))

    return make


def test_a_case_without_records_has_none(case, log):
    assert read_weights(case(), log) == ()
    assert read_slides(case()) == ()


def test_weights_by_time_find_their_depth_in_the_log(case, log):
    text = "time,PU [klbf],SO (klbf),rotating [klbf],pumps\n2024-05-03T12:30:00Z,250,,220,1\n"
    up, turning = read_weights(case(text), log)
    assert (up.kind, turning.kind) == ("pick_up", "rotating")
    assert up.value == pytest.approx(250e3 * 4.4482216, rel=1e-6)  # pound-force by definition
    assert up.bit_depth == pytest.approx(3018.0)
    assert (up.time, up.pumping) == (NOON + 1800.0, True)


def test_stamps_without_a_zone_take_the_case_s(case, log):
    (up,) = read_weights(case("time,pick_up [kN]\n2024-05-03 14:30,900\n", timezone="+02:00"), log)
    assert up.time == NOON + 1800.0


def test_a_weight_outside_the_log_has_no_depth(case, log):
    (up,) = read_weights(case("time,pick_up [kN]\n2024-05-04 14:30,900\n"), log)
    assert np.isnan(up.bit_depth)


def test_weights_by_depth_have_no_time(case, log):
    (down,) = read_weights(case("depth [ft],slack_off [kN]\n10000,700\n"), log)
    assert down.bit_depth == pytest.approx(3048.0)
    assert np.isnan(down.time)
    assert down.pumping is None


@pytest.mark.parametrize(
    ("text", "match"),
    [
        ("pick_up [kN]\n900\n", "neither 'time' nor 'depth'"),
        ("time,depth [m],pick_up [kN]\n2024-05-03,1,900\n", "both 'time' and 'depth'"),
        ("depth [m],remark\n1,2\n", "has no weight"),
        ("depth [m],pick_up\n1,2\n", "unit"),
        ("time,pick_up [kN]\nyesterday,2\n", "yesterday"),
    ],
)
def test_weights_that_cannot_be_used_are_refused(case, log, text, match):
    with pytest.raises(TableError, match=match):
        read_weights(case(text), log)


def test_slides_by_time(case):
    text = "start,end\n2024-05-03T12:00:00Z,2024-05-03T12:10:00Z\n"
    assert read_slides(case(slides=text)) == (RecordedSlide("time", NOON, NOON + 600.0),)


def test_slides_by_depth(case):
    assert read_slides(case(slides="from [m],to [m]\n3000,3009.5\n")) == (
        RecordedSlide("depth", 3000.0, 3009.5),
    )


@pytest.mark.parametrize(
    ("text", "match"),
    [
        ("start,end\n3000,3010\n", "unit"),
        ("start [m],end [m]\n3010,3000\n", "before the start"),
        ("start,end\n2024-05-03T12:00:00Z,\n", "empty"),
    ],
)
def test_slides_that_cannot_be_used_are_refused(case, text, match):
    with pytest.raises(TableError, match=match):
        read_slides(case(slides=text))
