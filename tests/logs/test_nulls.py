"""What stands for no value, and columns of text."""

import numpy as np
import pandas as pd
import pytest
from hypothesis import given
from hypothesis import strategies as st

from forensics.logs.nulls import CODES, CODES_IF_ABSURD, WORDS, find_codes, to_numbers
from forensics.logs.smear import find_smeared


@pytest.mark.parametrize("word", [*sorted(WORDS), "*" * 16, "-1.#IND0000", "#####", " (NULL) "])
def test_words_for_no_value_are_not_garbled_text(word):
    values, garbled = to_numbers(pd.Series(["1.5", word, "2"], dtype="object"))
    assert np.isnan(values[1])
    assert values[[0, 2]].tolist() == [1.5, 2.0]
    assert garbled == 0


def test_text_that_is_no_number_is_counted():
    values, garbled = to_numbers(pd.Series(["1", "abc", None, "7;5", "1e5", "+3,25"], dtype="object"))
    assert garbled == 2
    np.testing.assert_array_equal(values, [1.0, np.nan, np.nan, np.nan, 1e5, 3.25])


def test_switches_read_as_zero_and_one():
    assert to_numbers(pd.Series(["IN", "OUT", "true", "No"]))[0].tolist() == [1.0, 0.0, 1.0, 0.0]
    assert to_numbers(pd.Series([True, False]))[0].tolist() == [1.0, 0.0]


def test_commas_set_thousands_apart_or_mark_decimals():
    column = pd.Series(["276,492", "1,276,492", "1,276.5"])
    assert to_numbers(column, grouped=True)[0].tolist() == [276492.0, 1276492.0, 1276.5]
    assert to_numbers(column)[0].tolist() == [276.492, 1276492.0, 1276.5]


@pytest.mark.parametrize("code", CODES)
def test_codes_are_found_among_readings(code):
    values = np.array([120.0, 130.0, code, 125.0, np.nan])
    assert np.flatnonzero(find_codes(values)).tolist() == [2]


@pytest.mark.parametrize("code", [c for c in CODES_IF_ABSURD if abs(c) > 900])
def test_doubtful_codes_count_only_where_absurd(code):
    small = np.array([12.0, 13.0, code, 12.5])
    assert np.flatnonzero(find_codes(small)).tolist() == [2]
    fitting = np.array([abs(code) * 0.8, abs(code) * 0.9, code])
    assert not find_codes(fitting).any()


def test_codes_the_header_declares_are_found():
    assert find_codes(np.array([1.0, -777.7]), (-777.7,)).tolist() == [False, True]


def test_a_depth_of_999_25_is_a_depth():
    assert not find_codes(np.array([998.0, 999.25, 1000.5])).any()


@given(st.lists(st.floats(-500, 900, allow_nan=False), max_size=30))
def test_ordinary_readings_hold_no_code(values):
    assert not find_codes(np.array(values, dtype=float)).any()


def test_smeared_values_lie_beside_their_code_and_below_the_rest():
    values = np.array([150.0] * 20 + [-340.0, -999.25, -999.25, -12.0, 150.0] + [149.0] * 20)
    codes = find_codes(values)
    assert np.flatnonzero(find_smeared(values, codes)).tolist() == [20]
    values[23] = -80.0
    assert np.flatnonzero(find_smeared(values, codes)).tolist() == [20, 23]


def test_low_but_usual_values_beside_a_code_stay():
    values = np.r_[np.linspace(-60.0, 60.0, 40), -999.25, -58.0]
    assert not find_smeared(values, find_codes(values)).any()


@pytest.mark.parametrize("values", [[], [np.nan], [-999.25], [-999.25, -3.0]])
def test_degenerate_columns(values):
    values = np.array(values, dtype=float)
    codes = find_codes(values)
    assert not find_smeared(values, codes).any()
