"""What would turn the findings: how far one input would have to be off, all others as found."""

from __future__ import annotations

import math

from forensics.episodes.flips import Flip, flip_sentence, shown
from forensics.report.elements import Column, Element, Picture, Section, Table, Text
from forensics.report.figures.flips import flip_chart
from forensics.report.scene import Scene
from forensics.report.words import count, fixed

LEAD = (
    "For the gravest episodes, and those most in doubt, one input at a time was moved away from its value "
    "while all others stayed, and the stretch replayed until the finding no longer held. An input that would "
    "have to be off by many times its interval can't be what made the finding; one that turns it "
    "within its interval leaves it open."
)


def describe(scene: Scene) -> Section:
    """Describe what would turn the findings."""
    flips = scene.findings.flips
    if not flips:
        said = "No episode of buckling or lockup was there to be turned by another input."
        return Section("flips", "What would turn the findings", (Text(said),))
    elements: list[Element] = [Text(LEAD), flip_table(scene), _picture(scene)]
    return Section("flips", "What would turn the findings", tuple(elements))


def flip_table(scene: Scene) -> Table:
    """Tabulate by episode and input where the finding holds."""
    system = scene.show.system
    columns = (
        Column("episode", "code"),
        Column("input"),
        Column("found", "number"),
        Column("the finding holds"),
        Column("nearest turn, in half-widths of the interval", "number"),
    )
    rows = tuple(_row(flip, system) for flip in scene.findings.flips)
    note = (
        "Found: value and 90 % interval. Searched: friction 0.05 to 0.60, block weight within 50 kN of its "
        "value, open hole from 5 % under to 10 % over the table's diameter; a turn is told to a "
        "thirty-second of the way. An input is moved alone: the run's own weight readings do not follow."
    )
    return Table("How far inputs would have to be off", columns, rows, note, "None.", dense=True)


def _row(flip: Flip, system: str) -> tuple[str, ...]:
    found = flip.found
    value, low, high = (shown(v, flip.quantity, system) for v in (found.value, found.low, found.high))
    sentence = flip_sentence(flip, system)
    told = sentence.split(" (found")[0]
    near = fixed(flip.clear, 1) if math.isfinite(flip.clear) else "none found"
    return flip.episode, flip.source, f"{value} ({low} to {high})", told[0].upper() + told[1:], near


def _picture(scene: Scene) -> Picture:
    flips = scene.findings.flips
    caption = (
        "Where each finding holds, input by input: the whole bar is what was searched, its dark part where "
        "the finding holds (dark red: helix; yellow: sinusoidal; grey: lockup). The line is the input as "
        "found, the band its 90 % interval: a band wholly inside the dark part means that this input alone "
        "can't turn the finding."
    )
    turned = sum(math.isfinite(flip.clear) for flip in flips)
    pairs = count(len(flips), "pair of episode and input", "pairs of episode and input")
    alt = f"Bars of {pairs}; {fixed(turned, 0)} of them turn."
    return Picture(lambda: flip_chart(scene), caption, alt, "flip-chart")
