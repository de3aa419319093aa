"""Content as plain text."""

from forensics.report.elements import Bullets, Column, Number, Numbers, Picture, Report, Section, Table, Text
from forensics.report.plain import CELL, to_text


def build(*elements):
    return to_text(Report("Title", "kind", (("case", "a"),), (Section("s", "Section", elements),), "foot"))


def test_columns_line_up_under_their_heads():
    text = build(Table("Caption", (Column("a"), Column("long head")), (("x", "1"), ("yyyy", "22"))))
    lines = text.splitlines()
    at = next(k for k, line in enumerate(lines) if "long head" in line)
    place = lines[at].index("long head")
    assert lines[at + 2][place:] == "1"
    assert lines[at + 3][place:] == "22"


def test_a_long_cell_is_broken_and_nothing_of_it_lost():
    words = " ".join(f"word{k}" for k in range(40))
    text = build(Table("Caption", (Column("a"), Column("b")), (("x", words),)))
    assert all(f"word{k}" in text for k in range(40))
    assert max(len(line) for line in text.splitlines()) < CELL + 20


def test_empty_tables_and_sections_of_figures_alone_say_so_or_stay_out():
    picture = Picture(lambda: None, "caption", "alt")
    assert "Caption: None." in build(Table("Caption", (Column("a"),), ()))
    assert "Section" not in build(picture)


def test_numbers_show_intervals_only_where_there_are_some():
    bare = build(Numbers("Caption", (Number("n", "1", "", "log"),)))
    told = build(Numbers("Caption", (Number("n", "1", "0 to 2", "log"),)))
    assert "90 %" not in bare
    assert "0 to 2" in told


def test_text_and_lists_are_wrapped():
    text = build(Text("word " * 60), Bullets(("item " * 60,), "lead"))
    assert max(len(line) for line in text.splitlines()) <= 110
    assert "- item" in text
