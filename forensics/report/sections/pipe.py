"""What the episodes did to the pipe: stress and use of strength, and turns while buckled ranked."""

from __future__ import annotations

import math
from typing import TYPE_CHECKING

from forensics.episodes.catalogue import Episode
from forensics.mechanics.toll import fatigue_grade
from forensics.report import derived
from forensics.report.elements import Column, Element, Notice, Section, Table, Text
from forensics.report.scene import Scene
from forensics.report.words import fixed

if TYPE_CHECKING:
    from forensics.episodes.pipe import PartToll, PipeToll

NOT_GIVEN = "not given"
RANKED = 20  # episodes shown in the ranking
STATES = ("", "sinusoidal", "helical")

HOW = (
    "Each main episode above that pressed the string has a table of what its loads did to it at the peak; "
    "summary.json has the same for what was buckled in every other one. "
    "Combined stress is the greatest von Mises stress of the body, of axial force, bending (hole, and "
    "sinusoid or helix, added), torsion and pressure, held against the string table's yield. Use in tension "
    "and torque follows API RP 7G, with ratings of the string table where it has them. A part that is "
    "buckled stands apart from the rest of its component. Where the string turned while it was buckled, "
    "each turn bent it to and fro once; the episodes are ranked by that here."
)

CAUTIONS = (
    (
        "A ranking, no remaining life: fatigue of drill pipe scatters by a factor of ten between like "
        "pieces, and corrosion and earlier service, which no log shows, count for more than a single run."
    ),
    (
        "Every turn is counted at the buckled place that the greatest load under rotation bent most. Pipe "
        "that whirls with its bend is bent less often than it turns."
    ),
    (
        "Pipe bodies only: connections, upsets, slip marks and tools are not judged, and may be weaker. "
        "Manufacturers' ratings and inspection hold where they differ."
    ),
)


def describe(scene: Scene) -> Section:
    """Rank the episodes in which the string turned while buckled, and say what to heed."""
    tolls = scene.findings.tolls
    turned = [(e, toll) for e in scene.findings.episodes if (toll := tolls.get(e.id)) and toll.turned]
    elements: list[Element] = [Text(HOW), ranking_table(turned), *bend_sentence(scene)]
    if turned:
        elements.append(Notice("Cautions that apply to stress and fatigue", CAUTIONS))
    else:
        elements.append(Notice("Cautions that apply to stress", CAUTIONS[2:]))
    return Section("pipe", "What it did to the pipe", tuple(elements))


def bend_sentence(scene: Scene) -> list[Text]:
    """Hold the bend that turning drill pipe stands against the hole's, where the two come nearest."""
    found, show = derived.turning_bend(scene.findings), scene.show
    if found is None:
        return []
    hole, stands = (show.value(bend, "angle_per_length", 1) for bend in (found.hole, found.stands))
    share = f", {fixed(100.0 * found.hole / found.stands, 0)} % of it" if found.stands else ""
    bit, md = (show.value(depth, "length", 0) for depth in (found.bit, found.md))
    return [
        Text(
            f"Turned off bottom with the bit at {bit}, {found.part.name} carries "
            f"{show.value(found.tension, 'force')} at {md} and stands a bend of {stands} there for very many "
            f"turns; the hole bends by {hole}{share}. Nowhere do the two come nearer. Origin: Lubinski 1961 "
            f"as in API RP 7G, {fatigue_grade(found.part)} pipe, not corroded; string weight without "
            "friction; hole as the loads are reckoned in."
        )
    ]


def ranking_table(turned: list[tuple[Episode, PipeToll]]) -> Table:
    """Rank the episodes by what turning while buckled cost, the greatest first."""
    columns = (
        Column("rank", "number"),
        Column("episode", "code"),
        Column("turns while buckled", "number"),
        Column("exposure, of the greatest", "number"),
    )
    last = len(turned) + 1
    ordered = sorted(turned, key=lambda pair: ((pair[1].turned.rank or last), pair[0].start))  # type: ignore[union-attr]
    rows = []
    for episode, toll in ordered[:RANKED]:
        found = toll.turned
        if found is None:
            continue
        turns = fixed(found.revolutions, 0) if math.isfinite(found.revolutions) else "no rpm in the log"
        share = fixed(found.share, 3) if found.rank else "not ranked"
        rows.append((str(found.rank) if found.rank else "", episode.id, turns, share))
    note = (
        "Turns: rotary speed summed over the samples with any of the string buckled. Exposure: turns over "
        "turns to failure at the bending stress, by DNV-RP-C203 curve B1 in air (no lower limit of stress), "
        "the stress raised for tension by API RP 7G's permissible bending."
    )
    if len(ordered) > RANKED:
        note += f" {len(ordered) - RANKED} more, ranked lower, are in summary.json."
    empty = "The string did not turn while buckled in any episode."
    return Table("Turned while buckled, ranked", columns, tuple(rows), note if rows else "", empty)


def stress_table(scene: Scene, episode: Episode) -> Table | None:
    """Tabulate what the loads at an episode's peak did to each component; None where nothing was weighed."""
    toll = scene.findings.tolls.get(episode.id)
    if toll is None or not toll.parts:
        return None
    show, case = scene.show, scene.findings.case
    stress, length, force, moment = (show.unit(q) for q in ("stress", "length", "force", "moment"))
    columns = (
        Column("component, from the bit up"),
        Column(f"at [{length}]", "number"),
        Column(f"bending [{stress}]", "number"),
        Column(f"combined [{stress}]", "number"),
        Column("of yield", "number"),
        Column("of tension and torque rating", "number"),
        Column(f"tension left [{force}]", "number"),
        Column(f"torque left [{moment}]", "number"),
    )
    rows = tuple(_row(scene, part) for part in toll.parts)
    grade = case.limits.pipe_class
    wear = f"{grade} ([limits] of the case), pipe only" if grade else "new (none given in [limits])"
    note = (
        f"Torque: {toll.torque_from}. Pressure: {toll.pressure_from}. Wear class: {wear}. Origin: load "
        f"profile at the peak and string table; {NOT_GIVEN}: it has no yield or rating there."
    )
    caption = f"{episode.id}: what the loads at the peak did to the string"
    return Table(caption, columns, rows, note, dense=True)


def _row(scene: Scene, part: PartToll) -> tuple[str, ...]:
    show = scene.show
    name = part.component.name

    def plain(value: float, quantity: str, places: int) -> str:
        return fixed(float(show.scaled(value, quantity)), places) if math.isfinite(value) else NOT_GIVEN

    def share(value: float) -> str:
        return f"{fixed(100.0 * value, 0)} %" if math.isfinite(value) else NOT_GIVEN

    if part.buckled:
        name += f", buckled ({STATES[part.state]} there)"
    fine = 0 if show.system == "metric" else 1
    return (
        name,
        plain(part.md, "length", 0),
        plain(part.bending, "stress", fine),
        plain(part.stress, "stress", fine),
        share(part.use),
        share(part.rated_use),
        plain(part.tension_margin, "force", 0),
        plain(part.torque_margin, "moment", 1),
    )
