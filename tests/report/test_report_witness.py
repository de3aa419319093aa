"""The section on the bit's own witnesses, and its cross-plot."""

from __future__ import annotations

from dataclasses import replace

import matplotlib.pyplot as plt
import numpy as np
import pytest

from forensics.episodes.catalogue import Travel
from forensics.estimate import Estimate
from forensics.exports.witness import witness_content
from forensics.loads import Basis, BitWitness, Response
from forensics.replay.witness.agree import check_rows
from forensics.report.describe import make_scene
from forensics.report.figures.witness import cross_plot
from forensics.report.sections.witness import describe, over_episode, travel_sentence

HEARD = Response("differential pressure", Basis.DIFFERENTIAL, 30.0, 0.04, np.nan, 60e3, 90e3, 200, heard=True)
REFUSED = Response("downhole weight on bit", Basis.DOWNHOLE, why="it stood still")


def told(findings, apart):
    """Give the findings a witness that says 20 kN where the hookload says `apart` more."""
    n = len(findings.log)
    flat = np.ones(n)
    load = 20e3 + 5e3 * np.sin(np.arange(n) / 9.0)
    basis = np.full(n, Basis.DIFFERENTIAL, dtype=np.int8)
    witness = BitWitness(
        load, 2e3 * flat, basis, load + apart, 3e3 * flat, flat, 0.0 * flat,
        (HEARD, REFUSED),
    )  # fmt: skip
    half = n // 2
    slides = tuple(check_rows(witness, a, b, findings.log.time) for a, b in ((0, half - 1), (half, n - 1)))
    return replace(findings, loads=replace(findings.loads, witness=replace(witness, slides=slides)))


def text(findings):
    return " ".join(e.text for e in describe(make_scene(findings, "metric")).elements if e.form == "text")


def test_without_a_witness_the_report_says_what_the_bit_load_rests_on(findings):
    assert "hookload and on friction alone" in text(findings)
    assert witness_content(findings)["channels"] == []


@pytest.mark.parametrize(("apart", "word"), [(1e3, "agree within their errors"), (30e3, "In 2 of these")])
def test_agreement_and_disagreement_are_told(findings, apart, word):
    found = told(findings, apart)
    assert word in text(found)
    assert "above" in text(found)
    tables = [e for e in describe(make_scene(found, "metric")).elements if e.form == "table"]
    assert "no: it stood still" in str(tables[0].rows)
    assert len(tables[1].rows) == 2


def test_an_episode_says_whether_both_agree_over_it(findings):
    scene = make_scene(told(findings, 30e3), "metric")
    said = over_episode(scene, findings.episodes[0])
    assert "disagree" in said
    assert "standard errors apart" in said
    assert over_episode(make_scene(findings, "metric"), findings.episodes[0]) == ""


def test_the_summary_holds_the_same_numbers(findings):
    content = witness_content(told(findings, 30e3))
    assert content["overall"]["difference_kN"] == pytest.approx(30.0)
    assert [channel["believed"] for channel in content["channels"]] == [True, False]
    assert set(content["episodes"]) <= {episode.id for episode in findings.episodes}


def test_the_cross_plot_draws_with_and_without_slides(findings):
    before = len(plt.get_fignums())
    for found in (findings, told(findings, 1e3)):
        assert cross_plot(make_scene(found, "metric")).axes
    assert len(plt.get_fignums()) == before


@pytest.mark.parametrize(
    ("free", "word"),
    [
        (Estimate(1500.0, 1300.0, 1700.0, "slope"), "free to"),
        (Estimate(1500.0, 1300.0, 9999.0, "slope"), "friction alone"),
        (Estimate(9999.0, 9999.0, 9999.0, "slope", determined=False), "no hang-up"),
    ],
)
def test_the_free_length_is_told_with_what_it_can_not_tell(findings, free, word):
    travel = Travel(5, 1, 0.4, 60e3, 150e3, 9e3, 0.5, 0.1, free, 1200.0)
    episode = replace(findings.episodes[0], travel=travel)
    said = travel_sentence(make_scene(findings, "metric"), episode)
    assert word in said
    assert "softer as weight was added" in said
    assert travel_sentence(make_scene(findings, "metric"), findings.episodes[0]) == ""
