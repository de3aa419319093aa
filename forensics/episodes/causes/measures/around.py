"""What else happened around an episode: other rules that held, at which depths, and what came back."""

from __future__ import annotations

import numpy as np

from forensics.episodes.catalogue import Kind
from forensics.episodes.causes.measures.base import (
    FEWEST,
    NAN,
    Bools,
    Floats,
    Measure,
    Subject,
    middle,
    spread,
)
from forensics.episodes.find import flag_rows

#: What happened within this long of an episode is held to belong to its story [s].
HOUR = 3600.0

#: Share of readings that a "largest" leaves above it.
TOP = 0.05


def _hour(s: Subject) -> slice:
    return s.material.rows_between(s.episode.start - HOUR, s.episode.end + HOUR)


def _flags(s: Subject, kind: Kind) -> Bools:
    """Rows within the hour on which a kind's rule holds."""
    return flag_rows(s.material)[0][kind][_hour(s)]


def _time(s: Subject, flags: Bools) -> float:
    return float(flags.sum() * s.material.log.interval)


def dragging_up(s: Subject) -> float:
    """Time within the hour with drag beyond its threshold going up, or pulled on standing still [s]."""
    return _time(s, _flags(s, Kind.DRAG) & (s.material.friction_sign[_hour(s)] > 0))


def dragging_down(s: Subject) -> float:
    """Time within the hour with drag beyond its threshold going down, or set down standing still [s]."""
    return _time(s, _flags(s, Kind.DRAG) & (s.material.friction_sign[_hour(s)] < 0))


def hard_to_turn(s: Subject) -> float:
    """Time within the hour with torque beyond its threshold [s]."""
    if s.usual.channel("torque") is None or s.material.calibration.rotational is None:
        return NAN
    return _time(s, _flags(s, Kind.TORQUE))


def locked_up(s: Subject) -> float:
    """Time within the hour on which the lockup rule holds [s]."""
    return _time(s, _flags(s, Kind.LOCKUP))


def helical(s: Subject) -> float:
    """Time within the hour with a helix somewhere in the string [s]."""
    return _time(s, s.material.loads.state[_hour(s)] == 2)


def _set_down(s: Subject) -> Bools:
    down = _flags(s, Kind.DRAG) & (s.material.friction_sign[_hour(s)] < 0)
    return down | (_flags(s, Kind.LOCKUP) & ~s.material.rig.on_bottom[_hour(s)])


def set_down_depths(s: Subject) -> float:
    """Stretch of bit depths at which the string was set down within the hour [m]."""
    return spread(s.material.bit[_hour(s)][_set_down(s)])


def overpull_depths(s: Subject) -> float:
    """Stretch of bit depths at which the string was pulled beyond the model within the hour [m]."""
    up = _flags(s, Kind.DRAG) & (s.material.friction_sign[_hour(s)] > 0)
    return spread(s.material.bit[_hour(s)][up])


def _largest(s: Subject, sign: int) -> float:
    """Largest drag in one direction near the episode, a few readings left out, over the threshold."""
    m = s.material
    way = m.friction_sign[s.near] == sign
    values: Floats = s.usual.drag[s.near][way]
    values = values[np.isfinite(values)]
    return float(np.quantile(values, 1.0 - TOP)) if len(values) >= 2 * FEWEST else NAN


def largest_up(s: Subject) -> float:
    """Largest drag beyond the model going up near the episode, over the threshold."""
    return _largest(s, 1)


def largest_down(s: Subject) -> float:
    """Largest drag beyond the model going down near the episode, over the threshold."""
    return _largest(s, -1)


def share_moving(s: Subject) -> float:
    """Part of the readings going up or down within the hour that are beyond half the threshold."""
    return _share_beyond(s, _hour(s))


def _share_beyond(s: Subject, rows: slice) -> float:
    m = s.material
    values = s.usual.drag[rows][m.rig.direction[rows] != 0]
    values = values[np.isfinite(values)]
    return float((values > 0.5).mean()) if len(values) >= 4 * FEWEST else NAN


def share_before(s: Subject) -> float:
    """Part of the readings going up or down in the two hours before that are beyond half the threshold."""
    start = s.episode.start
    return _share_beyond(s, s.material.rows_between(start - 2.0 * HOUR, start - 60.0))


def share_after(s: Subject) -> float:
    """Part of the readings going up or down in the two hours after that are beyond half the threshold."""
    end = s.episode.end
    return _share_beyond(s, s.material.rows_between(end + 60.0, end + 2.0 * HOUR))


def lean(s: Subject) -> float:
    """Largest drag going up over the sum of the largest both ways; NaN where neither is half a threshold."""
    up, down = max(largest_up(s), 0.0), max(largest_down(s), 0.0)
    if not (np.isfinite(up) and np.isfinite(down)) or up + down < 0.5:
        return NAN
    return up / (up + down)


def left_turning(s: Subject) -> float:
    """Residual of the hookload while turning near the episode, over the largest drag either way."""
    m = s.material
    share = np.abs(m.loads.drag_residual[s.near] / m.drag_threshold[s.near])
    turned = middle(np.where(m.rig.turning[s.near], share, np.nan))
    most = np.fmax(largest_up(s), largest_down(s))
    return float(turned / most) if most > 0.5 else NAN


def turning_spread(s: Subject) -> float:
    """Spread of the hookload's residual while turning within the hour, over the threshold."""
    m, rows = s.material, _hour(s)
    share = m.loads.drag_residual[rows] / m.drag_threshold[rows]
    turned = share[m.rig.turning[rows] & np.isfinite(share)]
    return float(np.subtract(*np.quantile(turned, [0.9, 0.1]))) if len(turned) >= 4 * FEWEST else NAN


def mud_change(s: Subject) -> float:
    """Give the change of logged mud density from the two hours before to those after, over the former."""
    density = s.usual.channel("mud_density")
    if density is None:
        return NAN
    start = s.episode.start
    before = middle(density[s.material.rows_between(start - 2.0 * HOUR, start)], 60)
    return middle(density[s.material.rows_between(start, start + 2.0 * HOUR)], 60) / before - 1.0


def returns(s: Subject) -> float:
    """Flow out over flow in during the episode, over the run's own."""
    share, usual = s.usual.returns
    here = share[s.near][np.isfinite(share[s.near])]
    return float(np.quantile(here, TOP) / usual) if len(here) >= 4 * FEWEST and usual > 0.0 else NAN


TIMES = (5.0, 30.0, 120.0, 600.0)
SHARES = (0.02, 0.1, 0.3, 0.6)
GRADES = (0.2, 0.5, 1.0, 1.5, 2.5)

MEASURES = (
    Measure(
        "time dragging up", dragging_up, TIMES, "drag going up held for {} around it", "residuals", "time"
    ),
    Measure(
        "time dragging down",
        dragging_down,
        TIMES,
        "drag going down held for {} around it",
        "residuals",
        "time",
    ),
    Measure(
        "time hard to turn",
        hard_to_turn,
        TIMES,
        "torque beyond the model held for {} around it",
        "residuals",
        "time",
    ),
    Measure("time locked up", locked_up, TIMES, "the lockup rule held for {} around it", "strip", "time"),
    Measure("time helical", helical, TIMES, "a helix stood for {} around it", "strip", "time"),
    Measure(
        "depths set down at",
        set_down_depths,
        (0.5, 3.0, 12.0, 40.0),
        "set down over {} of depth",
        "run",
        "length",
    ),
    Measure(
        "depths pulled at",
        overpull_depths,
        (0.5, 3.0, 12.0, 40.0),
        "pulled beyond the model over {} of depth",
        "run",
        "length",
    ),
    Measure("largest drag going up", largest_up, GRADES, "largest drag going up: {}", "residuals"),
    Measure("largest drag going down", largest_down, GRADES, "largest drag going down: {}", "residuals"),
    Measure(
        "drag within the hour",
        share_moving,
        (0.02, 0.1, 0.3, 0.6),
        "{} of the moving readings around it are beyond half the threshold",
        "residuals",
        "share",
    ),
    Measure(
        "drag before it",
        share_before,
        SHARES,
        "{} of the moving readings in the two hours before are beyond half the threshold",
        "residuals",
        "share",
    ),
    Measure(
        "drag after it",
        share_after,
        SHARES,
        "{} of the moving readings in the two hours after are beyond half the threshold",
        "residuals",
        "share",
    ),
    Measure(
        "drag up against down",
        lean,
        (0.1, 0.35, 0.65, 0.9),
        "{} of the largest drag, both ways together, is going up",
        "residuals",
        "share",
    ),
    Measure(
        "mud density change",
        mud_change,
        (-0.01, -0.003, 0.003, 0.01),
        "logged mud density changed by {} from before to after",
        "run",
        "part",
    ),
    Measure(
        "left while turning",
        left_turning,
        (0.1, 0.3, 0.6, 1.0),
        "turning left {} of the largest drag",
        "residuals",
        "share",
    ),
    Measure(
        "spread while turning",
        turning_spread,
        (0.15, 0.4, 1.0),
        "hookload less model while turning varies by {}",
        "residuals",
    ),
    Measure(
        "returns",
        returns,
        (0.5, 0.8, 0.95),
        "flow out over flow in fell to {} of the run's own",
        "strip",
        "ratio",
    ),
)
