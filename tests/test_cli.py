"""The command line: what it says, where it says it, and how it leaves."""

import subprocess
import sys

import pytest

import forensics
from forensics.errors import LogError
from pipelines import cli

HEAVY = ("numpy", "pandas", "scipy", "matplotlib", "numba", "pyarrow", "sklearn", "lasio", "jinja2")


def stub(error=None):
    """Give a table of commands with one that fails, or does nothing."""

    def job(arguments):
        del arguments
        if error is not None:
            raise error
        return cli.DONE

    return (cli.Command("incident", "a stand-in", cli._incident_arguments, job),)


@pytest.fixture
def command(monkeypatch):
    def use(error):
        table = stub(error)
        parser = cli.build_parser
        monkeypatch.setattr(cli, "build_parser", lambda: parser(table))
        return cli.main(["incident", "case.toml"])

    return use


def test_help_lists_the_commands(capsys):
    assert cli.main(["--help"]) == 0
    assert "incident" in capsys.readouterr().out


def test_help_of_incident_names_the_common_options(capsys):
    assert cli.main(["incident", "--help"]) == 0
    text = capsys.readouterr().out
    for option in ("--out", "--units", "--quiet", "CASE.toml"):
        assert option in text


def test_version(capsys):
    assert cli.main(["--version"]) == 0
    assert capsys.readouterr().out == f"tallyback {forensics.__version__}\n"


def test_help_loads_nothing_heavy():
    code = (
        "import sys; from pipelines import cli; cli.main(['--help']);"
        f"sys.exit(','.join(m for m in {HEAVY} if m in sys.modules) or 0)"
    )
    done = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=False)
    assert done.stderr == ""


@pytest.mark.parametrize(
    "argv", [[], ["nonsense"], ["incident"], ["incident", "c.toml", "--units", "cubits"]]
)
def test_wrong_usage_is_status_2(argv, capsys):
    assert cli.main(argv) == 2
    captured = capsys.readouterr()
    assert captured.out == ""
    assert "usage" in captured.err


def test_done_is_status_0(command):
    assert command(None) == 0


def test_bad_input_is_one_message_and_status_2(command, capsys):
    error = LogError("has no column for hookload;\n name it", file="time.csv", line=1, column="HK")
    assert command(error) == 2
    captured = capsys.readouterr()
    assert captured.out == ""
    assert captured.err == ("tallyback: time.csv, line 1, column 'HK': has no column for hookload; name it\n")


def test_fault_is_one_line_and_status_1(command, capsys, monkeypatch):
    monkeypatch.delenv(cli.TRACEBACK_SWITCH, raising=False)
    assert command(ZeroDivisionError("by\nzero")) == 1
    err = capsys.readouterr().err
    assert err.startswith("tallyback: a fault of the program: ZeroDivisionError: by zero")
    assert "TALLYBACK_TRACEBACK=1" in err
    assert err.count("\n") == 1


def test_fault_shows_its_traceback_when_asked(command, capsys, monkeypatch):
    monkeypatch.setenv(cli.TRACEBACK_SWITCH, "1")
    assert command(ZeroDivisionError("by zero")) == 1
    err = capsys.readouterr().err
    assert "Traceback (most recent call last)" in err
    assert err.rstrip().splitlines()[-1].startswith("tallyback: a fault of the program")


def test_interrupt_is_said_and_status_1(command, capsys):
    assert command(KeyboardInterrupt()) == 1
    assert capsys.readouterr().err == "tallyback: stopped; nothing was written\n"
