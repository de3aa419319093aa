"""Figures as files: both forms, numbered as in the report, the same bytes each time."""

import io
import xml.etree.ElementTree as ET

from matplotlib.figure import Figure
from PIL import Image

from forensics.report.elements import Part, Picture, Report, Section, Text
from forensics.report.figure_files import write_figures


def draw():
    figure = Figure(figsize=(3, 2))
    figure.subplots().plot([0, 1], [1, 0])
    return figure


def report():
    picture = Picture(draw, "what to see", "a falling line")
    part = Part("p", "Part", (picture,))
    return Report(
        "t", "s", (), (Section("a", "The run", (Text("x"), picture)), Section("b", "More", (), (part,))), ""
    )


def test_each_figure_is_there_twice_and_opens(tmp_path):
    assert write_figures(report(), tmp_path) == 2
    names = sorted(path.name for path in tmp_path.iterdir())
    assert names == [
        "captions.txt", "figure_01_the_run.png", "figure_01_the_run.svg", "figure_02_more.png",
        "figure_02_more.svg",
    ]  # fmt: skip
    for path in tmp_path.glob("*.svg"):
        assert ET.parse(path).getroot().tag.endswith("svg")
    for path in tmp_path.glob("*.png"):
        Image.open(io.BytesIO(path.read_bytes())).verify()
    assert "figure_02_more: what to see" in (tmp_path / "captions.txt").read_text()


def test_the_same_figures_are_the_same_bytes(tmp_path):
    for name in ("one", "two"):
        (tmp_path / name).mkdir()
        write_figures(report(), tmp_path / name)
    for path in (tmp_path / "one").iterdir():
        assert path.read_bytes() == (tmp_path / "two" / path.name).read_bytes()
