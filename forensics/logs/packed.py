"""Files as bytes, unpacked where gzip packed them, and never more of them than a log can be."""

from __future__ import annotations

import gzip
import io
import zlib
from pathlib import Path
from typing import TYPE_CHECKING, BinaryIO

from forensics.errors import LogError

if TYPE_CHECKING:
    from _typeshed import WriteableBuffer

# What unpacking a damaged gzip file may raise.
UNPACK_ERRORS = (OSError, EOFError, zlib.error)
# Rig logs pack 5 to 40 times; repeated filler packs up to 1,030 times. Small files may do as they like.
MOST_TIMES, SMALL = 200, 2**26
# No file of one run comes near this unpacked [bytes].
MOST = 2**32


class _Bounded(io.RawIOBase):
    """A packed file read through a meter: more than `most` bytes are refused."""

    def __init__(self, path: Path, most: int) -> None:
        self._file = gzip.GzipFile(path)
        self._path, self._most, self._seen = path, most, 0

    def readable(self) -> bool:
        return True

    def readinto(self, buffer: WriteableBuffer, /) -> int:
        count = self._file.readinto(buffer)
        self._seen += count
        if self._seen > self._most:
            raise LogError(
                f"the packed file holds more than {self._most / 2**20:.0f} MiB, far more than a log of its "
                "size packs to; unpack it yourself if it is one",
                file=self._path,
            )
        return count

    def close(self) -> None:
        self._file.close()
        super().close()


def is_packed(path: Path) -> bool:
    """Tell whether a file is packed with gzip, whatever its name says."""
    with path.open("rb") as file:
        return file.read(2) == b"\x1f\x8b"


def open_bytes(path: Path) -> BinaryIO:
    """Open a file for reading bytes, unpacked.

    Parameters
    ----------
    path : Path
        The file.

    Returns
    -------
    BinaryIO
        Raises one of `UNPACK_ERRORS` while read where the file is damaged, `LogError` where it unpacks to
        far more than a log can be.
    """
    if not is_packed(path):
        return path.open("rb")
    most = min(MOST, max(SMALL, MOST_TIMES * path.stat().st_size))
    return io.BufferedReader(_Bounded(path, most), 2**18)


def read_bytes(path: Path) -> bytes:
    """Read a whole file, unpacked.

    Raises
    ------
    LogError
        If it can't be read or unpacked.
    """
    try:
        with open_bytes(path) as file:
            return file.read()
    except UNPACK_ERRORS as error:
        raise LogError(f"the file can't be unpacked: {error}", file=path) from error
