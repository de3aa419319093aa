"""CSV tables (survey, hole, string, mud, records): columns by name, units at the edge, cells checked.

A column's unit stands in its header, in brackets of any kind or after the name (`md [m]`, `MD (ft)`,
`md_m`), or in a second row of units. A bad cell is refused with its file, line and column.
"""

from forensics.tables.columns import Column, plain
from forensics.tables.reader import NULLS, Table, decode, read_table

__all__ = ["NULLS", "Column", "Table", "decode", "plain", "read_table"]
