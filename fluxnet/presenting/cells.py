"""The cells of a table as text: a value and its sd together, numbers rounded."""

from __future__ import annotations

from dataclasses import replace
from math import isfinite

from fluxnet.ground.table import Align, Cell, Column, Table
from fluxnet.presenting.numbers import format_measured, format_number
from fluxnet.presenting.points import common_decimals

__all__ = ["table_cells"]


def table_cells(table: Table) -> tuple[tuple[Column, ...], tuple[tuple[str, ...], ...]]:
    """The columns and cells of a table as shown: a value and its sd stand together.

    A column without any cell is left out.

    Examples
    --------
    >>> value = Column("rate", "rate", align=Align.RIGHT)
    >>> table = Table("t", "", (value, Column("", "sd", sd_of="rate")), ((2.0, 0.11), (None, None)))
    >>> table_cells(table)[1]
    (('2.00 ± 0.11',), ('–',))
    """
    partner = {c.sd_of: k for k, c in enumerate(table.columns) if c.sd_of is not None}
    shown = [
        (k, c)
        for k, c in enumerate(table.columns)
        if c.sd_of is None
        and c.title
        and (not table.rows or any(row[k] not in (None, "") for row in table.rows))
    ]
    cells = [
        _column_cells(
            column,
            [row[k] for row in table.rows],
            [row[partner[column.key]] for row in table.rows] if column.key in partner else None,
            says_exact=column.key not in partner or table.columns[partner[column.key]].says_exact,
        )
        for k, column in shown
    ]
    rows = tuple(zip(*cells, strict=True)) if cells else ((),) * len(table.rows)
    return tuple(c for _, c in shown), rows


def _column_cells(
    column: Column, values: list[Cell], sds: list[Cell] | None, *, says_exact: bool
) -> list[str]:
    """The cells of one column as shown."""
    known = [None] * len(values) if sds is None else sds
    given = [None if sd == 0 and not says_exact else sd for sd in known]
    if column.even:
        alone = [
            float(value)
            for value, sd in zip(values, given, strict=True)
            if sd is None and isinstance(value, (int, float)) and isfinite(value)
        ]
        column = replace(column, decimals=common_decimals(alone, column.digits))
    return [_cell(value, sd, column) for value, sd in zip(values, given, strict=True)]


def _cell(value: Cell, sd: Cell, column: Column) -> str:
    if value is None:
        return "" if column.align is Align.LEFT else "–"
    if isinstance(value, bool):
        return "yes" if value else "no"
    if isinstance(value, str):
        return value
    if isinstance(sd, (int, float)):
        return format_measured(float(value), float(sd))
    if column.decimals is not None and isfinite(value) and (value or not column.even):
        return f"{round(value, column.decimals) + 0.0:.{column.decimals}f}"
    return format_number(float(value), column.digits)
