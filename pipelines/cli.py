"""The command line: `tallyback COMMAND ...`.

Only argparse is imported on the way to the help text. A job, with all it needs, is imported when its
command runs, so that asking for help does not wait for the numerical libraries.
"""

from __future__ import annotations

import argparse
import os
import sys
from collections.abc import Callable, Sequence

DONE, FAULT, BAD_INPUT, SOME_FAILED = 0, 1, 2, 3
TRACEBACK_SWITCH = "TALLYBACK_TRACEBACK"


class Command:
    """A command: its name, what it does in a line, how its arguments are declared and what runs it."""

    def __init__(
        self,
        name: str,
        summary: str,
        declare: Callable[[argparse.ArgumentParser], None],
        job: Callable[[argparse.Namespace], int],
    ) -> None:
        self.name = name
        self.summary = summary
        self.declare = declare
        self.job = job


def _incident_arguments(parser: argparse.ArgumentParser) -> None:
    parser.add_argument("case", metavar="CASE.toml", help="the case file of the run")
    parser.add_argument(
        "--also",
        action="append",
        choices=("las", "figures", "verdicts"),
        default=[],
        help="write besides: the reconstructed channels as LAS 2.0, each figure as SVG and PNG, or "
        "verdicts_draft.csv, to accept, reject or relabel episodes in",
    )
    parser.add_argument(
        "--paper",
        choices=("a4", "letter"),
        help="sheets of report.pdf (default a4, letter with --units field)",
    )


def _incident(arguments: argparse.Namespace) -> int:
    from pipelines import incident  # heavy: loaded only when the job runs

    a = arguments
    result = incident.run(a.case, a.out, a.units, a.quiet, a.also, a.paper)
    if not a.quiet:
        for remark in result.remarks:
            _say(remark)
    _print("\n".join(result.lines) + "\n")
    return DONE


def _inspect_arguments(parser: argparse.ArgumentParser) -> None:
    parser.add_argument(
        "paths", metavar="FILE", nargs="+", help="one case file, or bare logs with any tables at hand"
    )
    parser.add_argument("--draft", metavar="CASE.toml", help="write a case file made from the bare logs here")
    parser.add_argument(
        "--excerpt",
        metavar=("START", "END"),
        nargs=2,
        help="write an anonymous excerpt of the case between two stamps, to share what is wrong with it",
    )


def _inspect(arguments: argparse.Namespace) -> int:
    from pipelines import inspection  # heavy: loaded only when the job runs

    a = arguments
    if a.excerpt is not None:
        folder, said = inspection.run_excerpt(a.paths, tuple(a.excerpt), a.out)
        _print("\n".join((*said, f"excerpt: {folder}")) + "\n")
        return DONE
    result = inspection.run(a.paths, a.out, a.units, a.quiet, a.draft)
    _print(f"{result.text}\npage: {result.page}\n")
    if result.draft is not None:
        _print(f"draft: {result.draft}\n")
    for refusal in result.found.refusals:
        _say(" ".join(refusal.split()))
    return BAD_INPUT if result.found.refusals else DONE


def _calibrate_arguments(parser: argparse.ArgumentParser) -> None:
    parser.add_argument("cases", metavar="CASE.toml", nargs="+", help="case files of runs to pool")


def _calibrate(arguments: argparse.Namespace) -> int:
    from pipelines import calibration  # heavy: loaded only when the job runs

    result = calibration.run(arguments.cases, arguments.out, arguments.units, arguments.quiet)
    _print("\n".join(result.lines) + "\n")
    return SOME_FAILED if result.failures else DONE


COMMANDS: tuple[Command, ...] = (
    Command(
        "incident",
        "read a run's logs, reconstruct its loads, and report when, where and how the string buckled",
        _incident_arguments,
        _incident,
    ),
    Command(
        "inspect",
        "show what was read of a case or of bare logs: files, columns, units, gaps, faults; no mechanics",
        _inspect_arguments,
        _inspect,
    ),
    Command(
        "calibrate",
        "friction factors of one or several cases with their uncertainty, pooled for the next well's plan",
        _calibrate_arguments,
        _calibrate,
    ),
)


def build_parser(commands: Sequence[Command] = COMMANDS) -> argparse.ArgumentParser:
    """Make the parser of the command line from the table of commands.

    Parameters
    ----------
    commands : sequence of Command
        The commands to offer.

    Returns
    -------
    argparse.ArgumentParser
        Parser whose result names the command in `command`.
    """
    parser = argparse.ArgumentParser(
        prog="tallyback",
        description="Reconstructs how a drill string or liner was loaded and where it buckled, from the "
        "rig's logs, the day after.",
        epilog="exit status: 0 done; 1 a fault of the program; 2 the input can't be used; 3 some cases of "
        "a batch failed",
    )
    parser.add_argument("--version", action="store_true", help="show the version and exit")
    offered = parser.add_subparsers(dest="command", metavar="COMMAND", title="commands")
    for command in commands:
        sub = offered.add_parser(command.name, help=command.summary, description=command.summary)
        command.declare(sub)
        sub.add_argument("--out", metavar="DIR", help="folder for the results (default reports/<case id>)")
        sub.add_argument(
            "--units", choices=("metric", "field"), default="metric", help="units the report shows"
        )
        sub.add_argument("--quiet", action="store_true", help="show no progress")
        sub.set_defaults(job=command.job)
    return parser


def _print(text: str) -> None:
    from forensics.errors import legible

    text = legible(text)
    encoding = sys.stdout.encoding or "utf-8"
    try:
        sys.stdout.write(text.encode(encoding, "replace").decode(encoding))  # a title may hold any letter
        sys.stdout.flush()
    except BrokenPipeError:  # whoever read on has read enough
        sys.stdout = open(os.devnull, "w", encoding="utf-8")  # noqa: SIM115, PTH123 - Python flushes it at its end


def _say(message: str) -> None:
    from forensics.errors import legible

    sys.stderr.write(f"tallyback: {legible(message)}\n")


def _fault(error: Exception) -> int:
    """Word an exception as one line, and say how to see more."""
    from forensics.errors import InputError  # its imports would slow the help text

    if isinstance(error, InputError):
        _say(" ".join(error.text.split()))
        return BAD_INPUT
    if os.environ.get(TRACEBACK_SWITCH, "") not in ("", "0"):
        import traceback

        traceback.print_exception(error)
    words = " ".join(f"{type(error).__name__}: {error}".split())
    _say(f"a fault of the program: {words} (set {TRACEBACK_SWITCH}=1 to see where it happened)")
    return FAULT


def main(argv: Sequence[str] | None = None) -> int:
    """Run the command line.

    Parameters
    ----------
    argv : sequence of str, optional
        Arguments without the program's name; `sys.argv[1:]` where left out.

    Returns
    -------
    int
        Exit status: 0 done, 1 a fault of the program, 2 the input can't be used.
    """
    parser = build_parser()
    try:
        arguments = parser.parse_args(argv)
    except SystemExit as leaving:  # argparse leaves by exception after help (0) or wrong usage (2)
        return int(leaving.code or 0)
    if arguments.version:
        from forensics import __version__

        sys.stdout.write(f"tallyback {__version__}\n")
        return DONE
    if arguments.command is None:
        parser.print_usage(sys.stderr)
        _say("name a command; `tallyback --help` lists them")
        return BAD_INPUT
    try:
        return arguments.job(arguments)
    except KeyboardInterrupt:
        _say("stopped; nothing was written")
        return FAULT
    except Exception as error:  # the last line of defence: every fault gets its one line
        return _fault(error)
