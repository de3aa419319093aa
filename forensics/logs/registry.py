"""The readers, in the order they are asked."""

from __future__ import annotations

import hashlib
from collections.abc import Callable
from dataclasses import dataclass
from pathlib import Path

from forensics.errors import LogError, no_file
from forensics.logs import csv_log, las_log, parquet_log, wits_log, witsml_log
from forensics.logs.packed import UNPACK_ERRORS, open_bytes, refuse_endless_line
from forensics.logs.raw import Keep, RawLog


@dataclass(frozen=True)
class Reader:
    """A format: `sniff` tells a file of its kind, `read` reads it; in `rows` a line is a row."""

    name: str
    sniff: Callable[[Path, bytes], bool]
    read: Callable[[Path, bytes, Keep], RawLog]
    rows: bool = False


# The more particular format stands first; delimited text takes what is left.
READERS: tuple[Reader, ...] = (
    Reader("Parquet", parquet_log.sniff, parquet_log.read),
    Reader("WITSML", witsml_log.sniff, witsml_log.read),
    Reader("WITS", wits_log.sniff, wits_log.read),
    Reader("LAS", las_log.sniff, las_log.read, rows=True),
    Reader("CSV", csv_log.sniff, csv_log.read, rows=True),
)

# First bytes of zip files (spreadsheets are such), of older spreadsheets, 7z, xz and bzip2 files.
ARCHIVES = (b"PK\x03\x04", b"\xd0\xcf\x11\xe0", b"7z\xbc\xaf", b"\xfd7zXZ", b"BZh")


def require(path: Path) -> None:
    """Refuse a path that is no file.

    Raises
    ------
    LogError
        If the file is missing, a folder, a device or a pipe.
    """
    fault = no_file(path)
    if fault is not None:
        raise LogError(f"{fault}; check the path of the log", file=path)


def read_head(path: Path, size: int = csv_log.HEAD) -> bytes:
    """Read the first bytes of a file, unpacked.

    Raises
    ------
    LogError
        If the file is missing, a folder, unreadable or empty.
    """
    require(path)
    try:
        with open_bytes(path) as file:
            head = file.read(size)
    except UNPACK_ERRORS as error:
        raise LogError(f"the file can't be read: {error}", file=path) from error
    if head.startswith(ARCHIVES):
        raise LogError(
            "this is an archive or a spreadsheet, not a log; unpack it, or save the sheet as CSV", file=path
        )
    if not head.strip():
        raise LogError("the file is empty; expected a header and rows of data", file=path)
    return head


def digest(path: Path) -> str:
    """SHA-256 of a file."""
    with path.open("rb") as file:
        return hashlib.file_digest(file, "sha256").hexdigest()


def read_raw(path: Path, keep: Keep) -> RawLog:
    """Read a log of any known format.

    Parameters
    ----------
    path : Path
        The file.
    keep : callable
        Says which columns to load, by name.

    Raises
    ------
    LogError
        If no reader knows the file, or it can't be read.
    """
    head = read_head(path)
    for reader in READERS:
        if reader.sniff(path, head):
            if reader.rows:
                refuse_endless_line(path)
            return reader.read(path, head, keep)
    known = ", ".join(reader.name for reader in READERS)
    raise LogError(f"the file is in no known format; known are {known}", file=path)
