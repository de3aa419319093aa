"""The printed report: read back, the same content as the page, the same bytes, whatever the names hold."""

import dataclasses
import io
import re

import numpy as np
import pypdf
import pytest
from matplotlib.figure import Figure

from forensics.errors import InputError
from forensics.report import drawing
from forensics.report.describe import describe
from forensics.report.drawing import Drawn, draw_figures
from forensics.report.elements import (
    Bullets,
    Column,
    Finding,
    Linked,
    Notice,
    Number,
    Numbers,
    Part,
    Picture,
    Report,
    Section,
    Table,
    Text,
)
from forensics.report.pdf import to_pdf
from forensics.report.render import render_report


def read(data: bytes) -> pypdf.PdfReader:
    return pypdf.PdfReader(io.BytesIO(data), strict=True)


def words(text: str) -> str:
    """Text without its blanks: where lines break is not content."""
    return re.sub(r"\s+", "", text)


def text_of(reader: pypdf.PdfReader) -> str:
    return words("".join(page.extract_text() for page in reader.pages))


def elements(report: Report):
    for section in report.sections:
        yield from section.elements
        for part in section.parts:
            yield from part.elements


def made(*content, title="A run", parts=()) -> Report:
    return Report(
        title, "Post-run event report", (("well", "W"),), (Section("a", "First", content, parts),), "end"
    )


def small_figure():
    figure = Figure(figsize=(3, 2))
    figure.subplots().plot([0, 1], [1, 0])
    return figure


PICTURE = Picture(small_figure, "what to see", "a falling line", "here")


@pytest.fixture(scope="module")
def drawn(findings):
    return draw_figures(describe(findings), vector=True)


@pytest.fixture(scope="module")
def data(drawn):
    return to_pdf(drawn)


@pytest.fixture(scope="module")
def reader(data):
    return read(data)


@pytest.fixture(scope="module")
def text(reader):
    return text_of(reader)


def test_the_same_report_gives_the_same_bytes(findings, data):
    assert to_pdf(describe(findings)) == data
    assert b"CreationDate" not in data


def test_every_page_says_which_of_how_many_it_is(reader):
    count = len(reader.pages)
    assert count > 10
    for number, page in enumerate(reader.pages, 1):
        assert re.search(rf"Page {number} of\s+{count}\s", page.extract_text() + "\n")


def test_contents_name_each_section_with_its_page_and_lead_there(drawn, reader):
    first = reader.pages[0]
    lines = first.extract_text().split("\n")
    links = [note.get_object()["/Dest"] for note in first["/Annots"]]
    assert len(links) == len(drawn.sections)
    for number, (section, link) in enumerate(zip(drawn.sections, links, strict=True), 1):
        stands = reader.get_page_number(link[0].get_object())
        told = lines[lines.index(f"{number}  {section.title}") + 1]
        assert int(told) == stands + 1
        assert words(section.title) in words(reader.pages[stands].extract_text())


def test_bookmarks_are_the_sections_and_episodes(drawn, reader):
    tops = [entry.title for entry in reader.outline if not isinstance(entry, list)]
    below = [entry.title for entry in reader.outline if isinstance(entry, list) for entry in entry]
    assert tops == [f"{k} {section.title}" for k, section in enumerate(drawn.sections, 1)]
    assert below == [part.title for section in drawn.sections for part in section.parts]


def test_every_word_of_the_page_is_in_print(drawn, text):
    for element in elements(drawn):
        match element:
            case Text(said):
                assert words(said) in text
            case Bullets(items, _) | Notice(_, items, _) | Finding(_, _, items):
                assert all(words(item) in text for item in items)
            case Numbers(caption, rows):
                assert words(caption) in text
                assert all(words(row.value) in text for row in rows)
            case Table(caption, columns):
                assert words(caption) in text
                assert not element.rows or all(words(column.title) in text for column in columns)
            case Drawn():
                assert words(f"Figure {element.number}. {element.caption}") in text


def test_figures_have_the_numbers_of_the_page(drawn, text):
    page = render_report(drawn)
    numbers = re.findall(r"<b>Figure (\d+)\.</b>", page)
    assert len(numbers) >= 10
    assert all(f"Figure{number}." in text for number in numbers)
    assert f"Figure{len(numbers) + 1}." not in text


def test_every_figure_stands_in_its_box_with_its_words(drawn, reader):
    pages = {}
    for page in reader.pages:
        for name, what in page["/Resources"].get("/XObject", {}).items():
            if name.startswith("/Figure"):
                pages[int(name.removeprefix("/Figure"))] = (what.get_object(), page.get_contents().get_data())
    figures = [e for e in elements(drawn) if isinstance(e, Drawn)]
    assert sorted(pages) == [figure.number for figure in figures]
    for figure in figures:
        form, contents = pages[figure.number]
        assert form["/Subtype"] == ("/Form" if figure.vector else "/Image")
        assert f"/Figure{figure.number} Do".encode() in contents
        assert figure.alt.encode("utf-16-be").hex().encode() in contents


def test_every_typeface_is_in_the_file(reader):
    fonts = {}
    for page in reader.pages:
        for resources in [page["/Resources"], *_forms(page)]:
            for font in resources.get("/Font", {}).values():
                fonts[font.indirect_reference.idnum] = font.get_object()
    assert len(fonts) >= 4
    for font in fonts.values():
        if font["/Subtype"] == "/Type3":
            assert font["/CharProcs"]
        else:
            described = font if "/FontDescriptor" in font else font["/DescendantFonts"][0]
            assert "/FontFile2" in described["/FontDescriptor"]


def _forms(page):
    for what in page["/Resources"].get("/XObject", {}).values():
        if what["/Subtype"] == "/Form":
            yield what["/Resources"]


def test_document_says_what_it_is(reader):
    assert reader.root_object["/Lang"] == "en"
    assert reader.metadata.title == "Lost weight while sliding, 8.5 in lateral - post-run event report"
    assert reader.root_object["/ViewerPreferences"]["/DisplayDocTitle"]


@pytest.mark.parametrize(("paper", "size"), [("a4", (842, 595)), ("letter", (792, 612))])
def test_paper(paper, size):
    page = read(to_pdf(made(Text("x")), paper)).pages[0]
    assert (round(page.mediabox.width), round(page.mediabox.height)) == size


def test_unknown_paper_is_refused():
    with pytest.raises(InputError, match="paper is 'a3'; expected 'a4' or 'letter'"):
        to_pdf(made(Text("x")), "a3")


def test_a_figure_of_many_lines_goes_in_as_pixels(monkeypatch):
    monkeypatch.setattr(drawing, "VECTOR_CAP", 100)
    report = draw_figures(made(PICTURE), vector=True)
    figure = report.sections[0].elements[0]
    assert figure.vector is None
    (image,) = read(to_pdf(report)).pages[0].images
    small = image.image.convert("RGB")
    there = drawing.Image.open(io.BytesIO(figure.png)).convert("RGB")
    np.testing.assert_array_equal(np.asarray(small), np.asarray(there))


EVIL = (
    "<script>alert(1)</script>",
    "<b>&amp;<font size=99>",
    "</para><a href='http://x'>",
    "W" * 300,
    "a long name " * 25,
    "באר 12 (צפון)",
    "بئر الشمال",
    "井 \u202e \x1b[2J",
    "",
    "\ud800",
)


@pytest.mark.parametrize("name", EVIL, ids=range(len(EVIL)))
def test_no_name_breaks_the_sheets(name):
    columns = (Column(name), Column(name, "code"), Column(name, "number"))
    table = Table(name, columns, ((name,) * 3,) * 3, name)
    picture = dataclasses.replace(PICTURE, caption=f"c {name}", alt=f"a {name}")
    report = Report(
        name,
        "s",
        ((name, name),),
        (
            Section(
                "a",
                name,
                (
                    Text(name), Bullets((name,), name), Notice(name, (name,)), Finding(name, name, (name,)),
                    Numbers(name, (Number(name, name, name, name, determined=False),)), table, picture,
                ),
                (Part("p", name, (Text(name),)),),
            ),
        ),
        name,
    )  # fmt: skip
    reader = read(to_pdf(report))
    assert len(reader.pages) <= 6
    for page in reader.pages:
        assert all(str(note.get_object().get("/A", "")) == "" for note in page.get("/Annots", []))


def test_markup_is_shown_as_written():
    said = text_of(read(to_pdf(made(Text(EVIL[0]), title=EVIL[1]))))
    assert words(EVIL[0]) in said
    assert words(EVIL[1]) in said


def test_a_table_goes_on_over_pages_under_its_head():
    rows = tuple((f"row {k}", f"{k}", f"why {k} " * 20) for k in range(120))
    reader = read(to_pdf(made(Table("Long", (Column("name"), Column("n", "number"), Column("why")), rows))))
    texts = [page.extract_text() for page in reader.pages]
    assert len(texts) > 3
    for text in texts:
        assert text.count("Long") == text.count("name") == 1
    joined = words("".join(texts))
    assert all(joined.count(f"row{k}{k}why") == 1 for k in range(120))


def test_very_many_rows_are_capped_and_said():
    rows = tuple((f"r{k};", str(k)) for k in range(3000))
    reader = read(to_pdf(made(Table("Many", (Column("name"), Column("n", "number")), rows))))
    said = text_of(reader)
    assert "Thefirst500of3000rows" in said
    assert "r499;" in said
    assert "r500;" not in said
    assert len(reader.pages) < 30


def test_a_cell_taller_than_a_page_is_carried_over():
    cell = tuple(f"line {k};" for k in range(200))
    said = text_of(read(to_pdf(made(Table("Tall", (Column("x"), Column("y")), ((cell, "one"),))))))
    assert all(said.count(f"line{k};") == 1 for k in range(200))
    assert said.count("one") == 1


def test_a_very_long_text_is_carried_over():
    said = "word " * 6000
    report = made(Text(said), Bullets((said,)), Notice("n", (said,)), Finding(said, "c", (said,)))
    assert text_of(read(to_pdf(report))).count("word") == 5 * 6000


def test_words_that_stand_whole_are_cut_short_before_they_outgrow_a_page():
    endless = "on and on " * 2000
    table = Table(endless, (Column(endless), Column("n")), (("a", "b"),), endless)
    picture = dataclasses.replace(PICTURE, caption=endless)
    reader = read(to_pdf(made(table, picture, parts=(Part("p", endless, (Text("x"),)),))))
    assert text_of(reader).count("…") == 5


def test_links_of_cells_lead_to_their_figures():
    table = Table("T", (Column("x"), Column("y")), ((Linked("seen in", "the strip", "here"), "b"),))
    filler = [Text("more")] * 40
    reader = read(to_pdf(made(table, *filler, PICTURE)))
    *_, link = (note.get_object()["/Dest"] for note in reader.pages[0]["/Annots"])
    shown = reader.get_page_number(link[0].get_object())
    assert shown > 0
    assert "/Figure1" in reader.pages[shown]["/Resources"]["/XObject"]


def test_an_empty_table_says_so():
    said = text_of(read(to_pdf(made(Table("Nothing", (Column("x"),), (), empty="There is none.")))))
    assert "Nothing:Thereisnone." in said


def test_no_episode_and_very_many(build):
    none = read(to_pdf(describe(build(n=1200, episodes=0))))
    assert words("No episode passed the rules") in text_of(none)
    many = to_pdf(describe(build(n=3000, episodes=3000)))
    assert len(many) < 10e6
    said = text_of(read(many))
    assert words("200 of 3000") in said


def test_a_long_log_gives_a_file_that_mail_takes(build):
    assert len(to_pdf(describe(build(n=172_800, episodes=300)))) < 10e6


def test_the_tallest_of_everything_still_finds_a_page():
    cell = tuple(f"line {k}" for k in range(400))
    table = Table("c " * 2000, (Column("h " * 2000), Column("n")), ((cell, "b"),), "n " * 2000)
    picture = dataclasses.replace(PICTURE, caption="c " * 2000)
    for paper in ("a4", "letter"):
        assert len(read(to_pdf(made(table, table, picture, title="t " * 2000), paper)).pages) > 10


def test_a_link_to_what_this_report_has_not_is_left_out():
    table = Table("T", (Column("x"), Column("y")), ((Linked("seen in", "the strip", "nowhere"), "b"),))
    reader = read(to_pdf(made(table)))
    assert "seeninthestrip" in text_of(reader)
    assert len(reader.pages[0]["/Annots"]) == 1, "the contents' alone"
