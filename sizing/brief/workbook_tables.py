"""The tables of a workbook while they grow: values put in their place, with their cells."""

from __future__ import annotations

import re
from collections.abc import Iterator
from dataclasses import dataclass, field
from typing import Any

from sizing.brief.findings import Findings, KeyPath, quoted
from sizing.brief.workbook_cells import decode
from sizing.brief.workbook_file import Grid, Spot, spot_text
from sizing.brief.workbook_layout import UNITS, Column
from sizing.brief.workbook_places import Places

_UNIT = re.compile(r"\s*\[([^\]]*)\]\s*$")


class CannotPlaceError(Exception):
    """A value whose place in the tables is taken already."""


@dataclass(kw_only=True)
class Head:
    """A column head as found: its cell, its text without the unit, the unit or empty text."""

    spot: Spot
    text: str
    unit: str


@dataclass
class Draft:
    """Tables, places, findings, and remarks by cell; ``units``: heads with a unit, by cell."""

    findings: Findings
    tables: dict[str, Any] = field(default_factory=dict)
    places: Places = field(default_factory=Places)
    remarks: dict[str, str] = field(default_factory=dict)
    units: list[tuple[str, str, str]] = field(default_factory=list)

    def problem(self, title: str, spot: Spot, *, found: str, expected: str, fix: str = "") -> None:
        """Record a mistake in a cell."""
        self.findings.add((_cell(title, spot),), found=found, expected=expected, fix=fix)

    def decoded(self, grid: Grid, title: str, spot: Spot, column: Column) -> Any:
        """Return the value of a filled cell; a remark on it is kept."""
        decoded = decode(grid.cells[spot], column.kind, column.choices)
        if decoded.remark:
            self.remarks[spot_text(title, spot)] = decoded.remark
        return decoded.value

    def note_unit(self, column: Column, head: Head, title: str) -> None:
        """Keep a head's unit until the brief's units are known."""
        if head.unit:
            self.units.append((_cell(title, head.spot), column.unit, head.unit))

    def check_units(self) -> None:
        """Record heads whose unit is another than the one of bare numbers."""
        given = self.tables.get("units")
        units = given if isinstance(given, dict) else {}
        for cell, kind, unit in self.units:
            if not kind:
                self.findings.add(
                    (cell,),
                    found=f"the unit [{unit}] in the head",
                    expected="a head without a unit",
                )
            elif units.get(kind) in UNITS[kind] and units[kind].casefold() != unit.casefold():
                self.findings.add(
                    (cell,),
                    found=f"the unit [{unit}] in the head",
                    expected=f"[{units[kind]}], the unit of {kind} on the sheet General",
                    fix="A number in another unit is written with it, such as 120 mm.",
                )


def _cell(title: str, spot: Spot) -> str:
    return spot_text(title, spot)


def head_of(text: str, spot: Spot) -> Head:
    """Return a head without its unit."""
    flat = " ".join(text.split())
    unit = _UNIT.search(flat)
    return Head(spot=spot, text=_UNIT.sub("", flat), unit="" if unit is None else unit[1].strip())


def put(table: dict[str, Any], path: KeyPath, value: Any) -> None:
    """Put a value at a path of keys, making tables on the way; tables are merged.

    Raises :class:`CannotPlaceError` where something else stands already.
    """
    *way, last = (str(part) for part in path)
    for key in way:
        table = table.setdefault(key, {})
        if not isinstance(table, dict):
            raise CannotPlaceError(f"a value for {key} and one inside it")
    if isinstance(value, dict) and isinstance(table.get(last), dict):
        for key, item in value.items():
            put(table[last], (key,), item)
        return
    if last in table:
        raise CannotPlaceError(f"a second value for {quoted(last)}")
    table[last] = value


def rows_below(grid: Grid, head: int) -> Iterator[tuple[int, list[int]]]:
    """Yield each row below the heads that holds anything, with its filled columns."""
    rows: dict[int, list[int]] = {}
    for r, c in grid.cells:
        if r > head:
            rows.setdefault(r, []).append(c)
    yield from sorted(rows.items())


def refuse_merged(grid: Grid, head: int, title: str, draft: Draft) -> bool:
    """Record merged cells in or below the row of heads: which of the rows is a value for?

    Return whether there are any.
    """
    merged = [name for name, last in grid.merged if last >= head]
    for name in merged:
        draft.findings.add(
            (f"{title}!{name}",),
            found="merged cells",
            expected="one value in each cell",
            fix="Split the cells and repeat the value.",
        )
    return bool(merged)
