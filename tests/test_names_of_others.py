"""Names come from other people's files: nothing in them may steer a screen, a page or a spreadsheet."""

import csv
import io
import unicodedata

import pytest
from hypothesis import given
from hypothesis import strategies as st

from forensics.errors import legible
from forensics.exports.text import inert
from forensics.report.elements import Bullets, Column, Report, Section, Table, Text
from forensics.report.plain import to_text
from forensics.report.render import render_report
from pipelines.cli import main

TURNS, PAINTS = "\u202e", "\x1b[31m"


def steers(text):
    """Give the letters that stand nowhere but change what others look like."""
    marks = "\u202a\u202e\u2066"
    return [c for c in text if c not in "\n\t" and (unicodedata.category(c) == "Cc" or c in marks)]


@given(st.text())
def test_legible_text_steers_nothing_and_keeps_its_letters(text):
    shown = legible(text)
    assert steers(shown) == []
    assert [c for c in text if c.isalnum()] == [c for c in shown if c.isalnum()] or "<U+" in shown
    assert legible(shown) == shown


@given(st.text())
def test_no_cell_begins_as_a_formula_does(text):
    assert inert(text)[:1] not in tuple("=+-@\t\r\n")
    assert inert(text).removeprefix("'") == text.removeprefix("'")
    line = io.StringIO()
    csv.writer(line).writerow([inert(text), inert(-1.5)])
    assert next(csv.reader(io.StringIO(line.getvalue(), newline="")))[1] == "-1.5"


def test_page_and_terminal_show_hostile_names_as_text():
    evil = f'<script>x</script>"><img src=x onerror=y> {TURNS}gnp.exe {PAINTS} {{{{7*7}}}} $\\frac{{$ שלום'
    table = Table(evil, (Column(evil),), ((evil,),))
    section = Section("a", evil, (Text(evil), Bullets((evil,)), table))
    report = Report(evil, evil, ((evil, evil),), (section,), evil)
    page = render_report(report)
    assert "<script" not in page
    assert "<img" not in page
    assert "{{7*7}}" in page
    assert "&lt;U+202E&gt;gnp.exe" in page
    for text in (page, to_text(report)):
        assert steers(text) == []
        assert "שלום" in text


@pytest.mark.parametrize("name", [f"{PAINTS}.las", f"a{TURNS}sal.exe"])
def test_a_refusal_names_a_file_without_painting_the_terminal(tmp_path, capsys, name):
    assert main(["inspect", str(tmp_path / name), "--quiet"]) == 2
    said = capsys.readouterr().err
    assert steers(said) == []
    assert "<U+" in said
    assert "is missing" in said
