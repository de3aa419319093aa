"""Sections and weights of pipe against published tables.

Sources
-------
[S10] API RP 7G, table 2, new drill pipe (a copy; bores from RP 7G, from memory).
[S11] Data sheet of 5 in 19.50 lb/ft S-135 NC50 drill pipe.
[S12] *Standard Handbook of Petroleum & Natural Gas Engineering*, table 4-73, drill collar weights.
[S13] "Driller Data", table 6-2, buoyancy factors.
[S20] Web excerpt "Allowable torque and pull", torsion factors (field column).
[S21], [S23] Web tutorials on free point and stuck depth. [S22] RP 7G 16th ed. stretch formula.
[S24] IODP Exp. 336, table T5. [S26], [S27] Worked examples of buoyancy and overpull.
"""

import math

import numpy as np
import pytest

from forensics.units import parse_quantity
from forensics.well.fluid import constant_fluid
from forensics.well.hole import Hole
from forensics.well.model import Well
from forensics.well.string import Component, String, buoyed_weight, plain_weight
from forensics.well.trajectory import build_trajectory

INCH, FT, LBF = 0.0254, 0.3048, 4.4482216152605
PSI = LBF / INCH**2
POUND_PER_FOOT = LBF / FT
PPG = 119.826427317
# 490 lb/ft3 in kg/m3
HANDBOOK_STEEL = 490.0 * 16.018463374


def tube(od, bore, modulus=30e6):
    """Pipe of diameters in inches and a modulus in psi."""
    return Component(
        "p", "drillpipe", 1.0, od * INCH, bore * INCH, plain_weight(od * INCH, bore * INCH),
        youngs_modulus=modulus * PSI,
    )  # fmt: skip


# od, bore [in]; area [in2], inertia, polar [in4] as recomputed; tensile yield of E-75 [lbf] as published
TABLE_2 = {
    "P-1": (2.375, 1.815, 1.84286, 1.02910, 2.05821, 138220),
    "P-2": (2.875, 2.151, 2.85793, 2.30285, 4.60570, 214340),
    "P-3": (3.5, 2.764, 3.62092, 4.50119, 9.00239, 271570),
    "P-4": (3.5, 2.602, 4.30366, 5.11609, 10.23218, 322780),
    "P-5": (4.0, 3.34, 3.80478, 6.45757, 12.91515, 285360),
    "P-6": (4.0, 3.24, 4.32157, 7.15696, 14.31392, 324120),
    "P-7": (4.5, 3.826, 4.40744, 9.61049, 19.22099, 330560),
    "P-8": (4.5, 3.64, 5.49810, 11.51151, 23.02302, 412360),
    "P-9": (5.0, 4.276, 5.27460, 14.26916, 28.53832, 395600),
    "P-10": (5.0, 4.0, 7.06858, 18.11325, 36.22649, 530150),
    "P-11": (5.5, 4.892, 4.96241, 16.80448, 33.60895, 372180),
    "P-12": (5.5, 4.778, 5.82822, 19.33485, 38.66970, 437120),
    "P-13": (5.5, 4.67, 6.62962, 21.57068, 43.14137, 497220),
    "P-14": (6.625, 5.965, 6.52619, 32.41551, 64.83102, 489470),
}


@pytest.mark.parametrize("row", TABLE_2)
def test_rp7g_table_2_sections(row):
    od, bore, area, inertia, polar, tensile = TABLE_2[row]
    pipe = tube(od, bore)
    # Half a unit of the last digit given.
    assert pipe.area / INCH**2 == pytest.approx(area, abs=6e-6)
    assert pipe.inertia / INCH**4 == pytest.approx(inertia, abs=6e-6)
    assert pipe.polar / INCH**4 == pytest.approx(polar, abs=6e-6)
    # [S10] prints tension to five digits; section times 75,000 psi.
    assert pipe.area / INCH**2 * 75e3 == pytest.approx(tensile, rel=1e-4)


DP5 = tube(5.0, 4.276)


def test_p30_p31_one_pipe_in_full():
    """[S11], printed to three decimals."""
    found = [DP5.area / INCH**2, DP5.outer_area / INCH**2, DP5.inner_area / INCH**2]
    found += [DP5.inertia / (DP5.od / 2) / INCH**3, DP5.polar / (DP5.od / 2) / INCH**3]
    np.testing.assert_allclose(found, [5.275, 19.635, 14.360, 5.708, 11.415], atol=6e-4)


def test_bending_stiffness_of_the_reference_pipe():
    """EI = 4.28074752e8 lbf.in2 at 30e6 psi (computed)."""
    assert DP5.stiffness / (LBF * INCH**2) == pytest.approx(4.28074752e8, rel=1e-8)


def test_p35_plain_end_weight():
    """[S11] and [S21]: 17.93 lb/ft by 3.4 times the area; 490 lb/ft3 gives 17.948."""
    weight = plain_weight(5 * INCH, 4.276 * INCH, HANDBOOK_STEEL) / POUND_PER_FOOT
    assert weight == pytest.approx(17.948, abs=6e-4)
    assert weight == pytest.approx(17.932, rel=1.2e-3)


TORSION = {
    "P-40": (3.5, 2.764, 4599.73), "P-41": (3.5, 2.602, 5228.08), "P-42": (4.5, 3.826, 9820.87),
    "P-43": (4.5, 3.64, 11763.50), "P-44": (5.0, 4.408, 12412.92), "P-45": (5.0, 4.276, 14581.51),
    "P-46": (5.0, 4.0, 18509.75),
}  # fmt: skip


@pytest.mark.parametrize("row", TORSION)
def test_torsion_factor(row):
    """[S20]: 2 pi G J / 144,000 with G = 11.71e6 psi, ft.lbf per turn in 1,000 ft."""
    od, bore, published = TORSION[row]
    found = 2 * math.pi * 11.71e6 * tube(od, bore).polar / INCH**4 / 144e3
    assert found == pytest.approx(published, abs=6e-3)


def test_p47_turns_of_a_torque():
    """[S20]: 24,000 ft.lbf turn 1,000 ft of 5 in 19.50 lb/ft pipe 1.64592 times."""
    factor = 2 * math.pi * 11.71e6 * DP5.polar / INCH**4 / 144e3
    assert 24e3 / factor == pytest.approx(1.64592, abs=6e-6)


COLLARS = {
    "P-50": (5.0, 1.5, 61), "P-51": (6.0, 1.5, 90), "P-52": (6.5, 1.5, 107), "P-53": (6.75, 1.5, 116),
    "P-54": (8.0, 1.5, 165), "P-55": (9.0, 1.5, 210), "P-56": (10.0, 1.5, 261), "P-57": (11.0, 1.5, 317),
    "P-58": (4.75, 1.75, 52), "P-59": (6.5, 1.75, 105), "P-60": (8.0, 1.75, 163), "P-61": (12.0, 1.75, 377),
    # RP 7G collar table, from memory
    "P-63": (6.75, 2.8125, 100), "P-64": (8.0, 2.8125, 150),
}  # fmt: skip


@pytest.mark.parametrize("row", COLLARS)
def test_collar_weights(row):
    """[S12], rounded to 1 lb/ft; all of its column lies within 0.7."""
    od, bore, published = COLLARS[row]
    found = plain_weight(od * INCH, bore * INCH, HANDBOOK_STEEL) / POUND_PER_FOOT
    assert found == pytest.approx(published, abs=0.7)


@pytest.mark.parametrize(
    ("od", "bore", "printed", "computed"),
    [(9.5, 1.5, 234, 235.18), (9.5, 1.75, 232, 233.01), (9.75, 1.75, 245, 245.87)],
)
def test_p62_collars_that_the_table_has_too_light(od, bore, printed, computed):
    """[S12]: three of its 48 are a pound off their own section and steel."""
    found = plain_weight(od * INCH, bore * INCH, HANDBOOK_STEEL) / POUND_PER_FOOT
    assert found == pytest.approx(computed, abs=6e-3)
    assert found == pytest.approx(printed, abs=1.2)


BUOYANCY = {
    "P-66": (9, 0.863), "P-67": (10, 0.847), "P-68": (11, 0.832), "P-69": (12, 0.817), "P-70": (14, 0.786),
    "P-71": (15, 0.771), "P-72": (16, 0.756), "P-73": (18, 0.725),
}  # fmt: skip


@pytest.mark.parametrize("row", BUOYANCY)
def test_buoyancy_factors(row):
    """[S13], printed to three decimals, steel of 65.5 lb/gal."""
    mud, published = BUOYANCY[row]
    pipe = Component("p", "drillpipe", 1.0, 0.127, 0.1086, 1000.0, density=65.5 * PPG)
    found = float(buoyed_weight(pipe, parse_quantity(f"{mud} ppg", "density"))) / 1000.0
    assert found == pytest.approx(published, abs=5.01e-4)


def test_p80_steel_by_three_names():
    """65.5 lb/gal, 490 lb/ft3 and 7850 kg/m3 are one steel to 2e-4."""
    assert parse_quantity("65.5 ppg", "density") == pytest.approx(7848.63, abs=6e-3)
    assert parse_quantity("490 lb/ft3", "density") == pytest.approx(7849.05, abs=6e-3)
    assert parse_quantity("30e6 psi", "stress") == pytest.approx(206.84272e9, rel=1e-7)
    # P-81
    assert parse_quantity("29e6 psi", "stress") == pytest.approx(199.94796e9, rel=1e-7)
    assert parse_quantity("206.8 GPa", "stress") / PSI == pytest.approx(29.993804e6, rel=1e-7)


def hanging(components, mud):
    """Buoyed weight of a string hung in a vertical hole [lbf], by the well's own sum."""
    string = String(components)
    hole = Hole(np.array([0.0]), np.array([9e3]), np.array([1.0]), ("open",), ("",), np.array([np.nan]))
    well = Well(build_trajectory([0.0], [0.0], [0.0]), hole, string, constant_fluid(mud))
    return float(well.rotating_weight([string.length])[0]) / LBF


def test_p82_hook_load_of_a_string_in_heavy_mud():
    """[S27]: 250,000 lb in 20 lb/gal mud hangs with 173,675 lb (its factor 0.6947 has four digits)."""
    weight = 250e3 * LBF / 1000.0
    string = Component("p", "drillpipe", 1000.0, 0.127, 0.1086, weight, density=65.5 * PPG)
    assert hanging((string,), 20 * PPG) == pytest.approx(173675, rel=1e-4)


def example_string():
    """6,000 ft of 5 x 4.276 in pipe over 500 ft of 9 x 3 in collars, plain tubes of 490 lb/ft3 steel."""
    rows = (("collar", 500.0, 9.0, 3.0), ("drillpipe", 6000.0, 5.0, 4.276))
    return tuple(
        Component(
            kind, kind, length * FT, od * INCH, bore * INCH,
            plain_weight(od * INCH, bore * INCH, HANDBOOK_STEEL), density=HANDBOOK_STEEL,
        )
        for kind, length, od, bore in rows
    )  # fmt: skip


def by_pressure_and_area(mud):
    """Air weight less mud pressure on every end that faces down, plus on every one that faces up [lbf]."""
    collar, pipe = example_string()
    air = collar.weight * collar.length + pipe.weight * pipe.length
    g = 9.80665
    at_bottom = mud * g * (collar.length + pipe.length)
    at_shoulder = mud * g * pipe.length
    force = air - at_bottom * collar.area + at_shoulder * (collar.area - pipe.area)
    return force / LBF


def test_p83_p84_a_string_in_mud():
    """[S26]: 170,497 by pressure and area, 170,524 by factor (the page has pi = 3.14, factor 0.836)."""
    mud = 80.0 * 16.018463374
    found = hanging(example_string(), mud)
    assert found == pytest.approx(170611.0, abs=1.0)
    assert found == pytest.approx(170497.0, rel=7e-4)
    assert found == pytest.approx(170524.0, rel=6e-4)


def test_p85_both_ways_are_one():
    """Archimedes: pressure on areas equals the buoyancy factor for mud equal inside and out."""
    mud = 80.0 * 16.018463374
    assert by_pressure_and_area(mud) == pytest.approx(hanging(example_string(), mud), rel=1e-12)


def test_p92_p96_free_point_constants():
    """[S21], [S23]: 2,500 times the area in in2, from E = 30e6 psi."""
    for od, bore, published in ((4.5, 3.826, 11017.50), (3.5, 2.992, 6475.500)):
        pipe = tube(od, bore)
        # One inch of stretch in 1,000 ft asks for E A / 12,000 lbf, that is FPC kips per 1,000 ft.
        assert pipe.axial / LBF / 12e3 == pytest.approx(published, rel=1.1e-4)


STRETCH = {"P-93": (2.875, 2.441, 25, 20e3, 5663.0), "P-97": (3.5, 2.992, 20, 25e3, 5180.0)}


@pytest.mark.parametrize("row", STRETCH)
def test_free_pipe_from_stretch(row):
    """[S21], [S23]: length free of the stuck point, from stretch in inches and pull in lbf."""
    od, bore, stretch, pull, published = STRETCH[row]
    found = tube(od, bore).axial * stretch * INCH / (pull * LBF) / FT
    assert found == pytest.approx(published, rel=1.2e-4)


def test_p94_free_pipe_of_the_reference_pipe():
    """[S21] rounds its constant to 735,294 (10,547 ft); Hooke with 30e6 psi gives 10,549.19."""
    found = DP5.axial * 24 * INCH / (30e3 * LBF) / FT
    assert found == pytest.approx(10549.19, abs=6e-3)
    assert found == pytest.approx(10547.0, rel=2.5e-4)


def test_p95_stretch_of_a_string_by_its_weight():
    """[S22]: L T / (735,000 W), inches and feet; W is taken as 3.4 lb/ft per in2 of steel."""
    bar = tube(2.0 * math.sqrt(23.52 / 3.4 / math.pi), 0.0)
    found = 8500 * FT * 230e3 * LBF / bar.axial / INCH
    assert found == pytest.approx(113.1, rel=6e-4)  # 735,000 has three digits


IODP = (
    (4.5, 4.052, 3.009, 0.0011),
    (5.5, 4.892, 4.962, 0.0007),
    (5.0, 4.25, 5.449, 0.0006),
    (5.5, 4.5, 7.854, 0.0004),
)


@pytest.mark.parametrize(("od", "bore", "area", "stretch"), IODP)
def test_p98_p99_areas_and_stretch(od, bore, area, stretch):
    """[S24]: area in in2; stretch in m of 100 m under 1,000 lbf, printed to four decimals."""
    pipe = tube(od, bore)
    assert pipe.area / INCH**2 == pytest.approx(area, abs=6e-4)
    assert 100.0 * 1000.0 * LBF / pipe.axial == pytest.approx(stretch, abs=5e-5)
