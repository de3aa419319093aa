"""How fast the incident job is: `python tests/benchmarks/bench_incident.py [hours]`.

Makes a 48 h, 1 Hz, 20-channel log of a 5 km well in a temporary folder and prints the whole job split by
stage, each as a multiple of pandas reading the same file, peak memory, the sequential replay's cost per
visited station, and the start-up of the help text. Nothing here passes or fails.
"""

from __future__ import annotations

import json
import math
import os
import platform
import subprocess
import sys
import tempfile
import time
from collections.abc import Callable
from dataclasses import replace
from pathlib import Path

sys.path.insert(0, str(Path(__file__).parents[1]))

import numpy as np
import pandas as pd
import psutil

import cases

COMPUTATION = ("reading", "well", "rig", "calibration", "replay", "draws", "episodes", "flips")
OTHER = ("imports", "profiles", "figures", "pdf", "exports")

# Runs in a process of its own, so that imports and peak memory are the job's alone.
CHILD = """
import json, sys, time
began = time.perf_counter()
from pipelines import analysis, incident, results
import forensics.replay.run as module
imports = time.perf_counter() - began
import psutil
spent = []
kernel = module.replay_rows
def timed(*arguments):
    start = time.perf_counter()
    kernel(*arguments)
    spent.append((time.perf_counter() - start, int(arguments[1].memory.visits[0])))
module.replay_rows = timed
result = incident.run(sys.argv[1], sys.argv[2], "metric", True)
timings = dict(result.timings)
timings["imports"] += imports
whole = time.perf_counter() - began
info = psutil.Process().memory_info()
try:
    import resource
    peak = resource.getrusage(resource.RUSAGE_SELF).ru_maxrss * (1 if sys.platform == "darwin" else 1024)
except ImportError:
    peak = getattr(info, "peak_wset", info.rss)
seconds, visits = max(spent, key=lambda pair: pair[1])
print(json.dumps({
    "whole": whole, "peak": peak, "kernel": seconds, "visits": visits, "timings": timings,
    "rows": len(result.findings.log), "episodes": len(result.findings.episodes),
}))
"""


def best(call: Callable[[], object], times: int = 5) -> float:
    """Give the shortest of several runs [s]."""
    shortest = float("inf")
    for _ in range(times):
        start = time.perf_counter()
        call()
        shortest = min(shortest, time.perf_counter() - start)
    return shortest


def twenty_channels(columns: dict[str, np.ndarray]) -> dict[str, np.ndarray]:
    """Add what a rig records beside the ten channels that the case maker knows."""
    rng = np.random.default_rng(11)
    rows = len(columns["Time"])
    pumping = columns["Flow In (L/min)"] > 0

    def near(value: float, sigma: float) -> np.ndarray:
        return value + rng.normal(0.0, sigma, rows)

    return columns | {
        "Flow Out (L/min)": np.where(pumping, near(1990.0, 15.0), 0.0),
        "Mud Density (g/cm3)": near(1.25, 0.002),
        "Pit Volume (m3)": near(140.0, 0.05),
        "ROP (m/h)": np.where(columns["Bit Depth (m)"] >= columns["Hole Depth (m)"], near(36.0, 2.0), 0.0),
        "Differential Pressure (bar)": np.where(pumping, near(8.0, 0.5), 0.0),
        "Hookload Max (kN)": columns["Hookload (kN)"] + np.abs(near(4.0, 1.0)),
        "Total Gas (%)": np.abs(near(0.5, 0.1)),
        "Mud Temperature Out (degC)": near(52.0, 0.2),
        "Pump Strokes (1/min)": np.where(pumping, near(110.0, 0.3), 0.0),
        "H2S (ppm)": np.zeros(rows),
    }


def make_well(folder: Path, hours: float) -> Path:
    """Write the case: a lateral, bit from 3.3 km to 5 km, slid with enough weight to buckle."""
    job = cases.Job(
        start_depth=3300.0,
        duration=hours * 3600.0,
        rop=0.014 * min(48.0 / hours, 1.0),
        hold=math.radians(86.0),
        slide_weight=150e3,
    )
    path = cases.make_case(folder, replace(job, duration=60.0))
    cases.write_well(job, folder)
    table = pd.DataFrame(twenty_channels(cases.log_columns(job)))
    table.to_csv(folder / "time.csv", index=False, float_format="%.3f")
    return path


def run_job(case: Path, out: Path) -> dict:
    """Run the job once in a process of its own; give what it measured, and the time from outside."""
    start = time.perf_counter()
    done = subprocess.run(
        [sys.executable, "-c", CHILD, str(case), str(out)], check=True, capture_output=True, text=True
    )
    return json.loads(done.stdout) | {"outside": time.perf_counter() - start}


def start_up() -> tuple[float, float]:
    """Give the time of the help text and of an empty program [s]."""
    script = Path(sys.executable).with_name("tallyback")
    ours = [str(script)] if script.exists() else [sys.executable, "-m", "pipelines.cli"]
    quiet = {"stdout": subprocess.DEVNULL, "check": True}
    empty = best(lambda: subprocess.run([sys.executable, "-c", "pass"], **quiet), 25)
    return best(lambda: subprocess.run([*ours, "--help"], **quiet), 25), empty


def show(label: str, seconds: float, unit: float, note: str = "") -> None:
    """Print one line: seconds, and how many readings by pandas that is."""
    print(f"  {label:<22}{seconds:9.3f} s {seconds / unit:9.1f} x read_csv  {note}".rstrip())


def report(measured: dict, read: float) -> None:
    """Print what a run measured."""
    timings, rows = measured["timings"], measured["rows"]
    computing = sum(timings.get(name, 0.0) for name in COMPUTATION)
    for name in (*OTHER[:1], *COMPUTATION, *OTHER[1:]):
        show(name, timings.get(name, 0.0), read)
    for name in sorted(set(timings) - {*COMPUTATION, *OTHER}):
        show(name, timings[name], read)
    show("computation", computing, read, f"(no {', '.join(OTHER)}; wanted: at most 40, aim 20)")
    show("whole job", measured["whole"], read, f"= {rows / measured['whole']:,.0f} rows/s")
    show("process, from outside", measured["outside"], read)
    print(f"  peak memory           {measured['peak'] / 2**20:9.0f} MiB (wanted: at most 700 MB)")
    per_visit = measured["kernel"] / measured["visits"] * 1e9
    print(
        f"  sequential replay     {per_visit:9.1f} ns per visited station "
        f"({measured['visits']:,} visits in {measured['kernel']:.2f} s; wanted: at most 25)"
    )
    print(f"  episodes found        {measured['episodes']:9d}")


def main() -> None:
    """Make the log, run the job on it, and print."""
    hours = float(sys.argv[1]) if len(sys.argv) > 1 else 48.0
    memory = psutil.virtual_memory().total / 2**30
    print(f"machine: {platform.platform()}, {os.cpu_count()} processors, {memory:.0f} GiB")
    print(f"python {platform.python_version()}, pandas {pd.__version__}, numpy {np.__version__}")
    with tempfile.TemporaryDirectory() as scratch:
        folder = Path(scratch)
        warm = cases.make_case(folder / "warm", cases.Job(duration=3700.0))
        first = run_job(warm, folder / "out_warm")
        case = make_well(folder / "case", hours)
        log = folder / "case" / "time.csv"
        read = best(lambda: pd.read_csv(log, engine="c"), 3)
        rows, columns = pd.read_csv(log, engine="c").shape
        size = log.stat().st_size / 2**20
        print(f"log: {rows:,} rows, {columns} channels, {size:.0f} MiB; read_csv (C engine) {read:.3f} s")
        print(f"first job after installing, on a small log, compiling: {first['outside']:.1f} s")
        measured = min((run_job(case, folder / "out") for _ in range(2)), key=lambda m: m["whole"])
        report(measured, read)
        longer = run_job(make_well(folder / "longer", 3.0 * hours), folder / "out_longer")
        growth = (longer["peak"] - measured["peak"]) / (longer["rows"] - measured["rows"]) * 1e6 / 2**20
        print(f"  each further million rows {growth:5.0f} MiB (wanted: at most 500 MB; 3 times the log)")
    helped, empty = start_up()
    print(
        f"tallyback --help: {helped * 1e3:.0f} ms, python -c pass: {empty * 1e3:.0f} ms, "
        f"ratio {helped / empty:.1f} (wanted: at most 4)"
    )


if __name__ == "__main__":
    main()
