"""Sheets used over again draw what new ones draw, and nobody loses a figure he did not hand back."""

import pytest

from forensics.report.describe import make_scene
from forensics.report.drawing import png
from forensics.report.figures import depths, timeline
from forensics.report.figures.spare import hand_back, lay_out, spare_sheets
from forensics.report.figures.style import house_style


@pytest.fixture
def scene(build):
    return make_scene(build(episodes=3), "metric")


def drawings(scene):
    profiles = scene.findings.profiles
    for episode in scene.mains:
        yield lambda e=episode: timeline.moment_strip(scene, e)
        yield lambda e=episode: depths.load_profile(scene, profiles[e.id], e)


def test_a_sheet_used_again_gives_the_same_bytes(scene):
    with house_style():
        fresh = [png(draw()) for draw in drawings(scene)]
        again = []
        with spare_sheets():
            for _ in range(2):
                for draw in drawings(scene):
                    figure = draw()
                    again.append(png(figure))
                    hand_back(figure)
    assert again == fresh * 2


def test_only_what_is_handed_back_is_used_again():
    size, places = (4.0, 3.0), [(0.1, 0.1, 0.8, 0.8)]
    with spare_sheets():
        kept, _ = lay_out(size, places)
        other, (ax,) = lay_out(size, places)
        assert other is not kept
        ax.plot([0, 1], [0, 1])
        hand_back(other)
        third, (bare,) = lay_out(size, places)
        assert third is other
        assert not bare.lines
    assert lay_out(size, places)[0] is not other


def test_a_figure_handed_back_outside_loses_its_pixels_alone():
    figure, (ax,) = lay_out((4.0, 3.0), [(0.1, 0.1, 0.8, 0.8)])
    ax.plot([0, 1], [0, 1])
    before = png(figure)
    hand_back(figure)
    assert "renderer" not in vars(figure.canvas)
    assert png(figure) == before
