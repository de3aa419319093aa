"""Spans and running extremes against slow twins, and on degenerate input."""

from __future__ import annotations

import numpy as np
import pytest

from forensics.episodes.sensitivity import sensitivity, sensitivity_sentence
from forensics.episodes.spans import Span, SpanRule, find_spans, running_extreme, window_extreme

RULE = SpanRule(bridge_gap=5.0, least=3.0, interval=1.0)


def test_no_rows_and_no_flags():
    assert find_spans(np.zeros(0, bool), np.zeros(0), RULE) == ([], 0)
    assert find_spans(np.zeros(9, bool), np.arange(9.0), RULE) == ([], 0)


def test_everything_flagged_is_one_span():
    assert find_spans(np.ones(9, bool), np.arange(9.0), RULE) == ([Span(0, 8)], 0)


def test_a_gap_of_the_bridge_length_is_not_bridged():
    flags = np.zeros(30, bool)
    flags[5:9] = flags[14:18] = True  # five unflagged seconds between
    assert len(find_spans(flags, np.arange(30.0), RULE)[0]) == 2
    flags[13] = True  # four
    assert find_spans(flags, np.arange(30.0), RULE)[0] == [Span(5, 17)]


def test_a_gap_in_the_log_counts_as_time():
    time = np.concatenate([np.arange(5.0), 100.0 + np.arange(5.0)])
    assert find_spans(np.ones(10, bool), time, RULE)[0] == [Span(0, 4), Span(5, 9)]


def test_bridged_time_does_not_count_for_residuals():
    flags = np.zeros(30, bool)
    flags[5] = flags[9] = True
    assert find_spans(flags, np.arange(30.0), RULE) == ([Span(5, 9)], 0)
    exact = SpanRule(5.0, 3.0, 1.0, flagged=True)
    assert find_spans(flags, np.arange(30.0), exact) == ([], 1)


def slow_running(values, resets, largest):
    """Walk row by row."""
    out, best = [], np.nan
    for n, value in enumerate(values):
        if resets[n] and not (n + 1 < len(values) and resets[n + 1]):
            best = np.nan
        if not np.isnan(value):
            best = value if np.isnan(best) else (max if largest else min)(best, value)
        out.append(best)
    return np.array(out)


@pytest.mark.parametrize("largest", [True, False])
def test_running_extreme_against_a_walk(largest):
    rng = np.random.default_rng(5)
    values = np.where(rng.random(300) < 0.1, np.nan, rng.normal(size=300))
    resets = rng.random(300) < 0.08
    found = running_extreme(values, resets, largest)
    np.testing.assert_array_equal(found, slow_running(values, resets, largest))


def test_window_extreme_against_a_walk():
    rng = np.random.default_rng(6)
    time = np.cumsum(rng.choice([1.0, 1.0, 2.0, 40.0], 200))
    values = np.where(rng.random(200) < 0.1, np.nan, rng.normal(size=200))
    largest, row = window_extreme(values, time, 12.0, 1.0)
    for n in range(200):
        near = [k for k in range(n + 1) if time[n] - time[k] <= 12.0 and not np.isnan(values[k])]
        if near:
            assert largest[n] == max(values[k] for k in near)
            assert values[row[n]] == largest[n]
        else:
            assert np.isnan(largest[n])


def test_sensitivity_counts_other_settings(make_run):
    run = make_run().buckle(slice(100, 150)).buckle(slice(230, 280)).buckle(slice(600, 615))
    # as set: two; gap doubled: one; least duration halved: three
    (kind, counts), *rest = sensitivity(run.material()).items()
    assert (kind.value, counts, rest) == ("buckling", (1, 3), [])
    assert "1 to 3 buckling episodes" in sensitivity_sentence(run.material())
    assert sensitivity_sentence(make_run().material()) == ""
