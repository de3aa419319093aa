"""The whole report: one offline file, the same bytes each time, fit to read."""

import dataclasses
import re
from html.parser import HTMLParser

import matplotlib.pyplot as plt
import numpy as np
import pytest

from forensics.case import CriteriaSettings
from forensics.episodes.catalogue import Consequence, State
from forensics.errors import UnitError
from forensics.friction.result import Calibration
from forensics.loads import Fan, RatioMap
from forensics.report.render import render

VOID = {"meta", "img", "br", "link", "input", "hr"}


class Outline(HTMLParser):
    """Collect what the checks need, and insist that tags nest."""

    def __init__(self, html: str):
        super().__init__()
        self.open, self.headings, self.images, self.tags, self.ids = [], [], [], [], []
        self.feed(html)
        self.close()
        assert self.open == []

    def handle_starttag(self, tag, attrs):
        """Note tag, headings, images and ids."""
        self.tags.append((tag, dict(attrs)))
        self.ids += [value for name, value in attrs if name == "id"]
        if re.fullmatch("h[1-6]", tag):
            self.headings.append(int(tag[1]))
        if tag == "img":
            self.images.append(dict(attrs))
        if tag not in VOID:
            self.open.append(tag)

    def handle_endtag(self, tag):
        """Insist that it closes the tag opened last."""
        assert self.open, tag
        assert self.open.pop() == tag

    def count(self, tag):
        """How often a tag opens."""
        return sum(1 for name, _ in self.tags if name == tag)


def without_pictures(html: str) -> str:
    return re.sub(r"data:image/png;base64,[A-Za-z0-9+/=]+", "", html)


@pytest.fixture(scope="module")
def page(findings):
    return render(findings)


def test_same_findings_give_the_same_bytes(findings, page):
    assert render(findings) == page


def test_nothing_is_loaded_from_outside(page):
    text = without_pictures(page)
    assert not re.search(r"https?:|//[a-z]|<script|<link|@import|url\(|<iframe", text)
    sources = [image["src"] for image in Outline(page).images]
    assert all(source.startswith("data:image/png;base64,") for source in sources)


def test_outline_is_in_order_and_landmarks_are_there(page):
    outline = Outline(page)
    assert outline.headings[0] == 1
    assert outline.headings.count(1) == 1
    steps = np.diff(outline.headings)
    assert steps.max() == 1
    for landmark in ("header", "nav", "main", "footer"):
        assert outline.count(landmark) == 1
    assert len(outline.ids) == len(set(outline.ids))
    links = [attrs["href"] for tag, attrs in outline.tags if tag == "a"]
    assert {link[1:] for link in links if link.startswith("#")} <= set(outline.ids)
    assert [link for link in links if not link.startswith("#")] == ["explore.html"]


def test_tables_have_captions_and_scopes(page):
    outline = Outline(page)
    assert outline.count("table") == outline.count("caption") > 10
    assert all("scope" in attrs for tag, attrs in outline.tags if tag == "th")


def test_every_figure_has_words(page):
    outline = Outline(page)
    assert len(outline.images) == outline.count("figure") == outline.count("figcaption") >= 10
    assert all(len(image["alt"]) > 30 for image in outline.images)


def test_no_figure_stays_open(findings):
    before = plt.get_fignums()
    render(findings)
    assert plt.get_fignums() == before


def test_first_page_has_finding_confidence_and_doubts(page):
    first = page.split('<section id="run"')[0]
    for words in (
        "the string buckled helically",
        "likely (0.97)",
        "data can&#39;t tell",
        "no flow out in the log",
    ):
        assert words in first
    assert "1.83" in first
    assert "1.61 to 2.05" in first
    assert "replay draws" in first
    assert "not determined by the data: case file" in first


def test_data_account_has_hashes_columns_steps_and_reasons(page):
    account = page.split('<section id="data"')[1]
    for words in (
        "ab" * 32,
        "cd" * 32,
        "ef" * 32,
        "WITS mnemonic",
        "set aside spikes",
        "spike hookload",
        "30 min",
    ):
        assert words in account


def test_cautions_defer_and_give_no_order(page):
    cautions = page.split('<section id="method"')[1]
    for words in ("manufacturers", "company rules", "licensed engineer", "Overpull", "fatigue", "Stuck"):
        assert words in cautions
    assert "no instruction to jar" in cautions


def test_markup_in_names_is_escaped(build, build_case):
    evil = "<script>alert(1)</script>"
    case = build_case(title=evil, well=evil, notes=evil)
    made = build(n=600, episodes=1, case=case)
    made = dataclasses.replace(
        made,
        headline=dataclasses.replace(made.headline, sentence=evil, details=(evil,)),
        episodes=(dataclasses.replace(made.episodes[0], note=evil, cause=evil),),
        warnings=(evil,),
    )
    text = without_pictures(render(made))
    assert "<script" not in text
    assert text.count("&lt;script&gt;") >= 7
    assert "GAS &lt;b&gt;" in text


def test_times_are_in_the_zone_of_the_case(page):
    assert "2024-05-03 10:00:00 +02:00" in page
    assert "Europe/Oslo" in page


def test_field_units(findings):
    text = without_pictures(render(findings, "field"))
    assert "klbf" in text
    assert "ppg" in text
    assert " kN" not in text.replace("118 kN", "").replace("71 kN", "")


def test_unknown_units_are_refused(findings):
    with pytest.raises(UnitError, match="unknown unit system 'imperial'"):
        render(findings, "imperial")


def test_no_episode_at_all(build):
    text = render(build(n=1200, episodes=0))
    assert "No episode passed the rules" in text
    Outline(text)


def test_many_episodes_only_main_ones_get_figures_and_the_table_is_capped(build):
    text = render(build(n=3000, episodes=300))
    outline = Outline(text)
    assert outline.headings.count(3) == 10
    assert "200 of 300" in text
    assert "The 200 most severe of 300 are listed here" in text


def test_only_routine_running_is_called_that(build, build_episode):
    made = build(n=1200, episodes=0)
    episode = build_episode(0, made.log, state=State.SINUSOIDAL, consequence=Consequence.NONE)
    text = render(dataclasses.replace(made, episodes=(episode,)))
    assert "All are harmless sinusoidal running" in text


def test_log_without_the_channels_that_help(build):
    made = build(n=1200, episodes=5)
    values = {name: made.log.values[name] for name in ("bit_depth", "hookload")}
    nothing = np.full(len(made.log), np.nan)
    made = dataclasses.replace(
        made,
        log=dataclasses.replace(made.log, values=values),
        rig=dataclasses.replace(
            made.rig, block=nothing, wob_slack_off=nothing, usual_flow=float("nan"), tares=()
        ),
    )
    text = render(made)
    assert "Not in this log: block position, weight on bit as logged, torque" in text
    assert "turns not counted, the log has no rpm" in text


def test_nothing_calibrated(build):
    made = build(n=1200, episodes=1, readings=0)
    cal = made.calibration
    bare = Calibration(
        cal.sections, cal.block_weight, cal.hookload_bias, cal.pipe_above_rotary, None, (), np.empty(0),
        float("nan"), cal.draws,
    )  # fmt: skip
    text = render(dataclasses.replace(made, calibration=bare))
    assert "no steady off-bottom reading" in text


def test_no_model_line_and_no_map(build, build_case):
    case = build_case(criteria=CriteriaSettings(helical_onset="mitchell", clearance="body"))
    made = build(n=600, episodes=1, case=case)
    empty = np.empty(0)
    made = dataclasses.replace(
        made,
        fan=Fan(*[empty] * 8),
        loads=dataclasses.replace(made.loads, ratio_map=RatioMap(empty, empty, np.empty((0, 0)))),
    )
    text = render(made)
    assert "There is no load ratio map" in text
    assert "clearance is taken at the tool joint" in text


@pytest.mark.parametrize("rows", [2, 3, 40])
def test_tiny_logs(build, rows):
    Outline(render(build(n=rows, episodes=1)))


def test_everything_missing(build):
    made = build(n=200, episodes=1)
    nothing = np.full(200, np.nan)
    loads = {
        field.name: nothing
        for field in dataclasses.fields(made.loads)
        if isinstance(getattr(made.loads, field.name), np.ndarray) and field.name not in {"state", "basis"}
    }
    rig = dataclasses.replace(
        made.rig, wob_surface=nothing, hookload=nothing, hole_depth=nothing, block=nothing
    )
    Outline(render(dataclasses.replace(made, loads=dataclasses.replace(made.loads, **loads), rig=rig)))


def test_a_long_log_gives_a_report_that_opens(build):
    """Two days at 1 Hz, 300 episodes: under 6 MB, so that mail and browser take it."""
    text = render(build(n=172_800, episodes=300))
    assert len(text.encode()) < 6e6
