"""Drill pipe against API RP 7G: table 2 (a web copy, seen; misprints of that copy left out), appendix A.

Inside diameters are the recommended practice's own (from memory, high). None stands where the copy has a
blank or a misprint.
"""

from __future__ import annotations

import pytest

from field import FT_LBF, INCH, LBF, PSI
from forensics.mechanics import pipe
from forensics.mechanics.pipe import Tube
from forensics.mechanics.stress import rated_use

GRADES = (75000, 95000, 105000, 135000)

# outside, inside [in]; torsional yield E, X, G, S [ft.lbf]; tensile yield E, X, G, S [lbf]
TABLE_2 = {
    "P-1": (2.375, 1.815, (6250, 7920, 8750, 11250), (138220, None, 193500, 248790)),
    "P-2": (2.875, 2.151, (11550, 14640, 16180, 20800), (214340, 271500, 300080, 385820)),
    "P-3": (3.5, 2.764, (18550, 23500, 25970, 33390), (271570, 343990, 380190, 488820)),
    "P-4": (3.5, 2.602, (21090, 26710, 29520, 37950), (322780, 408850, 451890, 581000)),
    "P-5": (4.0, 3.34, (23290, 29500, 32600, 41920), (285360, 361460, 399500, 513650)),
    "P-6": (4.0, 3.24, (25810, 32690, 36130, 46460), (324120, 410550, 453770, 583420)),
    "P-7": (4.5, 3.826, (30810, 39020, 43130, 55450), (330560, 418700, 462780, 595000)),
    "P-8": (4.5, 3.64, (36900, 46740, 51660, 66420), (412360, 522320, 577300, 742240)),
    "P-9": (5.0, 4.276, (41170, 52140, 57600, 74100), (395600, 501090, 553830, 712070)),
    "P-10": (5.0, 4.0, (52260, None, 73160, 94060), (530150, 671520, 742200, 954260)),
    "P-11": (5.5, 4.892, (44070, 55830, 61700, 79330), (372180, 471430, 521050, 669920)),
    "P-12": (5.5, 4.778, (50710, 64230, None, 91280), (437120, 553680, 611960, 786810)),
    "P-13": (5.5, 4.67, (56570, 71660, 79200, 101830), (497220, 629810, 696110, 895000)),
    "P-14": (6.625, 5.965, (70580, 89400, 98810, 127050), (489470, 619990, 685250, 881040)),
}


@pytest.mark.parametrize("row", TABLE_2)
def test_table_2_new_pipe(row):
    outside, inside, torques, pulls = TABLE_2[row]
    tube = Tube(outside * INCH, inside * INCH)
    for grade, torque, pull in zip(GRADES, torques, pulls, strict=True):
        strength = grade * PSI
        # the copy rounds torques to tens and truncates some: 6e-4 covers the worst of them
        if torque is not None:
            assert float(pipe.torsional_yield(tube, strength)) / FT_LBF == pytest.approx(torque, rel=6e-4)
        if pull is not None:
            assert float(pipe.tension_left(tube, strength, 0.0)) / LBF == pytest.approx(pull, rel=1e-4)


def test_p_86_torsion_under_tension():
    # appendix A (from memory, high): S-135 5 x 4.276 in carrying 400,000 lbf: 61303.842 ft.lbf (computed)
    tube = Tube(5 * INCH, 4.276 * INCH)
    torque = pipe.torsional_yield(tube, 135000 * PSI, 400000 * LBF)
    assert float(torque) / FT_LBF == pytest.approx(61303.842, rel=1e-5)
    assert float(pipe.tension_left(tube, 135000 * PSI, torque)) / LBF == pytest.approx(400000, rel=1e-9)


def test_p_65_heavy_weight_pipe():
    # tables of heavy-weight pipe (from memory, high): 5 x 3 in tube of 55 ksi
    tube = Tube(5 * INCH, 3 * INCH)
    assert float(pipe.tension_left(tube, 55000 * PSI, 0.0)) / LBF == pytest.approx(691185, rel=1e-4)
    assert float(pipe.torsional_yield(tube, 55000 * PSI)) / FT_LBF == pytest.approx(56495, rel=1e-4)


def test_p_86_uses_up_the_combined_rating():
    tube = Tube(5 * INCH, 4.276 * INCH)
    use = rated_use(tube, 135000 * PSI, 400000 * LBF, 61303.842 * FT_LBF)
    assert float(use) == pytest.approx(1.0, rel=1e-5)
