"""Hole tables: sections that meet, and look-ups along depth."""

import numpy as np
import pytest

from forensics.errors import TableError
from forensics.well.hole import load_hole

HEAD = "top [m],bottom [m],diameter [in],kind,name,friction\n"
GOOD = HEAD + "0,1500,8.835,cased,casing,0.2\n1500,2400,8.681,liner,,\n2400,3100,8.5,Open Hole,,0.3\n"


@pytest.fixture
def load(tmp_path):
    def make(text):
        path = tmp_path / "hole.csv"
        path.write_text(text)
        return load_hole(path)

    return make


def test_sections_are_read(load):
    hole, remarks = load(GOOD)
    assert remarks == ()
    assert hole.kind == ("cased", "cased", "open")
    assert hole.name == ("casing", "", "")
    np.testing.assert_allclose(hole.friction, [0.2, np.nan, 0.3])
    assert hole.shoe == 2400.0


def test_any_depth_has_a_section(load):
    hole, _ = load(GOOD)
    md = [-5.0, 0.0, 1499.99, 1500.0, 2400.0, 3100.0, 4000.0]
    assert hole.row_at(md).tolist() == [0, 0, 0, 1, 2, 2, 2]
    np.testing.assert_allclose(hole.diameter_at(md) / 0.0254, [8.835, 8.835, 8.835, 8.681, 8.5, 8.5, 8.5])
    assert hole.is_open(md).tolist() == [False, False, False, False, True, True, True]
    assert hole.row_at(10.0).shape == (1,)


def test_a_hole_all_open_has_its_shoe_at_surface(load):
    assert load(HEAD + "0,500,12.25,open,,\n")[0].shoe == 0.0


def test_rows_out_of_order_are_sorted_and_remarked(load):
    rows = GOOD.splitlines()
    hole, remarks = load("\n".join([rows[0], rows[3], rows[1], rows[2]]))
    assert hole.top.tolist() == [0.0, 1500.0, 2400.0]
    assert hole.kind[2] == "open"
    assert hole.friction[2] == 0.3
    assert "not in order" in remarks[0]


def test_rounding_of_a_few_centimetres_is_closed(load):
    hole, _ = load(HEAD + "0.02,1500.05,8.8,cased,,\n1500,3100,8.5,open,,\n")
    assert hole.top.tolist() == [0.0, 1500.0]
    assert hole.bottom.tolist() == [1500.0, 3100.0]


def test_columns_not_used_are_remarked(load):
    _, remarks = load("top [m],bottom [m],diameter [in],kind,colour\n0,500,12.25,open,red\n")
    assert "colour" in remarks[0]


REFUSED = {
    "gap": (
        "0,1500,9,cased,,\n1510,3100,8.5,open,,\n",
        ["line 3", "'top [m]'", "1510.00 m", "gap", "1500.00 m"],
    ),
    "overlap": ("0,1500,9,cased,,\n1490,3100,8.5,open,,\n", ["line 3", "1490.00 m", "overlaps", "1500.00 m"]),
    "gap at the top": ("150,1500,9,cased,,\n", ["line 2", "150.00 m", "gap", "rotary table"]),
    "starts above": ("-9,1500,9,cased,,\n", ["line 2", "-9.00 m", "rotary"]),
    "upside down": ("1500,0,9,cased,,\n", ["line 2", "'bottom [m]'", "not below"]),
    "no length": ("0,0,9,cased,,\n", ["line 2", "not below"]),
    "diameter in the wrong unit": ("0,1500,216,cased,,\n", ["line 2", "'diameter [in]'", "5486 mm", "check"]),
    "no diameter": ("0,1500,,cased,,\n", ["line 2", "'diameter [in]'", "is empty"]),
    "zero diameter": ("0,1500,0,cased,,\n", ["line 2", "0 mm"]),
    "kind": ("0,1500,9,opne,,\n", ["line 2", "'kind'", "'opne'", "did you mean 'open'"]),
    "no kind": ("0,1500,9,,,\n", ["line 2", "'kind'", "empty"]),
    "friction": ("0,1500,9,cased,,30\n", ["line 2", "'friction'", "30", "0 to 1.5"]),
}


@pytest.mark.parametrize("name", REFUSED)
def test_an_impossible_hole_is_refused(load, name):
    rows, words = REFUSED[name]
    with pytest.raises(TableError) as caught:
        load(HEAD + rows)
    for word in ("hole.csv", *words):
        assert word in str(caught.value)
