"""The well as one object: hanging weight against independent sums, and depths it can't have reached."""

from dataclasses import replace

import numpy as np
import pytest

from forensics.case import load_case
from forensics.errors import TableError
from forensics.well.fluid import Fluid, constant_fluid
from forensics.well.hole import Hole
from forensics.well.model import Well, load_well
from forensics.well.string import Component, String
from forensics.well.trajectory import build_trajectory

DEG = np.pi / 180.0
MUD = 1250.0
BUOYANT = 1.0 - MUD / 7850.0


def component(kind, length, od, bore, weight, joint=None):
    return Component(kind, kind, length, od, bore, weight, tool_joint_od=joint)


STRING = String(
    (
        component("bit", 0.3, 0.2159, 0.0, 900.0),
        component("collar", 90.0, 0.1651, 0.0714, 1300.0),
        component("hwdp", 140.0, 0.127, 0.0762, 720.0, 0.165),
        component("drillpipe", 500.0, 0.127, 0.1086, 310.0, 0.168),
    )
)


@pytest.fixture
def well():
    return Well(
        trajectory=build_trajectory(
            [0.0, 500.0, 800.0, 1400.0, 2000.0],
            np.array([0.0, 0.0, 30.0, 85.0, 92.0]) * DEG,
            np.array([0.0, 10.0, 10.0, 40.0, 45.0]) * DEG,
        ),
        hole=Hole(
            top=np.array([0.0, 1200.0]),
            bottom=np.array([1200.0, 2500.0]),
            diameter=np.array([0.2244, 0.2159]),
            kind=("cased", "open"),
            name=("", ""),
            friction=np.array([np.nan, np.nan]),
        ),
        string=STRING,
        fluid=constant_fluid(MUD),
    )


def naive_weight(well, bit, step=0.1):
    """Sum w cos I over short pieces from the bit up, each weighed by the component that covers it."""
    above = np.arange(step / 2, bit, step)
    inclination = well.trajectory.at(bit - above).inclination
    total = 0.0
    for distance, angle in zip(above, inclination, strict=True):
        low = 0.0
        for part in well.string.components:
            low += part.length
            if distance < low:
                break
        total += part.weight * BUOYANT * step * np.cos(angle)
    return total


@pytest.mark.parametrize("bit", [60.0, 700.0, 1650.0])
def test_rotating_weight_is_the_sum_of_its_pieces(well, bit):
    assert well.rotating_weight([bit])[0] == pytest.approx(naive_weight(well, bit), rel=1e-6)


def test_rotating_weight_in_a_vertical_hole_is_plain_arithmetic(well):
    straight = replace(well, trajectory=build_trajectory([0.0], [0.0], [0.0]))
    expected = (0.3 * 900 + 90 * 1300 + 140 * 720 + (2000 - 230.3) * 310) * BUOYANT
    assert straight.rotating_weight([2000.0])[0] == pytest.approx(expected)


def test_rotating_weight_at_surface_is_nothing(well):
    assert well.rotating_weight([0.0, -12.0]).tolist() == [0.0, 0.0]
    assert well.rotating_weight([]).shape == (0,)


def test_rotating_weight_in_air_and_in_a_given_mud(well):
    air, mud = well.rotating_weight([900.0], density=0.0), well.rotating_weight([900.0], density=1500.0)
    assert mud[0] / air[0] == pytest.approx(1.0 - 1500.0 / 7850.0)


def test_a_mud_by_depth_weighs_each_depth_in_its_own(well):
    fluid = Fluid(np.array([1000.0, 1500.0]), np.array([500.0, 1000.0]), "depth")
    found = replace(well, fluid=fluid).rotating_weight([500.0, 1000.0])
    each = [well.rotating_weight([b], density=d)[0] for b, d in ((500.0, 1000.0), (1000.0, 1500.0))]
    np.testing.assert_allclose(found, each)


def test_a_string_that_ends_in_a_tool_has_no_pipe_above(well):
    short = replace(
        well,
        string=String(STRING.components[:2]),
        trajectory=build_trajectory([0.0], [0.0], [0.0]),
    )
    expected = (0.3 * 900 + 90 * 1300) * BUOYANT
    assert short.rotating_weight([500.0])[0] == pytest.approx(expected)


def test_reach_within_string_and_hole_is_fine(well):
    well.check_reach(2400.0)
    well.check_reach(2600.0)
    replace(well, string=String(STRING.components[:2])).check_reach(90.0)


def test_a_short_string_without_pipe_on_top_is_refused(well):
    with pytest.raises(
        TableError, match=r"90\.3 m long and ends in collar \(collar\).*2400\.0 m; add the pipe"
    ):
        replace(well, string=String(STRING.components[:2])).check_reach(2400.0)


def test_a_bit_far_below_a_cased_last_row_is_refused(well):
    hole = replace(well.hole, kind=("cased", "cased"))
    replace(well, hole=hole).check_reach(2510.0)
    with pytest.raises(
        TableError, match=r"ends at 2500\.0 m in a cased section.*2600\.0 m; add the open hole"
    ):
        replace(well, hole=hole).check_reach(2600.0)


def test_a_component_wider_than_its_hole_is_refused_where_it_gets_there(well):
    wide = replace(STRING.components[1], od=0.22, line=3)
    too_wide = replace(well, string=String((STRING.components[0], wide, *STRING.components[2:])))
    too_wide.check_reach(1100.0)
    with pytest.raises(
        TableError, match=r"line 3: collar \(collar\) is 220\.0 mm wide .* 215\.9 mm below 1200 m"
    ):
        too_wide.check_reach(1300.0)


def test_a_tool_joint_counts_and_an_underreamer_may_open_wider(well):
    joint = replace(STRING.components[3], tool_joint_od=0.23)
    with pytest.raises(TableError, match=r"drillpipe \(drillpipe\) is 230\.0 mm"):
        replace(well, string=String((*STRING.components[:3], joint))).check_reach(2000.0)
    reamer = component("reamer", 2.0, 0.25, 0.07, 1300.0)
    replace(well, string=String((STRING.components[0], reamer, *STRING.components[1:]))).check_reach(2000.0)


def write_case(folder, bit_od="8.5"):
    files = {
        "time.csv": "x\n",
        "survey.csv": "md [m],inc [deg],azi [deg]\n0,0,0\n800,20,30\n2000,60,30\n",
        "hole.csv": "top [m],bottom [m],diameter [in],kind\n0,1200,8.835,cased\n1200,2100,8.5,open\n",
        "string.csv": (
            "name,kind,length [m],od [in],id [in],weight [kg/m],tool_joint_od [in]\n"
            f"Bit,bit,0.3,{bit_od},,90,\nCollar,collar,90,6.5,2.8125,136,\nPipe,drillpipe,900,5,4.276,33,\n"
        ),
        "case.toml": (
            '[case]\nid = "a"\n[logs]\ntime = "time.csv"\n[survey]\nfile = "survey.csv"\n'
            '[hole]\nfile = "hole.csv"\n'
            '[string]\nfile = "string.csv"\n[fluid]\ndensity = "1.25 sg"\n'
        ),
    }
    for name, text in files.items():
        (folder / name).write_text(text)
    return folder / "case.toml"


def test_a_case_becomes_a_well_with_its_remarks(tmp_path):
    well = load_well(load_case(write_case(tmp_path)))
    assert well.trajectory.md[-1] == 2000.0
    assert well.hole.shoe == 1200.0
    assert well.fluid.typical == pytest.approx(1250.0)
    assert [w for w in well.warnings if "no tool joint OD for Pipe" in w]
    assert well.string_file.name == "string.csv"


def test_a_bit_wider_than_the_first_section_is_refused_at_once(tmp_path):
    with pytest.raises(TableError, match=r"string\.csv, line 2: Bit \(bit\) is 311\.1 mm wide"):
        load_well(load_case(write_case(tmp_path, bit_od="12.25")))
