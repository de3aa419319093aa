"""Ask the bit's own witnesses, hold them against the hookload, and let the replay lean on them."""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray

from forensics.loads import Basis, BitWitness, Response, WitnessCheck
from forensics.replay.local import SLIDING
from forensics.replay.model import factors
from forensics.replay.room import excerpt, fresh, go
from forensics.replay.run import Replay
from forensics.replay.windows import edges_of, rotary_windows, smoothed, window_rows
from forensics.replay.witness.agree import check_rows
from forensics.replay.witness.by_rate import Footage, hear_rate
from forensics.replay.witness.combine import UNSEEN, combine
from forensics.replay.witness.downhole import hear_gauge
from forensics.replay.witness.friction import LEAST_DOUBT, LEAST_DRAG, Telling, friction_ratio, own_sigma
from forensics.replay.witness.pressure import Lesson, hear_pressure
from forensics.replay.witness.respond import Heard
from forensics.rig.view import Activity

Floats = NDArray[np.float64]
Bools = NDArray[np.bool_]

BOUND_SIGMAS = 2.0  # above the witness's load by more than this the remembered load is let go
BRIDGED_SECONDS = 60.0  # a slide goes on across shorter breaks
SLIDE_SECONDS = 60.0  # a shorter one is no slide
UNREAD_DOUBT = 0.25  # of the drag, one sigma, where no weight was read and friction is assumed
Z90 = 1.6448536269514722
SLOWER = (0.4, 1.6)  # rate while sliding over rate while turning at the same load
LEAST_FOOTAGE = 3.0  # m of slid footage that tell it
PRESSURES = ("differential_pressure", "standpipe_pressure")
WHOLE = 0.6  # of the drag of sliding: with less, part of the string is not going down
MOSTLY = 0.5  # of a slide on which a witness must speak for the slide to count
TRUSTED = 0.5  # of the paper footage: a larger change of the string's length is too roughly known
DEAF = 0.25  # of the footage made: a witness whose load explains less does not hear the slides


@dataclass(frozen=True)
class Own:
    """Bit load by the hookload alone in the slides, at the readings' friction: (n,) [N], and its `Basis`."""

    load: Floats
    sigma: Floats
    basis: NDArray[np.int8]
    drag: Floats


def heed(run: Replay, turning: Floats, drag: Floats) -> Replay:
    """Let the bit's own witnesses bound the bit load, move friction, and put the rate law right.

    Parameters
    ----------
    run : Replay
        Made ready on the hookload alone.
    turning : ndarray, shape (n,)
        Bit load while turning [N].
    drag : ndarray, shape (n,)
        Of sliding down with the bit free, by the model [N].

    Returns
    -------
    Replay
        With `witness`; the same run where nothing slid.
    """
    slides = _slides(run)
    asked = _ask(run, turning)
    if not slides:
        return replace(run, witness=_silent(run, tuple(_response(a) for a in asked)))
    sliding = _rows(slides, len(run.log))
    own = _own(run, sliding)
    give = float(np.sum(np.diff(run.model.pipe.x) / run.model.pipe.ea))
    footage = Footage(run.prepared.samples.top, own.load, give)
    asked = [_deaf(run, a, slides, footage) if isinstance(a, Heard) else a for a in asked]
    asked.append(hear_rate(run.log, run.rig, run.rate_law, slides, footage))
    heard = [a for a in asked if isinstance(a, Heard) and a.response.heard]
    load, sigma, basis = combine(_apart(heard), len(run.log))
    alike = smoothed(own.load, window_rows(run.log.interval))
    telling = Telling(
        run.log.time, alike, own.sigma, load, sigma, own.drag,
        sliding & (own.basis == Basis.HOOKLOAD) & np.isfinite(load)
        & (own.drag > np.maximum(LEAST_DRAG, WHOLE * drag)),
    )  # fmt: skip
    moved, beyond = friction_ratio(telling, sliding)
    witness = BitWitness(
        load, sigma, basis,
        np.where(sliding, own.load, np.nan), np.where(sliding, own.sigma, np.nan),
        moved, beyond, tuple(_response(a) for a in asked),
    )  # fmt: skip
    checks = (_check(run, witness, footage, first, stop - 1) for first, stop in slides)
    witness = replace(witness, slides=tuple(c for c in checks if c is not None))
    return _lean(run, witness, own)


def _ask(run: Replay, turning: Floats) -> list[Heard | Response]:
    """Ask every channel near the bit; the standpipe only where the motor's own differential is silent."""
    windows = rotary_windows(run.log, run.rig)
    lesson = Lesson(run.log, run.rig, windows, turning)
    asked = [hear_gauge(lesson, channel) for channel in ("downhole_wob", "downhole_torque")]
    return [*asked, *(hear_pressure(lesson, channel) for channel in PRESSURES)]


def _apart(heard: list[Heard]) -> list[Heard]:
    """Silence the drilling rate wherever a gauge or a pressure speaks: it tells a mean, not a row."""
    told = np.zeros(len(heard[0].load), dtype=bool) if heard else np.zeros(0, dtype=bool)
    for one in heard:
        if one.response.basis is not Basis.RATE_LAW:
            told |= np.isfinite(one.load)
    rate = Basis.RATE_LAW
    return [replace(h, load=np.where(told, np.nan, h.load)) if h.response.basis is rate else h for h in heard]


def _deaf(run: Replay, one: Heard, slides: list[tuple[int, int]], footage: Footage) -> Heard | Response:
    """Set a witness aside that shows no load in slides although they made hole."""
    law, depth, step = run.rate_law, run.log.values["bit_depth"], run.prepared.samples.step
    made = drilled = 0.0
    for first, stop in slides:
        load = one.load[first:stop]
        known = np.isfinite(load)
        if known.mean() > MOSTLY:
            made += float(depth[stop - 1] - depth[first]) - footage.shortening(first, stop - 1)
            drilled += float(np.sum(law.rate * load[known] ** law.exponent * step[first:stop][known]))
    if not law.determined or made < LEAST_FOOTAGE or drilled > DEAF * made:
        return one
    why = f"in slides it shows a load good for {drilled:.1f} m of hole where {made:.1f} m were made"
    return replace(one.response, heard=False, why=why)


def _response(asked: Heard | Response) -> Response:
    return asked.response if isinstance(asked, Heard) else asked


def _silent(run: Replay, responses: tuple[Response, ...]) -> BitWitness:
    n = len(run.log)
    silent, basis = np.full(n, np.nan), np.zeros(n, dtype=np.int8)
    return BitWitness(silent, silent, basis, silent, silent, np.ones(n), np.zeros(n), responses)


def _slides(run: Replay) -> list[tuple[int, int]]:
    """First and one-past-last row of each slide, short breaks bridged."""
    time = run.log.time
    edges = edges_of(run.rig.activity == Activity.DRILL_SLIDE)
    if len(edges) == 0:
        return []
    apart = time[edges[1:, 0]] - time[edges[:-1, 1] - 1] > BRIDGED_SECONDS
    starts = edges[np.concatenate([[True], apart]), 0]
    stops = edges[np.concatenate([apart, [True]]), 1]
    long = time[stops - 1] - time[starts] >= SLIDE_SECONDS
    return list(zip(starts[long].tolist(), stops[long].tolist(), strict=True))


def _rows(slides: list[tuple[int, int]], count: int) -> Bools:
    marked = np.zeros(count, dtype=bool)
    for first, stop in slides:
        marked[first:stop] = True
    return marked


def _own(run: Replay, sliding: Bools) -> Own:
    """Replay the slides and what leads up to them, at the readings' friction and without any witness."""
    load, basis = np.zeros(len(run.log)), np.full(len(run.log), -1, dtype=np.int8)
    part = excerpt(run.prepared.samples, run.log.time, sliding)
    if part.covered.any():
        at = run.model.setting(*factors(run.calibration))
        found = go(at, part.samples, run.rules, fresh(run.model))
        load[part.covered], basis[part.covered] = part.spread(found.bit_load), part.spread(found.basis)
    drag = run.rig.wob_surface - load
    drag = np.where(np.isfinite(drag), drag, 0.0)
    sigma = own_sigma(drag, _friction_doubt(run))
    return Own(load, np.where(basis == Basis.HOOKLOAD, sigma, np.hypot(sigma, UNSEEN)), basis, drag)


def _friction_doubt(run: Replay) -> float:
    """One sigma of friction in a slide, as a part of it: small where weights were read on the way."""
    calibration = run.calibration
    if any(reading.kind in SLIDING for reading in calibration.readings):
        return LEAST_DOUBT
    parts = [
        (s.factor.high - s.factor.low) / (2.0 * Z90 * s.factor.value)
        for s in calibration.sections
        if s.factor.determined and s.factor.value > 0.0
    ]
    return float(np.max(parts)) if parts else UNREAD_DOUBT


def _check(
    run: Replay, witness: BitWitness, footage: Footage, first: int, last: int
) -> WitnessCheck | None:
    """Hold the two tellings against one another over a slide, and paper footage against what it can be."""
    found = check_rows(witness, first, last, run.log.time)
    if found is None:
        return None
    part, law = slice(first, last + 1), run.rate_law
    step = run.prepared.samples.step[part]
    load = np.nan_to_num(witness.load[part])
    depth = run.log.values["bit_depth"]
    drilled = float(np.sum(law.rate * load**law.exponent * step)) if law.determined else float("nan")
    return replace(
        found,
        paper=float(depth[last] - depth[first]),
        shortening=footage.shortening(first, last),
        drilled=drilled,
    )


def _lean(run: Replay, witness: BitWitness, own: Own) -> Replay:
    """Move friction, bound the remembered bit load, and take the rate law to sliding."""
    samples = run.prepared.samples
    bound = np.where(np.isfinite(witness.load), witness.load + BOUND_SIGMAS * witness.sigma, np.inf)
    samples = samples._replace(witness=bound, down=samples.down * witness.moved)
    rules = run.rules._replace(rate=run.rules.rate * _slide_factor(run, witness, own))
    return replace(run, prepared=replace(run.prepared, samples=samples), rules=rules, witness=witness)


def _slide_factor(run: Replay, witness: BitWitness, own: Own) -> float:
    """Rate while sliding over the rate while turning at the same load, from the slides' own footage."""
    made, expected = 0.0, 0.0
    law, step = run.rate_law, run.prepared.samples.step
    for check in witness.slides:
        part = slice(check.first, check.last + 1)
        told = (witness.basis[part] != Basis.RATE_LAW) & np.isfinite(witness.load[part])
        mine = own.basis[part] == Basis.HOOKLOAD
        if not law.determined or (told | mine).mean() < MOSTLY:
            continue
        load = np.where(told, witness.load[part], np.maximum(own.load[part], 0.0))
        if abs(check.shortening) > TRUSTED * check.paper:
            continue
        made += check.paper - check.shortening
        expected += float(np.sum(law.rate * load**law.exponent * step[part]))
    if made < LEAST_FOOTAGE or expected <= 0.0:
        return 1.0
    return float(np.clip(made / expected, *SLOWER))
