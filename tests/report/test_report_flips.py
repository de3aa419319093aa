"""The section on what would turn the findings."""

from __future__ import annotations

import dataclasses

import pytest

from forensics.episodes.flips import Flip
from forensics.estimate import Estimate
from forensics.exports.flips import flips_content
from forensics.report.describe import make_scene
from forensics.report.elements import Picture
from forensics.report.figures.flips import flip_chart
from forensics.report.sections import flips


@pytest.fixture
def turned(findings):
    friction = Estimate(0.27, 0.25, 0.29, "steady weights")
    block = Estimate(300e3, 298e3, 302e3, "steady weights")
    some = (
        Flip("E001", "helix", "open-hole friction", "dimensionless", friction, (0.05, 0.6), (0.21, 0.6)),
        Flip("E002", "lockup", "open-hole friction", "dimensionless", friction, (0.05, 0.6), (0.05, 0.6)),
        Flip("E001", "helix", "block weight", "force", block, (250e3, 350e3), (285e3, 350e3)),
    )
    return dataclasses.replace(findings, flips=some)


def test_rows_tell_where_each_finding_holds(turned):
    section = flips.describe(make_scene(turned, "metric"))
    table, doubts = (e for e in section.elements if e.form == "table")
    assert "hole" in str(doubts.rows)
    assert table.rows[0][2:] == (
        "0.27 (0.25 to 0.29)",
        "The helix holds for open-hole friction above 0.21",
        "3.0",
    )
    assert table.rows[1][-1] == "none found"
    assert any(isinstance(e, Picture) for e in section.elements)
    none = flips.describe(make_scene(dataclasses.replace(turned, flips=()), "metric"))
    assert [e.form for e in none.elements] == ["text", "table"]


@pytest.mark.parametrize(("system", "unit"), [("metric", "[kN]"), ("field", "[klbf]")])
def test_the_chart_has_a_strip_for_each_input(turned, system, unit):
    figure = flip_chart(make_scene(turned, system))
    assert [axes.get_xlabel() for axes in figure.axes] == ["open-hole friction", f"block weight {unit}"]
    assert [label.get_text() for label in figure.axes[0].get_yticklabels()] == ["E001 helix", "E002 lockup"]


def test_the_summary_has_nulls_where_nothing_turns(turned):
    first, second, third = flips_content(turned)
    assert (first["holds_from"], first["holds_to"], first["unit"]) == (0.21, None, "-")
    assert (second["holds_from"], second["holds_to"]) == (None, None)
    assert (third["input"], third["value"], third["holds_from"], third["unit"]) == (
        "block weight",
        300.0,
        285.0,
        "kN",
    )
