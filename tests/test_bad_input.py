"""Bad input gets one clear message and exit status 2, and leaves earlier results untouched."""

import shutil

import pytest

import cases
from pipelines import cli

JOB = cases.Job(duration=3700.0)


@pytest.fixture(scope="module")
def good(tmp_path_factory):
    """Give a folder with a good case, to copy and spoil."""
    folder = tmp_path_factory.mktemp("good")
    cases.make_case(folder, JOB)
    return folder


@pytest.fixture
def case(good, tmp_path):
    """Give a case folder of one's own."""
    return shutil.copytree(good, tmp_path / "case")


def swap(case, file, old, new, count=1):
    """Replace text in a file of the case, and make sure that it was there."""
    text = (case / file).read_text()
    assert old in text
    (case / file).write_text(text.replace(old, new, count))


def lines(case, file, edit):
    """Edit the lines of a file of the case."""
    rows = (case / file).read_text().splitlines()
    (case / file).write_text("\n".join(edit(rows)) + "\n")


def column(case, name, edit):
    """Edit the cells of a column of the log; None takes the column out."""
    rows = [row.split(",") for row in (case / "time.csv").read_text().splitlines()]
    at = rows[0].index(name)
    for number, row in enumerate(rows):
        if edit is None:
            del row[at]
        elif number:
            row[at] = edit(number, row[at])
    (case / "time.csv").write_text("\n".join(",".join(row) for row in rows) + "\n")


def header(case, old, new):
    swap(case, "time.csv", old, new)


def reverse_half(rows):
    """Turn the second half of a log round, stamps and all, so that time goes back and never recovers."""
    half = len(rows) // 2
    return rows[:half] + [f"2031-05-05{row[10:]}" for row in reversed(rows[half:])]


def stack(case, edit):
    """Edit the rows of the string table that are not the header."""
    lines(case, "string.csv", lambda rows: [rows[0], *edit(rows[1:])])


# name: (how the case is spoiled, what the message must hold)
SPOILED = {
    "case file missing": (lambda c: (c / "case.toml").unlink(), ["case.toml"]),
    "case file empty": (lambda c: (c / "case.toml").write_text(""), ["case.toml", "format"]),
    "case file is a folder": (
        lambda c: ((c / "case.toml").unlink(), (c / "case.toml").mkdir()),
        ["case.toml"],
    ),
    "log missing": (lambda c: (c / "time.csv").unlink(), ["time.csv"]),
    "survey missing": (lambda c: (c / "survey.csv").unlink(), ["survey.csv"]),
    "hole missing": (lambda c: (c / "hole.csv").unlink(), ["hole.csv"]),
    "string missing": (lambda c: (c / "string.csv").unlink(), ["string.csv"]),
    "log empty": (lambda c: (c / "time.csv").write_text(""), ["time.csv", "empty"]),
    "log of a header alone": (lambda c: lines(c, "time.csv", lambda r: r[:1]), ["time.csv"]),
    "survey empty": (lambda c: (c / "survey.csv").write_text(""), ["survey.csv", "empty"]),
    "survey of a header alone": (lambda c: lines(c, "survey.csv", lambda r: r[:1]), ["survey.csv"]),
    "hole empty": (lambda c: (c / "hole.csv").write_text(""), ["hole.csv", "empty"]),
    "string empty": (lambda c: (c / "string.csv").write_text(""), ["string.csv", "empty"]),
    "no hookload": (lambda c: header(c, "Hookload (kN)", "Gas (ppm)"), ["time.csv", "hookload", "Gas"]),
    "no hookload, log otherwise good": (
        lambda c: column(c, "Hookload (kN)", None),
        ["time.csv", "hookload", "Block Position", "WOB"],
    ),
    "no depth": (
        lambda c: (column(c, "Bit Depth (m)", None), column(c, "Hole Depth (m)", None)),
        ["time.csv", "bit_depth"],
    ),
    "no time": (lambda c: column(c, "Time", None), ["time.csv", "time"]),
    "hookload without unit": (
        lambda c: header(c, "Hookload (kN)", "Hookload"),
        ["time.csv", "Hookload", "unit", "kN"],
    ),
    "hookload in a unit of pressure": (
        lambda c: header(c, "Hookload (kN)", "Hookload (bar)"),
        ["time.csv", "Hookload", "bar"],
    ),
    "hookload in an unknown unit": (
        lambda c: header(c, "Hookload (kN)", "Hookload (kQ)"),
        ["time.csv", "Hookload", "kQ"],
    ),
    "hookload of some hundred newtons": (
        lambda c: header(c, "Hookload (kN)", "Hookload (N)"),
        ["hookload", "N"],
    ),
    "depth in a unit of time": (
        lambda c: header(c, "Bit Depth (m)", "Bit Depth (min)"),
        ["time.csv", "Bit Depth", "min"],
    ),
    "hookload all null": (
        lambda c: column(c, "Hookload (kN)", lambda _n, _v: "-999.25"),
        ["time.csv", "Hookload (kN)", "every value", "missing"],
    ),
    "depth all null": (
        lambda c: column(c, "Bit Depth (m)", lambda _n, _v: ""),
        ["time.csv", "epth"],
    ),
    "time runs backwards for good": (lambda c: lines(c, "time.csv", reverse_half), ["time.csv", "back"]),
    "stamps that are none": (
        lambda c: column(c, "Time", lambda n, _v: f"sample {n}"),
        ["time.csv", "sample"],
    ),
    "survey goes back": (
        lambda c: lines(c, "survey.csv", lambda r: [*r[:10], r[11], r[10], *r[12:]]),
        ["survey.csv", "line 12", "270"],
    ),
    "survey turns impossibly": (
        lambda c: swap(c, "survey.csv", "\n1200.00,30.000,45.00", "\n1200.00,88.000,45.00"),
        ["survey.csv", "line 42"],
    ),
    "survey past upside down": (
        lambda c: swap(c, "survey.csv", "\n1200.00,30.000,45.00", "\n1200.00,191.9,45.00"),
        ["survey.csv", "line 42"],
    ),
    "survey with a word for a number": (
        lambda c: swap(c, "survey.csv", "\n1200.00,30.000,45.00", "\n1200.00,thirty,45.00"),
        ["survey.csv", "line 42", "inclination", "thirty"],
    ),
    "survey with a number out of bounds": (
        lambda c: swap(c, "survey.csv", "\n1200.00,30.000,45.00", "\n1200.00,1e400,45.00"),
        ["survey.csv", "line 42", "inclination", "1e400"],
    ),
    "survey without unit": (
        lambda c: swap(c, "survey.csv", "md [m]", "md"),
        ["survey.csv", "md", "unit"],
    ),
    "hole with a gap": (
        lambda c: swap(c, "hole.csv", "\n1500.0,", "\n1510.0,"),
        ["hole.csv", "line 3", "1500", "1510"],
    ),
    "hole with an overlap": (
        lambda c: swap(c, "hole.csv", "\n1500.0,", "\n1490.0,"),
        ["hole.csv", "line 3", "1490", "1500"],
    ),
    "hole of an unknown kind": (
        lambda c: swap(c, "hole.csv", "open,open hole", "opne,open hole"),
        ["hole.csv", "line 3", "opne", "open"],
    ),
    "string too short and not pipe on top": (
        lambda c: stack(c, lambda r: r[:3]),
        ["string.csv", "line 4", "collar"],
    ),
    "string wider than the hole": (
        lambda c: swap(c, "string.csv", "Collars,collar,27.0,165.1", "Collars,collar,27.0,265.1"),
        ["string.csv"],
    ),
    "string with a bore wider than itself": (
        lambda c: swap(c, "string.csv", "165.1,71.4", "165.1,171.4"),
        ["string.csv", "line 4"],
    ),
    "unknown key": (
        lambda c: swap(c, "case.toml", "title =", "titel ="),
        ["case.toml", "titel", "title"],
    ),
    "unknown table": (
        lambda c: swap(c, "case.toml", "[survey]", "[surveys]"),
        ["case.toml", "surveys", "survey"],
    ),
    "wrong TOML": (
        lambda c: swap(c, "case.toml", 'well = "Heron 1"', "well = Heron 1"),
        ["case.toml", "line 6"],
    ),
    "bare number": (
        lambda c: swap(c, "case.toml", '"1.25 g/cm3"', "1.25"),
        ["case.toml", "density", "1.25", "unit"],
    ),
    "unit of another quantity": (
        lambda c: swap(c, "case.toml", '"1.25 g/cm3"', '"1.25 kN"'),
        ["case.toml", "density", "kN"],
    ),
    "layout of the future": (
        lambda c: swap(c, "case.toml", "format = 1", "format = 99"),
        ["case.toml", "format", "99"],
    ),
    "id that is no folder name": (
        lambda c: swap(c, "case.toml", 'id = "heron-1-run-2"', 'id = "../heron"'),
        ["case.toml", "id", "../heron"],
    ),
    "channel of a column that is not there": (
        lambda c: swap(c, "case.toml", "[survey]", '[logs.channels]\nhookload = "HKLX"\n\n[survey]'),
        ["HKLX"],
    ),
}


@pytest.mark.parametrize("name", SPOILED)
def test_bad_input_is_refused(case, tmp_path, capsys, name):
    spoil, words = SPOILED[name]
    out = tmp_path / "out"
    out.mkdir()
    (out / "summary.json").write_text("earlier")
    spoil(case)

    status = cli.main(["incident", str(case / "case.toml"), "--out", str(out)])

    captured = capsys.readouterr()
    assert status == 2, captured.err
    assert captured.out == ""
    assert captured.err.startswith("tallyback: ")
    assert captured.err.count("\n") == 1, "one message"
    for word in words:
        assert word in captured.err
    assert [(p.name, p.read_text()) for p in out.iterdir()] == [("summary.json", "earlier")]
    assert sorted(p.name for p in tmp_path.iterdir()) == ["case", "out"], "no litter"
