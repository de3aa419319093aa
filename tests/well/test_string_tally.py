"""String tables: components with their sections and weights, remarks and refusals."""

import math

import numpy as np
import pytest

from forensics.errors import TableError
from forensics.well.string import STEEL_DENSITY, Component, String, buoyed_weight, plain_weight
from forensics.well.tally import load_string
from forensics.well.weights import derive_weight

HEAD = "name,kind,length [m],od [in],id [in],weight [kg/m],tool_joint_od [in]\n"
GOOD = (
    HEAD
    + "Bit,bit,0.3,8.5,,90,\nCollar,collar,27,6.5,2.8125,136,\nHeavy,HWDP,140,5,3,73.4,6.5\n"
    + "Pipe,Drill Pipe,900,5,4.276,33,6.625\n"
)


@pytest.fixture
def load(tmp_path):
    def make(text):
        path = tmp_path / "string.csv"
        path.write_text(text)
        return load_string(path)

    return make


def test_rows_become_components(load):
    string, remarks = load(GOOD)
    assert remarks == ()
    assert [c.kind for c in string.components] == ["bit", "collar", "hwdp", "drillpipe"]
    pipe = string.components[3]
    assert pipe.weight == pytest.approx(33 * 9.80665)
    assert pipe.tool_joint_od == pytest.approx(0.168275)
    assert pipe.tensile_rating is None
    assert pipe.line == 5
    assert string.components[0].id == 0.0
    assert string.length == pytest.approx(1067.3)
    assert string.can_extend


def test_optional_columns_are_read_in_si(load):
    string, _ = load(
        "name,kind,length [ft],od [in],id [in],weight [lb/ft],tool_joint_od [in],tensile_rating [klbf],"
        "torque_rating [kft.lbf],yield_strength [kpsi],youngs_modulus [GPa],density [g/cm3]\n"
        "Light,drillpipe,1000,5,4.276,,6.5,400,40,60,71,2.8\n"
    )
    pipe = string.components[0]
    assert pipe.length == pytest.approx(304.8)
    assert pipe.tensile_rating == pytest.approx(400e3 * 4.4482216152605)
    assert pipe.torque_rating == pytest.approx(40e3 * 1.3558179483314)
    assert pipe.yield_strength == pytest.approx(60e3 * 6894.757293, rel=1e-9)
    assert pipe.youngs_modulus == pytest.approx(71e9)
    assert pipe.density == pytest.approx(2800.0)
    # A light body with joints of steel on it.
    assert 1.3 * plain_weight(pipe.od, pipe.id, 2800.0) < pipe.weight < 0.65 * plain_weight(pipe.od, pipe.id)


def test_index_and_ends_run_from_the_bit(load):
    string, _ = load(GOOD)
    np.testing.assert_allclose(string.ends, [0.3, 27.3, 167.3, 1067.3])
    assert string.index_at([0.0, 0.3, 27.29, 167.3, 1067.3, 9999.0]).tolist() == [0, 1, 1, 3, 3, 3]
    assert string.needs_extension(2000.0)
    assert not string.needs_extension(1000.0)
    assert string.values("stiffness").shape == (4,)


def test_a_weight_left_blank_is_computed_and_remarked(load):
    string, remarks = load(GOOD.replace(",33,", ",,"))
    pipe = string.components[3]
    derived = derive_weight("drillpipe", pipe.od, pipe.id, pipe.tool_joint_od)
    assert pipe.weight == pytest.approx(derived.weight)
    assert pipe.weight > 1.1 * STEEL_DENSITY * 9.80665 * pipe.area
    assert any("no weight for Pipe" in r and "tool joint" in r and "6% off" in r for r in remarks)


def test_a_weight_of_zero_counts_as_blank(load):
    string, remarks = load(GOOD.replace(",33,", ",0,"))
    assert string.components[3].weight == load(GOOD.replace(",33,", ",,"))[0].components[3].weight
    assert any("no weight for Pipe" in r for r in remarks)


def test_a_missing_tool_joint_is_remarked(load):
    string, remarks = load(GOOD.replace("6.625", ""))
    assert string.components[3].contact_diameter() == string.components[3].od
    assert any("no tool joint OD for Pipe" in r for r in remarks)


def test_contact_diameter_follows_the_choice():
    pipe = Component("p", "drillpipe", 1.0, 0.127, 0.1, 300.0, tool_joint_od=0.168)
    assert pipe.contact_diameter() == 0.168
    assert pipe.contact_diameter("tool_joint") == 0.168
    assert pipe.contact_diameter("body") == 0.127


def test_a_tally_listed_from_the_top_is_turned_over(load):
    rows = GOOD.splitlines()
    string, remarks = load("\n".join([rows[0], *rows[:0:-1]]))
    assert string.components[0].kind == "bit"
    assert string.components[-1].kind == "drillpipe"
    assert any("turned over" in r for r in remarks)


def test_a_last_row_that_is_not_pipe_is_remarked(load):
    string, remarks = load("\n".join(GOOD.splitlines()[:3]))
    assert not string.can_extend
    assert any("the last row is a collar" in r for r in remarks)


def test_an_unlikely_weight_is_remarked(load):
    _, remarks = load(GOOD.replace(",33,", ",50,"))
    assert any("row 4" in r and "times a plain tube's" in r for r in remarks)


@pytest.mark.parametrize(
    ("word", "kind"),
    [
        ("Stabilizer", "stabiliser"),
        ("Heavy Weight Drill Pipe", "hwdp"),
        ("Drill Collar", "collar"),
        ("DP", "drillpipe"),
        ("Jars", "jar"),
    ],
)
def test_kinds_have_their_trade_names(load, word, kind):
    string, _ = load(HEAD + f"x,{word},10,5,3,75,\n")
    assert string.components[0].kind == kind


REFUSED = {
    "unknown kind": ("x,colar,10,5,3,75,\n", ["line 2", "'kind'", "'colar'", "did you mean 'collar'"]),
    "bore as wide as the body": ("x,collar,10,5,5,75,\n", ["line 2", "'id [in]'", "127 mm"]),
    "bore wider": ("x,collar,10,5,6,75,\n", ["line 2", "'id [in]'"]),
    "no bore": ("x,collar,10,5,,75,\n", ["line 2", "'id [in]'", "empty"]),
    "solid pipe": ("x,dp,10,5,0,30,\n", ["line 2", "'id [in]'", "is 0; a drillpipe has a bore"]),
    "negative bore": ("x,collar,10,5,-1,75,\n", ["line 2", "'id [in]'"]),
    "no length": ("x,collar,0,5,3,75,\n", ["line 2", "'length [m]'", "0 m"]),
    "absurd length": ("x,collar,30000,5,3,75,\n", ["line 2", "'length [m]'", "30000 m"]),
    "od in the wrong unit": ("x,collar,10,127,3,75,\n", ["line 2", "'od [in]'", "3226 mm", "unit"]),
    "zero od": ("x,collar,10,0,0,75,\n", ["line 2", "'od [in]'"]),
    "joint thinner than the body": ("x,dp,10,5,4,30,4\n", ["line 2", "'tool_joint_od [in]'", "101.6 mm"]),
    "negative weight": ("x,dp,10,5,4,-30,6\n", ["line 2", "'weight [kg/m]'"]),
    "weight of the whole row": ("x,dp,900,5,4.276,29000,6\n", ["line 2", "'weight [kg/m]'", "plain tube"]),
    "bit in the middle": (
        "a,collar,10,5,3,75,\nb,bit,1,8,,90,\nc,dp,10,5,4,30,6\n",
        ["line 3", "'kind'", "from the bit up"],
    ),
    "two bits": ("b,bit,1,8,,90,\nb,bit,1,8,,90,\n", ["line 3", "from the bit up"]),
}


@pytest.mark.parametrize("name", REFUSED)
def test_an_impossible_string_is_refused(load, name):
    rows, words = REFUSED[name]
    with pytest.raises(TableError) as caught:
        load(HEAD + rows)
    for word in ("string.csv", *words):
        assert word in str(caught.value)


def test_absurd_material_is_refused(load):
    head = "kind,length [m],od [in],id [in],weight [kg/m],youngs_modulus [MPa],density [kg/m3]\n"
    with pytest.raises(TableError, match=r"'youngs_modulus \[MPa\]'"):
        load(head + "dp,10,5,4,30,206.8,\n")
    with pytest.raises(TableError, match=r"'density \[kg/m3\]'"):
        load(head + "dp,10,5,4,30,,7.85\n")


def test_buoyancy_of_equal_and_of_different_muds():
    pipe = Component("p", "drillpipe", 10.0, 0.127, 0.1086, 320.0, density=7850.0)
    assert buoyed_weight(pipe, 1200.0) == pytest.approx(320.0 * (1 - 1200 / 7850))
    np.testing.assert_allclose(buoyed_weight(pipe, [0.0, 7850.0]), [320.0, 0.0], atol=1e-9)
    same = buoyed_weight(pipe, 1200.0, 1200.0)
    assert same == pytest.approx(float(buoyed_weight(pipe, 1200.0)))
    empty = buoyed_weight(pipe, 1200.0, 0.0)
    assert same - empty == pytest.approx(9.80665 * 1200.0 * math.pi / 4 * 0.1086**2)


def test_a_light_closed_tube_floats():
    tube = Component("liner", "liner", 10.0, 0.1778, 0.1594, plain_weight(0.1778, 0.1594))
    assert buoyed_weight(tube, 2200.0, 0.0) < 0.0


def test_sections_of_a_solid_bar():
    bar = Component("b", "other", 1.0, 0.2, 0.0, 1.0, youngs_modulus=2e11)
    assert bar.area == pytest.approx(math.pi * 0.01)
    assert bar.inner_area == 0.0
    assert bar.outer_area == bar.area
    assert bar.inertia == pytest.approx(math.pi * 0.1**4 / 4)
    assert bar.polar == pytest.approx(math.pi * 0.1**4 / 2)
    assert bar.stiffness == pytest.approx(2e11 * bar.inertia)
    assert bar.axial == pytest.approx(2e11 * bar.area)


def test_a_string_of_one_row():
    string = String((Component("p", "drillpipe", 10.0, 0.127, 0.1086, 320.0),))
    assert string.index_at([0.0, 50.0]).tolist() == [0, 0]
    np.testing.assert_allclose(string.buoyed(0.0), [320.0])
