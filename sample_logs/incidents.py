"""Make invented incidents by the hundred, each with one known cause (or none), into a folder."""

from __future__ import annotations

import argparse
import json
import os
import sys
import time
import traceback
from concurrent.futures import ProcessPoolExecutor
from pathlib import Path

HERE = Path(__file__).resolve().parent
sys.path.insert(0, str(HERE))

from simulator.incident.make import CAUSES, make_incident  # noqa: E402

FIRST_SEED = {"one": 100_000, "other": 500_000}


def make_one(task: tuple[int, str, Path]) -> dict:
    """Make one incident unless it is there; what went wrong is said, not raised."""
    number, physics, folder = task
    target = folder / f"{physics}-{number:05d}"
    if (target / "truth.json").exists():
        return {"folder": target.name, "skipped": True}
    begin = time.perf_counter()
    try:
        cause = CAUSES[number % len(CAUSES)]
        facts = make_incident(cause, FIRST_SEED[physics] + number, physics, target)
    except Exception:  # one bad draw must not stop a thousand
        return {"folder": target.name, "failed": traceback.format_exc(limit=-4)}
    return {"folder": target.name, "cause": facts["cause"], "seconds": time.perf_counter() - begin}


def main(argv: list[str] | None = None) -> int:
    """Make incidents number `--first` to `--first` + `--count`; those that are there already stay."""
    parser = argparse.ArgumentParser(description=__doc__)
    parser.add_argument("folder", type=Path)
    parser.add_argument("--physics", choices=sorted(FIRST_SEED), default="one")
    parser.add_argument("--count", type=int, default=60)
    parser.add_argument("--first", type=int, default=0)
    parser.add_argument("--processes", type=int, default=max(1, (os.cpu_count() or 2) - 1))
    args = parser.parse_args(argv)
    tasks = [(k, args.physics, args.folder) for k in range(args.first, args.first + args.count)]
    args.folder.mkdir(parents=True, exist_ok=True)
    failed, spent, made = [], 0.0, 0
    with ProcessPoolExecutor(args.processes) as pool:
        for done in pool.map(make_one, tasks, chunksize=4):
            if "failed" in done:
                failed.append(done)
                print(f"{done['folder']}: {done['failed']}", file=sys.stderr)
            elif "seconds" in done:
                spent, made = spent + done["seconds"], made + 1
    print(f"{made} made, {len(failed)} failed, {spent / max(made, 1):.2f} s each")
    (args.folder / f"failed-{args.physics}.json").write_text(json.dumps(failed, indent=1) + "\n")
    return 3 if failed else 0


if __name__ == "__main__":
    raise SystemExit(main())
