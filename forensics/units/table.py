"""The units met, as data: quantity, spellings, SI value of one.

References
----------
BIPM, *The International System of Units*, 9th ed., 2019; NIST SP 811 (2008), appendix B
(international foot and pound of 1959, US gallon of 231 in3, petroleum barrel of 42 gallons).
"""

from __future__ import annotations

import math

G = 9.80665
FT, INCH, US_FT = 0.3048, 0.0254, 1200.0 / 3937.0
LB = 0.45359237
LBF = LB * G
PSI = LBF / INCH**2
GALLON, BARREL = 231.0 * INCH**3, 42.0 * 231.0 * INCH**3
DEG = math.pi / 180.0
TONNE_F = 1000.0 * G

_STRESS = (
    ("Pa N/m2 pascal", 1.0),
    ("kPa kN/m2", 1e3),
    ("MPa N/mm2", 1e6),
    ("GPa", 1e9),
    ("bar bara barg bars barabs barabsolute", 1e5),
    ("mbar", 100.0),
    ("psi psia psig psiabs lbf/in2 lb/in2", PSI),
    ("kpsi ksi", 1e3 * PSI),
    ("Mpsi", 1e6 * PSI),
    ("kgf/cm2 kg/cm2 at", G * 1e4),
    ("atm", 101325.0),
)

# First spelling of each row is the label; scale is the SI value of one.
TABLE: dict[str, tuple[tuple[str, float], ...]] = {
    "length": (
        ("m meter meters metre metres mtr mts mRKB mMD mMDRT м", 1.0),
        ("ft F feet foot ftMD '", FT),
        ("ftUS USft", US_FT),
        ('in inch inches ins "', INCH),
        ("0.1in .1in 01in 1in", 0.1 * INCH),
        ("mm", 1e-3),
        ("cm", 1e-2),
        ("dm", 1e-1),
        ("km", 1e3),
    ),
    "force": (
        ("N newton", 1.0),
        ("daN", 10.0),
        ("kN", 1e3),
        ("kdaN kdN 10kN 1000daN 10^3daN", 1e4),
        ("MN", 1e6),
        ("lbf lb lbs pound pounds", LBF),
        ("klbf klb klbs klbm kips kip 1000lbf 1000lb 1000lbs kpound kpounds 10^3lbf 10^3lb", 1e3 * LBF),
        ("kgf kg kp", G),
        ("tonnef t tonne tonnes tf ton tons mt mton mtons metricton metrictons kkgf kkg Mgf Mg", TONNE_F),
        ("1000kgf 1000kg metrictonf 10^3kgf Tn", TONNE_F),
        ("tonfUS shortton shorttons tonUS tonsUS stonf ston ustonf uston", 2000.0 * LBF),
        ("tonfUK longton longtons tonUK", 2240.0 * LBF),
    ),
    "moment": (
        ("N.m mN J", 1.0),
        ("daN.m mdaN", 10.0),
        ("kN.m kmN mkN kJ", 1e3),
        ("kdaN.m km.daN kmdaN kmdN kdNm 10kN.m", 1e4),
        ("MN.m", 1e6),
        ("ft.lbf lbf.ft ft.lb lb.ft ft.lbs lbs.ft ftpound", LBF * FT),
        ("kft.lbf klbf.ft kft.lb kft.lbs kfp kflb kflbs klb.ft klbs.ft kip.ft kips.ft", 1e3 * LBF * FT),
        ("ft.kip ft.kips ft.klb ft.klbs ft.klbf kip.feet kfoot.pound", 1e3 * LBF * FT),
        ("1000ft.lbf 1000ft.lb 1000ft.lbs 1000lbf.ft 10^3ft.lbf", 1e3 * LBF * FT),
        ("lbf.in in.lbf in.lb in.lbs lb.in", LBF * INCH),
        ("kgf.m kg.m m.kgf m.kg kgm", G),
        ("tonnef.m t.m tf.m tonne.m kkgf.m", TONNE_F),
    ),
    "pressure": _STRESS,
    "stress": _STRESS,
    "density": (
        ("kg/m3 kgm3 k/m3 g/L", 1.0),
        ("g/cm3 g/cc g/c3 gm/cc gm/cm3 g/ml kg/L sg spgr t/m3 kg/dm3 gcc gcm3 kgl", 1e3),
        ("specificgravity", 1e3),
        ("lbm/galUS ppg lb/gal lbm/gal lbs/gal lb/galUS lb/USgal ppgUS poundpergallon #/gal", LB / GALLON),
        ("lbm/ft3 lb/ft3 pcf lbs/ft3 lb/cuft", LB / FT**3),
        ("lbm/bbl lb/bbl ppb", LB / BARREL),
        ("psi/ft", PSI / FT / G),
        ("psi/1000ft psi/kft", PSI / FT / G / 1e3),
        ("kPa/m", 1e3 / G),
    ),
    "flow": (
        ("m3/s m^3/s m³/s", 1.0),
        ("m3/min m3/m m3/mn m^3/min m³/min", 1.0 / 60.0),
        ("m3/h m3/hr m3/hour m^3/h m³/h cumh", 1.0 / 3600.0),
        ("L/min L/m L/mn lpm ltr/min litre/min litres/min liter/min liters/min lit/min", 1e-3 / 60.0),
        ("ltrs/min dm3/min l/minute", 1e-3 / 60.0),
        ("L/s l/sec lps dm3/s", 1e-3),
        (
            "galUS/min gpm gal/min USgal/min USgpm gal/mn gal/m gals/min gallons/min gal(US)/min",
            GALLON / 60.0,
        ),
        ("bbl/min bpm", BARREL / 60.0),
        ("bbl/h bbl/hr bph", BARREL / 3600.0),
        ("ft3/min cfm", FT**3 / 60.0),
        ("ft3/s", FT**3),
    ),
    "speed": (
        ("m/s mps m/sec", 1.0),
        ("m/min m/mn mpm", 1.0 / 60.0),
        ("m/h m/hr m/hour mph mtr/hr", 1.0 / 3600.0),
        ("ft/h ft/hr fph f/hr f/h feet/hr feet/hour ft/hour", FT / 3600.0),
        ("ft/min fpm f/min f/mn", FT / 60.0),
        ("ft/s ft/sec", FT),
        ("mm/s", 1e-3),
        ("in/s", INCH),
    ),
    "angle": (
        ("deg dega degree degrees ° º", DEG),
        ("rad radian radians", 1.0),
        ("mrad", 1e-3),
        ("c rev turn turns", 2.0 * math.pi),
        ("gon grad", math.pi / 200.0),
    ),
    "angle_per_length": (
        ("deg/30m dega/30m °/30m", DEG / 30.0),
        ("deg/100ft dega/100ft °/100ft °/100' dghf deg/100f deg/100'", DEG / (100.0 * FT)),
        ("deg/30ft dega/30ft", DEG / (30.0 * FT)),
        ("deg/10m dega/10m", DEG / 10.0),
        ("deg/100m", DEG / 100.0),
        ("deg/m dega/m", DEG),
        ("deg/ft dega/ft", DEG / FT),
        ("rad/m", 1.0),
        ("rad/ft", 1.0 / FT),
    ),
    "rotation": (
        ("rpm rev/min r/min u/min c/min revs/min revpermin 1/min tr/min rev/mn", 1.0),
        ("c/s rev/s rps Hz 1/s r/s", 60.0),
        ("rad/s", 60.0 / (2.0 * math.pi)),
        ("deg/s dega/s", 1.0 / 6.0),
    ),
    "mass_per_length": (
        ("kg/m", 1.0),
        ("lbm/ft lb/ft lbs/ft ppf #/ft # lb/f", LB / FT),
    ),
    "linear_weight": (
        ("N/m", 1.0),
        ("daN/m", 10.0),
        ("kN/m", 1e3),
        ("kg/m kgf/m", G),
        ("lbm/ft lb/ft lbs/ft lbf/ft ppf #/ft # lb/f", LBF / FT),
        ("klbf/ft", 1e3 * LBF / FT),
    ),
    "time": (
        ("s sec secs second seconds", 1.0),
        ("ms msec millisecond milliseconds", 1e-3),
        ("min mins minute minutes mn", 60.0),
        ("h hr hrs hour hours", 3600.0),
        ("d day days", 86400.0),
    ),
    "volume": (
        ("m3 m^3 m³ cum", 1.0),
        ("L l ltr litre litres liter liters dm3", 1e-3),
        ("bbl bbls barrel barrels", BARREL),
        ("galUS gal gals gallon gallons USgal", GALLON),
        ("ft3 cuft", FT**3),
        ("in3", INCH**3),
    ),
    "area": (("m2 m^2 m²", 1.0), ("cm2", 1e-4), ("mm2", 1e-6), ("in2", INCH**2), ("ft2", FT**2)),
    "dimensionless": (
        ("1 none unitless euc fraction frac ratio - ---- .... bool flag v/v m/m n/a na", 1.0),
        ("% percent pct", 0.01),
    ),
}
# Speeds written as time per length: SI speed where the reading is 1.
INVERSE: tuple[tuple[str, float], ...] = (
    ("s/m sec/m", 1.0),
    ("min/m mn/m", 1.0 / 60.0),
    ("min/ft mn/ft min/f", FT / 60.0),
    ("s/ft sec/ft", FT),
    ("h/m hr/m", 1.0 / 3600.0),
)
# Spellings that mean "no unit was given", not "a pure number".
NO_UNIT = frozenset({"", "none", "unitless", "unit", "badunit", "na", "n/a", "null", "euc", "unknown"})
# What each system shows: label, SI value of one, decimals.
DISPLAY: dict[str, tuple[tuple[str, float, int], tuple[str, float, int]]] = {
    "length": (("m", 1.0, 1), ("ft", FT, 0)),
    "diameter": (("mm", 1e-3, 1), ("in", INCH, 3)),
    "force": (("kN", 1e3, 1), ("klbf", 1e3 * LBF, 1)),
    "moment": (("kN.m", 1e3, 2), ("kft.lbf", 1e3 * LBF * FT, 2)),
    "pressure": (("bar", 1e5, 1), ("psi", PSI, 0)),
    "stress": (("MPa", 1e6, 0), ("kpsi", 1e3 * PSI, 1)),
    "density": (("g/cm3", 1e3, 3), ("ppg", LB / GALLON, 2)),
    "flow": (("L/min", 1e-3 / 60.0, 0), ("gpm", GALLON / 60.0, 0)),
    "speed": (("m/h", 1.0 / 3600.0, 1), ("ft/h", FT / 3600.0, 1)),
    "angle": (("deg", DEG, 1), ("deg", DEG, 1)),
    "angle_per_length": (("deg/30m", DEG / 30.0, 2), ("deg/100ft", DEG / (100.0 * FT), 2)),
    "rotation": (("rpm", 1.0, 0), ("rpm", 1.0, 0)),
    "mass_per_length": (("kg/m", 1.0, 1), ("lb/ft", LB / FT, 2)),
    "linear_weight": (("kg/m", G, 1), ("lb/ft", LBF / FT, 2)),
    "time": (("s", 1.0, 0), ("s", 1.0, 0)),
    "volume": (("m3", 1.0, 1), ("bbl", BARREL, 1)),
    "area": (("cm2", 1e-4, 2), ("in2", INCH**2, 2)),
    "dimensionless": (("", 1.0, 3), ("", 1.0, 3)),
}
