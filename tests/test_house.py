"""The rules of the house run themselves: ruff, doctests, and what the README promises."""

import doctest
import importlib
import re
import subprocess
import sys
from pathlib import Path

import pytest

ROOT = Path(__file__).parents[1]
MODULES = sorted(
    ".".join(path.relative_to(ROOT).with_suffix("").parts).removesuffix(".__init__")
    for room in ("forensics", "pipelines")
    for path in (ROOT / room).rglob("*.py")
)


def test_ruff_finds_nothing():
    done = subprocess.run(
        [
            sys.executable,
            "-m",
            "ruff",
            "check",
            "--no-cache",
            "forensics",
            "pipelines",
            "tests",
            "sample_logs",
        ],
        cwd=ROOT,
        capture_output=True,
        text=True,
        check=False,
    )
    assert done.returncode == 0, done.stdout


@pytest.mark.parametrize("name", MODULES)
def test_examples_in_docstrings_hold(name):
    assert doctest.testmod(importlib.import_module(name)).failed == 0


def commands():
    """Give the lines that the README asks a user to paste."""
    blocks = re.findall(r"^```\w*\n(.*?)^```", (ROOT / "README.md").read_text(), re.DOTALL | re.MULTILINE)
    return [block.strip() for block in blocks]


def test_readme_has_two_commands_of_one_line_each():
    assert len(commands()) == 2
    for command in commands():
        assert "\n" not in command
        assert command.startswith("python3 -m venv .venv && .venv/bin/pip install ")


def test_readme_runs_a_sample_that_is_there():
    case = re.search(r"tallyback incident (\S+)", commands()[0])[1]
    assert (ROOT / case).is_file()


def test_continuous_integration_calls_the_readmes_test_command():
    assert commands()[1] in (ROOT / ".ci" / "run").read_text()
