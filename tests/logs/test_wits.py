"""Captures of WITS level 0: frames whole and broken, records beside the main one, units told or asked for."""

from dataclasses import replace
from pathlib import Path

import numpy as np
import pytest

from forensics.case import Case, ChannelChoice, FluidSettings, LogSettings
from forensics.errors import LogError
from forensics.logs.read import read_time_logs
from forensics.logs.registry import read_raw
from forensics.logs.systems import settle_units

DATA = Path(__file__).parents[1] / "data" / "logs"
ROWS = np.arange(24)
HOOKLOAD = 1e3 * (1200.0 + 1.5 * ROWS + np.where(ROWS % 3, 3.0, 0.0))


def read(name, **settings):
    none = Path("none")
    logs = LogSettings(time=(DATA / name,), **settings)
    return read_time_logs(
        Case(path=Path("case.toml"), id="x", title="x", logs=logs, survey=none, hole=none, string=none,
             fluid=FluidSettings(density=1200.0))
    )  # fmt: skip


def test_density_of_the_mud_tells_the_system():
    log = read("frames.wits")
    np.testing.assert_allclose(log.values["hookload"], HOOKLOAD, rtol=1e-4)
    assert any("metric system of WITS: MDIA near 1250: a mud density" in note for note in log.files[0].notes)


def test_undeclared_units_are_asked_for_with_the_key():
    with pytest.raises(LogError, match=r'no value here tells the .*wits_units = "metric" .* or "fps"'):
        read("units_not_told.wits")


def test_the_case_names_the_system():
    np.testing.assert_allclose(
        read("units_not_told.wits", wits_units="metric").values["hookload"], HOOKLOAD, rtol=1e-4
    )
    fps = read("units_not_told.wits", wits_units="fps")
    assert fps.values["hookload"][0] == pytest.approx(120.0 * 4448.2216, rel=1e-6)
    assert fps.values["bit_depth"][0] == pytest.approx(609.6)


def test_values_that_contradict_each_other_are_refused_with_both():
    with pytest.raises(LogError, match=r"contradict each other \(MDIA near 1250: .*; MDOA near 10.4: "):
        read("units_contradict.wits")
    assert any(
        "the case file says so; but" in note
        for note in read("units_contradict.wits", wits_units="metric").files[0].notes
    )


def test_frames_that_break_off_are_counted_and_records_beside_stand_in_their_row():
    log = read("frames_broken_off.wits")
    np.testing.assert_allclose(log.values["hookload"], HOOKLOAD, rtol=1e-4)
    steps = {step.name: step.samples for step in log.history if step.channel is None}
    assert steps["unreadable row"] == 2
    notes = " ".join(log.files[0].notes)
    for words in ("2 frames that break off", "3 lines outside any frame", "1 lines within frames",
                  "items of record 09 stand"):  # fmt: skip
        assert words in notes
    weight = log.values["downhole_wob"]
    assert np.flatnonzero(np.isfinite(weight)).tolist() == list(range(0, 24, 4))
    assert weight[4] == pytest.approx(84e3)


def test_a_spare_item_can_be_named_by_its_code():
    log = read("frames_broken_off.wits", channels={"differential_pressure": ChannelChoice("0141", "bar")})
    assert log.values["differential_pressure"][0] == pytest.approx(7.5e5)


def test_rows_know_the_line_their_frame_starts_on():
    raw = read_raw(DATA / "frames_broken_off.wits", lambda name: bool(name))
    lines = (DATA / "frames_broken_off.wits").read_text().splitlines()
    assert {lines[line - 1] for line in raw.line_of(ROWS)} == {"&&"}


def test_formats_with_units_of_their_own_are_left_alone():
    raw = read_raw(DATA / "clean.csv", lambda name: bool(name))
    assert settle_units(raw, "fps") is raw
    bare = replace(raw, systems={"metric": ("a",) * len(raw.names), "fps": ("b",) * len(raw.names)})
    assert settle_units(bare, "fps").units[0] == "b"


def test_a_file_of_broken_frames_alone_is_refused(tmp_path):
    path = tmp_path / "x.wits"
    path.write_text("&&\n01082000\n&&\n01082000\n")
    words = r"no whole WITS frame of record 01 \(2 broken off\).*between && and !!"
    with pytest.raises(LogError, match=words):
        read_raw(path, lambda name: bool(name))


def test_an_endless_line_is_no_item(tmp_path):
    path = tmp_path / "x.wits"
    path.write_bytes(b"&&\n0108" + b"7" * 3_000_000 + b"\n01141200\n!!\n")
    raw = read_raw(path, lambda name: bool(name))
    assert max(len(str(value)) for value in raw.table.iloc[0]) <= 4096
