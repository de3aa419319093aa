"""What must hold for any soft string: monotony, limits, symmetry, convergence, balance, both marches."""

from __future__ import annotations

import math
from dataclasses import replace
from functools import lru_cache

import numpy as np
import pytest
from hypothesis import assume, given, settings
from hypothesis import strategies as st

from forensics.mechanics import grid
from forensics.mechanics.offbottom import OffBottomModel
from forensics.well.fluid import constant_fluid
from forensics.well.hole import Hole
from forensics.well.model import Well
from forensics.well.string import Component, String
from forensics.well.trajectory import build_trajectory
from tests.marches import tension_from_bit
from tests.naive_string import lateral_load
from tests.wells import build_well

FRICTION = st.floats(0.0, 0.35)
BIT = st.floats(150.0, 3390.0)
QUICK = settings(max_examples=40, deadline=None)


@lru_cache(maxsize=8)
def model(azimuth: float = 0.4, turn: float = 0.0) -> OffBottomModel:
    return OffBottomModel(build_well(azimuth, turn), 3400.0)


def weight(kind: str, bit: float, cased: float, open_hole: float, of: OffBottomModel | None = None) -> float:
    return float((of or model()).string_weight(kind, bit, cased, open_hole)[0])


def arc(length: float, turn: bool, pounds: float) -> Well:
    """Give a well of one pipe that bends at one rate all the way: down to level, or round at level."""
    md = np.array([0.0, length / 2, length])
    bend = np.array([0.0, math.pi / 4, math.pi / 2])
    inclination, azimuth = (np.full(3, math.pi / 2), bend) if turn else (bend, np.zeros(3))
    start = build_trajectory(md, bend, np.zeros(3))
    path = start if not turn else replace(start, inclination=inclination, azimuth=azimuth)
    hole = Hole(np.array([0.0]), md[-1:] + 100, np.array([0.3]), ("open",), ("",), np.array([np.nan]))
    part = Component("p", "drillpipe", 2 * length, 0.127, 0.1086, pounds, 0.168)
    return Well(path, hole, String((part,)), constant_fluid(0.0))


@QUICK
@given(BIT, FRICTION, FRICTION, st.floats(1e-3, 0.1))
def test_load_is_monotone_in_friction(bit, cased, open_hole, more):
    # the open hole starts at 1,500 m: above that its factor may not matter
    for kind, sign in (("pick_up", 1), ("slack_off", -1)):
        base = weight(kind, bit, cased, open_hole)
        others = [weight(kind, bit, cased + more, open_hole), weight(kind, bit, cased, open_hole + more)]
        # a string that locks up under its own drag has no slack-off weight
        assume(np.all(np.isfinite([base, *others])))
        assert all(sign * (other - base) > -1e-6 for other in others)


@QUICK
@given(BIT, st.floats(0.01, 0.35))
def test_turning_string_hangs_between_picking_up_and_slacking_off(bit, factor):
    down, still, up = (weight(kind, bit, factor, factor) for kind in ("slack_off", "rotating", "pick_up"))
    assume(np.isfinite(down))
    assert down <= still <= up


@QUICK
@given(BIT, st.floats(0.01, 0.6), st.floats(0.0, 0.99), st.sampled_from([-1.0, 1.0]))
def test_rotating_drag_is_below_sliding_drag(bit, factor, share, way):
    # friction shared with rotation: the axial share is v / sqrt(v^2 + (omega R)^2), below one

    def top(sigma: float) -> float:
        return float(tension_from_bit(model(), factor, bit, sigma)[1][-1])

    still, slides, turns = top(0.0), top(way), top(way * share)
    assert abs(turns - still) <= abs(slides - still) + 1e-6


@QUICK
@given(st.floats(0.05, 0.5), st.floats(1e3, 1e6))
def test_capstan_limit(factor, pull):
    # exact for a weightless string in a bend: T e^(mu theta), here over 90 degrees
    light = OffBottomModel(arc(1000.0, turn=False, pounds=1e-9), 1000.0)
    tension = tension_from_bit(light, factor, 1000.0, -1.0, pull)[1][-1]
    assert tension == pytest.approx(pull * math.exp(factor * math.pi / 2), rel=2e-4)


@QUICK
@given(st.floats(0.0, 6.28), st.floats(0.1, 0.9), BIT, FRICTION)
def test_neither_bearing_nor_hand_matters(azimuth, turn, bit, factor):
    turned = OffBottomModel(build_well(azimuth, turn), 3400.0)
    mirrored = OffBottomModel(build_well(-azimuth, -turn), 3400.0)
    plain = OffBottomModel(build_well(0.0, turn), 3400.0)
    for kind in ("pick_up", "slack_off"):
        loads = [weight(kind, bit, factor, factor, of) for of in (turned, mirrored, plain)]
        locked = np.isnan(loads)
        assert locked.all() or np.ptp(loads) < 1e-6 * abs(loads[0]) + 1e-3


@pytest.mark.parametrize("sigma", [-1.0, 1.0])
def test_error_falls_with_the_square_of_the_station_spacing(sigma, monkeypatch):
    # exact (Sheppard et al. 1987, Aadnoy and Andersen 2001; re-derived): a build of constant rate, pulled so
    # much that contact stays on the high side
    pounds, factor, pull, length = 200.0, 0.3, 6e5, 1600.0
    well, radius = arc(length, turn=False, pounds=pounds), length / (math.pi / 2)
    high = factor if sigma < 0 else -factor

    def particular(angle: float) -> float:
        across = (1 - high**2) * math.sin(angle) + 2 * high * math.cos(angle)
        return -pounds * radius / (1 + high**2) * across

    exact = particular(0.0) + (pull - particular(math.pi / 2)) * math.exp(high * math.pi / 2)
    found = []
    for spacing in (80.0, 40.0, 20.0, 10.0):
        monkeypatch.setattr(grid, "STATION_STEP", spacing)
        spaced = OffBottomModel(well, length)
        found.append(float(tension_from_bit(spaced, factor, length, sigma, pull)[1][-1]))
    # what is left of the error is that of placing directions to a quarter of a metre, the same for all
    assert found[-1] == pytest.approx(exact, rel=1e-4)
    steps = np.diff(found)
    np.testing.assert_allclose(steps[:-1] / steps[1:], 4.0, rtol=0.1)


@settings(max_examples=12, deadline=None)
@given(st.floats(600.0, 3390.0), st.floats(0.0, 0.5), st.sampled_from([-1.0, 0.0, 1.0]), st.floats(0.0, 8e4))
def test_forces_on_the_string_balance(bit, factor, sigma, bit_load):
    """Pull at the rotary: the weight hanging, less the bit's push, and friction on what is pressed."""
    one = model()
    md, tension = tension_from_bit(one, factor, bit, sigma, -bit_load)
    middle, length = 0.5 * (md[:-1] + md[1:]), md[:-1] - md[1:]
    way = one.well.trajectory.at(middle)
    weights = one.pipe.weight[: len(middle)]
    half = 0.5 * (tension[:-1] + tension[1:])
    pressed = np.array(
        [lateral_load(half[k], weights[k], way.tangent[k], way.curvature[k]) for k in range(len(middle))]
    )
    hanging = (weights * way.tangent[:, 2] * length).sum()
    drag = factor * (pressed * length).sum()
    # an element over an end of the curve is taken as straight or curved whole: five metres at each end
    kinks = 2 * 5.0 * factor * np.abs(half).max() * np.linalg.norm(way.curvature, axis=1).max()
    room = 1e-3 * (hanging + drag) + 50.0 + kinks
    assert tension[-1] == pytest.approx(hanging - sigma * drag - bit_load, abs=room)


@settings(max_examples=15, deadline=None)
@given(st.floats(1600.0, 3390.0), st.floats(0.0, 0.25), st.floats(0.0, 3e4))
def test_marching_back_down_comes_to_the_same_bit_load(bit, factor, bit_load):
    """Off lockup both ways are well-posed: down from the hookload that the march up found."""
    one = model()
    md, tension = tension_from_bit(one, factor, bit, 1.0, -bit_load)
    # a plain march down in small steps, its directions looked up anew
    step = 1.0
    edges = np.append(np.arange(0.0, bit, step), bit)
    middle = 0.5 * (edges[:-1] + edges[1:])
    way = one.well.trajectory.at(middle)
    rows = np.clip(np.searchsorted(one.pipe.x, bit - middle, side="right") - 1, 0, len(one.pipe.weight) - 1)
    down = float(tension[-1])
    for k in range(len(middle)):
        pounds = float(one.pipe.weight[rows[k]])
        press = lateral_load(down, pounds, way.tangent[k], way.curvature[k])
        down += (-pounds * way.tangent[k, 2] + factor * press) * (edges[k + 1] - edges[k])
    assert -down == pytest.approx(bit_load, abs=0.01 * abs(tension[-1]) + 300.0)
    assert md[-1] == pytest.approx(0.0, abs=1e-9)
