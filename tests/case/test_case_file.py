"""The case file: every key, and one clear refusal for everything it may hold wrongly."""

import dataclasses
import math

import pytest

from forensics.case import ChannelChoice, load_case
from forensics.errors import CaseError

FULL = """format = 1

[case]
id = "osprey-2-run-3"
title = "Lost weight while sliding"
well = "Osprey 2"
field = "North bank"
rig = "Rig 5"
section = "8.5 in"
mud_system = "oil base"
notes = ""
campaign = "Osprey"

[logs]
time = ["day1.csv", "sub/day2.csv"]
depth = ["depth.csv"]
timezone = "Europe/Oslo"

[logs.channels]
hookload = "HKLD_AVG"
torque = { column = "TRQ", unit = "kft.lbf" }

[survey]
file = "survey.csv"
tie_in = { md = "100 ft", inclination = "1 deg", azimuth = "20 deg" }

[hole]
file = "hole.csv"

[string]
file = "string.csv"

[fluid]
file = "mud.csv"
density_inside = "0 g/cm3"

[rig]
block_weight = "310 kN"
lines = 12
sheave_efficiency = 0.985
hookload_includes_block = false

[friction]
cased = 0.2
open = 0.28
fixed = true

[criteria]
helical_onset = "wu"
helical_release = "envelope"
clearance = "body"
bridge_gap = "2 min"
minimum_duration = "20 s"
torque_effect = "on"
tool_joint_effect = "off"

[limits]
hookload = "2200 kN"
overpull = "400 kN"
torque = "45 kN.m"
wob = "20 t"
pipe_class = "premium"

[records]
weights = "weights.csv"
slides = "slides.csv"
verdicts = "verdicts.csv"
"""
FILES = (
    "day1.csv", "sub/day2.csv", "depth.csv", "survey.csv", "hole.csv", "string.csv", "mud.csv", "weights.csv",
    "slides.csv", "verdicts.csv",
)  # fmt: skip
LEAST = """[case]
id = "a"
[logs]
time = "day1.csv"
[survey]
file = "survey.csv"
[hole]
file = "hole.csv"
[string]
file = "string.csv"
[fluid]
density = "10 ppg"
"""


@pytest.fixture
def write(tmp_path):
    (tmp_path / "sub").mkdir()
    for name in FILES:
        (tmp_path / name).write_text("x\n")

    def make(text, encoding="utf-8"):
        path = tmp_path / "case.toml"
        path.write_bytes(text.encode(encoding))
        return path

    return make


def test_a_survey_may_state_its_accuracy(write):
    case = load_case(write(FULL.replace("tie_in = {", 'accuracy = "0.1 deg"\ntie_in = {')))
    assert case.survey_accuracy == pytest.approx(math.radians(0.1))


def test_every_key_is_read_in_si(write):
    path = write(FULL)
    case = load_case(path)
    folder = path.parent
    assert (case.id, case.title, case.well) == ("osprey-2-run-3", "Lost weight while sliding", "Osprey 2")
    assert (case.field_name, case.rig_name, case.section) == ("North bank", "Rig 5", "8.5 in")
    assert (case.mud_system, case.notes, case.campaign) == ("oil base", None, "Osprey")
    assert case.logs.time == (folder / "day1.csv", folder / "sub" / "day2.csv")
    assert case.logs.depth == (folder / "depth.csv",)
    assert case.logs.timezone == "Europe/Oslo"
    assert case.logs.channels == {
        "hookload": ChannelChoice("HKLD_AVG"),
        "torque": ChannelChoice("TRQ", "kft.lbf"),
    }
    assert case.tie_in.md == pytest.approx(30.48)
    assert case.tie_in.inclination == pytest.approx(math.radians(1.0))
    assert case.survey_accuracy is None
    assert (case.fluid.density, case.fluid.file, case.fluid.density_inside) == (None, folder / "mud.csv", 0.0)
    assert dataclasses.astuple(case.rig) == (310e3, 12, 0.985, False)
    assert dataclasses.astuple(case.friction) == (0.2, 0.28, True)
    assert dataclasses.astuple(case.criteria) == ("wu", "envelope", "body", 120.0, 20.0, True, False)
    assert case.limits.wob == pytest.approx(196133.0)
    assert (case.limits.torque, case.limits.pipe_class) == (45e3, "premium")
    assert case.records.verdicts == folder / "verdicts.csv"


def test_the_least_case_takes_the_defaults(write):
    case = load_case(write(LEAST))
    assert case.title == "a"
    assert case.logs.time[0].name == "day1.csv"
    assert case.logs.timezone == "UTC"
    assert case.fluid.density == pytest.approx(1198.26427)
    assert case.rig.block_weight is None
    assert case.rig.hookload_includes_block is True
    assert dataclasses.astuple(case.criteria) == ("chen", "unbuckled", "tool_joint", 60.0, 20.0, False, True)
    assert case.friction.fixed is False


def test_a_byte_order_mark_and_windows_line_ends_are_no_fault(write):
    assert load_case(write(LEAST.replace("\n", "\r\n"), "utf-8-sig")).id == "a"


@pytest.mark.parametrize(
    ("given", "kept"),
    [
        ("+02:00", "+02:00"),
        ("-3", "-03:00"),
        ("UTC+0530", "+05:30"),
        ("Z", "UTC"),
        ("America/Lima", "America/Lima"),
    ],
)
def test_time_zones_come_by_name_or_offset(write, given, kept):
    assert load_case(write(FULL.replace("Europe/Oslo", given))).logs.timezone == kept


def test_files_may_have_zones_and_wits_units_of_their_own(write):
    own = '[logs.timezones]\n"sub/day2.csv" = "-3"\n[logs.channels]'
    text = FULL.replace('timezone = "Europe/Oslo"', 'timezone = "Europe/Oslo"\nwits_units = "fps"')
    path = write(text.replace("[logs.channels]", own))
    logs = load_case(path).logs
    assert logs.wits_units == "fps"
    assert [logs.zone_of(file) for file in logs.time] == ["Europe/Oslo", "-03:00"]
    assert load_case(write(LEAST)).logs.wits_units is None


REFUSED = {
    "zone of a file that is no log": (
        "[logs.channels]",
        '[logs.timezones]\n"day3.csv" = "UTC"\n[logs.channels]',
        ["logs.timezones.day3.csv", "did you mean 'day"],
    ),
    "unknown system of WITS units": (
        'timezone = "Europe/Oslo"',
        'wits_units = "imperial"',
        ["logs.wits_units", "'imperial'", "fps", "metric"],
    ),
    "unknown key names the nearest": ("title =", "titel =", ["line 5", "titel", "did you mean 'title'"]),
    "unknown section": ("[records]", "[record]", ["line 64", "record", "did you mean 'records'"]),
    "unknown key far from any": ("lines = 12", "zzz = 12", ["rig.zzz", "known are: block_weight"]),
    "unknown channel": (
        'hookload = "HKLD',
        'hokload = "HKLD',
        ["line 20", "hokload", "did you mean 'hookload'"],
    ),
    "unknown key in an inline table": ("azimuth =", "azimut =", ["line 25", "tie_in.azimut", "azimuth"]),
    "unit of another quantity": ('"310 kN"', '"310 bar"', ["line 38", "block_weight", "bar", "force"]),
    "unknown unit": ('"2 min"', '"2 mim"', ["bridge_gap", "mim"]),
    "channel unit of another quantity": ('"kft.lbf"', '"bar"', ["line 21", "torque.unit", "bar"]),
    "bare number": ('"310 kN"', "310", ["line 38", "rig.block_weight", "bare number 310", "unit"]),
    "bare number in text": ('"310 kN"', '"310"', ["block_weight", "310"]),
    "no number": ('"310 kN"', '"heavy"', ["block_weight", "heavy"]),
    "word off the list": ('"wu"', '"wuu"', ["line 49", "helical_onset", "wuu", "wu"]),
    "number as text": ("cased = 0.2", 'cased = "0.2"', ["friction.cased", "'0.2'", "number"]),
    "friction out of range": ("open = 0.28", "open = 28", ["friction.open", "28", "0 to 1.5"]),
    "flag as number": ("fixed = true", "fixed = 1", ["friction.fixed", "true or false"]),
    "number as flag": ("lines = 12", "lines = true", ["rig.lines", "whole number"]),
    "efficiency above one": ("0.985", "1.02", ["sheave_efficiency", "1.02"]),
    "id with a slash": ('"osprey-2-run-3"', '"osprey/2"', ["line 4", "case.id", "osprey/2", "letters"]),
    "id of dots": ('"osprey-2-run-3"', '".."', ["case.id"]),
    "missing id": ('id = "osprey-2-run-3"\n', "", ["[case] needs 'id'"]),
    "missing survey file": ('file = "survey.csv"\n', "", ["line 23", "[survey] needs 'file'"]),
    "missing section": ('[hole]\nfile = "hole.csv"\n', "", ["[hole] needs 'file'"]),
    "file that is not there": ('"hole.csv"', '"hall.csv"', ["line 28", "hole.file", "hall.csv", "missing"]),
    "file that is a folder": ('"hole.csv"', '"sub"', ["hole.file", "folder"]),
    "log that is not there": ('"sub/day2.csv"', '"day3.csv"', ["line 15", "logs.time", "day3.csv"]),
    "no logs": ('["day1.csv", "sub/day2.csv"]', "[]", ["logs.time", "empty"]),
    "time zone": ("Europe/Oslo", "Europe/Osla", ["line 17", "Europe/Osla", "Europe/Oslo"]),
    "time zone offset": ("Europe/Oslo", "+19:00", ["timezone", "+19:00", "+02:00"]),
    "section as a value": ("[records]\n", "[records.weights]\n", ["records.weights"]),
    "two densities": ('file = "mud.csv"', 'file = "mud.csv"\ndensity = "1 sg"', ["[fluid]", "both"]),
    "no density": ('file = "mud.csv"\n', "", ["[fluid]", "neither", "1.32 g/cm3"]),
    "absurd density": ('"0 g/cm3"', '"132 g/cm3"', ["density_inside", "132 g/cm3"]),
    "layout of the future": ("format = 1", "format = 2", ["line 1", "format", "2", "format 1"]),
}


@pytest.mark.parametrize("name", REFUSED)
def test_a_wrong_case_is_refused_with_its_place(write, name):
    old, new, words = REFUSED[name]
    assert old in FULL
    path = write(FULL.replace(old, new))
    with pytest.raises(CaseError) as caught:
        load_case(path)
    for word in (str(path), *words):
        assert word in str(caught.value)


def test_wrong_toml_names_the_line(write):
    with pytest.raises(CaseError, match=r"line 6.*not TOML"):
        load_case(write(FULL.replace('"Osprey 2"', "Osprey 2")))


def test_a_key_given_twice_is_wrong_toml(write):
    with pytest.raises(CaseError, match=r"line 6.*not TOML"):
        load_case(write(FULL.replace("well =", "title =")))


def test_an_unclosed_end_is_wrong_toml(write):
    with pytest.raises(CaseError, match="not TOML"):
        load_case(write('[case]\nid = "a'))


def test_bytes_that_are_no_text_are_refused(write):
    with pytest.raises(CaseError, match="UTF-8"):
        load_case(write(FULL.replace("Osprey 2", "Ørn"), "latin-1"))


@pytest.mark.parametrize("text", ["", "# nothing yet\n"])
def test_an_empty_case_is_refused(write, text):
    with pytest.raises(CaseError, match="is empty; format = 1"):
        load_case(write(text))


def test_a_missing_case_file_is_refused(tmp_path):
    with pytest.raises(CaseError, match=r"gone\.toml: is missing"):
        load_case(tmp_path / "gone.toml")
    with pytest.raises(CaseError, match="is a folder"):
        load_case(tmp_path)
