"""How far one input would have to be off for an episode to be another: by replays of its stretch alone."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from concurrent.futures import ThreadPoolExecutor
from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray

from forensics.episodes import rules
from forensics.episodes.catalogue import Episode, Headline, Kind, State, standing
from forensics.episodes.chances import CERTAIN, MOST, Z90, lasting
from forensics.episodes.find import flag_rows, span_rule
from forensics.episodes.groups import is_routine
from forensics.episodes.headline import gravity
from forensics.episodes.material import Material
from forensics.estimate import Estimate
from forensics.mechanics.departed import Departure, departed
from forensics.mechanics.offbottom import OffBottomModel
from forensics.replay.doubt import HOLE_SIGMA
from forensics.replay.model import factors
from forensics.replay.room import Excerpt, excerpt, fresh, go
from forensics.replay.run import Replay
from forensics.units import show

Floats = NDArray[np.float64]

#: Episodes asked about at most: the gravest, and those most in doubt; rows replayed of each, at most about.
GRAVEST, DOUBTFUL, MOST_ROWS = 3, 2, 240

#: Halvings of the range searched: a friction is then told to about 0.01.
HALVINGS = 5

#: Ranges searched: friction factors, block weight about its value [N], open hole over the table's diameter.
FRICTION, BLOCK, HOLE = (0.05, 0.60), 50.0e3, (0.95, 1.10)

FINDINGS = {"helix": "the helix", "sinusoid": "sinusoidal buckling", "lockup": "the lockup"}
PRESSED = (Kind.BUCKLING, Kind.LOCKUP)


@dataclass(frozen=True)
class Flip:
    """Between which values of one input an episode stays what it was found to be, all others as found.

    Parameters
    ----------
    episode : str
        Its id.
    finding : str
        "helix", "sinusoid" or "lockup".
    source : str
        "open-hole friction", "cased-hole friction", "block weight" or "hole diameter over the table's".
    quantity : str
        Of the input: "dimensionless" or "force".
    found : Estimate
        The input as found, with its interval.
    searched : tuple of float
        Lowest and highest value tried.
    holds : tuple of float
        Lowest and highest value at which the finding holds; an end of the range searched where it does
        not flip there.
    """

    episode: str
    finding: str
    source: str
    quantity: str
    found: Estimate
    searched: tuple[float, float]
    holds: tuple[float, float]

    @property
    def turns(self) -> tuple[bool, bool]:
        """Whether the finding flips below and above."""
        return self.holds[0] > self.searched[0], self.holds[1] < self.searched[1]

    @property
    def clear(self) -> float:
        """Distance to the nearer flip in half-widths of the input's interval; infinite without one."""
        value = self.found.value
        below, above = max(value - self.found.low, 1e-12), max(self.found.high - value, 1e-12)
        gaps = (value - self.holds[0]) / below, (self.holds[1] - value) / above
        near = [gap for gap, turn in zip(gaps, self.turns, strict=True) if turn]
        return min(near, default=float("inf"))


@dataclass(frozen=True)
class _Input:
    """An input to vary: its value and range, and the well and block weight at another value of it."""

    source: str
    quantity: str
    found: Estimate
    searched: tuple[float, float]
    at: Callable[[float], tuple[OffBottomModel, Floats, float]]


def find_flips(run: Replay, material: Material, episodes: Sequence[Episode]) -> tuple[Flip, ...]:
    """Search for the values of single inputs at which the gravest episodes would be something else.

    Parameters
    ----------
    run : Replay
        Made ready.
    material : Material
    episodes : sequence of Episode
        All of the run's.

    Returns
    -------
    tuple of Flip
        The gravest episode's first; none for one that the thinned replay of its stretch does not show.
    """
    inputs = _inputs(run)
    cases = [_Case(run, material, episode) for episode in _asked(episodes)]
    tasks = [(case, given) for case in cases for given in inputs]
    with ThreadPoolExecutor() as pool:
        found = list(pool.map(lambda task: _search(*task), tasks))
    return tuple(flip for flip in found if flip is not None)


def _asked(episodes: Sequence[Episode]) -> list[Episode]:
    """Choose the gravest episodes, and those whose rule is most in doubt."""
    loaded = [e for e in standing(episodes) if e.kind in PRESSED and not is_routine(e)]
    ranked = sorted(loaded, key=gravity, reverse=True)
    rest = [e for e in ranked[GRAVEST:] if e.probability < CERTAIN]
    return ranked[:GRAVEST] + sorted(rest, key=lambda e: abs(e.probability - 0.5))[:DOUBTFUL]


class _Case:
    """One episode's stretch, to be replayed at other inputs."""

    def __init__(self, run: Replay, material: Material, episode: Episode) -> None:
        self.run, self.material, self.episode = run, material, episode
        flags, self.signs = flag_rows(material)
        self.rows = np.flatnonzero(flags[episode.kind][episode.first : episode.last + 1]) + episode.first
        self.least = span_rule(material, episode.kind).least
        self.part = self._part()
        loads = material.loads
        helical = float((loads.state[self.rows] == 2).sum()) * material.log.interval
        self.finding = "lockup" if episode.kind is Kind.LOCKUP else "sinusoid"
        if episode.kind is Kind.BUCKLING and episode.state is State.HELICAL:
            self.finding, self.least = "helix", min(self.least, 0.5 * helical)

    def _part(self) -> Excerpt:
        """Rows of the stretch, as many as a search can pay for."""
        wanted = np.zeros(len(self.run.log), dtype=bool)
        wanted[self.episode.first : self.episode.last + 1] = True
        samples, time = self.run.prepared.samples, self.run.log.time
        dense = excerpt(samples, time, wanted)
        if len(dense.rows) <= MOST_ROWS:
            return dense
        seconds = float(dense.covered.sum()) * self.run.log.interval / MOST_ROWS
        return excerpt(samples, time, wanted, min(seconds, max(self.least / 3.0, 8.0)))

    def holds(self, model: OffBottomModel, mu: Floats, block: float) -> bool:
        """Whether the finding holds with another model, friction or block weight."""
        part = self.part
        samples = part.samples._replace(top=part.samples.top - block)
        found = go(model.setting(*mu), samples, self.run.rules, fresh(model))
        column = np.maximum(np.searchsorted(part.rows, self.rows, side="right") - 1, 0)
        if self.finding == "lockup":
            before = np.minimum(self.signs.since[self.rows], self.rows)
            since = np.maximum(np.searchsorted(part.rows, before, side="right") - 1, 0)
            gained = found.bit_load[column] - found.bit_load[since]
            little = gained < rules.LOCKUP_PART * self.signs.drop[self.rows]
            on_bottom = self.material.rig.on_bottom[self.rows]
            return bool(np.mean(np.where(on_bottom, little, self.signs.held[self.rows])) >= MOST)
        level = found.state[column] / 2.0 if self.finding == "helix" else found.ratio[column]
        seconds = np.full(len(column), self.material.log.interval)
        least = min(self.least, float(seconds.sum()))
        return bool(lasting(level[None, :], seconds, least)[0] >= 1.0)


def _search(case: _Case, given: _Input) -> Flip | None:
    """Halve the way to each end of the range where the finding does not hold there."""

    def holds(value: float) -> bool:
        return case.holds(*given.at(value))

    value = given.found.value
    if not (given.searched[0] < value < given.searched[1] and holds(value)):
        return None
    ends = []
    for end in given.searched:
        inside, outside = value, end
        if holds(end):
            ends.append(end)
            continue
        for _ in range(HALVINGS):
            middle = 0.5 * (inside + outside)
            inside, outside = (middle, outside) if holds(middle) else (inside, middle)
        ends.append(0.5 * (inside + outside))
    told = given.source, given.quantity, given.found, given.searched
    return Flip(case.episode.id, case.finding, *told, (ends[0], ends[1]))


def _inputs(run: Replay) -> list[_Input]:
    """List the inputs worth varying in this run."""
    calibration, model = run.calibration, run.model
    mu = np.array(factors(calibration))
    reached = float(np.max(run.prepared.samples.bit))
    found = []
    for kind, rows in (("open", slice(1, None)), ("cased", slice(0, 1))):
        same = [s for s in calibration.sections if s.kind == kind and s.bottom > s.top and s.top < reached]
        if same:
            found.append(_friction(kind, _mean(same, reached), (model, mu, rows)))
    block = calibration.block_weight
    span = (block.value - BLOCK, block.value + BLOCK)
    found.append(
        _Input("block weight", "force", block, span, lambda value: (model, mu, value - block.value))
    )
    if (model.hole.open_hole & (np.arange(len(model.hole.open_hole)) * model.hole.step < reached)).any():
        found.append(_hole(run, mu))
    return found


def _friction(kind: str, found: Estimate, base: tuple[OffBottomModel, Floats, slice]) -> _Input:
    """Vary the friction of a kind of hole, its sections all by the same factor."""
    model, mu, rows = base

    def at(value: float) -> tuple[OffBottomModel, Floats, float]:
        other = mu.copy()
        other[rows] *= value / found.value
        return model, other, 0.0

    return _Input(f"{kind}-hole friction", "dimensionless", found, FRICTION, at)


def _hole(run: Replay, mu: Floats) -> _Input:
    """Vary the diameter of the open hole."""
    model, path = run.model, run.well.likely.mean
    found = Estimate(1.0, 1.0 - Z90 * HOLE_SIGMA, 1.0 + Z90 * HOLE_SIGMA, "common practice")

    def at(value: float) -> tuple[OffBottomModel, Floats, float]:
        return departed(model, Departure(path, opened=value)), mu, 0.0

    return _Input("hole diameter over the table's", "dimensionless", found, HOLE, at)


def _mean(sections: Sequence, reached: float) -> Estimate:
    """Mean factor of sections by the length that was reached, with its interval."""
    lengths = np.array([max(min(s.bottom, reached) - s.top, 1e-6) for s in sections])
    share = lengths / lengths.sum()
    values = np.array([[s.factor.value, s.factor.low, s.factor.high] for s in sections])
    return Estimate(*(share @ values).tolist(), sections[0].factor.source)


def flip_sentence(flip: Flip, system: str) -> str:
    """Say between which values a finding holds.

    Parameters
    ----------
    flip : Flip
    system : str
        "metric" or "field".
    """
    sides = [
        f"{word} {shown(value, flip.quantity, system)}"
        for word, value, turn in zip(("above", "below"), flip.holds, flip.turns, strict=True)
        if turn
    ]
    if not sides:
        low, high = (shown(value, flip.quantity, system) for value in flip.searched)
        return f"{FINDINGS[flip.finding]} holds at any {flip.source} from {low} to {high}"
    value, low, high = (shown(v, flip.quantity, system) for v in (flip.found.value, *interval(flip)))
    between = f"{value}, {low} to {high}" if low != high else value
    return f"{FINDINGS[flip.finding]} holds for {flip.source} {' and '.join(sides)} (found {between})"


def interval(flip: Flip) -> tuple[float, float]:
    """Give the 90 % interval of the input."""
    return flip.found.low, flip.found.high


def shown(value: float, quantity: str, system: str) -> str:
    """Write a value of an input with its unit."""
    return f"{value:.2f}" if quantity == "dimensionless" else show(value, quantity, system)


def with_flip(headline: Headline, flips: Sequence[Flip], system: str) -> Headline:
    """Add to the headline's confidence what would turn its episode into another.

    Parameters
    ----------
    headline : Headline
    flips : sequence of Flip
        The gravest episode's first.
    system : str
        "metric" or "field".
    """
    if not flips:
        return headline
    own = [flip for flip in flips if flip.episode == flips[0].episode]
    nearest = min(own, key=lambda flip: flip.clear)
    said = flip_sentence(nearest, system)
    if not any(nearest.turns):
        sources = [flip.source for flip in own]
        said = f"nothing tried would turn it ({', '.join(sources)})"
    return replace(headline, confidence=f"{headline.confidence}; {said}")
