"""A short fuzz run over every reader; the long one is `python tests/fuzz/fuzz_inputs.py --seconds 3600`."""

import re
import subprocess
import sys
from pathlib import Path

SECONDS = 12


def test_no_reader_breaks_on_mutated_inputs(tmp_path):
    script = Path(__file__).parent / "fuzz_inputs.py"
    argv = [sys.executable, str(script), "--seconds", str(SECONDS), "--corpus", str(tmp_path / "corpus")]
    done = subprocess.run(argv, capture_output=True, text=True, errors="replace", check=False, timeout=300)
    assert done.returncode == 0, done.stderr[-3000:]
    runs = re.search(r"number_of_executed_units: (\d+)", done.stderr)
    assert runs is not None
    # all seeds at least, and mutants of them
    assert int(runs.group(1)) > 180
