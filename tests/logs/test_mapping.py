"""Columns to channels: units glued to names, choices of the case, rivals."""

from pathlib import Path

import numpy as np
import pandas as pd
import pytest

from forensics.case import ChannelChoice
from forensics.errors import LogError
from forensics.logs.mapping import keep, likely_unit, map_columns, missing_channel, wanted
from forensics.logs.naming import split_name
from forensics.logs.raw import RawLog


def raw(**columns):
    """Give a file of three rows; a column is its values, or its unit and values."""
    units = [data[0] if isinstance(data[0], str) else None for data in columns.values()]
    rows = [list(data[1:]) if isinstance(data[0], str) else list(data) for data in columns.values()]
    table = pd.DataFrame(dict(enumerate(rows)))
    return RawLog(Path("log.csv"), "CSV", tuple(columns), tuple(units), table, 2)


BASE = {"TIME": [0, 5, 10], "BDEP": ["m", 2000, 2001, 2002], "HKLD": ["kN", 900, 901, 902]}


def mapped(choices=None, **columns):
    return map_columns(raw(**{**BASE, **columns}), choices or {}, ("TIME",))


def data(found, channel):
    """Give a channel's values, in the file's unit."""
    return list(found.values[channel])  # noqa: PD011


@pytest.mark.parametrize(
    ("name", "stem", "unit"),
    [
        ("Hookload (k-lbs)", "Hookload", "k-lbs"),
        ("Hook Load [klbf]", "Hook Load", "klbf"),
        ("Flow In(liters/min)", "Flow In", "liters/min"),
        ("Average Surface Torque kN.m", "Average Surface Torque", "kN.m"),
        ("Weight on Bit kkgf", "Weight on Bit", "kkgf"),
        ("torque_kft_lbf", "torque", "kftlbf"),
        ("flow_in_l_min", "flow in", "l/min"),
        ("hookload_kN", "hookload", "kN"),
        ("time_s", "time", "s"),
        ("Elapsed Time (min)", "Elapsed Time", "min"),
        ("Surface RPM", "Surface RPM", None),
        ("BIT DEPTH (MD)", "BIT DEPTH (MD)", None),
        ("GPM", "GPM", None),
        ("", "", None),
    ],
)
def test_units_are_parted_from_names(name, stem, unit):
    assert split_name(name) == (stem, unit)


def test_unit_of_the_file_goes_before_the_one_in_the_name():
    assert mapped(**{"Torque kN.m": ["kft.lbf", 5, 6, 7]}).units["torque"] == "kft.lbf"


def test_column_of_the_case_goes_before_any_other():
    found = mapped({"hookload": ChannelChoice("SENSOR_7", "klbf")}, SENSOR_7=[200, 201, 202])
    assert found.units["hookload"] == "klbf"
    assert data(found, "hookload") == [200, 201, 202]
    why = {column.column: column for column in found.columns}
    assert why["SENSOR_7"].why.startswith("named in the case file")
    assert why["HKLD"].channel is None


def test_a_column_without_values_gives_way():
    found = mapped(RPMA=["rpm", np.nan, np.nan, np.nan], CRPM=["rpm", 80, 81, 82])
    assert data(found, "rpm") == [80, 81, 82]
    assert {column.column: column.why for column in found.columns}["RPMA"] == "every value is missing"


def test_rotation_without_a_unit_is_told_by_its_name():
    assert mapped(RPM=[80, 81, 82]).units["rpm"] == "rpm"


def test_motor_current_and_hydraulic_pressure_are_no_torque():
    found = mapped(TQA=["AMPS", 5, 6, 7])
    assert "torque" not in found.units
    assert found.aside == {"torque": 3}
    assert "unknown unit 'AMPS'" in found.warnings[0]
    assert "unit of pressure" in mapped(TQA=["psi", 5, 6, 7]).warnings[0]


def test_every_column_is_accounted_for():
    found = mapped(DATE=["", "14-May-31", "14-May-31", "14-May-31"], GAS=["%", 1, 2, 3], TVD=["m", 1, 2, 3])
    assert {column.column for column in found.columns} == {*BASE, "DATE", "GAS", "TVD"}
    why = {column.column: column.why for column in found.columns}
    assert "stamps come from TIME" in why["DATE"]
    assert why["TVD"] == "a true vertical depth"


def test_depth_beside_an_explicit_hole_depth_is_the_bits():
    found = map_columns(
        raw(TIME=[0, 1], DEPT=["m", 10, 11], HDEP=["m", 20, 20], HKLD=["kN", 9, 9]), {}, ("TIME",)
    )
    assert data(found, "bit_depth") == [10, 11]
    assert data(found, "hole_depth") == [20, 20]


def test_needed_channel_without_unit_is_refused_with_a_likely_one():
    with pytest.raises(
        LogError, match=r"column 'HKLD'.*no unit.*near 130.* klbf or tonnef.*\[logs.channels\]"
    ):
        mapped(HKLD=[130, 131, 130])


def test_likely_units_are_those_under_which_values_are_usual():
    assert "kN" in likely_unit("hookload", np.array([1200.0]))
    assert "m or ft" in likely_unit("bit_depth", np.array([3000.0]))
    assert "N" in likely_unit("hookload", np.array([1.2e6]))
    assert likely_unit("hookload", np.array([np.nan])) == ""


def test_missing_channel_names_what_was_seen():
    error = missing_channel("hookload", [raw(TIME=[0], hookloat=[1])])
    assert "did you mean 'hookloat'" in error.text
    assert "'TIME', 'hookloat'" in error.text


def test_only_columns_that_may_be_needed_are_kept():
    chosen = wanted({"hookload": ChannelChoice("SENSOR 7")})
    assert keep("SENSOR_7", chosen)
    assert keep("Time", chosen)
    assert keep("Weight on Bit kkgf", chosen)
    assert not keep("Gas", chosen)


def test_two_hookloads_that_differ_are_told_with_by_how_much():
    rows = np.arange(200.0)
    table = pd.DataFrame({0: rows, 1: rows, 2: 120.0 + rows % 7, 3: 118.0 + rows % 7, 4: 120.0 + rows % 7})
    names, unit = ("TIME", "BDEP", "HKLA", "THKD", "HKL"), "tonnef"
    log = RawLog(Path("x.csv"), "CSV", names, ("s", "m", unit, unit, unit), table, 2)
    found = map_columns(log, {}, ("TIME",))
    whys = {column.column: column.why for column in found.columns}
    assert "that reads 19.6 kN less at the median" in whys["THKD"]
    assert "the two agree" in whys["HKL"]
    (words,) = found.warnings
    assert "'HKLA' rather than 'THKD'" in words
    assert "under [logs.channels] hookload" in words
    assert map_columns(log, {"hookload": ChannelChoice("THKD")}, ("TIME",)).warnings == ()
