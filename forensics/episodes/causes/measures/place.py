"""Where the bit was: shoe, doglegs, hole where cuttings settle, distance off bottom."""

from __future__ import annotations

import numpy as np

from forensics.episodes.causes.measures.base import NAN, Measure, Subject

#: A band of hole where cuttings settle into beds that slide back [rad] (trade rule, from memory).
BED = (np.radians(40.0), np.radians(65.0))

DEGREE = np.radians(1.0) / 30.0


def shoe(s: Subject) -> float:
    """Distance of the bit from the shoe [m]."""
    return abs(s.place - float(s.material.well.hole.shoe))


def dogleg(s: Subject) -> float:
    """Largest curvature of the hole within 30 m above the bit [rad/m]."""
    if not np.isfinite(s.place):
        return NAN
    at = np.linspace(max(s.place - 30.0, 0.0), s.place, 7)
    curvature = np.asarray(s.material.well.trajectory.at(at).curvature)
    return float(np.max(np.linalg.norm(curvature, axis=1)))


def bed(s: Subject) -> float:
    """Length of open hole above the bit at inclinations where cuttings settle and slide [m]."""
    step = 10.0
    if not np.isfinite(s.place):
        return NAN
    at = np.arange(float(s.material.well.hole.shoe), s.place, step)
    if len(at) == 0:
        return 0.0
    inclination = np.asarray(s.material.well.trajectory.at(at).inclination)
    return float(((inclination >= BED[0]) & (inclination <= BED[1])).sum() * step)


def off_bottom(s: Subject) -> float:
    """Distance of the bit from the bottom of the hole at the peak [m]."""
    return float(s.material.rig.hole_depth[s.episode.peak] - s.place)


MEASURES = (
    Measure(
        "near the shoe", shoe, (5.0, 15.0, 50.0, 200.0), "the bit was {} from the shoe", "path", "length"
    ),
    Measure(
        "dogleg at the bit",
        dogleg,
        (1.5 * DEGREE, 3.0 * DEGREE, 5.0 * DEGREE),
        "the hole turns by up to {} near the bit",
        "path",
        "angle_per_length",
    ),
    Measure(
        "hole where cuttings settle",
        bed,
        (50.0, 200.0, 500.0),
        "{} of open hole above the bit stand at 40 to 65 degrees",
        "path",
        "length",
    ),
    Measure(
        "distance off bottom",
        off_bottom,
        (0.3, 5.0, 40.0, 200.0),
        "the bit was {} off bottom",
        "run",
        "length",
    ),
)
