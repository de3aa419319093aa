"""Refusals: what came, what was expected, and what to do about it."""

from __future__ import annotations

import difflib
import re
import stat
from collections.abc import Iterable
from pathlib import Path


class TallybackError(Exception):
    """Base of every error the program raises on purpose."""


class InputError(TallybackError):
    """The input can't be used; the message says where, what came and what is needed.

    Parameters
    ----------
    message : str
        What was found, what was expected and what to do.
    file : Path or str, optional
        The file at fault.
    line : int, optional
        Line number, counted from 1.
    column : str or int, optional
        Column name or number.
    """

    def __init__(
        self,
        message: str,
        *,
        file: Path | str | None = None,
        line: int | None = None,
        column: str | int | None = None,
    ) -> None:
        self.message = message
        self.file = file
        self.line = line
        self.column = column
        super().__init__(self.text)

    @property
    def text(self) -> str:
        """The message with its place in front."""
        place = [str(self.file)] if self.file is not None else []
        if self.line is not None:
            place.append(f"line {self.line}")
        if self.column is not None:
            place.append(f"column {self.column!r}")
        return f"{', '.join(place)}: {self.message}" if place else self.message


class CaseError(InputError):
    """The case file is wrong."""


class LogError(InputError):
    """A log can't be used."""


class TableError(InputError):
    """A survey, hole, string or mud table can't be used."""


class UnitError(InputError):
    """A unit is unknown, absent, or not one for its quantity."""


def nearest(word: str, known: Iterable[str]) -> str:
    """Name, as a clause, the known word nearest to `word`, or all of them where none is near."""
    names = list(known)
    close = difflib.get_close_matches(word, names, n=1, cutoff=0.6)
    if close:
        return f"did you mean {close[0]!r}?"
    return f"known are: {', '.join(sorted(names))}"


# Controls but tab and line end, and marks that turn the direction of all text after them.
_HIDDEN = re.compile(
    "[\x00-\x08\x0b-\x1f\x7f-\x9f\u061c\u200b\u200e\u200f\u202a-\u202e\u2028\u2029\u2066-\u2069\ufeff]"
)


def legible(text: str) -> str:
    r"""Show letters that steer a screen instead of standing on it; letters of any script stay as they are.

    Names come from other people's files: an escape code can repaint a terminal, and a mark of direction can
    make the words after it read backwards.

    Examples
    --------
    >>> legible("Kestrel\u202e 3")
    'Kestrel<U+202E> 3'
    """
    return _HIDDEN.sub(lambda found: f"<U+{ord(found[0]):04X}>", text)


def no_file(path: Path, most: int | None = None) -> str | None:
    """Say, as the end of a sentence, why a path can't be read as a file; None where it can.

    Devices and pipes are never opened: some have no end, and some wait for a writer who never comes.

    Parameters
    ----------
    path : Path
        Links are followed.
    most : int, optional
        Bytes the file may have.

    Examples
    --------
    >>> no_file(Path("no such file"))
    'is missing'
    """
    try:
        found = path.stat()
    except FileNotFoundError:
        return "is missing"
    except (OSError, ValueError) as error:
        return f"can't be read ({getattr(error, 'strerror', None) or error})"
    if stat.S_ISDIR(found.st_mode):
        return "is a folder"
    if not stat.S_ISREG(found.st_mode):
        return "is a device or a pipe, not a file"
    if most is not None and found.st_size > most:
        return f"has {found.st_size / 2**20:.1f} MiB, and more than {most / 2**20:g} MiB is not read here"
    return None
