"""What would turn a finding: the search, its words, and replays on either side of a turn."""

from __future__ import annotations

from dataclasses import replace
from pathlib import Path
from types import SimpleNamespace

import numpy as np
import pytest

from forensics.case import load_case
from forensics.episodes import flips as module
from forensics.episodes.catalogue import Headline
from forensics.episodes.flips import Flip, find_flips, flip_sentence, with_flip
from forensics.estimate import Estimate
from forensics.replay.model import factors
from pipelines import analysis
from pipelines.progress import Progress

SAMPLE = Path(__file__).parents[2] / "sample_logs" / "lateral_slide" / "case.toml"
FOUND = Estimate(0.27, 0.25, 0.29, "steady weights")


def given(found=FOUND, searched=(0.05, 0.60)):
    told = {"source": "open-hole friction", "quantity": "dimensionless", "found": found}
    return SimpleNamespace(**told, searched=searched, at=lambda value: (value,))


def case(rule):
    return SimpleNamespace(episode=SimpleNamespace(id="E001"), finding="helix", holds=rule)


def flip(holds=(0.21, 0.60), **changes):
    base = Flip("E001", "helix", "open-hole friction", "dimensionless", FOUND, (0.05, 0.60), holds)
    return replace(base, **changes)


@pytest.mark.parametrize(("low", "high"), [(0.21, 9.0), (-1.0, 0.4), (0.2, 0.3), (-1.0, 9.0)])
def test_the_search_finds_where_a_rule_stops_holding(low, high):
    found = module._search(case(lambda v: low <= v <= high), given())
    assert found.turns == (low > 0.0, high < 1.0)
    for end, true, searched in zip(found.holds, (low, high), found.searched, strict=True):
        if 0.0 < true < 1.0:
            assert end == pytest.approx(true, abs=abs(searched - FOUND.value) / 2**module.HALVINGS)
        else:
            assert end == searched


def test_what_does_not_hold_as_found_is_not_told():
    assert module._search(case(lambda v: v > 0.3), given()) is None
    assert module._search(case(lambda _: True), given(searched=(0.3, 0.6))) is None


def test_distance_is_counted_in_half_widths_of_the_interval():
    assert flip().clear == pytest.approx(0.06 / 0.02)
    assert flip((0.05, 0.28)).clear == pytest.approx(0.5)
    assert flip((0.05, 0.60)).clear == np.inf


def test_words():
    assert flip_sentence(flip(), "metric") == (
        "the helix holds for open-hole friction above 0.21 (found 0.27, 0.25 to 0.29)"
    )
    assert flip_sentence(flip((0.05, 0.60)), "metric").endswith("any open-hole friction from 0.05 to 0.60")
    block = Estimate(300e3, 298e3, 302e3, "x")
    heavy = Flip("E001", "lockup", "block weight", "force", block, (250e3, 350e3), (280e3, 320e3))
    assert "above 280" in flip_sentence(heavy, "metric")
    assert "klbf" in flip_sentence(heavy, "field")


def test_the_headline_names_the_nearest_turn():
    plain = Headline("s", "high: x")
    assert with_flip(plain, (), "metric") is plain
    near, far = flip((0.05, 0.28)), flip((0.1, 0.6), source="cased-hole friction")
    other = flip((0.26, 0.28), episode="E002")
    assert "below 0.28" in with_flip(plain, (far, near, other), "metric").confidence
    calm = (flip((0.05, 0.6)), flip((0.05, 0.6), source="block weight"))
    assert with_flip(plain, calm, "metric").confidence.endswith(
        "nothing tried would turn it (open-hole friction, block weight)"
    )


@pytest.fixture(scope="module")
def caught():
    """Analyse a run, keeping what its flips were searched with."""
    kept = {}

    def keep(run, material, episodes):
        kept.update(run=run, material=material, episodes=episodes)
        return find_flips(run, material, episodes)

    with pytest.MonkeyPatch.context() as patch:
        patch.setattr(analysis, "find_flips", keep)
        kept["findings"] = analysis.analyse(load_case(SAMPLE), Progress(quiet=True))
    return SimpleNamespace(**kept)


def test_replays_on_either_side_of_a_turn_differ(caught):
    turned = [f for f in caught.findings.flips if f.source == "cased-hole friction" and f.turns[1]]
    assert turned
    one = turned[0]
    episode = next(e for e in caught.episodes if e.id == one.episode)
    stretch = module._Case(caught.run, caught.material, episode)
    width = (one.searched[1] - one.found.value) / 2 ** (module.HALVINGS - 1)
    mu = np.array(factors(caught.run.calibration))
    outcomes = []
    for value in (one.holds[1] - width, one.holds[1] + width):
        moved = mu.copy()
        moved[0] = value
        outcomes.append(stretch.holds(caught.run.model, moved, 0.0))
    assert outcomes == [True, False]
    assert one.found.low <= one.found.value <= one.holds[1]


def test_the_gravest_come_first_and_reach_the_headline(caught):
    found = caught.findings
    assert found.flips[0].episode in found.headline.details[0]
    assert "would turn it" in found.headline.confidence or "holds" in found.headline.confidence
    names = list(dict.fromkeys(f.episode for f in found.flips))
    assert len(names) <= module.GRAVEST + module.DOUBTFUL
