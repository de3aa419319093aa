"""How well causes are told: learned on one set of simulated incidents, judged on another.

    python tests/benchmarks/bench_causes.py measure FOLDER SIGNS.csv   # analyse every incident below FOLDER
    python tests/benchmarks/bench_causes.py learn SIGNS.csv            # rewrite the package's strengths
    python tests/benchmarks/bench_causes.py judge SIGNS.csv            # print how well they do on it
    python tests/benchmarks/bench_causes.py thin SIGNS.csv OUT.csv.gz  # keep a few hundred for the tests

An incident is a folder with a case file and a `truth.json` (see `sample_logs`). Its episode is the gravest
non-routine one that overlaps a span in which the cause was at work; where there is none the incident is
missed and counted apart.
"""

from __future__ import annotations

import csv
import datetime as dt
import gzip
import io
import json
import math
import os
import sys
from concurrent.futures import ProcessPoolExecutor
from dataclasses import replace
from pathlib import Path

sys.path.insert(0, str(Path(__file__).parents[2]))


from forensics.case import load_case
from forensics.episodes.catalogue import Episode
from forensics.episodes.causes import Usual
from forensics.episodes.causes import strengths as package
from forensics.episodes.causes.measures import MEASURES, Subject, take_all
from forensics.episodes.find import flag_rows
from forensics.episodes.groups import is_routine
from forensics.episodes.headline import gravity
from forensics.episodes.material import Material
from forensics.errors import InputError
from pipelines.analysis import analyse
from pipelines.progress import Progress
from tests.benchmarks import causes_judge, causes_learn

ABOUT = ("incident", "cause", "present", "work", "episode", "kind", "alone", "hours", "others", "error")
NAMES = tuple(measure.name for measure in MEASURES)

#: Incidents kept for the tests.
KEPT = 330

#: Analyses side by side.
WORKERS = int(os.environ.get("WORKERS", "2"))

#: An episode this long before or after the truth's time is still the incident's [s].
CLOSE = 60.0


def stamp(text: str) -> float:
    """Seconds since 1970 UTC of an ISO stamp."""
    return dt.datetime.fromisoformat(text.replace("Z", "+00:00")).timestamp()


def measure(folder: Path) -> dict[str, object]:
    """Analyse one incident and take the measurements of its episode."""
    truth = json.loads((folder / "truth.json").read_text())
    row: dict[str, object] = {
        "incident": folder.name,
        "cause": truth["cause"],
        "present": ";".join(truth["causes_present"]),
        "work": truth.get("work", ""),
    }
    try:
        found = analyse(load_case(next(folder.glob("*.toml"))), Progress(quiet=True))
    except Exception as error:  # one bad run must not stop a thousand
        kind = "" if isinstance(error, InputError) else "fault of the program: "
        return row | {"error": f"{kind}{error!r}"[:200]}
    times = [(stamp(s["start"]), stamp(s["end"])) for s in truth["spans"] if s["cause"] == truth["cause"]]
    times = times or [(stamp(truth["start"]), stamp(truth["end"]))]
    telling = [e for e in found.episodes if not is_routine(e)]
    inside = [e for e in telling if any(e.start <= b + CLOSE and e.end >= a - CLOSE for a, b in times)]
    row |= {
        "hours": round((found.log.time[-1] - found.log.time[0]) / 3600.0, 2),
        "others": len(telling) - len(inside),
        "alone": len(inside),
    }
    if not inside:
        return row
    episode: Episode = max(inside, key=gravity)
    material = Material(found.log, found.rig, found.loads, None, found.calibration, found.well, found.case)
    material = replace(material, flagged=flag_rows(material))
    values = take_all(Subject(material, Usual(material), episode))
    row |= {"episode": episode.id, "kind": episode.kind.value}
    return row | {name: f"{v:.5g}" for name, v in values.items() if math.isfinite(v)}


def measure_all(root: Path, out: Path) -> None:
    """Measure every incident below a folder that is not in the table yet."""
    done = {row["incident"] for row in read_signs(out)} if out.exists() else set()
    folders = [p.parent for p in sorted(root.glob("*/truth.json")) if p.parent.name not in done]
    with out.open("a", newline="") as file:
        writer = csv.DictWriter(file, (*ABOUT, *NAMES), lineterminator="\n")
        if not done:
            writer.writeheader()
        with ProcessPoolExecutor(WORKERS) as pool:
            for row in pool.map(measure, folders, chunksize=4):
                writer.writerow(row)
                file.flush()
    print(f"{len(folders)} incidents measured, {len(done)} were there")


def thin(rows: list[dict[str, str]], out: Path) -> None:
    """Keep every few of the incidents that gave an episode, `KEPT` in all."""
    telling = [row for row in rows if row["episode"] and row["cause"] in causes_learn.CAUSES]
    chosen = telling[:: max(len(telling) // KEPT, 1)][:KEPT]
    text = io.StringIO(newline="")
    writer = csv.writer(text, lineterminator="\n")
    writer.writerow((*ABOUT, *NAMES))
    writer.writerows([row.get(name, "") for name in (*ABOUT, *NAMES)] for row in chosen)
    out.write_bytes(gzip.compress(text.getvalue().encode(), mtime=0))
    print(f"{len(chosen)} of {len(telling)} kept")


def read_signs(path: Path) -> list[dict[str, str]]:
    """Rows of a table of measured incidents."""
    with gzip.open(path, "rt", newline="") if path.suffix == ".gz" else path.open(newline="") as file:
        rows = {row["incident"]: row for row in csv.DictReader(file)}
    return list(rows.values())


def main(arguments: list[str]) -> None:
    """Run one of the three steps."""
    match arguments:
        case ["measure", root, out]:
            measure_all(Path(root), Path(out))
        case ["learn", *tables]:
            rows = [row for table in tables for row in read_signs(Path(table))]
            content = causes_learn.learn(causes_learn.table_of(rows))
            target = Path(package.__file__).with_name(package.FILE)
            target.write_text(causes_learn.as_text(content))
            print(f"learned from {len(rows)} incidents: {target.name}")
        case ["judge", *tables]:
            rows = [row for table in tables for row in read_signs(Path(table))]
            print(causes_judge.report(rows))
        case ["thin", *tables, out]:
            rows = [row for table in tables for row in read_signs(Path(table))]
            thin(rows, Path(out))
        case _:
            print(__doc__)


if __name__ == "__main__":
    main(sys.argv[1:])
