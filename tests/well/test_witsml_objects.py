"""Survey, hole and string from WITSML objects, clean and as dirty as real ones are."""

import math

import numpy as np
import pytest

import cases
from forensics.case import load_case
from forensics.errors import TableError
from forensics.well.hole import load_hole
from forensics.well.model import load_well
from forensics.well.survey import load_trajectory
from forensics.well.tally import load_string
from forensics.well.weights import derive_weight

DEG = math.pi / 180.0


def document(plural, version, *objects):
    space = "1series" if version.startswith("1.4") else "131"
    name = plural.removesuffix("s")
    body = "".join(
        f'<{name} uidWell="w" uidWellbore="b" uid="u{i}"><nameWell>Invented</nameWell><name>n{i}</name>'
        f"{parts}<commonData><priv_x>1</priv_x></commonData></{name}>\n"
        for i, parts in enumerate(objects)
    )
    root = f'<{plural} xmlns="http://www.witsml.org/schemas/{space}" version="{version}">'
    return f'<?xml version="1.0"?>\n{root}\n{body}</{plural}>'


def tag(name, value, unit=None):
    return f'<{name} uom="{unit}">{value}</{name}>' if unit else f"<{name}>{value}</{name}>"


def station(md, incl, azi, unit="dega", more=""):
    return (
        f'<trajectoryStation uid="s{md}"><typeTrajStation>magnetic MWD</typeTrajStation>{tag("md", md, "m")}'
        f"{tag('incl', incl, unit)}{tag('azi', azi, unit)}{more}</trajectoryStation>\n"
    )


def component(kind, sequence, length, od, more=""):
    number = "" if sequence is None else tag("sequence", sequence)
    return (
        f"<tubularComponent><typeTubularComp>{kind}</typeTubularComp>{number}"
        f"<description>{kind} d</description>{tag('od', od, 'm')}{tag('len', length, 'm')}{more}"
        "</tubularComponent>\n"
    )


def section(kind, top, bottom, inner=None, more=""):
    bore = "" if inner is None else tag("idSection", inner, "m")
    return (
        f"<wbGeometrySection><typeHoleCasing>{kind}</typeHoleCasing>{tag('mdTop', top, 'm')}"
        f"{tag('mdBottom', bottom, 'm')}{bore}{more}</wbGeometrySection>\n"
    )


@pytest.fixture
def survey(tmp_path):
    def make(*parts, version="1.4.1.1"):
        path = tmp_path / "trajectory.xml"
        path.write_text(document("trajectorys", version, *parts))
        return load_trajectory(path)

    return make


@pytest.fixture
def hole(tmp_path):
    def make(*sections):
        path = tmp_path / "wbgeometry.xml"
        path.write_text(document("wbGeometrys", "1.3.1.1", "".join(sections)))
        return load_hole(path)

    return make


@pytest.fixture
def string(tmp_path):
    def make(*components):
        path = tmp_path / "tubular.xml"
        path.write_text(document("tubulars", "1.4.1.1", "".join(components)))
        return load_string(path)

    return make


def said(remarks, *words):
    return any(all(word in remark for word in words) for remark in remarks)


STATIONS = [station(0, 0, 0), station(500, 1, 40), station(800, 20, 45), station(1100, 40, 50)]


# --- the whole well


def as_xml(folder):
    """Rewrite a case's tables as WITSML objects, in other units, and name them in the case file."""
    trajectory, _ = load_trajectory(folder / "survey.csv")
    stations = "".join(
        f'<trajectoryStation>{tag("md", md / 0.3048, "ft")}{tag("incl", inc, "rad")}'
        f"{tag('azi', azi, 'rad')}</trajectoryStation>"
        for md, inc, azi in zip(trajectory.md, trajectory.inclination, trajectory.azimuth, strict=True)
    )
    (folder / "trajectory.xml").write_text(document("trajectorys", "1.3.1.1", stations))
    well, _ = load_hole(folder / "hole.csv")
    rows = [
        section("casing" if kind == "cased" else "open hole", top, bottom, diameter)
        for kind, top, bottom, diameter in zip(well.kind, well.top, well.bottom, well.diameter, strict=True)
    ]
    (folder / "wbgeometry.xml").write_text(document("wbGeometrys", "1.4.1.1", "".join(rows[::-1])))
    kinds = {"bit": "bit", "motor": "motor", "collar": "drill collar", "hwdp": "heavy weight drill pipe",
             "drillpipe": "drill pipe"}  # fmt: skip
    parts = [
        component(
            kinds[c.kind], i, c.length, f"{c.od + 4e-13:.15f}",
            tag("id", c.id, "m") + tag("wtPerLen", c.weight / 9.80665 / 1.488163944, "lbm/ft")
            + (f"<connection>{tag('od', c.tool_joint_od, 'm')}</connection>" if c.tool_joint_od else "")
            + tag("tensYield", 0, "Pa"),
        )
        for i, c in enumerate(load_string(folder / "string.csv")[0].components, 1)
    ]  # fmt: skip
    (folder / "tubular.xml").write_text(document("tubulars", "1.4.1.1", "".join(parts[::-1])))
    case = (folder / "case.toml").read_text()
    for old, new in (("survey", "trajectory"), ("hole", "wbgeometry"), ("string", "tubular")):
        case = case.replace(f'"{old}.csv"', f'"{new}.xml"')
    (folder / "xml.toml").write_text(case)


def test_a_well_of_witsml_objects_is_the_well_of_the_tables(tmp_path):
    path = cases.make_case(tmp_path, cases.Job(duration=60.0))
    as_xml(tmp_path)
    tables, objects = load_well(load_case(path)), load_well(load_case(tmp_path / "xml.toml"))
    depths = np.linspace(100.0, 2400.0, 40)
    np.testing.assert_allclose(
        objects.trajectory.position(depths), tables.trajectory.position(depths), atol=1e-6
    )
    np.testing.assert_allclose(objects.rotating_weight(depths), tables.rotating_weight(depths), rtol=1e-7)
    np.testing.assert_allclose(objects.hole.diameter_at(depths), tables.hole.diameter_at(depths))
    assert objects.hole.kind == tables.hole.kind
    for one, other in zip(objects.string.components, tables.string.components, strict=True):
        assert (one.kind, one.tool_joint_od) == (other.kind, other.tool_joint_od)
        assert (one.od, one.id) == pytest.approx((other.od, other.id), abs=1e-6)


# --- trajectory


def test_units_come_from_the_uom(survey):
    path, remarks = survey("".join(STATIONS))
    np.testing.assert_allclose(path.inclination[1:] / DEG, [1.0, 20.0, 40.0])
    assert remarks == ()


def test_stations_out_of_order_repeated_rejected_or_empty_are_put_right_and_counted(survey):
    rejected = station(900, 99, 45, more=tag("statusTrajStation", "rejected"))
    empty = station(1000, -999.25, 45)
    path, remarks = survey("".join([STATIONS[3], *STATIONS[:3], STATIONS[2], rejected, empty]))
    np.testing.assert_allclose(path.md, [0.0, 500.0, 800.0, 1100.0])
    assert said(remarks, "1 of 7 stations left out: marked rejected")
    assert said(remarks, "1 of 7 stations left out: without md, incl or azi")
    assert said(remarks, "1 stations told twice")
    assert said(remarks, "out of order")


def test_stations_that_disagree_at_one_depth_are_refused_with_their_line(survey):
    with pytest.raises(TableError, match=r"line 6: 800.00 m repeats the depth") as caught:
        survey("".join([*STATIONS[:3], station(800, 25, 45), STATIONS[3]]))
    assert caught.value.line == 6


def test_parts_of_one_trajectory_are_joined_and_two_trajectories_refused(survey, tmp_path):
    with pytest.raises(TableError, match=r"2 trajectories.*'n0', 'n1'.*keep the one"):
        survey("".join(STATIONS), "".join(STATIONS))
    path, remarks = survey("".join(STATIONS), tag("definitive", "true") + "".join(STATIONS[:3]))
    assert len(path.md) == 3
    assert said(remarks, "'n1' is marked definitive", "1 others left out")
    text = document("trajectorys", "1.4.1.1", "".join(STATIONS[:2]), "".join(STATIONS[2:]))
    (tmp_path / "parts.xml").write_text(text.replace('uid="u1"', 'uid="u0"'))
    assert len(load_trajectory(tmp_path / "parts.xml")[0].md) == 4


def test_vertical_depths_copied_from_measured_ones_are_left_aside(survey):
    rows = [station(md, inc, 45, more=tag("tvd", md, "m")) for md, inc in ((0, 0), (500, 20), (1500, 50))]
    path, remarks = survey("".join(rows))
    assert path.tvd[-1] < 1350.0
    assert said(remarks, "tvd repeats md")


@pytest.mark.parametrize(
    ("shift", "stretch", "words"), [(-54.9, 0.0, "another datum"), (0.0, 0.03, "stations are of this hole")]
)
def test_vertical_depths_of_another_datum_or_hole_are_told_apart(survey, shift, stretch, words):
    path, _ = survey("".join(STATIONS))
    tvd = path.tvd * (1.0 + stretch) + shift
    rows = [s.replace("</trajectoryStation>", f"{tag('tvd', v, 'm')}</trajectoryStation>")
            for s, v in zip(STATIONS, tvd, strict=True)]  # fmt: skip
    assert said(survey("".join(rows))[1], words)


def test_first_station_a_hair_off_the_rotary_is_at_it(survey):
    path, _ = survey("".join([station("-1.5e-6", 0, 0), *STATIONS[1:]]))
    assert path.md[0] == 0.0


def test_angles_that_nobody_decoded_are_refused(survey):
    rows = [station(md, 1.36057e-20, 1.36057e-20, "rad") for md in (0, 500, 900, 1200)]
    with pytest.raises(TableError, match=r"column 'incl'.*not decoded right"):
        survey("".join(rows))


@pytest.mark.parametrize(
    ("unit", "words"),
    [("", r"column 'incl': is 1 without a unit; give it as uom=\"deg\""), ("m", "'m' is a unit of length")],
)
def test_a_number_without_its_unit_is_refused(survey, unit, words):
    text = "".join(STATIONS).replace('uom="dega">1<', f'uom="{unit}">1<')
    with pytest.raises(TableError, match=words):
        survey(text)


def test_magnetic_north_is_remarked(survey):
    assert said(survey(tag("aziRef", "magnetic north") + "".join(STATIONS))[1], "magnetic north")


def test_another_object_is_refused_by_its_name(tmp_path):
    path = tmp_path / "trajectory.xml"
    path.write_text(document("tubulars", "1.4.1.1", component("bit", 1, 0.3, 0.2)))
    with pytest.raises(TableError, match="holds a document of tubular; a WITSML <trajectorys> document"):
        load_trajectory(path)
    path.write_text(document("trajectorys", "1.4.1.1", ""))
    with pytest.raises(TableError, match="holds no trajectoryStation"):
        load_trajectory(path)


def test_entities_are_refused_here_too(tmp_path):
    path = tmp_path / "trajectory.xml"
    path.write_text('<!DOCTYPE t [<!ENTITY x SYSTEM "file:///etc/hostname">]><trajectorys>&x;</trajectorys>')
    with pytest.raises(TableError, match="document type"):
        load_trajectory(path)


# --- hole


CASED = section("casing", 0, 1500, 0.2244)
OPEN = section("open hole", 1500, 3100, 0.2159)


def test_sections_out_of_order_and_a_riser_in_two_rows_are_sorted(hole):
    made, remarks = hole(OPEN, CASED.replace(">0<", ">300<"), section("riser", 40, 300, 0.48),
                         section("riser", 0, 40, 0.48))  # fmt: skip
    assert made.kind == ("cased", "cased", "cased", "open")
    assert made.shoe == 1500.0
    assert said(remarks, "4 sections stood out of order")


def test_of_walls_one_within_another_the_innermost_casing_counts(hole):
    made, remarks = hole(
        section("conductor", 0, 120, 0.72), section("casing", 0, 900, 0.32), CASED,
        section("liner", 1400, 2400, 0.157), section("open hole", 1500, 3100, 0.1524),
    )  # fmt: skip
    assert made.diameter.tolist() == pytest.approx([0.2244, 0.157, 0.1524])
    assert made.top.tolist() == pytest.approx([0.0, 1400.0, 2400.0])
    assert made.kind == ("cased", "cased", "open")
    assert said(remarks, "overlap", "innermost casing")


def test_open_hole_without_outer_diameter_is_read_and_without_any_refused(hole):
    assert hole(CASED, OPEN)[0].diameter[1] == pytest.approx(0.2159)
    made, remarks = hole(CASED, section("open hole", 1500, 3100, more=tag("odSection", 8.5, "in")))
    assert made.diameter[1] == pytest.approx(0.2159)
    assert said(remarks, "odSection taken as the diameter")
    with pytest.raises(TableError, match=r"line 4, column 'idSection': is missing or 0 in .*'open hole'"):
        hole(CASED, section("open hole", 1500, 3100))
    with pytest.raises(TableError, match="'idSection': is missing or 0 in section 'casing'"):
        hole(section("casing", 0, 1500, more=tag("odSection", 9.625, "in")), OPEN)


def test_vertical_depths_copied_from_measured_ones_are_said_to_be_unused(hole):
    _, remarks = hole(*(s.replace("</wbG", f"{tag('tvdBottom', md, 'm')}</wbG", 1)
                        for s, md in ((CASED, 1500), (OPEN, 3100))))  # fmt: skip
    assert said(remarks, "tvdBottom repeats mdBottom")


def test_a_first_wall_below_the_rotary_is_drawn_up(hole):
    made, remarks = hole(section("casing", 24.4, 1500, 0.2244), OPEN)
    assert made.top[0] == 0.0
    assert said(remarks, "starts at 24.4 m")


def test_gap_and_unknown_kind_are_refused_with_their_line(hole):
    with pytest.raises(TableError, match=r"line 4, column 'mdTop'.*leaves a gap"):
        hole(CASED, section("open hole", 1600, 3100, 0.2159))
    with pytest.raises(TableError, match="column 'typeHoleCasing': is 'unknown'"):
        hole(CASED, section("unknown", 1500, 3100, 0.2159))


def test_friction_factors_are_read_and_zeros_are_none(hole):
    made, _ = hole(CASED.replace("</wbG", "<factFric>0.21</factFric></wbG", 1),
                   OPEN.replace("</wbG", "<factFric>0</factFric></wbG", 1))  # fmt: skip
    assert made.friction[0] == pytest.approx(0.21)
    assert np.isnan(made.friction[1])


# --- string

BIT = component("bit", 1, 0.3, 0.2159)
COLLAR = component("drill collar", 2, 27, 0.1651, tag("id", 0.0714, "m") + tag("wtPerLen", 136, "kg/m"))
PIPE = component("drill pipe", 3, 900, 0.127, tag("id", 0.1086, "m"))


def test_components_go_by_sequence_and_noise_of_diameters_is_taken_off(string):
    noisy = PIPE.replace(">0.127<", ">0.127000000000204<")
    made, remarks = string(noisy, BIT, COLLAR)
    assert [c.kind for c in made.components] == ["bit", "collar", "drillpipe"]
    assert made.components[2].od == 0.127
    assert said(remarks, "3 components stood out of order", "1 lowest")


def test_a_sequence_from_the_top_is_turned_over_by_its_bit(string):
    rows = [part.replace(f">{i}</seq", f">{4 - i}</seq") for i, part in enumerate((BIT, COLLAR, PIPE), 1)]
    made, remarks = string(*rows)
    assert made.components[0].kind == "bit"
    assert said(remarks, "turned over")


def test_a_sequence_that_is_odd_is_refused_or_said(string):
    with pytest.raises(TableError, match=r"'sequence': 2 stands for 'drill collar d' and 'drill pipe d'"):
        string(BIT, COLLAR, PIPE.replace(">3</seq", ">2</seq"))
    with pytest.raises(TableError, match="'sequence': is missing for 'drill pipe d' while others have one"):
        string(BIT, COLLAR, PIPE.replace("<sequence>3</sequence>", ""))
    assert said(string(BIT, COLLAR, PIPE.replace(">3</seq", ">5</seq"))[1], "skips 3, 4")
    bare = [part.replace(f"<sequence>{i}</sequence>", "") for i, part in ((1, BIT), (3, PIPE))]
    assert said(string(*bare)[1], "order of the file")


def test_pipe_without_a_weight_gets_its_joints_and_the_doubt_is_said(string):
    made, remarks = string(BIT, COLLAR, PIPE)
    assert made.components[2].weight == derive_weight("drillpipe", 0.127, 0.1086, None).weight
    assert said(remarks, "no weight for drill pipe d", "8% off")
    made, remarks = string(BIT, COLLAR, PIPE.replace("</tub", f"{tag('odMx', 0.1683, 'm')}</tub", 1))
    assert made.components[2].weight == derive_weight("drillpipe", 0.127, 0.1086, 0.1683).weight
    assert said(remarks, "no weight for drill pipe d", "6% off")
    zero = PIPE.replace("</tub", f"{tag('wtPerLen', 0, 'kg/m')}</tub", 1)
    assert said(string(BIT, COLLAR, zero)[1], "8% off")


def test_pipe_without_a_bore_or_a_length_is_refused_by_name(string):
    with pytest.raises(TableError, match="column 'id': is empty; the inner diameter is needed"):
        string(BIT, component("drill pipe", 2, 900, 0.127))
    with pytest.raises(TableError, match="column 'len': is missing or 0 for 'drill pipe d'"):
        string(BIT, component("drill pipe", 2, 0, 0.127, tag("id", 0.1, "m")))
    with pytest.raises(TableError, match="column 'od': is missing or 0 for 'drill pipe d'"):
        string(BIT, component("drill pipe", 2, 900, 0, tag("id", 0.1, "m")))


def test_tools_without_a_bore_are_counted_and_one_lone_pipe_is_said(string):
    pulser = component("MWD pulser", 2, 9, 0.1651, tag("id", 0.07, "m"))
    blades = component("stabilizer", 3, 2, 0.1651)
    _, remarks = string(BIT, pulser, blades, PIPE.replace(">3</seq", ">4</seq"))
    assert said(remarks, "no bore for 2 tools")
    assert said(string(PIPE.replace(">3</seq", ">1</seq"))[1], "the only component")


def test_a_single_joint_in_mid_string_is_doubted(string):
    short = component("heavy weight drill pipe", 2, 9.3, 0.127, tag("id", 0.0762, "m"))
    assert said(string(BIT, short, PIPE)[1], "row 2 (hwdp, 9.3 m)", "one joint long")


@pytest.mark.parametrize(
    ("word", "kind"),
    [
        ("non-magnetic collar", "collar"), ("logging while drilling tool", "collar"), ("jar", "jar"),
        ("rotary steering tool", "collar"), ("motor steerable", "motor"), ("turbine", "motor"),
        ("bit diamond full hole", "bit"), ("bit sub", "sub"), ("cross over", "sub"), ("accelerator", "jar"),
        ("reamer", "reamer"), ("hole opener", "reamer"), ("stabilizer near bit", "stabiliser"),
        ("float collar", "float"), ("casing shoe", "float"), ("casing", "casing"), ("liner", "liner"),
        ("drill pipe compressive", "drillpipe"), ("thing", "other"),
    ],
)  # fmt: skip
def test_types_of_components_are_known(string, word, kind):
    made, remarks = string(component(word, 1, 20, 0.1, tag("id", 0.05, "m")), PIPE)
    assert made.components[0].kind == kind
    assert said(remarks, "says no kind") == (kind == "other")


def test_several_strings_in_one_file_are_refused_by_name(tmp_path):
    path = tmp_path / "tubular.xml"
    path.write_text(document("tubulars", "1.4.1.1", BIT + PIPE, BIT + PIPE))
    with pytest.raises(TableError, match=r"2 tubular objects.*'n0', 'n1'.*this run"):
        load_string(path)
