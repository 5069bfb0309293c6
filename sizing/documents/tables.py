"""Tables as plain data: what every writer prints, computed once.

A :class:`Table` holds typed cells (numbers already in the unit of its column head), so that a
workbook, a page and a screen can only differ in looks.
"""

from __future__ import annotations

from dataclasses import dataclass, replace
from typing import Literal

Cell = str | float | int | None
"""Text, a number in the column's unit, a count, or nothing."""

CellStyle = Literal["text", "prose", "whole", "number", "force", "ratio"]
"""``prose`` may run over several lines; ``force`` prints its sense (T or C) beside the sign;
``ratio`` is a utilisation, printed with two decimals."""


@dataclass(frozen=True, kw_only=True, slots=True)
class Column:
    """One column: ``head`` above ``unit`` (empty for none), decimals, and how cells look.

    A column that is not ``essential`` stands in the workbook only, not in the report.
    """

    head: str
    unit: str = ""
    style: CellStyle = "text"
    places: int = 0
    essential: bool = True

    @property
    def numeric(self) -> bool:
        """Whether cells stand right-aligned as numbers."""
        return self.style in ("whole", "number", "force", "ratio")


@dataclass(frozen=True, kw_only=True, slots=True)
class Table:
    """One table. ``name`` is short (a sheet name), ``title`` stands above it.

    ``notes`` are short lines between title and heads. ``totals`` is a last row as wide as the
    columns. The first ``keys`` columns stay in sight when the table is wider than the page;
    ``pages_wide`` is how many pages wide it prints. ``deciding`` are the rows that stand in the
    report, where the table is too long for it (None: all of them).
    """

    name: str
    title: str
    columns: tuple[Column, ...]
    rows: tuple[tuple[Cell, ...], ...]
    notes: tuple[str, ...] = ()
    totals: tuple[Cell, ...] | None = None
    keys: int = 1
    pages_wide: int = 1
    large_paper: bool = False
    deciding: tuple[int, ...] | None = None


def essential_part(table: Table) -> Table:
    """Return the table with its deciding rows and without columns that are not essential."""
    kept = [j for j, column in enumerate(table.columns) if column.essential]
    rows = range(len(table.rows)) if table.deciding is None else table.deciding
    left_out = len(table.rows) - len(rows)
    note = f"Deciding rows only; the workbook holds {left_out} more."
    return replace(
        table,
        columns=tuple(table.columns[j] for j in kept),
        rows=tuple(tuple(table.rows[i][j] for j in kept) for i in rows),
        notes=(*table.notes, note) if left_out else table.notes,
        deciding=None,
        totals=tuple(table.totals[j] for j in kept) if table.totals is not None else None,
    )


def printed(cell: Cell, column: Column) -> str:
    """Return a cell as it stands on paper."""
    if cell is None:
        return ""
    if isinstance(cell, str):
        return cell
    if column.style == "whole":
        return f"{cell:d}" if isinstance(cell, int) else f"{cell:.0f}"
    places = 2 if column.style == "ratio" else column.places
    number = f"{cell:.{places}f}"
    if float(number) == 0.0:
        return number.removeprefix("-")
    if column.style == "force":
        return f"{number} {'T' if cell > 0.0 else 'C'}"
    return number
