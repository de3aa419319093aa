"""Fuzz every reader of the program: logs of all formats, tables, case files.

    python tests/fuzz/fuzz_inputs.py --seconds 3600 --corpus /some/folder

Guided by coverage through atheris (libFuzzer) where it is installed; elsewhere plain mutation of the same
seeds, which finds less. What a reader may do with any bytes: give a table, or refuse with an `InputError`.
Any other exception, more than ten seconds, or more than 2 GB is a fault, and the input is left in the corpus
folder's parent or the working folder.
"""

from __future__ import annotations

import argparse
import random
import sys
import tempfile
import time
import warnings
from pathlib import Path

ROOT = Path(__file__).parents[2]
SEEDS = ROOT / "tests" / "data" / "logs"
LONGEST = 6000
SUFFIXES = (".csv", ".las", ".xml", ".wits", ".parquet", ".txt", ".csv.gz")
TABLES = ("survey", "hole", "string", "mud")
CASE = b"""format = 1
[case]
id = "fuzz"
[logs]
time = ["log.csv"]
timezone = "Europe/Oslo"
[logs.channels]
hookload = { column = "HK", unit = "kN" }
[survey]
file = "survey.csv"
[hole]
file = "hole.csv"
[string]
file = "string.csv"
[fluid]
density = "1.25 g/cm3"
"""
ROWS = {
    "survey": b"md [m],inclination [deg],azimuth [deg]\n0,0,0\n900,0,10\n1500,45,20\n",
    "hole": b"top [m],bottom [m],diameter [mm],kind\n0,1200,224,cased\n1200,2500,216,open\n",
    "string": (
        b"name,kind,length [m],od [mm],id [mm],weight [kg/m]\nbit,bit,1,215,50,90\n"
        b"dp,drillpipe,3000,127,108,31\n"
    ),
    "mud": b"depth [m],density [g/cm3]\n0,1.1\n2000,1.3\n",
}


def seeds() -> list[bytes]:
    """Every small defect of the tests, each with the byte that names its kind in front."""
    out = []
    for path in sorted(SEEDS.iterdir()):
        data = path.read_bytes()
        suffix = "".join(path.suffixes[-2:]) if path.suffix == ".gz" else path.suffix
        if len(data) <= LONGEST and suffix in SUFFIXES:
            out.append(bytes([SUFFIXES.index(suffix)]) + data)
    out += [bytes([100 + k]) + ROWS[name] for k, name in enumerate(TABLES)]
    return [*out, bytes([200]) + CASE]


class Target:
    """Hands bytes to the reader their first one names."""

    def __init__(self, folder: Path) -> None:
        self.folder = folder
        self.runs = 0
        for name, text in ROWS.items():
            (folder / f"{name}.csv").write_bytes(text)
        (folder / "log.csv").write_bytes(b"time,HK\n")

    def __call__(self, data: bytes) -> None:
        """Read what the bytes are; refusals are answers, anything else is raised."""
        from forensics.errors import InputError

        if not data:
            return
        self.runs += 1
        try:
            self._read(data[0], data[1:])
        except InputError as refusal:
            if not refusal.message.strip():
                raise AssertionError("a refusal without words") from refusal

    def _read(self, kind: int, data: bytes) -> None:
        if kind >= 200:
            self._case(data)
        elif kind >= 100:
            self._table(TABLES[kind % len(TABLES)], data)
        else:
            self._log(SUFFIXES[kind % len(SUFFIXES)], data)

    def _log(self, suffix: str, data: bytes) -> None:
        from forensics.case import Case, FluidSettings, LogSettings
        from forensics.logs.read import read_time_logs

        path = self.folder / f"log{suffix}"
        path.write_bytes(data)
        nowhere = Path("nowhere")
        case = Case(
            nowhere, "fuzz", "fuzz", LogSettings((path,)), nowhere, nowhere, nowhere, FluidSettings(1250.0)
        )
        read_time_logs(case)

    def _table(self, name: str, data: bytes) -> None:
        from forensics.case import FluidSettings
        from forensics.well.fluid import load_fluid
        from forensics.well.hole import load_hole
        from forensics.well.survey import load_trajectory
        from forensics.well.tally import load_string

        path = self.folder / ("table.xml" if data.lstrip()[:1] == b"<" else "table.csv")
        path.write_bytes(data)
        if name == "mud":
            load_fluid(FluidSettings(file=path))
        else:
            {"survey": load_trajectory, "hole": load_hole, "string": load_string}[name](path)

    def _case(self, data: bytes) -> None:
        from forensics.case import load_case

        path = self.folder / "case.toml"
        path.write_bytes(data)
        load_case(path)


def guided(target: Target, corpus: Path, seconds: int) -> None:
    """Let libFuzzer look for inputs that reach new code; it ends the process by itself."""
    import atheris

    for number, seed in enumerate(seeds()):
        (corpus / f"seed_{number:03d}").write_bytes(seed)
    options = [f"-max_total_time={seconds}", "-timeout=10", "-rss_limit_mb=2048", f"-max_len={LONGEST}"]
    options += ["-print_final_stats=1", f"-artifact_prefix={corpus.parent}/"]
    atheris.Setup([sys.argv[0], str(corpus), *options], target)
    atheris.Fuzz()


def blind(target: Target, corpus: Path, seconds: int) -> None:
    """Mutate the seeds at random."""
    rng = random.Random(20240229)
    known, end = seeds(), time.monotonic() + seconds
    for seed in known:
        target(seed)
    while time.monotonic() < end:
        data = bytearray(rng.choice(known))
        for _ in range(rng.randint(1, 8)):
            at = rng.randrange(len(data)) if data else 0
            cut = rng.choice((b"", bytes([rng.randrange(256)]), rng.choice(known)[1 : rng.randrange(2, 60)]))
            data[at : at + rng.randrange(4)] = cut
        (corpus.parent / "last_input").write_bytes(data)
        target(bytes(data[:LONGEST]))
    sys.stderr.write(f"stat::number_of_executed_units: {target.runs}\n")


def main() -> None:
    """Fuzz for the time asked."""
    parser = argparse.ArgumentParser(description=__doc__)
    parser.add_argument("--seconds", type=int, default=60)
    parser.add_argument("--corpus", type=Path)
    asked = parser.parse_args()
    warnings.simplefilter("ignore")
    with tempfile.TemporaryDirectory() as scratch:
        corpus = asked.corpus or Path(scratch) / "corpus"
        corpus.mkdir(parents=True, exist_ok=True)
        work = Path(scratch) / "work"
        work.mkdir()
        try:
            import atheris
        except ImportError:
            blind(Target(work), corpus, asked.seconds)
            return
        with atheris.instrument_imports(include=["forensics"], enable_loader_override=False):
            import forensics.case
            import forensics.logs.read
            import forensics.well.model  # noqa: F401
        guided(Target(work), corpus, asked.seconds)


if __name__ == "__main__":
    main()
