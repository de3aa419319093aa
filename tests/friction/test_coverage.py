"""Intervals hold planted truths as often as they say, on wells that share nothing with the program's march.

A sample of what `benchmarks/bench_coverage.py` does over hundreds of wells.
"""

import numpy as np
import pytest
from scipy.stats import binom

from forensics.case import CriteriaSettings
from forensics.friction.calibrate import calibrate
from forensics.mechanics.offbottom import OffBottomModel
from soft_wells import World, sample


def truths(made, found):
    """Pairs of a planted number and its estimate."""
    for k, section in enumerate(found.sections):  # a hole cut in vain has the same truth in every part
        yield made.truth.factors[min(k, len(made.truth.factors) - 1)], section.factor
    given = made.case.rig.block_weight is not None
    yield (made.truth.bias, found.hookload_bias) if given else (made.truth.block, found.block_weight)
    yield made.truth.rotational, found.rotational


def model_of(made):
    """Tabulate a sample's well as the program does."""
    return OffBottomModel(made.well, made.depth + 5.0, CriteriaSettings())


@pytest.fixture(scope="module")
def calibrated():
    made = [sample(seed) for seed in range(5000, 5020)]
    return [(m, calibrate(m.readings, m.well, m.case, model_of(m), m.rig)) for m in made]


def test_intervals_hold_planted_truths(calibrated):
    told = [(t, e) for made, found in calibrated for t, e in truths(made, found) if e.determined]
    held = sum(e.low <= t <= e.high for t, e in told)
    assert len(told) >= 60
    # what 90 % intervals can give by chance, one time in a thousand on either side
    assert binom.ppf(0.001, len(told), 0.90) <= held <= binom.ppf(0.999, len(told), 0.90)


def test_stands_left_out_are_foretold_about_as_well(calibrated):
    proofs = [found.held_out for _, found in calibrated if found.held_out is not None]
    ratio = [proof.rms / proof.in_sample for proof in proofs]
    assert len(proofs) >= 10
    assert min(ratio) > 0.9
    assert np.median(ratio) < 1.5


def test_the_generator_against_a_closed_form():
    """Straight and slanted far below the bend, the drag of its own weight alone: w sin I mu per length."""
    world = World(np.random.default_rng(3), split=False)
    angle = np.radians(50.0)

    def flat(s, order=0):
        return np.full_like(np.asarray(s, dtype=float), 0.0 if order else angle)

    world.inclination = flat
    world.azimuth = flat
    world.wander = np.zeros_like
    bits = np.array([1000.0, 2000.0])
    up, torque = world.weigh(bits, np.ones(2), (0.2, 0.2))
    along = np.array([sum(_parts(world, bit)) for bit in bits])
    assert up == pytest.approx(along * (np.cos(angle) + 0.2 * np.sin(angle)), rel=1e-3)
    assert np.all(torque > 0.0)


def _parts(world, bit):
    """Buoyed weight of each part of the string at a bit depth [N]."""
    left = bit
    for part in world.parts:
        length = min(part.length, left)
        left -= length
        yield part.weight * world.scale * (1.0 - world.density / 7850.0) * length
