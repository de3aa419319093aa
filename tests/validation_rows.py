"""What the mechanics is checked against: each source, how closely it is met, and how to compute that."""

from __future__ import annotations

import math
from collections.abc import Callable, Iterable
from dataclasses import dataclass

import numpy as np

from field import (
    DEG_PER_100FT,
    DP5_CLEARANCE,
    DP5_EI,
    DP5_INERTIA,
    DP5_OD,
    DP5_WEIGHT,
    FOOT,
    FT_LBF,
    INCH,
    LB_PER_FT,
    LBF,
    PSI,
)
from forensics.mechanics import (
    buckled,
    eigen,
    fatigue,
    helix,
    hoisting,
    hydraulics,
    lockup,
    pipe,
    stress,
    torque,
)
from forensics.mechanics.airy_column import exact_column_load
from forensics.mechanics.columns import Ends, column_load
from forensics.mechanics.critical import Place, dawson_paslay_1984, he_kyllingstad_1995, wu_juvkam_wold_1993
from forensics.mechanics.helix_limit import unloading_limit
from forensics.mechanics.helix_shape import by_boundary_values, by_collocation
from forensics.mechanics.pipe import Tube
from forensics.mechanics.sinusoid import sinusoid_table


@dataclass(frozen=True)
class Row:
    """A source: how it is known, what it checks, where, how closely it is met, and how to compute that."""

    source: str
    known: str
    checks: str
    file: str
    within: float
    found: Callable[[], float] | None = None


def worst(found: Iterable[object], published: Iterable[object]) -> float:
    """Give the greatest relative difference."""
    pairs = zip(found, published, strict=True)
    return max(abs(float(a) / float(b) - 1) for a, b in pairs)  # type: ignore[arg-type]


def _pinned() -> float:
    lengths = (4, 8, 10, 64, 512, 4096, 262144)
    known = (2.227887066, 1.937039738, 1.869733399, 1.54244492, 1.37875790, 1.29098918, 1.20066059)
    return max(
        worst((column_load(0.0, length) for length in lengths), known),
        worst((exact_column_load(length) for length in lengths), known),
    )


def _zeros() -> float:
    free = [column_load(0.0, 60.0, Ends("pinned", "free"), mode) for mode in (1, 2, 3)]
    guided = [column_load(0.0, 60.0, Ends("guided", "free"), mode) for mode in (1, 2, 3)]
    return worst(free + guided, (1.018793, 3.248198, 4.820099, 2.338107, 4.087949, 5.52056))


def _table() -> float:
    n, length = np.meshgrid([0.0, 1e-3, 0.3, 7.79, 224.0, 1e5], [2.3, 3.15, 5.0, 30.0, 1e4])
    pairs = list(zip(n.ravel(), length.ravel(), strict=True))
    exact = [column_load(*pair) for pair in pairs]
    return worst((2 * math.sqrt(a) + float(eigen.interpolate(a, b)) for a, b in pairs), exact)


def _sinusoidal() -> float:
    cases = ((1.75, 90, 37990.52), (1.75, 60, 35354.16), (1.75, 30, 26863.35), (0.9375, 60, 48302.98))
    places = (Place(DP5_EI, gap * INCH, DP5_WEIGHT, math.radians(angle)) for gap, angle, _ in cases)
    return worst((dawson_paslay_1984(place) / LBF for place in places), (case[2] for case in cases))


def _curved() -> float:
    cases = ((60, 3, 62645.45), (60, 10, 150609.78), (90, 10, 151817.42), (30, 3, 55658.67))
    places = (
        Place(DP5_EI, DP5_CLEARANCE, DP5_WEIGHT, math.radians(angle), rate * DEG_PER_100FT)
        for angle, rate, _ in cases
    )
    return worst((he_kyllingstad_1995(place) / LBF for place in places), (case[2] for case in cases))


def _wu() -> float:
    flat = Place(DP5_EI, DP5_CLEARANCE, DP5_WEIGHT, math.pi / 2)
    return worst([wu_juvkam_wold_1993(flat) / dawson_paslay_1984(flat)], [1.8])


def _rate() -> float:
    table = sinusoid_table()
    inner = table.ratio > 1.2
    return worst(table.rate[inner], buckled.mitchell_lateral_rate(table.ratio[inner]))


def _helix() -> float:
    load = 80000 * LBF
    found = (
        helix.contact_force(load, DP5_EI, DP5_CLEARANCE) / LB_PER_FT,
        helix.pitch(load, DP5_EI) / FOOT,
        helix.bending_stress(load, DP5_CLEARANCE, DP5_OD, DP5_INERTIA) / PSI,
        helix.shortening(load, DP5_EI, DP5_CLEARANCE),
    )
    return worst(found, (78.490964, 54.166208, 12264.213, 1.4308249e-4))


def _lockup() -> float:
    run = lockup.HelicalRun(DP5_EI, DP5_CLEARANCE, DP5_WEIGHT, 0.3)
    loads = (0.0, 5000.0, 10000.0)
    return worst(
        (lockup.lockup_distance(load * LBF, run) / FOOT for load in loads), (11237.86, 10301.66, 9396.47)
    )


def _two_helices() -> float:
    series, path = by_collocation(0.46102, 0.1331196), by_boundary_values(0.46102, 0.1331196)
    return worst(series.square_slope(path.angle), path.slope**2)


def _limit() -> float:
    found = unloading_limit()
    return worst((found.ratio, found.mean, found.gamma), (1.370405, 0.46102, 0.1331196))


def _ratings() -> float:
    tube = Tube(5 * INCH, 4.276 * INCH)
    grades = (75000, 95000, 135000)
    pulls = [float(pipe.tension_left(tube, grade * PSI, 0.0)) / LBF for grade in grades]
    turns = [pipe.torsional_yield(tube, grade * PSI) / FT_LBF for grade in grades]
    return worst(pulls + turns, (395600, 501090, 712070, 41170, 52140, 74100))


def _lame() -> float:
    tube, inside = Tube(2.875 * INCH, 2.441 * INCH), 10000 * PSI
    pulls = (0.0, 50000.0)
    loads = (stress.PipeLoads(pull * LBF - inside * tube.bore_area, inside=inside) for pull in pulls)
    return worst((stress.combined_stress(tube, load) / PSI for load in loads), (67212.707, 62077.993))


def _doglegs() -> float:
    tube = Tube(4.5 * INCH, 3.826 * INCH)
    pulls = np.array([50e3, 100e3, 150e3, 200e3]) * LBF
    found = fatigue.permissible_dogleg(tube, pulls, 30e6 * PSI) / DEG_PER_100FT
    return worst(found, (7.242254, 4.836800, 3.575569, 2.693578))


def _sheaves() -> float:
    lines = (2, 4, 6, 8, 10, 12)
    fast = (count * hoisting.fast_line_factor(1 / 1.04, count) for count in lines)
    return worst(fast, (1.06, 1.102, 1.145, 1.188, 1.233, 1.279))


def _winding() -> float:
    """Least energy over the turn rate against Chen's onset less what torque takes off it."""
    onset = math.sqrt(2) * 2 * math.sqrt(DP5_EI * DP5_WEIGHT / DP5_CLEARANCE)
    found, least = [], []
    for moment in (5e3, 2e4, 6e4):
        turn = np.linspace(0.05, 1.0, 200_001)
        energy = DP5_EI * turn**2 - moment * turn + 2 * DP5_WEIGHT / (DP5_CLEARANCE * turn**2)
        least.append(energy.min())
        found.append(onset - float(torque.onset_drop(onset, DP5_EI, moment)) - moment**2 / (16 * DP5_EI))
    return worst(found, least)


def _jets() -> float:
    area, gpm = 0.3889 * INCH**2, 6.30902e-5
    thrust = hydraulics.jet_thrust(400 * gpm, 12 * 119.826427, area)
    return worst([hydraulics.bit_pressure_drop(thrust, area) / PSI, thrust / LBF], [1169, 820])


ROWS = (
    Row(
        "Airy and Scorer functions",
        "computed",
        "critical load of a pinned vertical string by its length, exact and by splines",
        "validation/test_column_exact",
        5e-9,
        _pinned,
    ),
    Row(
        "Tables of zeros of Ai and Ai', notes of 2015",
        "seen",
        "strings whose top is free sideways, three modes",
        "validation/test_column_ends",
        4e-7,
        _zeros,
    ),
    Row(
        "Self-buckling (encyclopaedia) and Timoshenko's form",
        "seen, memory",
        "columns under their own weight, four pairs of ends",
        "validation/test_column_ends",
        2e-3,
    ),
    Row(
        "Solver of any ends",
        "computed",
        "the shipped table's load, any side load and length",
        "validation/test_column_exact",
        1e-3,
        _table,
    ),
    Row(
        "Dawson and Paslay 1984",
        "memory",
        "sinusoidal load, straight hole",
        "validation/test_dawson_paslay_1984",
        1e-6,
        _sinusoidal,
    ),
    Row(
        "He and Kyllingstad 1995",
        "memory",
        "sinusoidal load in a build",
        "validation/test_he_kyllingstad_1995",
        1e-7,
        _curved,
    ),
    Row(
        "Wu and Juvkam-Wold 1993, abstract",
        "seen",
        "helical over sinusoidal load, printed as 1.8",
        "validation/test_wu_juvkam_wold_1993",
        2e-2,
        _wu,
    ),
    Row(
        "Mitchell 1999",
        "seen",
        "lateral rate of the sinusoid: our own solution against his correlation",
        "validation/test_mitchell_1999",
        1e-2,
        _rate,
    ),
    Row(
        "Helix under side weight, two methods",
        "computed",
        "Fourier series against integration along the pipe",
        "mechanics/test_helix_limit",
        1e-8,
        _two_helices,
    ),
    Row(
        "Unloading limit",
        "computed",
        "load, square slope and side weight at the limit",
        "mechanics/test_helix_limit",
        1e-5,
        _limit,
    ),
    Row(
        "Lubinski, Althouse and Logan 1962",
        "seen",
        "worked example: 49.7, 165.2 and 115.5 in",
        "validation/test_lubinski_1962",
        4e-4,
    ),
    Row(
        "Lubinski, Althouse and Logan 1962",
        "memory",
        "contact, pitch, stress and shortening of the helix",
        "validation/test_lubinski_1962",
        1e-7,
        _helix,
    ),
    Row(
        "Mitchell 1986; Wu and Juvkam-Wold 1993",
        "memory",
        "lockup distance at constant inclination",
        "validation/test_mitchell_1986_lockup",
        1e-6,
        _lockup,
    ),
    Row(
        "Johancsik 1984, Sheppard 1987, Aadnoy and Andersen 2001",
        "computed",
        "soft string: build, hold, turn; up, down, turning",
        "validation/test_soft_string",
        3e-3,
    ),
    Row(
        "API RP 7G table 2, a copy",
        "seen",
        "tension and torsion ratings of 14 pipes, four grades",
        "validation/test_api_rp_7g",
        6e-4,
        _ratings,
    ),
    Row(
        "Lubinski 1961, API RP 7G",
        "memory",
        "dogleg that turning pipe stands",
        "validation/test_lubinski_1961",
        2e-7,
        _doglegs,
    ),
    Row("Lame", "computed", "von Mises at the bore, combined loads", "validation/test_lame", 1e-7, _lame),
    Row(
        "Handbook pages on torsion, stretch and free point",
        "seen",
        "torque per turn in 1,000 ft, stretch and free length, by the string table's stiffnesses",
        "validation/test_check_pipe_sections",
        6e-4,
    ),
    Row(
        "Drill-pipe data sheet",
        "seen",
        "areas, moduli and ratings, new and premium",
        "validation/test_drill_pipe_data_sheet",
        5e-4,
    ),
    Row(
        "Well Engineers Notebook, API RP 9B",
        "seen",
        "line tension over hookload",
        "validation/test_block_and_tackle",
        6e-4,
        _sheaves,
    ),
    Row(
        "Mitchell 1986; Wu and Juvkam-Wold 1993",
        "memory",
        "the replay's helical march against the closed form, four inclinations",
        "mechanics/test_lockup_march",
        1e-2,
    ),
    Row(
        "Mitchell 1986; Wu and Juvkam-Wold 1993",
        "memory",
        "slack-off margin: what more weight set down brings to the bit, and the most that arrives",
        "replay/test_margin",
        2e-2,
    ),
    Row(
        "Least energy; Miska and Cunha 1995",
        "computed, memory",
        "what torque takes off a helical onset; pitch of a helix under torque",
        "mechanics/test_torque",
        2e-5,
        _winding,
    ),
    Row(
        "Applied Drilling Engineering, 1986",
        "memory",
        "worked nozzles: pressure drop of the bit and thrust of its jets",
        "validation/test_applied_drilling_engineering",
        1e-3,
        _jets,
    ),
)
