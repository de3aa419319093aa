"""Field units to SI, exact by definition, for numbers that sources print in field units."""

from __future__ import annotations

import math

INCH = 0.0254
FOOT = 0.3048
LBF = 4.4482216152605
PSI = LBF / INCH**2
LB_PER_FT = LBF / FOOT
FT_LBF = FOOT * LBF
EI_UNIT = LBF * INCH**2
PPG = 0.45359237 / 3.785411784e-3
DEG_PER_100FT = math.radians(1.0) / (100 * FOOT)

# the drill pipe that the computed check values use: 5 x 4.276 in, E 30e6 psi, 20.89 lb/ft in 10 ppg mud
DP5_EI = 4.28074752e8 * EI_UNIT
DP5_WEIGHT = 17.700687 * LB_PER_FT
DP5_CLEARANCE = 1.75 * INCH
DP5_OD = 5 * INCH
DP5_INERTIA = 14.269158 * INCH**4
