"""Survey tables: tie-in, remarks, and refusals with the row of the file."""

import numpy as np
import pytest

from forensics.case import TieIn
from forensics.errors import TableError
from forensics.well.survey import load_trajectory

DEG = np.pi / 180.0
HEAD = "md [m],inclination [deg],azimuth [deg]\n"


@pytest.fixture
def load(tmp_path):
    def make(text, tie_in=None):
        path = tmp_path / "survey.csv"
        path.write_text(text)
        return load_trajectory(path, tie_in)

    return make


def test_a_survey_is_read_and_placed(load):
    path, remarks = load("MD (ft),Inc (deg),Azi (deg),TVD (ft)\n0,0,0,0\n1000,0,45,1000\n1100,3,45,1099.95\n")
    np.testing.assert_allclose(path.md, [0.0, 304.8, 335.28])
    assert path.tvd[2] == pytest.approx(1099.954 * 0.3048, abs=1e-3)
    assert remarks == ()


def test_a_tie_in_above_stands_first(load):
    path, _ = load(HEAD + "300,10,50\n600,20,50\n", TieIn(100.0, 0.0, 0.0))
    np.testing.assert_allclose(path.md, [100.0, 300.0, 600.0])
    assert path.at([200.0]).inclination[0] == pytest.approx(5.0 * DEG)


def test_a_tie_in_on_the_first_station_must_agree(load):
    path, _ = load(HEAD + "100,10,50\n600,20,50\n", TieIn(100.0, 10.0 * DEG, 50.0 * DEG))
    assert len(path.md) == 2
    with pytest.raises(TableError, match=r"line 2.*10\.0 deg off the tie-in"):
        load(HEAD + "100,10,50\n600,20,50\n", TieIn(100.0, 20.0 * DEG, 50.0 * DEG))


def test_a_tie_in_of_no_inclination_agrees_whatever_its_azimuth(load):
    path, _ = load(HEAD + "0,0,50\n600,20,50\n", TieIn(0.0, 0.0, 0.0))
    assert path.azimuth[0] == pytest.approx(50.0 * DEG)


def test_a_tie_in_below_the_first_station_is_refused(load):
    with pytest.raises(TableError, match=r"line 2, column 'md \[m\]'.*200\.00 m above the tie-in"):
        load(HEAD + "100,10,50\n600,20,50\n", TieIn(300.0, 10.0 * DEG, 50.0 * DEG))


def test_rows_at_fault_are_named_by_their_line(load):
    with pytest.raises(TableError, match=r"survey\.csv, line 4: 290\.00 m goes back up from"):
        load(HEAD + "0,0,0\n300,10,50\n290,20,50\n")
    with pytest.raises(TableError, match=r"line 4: at 600\.00 m the hole turns 70 deg"):
        load(HEAD + "0,0,0\n300,10,50\n600,80,50\n")
    with pytest.raises(TableError, match=r"line 3: at 600\.00 m the hole turns 70 deg"):
        load(HEAD + "300,10,50\n600,80,50\n", TieIn(0.0, 0.0, 0.0))


def test_an_inclined_first_station_below_surface_is_remarked(load):
    _, remarks = load(HEAD + "300,10,50\n600,20,50\n")
    assert len(remarks) == 1
    assert "vertical down to the first station at 300.0 m" in remarks[0]


def test_radians_under_a_header_of_degrees_are_suspected(load):
    rows = "".join(f"{300 * i},{0.1 * i:.3f},{0.8 + 0.01 * i:.3f}\n" for i in range(9))
    _, remarks = load(HEAD + rows)
    assert "radians" in remarks[0]


def test_a_vertical_survey_is_not_taken_for_radians(load):
    rows = "".join(f"{300 * i},{0.1 * i:.3f},{(77 * i) % 360}\n" for i in range(9))
    assert load(HEAD + rows)[1] == ()
