"""The table of sources in DEVELOPERS.md: as written by its script, and no better than the truth."""

from __future__ import annotations

from pathlib import Path

import pytest

from validation_rows import ROWS
from validation_table import HEADING, PAGE, placed

HERE = Path(__file__).parent


def test_page_is_what_the_script_writes():
    page = PAGE.read_text(encoding="utf-8")
    assert HEADING in page
    assert placed(page) == page, "run python tests/validation_table.py"


@pytest.mark.parametrize("row", [row for row in ROWS if row.found], ids=lambda row: row.source)
def test_no_source_is_met_less_closely_than_stated(row):
    assert row.found() <= row.within


def test_every_row_names_a_file_of_tests():
    for row in ROWS:
        assert (HERE / f"{row.file}.py").is_file()


def test_every_source_of_the_mechanics_has_a_row():
    named = {row.file for row in ROWS}
    # geometry and units have pages of their own
    others = {"check_survey", "survey_wellpathpy", "check_pipe_sections", "sections_pint", "units_pint"}
    files = {path.stem.removeprefix("test_") for path in (HERE / "validation").glob("test_*.py")}
    mechanics = {f"validation/test_{name}" for name in files - others}
    assert not {
        name for name in mechanics - named if "forensics.mechanics" in (HERE / f"{name}.py").read_text()
    }
