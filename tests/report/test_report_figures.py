"""Figures: sizes, units on axes, thinning that keeps the extremes."""

import dataclasses

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from matplotlib.colors import to_rgb
from matplotlib.figure import Figure

from forensics.report.describe import make_scene
from forensics.report.elements import Picture
from forensics.report.figures import clock, depths, path, style, timeline, weights
from forensics.report.figures.decimate import envelope, runs, thin, with_breaks
from forensics.report.figures.lanes import merge
from forensics.report.words import Show


@pytest.fixture(scope="module")
def scene(findings):
    return make_scene(findings, "metric")


def all_figures(scene):
    episode = scene.mains[0]
    profile = scene.findings.profiles[episode.id]
    return [
        timeline.run_strip(scene),
        timeline.moment_strip(scene, episode),
        path.hole_path(scene),
        depths.ratio_map(scene),
        depths.load_profile(scene, profile, episode),
        weights.fan_chart(scene),
        weights.residual_chart(scene),
        weights.transfer_chart(scene),
    ]


def words_of(figure: Figure) -> str:
    axes = figure.get_axes()
    texts = [t.get_text() for ax in axes for t in ax.texts]
    return " ".join([*texts, *(ax.get_xlabel() for ax in axes), *(ax.get_ylabel() for ax in axes)])


def test_figures_are_capped_and_drawable(scene):
    for figure in all_figures(scene):
        width, height = figure.get_size_inches()
        assert width <= style.MAX_WIDTH
        assert height <= style.MAX_HEIGHT
        assert figure.dpi <= 150
        assert figure.get_axes()


def test_units_stand_on_axes(findings):
    metric = [words_of(figure) for figure in all_figures(make_scene(findings, "metric"))]
    assert all("[m]" in words or "[kN]" in words for words in metric)
    field = [words_of(figure) for figure in all_figures(make_scene(findings, "field"))]
    assert all("[ft]" in words or "[klbf]" in words for words in field)
    assert not any("[kN]" in words or "[m]" in words for words in field)


def test_profile_states_the_sign(scene):
    episode = scene.mains[0]
    figure = depths.load_profile(scene, scene.findings.profiles[episode.id], episode)
    assert "compression is negative" in words_of(figure)


def test_strip_draws_few_points(build):
    made = make_scene(build(n=60_000, episodes=3), "metric")
    figure = timeline.run_strip(made)
    longest = max(len(line.get_xdata()) for ax in figure.get_axes() for line in ax.get_lines())
    assert longest < 2200


def test_too_big_a_figure_is_refused():
    with pytest.raises(ValueError, match="the cap is"):
        style.sheet(20.0, 5.0)


def test_figure_without_words_is_refused():
    with pytest.raises(ValueError, match="a caption and an alternative text"):
        Picture(Figure, "", "alt")


@settings(max_examples=40, deadline=None)
@given(st.integers(1, 3000), st.integers(4, 300), st.integers(0, 10_000))
def test_thinning_keeps_smallest_and_largest(n, points, seed):
    y = np.random.default_rng(seed).normal(size=n)
    x, kept = envelope(np.arange(n, dtype=float), y, points)
    assert len(kept) <= max(points, 4) + 2
    assert kept.min() == y.min()
    assert kept.max() == y.max()
    assert np.all(np.diff(x) >= 0)


def test_thinning_keeps_a_single_spike_and_a_break():
    y = np.zeros(100_000)
    y[4321] = 9.0
    y[50_000:60_000] = np.nan
    _, kept = envelope(np.arange(100_000.0), y, 2000)
    assert np.nanmax(kept) == 9.0
    assert np.isnan(kept).sum() > 150


def test_lines_break_at_gaps():
    x, y = with_breaks(np.array([0.0, 1.0, 50.0, 51.0]), np.ones(4), 5.0)
    assert np.isnan(y).tolist() == [False, False, True, False, False]
    assert np.all(np.diff(x) >= 0)
    assert np.isnan(thin(np.r_[np.arange(5e4), np.arange(6e4, 9e4)], np.ones(80_000), 5.0)[1]).any()


@pytest.mark.parametrize("n", [0, 1, 2])
def test_thinning_short_series(n):
    assert len(envelope(np.arange(float(n)), np.ones(n))[0]) == n


def test_runs():
    assert runs(np.array([True, False, True, True])).tolist() == [[0, 1], [2, 4]]
    assert runs(np.zeros(3, dtype=bool)).tolist() == []


def test_merge_joins_and_widens():
    assert merge([(0.0, 1.0), (1.5, 1.0), (10.0, 0.1)], 1.0) == [(0.0, 2.5), (10.0, 1.0)]


def test_ticks_are_round_local_times():
    start = 1_714_723_200.0  # 08:00 UTC
    places, labels = clock.ticks(start + 100, start + 4 * 3600, Show("metric", "+05:30"))
    assert labels[0] == "14:00\n3 May"
    assert all((place + 5.5 * 3600) % 1800 == 0 for place in places)


def test_ticks_name_a_new_day():
    start = 1_714_723_200.0
    _, labels = clock.ticks(start, start + 30 * 3600, Show("metric", "UTC"))
    assert [label for label in labels if "\n" in label] == ["09:00\n3 May", "00:00\n4 May"]


def test_fan_stands_a_line_without_end(findings):
    fan = findings.fan
    low = fan.slack_off_low.copy()
    low[-5:] = -np.inf
    broken = dataclasses.replace(findings, fan=dataclasses.replace(fan, slack_off_low=low))
    left, right = weights.fan_chart(make_scene(broken, "metric")).get_axes()[0].get_xlim()
    assert 0.0 < left < right < 2000.0


def lightness(colour) -> float:
    """CIE lightness of a colour, 0 to 100."""
    rgb = np.array(to_rgb(colour))
    linear = np.where(rgb <= 0.04045, rgb / 12.92, ((rgb + 0.055) / 1.055) ** 2.4)
    return float(116.0 * np.cbrt(linear @ [0.2126, 0.7152, 0.0722]) - 16.0)


def test_load_ratio_colours_read_in_grey():
    """Each class darker than the one before, and the step at the threshold plain to see."""
    colours, norm = style.ratio_colours("chen")
    steps = [lightness(colours(norm(value))) for value in (0.1, 0.3, 0.6, 0.9, 1.2, 1.6, 2.5, 9.0)]
    assert np.all(np.diff(steps) < -2.5)
    assert steps[4] - steps[3] < -10.0


def test_weight_lines_differ_in_lightness():
    shades = [lightness(colour) for colour in (style.LOGGED, style.SURFACE, style.BIT)]
    assert np.all(np.diff(shades) < -12.0)
