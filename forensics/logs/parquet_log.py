"""Logs as Parquet: typed columns, with units in their names or in the columns' own metadata."""

from __future__ import annotations

import json
import re
from pathlib import Path
from typing import TYPE_CHECKING

from forensics.errors import LogError
from forensics.logs.raw import Keep, RawLog

if TYPE_CHECKING:
    import pandas as pd
    import pyarrow as pa

MAGIC = b"PAR1"
# More than any run's log by far: a small file that claims it is damaged or hostile [bytes unpacked].
MOST = 2**34
_UNIT_KEYS = (b"unit", b"units", b"uom")


def sniff(path: Path, head: bytes) -> bool:
    """Tell whether a file is Parquet."""
    del path
    return head.startswith(MAGIC)


def read(path: Path, head: bytes, keep: Keep) -> RawLog:
    """Read a Parquet file.

    Parameters
    ----------
    path : Path
        The file.
    head : bytes
        Its first bytes.
    keep : callable
        Says which columns to load, by name.

    Returns
    -------
    RawLog
        Stamps stay stamps, with their zone where they have one; an index that pandas stored is a column.

    Raises
    ------
    LogError
        If the file is damaged, holds no row, or swells beyond reason.
    """
    del head
    import pyarrow as pa
    import pyarrow.parquet as pq

    try:
        with pq.ParquetFile(path) as file:
            schema = file.schema_arrow
            _check_size(file, path)
            wanted = [i for i, name in enumerate(schema.names) if i < 2 or keep(name) or _is_stamp(schema[i])]
            table = file.read([schema.names[i] for i in wanted])
    except (pa.ArrowException, OSError, ValueError) as error:
        reason = str(error).splitlines()[0]
        raise LogError(f"the Parquet file can't be read: {reason}; write it anew", file=path) from error
    if table.num_rows == 0:
        raise LogError("the Parquet file has no rows; expected a row a sample", file=path)
    names = tuple(_name(name) for name in schema.names)
    columns, notes = {}, []
    for number in wanted:
        column = _plain(table.column(schema.names[number]))
        if column is None:
            notes.append(f"column {names[number]!r} holds no plain values and was left out")
        else:
            columns[number] = column
    return RawLog(
        path=path,
        format="Parquet",
        names=names,
        units=tuple(_unit(schema.field(i)) for i in range(len(names))),
        table=_frame(columns, table.num_rows),
        first_line=1,
        notes=("lines are counted by row of data", *notes),
        date_hint=" ".join(names),
    )


def _check_size(file: object, path: Path) -> None:
    metadata = file.metadata  # type: ignore[attr-defined]
    size = sum(metadata.row_group(i).total_byte_size for i in range(metadata.num_row_groups))
    if size > MOST:
        raise LogError(
            f"the Parquet file unpacks to {size / 2**30:.0f} GiB; no log of one run does: split it", file=path
        )


def _is_stamp(field: pa.Field) -> bool:
    import pyarrow as pa

    return bool(pa.types.is_temporal(field.type))


def _name(name: str) -> str:
    """Name a column; the index pandas keeps without one is the time."""
    return "time" if re.fullmatch(r"__index_level_\d+__", name) else " ".join(name.split())


def _unit(field: pa.Field) -> str | None:
    """Find a unit in a column's metadata, plain or as JSON."""
    for key, value in (field.metadata or {}).items():
        text = value.decode("utf-8", errors="replace").strip()
        if key.lower() in _UNIT_KEYS:
            return text or None
        if text.startswith("{"):
            try:
                inner = json.loads(text)
            except ValueError:
                continue
            found = next((inner[k.decode()] for k in _UNIT_KEYS if k.decode() in inner), None)
            if isinstance(found, str) and found:
                return found
    return None


def _plain(column: pa.ChunkedArray) -> pa.ChunkedArray | None:
    """Bring a column to numbers, stamps or text (durations to seconds); None where it is nested."""
    import pyarrow as pa
    import pyarrow.compute as pc

    kind = column.type
    if pa.types.is_dictionary(kind):
        return _plain(column.cast(kind.value_type))
    if pa.types.is_nested(kind) or pa.types.is_binary(kind) or pa.types.is_null(kind):
        return pa.chunked_array([pa.nulls(len(column), pa.float64())]) if pa.types.is_null(kind) else None
    if pa.types.is_decimal(kind) or pa.types.is_float16(kind):
        return column.cast(pa.float64())
    if pa.types.is_date(kind) or pa.types.is_time(kind):
        return column.cast(pa.string())
    if pa.types.is_duration(kind):
        return pc.divide(column.cast(pa.duration("us")).cast(pa.int64()).cast(pa.float64()), 1e6)
    return column


def _frame(columns: dict[int, pa.ChunkedArray], rows: int) -> pd.DataFrame:
    import pandas as pd

    data = {number: column.to_pandas() for number, column in columns.items()}
    return pd.DataFrame(data, index=range(rows))
