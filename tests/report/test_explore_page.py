"""The page to explore a run in: whole, offline, the same bytes each time, whatever the names and episodes."""

import json
import re
from dataclasses import replace

import numpy as np
import pytest

from explored import with_course
from forensics.episodes.catalogue import Verdict, Word
from forensics.report.describe import make_scene
from forensics.report.explore.content import content_of
from forensics.report.explore.page import as_script_data, render_explorer
from forensics.well.hole import Hole

HOSTILE = "</script><script>alert(1)</script><b>&amp;\u202e"


def render(found, units="metric"):
    return render_explorer(make_scene(found, units))


@pytest.fixture(scope="module")
def page(findings):
    return render(with_course(findings))


def told(page):
    return json.loads(re.search(r'<script id="content"[^>]*>(.*?)</script>', page, re.DOTALL)[1])


def own_part(page):
    """Give the page without the plotting library's own scripts and the data."""
    return re.sub(r"<script>.*?</script>|<script id=.*?</script>", "", page, flags=re.DOTALL)


def test_same_findings_give_the_same_bytes(findings, page):
    assert render(with_course(findings)) == page


def test_page_lets_nothing_in_from_outside(page):
    assert "default-src 'none'; script-src 'unsafe-inline'" in page
    assert not re.search(r"https?:|//[a-z]|<link|@import|url\(|<iframe| src=", own_part(page))
    assert "unsafe-eval" not in own_part(page)


def test_page_has_landmarks_and_headings_in_order(page):
    own = own_part(page)
    levels = [int(n) for n in re.findall(r"<h(\d)", own)]
    assert levels[0] == 1
    assert levels.count(1) == 1
    assert max(np.diff(levels)) == 1
    assert all(f"<{mark}" in own for mark in ("header", "main", "footer"))
    assert 'href="report.html"' in own


def test_every_curve_of_the_tracks_is_in_the_pack(page):
    content = told(page)
    names = {track["name"] for track in content["tracks"]}
    assert {"depth", "load ratio", "hookload", "weight on bit", "torque", "rotation", "pressure"} <= names
    for track in content["tracks"]:
        for curve in track["curves"]:
            for step in content["levels"]:
                index = content["index"]
                assert index[f"{curve['key']}/{step}"]["count"] == index[f"time/{step}"]["count"]


def test_units_of_the_readers_choice(findings):
    metric, field = (content_of(make_scene(with_course(findings), units))[0] for units in ("metric", "field"))
    assert metric["units"] == {"length": "m", "force": "kN"}
    assert field["units"] == {"length": "ft", "force": "klbf"}
    assert field["profiles"]["deepest"] == pytest.approx(metric["profiles"]["deepest"] / 0.3048)


def test_times_are_the_cases(page):
    content = told(page)
    assert content["offset"] == 7200.0
    assert content["zone"] == "Europe/Oslo, UTC+02:00"


def test_names_with_markup_come_out_escaped(build, build_case):
    found = with_course(build(n=400, episodes=2, case=build_case(title=HOSTILE, well=HOSTILE)))
    hole = found.well.hole
    named = Hole(hole.top, hole.bottom, hole.diameter, hole.kind, (HOSTILE,) * 3, hole.friction)
    page = render(replace(found, well=replace(found.well, hole=named)))
    assert "<script>alert" not in page
    assert "\u202e" not in own_part(page)
    assert told(page)["hole"][0]["name"].startswith("</script><script>alert(1)")


def test_engineers_verdict_stands_in_the_list(build):
    found = build(n=400, episodes=2)
    rejected = replace(found.episodes[0], verdict=Verdict(Word.REJECT))
    page = own_part(render(replace(found, episodes=(rejected, *found.episodes[1:]))))
    lines = re.findall(r"<option[^>]*>(.*?)</option>", page)
    assert [line.endswith("rejected by the engineer") for line in lines] == [True, False]


def test_thresholds_of_the_case_are_marked_and_no_band_is_made_up(page):
    tracks = {track["name"]: track for track in told(page)["tracks"]}
    assert tracks["load ratio"]["band"] is None, "no draws, no band"
    assert [mark["at"] for mark in told(page)["ratio_marks"]] == [1.0, 1.41]


def test_script_data_can_not_end_its_element():
    text = as_script_data({"a": "</script><!-- &amp; \u2028"})
    assert not re.search("[<>&\u2028]", text)
    assert json.loads(text) == {"a": "</script><!-- &amp; <U+2028>"}


@pytest.mark.parametrize(("rows", "episodes"), [(300, 0), (9000, 3000)])
def test_none_and_thousands_of_episodes_make_a_page(build, rows, episodes):
    page = render(build(n=rows, episodes=episodes))
    content = told(page)
    assert len(content["episodes"]) == episodes
    assert content["profiles"] is None
    assert own_part(page).count("<option") == episodes
    assert ("No episode was found" in page) == (episodes == 0)
    assert len(page) < 5e6


def test_long_run_stays_under_twenty_megabytes(build):
    found = with_course(build(n=700_000, episodes=20), 600, 150)
    rng = np.random.default_rng(1)
    noisy = {
        name: values + rng.normal(0.0, 1e-3 * np.ptp(values), len(values))
        for name, values in found.log.values.items()
    }
    page = render(replace(found, log=replace(found.log, values=noisy)))
    assert len(page) < 20e6
