"""The sheet Recheck: governing checks worked again in live spreadsheet formulas.

One block of rows for checks of one form. Inputs are values; every other line is a formula of
the cells to its left in the same row, and so are the utilisation and the two differences to
what the tool found.
"""

from __future__ import annotations

import math
from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from functools import cache
from typing import TYPE_CHECKING

from sizing.documents.recheck import RecheckBlock, RecheckLine, RecheckRow, SheetUnits
from sizing.documents.sheets import Looks, put
from sizing.documents.tables import Cell, Column
from sizing.standards.formula import Formula, spreadsheet_of

if TYPE_CHECKING:
    from openpyxl.worksheet.worksheet import Worksheet

TITLE = "Recheck: the governing checks of every member, worked again in live formulas"
NAME = "Recheck"

KEYS = ("Mark", "Group", "Section", "Combination", "Governing check")
WIDTHS = (8.0, 14.0, 17.0, 13.0, 25.0)
LINE_WIDTH, WIDEST_LINE = 11.5, 26.0
CHARACTERS_A_LINE, ROW = 1.25, 12.0
"""Characters of a heading per column unit of width, and points of a line of it."""

COLUMNS_A_PAGE = 14
"""Columns that stay legible on one large page beside the key columns."""

AGREES = 1e-6
"""A difference beyond this share is marked: far above rounding, far below anything that counts."""

ENDLESS = "unlimited"


@dataclass(frozen=True, kw_only=True, slots=True)
class _Line:
    """A column of a block as it is written: heads, formula, number format, place for values."""

    symbol: str
    unit: str
    text: str
    formula: Formula | None
    column: Column


def fill_recheck(
    sheet: Worksheet,
    blocks: Sequence[RecheckBlock],
    above: str,
    units: SheetUnits,
    looks: Looks,
    without: str,
) -> dict[str, float]:
    """Write the sheet, each block on a page of its own, and return what its formulas give.

    Programs that show a file without working it out (previews) need those values. ``without``
    are the marks of members that no resistance can be worked for.
    """
    from openpyxl.worksheet.pagebreak import Break

    put(sheet, 1, 1, TITLE).font = looks.title
    notes = [
        above,
        f"Units: {units.force}, {units.length}, {units.stress}. Tension is positive. Grey heads "
        "are inputs from brief, catalogue and standard; white heads are formulas of the cells to "
        "their left.",
        "Force is that of the combination which governs the sense. Differences are worked over "
        f"tool's, less 1; they stand out beyond {AGREES:.0e}.",
    ]
    if without:
        notes.append(f"Not worked, the section has no resistance to a force it carries: {without}.")
    if not blocks:
        notes.append("No member carries a force.")
    for i, line in enumerate(notes, 2):
        put(sheet, i, 1, line).font = looks.quiet
    row = first = len(notes) + 3
    found: dict[str, float] = {}
    widths: dict[int, float] = dict(enumerate(WIDTHS, 1))
    for block in blocks:
        if row > first:
            sheet.row_breaks.append(Break(id=row - 1))
        row = _Writer(sheet=sheet, block=block, units=units, looks=looks).write(row, found, widths)
    for column, width in widths.items():
        sheet.column_dimensions[_letter(column)].width = width
    sheet.freeze_panes = "B2"
    return found


@cache
def _letter(column: int) -> str:
    from openpyxl.utils import get_column_letter

    return str(get_column_letter(column))


@dataclass(frozen=True, kw_only=True)
class _Writer:
    """Writes one block."""

    sheet: Worksheet
    block: RecheckBlock
    units: SheetUnits
    looks: Looks

    @property
    def first(self) -> int:
        """Column of the force, before the worked lines."""
        return len(KEYS) + 1

    def write(self, row: int, found: dict[str, float], widths: dict[int, float]) -> int:
        """Write the block from ``row`` on and return the row after it, one left empty."""
        several = "check" if len(self.block.rows) == 1 else "checks"
        title = f"Governing {self.block.sense}: {len(self.block.rows)} {several} of this form"
        put(self.sheet, row, 1, title).font = self.looks.bold
        lines = self._columns()
        self._heads(row + 1, lines, widths)
        places = {line.symbol: self.first + j for j, line in enumerate(lines)}
        for i, check in enumerate(self.block.rows, row + 3):
            self._row(i, check, lines, places, found)
        return row + 4 + len(self.block.rows)

    def _columns(self) -> list[_Line]:
        units = self.units
        share = Column(head="", style="number", places=4)
        worked = [_line(line, units) for line in self.block.lines]
        force = _line(
            RecheckLine(
                symbol="Force", expression="analysis", unit="N", clause="", meaning="",
                formula=None,
            ),
            units,
        )  # fmt: skip
        return [
            force,
            *worked,
            _Line(symbol="Cap", unit="", text="of the group", formula=None, column=share),
            _Line(symbol="Resistance", unit=units.force, text="worked, times cap",
                  formula=None, column=force.column),
            _Line(symbol="by the tool", unit=units.force, text="resistance",
                  formula=None, column=force.column),
            _Line(symbol="Difference", unit="", text="of resistance", formula=None, column=share),
            _Line(symbol="Utilisation", unit="", text="worked", formula=None, column=share),
            _Line(symbol="by the tool", unit="", text="utilisation", formula=None, column=share),
            _Line(symbol="Difference", unit="", text="of utilisation", formula=None, column=share),
        ]  # fmt: skip

    def _heads(self, row: int, lines: Sequence[_Line], widths: dict[int, float]) -> None:
        looks = self.looks
        deepest = 1
        for j, head in enumerate(KEYS, 1):
            self._head(row, j, head, filled=True)
            self._head(row + 1, j, "", filled=True)
        after = len(lines) - 7
        for j, line in enumerate(lines):
            column = self.first + j
            words = max((len(word) for word in line.text.split(" ")), default=0)
            wanted = min(max(LINE_WIDTH, 0.9 * words, len(line.text) / 3.2), WIDEST_LINE)
            widths[column] = max(widths.get(column, 0.0), wanted)
            given = line.formula is None and j <= after
            self._head(row, column, f"{line.symbol}\n{line.unit}" if line.unit else line.symbol,
                       filled=given)  # fmt: skip
            self._head(row + 1, column, line.text, filled=given)
            self.sheet.cell(row=row + 1, column=column).font = looks.quiet
            room = widths[column] * CHARACTERS_A_LINE
            deepest = max(deepest, math.ceil(len(line.text) / room) + 1)
        self.sheet.row_dimensions[row].height = 2 * ROW + 4
        self.sheet.row_dimensions[row + 1].height = min(deepest, 8) * ROW

    def _head(self, row: int, column: int, words: str, *, filled: bool) -> None:
        looks = self.looks
        cell = put(self.sheet, row, column, words)
        cell.font, cell.border = looks.bold, looks.box
        if filled:
            cell.fill = looks.head_fill
        cell.alignment = looks.alignment(
            horizontal="left" if column <= len(KEYS) else "right", vertical="bottom", wrap_text=True
        )

    def _row(
        self,
        i: int,
        check: RecheckRow,
        lines: Sequence[_Line],
        places: Mapping[str, int],
        found: dict[str, float],
    ) -> None:
        text = Column(head="")
        keys = (check.mark, check.group, check.section, check.combination, check.clause)
        for j, key in enumerate(keys, 1):
            self._value(i, j, key, text)
        force, scale = self.units.scale("N"), self.units.scale
        cells = {name: f"{_letter(column)}{i}" for name, column in places.items()}
        values = [check.force * force, *self._scaled(check)]
        for j, (line, value) in enumerate(zip(lines, values, strict=False), self.first):
            if line.formula is None:
                self._value(i, j, value if math.isfinite(value) else ENDLESS, line.column)
                continue
            formula = spreadsheet_of(line.formula, cells.__getitem__, scale)
            self._formula(i, j, formula, value, line.column, found)
        last = self.first + len(values) - 1
        at = [f"{_letter(last + k)}{i}" for k in range(8)]
        worked = values[-1] * check.cap
        use = abs(values[0]) / worked
        tool = check.resistance * force
        tail: list[tuple[str | None, float]] = [
            (None, check.cap),
            (f"{at[0]}*{at[1]}", worked),
            (None, tool),
            (f"{at[2]}/{at[3]}-1", worked / tool - 1.0),
            (f"ABS({_letter(self.first)}{i})/{at[2]}", use),
            (None, check.utilisation),
            (f"{at[5]}/{at[6]}-1", use / check.utilisation - 1.0),
        ]
        for k, (formula_text, value) in enumerate(tail, 1):
            column = lines[len(values) - 1 + k].column
            if formula_text is None:
                self._value(i, last + k, value, column)
            else:
                self._formula(i, last + k, formula_text, value, column, found)

    def _scaled(self, check: RecheckRow) -> list[float]:
        return [
            value * self.units.scale(line.unit)
            for value, line in zip(check.values, self.block.lines, strict=True)
        ]

    def _value(self, i: int, j: int, value: Cell, column: Column) -> None:
        cell = put(self.sheet, i, j, value)
        prefixed = cell.quotePrefix
        cell.style = self.looks.of(column, text=isinstance(value, str), total=False, alarm=False)
        if prefixed:
            cell.quotePrefix = True

    def _formula(
        self, i: int, j: int, formula: str, value: float, column: Column, found: dict[str, float]
    ) -> None:
        cell = self.sheet.cell(row=i, column=j, value=f"={formula}")
        cell.style = self.looks.of(column, text=False, total=False, alarm=False)
        found[cell.coordinate] = value


def _line(line: RecheckLine, units: SheetUnits) -> _Line:
    places = {"N": 1, "m": 1, "m²": 1, "m2": 1, "m³": 1, "m⁴": 0, "m4": 0, "Pa": 2}
    us = {"N": 3, "m": 3, "m²": 4, "m2": 4, "m³": 3, "m⁴": 4, "m4": 4, "Pa": 3}
    kept = (places if units.force == "N" else us).get(line.unit, 5)
    rule = (
        f"= {line.expression}"
        if line.formula is not None
        else line.meaning or line.expression or "input"
    )
    return _Line(
        symbol=line.symbol,
        unit=units.name(line.unit),
        text=f"{rule} [{line.clause}]" if line.clause and line.formula is not None else rule,
        formula=line.formula,
        column=Column(head="", style="number", places=kept),
    )
