"""How far the model fits this run: hookload against depth, residuals, reference readings."""

from __future__ import annotations

import numpy as np

from forensics.report.elements import Column, Element, Picture, Section, Table, Text
from forensics.report.figures import breakover, weights
from forensics.report.scene import Scene
from forensics.report.sections import recorded
from forensics.report.words import count, fixed

TARE_ROWS = 60

NAMES = {"pick_up": "pick-up", "slack_off": "slack-off", "rotating": "rotating", "torque": "torque"}


def describe(scene: Scene) -> Section:
    """Describe fit and residuals."""
    elements: list[Element] = [Text(_fit_sentence(scene)), _fan(scene), proof_table(scene)]
    elements += [Text(text) for text in _open(scene)]
    elements += [_residuals(scene), parameter_table(scene), *_breakover(scene), tare_table(scene)]
    elements += recorded.tables(scene)
    elements += [Text(text) for text in (_mud(scene),) if text]
    return Section("fit", "How far the model fits", tuple(elements))


def _fit_sentence(scene: Scene) -> str:
    cal = scene.findings.calibration
    kinds = ("pick_up", "slack_off", "rotating", "torque")
    counts = {kind: sum(1 for r in cal.readings if r.kind == kind) for kind in kinds}
    if not cal.readings:
        return (
            "The log shows no steady off-bottom reading, so nothing was calibrated: the friction factors "
            "are the assumed ones, and the reconstruction is worth no more than they are."
        )
    parts = ", ".join(f"{fixed(n, 0)} {NAMES[kind]}" for kind, n in counts.items() if n)
    rms = scene.show.value(cal.residual_rms, "force")
    return (
        f"Calibrated on steady off-bottom readings: {parts}. Hookload readings miss the model by {rms} (rms)."
    )


def proof_table(scene: Scene) -> Table:
    """Set the error on stands left out beside that of the fit to all."""
    show, proof = scene.show, scene.findings.calibration.held_out
    rows = []
    if proof is not None:
        rows.append(("hookload", show.value(proof.in_sample, "force"), show.value(proof.rms, "force")))
        if np.isfinite(proof.torque_rms):
            torque = (show.value(proof.torque_in_sample, "moment"), show.value(proof.torque_rms, "moment"))
            rows.append(("torque", *torque))
    columns = (
        Column("reading"), Column("fitted to all (rms)", "number"), Column("foretold unseen (rms)", "number"),
    )  # fmt: skip
    note = ""
    if proof is not None:
        note = (
            f"Each of {count(proof.folds, 'group')} of neighbouring stands was left out in turn and its "
            "readings foretold by a calibration that never saw them, nor anything matched to them. What "
            "the fit lets go counts in neither."
        )
    empty = "Too few stands were weighed to leave some out: how well the model foretells is not known."
    return Table("Readings of stands the calibration did not see", columns, tuple(rows), note, empty)


def _open(scene: Scene) -> list[str]:
    """Name what the readings leave open."""
    cal = scene.findings.calibration
    said = [direction.sentence for direction in cal.open_directions]
    if not said:
        return []
    return ["What the readings leave open: " + " ".join(said)]


def parameter_table(scene: Scene) -> Table:
    """List every number of the joint fit with its interval and where it is from."""
    show, cal = scene.show, scene.findings.calibration
    rows = []
    for parameter in cal.parameters:
        estimate = parameter.estimate
        interval = (estimate.value, estimate.low, estimate.high)
        if parameter.unit == "-":
            shown = [fixed(x, 3) for x in interval]
        else:
            shown = [show.value(x, "force" if parameter.unit == "N" else "moment") for x in interval]
        told = estimate.source if estimate.determined else f"{estimate.source}; not determined"
        rows.append((parameter.name, shown[0], f"{shown[1]} to {shown[2]}", told))
    columns = (
        Column("number"), Column("value", "number"), Column("90 % interval", "number"), Column("from"),
    )  # fmt: skip
    note = (
        "All are fitted at once with the friction factors. Assumed: the readings say less of it than was "
        "known before; its width still counts in the factors' intervals."
    )
    return Table(
        "What else the readings were fitted with", columns, tuple(rows), note, "Nothing.", dense=True
    )


def _breakover(scene: Scene) -> list[Element]:
    """Show the peaks as a string that stood still starts to move up; say so where there are none."""
    found, show = scene.findings.calibration.breakover, scene.show
    if found is None or not len(found):
        return [
            Text(
                "No breakover peak was seen: none of the log's starts upward followed a stand of twenty "
                "seconds or more, with samples five seconds apart or less and a steady weight after it."
            )
        ]
    excess = found.peak - found.steady
    worst = int(np.argmax(excess))
    middle, most = (show.value(float(x), "force") for x in (np.median(excess), excess[worst]))
    where, stood = show.value(float(found.bit[worst]), "length", 0), fixed(found.still[worst] / 60.0, 1)
    caption = (
        "Breakover: the largest hookload as a string that stood still starts to move up, less the pick-up "
        f"weight that follows; {count(len(found), 'start')}, median {middle}, largest {most} at {where} "
        f"after {stood} min. They are in no fit. Peaks that grow with standing time hint at gels or at "
        "sticking by differential pressure."
    )
    alt = f"Breakover peaks against standing time and bit depth, {count(len(found), 'start')}."
    return [Picture(lambda: breakover.breakover_chart(scene), caption, alt, "breakover-chart")]


def _mud(scene: Scene) -> str:
    """Hold the case's mud against the log's, where the log has one."""
    found, show = scene.findings, scene.show
    logged = found.log.get("mud_density")
    if logged is None:
        return ""
    middle = float(np.nanmedian(logged))
    return (
        f"Mud density in the log is {show.value(middle, 'density')} (median); loads rest on that of the "
        "case, "
        f"{show.value(found.well.fluid.typical, 'density')}."
    )


def _fan(scene: Scene) -> Picture:
    caption = (
        "Hookload against bit depth, block weight included: lines are the model at the calibrated "
        "friction, bands its 90 % friction interval, marks the steady readings (triangle up: pick-up; "
        "circle: rotating; triangle down: slack-off; pale: near buckling; square: written down by hand). "
        "Marks along the lines: a good fit. All marks shifted alike: a tare. Marks that cross the band: "
        "friction changed with depth."
    )
    readings = count(len(scene.findings.calibration.readings), "reading")
    alt = f"Three model lines of hookload over bit depth with {readings}."
    return Picture(lambda: weights.fan_chart(scene), caption, alt, "fan-chart")


def _residuals(scene: Scene) -> Picture:
    caption = (
        "What the model leaves over, measured less modelled: positive means the hook carries, or the top "
        "drive turns against, more than the model says. Left: each steady reading over depth. Right: each "
        "sample off bottom over time, for hookload and torque. Look for a drift or a step; scatter about "
        "zero is noise."
    )
    residuals = scene.findings.calibration.residuals
    worst = float(np.max(np.abs(residuals))) if len(residuals) else float("nan")
    largest = scene.show.value(worst, "force")
    alt = f"Residuals of readings and samples; the largest residual of a reading is {largest}."
    return Picture(lambda: weights.residual_chart(scene), caption, alt, "residual-chart")


def tare_table(scene: Scene) -> Table:
    """List reference readings by stand."""
    show, tares = scene.show, scene.findings.rig.tares
    rows = tuple(
        (
            show.time(tare.start),
            show.value(tare.bit_depth, "length", 0),
            NAMES.get(tare.kind, tare.kind),
            show.value(tare.weight, "force"),
            show.value(tare.offset, "force"),
            fixed(tare.samples, 0),
        )
        for tare in tares[:TARE_ROWS]
    )
    columns = (
        Column(f"stand from ({show.timezone})"), Column("bit depth", "number"), Column("reference"),
        Column("reading", "number"), Column("offset from model", "number"), Column("samples", "number"),
    )  # fmt: skip
    note = (
        "Offset: the reading less the model's frictionless weight of the string alone, so a rotating one "
        "shows what else hangs from the sensor."
    )
    if len(tares) > TARE_ROWS:
        note += f" The first {TARE_ROWS} of {len(tares)} are listed."
    empty = "No off-bottom reference reading was found; surface weight rests on the model's rotating weight."
    return Table(
        "Reference weights the surface weight was re-zeroed on", columns, rows, note, empty, dense=True
    )
