"""Chances over the draws: shares, margins where all agree, and the time a rule needs."""

from __future__ import annotations

import numpy as np
import pytest

from forensics.episodes.catalogue import Kind
from forensics.episodes.chances import CERTAIN, chance_of, drag_draws, lasting
from forensics.episodes.find import find_episodes, rows_in_doubt


def test_lasting_is_the_level_kept_for_so_long():
    """Slow twin: the largest level that enough seconds reach, tried one by one."""
    rng = np.random.default_rng(1)
    values, seconds = rng.normal(size=(20, 9)), rng.integers(1, 9, 9).astype(float)
    for least in (1.0, 7.0, 20.0, 1e3):
        found = lasting(values, seconds, least)
        for row, level in zip(values, found, strict=True):
            kept = [x for x in row if seconds[row >= x].sum() >= least]
            assert level == max(kept, default=row.min())


@pytest.mark.parametrize(
    ("margins", "low", "high"),
    [([1.0, 1.1, 0.9, 1.0], 0.985, 0.99), ([-1.0, -1.2, -0.9], 0.01, 0.01), ([0.1, 0.3, 0.5], 0.9, 0.98)],
)
def test_where_draws_agree_their_margin_counts(margins, low, high):
    assert low <= round(chance_of(np.array(margins)).value, 9) <= high


def test_a_share_carries_its_interval():
    """Wilson's 90 % interval of 6 in 12 is 0.286 to 0.714 (closed form, worked by hand)."""
    chance = chance_of(np.array([1.0, -1.0] * 6))
    assert (chance.value, chance.draws, chance.in_doubt) == (0.5, 12, True)
    assert (chance.low, chance.high) == pytest.approx((0.286, 0.714), abs=0.001)
    assert np.isnan(chance_of(np.array([np.nan])).value)


def test_shares_near_a_threshold_are_honest():
    """Truth a sigma or so off the estimate, draws about the estimate: told chances come true."""
    rng = np.random.default_rng(7)
    truth = rng.normal(0.0, 1.5, 4000)
    seen = truth + rng.normal(0.0, 1.0, 4000)
    told = np.array([chance_of(e + rng.normal(0.0, 1.0, 24)).value for e in seen])
    for low, high in ((0.0, 0.2), (0.2, 0.5), (0.5, 0.8), (0.8, CERTAIN + 0.01)):
        inside = (told >= low) & (told < high)
        assert np.mean(truth[inside] > 0.0) == pytest.approx(told[inside].mean(), abs=0.1)


def test_a_residual_moves_with_the_line_of_its_motion(make_run):
    run = make_run().trip("out", slice(500, 900)).with_draws()
    material = run.material()
    found = drag_draws(material, np.array([600]))
    assert found[:, 0] == pytest.approx(60.0e3 - 20.0e3 * np.linspace(-1.0, 1.0, 5))


def test_only_what_is_in_doubt_is_replayed_again(make_run):
    run = make_run().buckle(slice(100, 400), ratio=1.05).buckle(slice(2000, 2300), ratio=3.0)
    material = run.with_draws((0.9, 0.95, 1.0, 1.05)).material()
    rows = np.flatnonzero(rows_in_doubt(material))
    assert (rows.min(), rows.max()) == (100, 399)


def test_every_number_of_a_buckling_carries_its_interval(make_run):
    run = make_run().buckle(slice(1000, 1300), helical=slice(1100, 1200)).with_draws()
    (episode,) = (e for e in find_episodes(run.material())[0] if e.kind is Kind.BUCKLING)
    top, bottom = episode.ends
    numbers = (episode.peak_load_ratio, episode.peak_compression, episode.lost_weight, episode.bit_load)
    for number in (*numbers, top, bottom):
        assert number.low < number.value < number.high
    assert top.value == episode.top_md
    assert episode.probability_range[0] < episode.probability <= episode.probability_range[1]
