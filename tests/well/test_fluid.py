"""Mud: constant, by time, by depth."""

import numpy as np
import pytest

from forensics.case import FluidSettings
from forensics.errors import TableError
from forensics.well.fluid import constant_fluid, load_fluid

NOON = 1714737600.0  # 2024-05-03T12:00:00Z


@pytest.fixture
def load(tmp_path):
    def make(text, timezone="UTC"):
        path = tmp_path / "mud.csv"
        path.write_text(text)
        return load_fluid(FluidSettings(file=path, density_inside=900.0), timezone)

    return make


def test_a_constant_mud_is_the_same_everywhere():
    fluid, remarks = load_fluid(FluidSettings(density=1320.0))
    assert fluid.by == "constant"
    assert fluid.outside_at([0.0, 1.0], [np.nan, 5.0]).tolist() == [1320.0, 1320.0]
    assert (fluid.typical, fluid.inside, remarks) == (1320.0, None, ())


def test_a_mud_by_time_is_read_between_stamps(load):
    fluid, _ = load("time,density [g/cm3]\n2024-05-03T12:00:00Z,1.2\n2024-05-03T14:00:00+00:00,1.3\n")
    assert fluid.by == "time"
    assert fluid.inside == 900.0
    found = fluid.outside_at([NOON - 9e9, NOON, NOON + 3600.0, NOON + 9e9, np.nan], 100.0)
    np.testing.assert_allclose(found, [1200.0, 1200.0, 1250.0, 1300.0, 1250.0])


@pytest.mark.parametrize(
    "stamps",
    [
        "date,time,density [sg]\n2024-05-03,12:00:00,1.2\n2024-05-03,14:00,1.3\n",
        "time,density [sg]\n03.05.2024 12:00,1.2\n03.05.2024 14:00,1.3\n",
        "time,density [sg]\n05/03/2024 12:00:00 PM,1.2\n05/13/2024 14:00,1.3\n",
        "time,density [sg]\n3-May-2024 12:00,1.2\n3-May-2024 14:00,1.3\n",
        "time,density [sg]\n2024-05-03T15:00+03:00,1.2\n2024-05-03T14:00,1.3\n",
        "date,density [sg]\n2024-05-03,1.2\n2024-05-04,1.3\n",
    ],
)
def test_stamps_come_in_many_forms(load, stamps):
    fluid, _ = load(stamps)
    expected = NOON if "12:00" in stamps or "15:00" in stamps else NOON - 43200.0
    assert fluid.index[0] == expected


@pytest.mark.parametrize(
    ("zone", "shift"), [("UTC", 0), ("+02:00", -7200), ("-03:30", 12600), ("Europe/Oslo", -7200)]
)
def test_stamps_without_a_zone_take_the_case_s(load, zone, shift):
    fluid, _ = load("time,density [sg]\n2024-05-03 12:00:00,1.2\n", zone)
    assert fluid.index[0] == NOON + shift


def test_a_mud_by_depth_is_read_between_depths(load):
    fluid, _ = load("depth [ft],mud weight [ppg]\n0,9\n1000,10\n")
    found = fluid.outside_at(np.nan, [0.0, 152.4, 9999.0])
    np.testing.assert_allclose(found / 119.826427317, [9.0, 9.5, 10.0])


def test_a_density_no_mud_has_is_suspected():
    assert "lighter than any liquid mud" in load_fluid(FluidSettings(density=1.32))[1][0]
    assert constant_fluid(1000.0).typical == 1000.0


REFUSED = {
    "neither": ("density [sg]\n1.2\n", "neither 'time' nor 'depth'"),
    "both": ("time,depth [m],density [sg]\n2024-05-03T12:00:00Z,1,1.2\n", "both 'time' and 'depth'"),
    "stamp": ("time,density [sg]\nnoon,1.2\n", r"line 2, column 'time': is 'noon'"),
    "open order": ("time,density [sg]\n03/05/2024 12:00,1.2\n", "line 2.*day first or month first"),
    "no stamp": ("time,density [sg]\n,1.2\n", r"line 2, column 'time': is ''"),
    "goes back": ("depth [m],density [sg]\n10,1.2\n5,1.2\n", r"line 3, column 'depth \[m\]': goes back"),
    "no depth": ("depth [m],density [sg]\n,1.2\n", r"line 2, column 'depth \[m\]': is empty"),
    "density": ("depth [m],density [sg]\n1,1200\n", r"line 2, column 'density \[sg\]': is 1.2e\+06 kg/m3"),
    "no density": ("depth [m],density [sg]\n1,\n", r"line 2, column 'density \[sg\]': is empty"),
}


@pytest.mark.parametrize("name", REFUSED)
def test_a_wrong_mud_table_is_refused(load, name):
    text, words = REFUSED[name]
    with pytest.raises(TableError, match=words):
        load(text)
