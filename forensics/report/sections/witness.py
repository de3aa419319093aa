"""The bit's own witnesses: what was asked for the load on the bit, and whether the hookload agrees."""

from __future__ import annotations

import math

from forensics.episodes.catalogue import Episode
from forensics.loads import BitWitness, Response, WitnessCheck
from forensics.replay.witness.agree import check_rows, overall
from forensics.report.elements import Column, Element, Picture, Section, Table, Text
from forensics.report.figures import witness as figure
from forensics.report.scene import Scene
from forensics.report.words import Show, count, duration, fixed

MOST_SLIDES = 40
FAR = 2.0  # standard errors


def describe(scene: Scene) -> Section:
    """Describe the witnesses and their agreement with the hookload."""
    witness = scene.findings.loads.witness
    elements: list[Element] = [Text(sentence(scene))]
    if witness is not None:
        if witness.slides:
            elements.append(_picture(scene))
        elements.append(_responses(scene, witness))
        elements.append(_slides(scene, witness))
    return Section("witness", "The bit load told a second time", tuple(elements))


def sentence(scene: Scene) -> str:
    """Say who spoke, and whether it agrees with the hookload."""
    show, witness = scene.show, scene.findings.loads.witness
    if witness is None or not any(response.heard for response in witness.responses):
        return (
            "Nothing in the log tells the load on the bit a second time: the bit load while sliding rests on "
            "the hookload and on friction alone."
        )
    heard = ", ".join(response.name for response in witness.responses if response.heard)
    whole = overall(witness.slides)
    if whole is None:
        return f"Learned in rotated footage: {heard}. No slide has enough of it to hold the hookload against."
    far = sum(abs(check.sigmas) > FAR for check in witness.slides)
    judged = (
        "The two agree within their errors"
        if far == 0
        else f"In {far} of these they differ by more than two standard errors, and friction was moved there"
    )
    side = "above" if whole.difference >= 0.0 else "below"
    return (
        f"Learned where the string turns and the bit load is known: {heard}. Over "
        f"{count(len(witness.slides), 'slide')} the hookload alone, at the friction of the weight readings, "
        f"puts the bit load {show.value(abs(whole.difference), 'force')} {side} what the bit's own channels "
        "tell "
        f"({show.value(whole.by_hookload, 'force')} against {show.value(whole.by_witness, 'force')}, one "
        f"standard error {show.value(whole.sigma, 'force')}). {judged}."
    )


def _picture(scene: Scene) -> Picture:
    caption = (
        "Bit load in slid footage by hookload alone, at the friction of the weight readings, against the "
        "bit's own witness. One ring a slide, with its 90 % interval; filled where more than two "
        "standard errors off the line; dots are rows of the log."
    )
    alt = "Cross-plot of bit load by hookload against bit load by the bit's own channels, a ring a slide."
    return Picture(lambda: figure.cross_plot(scene), caption, alt, "witness-plot")


def _responses(scene: Scene, witness: BitWitness) -> Table:
    show = scene.show
    columns = (
        Column("channel"), Column("minutes learned from", "number"), Column("scatter of answer", "number"),
        Column("follows the load (rank correlation)", "number"), Column("learned at bit loads", "number"),
        Column("late by", "number"), Column("believed"),
    )  # fmt: skip
    rows = tuple(_response(show, response) for response in witness.responses)
    note = "The scatter is that of signal over load from minute to minute, and goes into the standard error."
    return Table("Channels asked for the load on the bit", columns, rows, note)


def _response(show: Show, response: Response) -> tuple[str, ...]:
    told = math.isfinite(response.low) and math.isfinite(response.high)
    aside = "; ".join(f"{why}: {count(rows, 'row')} set aside" for why, rows in response.set_aside.items())
    said = "yes" if response.heard else f"no: {response.why}"
    return (
        response.name,
        fixed(response.windows, 0),
        f"{fixed(100.0 * response.spread, 1)} %" if math.isfinite(response.spread) else "",
        fixed(response.correlation, 2) if math.isfinite(response.correlation) else "",
        show.range(response.low, response.high, "force") if told else "",
        duration(response.delay) if response.delay else "",
        f"{said}; {aside}" if aside else said,
    )


def _slides(scene: Scene, witness: BitWitness) -> Table:
    show = scene.show
    columns = (
        Column("slide"), Column("by hookload", "number"), Column("by witness", "number"),
        Column("difference", "number"), Column("standard errors", "number"), Column("correlation", "number"),
        Column("hole on paper", "number"), Column("of it, string shortened", "number"),
        Column("hole its load can make", "number"),
    )  # fmt: skip
    shown = sorted(witness.slides, key=lambda c: -abs(c.sigmas))[:MOST_SLIDES]
    rows = tuple(_slide(scene, check) for check in sorted(shown, key=lambda c: c.first))
    note = (
        "The difference is hookload less witness, before friction was moved. The string's own shortening is "
        "no footage; what the witness's load can make is by the drilling rate of rotated footage."
    )
    if len(witness.slides) > MOST_SLIDES:
        note += f" The {MOST_SLIDES} that differ most of {len(witness.slides)}."
    empty = f"No slide has both tellings in {show.unit('force')}."
    return Table("Slide by slide: hookload against witness", columns, rows, note if rows else "", empty)


def _slide(scene: Scene, check: WitnessCheck) -> tuple[str, ...]:
    show, log = scene.show, scene.findings.log
    force = [show.value(value, "force") for value in (check.by_hookload, check.by_witness, check.difference)]
    lengths = [
        show.value(value, "length") if math.isfinite(value) else ""
        for value in (check.paper, check.shortening, check.drilled)
    ]
    return (
        show.time(float(log.time[check.first])),
        *force,
        fixed(check.sigmas, 1),
        fixed(check.correlation, 2) if math.isfinite(check.correlation) else "",
        *lengths,
    )


def over_episode(scene: Scene, episode: Episode) -> str:
    """Say whether hookload and witness agree over an episode; empty where either is silent."""
    witness, show = scene.findings.loads.witness, scene.show
    if witness is None:
        return ""
    check = check_rows(witness, episode.first, episode.last, scene.findings.log.time)
    if check is None or not math.isfinite(check.sigmas):
        return ""
    word = "disagree" if abs(check.sigmas) > FAR else "agree"
    return (
        f"Hookload and the bit's own channels {word} on the bit load here: "
        f"{show.value(check.by_hookload, 'force')} against {show.value(check.by_witness, 'force')}, "
        f"{fixed(abs(check.sigmas), 1)} standard errors apart"
    )


def travel_sentence(scene: Scene, episode: Episode) -> str:
    """Say how far down the string was free, by the slope of hookload against block travel."""
    travel, show = episode.travel, scene.show
    if travel is None or travel.free_length is None:
        return ""
    free = travel.free_length
    shape = "softer as weight was added" if travel.softening > 0.0 else "steepening"
    if not abs(travel.softening) > FAR * travel.softening_sigma:
        shape = "straight"
    lead = (
        f"At the end of the move the hookload went by {show.value(travel.change, 'force')} in "
        f"{show.value(travel.travel, 'length')} of block travel, {shape}: "
    )
    if not free.determined:
        return lead + "softer than the whole string would be, so no hang-up shows above the bit"
    if free.high >= scene.findings.log.get("bit_depth")[travel.row] - 1.0:
        return lead + (
            f"a string free to {show.value(free.low, 'length')} at least; friction alone, with nothing that "
            "holds above the bit, may do as much"
        )
    return lead + f"a string free to {show.with_interval(free, 'length')}"
