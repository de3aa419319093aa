"""What would turn the findings: how far one input would have to be off, all others as found."""

from __future__ import annotations

import math

from forensics.episodes.flips import Flip, flip_sentence, shown
from forensics.replay.doubt import (
    CASING_SIGMA,
    DEPTH_SCALE_SIGMA,
    DEPTH_SIGMA,
    HOLE_SIGMA,
    JOINT_SIGMA,
    LOADED_SIGMA,
    MUD_SIGMA,
    RATE_SIGMA,
    READING_SIGMA,
    SAG_SIGMA,
    STIFFNESS_SIGMA,
)
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
    elements: list[Element] = [Text("No episode of buckling or lockup was there to be turned.")]
    if scene.findings.flips:
        elements = [Text(LEAD), flip_table(scene), _picture(scene)]
    return Section("flips", "What would turn the findings", (*elements, doubt_table(scene)))


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


def doubt_table(scene: Scene) -> Table:
    """List what the intervals and probabilities allow for."""
    show, well = scene.show, scene.findings.well
    common, source = "common practice, no source", "Williamson 2000, from memory"
    depth = f"{fixed(100.0 * DEPTH_SCALE_SIGMA, 2)} %"
    rows = (
        ("friction factors and block weight", "as calibrated, jointly", "the run's own weight readings"),
        ("weight of the string in mud", "as calibrated; mud " + show.value(MUD_SIGMA, "density"), common),
        ("each weight reading", f"{show.value(READING_SIGMA[0], 'force')} or its own scatter", common),
        ("direction of each survey station", _degrees(well.likely.sigma), "stated, and the survey"),
        ("sag of the survey tool, at 90 degrees", _degrees(SAG_SIGMA), source),
        ("depth of the survey", f"{show.value(DEPTH_SIGMA, 'length', 2)} and {depth}", source),
        ("diameter of open hole; of casing", f"{_percent(HOLE_SIGMA)}; {_percent(CASING_SIGMA)}", common),
        ("wear of tool joints, in diameter", f"{fixed(1e3 * JOINT_SIGMA, 1)} mm", common),
        ("stiffness of the pipe", _percent(STIFFNESS_SIGMA), common),
        ("drag under load against drag weighed off bottom", _percent(LOADED_SIGMA), common),
        ("drilling rate at a bit load", f"{_percent(RATE_SIGMA)} or its own scatter", common),
    )
    columns = (Column("what may be off"), Column("by, one sigma", "number"), Column("origin"))
    draws = scene.findings.draws
    number = 0 if draws is None else len(draws.weights)
    note = (
        f"Each of {count(number, 'draw')} takes all of these at once; friction and block weight then follow "
        "the run's own readings. Where a dozen leave a rule in doubt there are more. The onset of the "
        "helix is the case's choice and is not drawn."
    )
    return Table("What intervals and probabilities allow for", columns, rows, note, dense=True)


def _degrees(angle: float) -> str:
    return f"{fixed(math.degrees(angle), 2)} deg"


def _percent(share: float) -> str:
    return f"{fixed(100.0 * share, 1)} %"


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
