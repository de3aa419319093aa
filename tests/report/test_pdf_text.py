"""Letters and lines of the printed report."""

import pytest

from forensics.report.pdf_text import BODY, BOLD, CODE, SERIF, broken, cut, face, readable, width_of


def test_lines_fit_and_nothing_is_lost():
    text = "the quick string " * 12 + "W" * 90
    for width in (12.0, 40.0, 133.0, 5000.0):
        lines = broken(text, BODY, 8.0, width)
        assert all(width_of(line, BODY, 8.0) <= width for line in lines)
        assert "".join(lines).replace(" ", "") == text.replace(" ", "")


def test_a_width_of_nothing_still_ends():
    assert broken("abc", BODY, 8.0, 0.0) == ["a", "b", "c"]


def test_a_fixed_blank_keeps_a_number_together():
    assert "3\u202f844 m" in " ".join(broken("at 3\u202f844 m", BODY, 8.0, 33.0)).replace("\n", " ")
    assert not any(line.endswith("3") for line in broken("depth 3\u202f844", BODY, 8.0, 30.0))


def test_a_line_cut_short_says_so():
    assert cut("short", BODY, 8.0, 100.0) == "short"
    made = cut("a very long title of a run", BODY, 8.0, 60.0)
    assert made.endswith("…")
    assert width_of(made, BODY, 8.0) <= 60.0


@pytest.mark.parametrize(
    ("said", "seen"),
    [
        ("plain", "plain"),
        # Unicode annex 9: letters from right to left, numbers from left to right, brackets mirrored.
        ("well אבג 1", "well גבא 1"),
        ("אב 12 גד", "דג 12 בא"),
        ("אב (גד) z", "(דג) בא z"),
        ("a אב b גד", "a בא b דג"),
        ("אֵב", "באֵ"),
        ("\u4e95", "<U+4E95>"),
        ("\x1b", "<U+001B>"),
    ],
)
def test_what_is_seen(said, seen):
    assert readable(said) == seen


def test_letters_a_typeface_lacks_are_set_in_a_plainer_one():
    assert face(SERIF, "Kestrel", "") == SERIF
    assert face(SERIF, "Kestrel", "באר") == BOLD
    assert face(CODE, "באר") == BODY
    assert face(BODY, "באר") == BODY
