"""Run one invented well from its settings file and write its case folder."""

from __future__ import annotations

import tomllib
from pathlib import Path

import numpy as np

from .deliver import write_case, write_csv, write_las, write_tables, write_truth
from .driller import Driller
from .hole import FIRST, STEP, build_hole, delivered_survey
from .instruments import measure, sample, true_frame
from .rig import Rig
from .scripts import SCRIPTS
from .truth import summary, truth_frame


def load_settings(path: Path) -> dict:
    """Read the settings of one well; `base` names another file whose tables fill what is not given."""
    settings = tomllib.loads(path.read_text(encoding="utf-8"))
    if "base" in settings:
        base = load_settings(path.parent / settings.pop("base"))
        for key, value in settings.items():
            if isinstance(value, dict) and isinstance(base.get(key), dict):
                base[key] = {**base[key], **value}
            else:
                base[key] = value
        return base
    return settings


def simulate(settings: dict) -> tuple[Rig, Driller, dict]:
    """Run the script; returns the rig with its record, the driller and the delivered survey."""
    seed = np.random.SeedSequence(settings["seed"])
    for_hole, for_survey, for_driller = (np.random.default_rng(s) for s in seed.spawn(3))
    hole = build_hole(settings, for_hole)
    script = settings["script"]
    rig = Rig(
        settings, hole, script["bit_depth"], height=script.get("height", 1.2), bottom=script["hole_depth"]
    )
    driller = Driller(rig, for_driller, **script.get("habits", {}))
    rig.zero = rig.hookload_at_rest() + script.get("zero_kN", 0.0) * 1e3
    SCRIPTS[script["name"]](rig, driller, script)
    return rig, driller, delivered_survey(settings, hole, for_survey)


def build(path: Path, target: Path) -> dict:
    """Make a case folder from a settings file; returns the truth of the run."""
    settings = load_settings(path)
    rig, driller, survey = simulate(settings)
    true = true_frame(rig)
    truth = truth_frame(true, settings)
    facts = summary(truth, true, rig.hole, settings)
    facts["checks"] = len(driller.checks)
    rng = np.random.default_rng(settings["seed"] + 1)
    rows = sample(measure(true, settings, rng), settings, rng)
    target.mkdir(parents=True, exist_ok=True)
    field = settings["delivery"].get("tables") == "field"
    names = []
    for layout in settings["delivery"]["logs"]:
        part = rows
        if "from" in layout or "to" in layout:
            part = rows[(rows["time"] >= layout.get("from", 0)) & (rows["time"] < layout.get("to", 9e9))]
        writer = write_las if layout["file"].endswith(".las") else write_csv
        writer(target / layout["file"], part, settings, layout)
        names.append(layout["file"])
    write_tables(target, survey, settings, field)
    write_case(target, settings, names, field)
    write_truth(target, truth.loc[rows.index], facts, settings)
    return facts


__all__ = ["FIRST", "STEP", "build", "load_settings", "simulate"]
