"""CSV tables as they come: marks, encodings, names, units; and bad cells named with their place."""

import math

import numpy as np
import pytest

from forensics.errors import TableError
from forensics.tables import Column, decode, read_table

COLUMNS = (
    Column("md", "length", ("measured depth", "depth"), required=True),
    Column("inclination", "angle", ("inc", "incl", "devi"), required=True),
    Column("azimuth", "angle", ("azi", "azim"), required=True),
    Column("weight", "linear_weight"),
    Column("friction", "dimensionless"),
    Column("name"),
)


@pytest.fixture
def read(tmp_path):
    def make(text, encoding="utf-8", columns=COLUMNS):
        path = tmp_path / "table.csv"
        path.write_bytes(text.encode(encoding))
        return read_table(path, columns)

    return make


HEADERS = [
    "md [m],inclination [deg],azimuth [deg]",
    "MD (m),Inc. (deg),Azim (deg)",
    "Measured Depth {m},INCL <deg>,AZI [deg]",
    "MD (m RKB),Inc (deg),Azimuth (deg grid)",
    "md_m,inc_deg,azi_deg_grid",
    "MD m,DEVI deg,AZIM dega",
    "Measured_Depth[m],inc[°],azi[°]",
    '"MD, m","Inc, deg","Azi, deg"',
    "md,inc,azi\nm,deg,deg",
    "md,inc,azi\n[m],(deg),(deg)",
    "md [m],inc,azi\n,deg,deg",
    "MD (driller) [m],Inc [deg] (raw),Azi (grid) [deg]",
    "md [m],inc [deg],azi [deg]\nm,deg,dega",
    "# a remark\n\nmd [m],inc [deg],azi [deg]",
]


@pytest.mark.parametrize("header", HEADERS)
def test_units_stand_in_brackets_after_the_name_or_in_a_row_of_units(read, header):
    table = read(header + "\n0,0,10\n30.5,1.5,350\n")
    assert table.number("md").tolist() == [0.0, 30.5]
    np.testing.assert_allclose(np.degrees(table.number("inclination")), [0.0, 1.5])
    np.testing.assert_allclose(np.degrees(table.number("azimuth")), [10.0, 350.0])


def test_units_become_si(read):
    table = read("MD (ft),inc (rad),azi (deg),weight (lb/ft)\n100,0.1,180,20\n")
    assert table.number("md")[0] == pytest.approx(30.48)
    assert table.number("inclination")[0] == pytest.approx(0.1)
    assert table.number("azimuth")[0] == pytest.approx(math.pi)
    # 20 lb/ft x 1.488163944 kg/m per lb/ft x 9.80665 m/s2
    assert table.number("weight")[0] == pytest.approx(20 * 1.488163944 * 9.80665)


HEAD = "md [m];inc [deg];azi [deg]\n"
MARKS = {
    "comma": ("md [m],inc [deg],azi [deg]\n1000.5,1.25,10\n", "utf-8"),
    "semicolon, decimal comma": (HEAD + "1000,5;1,25;10\n", "utf-8"),
    "semicolon, decimal comma of three digits": (HEAD + "1000,500;1,250;10,000\n", "utf-8"),
    "semicolon, thousands point": (HEAD + "1.000,5;1,25;10\n", "utf-8"),
    "semicolon, thousands comma": (HEAD + "1,000.5;1.25;10\n", "utf-8"),
    "semicolon, thousands blank": (HEAD + "1 000,5;1,25;10\n", "utf-8"),
    "tab": (HEAD.replace(";", "\t") + "1000.5\t1.25\t10\n", "utf-8"),
    "bar": (HEAD.replace(";", "|") + "1000.5|1.25|10\n", "utf-8"),
    "quoted thousands": ('md [m],inc [deg],azi [deg]\n"1,000.5",1.25,10\n', "utf-8"),
    "quoted decimal comma": ('md [m],inc [deg],azi [deg]\n"1000,5","1,25",10\n', "utf-8"),
    "byte order mark": (HEAD + "1000.5;1.25;10\n", "utf-8-sig"),
    "utf-16": (HEAD + "1000.5;1.25;10\n", "utf-16"),
    "windows-1252": ("md [m];inc [°];azi [°]\n1000.5;1.25;10\n", "cp1252"),
    "windows line ends": (HEAD.replace("\n", "\r\n") + "1000.5;1.25;10\r\n", "utf-8"),
    "old line ends": (HEAD.replace("\n", "\r") + "1000.5;1.25;10", "utf-8"),
    "empty rows at the end": (HEAD + "1000.5;1.25;10\n;;\n\n", "utf-8"),
    "no newline at the end": (HEAD + "1000.5;1.25;10", "utf-8"),
    "exponent": (HEAD + "1.0005e3;1.25E0;10\n", "utf-8"),
    "trailing separator": (HEAD.replace("\n", ";\n") + "1000.5;1.25;10;\n", "utf-8"),
}


@pytest.mark.parametrize("name", MARKS)
def test_marks_and_encodings_are_found_from_the_file(read, name):
    table = read(*MARKS[name])
    assert len(table) == 1
    assert table.number("md")[0] == pytest.approx(1000.5)
    assert np.degrees(table.number("inclination")[0]) == pytest.approx(1.25)
    assert np.degrees(table.number("azimuth")[0]) == pytest.approx(10.0)


def test_thousands_alone_between_quoted_commas_are_thousands(read):
    assert read('md [m],inc [deg],azi [deg]\n"1,500",1,2\n').number("md")[0] == 1500.0


def test_columns_not_asked_for_are_listed(read):
    table = read("md [m],tvd [m],inc [deg],azi [deg],DLS\n0,0,0,0,0\n")
    assert table.ignored == ("tvd [m]", "DLS")


def test_the_exact_name_goes_before_an_alias(read):
    table = read("depth [m],md [m],inc [deg],azi [deg]\n7,8,0,0\n")
    assert table.number("md")[0] == 8.0


def test_optional_cells_may_be_empty_and_absent_columns_are_nan(read):
    table = read("md [m],inc [deg],azi [deg],weight [kg/m],name\n0,0,0,-,shoe\n1,0,0,n/a,\n2,0,0\n")
    assert np.isnan(table.number("weight")).all()
    assert np.isnan(table.number("friction")).all()
    assert table.text("name") == ("shoe", "", "")


def test_lines_are_those_of_the_file(read):
    table = read("# made by hand\n\nmd [m],inc [deg],azi [deg]\n0,0,0\n\n5,0,0\n")
    assert table.lines == (4, 6)
    assert "line 6, column 'md [m]'" in str(table.error("is odd", 1, "md"))


def test_a_pure_number_needs_no_unit_but_may_be_percent(read):
    start = "md [m],inc [deg],azi [deg],friction"
    assert read(start + "\n0,0,0,0.25\n").number("friction")[0] == 0.25
    assert read(start + " [%]\n0,0,0,25\n").number("friction")[0] == 0.25


REFUSED = {
    "empty file": ("", ["is empty"]),
    "only remarks": ("# nothing\n", ["is empty"]),
    "only separators": (";;;\n", ["no cells"]),
    "header alone": ("md [m],inc [deg],azi [deg]\n", ["no rows of data"]),
    "header and units alone": ("md,inc,azi\nm,deg,deg\n", ["no rows of data"]),
    "column missing": (
        "md [m],inc [deg]\n0,0\n",
        ["line 1", "no column 'azimuth'", "found md [m], inc [deg]"],
    ),
    "column misspelt": (
        "md [m],inc [deg],azimut [deg]\n0,0,0\n",
        ["no column 'azimuth'", "did you mean 'azimut [deg]'"],
    ),
    "no unit": ("md,inc [deg],azi [deg]\n0,0,0\n", ["line 1", "'md'", "no unit", "'md [m]'"]),
    "unit of another quantity": ("md [kN],inc [deg],azi [deg]\n0,0,0\n", ["'md [kN]'", "kN", "length"]),
    "unknown unit": ("md [mq],inc [deg],azi [deg]\n0,0,0\n", ["'md [mq]'", "mq"]),
    "two of a kind": ("md [m],inc [deg],incl [deg],azi [deg]\n0,0,0,0\n", ["'inc [deg]' and 'incl [deg]'"]),
    "two units": ("md [m],inc [deg],azi [deg]\nft,deg,deg\n0,0,0\n", ["line 2", "'md [m]'", "'m'", "'ft'"]),
    "same name twice": ("md [m],md [ft],inc [deg],azi [deg]\n0,0,0,0\n", ["'md [m]' and 'md [ft]'"]),
    "word in a cell": (
        "md [m],inc [deg],azi [deg]\n0,0,0\n5,thirty,0\n",
        ["line 3", "'inc [deg]'", "'thirty'"],
    ),
    "word in the first row": ("md [m],inc [deg],azi [deg]\nzero,0,0\n", ["line 2", "'md [m]'", "'zero'"]),
    "empty cell": ("md [m],inc [deg],azi [deg]\n0,,0\n", ["line 2", "'inc [deg]'", "is empty"]),
    "null code": ("md [m],inc [deg],azi [deg]\n0,-999.25,0\n", ["line 2", "'-999.25'"]),
    "short row": ("md [m],inc [deg],azi [deg]\n0,0\n", ["line 2", "'azi [deg]'", "is empty"]),
    "bare decimal comma": (
        "md [m],inc [deg],azi [deg]\n0,5,1,5,2,5\n",
        ["line 2", "6 cells under 3 headers", "decimal mark"],
    ),
}


@pytest.mark.parametrize("name", REFUSED)
def test_a_bad_table_is_refused_with_its_place(read, tmp_path, name):
    text, words = REFUSED[name]
    with pytest.raises(TableError) as caught:
        read(text)
    for word in (str(tmp_path / "table.csv"), *words):
        assert word in str(caught.value)


def test_a_required_word_may_not_be_empty(read):
    with pytest.raises(TableError, match=r"line 3, column 'kind': is empty; a word"):
        read("kind,name\nopen,a\n,b\n", columns=(Column("kind", required=True), Column("name")))


def test_a_file_that_is_not_there_is_refused(tmp_path):
    with pytest.raises(TableError, match="is missing"):
        read_table(tmp_path / "gone.csv", COLUMNS)
    with pytest.raises(TableError, match="is a folder"):
        read_table(tmp_path, COLUMNS)


def test_decoding_never_fails():
    assert decode(b"\x81\xff") != ""
    assert decode("md".encode("utf-16")) == "md"
