"""Runs of like stiffness: where they end, and what is too short to end one."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from forensics.mechanics.offbottom import OffBottomModel
from forensics.mechanics.runs import SHORT_PIECE, run_lengths
from forensics.well.fluid import constant_fluid
from forensics.well.hole import Hole
from forensics.well.model import Well
from forensics.well.string import Component, String
from forensics.well.trajectory import build_trajectory

COLLAR = Component("collar", "collar", 60.0, 0.1715, 0.0714, 1300.0)
PIPE = Component("pipe", "drillpipe", 3e3, 0.127, 0.1086, 310.0, 0.168)
SLIM, STOUT = (Component("sub", "sub", 1.0, od, 0.05, 700.0) for od in (0.09, 0.25))


def runs(*pairs: tuple[float, float]) -> list[float]:
    stiffness, lengths = np.array(pairs, dtype=float).T
    return run_lengths(stiffness, lengths).tolist()


def test_a_step_over_two_ends_a_run_and_a_taper_does_not():
    assert runs((30, 50), (15, 50), (7.4, 200)) == [100, 100, 200]
    assert runs((30, 50), (16, 50), (9, 50), (5, 50)) == [200] * 4
    assert runs((1, 50), (2.1, 50)) == [50, 50]


@pytest.mark.parametrize("sub", [2.0, 400.0])
def test_a_short_sub_cuts_nothing(sub):
    assert runs((30, 40), (sub, 1), (30, 40), (1, 900)) == [81, 81, 81, 900]


def test_a_short_piece_at_a_step_goes_to_the_nearer_neighbour():
    assert runs((30, 60), (4, 2), (1, 900)) == [60, 902, 902]
    assert runs((30, 60), (9, 2), (1, 900)) == [62, 62, 900]
    # at either end of the string there is one neighbour only
    assert runs((200, 0.5), (30, 60), (1, 900)) == [60.5, 60.5, 900]


def test_tools_that_are_each_short_are_one_assembly():
    # none is a run of its own; together they are not handed on to the pipe
    found = runs((60, 2), (20, 9), (70, 2), (20, 9), (60, 2), (1, 900))
    assert found == [24] * 5 + [900]


def test_nothing_but_short_pieces_is_one_run():
    assert runs((30, 2), (1, 3), (30, 2)) == [7, 7, 7]


@given(st.lists(st.tuples(st.floats(1, 1000), st.floats(0.5, 40)), min_size=1, max_size=30))
def test_every_element_has_the_length_of_its_neighbours_that_share_it(pairs):
    found, lengths = np.array(runs(*pairs)), np.array([length for _, length in pairs])
    assert np.all(found >= min(SHORT_PIECE, lengths.sum()) * (1 - 1e-9))
    # the runs fill the string: each element counted once within its own
    assert np.sum(lengths / found) == pytest.approx(round(np.sum(lengths / found)))


@pytest.mark.parametrize("sub", [SLIM, STOUT])
def test_collars_near_vertical_stand_as_much_with_a_sub_amid_them(sub):
    md = np.array([0.0, 1500.0])
    hole = Hole(np.array([0.0]), md[-1:] + 100, np.array([0.2159]), ("open",), ("",), np.array([np.nan]))

    def run_of_collars(*parts: Component) -> float:
        path = build_trajectory(md, np.zeros(2), np.zeros(2))
        model = OffBottomModel(Well(path, hole, String((*parts, PIPE)), constant_fluid(1200.0)), 1500.0)
        return float(model.pipe.stiff_run[0])

    assert run_of_collars(COLLAR, sub, COLLAR) == pytest.approx(run_of_collars(COLLAR, COLLAR) + 1.0)
    assert run_of_collars(COLLAR) == pytest.approx(60.0)
