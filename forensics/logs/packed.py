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
# No row of a log comes near this, and parsed it takes many times its size [bytes].
LONGEST_LINE = 2**22
# A file is searched for line ends at so many places a longest line; packed files below a size not at all.
STEPS, PIECE, FEW = 4, 2**14, 2**21


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


def refuse_endless_line(path: Path) -> None:
    """Refuse a text file with a line far longer than any row, before a parser builds it up in memory.

    Raises
    ------
    LogError
        If more than `LONGEST_LINE` bytes hold no line end.

    Notes
    -----
    A plain file is looked at here and there, each time as far as the next line end: a file of ordinary rows
    costs a hundredth of its reading.
    """
    packed = is_packed(path)
    if path.stat().st_size < (FEW if packed else LONGEST_LINE):
        return
    try:
        with open_bytes(path) as file:
            without = 0
            while piece := file.read(PIECE):
                ends = b"\n" in piece or b"\r" in piece
                without = 0 if ends else without + len(piece)
                if without > LONGEST_LINE:
                    raise LogError(
                        f"one line is longer than {LONGEST_LINE / 2**20:g} MiB; expected rows of data",
                        file=path,
                    )
                if ends and not packed:
                    file.seek(LONGEST_LINE // STEPS, io.SEEK_CUR)
    except UNPACK_ERRORS as error:
        raise LogError(f"the file can't be read: {error}", file=path) from error
