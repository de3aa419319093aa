"""The first page: the finding in words, what the data can't tell, the key numbers, margins."""

from __future__ import annotations

import math

from forensics.episodes.catalogue import Consequence, Episode, Kind, standing
from forensics.episodes.groups import is_routine
from forensics.episodes.headline import gravity
from forensics.episodes.verdicts import rejected
from forensics.estimate import Estimate
from forensics.report import derived
from forensics.report.elements import Column, Element, Finding, Notice, Number, Numbers, Section, Table, Text
from forensics.report.scene import Scene
from forensics.report.sections import verdicts
from forensics.report.words import Show, count, duration, fixed

REPLAY = "replay at the calibrated friction"
ONSETS = "at the contact force of that moment, near-vertical term added"
CRITERION = "sinusoidal criterion solved at the contact it causes"

# What the residual of a drag or torque episode is called, and its quantity.
RESIDUALS = {
    Kind.DRAG: ("hookload less model at the peak", "force"),
    Kind.TORQUE: ("torque less model at the peak", "moment"),
}


def describe(scene: Scene) -> Section:
    """Describe the first page."""
    head = scene.findings.headline
    elements: list[Element] = [Finding(head.sentence, head.confidence, head.details)]
    elements += rotation_notice(scene)
    elements += verdicts.notices(scene)
    unknown = cannot_tell(scene)
    if unknown:
        elements.append(Notice("What the data can't tell", unknown, tone="limit"))
    elements.append(
        Numbers("Key numbers: value, 90 % interval, and where each comes from", key_numbers(scene))
    )
    margin_table = describe_margins(scene)
    if margin_table:
        elements.append(margin_table)
    elements.append(Text(_tally(scene)))
    return Section("finding", "The finding", tuple(elements))


def cannot_tell(scene: Scene) -> tuple[str, ...]:
    """Everything that could not be told, each said once, the finding's own first."""
    found = scene.findings
    said = (*found.headline.can_not_tell, *found.rig.can_not_tell, *found.calibration.can_not_tell)
    return tuple(dict.fromkeys(said))


def number(name: str, estimate: Estimate, quantity: str, show: Show, noun: str = "reading") -> Number:
    """Make a row of a number table from an estimate; `noun` is what its samples are."""
    value, interval = show.estimate(estimate, quantity)
    origin = estimate.source
    if estimate.samples:
        origin = f"{origin}; {count(estimate.samples, noun)}"
    if not estimate.determined:
        origin = f"not determined by the data: {origin}"
    return Number(name, value, interval, origin, estimate.determined)


def key_numbers(scene: Scene) -> tuple[Number, ...]:
    """List the numbers a reader needs first."""
    found, show = scene.findings, scene.show
    rows: list[Number] = []
    worst = worst_episode(scene)
    if worst is not None:
        rows += episode_numbers(worst, show, prefix=f"{worst.id}: ")
    if found.loads.state.size:
        helical, any_state = (derived.seconds_in_state(found, k) for k in (2, 1))
        origin = f"{REPLAY}; rejected episodes left out" if rejected(found.episodes) else REPLAY
        rows += [
            Number("time with a helix somewhere in the string", duration(helical), "", origin),
            Number("time with any buckling, sinusoidal included", duration(any_state), "", origin),
        ]
    rows += friction_numbers(scene)
    return tuple(rows)


def friction_numbers(scene: Scene) -> list[Number]:
    """Friction factors and weights of the calibration."""
    found, show = scene.findings, scene.show
    cal = found.calibration
    rows = [
        number(f"friction factor, {section_name(s.kind)}", s.factor, "dimensionless", show)
        for s in cal.sections
    ]
    if cal.rotational is not None:
        rows.append(number("friction factor, rotational", cal.rotational, "dimensionless", show))
    rows.append(number("block weight", cal.block_weight, "force", show))
    if cal.hookload_bias.value:
        rows.append(number("constant bias of the hookload", cal.hookload_bias, "force", show))
    hookload = sum(1 for reading in cal.readings if reading.kind != "torque")
    rows.append(
        Number(
            "hookload left over after calibration (rms)", show.value(cal.residual_rms, "force"), "",
            f"{count(hookload, 'steady reading')} against the model",
        )
    )  # fmt: skip
    return rows


def section_name(kind: str) -> str:
    """Kind of hole in words."""
    return {"cased": "cased hole", "open": "open hole"}.get(kind, kind)


def worst_episode(scene: Scene) -> Episode | None:
    """Find the episode the key numbers speak of: the gravest, which the headline speaks of too."""
    return max(scene.mains, key=gravity, default=None)


def episode_numbers(episode: Episode, show: Show, prefix: str = "") -> list[Number]:
    """List the numbers of one episode; those it does not have are left out."""
    just = episode.critical_load
    pairs = [
        ("largest load ratio (compression over sinusoidal load)", episode.peak_load_ratio, "dimensionless"),
        ("compression at that place", episode.peak_compression, "force"),
        ("compression at which it would just buckle there", Estimate(just, just, just, CRITERION), "force"),
        ("bit load then", episode.bit_load, "force"),
        ("surface weight that did not reach the bit", episode.lost_weight, "force"),
        ("of it, lost to buckling rather than to ordinary drag", episode.lost_to_buckling, "force"),
    ]
    loaded = episode.kind in {Kind.BUCKLING, Kind.LOCKUP} or episode.peak_load_ratio.value > 0.0
    rows = [
        number(prefix + name, e, q, show, "draw")
        for name, e, q in (*pairs, *_ends(episode))
        if loaded and e is not None and math.isfinite(e.value)
    ]
    if episode.onsets:
        origin = f"{ONSETS}; {episode.onsets_beyond}" if episode.onsets_beyond else ONSETS
        rows.append(Number(f"{prefix}helical onsets as published", episode.onsets, "", origin))
    if episode.peak_residual is not None and episode.kind in RESIDUALS:
        name, quantity = RESIDUALS[episode.kind]
        rows.insert(0, number(prefix + name, episode.peak_residual, quantity, show, "draw"))
    if math.isfinite(episode.probability):
        origin = "share of the draws of friction, block weight and the like"
        name = f"{prefix}probability that its rule held"
        low, high = episode.probability_range
        interval = f"{fixed(low, 2)} to {fixed(high, 2)}" if math.isfinite(high - low) else ""
        rows.append(Number(name, fixed(episode.probability, 2), interval, origin))
    return rows


def _ends(episode: Episode) -> tuple[tuple[str, Estimate, str], ...]:
    """List the ends of the buckled interval."""
    if episode.ends is None:
        return ()
    names = ("upper end of the buckled interval at its largest", "lower end of it")
    return tuple((name, end, "length") for name, end in zip(names, episode.ends, strict=True))


def rotation_notice(scene: Scene) -> list[Element]:
    """Put up a red notice where the string was turned while buckled."""
    turned = [e for e in standing(scene.findings.episodes) if e.consequence is Consequence.ROTATED_BUCKLED]
    if not turned:
        return []
    items = tuple(rotation_sentence(scene, e) for e in turned[:5])
    if len(turned) > 5:
        items = (*items, f"{count(len(turned) - 5, 'more episode')} of the same kind in the episode table.")
    return [Notice("The string was turned while buckled", (*items, FATIGUE), tone="danger")]


FATIGUE = (
    "Each turn of a bent pipe is a cycle of bending fatigue. Whether joints need inspection or retirement "
    "is for the owner of the pipe to judge from its records; this report does not track cumulative damage."
)


def rotation_sentence(scene: Scene, episode: Episode) -> str:
    """How often and how hard the pipe was bent in one episode."""
    found, show = scene.findings, scene.show
    turns = derived.turns_while_buckled(found, episode.first, episode.last)
    often = (
        f"about {fixed(turns, 0)} turns" if math.isfinite(turns) else "turns not counted, the log has no rpm"
    )
    stress = [
        derived.helix_bending_stress(found, episode, force)
        for force in (
            episode.peak_compression.value,
            episode.peak_compression.low,
            episode.peak_compression.high,
        )
    ]
    text = f"{episode.id}: {often} between {show.stamp(episode.start)} and {show.stamp(episode.end)}"
    if math.isfinite(stress[0]):
        value, interval = show.estimate(Estimate(stress[0], stress[1], stress[2], "helix"), "stress")
        spread = f" ({interval})" if interval != "no interval" else ""
        text += f"; bending stress of a helix there {value}{spread}, from pitch and clearance, pipe body"
    return text + "."


def describe_margins(scene: Scene) -> Table | None:
    """Margins against limits and ratings, where any are given."""
    show = scene.show
    rows = []
    for m in derived.margins(scene.findings):
        if not math.isfinite(m.largest):
            rows.append(
                (m.name, show.value(m.limit, m.quantity), "not in the log", "", "not judged", m.origin)
            )
            continue
        left = (
            show.value(m.left, m.quantity) if m.left >= 0 else f"passed by {show.value(-m.left, m.quantity)}"
        )
        when = show.time(float(scene.findings.log.time[m.row]))
        used = f"{left} ({fixed(100.0 * m.largest / m.limit, 0)} % used)"
        rows.append(
            (m.name, show.value(m.limit, m.quantity), show.value(m.largest, m.quantity), when, used, m.origin)
        )
    if not rows:
        return None
    titles = ("quantity", "limit", "largest in the run", f"when ({show.timezone})", "margin", "limit from")
    aligns = ("text", "number", "number", "text", "number", "text")
    grade = scene.findings.case.limits.pipe_class
    note = "Single samples count. A limit on one quantity says nothing of pull, torque and pressure together."
    note += _crown(scene)
    if grade:
        note += (
            f" The case states pipe class {grade}: ratings are used here as the string table gives them; the "
            "tables of what episodes did to the string take the wear into account."
        )
    columns = tuple(Column(t, a) for t, a in zip(titles, aligns, strict=True))
    return Table("Margins against the limits given", columns, tuple(rows), note)


def _crown(scene: Scene) -> str:
    """Say what the crown carried at the largest hookload; nothing where lines and sheaves are not given."""
    load, rig = derived.crown_load(scene.findings), scene.findings.case.rig
    if not math.isfinite(load):
        return ""
    return (
        f" Hoisting the largest hookload puts {scene.show.value(load, 'force')} on the crown: hook and "
        f"block, fast line and dead line, {rig.lines} lines, {fixed(rig.sheave_efficiency or 1.0, 3)} a "
        "sheave."
    )


def _tally(scene: Scene) -> str:
    """How many episodes of what kind, in a sentence."""
    episodes = standing(scene.findings.episodes)
    out = len(rejected(scene.findings.episodes))
    if not episodes:
        text = "No episode stands." if out else "No episode passed the rules."
    else:
        parts = [
            count(sum(1 for e in episodes if e.kind is kind), f"{kind} episode")
            for kind in Kind
            if any(e.kind is kind for e in episodes)
        ]
        routine = sum(1 for e in episodes if is_routine(e))
        text = f"In all: {', '.join(parts)}."
        if routine:
            text += (
                f" {count(routine, 'of the buckling episodes is', 'of the buckling episodes are')} harmless "
                "sinusoidal running: counted, kept out of the finding."
            )
    if out:
        text += f" Not counted: {count(out, 'episode')} that the engineer rejected."
    dropped = scene.findings.dropped
    if dropped:
        reasons = "; ".join(f"{reason}: {n}" for reason, n in sorted(dropped.items()))
        text += f" Set aside by the episode rules: {reasons}."
    return text
