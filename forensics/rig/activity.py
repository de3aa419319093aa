"""On bottom or not, and the activity of each row, by one rule set for every well."""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray
from scipy.ndimage import maximum_filter1d, minimum_filter1d

from forensics.logs.table import TimeLog
from forensics.rig import noise
from forensics.rig.depth import DepthView
from forensics.rig.noise import Bools, Floats
from forensics.rig.signals import MOVING_WINDOW, Signals
from forensics.rig.tare import Reference
from forensics.rig.view import Activity, RigView

# Window over which hookload is averaged before it is judged [s].
SMOOTHING = 9.0
# Least weight that counts as weight on bottom, whatever the noise [N].
_LEAST_WEIGHT = 2e3
# A threshold never grows beyond this: poor references must not hide real weight [N].
_MOST_WEIGHT = 15e3
# A bit lowered at this speed for the window of motion is not on bottom [m/s].
_FREE_SPEED = 0.05
# Off bottom by less than this a free bit can't be told from a loaded one by depth [m].
_TOUCH = 0.3
# Differential pressure below this share of the level that counts is none: a locked-in load dies slowly.
_NO_PRESSURE = 0.25
# Second pass: bit load above this, and above the noise, is on bottom (the contract's rule) [N].
_REFINE_WEIGHT = 1e3
# A string hangs still where hookload and block stay within this, or three noises, for so long [N, m, s].
_STILL_FORCE = 1.5e3
_STILL_TRAVEL = 0.03
_STILL_SECONDS = 120.0


@dataclass(frozen=True)
class Surface:
    """What the surface shows at each row, for judging the bit; arrays of shape (n,).

    `reading` hookload as read and `smooth` averaged [N]; `direction` +1 down; `axial` share of the drag that
    acts along the string while it turns, by its pitch of motion: + down, - up [-]; `differential` pressure
    re-zeroed, NaN where there is none, with the level that counts as load [Pa].
    """

    reading: Floats
    smooth: Floats
    direction: NDArray[np.int8]
    speed: Floats
    axial: Floats
    turning: Bools
    pumping: Bools
    slips: Bools
    differential: Floats
    differential_level: float


def bottom_evidence(
    surface: Surface, depths: DepthView, references: tuple[Reference, Reference, Reference], signals: Signals
) -> NDArray[np.int8]:
    """Ask what each row says by itself: +1 on bottom, -1 off it, 0 nothing.

    Parameters
    ----------
    surface : Surface
        Hookload, motion, drives.
    depths : DepthView
        Hole depth and gap.
    references : tuple of Reference
        Rotating, slack-off and pick-up weight.
    signals : Signals
        Noise and sampling.

    Returns
    -------
    ndarray of int8, shape (n,)
        Votes; the state holds where there is none.

    Notes
    -----
    Turning, weight is the rotating reference less the hookload, and less the part of the drag that a
    turning string still feels as it moves. Not turning, drag hides the bit between slack-off and pick-up
    weight: only a hookload below the slack-off weight proves contact, only one at the pick-up weight after
    lifting proves there's none, and between them the last answer stands (a partial pick-up leaves the bit
    loaded).
    """
    close = (depths.gap < depths.near) & ~depths.run_in
    vote = np.zeros(len(close), dtype=np.int8)
    _vote(vote, depths.advancing & surface.pumping, 1)
    level = surface.differential_level
    _vote(vote, surface.pumping & (surface.differential > level), 1)
    _vote(vote, surface.pumping & (surface.differential < _NO_PRESSURE * level), -1)
    _vote_by_weight(vote, surface, depths, references, signals)
    freely = (surface.direction > 0) & (-surface.speed > _FREE_SPEED) & (depths.gap > _TOUCH)
    _vote(vote, freely, -1)
    _vote(vote, surface.slips, 0)
    _vote(vote, ~close, -1)
    return vote


def _vote_by_weight(
    vote: NDArray[np.int8],
    surface: Surface,
    depths: DepthView,
    references: tuple[Reference, Reference, Reference],
    signals: Signals,
) -> None:
    """Add what the hookload says against its references, turning and not turning."""
    rotating, slack, pick = references
    settled = _settled(surface.turning, signals.count(SMOOTHING))
    settled &= signals.weighed
    turned, still = surface.turning & settled, ~surface.turning & settled
    limit = weight_limit(rotating, signals)
    free = turning_reference(references, surface.axial)
    load = free - surface.smooth
    _vote(vote, turned & (load > limit), 1)
    _vote(vote, turned & (load < 0.5 * limit), -1)
    # A turning string drags so little that, once raised, it has left the bottom in the very row that shows
    # its weight; the average still holds the load of the rows before.
    raised = (surface.direction < 0) & (depths.gap > _TOUCH)
    _vote(vote, turned & raised & (free - surface.reading < limit), -1)
    limit = weight_limit(slack, signals)
    load = local_slack_off(surface, depths, slack, signals) - surface.smooth
    _vote(vote, still & (load > limit), 1)
    calm = np.abs(noise.rate(surface.smooth, signals.time, MOVING_WINDOW)) * MOVING_WINDOW < limit
    _vote(vote, still & calm & (surface.direction > 0) & (np.abs(load) < 0.5 * limit), -1)
    lifted = noise.hold(surface.direction) < 0
    high = surface.smooth > pick.weight - weight_limit(pick, signals)
    _vote(vote, still & lifted & high & (depths.gap > _TOUCH), -1)
    far = (surface.direction < 0) & (depths.gap > 0.5 * depths.near)
    _vote(vote, still & far & ~np.isfinite(pick.weight), -1)


def local_slack_off(surface: Surface, depths: DepthView, slack: Reference, signals: Signals) -> Floats:
    """Give the slack-off weight as last seen while the string was lowered off bottom in the same stand.

    Parameters
    ----------
    surface : Surface
        Hookload and motion.
    depths : DepthView
        The gap.
    slack : Reference
        The slack-off weight carried from steady readings, which serves where the stand shows no lowering.
    signals : Signals
        Noise and sampling.

    Returns
    -------
    ndarray, shape (n,)
        [N]; NaN where nothing tells it.

    Notes
    -----
    Drag can grow between readings: cuttings do it in an hour. A hookload that was as low while the bit was
    still coming down is no weight on bottom.
    """
    lowered = (surface.direction > 0) & (-surface.speed > _FREE_SPEED) & (depths.gap > _TOUCH)
    lowered &= ~surface.turning & ~surface.slips & signals.weighed
    spent = noise.travel_since(lowered, signals.bit) > 0.5 * depths.near
    window = noise.window_seconds(SMOOTHING, signals.interval)
    calm = np.abs(noise.rate(surface.smooth, signals.time, window)) * window < 2 * weight_limit(
        slack, signals
    )
    seen = np.flatnonzero(lowered & spent & calm)
    if not seen.size or not slack.known:
        return slack.weight
    rows = np.arange(len(slack.weight))
    last = np.searchsorted(seen, rows, side="right") - 1
    source = seen[np.maximum(last, 0)]
    stand = np.cumsum(np.diff(surface.slips.astype(np.int8), prepend=0) == 1)
    held = (last >= 0) & (stand[source] == stand)
    return slack.weight + np.where(held, (surface.smooth - slack.weight)[source], 0.0)


def turning_reference(references: tuple[Reference, Reference, Reference], axial: Floats) -> Floats:
    """Give the weight off bottom while turning, with the drag that motion along the hole leaves.

    Parameters
    ----------
    references : tuple of Reference
        Rotating, slack-off and pick-up weight.
    axial : ndarray, shape (n,)
        Axial share of the sliding direction, + down, - up [-].

    Returns
    -------
    ndarray, shape (n,)
        [N]
    """
    rotating, slack, pick = references
    down = np.nan_to_num(rotating.weight - slack.weight)
    up = np.nan_to_num(pick.weight - rotating.weight)
    return rotating.weight - np.where(axial > 0, down, up) * axial


def weight_limit(reference: Reference, signals: Signals) -> float:
    """Give the weight that counts: above six times the smoothed noise and the readings' scatter [N]."""
    level = noise.NOISE_FACTOR * signals.smooth_noise(SMOOTHING)
    return float(np.clip(max(level, 3.0 * reference.scatter), _LEAST_WEIGHT, max(_MOST_WEIGHT, level)))


def on_bottom_from(vote: NDArray[np.int8]) -> Bools:
    """Hold the last vote; before the first the bit is taken as off bottom."""
    return noise.hold(vote, initial=-1) > 0


def classify(view: RigView, unknown: Bools, unsure: tuple[Bools, Bools]) -> NDArray[np.int8]:
    """Activity of each row, in the order the definitions give.

    Parameters
    ----------
    view : RigView
        Its slips, turning, pumping, on_bottom and direction are used.
    unknown : ndarray of bool, shape (n,)
        Rows whose hookload or bit depth is missing.
    unsure : tuple of ndarray of bool, shape (n,)
        Rows where turning, and where pumping, could not be told.

    Returns
    -------
    ndarray of int8, shape (n,)
        `Activity` codes.
    """
    no_turn, no_pump = unsure
    # A guess of rotation is good enough for the mechanics, not for a name.
    turning, pumping = view.turning & ~no_turn, view.pumping
    down, up = view.direction > 0, view.direction < 0
    moving = down | up
    rules: list[tuple[Bools, Activity]] = [
        (unknown, Activity.UNKNOWN),
        (view.slips, Activity.CONNECTION),
        # Without rotary speed a slide can't be told from rotary drilling; dry trips hardly ever turn.
        (no_turn & (pumping | no_pump), Activity.UNKNOWN),
        (no_pump & view.on_bottom, Activity.UNKNOWN),
        (view.on_bottom & pumping & turning, Activity.DRILL_ROTATE),
        (view.on_bottom & pumping, Activity.DRILL_SLIDE),
        (turning & down, Activity.REAM_DOWN),
        (turning & up, Activity.REAM_UP),
        (turning, Activity.ROTATE_OFF_BOTTOM),
        (moving & down, Activity.TRIP_IN),
        (moving & up, Activity.TRIP_OUT),
        (no_pump, Activity.UNKNOWN),
        (pumping, Activity.CIRCULATE),
    ]
    return np.select(
        [mask for mask, _ in rules], [int(code) for _, code in rules], default=int(Activity.STATIC)
    ).astype(np.int8)


def refine_activity(rig: RigView, bit_load: Floats, log: TimeLog) -> RigView:
    """Second pass: settle on bottom or not, where drag hid it, by the replayed bit load.

    Parameters
    ----------
    rig : RigView
        First pass.
    bit_load : ndarray, shape (n,)
        Replayed load on the bit [N]; NaN where there's none.
    log : TimeLog
        The log the view was made from.

    Returns
    -------
    RigView
        With `on_bottom` and `activity` refined.

    Notes
    -----
    Only rows that the first pass could not settle by themselves are looked at: out of slips, not turning,
    and no vote of depth, weight or pressure. Elsewhere what was measured is the better witness. A string
    that hangs quite still with the pumps on has nothing on the bit, whatever friction leaves there in the
    replay: a loaded bit drills, and the hookload shows it.
    """
    limit = max(_REFINE_WEIGHT, rig.noise.get("hookload", 0.0))
    known = np.isfinite(bit_load)
    window = noise.samples_in(SMOOTHING, log.interval)
    loaded = noise.running_median(np.where(known, bit_load, 0.0), window) > limit
    unsettled = np.ones(len(log), dtype=bool) if rig.bottom_vote is None else rig.bottom_vote == 0
    open_rows = known & unsettled & ~rig.slips & ~rig.turning
    loaded &= ~(rig.pumping & _hangs_still(rig, log))
    on_bottom = np.where(open_rows, loaded, rig.on_bottom)
    refined = replace(rig, on_bottom=on_bottom)
    none = np.zeros(len(log), dtype=bool)
    again = (on_bottom != rig.on_bottom) & (rig.activity != Activity.UNKNOWN)
    activity = np.where(again, classify(refined, none, (none, none)), rig.activity)
    return replace(refined, activity=activity.astype(np.int8))


def _hangs_still(rig: RigView, log: TimeLog) -> Bools:
    """Rows in minutes in which neither block nor hookload moved by more than their noise."""
    count = noise.samples_in(_STILL_SECONDS, log.interval)
    spans = []
    for values, least, key in (
        (rig.hookload, _STILL_FORCE, "hookload"),
        (rig.block, _STILL_TRAVEL, "block_position"),
    ):
        smooth = noise.running_median(noise.fill(values), noise.samples_in(SMOOTHING, log.interval))
        span = maximum_filter1d(smooth, count) - minimum_filter1d(smooth, count)
        spans.append(span < max(least, 3.0 * rig.noise.get(key, 0.0)))
    return spans[0] & spans[1]


def _vote(votes: NDArray[np.int8], where: Bools, value: int) -> None:
    """Overrule earlier votes on some rows: the rules are called from the weakest witness to the strongest."""
    votes[where] = value


def _settled(state: Bools, count: int) -> Bools:
    """Rows around which a state doesn't change within the averaging window."""
    share = noise.running_mean(state.astype(np.float64), count)
    return (share < 1e-6) | (share > 1 - 1e-6)
