"""Case files and tables made to harm: devices, pipes, loops of links and endless keys are refused at once."""

import os
from pathlib import Path

import pytest

from forensics.case import load_case
from forensics.errors import CaseError, InputError, LogError, TableError
from forensics.logs.registry import read_head
from forensics.tables import reader
from forensics.well.survey import load_trajectory

CASE = """format = 1
[case]
id = "{id}"
[logs]
time = ["{log}"]
[survey]
file = "{survey}"
[hole]
file = "a.csv"
[string]
file = "a.csv"
[fluid]
density = "1.2 g/cm3"
"""


@pytest.fixture
def load(tmp_path):
    (tmp_path / "a.csv").write_text("md [m]\n")
    os.mkfifo(tmp_path / "pipe.csv")
    (tmp_path / "zero.csv").symlink_to("/dev/zero")
    (tmp_path / "loop.csv").symlink_to("loop.csv")
    (tmp_path / "good.csv").symlink_to("a.csv")

    def make(id="x", log="a.csv", survey="a.csv"):
        (tmp_path / "case.toml").write_text(CASE.format(id=id, log=log, survey=survey))
        return load_case(tmp_path / "case.toml")

    return make


@pytest.mark.parametrize(
    ("given", "words"),
    [
        ({"log": "pipe.csv"}, "a device or a pipe"),
        ({"log": "zero.csv"}, "a device or a pipe"),
        ({"log": "/dev/zero"}, "a device or a pipe"),
        ({"survey": "loop.csv"}, "can't be"),
        ({"survey": "x" * 5000}, "can't be"),
        ({"survey": "a\\u0000b"}, "can't be"),
        ({"survey": "../../nowhere.csv"}, "is missing"),
        ({"survey": "."}, "is a folder"),
        ({"id": "../x"}, "it names a folder"),
        ({"id": ".."}, "it names a folder"),
        ({"id": "x" * 300}, "300 letters"),
    ],
)
def test_what_a_case_may_not_name(load, given, words):
    with pytest.raises(CaseError, match=words) as caught:
        load(**given)
    assert caught.value.line


def test_files_elsewhere_and_links_to_files_are_the_users_own(load, tmp_path):
    assert load(survey="good.csv").survey == tmp_path / "a.csv"
    assert load(survey=f"../{tmp_path.name}/a.csv").survey == tmp_path / "a.csv"
    assert load(survey=str(tmp_path / "a.csv")).survey == tmp_path / "a.csv"


@pytest.mark.parametrize("path", ["/dev/zero", "pipe", "zero"])
def test_no_reader_opens_what_has_no_end(load, tmp_path, path):
    assert load is not None
    path = Path(path) if path.startswith("/") else tmp_path / f"{path}.csv"
    for read, error in ((load_case, CaseError), (load_trajectory, TableError), (read_head, LogError)):
        with pytest.raises(error, match="a device or a pipe"):
            read(path)


@pytest.mark.parametrize(
    "text", ["a = " + "[" * 100_000, ".".join("a" * 20_000) + " = 1", "x = {" + "a." * 20_000 + "a = 1}"]
)
def test_keys_and_lists_without_end_are_refused(tmp_path, text):
    (tmp_path / "case.toml").write_text(text)
    with pytest.raises(CaseError, match="nests far deeper"):
        load_case(tmp_path / "case.toml")


def test_a_case_file_of_megabytes_is_refused(tmp_path):
    (tmp_path / "case.toml").write_text("# x\n" * 2**17)
    with pytest.raises(CaseError, match=r"has 0\.5 MiB"):
        load_case(tmp_path / "case.toml")


@pytest.mark.parametrize(
    ("rows", "words"),
    [
        ("0,0," + "9" * 300_000, "can't be cut into cells"),
        ('0,0,"' + "9" * 300_000, "can't be cut into cells"),
        ("0," * 100_000, "over 1000 cells"),
        ("0,0,inf", "a number is needed"),
        ("0,0,nan", "a number is needed|is empty"),
        ("0,0,1e999", "a number is needed"),
    ],
)
def test_a_table_with_cells_without_end_is_refused(tmp_path, rows, words):
    (tmp_path / "s.csv").write_text(f"md [m],inclination [deg],azimuth [deg]\n{rows}\n")
    with pytest.raises(InputError, match=words) as caught:
        load_trajectory(tmp_path / "s.csv")
    assert caught.value.line == 2


def test_a_table_larger_than_any_is_refused_unread(tmp_path, monkeypatch):
    monkeypatch.setattr(reader, "LARGEST", 1000)
    (tmp_path / "s.csv").write_text("md [m],inclination [deg],azimuth [deg]\n" + "0,0,0\n" * 1000)
    with pytest.raises(TableError, match="is not read here"):
        load_trajectory(tmp_path / "s.csv")
