"""What the rig kept by hand, beside what the log shows: weights and slides."""

from __future__ import annotations

import numpy as np

from forensics.findings import Findings
from forensics.friction.result import Reading
from forensics.logs.records import RecordedSlide, RecordedWeight
from forensics.report.elements import Column, Element, Table, Text
from forensics.report.scene import Scene
from forensics.report.words import UNKNOWN, duration, fixed
from forensics.rig.view import Activity, Bools

ROWS = 60
# A reading of the log speaks of a recorded weight within about one stand of it [m].
NEAR = 30.0
NAMES = {"pick_up": "pick-up", "slack_off": "slack-off", "rotating": "rotating"}


def tables(scene: Scene) -> list[Element]:
    """Tables of the records the case gives; none where it gives none."""
    made: list[Element] = []
    if scene.findings.weights:
        made += [weight_table(scene), Text(weights_against_log(scene))]
    if scene.findings.slides:
        made.append(slide_table(scene))
    return made


def weight_table(scene: Scene) -> Table:
    """Each weight written down, the log's nearest reading of its kind, and the model there."""
    found, show = scene.findings, scene.show
    rows = []
    for weight in found.weights[:ROWS]:
        nearest = nearest_reading(found.calibration.readings, weight)
        modelled = model_at(found, weight)
        beside = UNKNOWN if nearest is None else show.value(nearest.value, "force")
        rows.append(
            (
                show.value(weight.bit_depth, "length", 0),
                NAMES[weight.kind],
                {None: "not noted", True: "on", False: "off"}[weight.pumping],
                show.value(weight.value, "force"),
                beside,
                show.value(modelled, "force"),
                show.value(weight.value - modelled, "force"),
            )
        )
    columns = (
        Column("bit depth", "number"), Column("kind"), Column("pumps"), Column("written down", "number"),
        Column("log's reading nearby", "number"), Column("model", "number"),
        Column("written less model", "number"),
    )  # fmt: skip
    note = (
        f"Readings within {show.value(NEAR, 'length', 0)} of the depth count as nearby. The calibration "
        "hears the weights written down with a wide error of their own, beside the log's readings."
    )
    if len(found.weights) > ROWS:
        note += f" The first {ROWS} of {len(found.weights)} are listed."
    return Table("Weights written down by hand, and what the log shows", columns, tuple(rows), note)


def weights_against_log(scene: Scene) -> str:
    """Say how the weights written down lie beside the log's own, by kind."""
    found, show = scene.findings, scene.show
    told = []
    for kind, name in NAMES.items():
        pairs = [
            (weight, nearest_reading(found.calibration.readings, weight))
            for weight in found.weights
            if weight.kind == kind
        ]
        apart = [weight.value - near.value for weight, near in pairs if near is not None]
        if apart:
            middle = float(np.median(apart))
            side = "above" if middle >= 0.0 else "below"
            told.append(f"{name} {show.value(abs(middle), 'force')} {side} ({len(apart)})")
    if not told:
        return "None of the weights written down has a reading of the log near it to be held against."
    return (
        f"Written down against the log's nearest reading, median and number of pairs: {', '.join(told)}. All "
        "three apart alike is another zero; pick-up and slack-off apart to opposite sides is another speed, "
        "or a peak read for the flat part."
    )


def nearest_reading(readings: tuple[Reading, ...], weight: RecordedWeight) -> Reading | None:
    """Give the log's reading of a weight's kind that lies nearest to it in depth, if any is near."""
    same = (r for r in readings if r.kind == weight.kind and not r.by_hand)
    near = [r for r in same if abs(r.bit_depth - weight.bit_depth) <= NEAR]
    return min(near, key=lambda r: abs(r.bit_depth - weight.bit_depth), default=None)


def model_at(findings: Findings, weight: RecordedWeight) -> float:
    """Hookload the calibrated model expects for a weight's kind and depth, NaN outside its lines [N]."""
    fan = findings.fan
    line = {"pick_up": fan.pick_up, "slack_off": fan.slack_off, "rotating": fan.rotating}[weight.kind]
    good = np.isfinite(line)
    if not good.any():
        return float("nan")
    at = (weight.bit_depth, fan.bit_depth[good], line[good])
    return float(np.interp(*at, left=np.nan, right=np.nan))


def slide_table(scene: Scene) -> Table:
    """Each slide written down, and how the log's activity has its time on bottom."""
    found, show = scene.findings, scene.show
    slid = found.rig.activity == int(Activity.DRILL_SLIDE)
    turned = found.rig.activity == int(Activity.DRILL_ROTATE)
    inside = np.zeros(len(found.log), dtype=bool)
    rows = []
    for slide in found.slides:
        within = rows_of(found, slide) & (slid | turned)
        inside |= within
        drilled = int(within.sum())
        share = f"{fixed(100.0 * float(slid[within].mean()), 0)} %" if drilled else "no drilling in the log"
        if slide.by == "time":
            span = f"{show.time(slide.start)} to {show.time(slide.end)}"
        else:
            span = show.depths(slide.start, slide.end)
        rows.append((span, duration(drilled * found.log.interval), share))
    missed = duration(float((slid & ~inside).sum()) * found.log.interval)
    note = f"Sliding in the log outside the slides written down: {missed}. Activity rests on the log alone."
    if len(rows) > ROWS:
        note += f" The first {ROWS} of {len(rows)} are listed."
    columns = (
        Column("slide written down"), Column("drilling in it, by the log", "number"),
        Column("of it slid, by the log", "number"),
    )  # fmt: skip
    return Table("Slides written down by hand, and what the log shows", columns, tuple(rows[:ROWS]), note)


def rows_of(findings: Findings, slide: RecordedSlide) -> Bools:
    """Rows of the log inside a slide's span, shape (n,)."""
    at = findings.log.time if slide.by == "time" else findings.log.values["bit_depth"]
    return (at >= slide.start) & (at <= slide.end)
