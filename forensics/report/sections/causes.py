"""The causes of one episode, ranked, with what speaks for and against each and where to see it."""

from __future__ import annotations

from forensics.episodes.catalogue import CauseView, Episode, Evidence, Word
from forensics.episodes.causes import UNTOLD
from forensics.report.elements import Column, Line, Linked, Table
from forensics.report.words import fixed, plain

#: Lines of evidence shown on each side, for causes from a probability on.
LINES = ((0.1, 6), (0.02, 3), (0.0, 1))

#: Evidence weaker than this many to one is not listed.
WEAK = 1.1

#: What shows a measurement: words of the link, and the anchor; "{}" stands for the episode.
FIGURES = {
    "strip": ("strip", "strip-{}"),
    "profile": ("load profile", "profile-{}"),
    "residuals": ("residuals", "residual-chart"),
    "fan": ("weights over depth", "fan-chart"),
    "path": ("path", "hole-path"),
    "run": ("run", "run-strip"),
    "files": ("data account", "data"),
}


def anchor(figure: str, episode: Episode) -> str:
    """Give the anchor of what shows a measurement of an episode."""
    return FIGURES[figure][1].format(episode.id)


def cause_table(episode: Episode, profiled: bool = True) -> Table:
    """Tabulate the ranked causes with the evidence for and against each.

    Parameters
    ----------
    episode : Episode
    profiled : bool
        Whether the report has a load profile of the episode; where not, its strip is linked instead.

    Returns
    -------
    Table
    """
    columns = (
        Column("cause"),
        Column("probability", "number"),
        Column("speaks for it"),
        Column("speaks against it"),
    )
    ranked = sorted(episode.causes, key=lambda c: -c.probability)
    rows = tuple(
        (
            plain(c.cause),
            fixed(c.probability, 2),
            _side(c, 1, episode, profiled),
            _side(c, -1, episode, profiled),
        )
        for c in ranked
    )
    return Table(
        f"{episode.id}: causes weighed",
        columns,
        rows,
        _note(episode) if rows else "",
        "No cause was weighed for this episode.",
        dense=True,
    )


def _note(episode: Episode) -> str:
    note = (
        "A factor says how many times as often the measurement is met with this cause as with all causes "
        "alike (for it), or how many times as seldom (against it); factors multiply. In brackets where it "
        "comes from; the strongest are listed, summary.json has all."
    )
    if episode.word is Word.RELABEL:
        note += f" The engineer's own is {episode.cause}; these are the program's."
    if episode.cause.startswith(UNTOLD):
        note += " No cause leads clearly enough to be named alone."
    return note


def _side(cause: CauseView, sign: int, episode: Episode, profiled: bool) -> tuple[Line, ...]:
    """Evidence on one side, strongest first, with a count of what is left out."""
    picked = [e for e in cause.evidence if max(e.ratio, 1.0 / e.ratio) >= WEAK and e.weight * sign > 0]
    ordered = sorted(picked, key=lambda e: -abs(e.weight))
    most = next(lines for least, lines in LINES if cause.probability >= least)
    told: list[Line] = [_line(e, episode, profiled) for e in ordered[:most]]
    rest = len(ordered) - most
    if rest > 0:
        told.append(f"and {rest} weaker")
    return tuple(told) or ("nothing found",)


def _line(evidence: Evidence, episode: Episode, profiled: bool) -> Line:
    """Factor, what was measured, where the factor comes from; linked to what shows it."""
    factor = max(evidence.ratio, 1.0 / evidence.ratio)
    text = f"{fixed(factor, 1)}×: {evidence.text} [{evidence.origin}]"
    figure = "strip" if evidence.figure == "profile" and not profiled else evidence.figure
    if figure not in FIGURES:
        return text
    return Linked(text, FIGURES[figure][0], anchor(figure, episode))
