"""Results that appear whole or not at all.

A job writes into a folder beside the one it was asked for; only when everything is written does that
folder take the place of the earlier results. A fault on the way leaves the earlier results as they were
and nothing else behind.
"""

from __future__ import annotations

import os
import shutil
from collections.abc import Iterator
from contextlib import contextmanager
from pathlib import Path

from forensics.errors import InputError

MARK = "summary.json"
RESULTS = frozenset(
    {
        *(MARK, "report.html", "report.pdf", "episodes.csv", "history.parquet", "friction.json"),
        *("explore.html", "history.las", "figures"),
    }
)
# What a folder of this program may hold beside, or without, the results of the main job.
PAGES = frozenset({"inspect.html", "calibration.json", "excerpt.txt"})


def check_target(target: Path) -> None:
    """Refuse a folder that results can't be put in, before any work is done.

    Parameters
    ----------
    target : Path
        The folder asked for; it need not exist.

    Raises
    ------
    InputError
        If it is a file, holds things that are not earlier results, has the present folder inside, or
        lies where nothing can be written.
    """
    place = target.resolve()
    if place.exists() and not place.is_dir():
        raise InputError("is a file, and a folder is needed for the results; name another", file=target)
    if place.is_dir():
        if Path.cwd().is_relative_to(place):
            raise InputError(
                "is where the program runs, and results replace their folder whole; name a folder inside it",
                file=target,
            )
        if any(place.iterdir()) and not any((place / name).is_file() for name in (MARK, *PAGES)):
            raise InputError(
                "holds files that are not earlier results of this program; name an empty or a new folder",
                file=target,
            )
    parent = next(folder for folder in place.parents if folder.exists())
    if not parent.is_dir() or not os.access(parent, os.W_OK | os.X_OK):
        raise InputError(f"can't be made, since {parent} can't be written to; name another", file=target)


def put_file(target: Path, name: str, data: bytes) -> None:
    """Put one file into a folder of results, whole or not at all; what else is there stays.

    Parameters
    ----------
    target : Path
        The folder; made where it is missing.
    name : str
        The file's name.
    data : bytes
        What it holds.

    Raises
    ------
    InputError
        If the folder can't be used or the file can't be written.
    """
    check_target(target)
    place = target.resolve()
    made = _make_parents(place, target)
    part = place / f".{name}.{os.getpid()}.part"
    try:
        part.write_bytes(data)
        part.replace(place / name)
    except OSError as error:
        part.unlink(missing_ok=True)
        for folder in reversed(made):
            folder.rmdir()
        raise _refusal(error, target) from error


@contextmanager
def whole_folder(target: Path) -> Iterator[Path]:
    """Give a new folder to write into, which becomes `target` when all went well.

    Files in an earlier results folder that this program did not write are kept.

    Parameters
    ----------
    target : Path
        Where the results belong.

    Yields
    ------
    Path
        The folder to write into.

    Raises
    ------
    InputError
        If the folder can't be written.
    """
    check_target(target)
    place = target.resolve()
    made = _make_parents(place.parent, target)
    fresh = place.parent / f".{place.name}.{os.getpid()}.part"
    try:
        fresh.mkdir()
        yield fresh
        _keep_foreign(place, fresh)
        _swap(fresh, place)
    except BaseException as error:
        shutil.rmtree(fresh, ignore_errors=True)
        for folder in reversed(made):
            if not any(folder.iterdir()):
                folder.rmdir()
        if isinstance(error, OSError):  # what runs inside only writes: a full disk, a vanished mount
            raise _refusal(error, target) from error
        raise


def _refusal(error: OSError, target: Path) -> InputError:
    return InputError(f"can't be written: {error.strerror}; name another folder", file=target)


def _make_parents(folder: Path, target: Path) -> list[Path]:
    """Make the missing folders above the results; return those made, outermost first."""
    missing = []
    while not folder.exists():
        missing.append(folder)
        folder = folder.parent
    made: list[Path] = []
    try:
        for part in reversed(missing):
            part.mkdir()
            made.append(part)
    except OSError as error:
        for part in reversed(made):
            part.rmdir()
        raise _refusal(error, target) from error
    return made


def _keep_foreign(earlier: Path, fresh: Path) -> None:
    """Copy what somebody else put in the earlier folder, so that the swap does not lose it."""
    if not earlier.is_dir():
        return
    for item in earlier.iterdir():
        if item.name in RESULTS or (fresh / item.name).exists():
            continue
        if item.is_dir() and not item.is_symlink():
            shutil.copytree(item, fresh / item.name, symlinks=True)
        else:
            shutil.copy2(item, fresh / item.name, follow_symlinks=False)


def _swap(fresh: Path, place: Path) -> None:
    """Put `fresh` where `place` is; the earlier folder comes back if that fails."""
    if not place.exists():
        fresh.rename(place)
        return
    earlier = place.parent / f".{place.name}.{os.getpid()}.old"
    place.rename(earlier)
    try:
        fresh.rename(place)
    except BaseException:
        earlier.rename(place)
        raise
    shutil.rmtree(earlier, ignore_errors=True)
