"""The episodes: each main one in detail, then all of them in tables."""

from __future__ import annotations

import math

import numpy as np

from forensics.episodes.catalogue import Consequence, Episode, Kind, State
from forensics.episodes.causes.words import cause_sentence
from forensics.episodes.groups import is_routine
from forensics.episodes.headline import gravity
from forensics.mechanics.lockup import SlackOff
from forensics.report import derived
from forensics.report.elements import (
    Column,
    Element,
    Notice,
    Number,
    Numbers,
    Part,
    Picture,
    Section,
    Table,
    Text,
)
from forensics.report.figures import depths, timeline
from forensics.report.scene import MAIN_CAP, Scene
from forensics.report.sections import verdicts
from forensics.report.sections.causes import anchor, cause_table
from forensics.report.sections.cautions import for_episode
from forensics.report.sections.first import RESIDUALS, episode_numbers, rotation_sentence
from forensics.report.sections.pipe import stress_table
from forensics.report.sections.witness import over_episode, travel_sentence
from forensics.report.words import count, duration, fixed, plain

TABLE_ROWS = 200
MEMBERS = 12

DOING = {
    "connection": "in a connection",
    "drill_rotate": "drilling with rotation",
    "drill_slide": "sliding",
    "ream_down": "reaming down",
    "ream_up": "reaming up",
    "rotate_off_bottom": "rotating off bottom",
    "trip_in": "running in",
    "trip_out": "pulling out",
    "circulate": "circulating",
    "static": "standing still",
}


def describe(scene: Scene) -> Section:
    """Describe the main episodes one by one."""
    total = len(scene.findings.episodes)
    if not total:
        return Section(
            "episodes", "Main episodes", (Text("No episode passed the rules; there is nothing to show."),)
        )
    lead = f"{count(len(scene.mains), 'episode')} of {total} shown in detail, in order of time."
    if not scene.mains:
        lead = f"The engineer rejected all there were ({count(total, 'episode')}); the table below has them."
    elif all(is_routine(e) for e in scene.mains):
        lead += (
            " All are harmless sinusoidal running; the one that came nearest to mattering stands for them."
        )
    elif total > len(scene.mains):
        lead += (
            f" At most {MAIN_CAP} are, the gravest: by consequence, then state, lost weight and size; "
            "routine sinusoidal running and what the engineer rejected are left out. The table below lists "
            "the rest."
        )
    parts = tuple(_part(scene, episode) for episode in scene.mains)
    return Section("episodes", "Main episodes", (Text(lead),), parts)


def kind_words(episode: Episode) -> str:
    """Kind and state in words."""
    if episode.kind is Kind.BUCKLING and episode.state is not State.NONE:
        return f"{episode.state} buckling"
    return str(episode.kind)


def _part(scene: Scene, episode: Episode) -> Part:
    show = scene.show
    start, end = show.time(episode.start), show.time(episode.end)
    until = end[11:] if end[:10] == start[:10] else end
    title = f"{episode.id}: {kind_words(episode)}, {start} to {until}"
    elements: list[Element] = [Text(summary(scene, episode))]
    profile = scene.findings.profiles.get(episode.id)
    elements.append(Numbers(f"{episode.id} in numbers", _numbers(scene, episode)))
    profiled = profile is not None and len(profile.md) > 1
    if profiled:
        elements.append(_profile_picture(scene, episode))
    elements.append(_moment_picture(scene, episode))
    strained = stress_table(scene, episode)
    if strained is not None:
        elements.append(strained)
    elements.append(cause_table(episode, profiled))
    cautions = for_episode(episode)
    if cautions:
        elements.append(Notice(f"Cautions that apply to {episode.id}", cautions))
    return Part(f"episode-{episode.id}", title, tuple(elements))


def summary(scene: Scene, episode: Episode) -> str:
    """Say what happened, where, during what, and what it led to."""
    show = scene.show
    sentences = [
        f"{kind_words(episode).capitalize()} for {duration(episode.duration)} while {_doing(episode)}"
    ]
    if math.isfinite(episode.top_md) and math.isfinite(episode.bottom_md):
        what = "buckled" if episode.kind is Kind.BUCKLING else "affected"
        sentences[0] += f", {what} interval at its largest {show.depths(episode.top_md, episode.bottom_md)}"
    sentences.append(_consequence(scene, episode))
    if episode.consequence in {Consequence.WEIGHT_LOST, Consequence.LOCKED_UP}:
        sentences += slack_off_sentence(scene, episode)
    if episode.note:
        sentences.append(episode.note[0].upper() + episode.note[1:].rstrip("."))
    said = (travel_sentence(scene, episode), over_episode(scene, episode), verdicts.sentence(episode))
    sentences += [sentence for sentence in said if sentence]
    if episode.cause:
        sentences.append(cause_sentence(episode))
    return ". ".join(s.rstrip(".") for s in sentences) + "."


def _doing(episode: Episode) -> str:
    return DOING.get(episode.activity, "doing what the log does not tell")


def _consequence(scene: Scene, episode: Episode) -> str:
    lost = scene.show.with_interval(episode.lost_weight, "force")
    if episode.consequence is Consequence.WEIGHT_LOST:
        return f"Consequence: {lost} of surface weight did not reach the bit"
    if episode.consequence is Consequence.LOCKED_UP:
        return "Consequence: locked up, weight slacked off at surface no longer moved the lower end"
    if episode.consequence is Consequence.ROTATED_BUCKLED:
        return f"Consequence: turned while buckled ({rotation_sentence(scene, episode).rstrip('.')})"
    return "No consequence was found"


def slack_off_sentence(scene: Scene, episode: Episode) -> list[str]:
    """Say what slacking off more would have brought to the lower end; nothing where it was not sliding."""
    toll, show = scene.findings.tolls.get(episode.id), scene.show
    if toll is None or toll.slack_off is None:
        return []
    asked = toll.slack_off
    end = "bit" if scene.findings.rig.on_bottom[episode.peak] else "lower end"
    limit = show.value(asked.limit, "force")
    if asked.more <= 0.0:
        return [f"Nothing was left on the hook to slack off; {limit} stood on the {end}"]
    more, arrives = show.value(asked.more, "force"), show.value(asked.arrives, "force")
    said = f"Of {more} more slacked off at the peak {arrives} would have reached the {end}"
    said += f"; the most that any slacking off brings there is {limit}"
    surface = float(scene.findings.rig.wob_surface[episode.peak]) + asked.spent
    if math.isfinite(surface):
        beyond = f" beyond {show.value(surface, 'force')} of surface weight" if asked.spent > 0.0 else ""
        said += f", and{beyond} less than a twentieth of any addition gets there"
    return [said, *_quick(scene, asked)]


def _quick(scene: Scene, asked: SlackOff) -> list[str]:
    """Hold the closed form's limit beside the march's, where the hole is even enough for it."""
    quick, show = asked.quick, scene.show
    if quick is None:
        return []
    where = f"{show.value(quick.length, 'length', 0)} at {show.value(quick.inclination, 'angle', 0)}"
    most = show.value(quick.limit, "force")
    said = f"Were the lowest {where} a helix all along, at most {most} could get through it, however much is"
    return [f"{said} slacked off (closed form: Mitchell 1986, Wu and Juvkam-Wold 1993)"]


def _numbers(scene: Scene, episode: Episode) -> tuple[Number, ...]:
    """List the episode's numbers, with those of its kind and its place."""
    show, loads = scene.show, scene.findings.loads
    rows = episode_numbers(episode, show)
    if math.isfinite(episode.peak_md):
        rows.insert(0, Number("depth of the peak", show.value(episode.peak_md, "length", 0), "", "replay"))
    when = show.stamp(float(scene.findings.log.time[episode.peak]))
    rows.insert(0, Number("moment of the peak", when, "", "time log"))
    if episode.kind in RESIDUALS and episode.peak_residual is None:
        name, quantity = RESIDUALS[episode.kind]
        values = loads.drag_residual if episode.kind is Kind.DRAG else loads.torque_residual
        value = show.value(float(values[episode.peak]), quantity)
        rows.append(Number(name, value, "", "measured less modelled at the calibrated friction"))
    rows += _clearance_row(scene, episode)
    return tuple(rows)


def _clearance_row(scene: Scene, episode: Episode) -> list[Number]:
    """Say what the load ratio becomes where the clearance is taken at the other diameter."""
    profile = scene.findings.profiles.get(episode.id)
    if profile is None or not episode.peak_load_ratio.value > 0.0:
        return []
    ratio = -profile.tension / derived.other_threshold(scene.findings, profile)
    if not np.isfinite(ratio).any() or np.nanmax(ratio) <= 0.0:
        return []
    name = f"largest load ratio if the clearance is taken at the {derived.other_clearance(scene.findings)}"
    return [Number(name, fixed(float(np.nanmax(ratio)), 2), "", "load profile at the peak, approximate")]


def _profile_picture(scene: Scene, episode: Episode) -> Picture:
    profile = scene.findings.profiles[episode.id]
    show = scene.show
    caption = (
        f"{episode.id}, load along the hole at {show.stamp(profile.time)}, near its peak. Effective "
        "tension is positive to the right, compression negative to the left. Dashed: sinusoidal "
        "threshold; dotted: helical threshold, both at the actual wall force; pale band: how far the "
        "sinusoidal one moves if the clearance is taken at the "
        f"{derived.other_clearance(scene.findings)}. Where the load lies left of a threshold the string is "
        "past it; bars at the left edge show the state the replay gave (light: sinusoidal; dark: helical)."
    )
    compression = -float(profile.tension.min()) if len(profile.tension) else math.nan
    alt = (
        "Effective tension over measured depth with sinusoidal and helical thresholds; the largest "
        f"compression is {show.value(compression, 'force')}."
    )
    return Picture(
        lambda: depths.load_profile(scene, profile, episode), caption, alt, anchor("profile", episode)
    )


def _moment_picture(scene: Scene, episode: Episode) -> Picture:
    caption = (
        f"{episode.id}, the strip around it: shaded while it lasts, dashed at its peak. The load ratio "
        "crosses the dotted line where the sinusoidal threshold is passed. In the last depth track the "
        "pale line shows how far down the motion at surface had been felt since the last reversal: short "
        "of the bit, the lower end did not move."
    )
    alt = f"Strip chart of rig channels and reconstruction from before to after episode {episode.id}."
    return Picture(lambda: timeline.moment_strip(scene, episode), caption, alt, anchor("strip", episode))


def describe_tables(scene: Scene) -> Section:
    """Describe all episodes and groups."""
    elements = (episode_table(scene), *verdicts.tables(scene), family_table(scene))
    return Section("catalogue", "All episodes and groups", elements)


def episode_table(scene: Scene) -> Table:
    """All episodes in order of time, up to a cap."""
    show, episodes = scene.show, scene.findings.episodes
    chosen = sorted(episodes, key=gravity, reverse=True)[:TABLE_ROWS]
    rows = tuple(_episode_row(scene, e) for e in sorted(chosen, key=lambda e: (e.start, e.id)))
    columns = (
        Column("id", "code"),
        Column("kind"),
        Column(f"start ({show.timezone})"),
        Column("length", "number"),
        Column("while"),
        Column(f"interval [{show.unit('length')}]", "number"),
        Column("load ratio", "number"),
        Column(f"compression [{show.unit('force')}]", "number"),
        Column(f"lost weight [{show.unit('force')}]", "number"),
        Column("prob.", "number"),
        Column("consequence"),
        Column("group"),
        Column("cause"),
        *([Column("verdict")] if scene.findings.verdicts else []),
    )
    note = (
        "In brackets: 90 % interval. Lost weight is at the peak of load ratio; the second figure is the part "
        "lost to buckling. Origin of all: the replay at the calibrated friction and its draws."
    )
    if len(episodes) > TABLE_ROWS:
        note += (
            f" The {TABLE_ROWS} most severe of {len(episodes)} are listed here; episodes.csv has them all."
        )
    caption = f"Episodes, in order of time ({fixed(len(rows), 0)} of {fixed(len(episodes), 0)})"
    return Table(caption, columns, rows, note if rows else "", "No episode passed the rules.", dense=True)


def _episode_row(scene: Scene, e: Episode) -> tuple[str | tuple[str, ...], ...]:
    show = scene.show

    def bare(estimate: object, quantity: str) -> str:
        text = show.with_interval(estimate, quantity)  # type: ignore[arg-type]
        unit = show.unit(quantity)
        return "" if text == "not known" else text.replace(f" {unit}", "", 1) if unit else text

    lost = tuple(filter(None, (bare(e.lost_weight, "force"), bare(e.lost_to_buckling, "force"))))
    span = show.depths(e.top_md, e.bottom_md).removesuffix(f" {show.unit('length')}")
    return (
        e.id,
        kind_words(e),
        show.time(e.start),
        duration(e.duration),
        DOING.get(e.activity, "not known"),
        "" if span == "not known" else span,
        bare(e.peak_load_ratio, "dimensionless"),
        bare(e.peak_compression, "force"),
        lost or "",
        fixed(e.probability, 2) if math.isfinite(e.probability) else "",
        plain(e.consequence),
        e.family,
        verdicts.cause_cell(e),
        *([verdicts.mark(e)] if scene.findings.verdicts else []),
    )


def family_table(scene: Scene) -> Table:
    """List groups of like episodes."""
    columns = (
        Column("group"),
        Column("what its members share"),
        Column("members", "number"),
        Column("episodes", "code"),
        Column("stability", "number"),
    )
    rows = []
    for family in scene.findings.families:
        listed = ", ".join(family.members[:MEMBERS])
        more = len(family.members) - MEMBERS
        listed += f" and {more} more" if more > 0 else ""
        stable = fixed(family.stability, 2) if math.isfinite(family.stability) else "by rule"
        rows.append((family.name, family.description, fixed(len(family.members), 0), listed, stable))
    note = "Stability: mean agreement of the group under resampling, 0 to 1; by rule: not resampled."
    return Table(
        "Groups of like episodes", columns, tuple(rows), note if rows else "", "No group was formed."
    )
