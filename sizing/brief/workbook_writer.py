"""Writing a brief as a workbook that an engineer fills in: heads, notes, choices, clean pages.

Text goes in as text even where it begins with ``=``; there are no formulas and no merged cells.
"""

from __future__ import annotations

import io
from collections.abc import Mapping
from typing import TYPE_CHECKING, Any

from sizing.brief.workbook_file import column_letters
from sizing.brief.workbook_layout import EACH, SHEETS, RowSheet
from sizing.brief.workbook_sheets import FilledSheet, filled_sheets

if TYPE_CHECKING:
    from openpyxl import Workbook
    from openpyxl.worksheet.worksheet import Worksheet

TITLE_ROW, PURPOSE_ROW, NOTE_ROW, HEAD_ROW = 1, 2, 3, 4
"""Rows above the entries. In a sheet of items the notes have a column of their own."""

SPARE_ROWS = 200
"""Rows below the last entry that offer the choices too."""

NARROWEST, MIDDLING, WIDEST, NOTE_WIDTH, VALUE_WIDTH = 9, 18, 34, 60, 24
"""Column widths in characters."""

CHARACTERS = 1.15
"""Width of a character of the notes' type in column units, with some room."""

A4, A3 = 9, 8
"""Codes of paper sizes (ISO/IEC 29500)."""

WIDTH_OF_A4 = 150
"""Characters across a sheet of A4 on its side that are legible yet."""

_TEXT_KINDS = ("text", "date", "choice", "flag", "list", "quantities", "list or word", "table")
_SHORTEST_CHOICES = 255
"""Characters that a list of choices may have (limit of spreadsheet programs)."""


def workbook_bytes(tables: Mapping[str, Any]) -> bytes:
    """Return the tables of a brief as an .xlsx file.

    Raises :class:`~sizing.brief.workbook_sheets.CannotHoldError` for a value too long for a cell.
    """
    from openpyxl import Workbook

    book = Workbook()
    book.remove(book.active)
    looks = _Looks()
    for filled in filled_sheets(tables):
        sheet = book.create_sheet(filled.title)
        _fill(sheet, filled, looks)
        _lay_out(sheet, filled)
        _offer_choices(sheet, filled)
    title = tables.get("title")
    book.properties.title = title[:200] if isinstance(title, str) and title.isprintable() else ""
    book.properties.creator = "sizing"
    return _saved(book)


def _saved(book: Workbook) -> bytes:
    stream = io.BytesIO()
    book.save(stream)
    return stream.getvalue()


class _Looks:
    """The styles of the workbook."""

    def __init__(self) -> None:
        from openpyxl.styles import Alignment, Border, Font, PatternFill, Side

        self.title = Font(name="Arial", size=13, bold=True, color="2B3A46")
        self.note = Font(name="Arial", size=8, italic=True, color="4A5560")
        self.head = Font(name="Arial", size=9, bold=True)
        self.cell = Font(name="Arial", size=9)
        self.fill = PatternFill("solid", start_color="E6EAED")
        side, strong = Side(style="thin", color="9AA5AE"), Side(style="medium", color="2B3A46")
        self.under_head = Border(top=side, bottom=strong)
        self.under = Border(bottom=Side(style="hair", color="9AA5AE"))
        self.wrapped = Alignment(vertical="top", wrap_text=True)
        self.low = Alignment(vertical="bottom", wrap_text=True)
        self.right = Alignment(vertical="top", horizontal="right")


def _fill(sheet: Worksheet, filled: FilledSheet, looks: _Looks) -> None:
    _put(sheet, TITLE_ROW, 1, filled.title, text=True).font = looks.title
    _put(sheet, PURPOSE_ROW, 1, filled.note, text=True).font = looks.note
    for c, column in enumerate(filled.columns, start=1):
        if column.note and not filled.row_columns:
            cell = _put(sheet, NOTE_ROW, c, column.note, text=True)
            cell.font, cell.alignment = looks.note, looks.low
    for c, column in enumerate(filled.columns, start=1):
        cell = _put(sheet, HEAD_ROW, c, column.head, text=True)
        cell.font, cell.fill, cell.border = looks.head, looks.fill, looks.under_head
        cell.alignment = looks.low
    for r, row in enumerate(filled.rows, start=HEAD_ROW + 1):
        kinds = filled.row_columns[r - HEAD_ROW - 1 :][:1] * len(row) or filled.columns
        for c, (value, column) in enumerate(zip(row, kinds, strict=True), start=1):
            if value is None:
                cell = sheet.cell(r, c)
            else:
                cell = _put(sheet, r, c, value, text=isinstance(value, str))
            is_note = filled.columns[c - 1].head == "Note" and bool(filled.row_columns)
            cell.font, cell.border = looks.note if is_note else looks.cell, looks.under
            number = isinstance(value, (int, float)) and not isinstance(value, bool)
            cell.alignment = looks.right if number else looks.wrapped
            if column.kind in _TEXT_KINDS:
                cell.number_format = "@"


def _put(sheet: Worksheet, row: int, column: int, value: Any, *, text: bool) -> Any:
    """Put a value into a cell with its own type; numbers with every digit that they have."""
    cell = sheet.cell(row, column)
    if isinstance(value, float) and float(f"{value:.16g}") != value:
        cell.value = value
        cell._value = repr(value)  # openpyxl would write 16 digits, and some numbers have 17
        return cell
    cell.value = value
    if text:
        cell.data_type = "s"  # never a formula, never an error
    return cell


def _lay_out(sheet: Worksheet, filled: FilledSheet) -> None:
    widths = [_width(filled, c) for c in range(len(filled.columns))]
    for c, (column, width) in enumerate(zip(filled.columns, widths, strict=True), start=1):
        dimension = sheet.column_dimensions[column_letters(c)]
        dimension.width = width
        if column.kind in _TEXT_KINDS and not filled.row_columns:
            dimension.number_format = "@"  # new cells too: 1-2 stays a member, not a date
    if not filled.row_columns:
        lines = [
            -(-len(column.note) * CHARACTERS // width) if column.note else 1
            for column, width in zip(filled.columns, widths, strict=True)
        ]
        sheet.row_dimensions[NOTE_ROW].height = 11.5 * max(lines, default=1) + 2
    rows = [-(-len(c.head) * 1.2 // w) for c, w in zip(filled.columns, widths, strict=True)]
    sheet.row_dimensions[HEAD_ROW].height = 12.5 * max(rows, default=1) + 2
    sheet.freeze_panes = f"{'B' if len(filled.columns) > 1 else 'A'}{HEAD_ROW + 1}"
    sheet.sheet_view.showGridLines = False
    sheet.page_setup.orientation = "landscape"
    sheet.page_setup.paperSize = A3 if sum(widths) > WIDTH_OF_A4 else A4
    sheet.page_setup.fitToWidth, sheet.page_setup.fitToHeight = 1, 0
    sheet.sheet_properties.pageSetUpPr.fitToPage = True
    sheet.print_title_rows = f"{TITLE_ROW}:{HEAD_ROW}"
    sheet.oddFooter.left.text, sheet.oddFooter.right.text = "&A", "&P of &N"
    sheet.oddFooter.left.size = sheet.oddFooter.right.size = 8


def _width(filled: FilledSheet, c: int) -> float:
    if filled.row_columns:
        head = filled.columns[c].head
        return {"Item": WIDEST, "Note": NOTE_WIDTH}.get(head, VALUE_WIDTH)
    column = filled.columns[c]
    words = max((len(word) for word in column.head.split()), default=1)
    longest = max((len(str(row[c])) for row in filled.rows if row[c] is not None), default=0)
    least = max(words * 1.15, min(len(column.note) / 4, MIDDLING), NARROWEST)
    return min(max(least, longest * 1.05), WIDEST) + 1


def _offer_choices(sheet: Worksheet, filled: FilledSheet) -> None:
    """Drop-down lists for words to choose from; yes and no for flags; axes for supports."""
    from openpyxl.worksheet.datavalidation import DataValidation

    last = HEAD_ROW + len(filled.rows) + SPARE_ROWS
    if filled.row_columns:
        count = len(filled.columns)
        cells = [
            (column, f"B{r}:{column_letters(count)}{r}")
            for r, column in enumerate(filled.row_columns, start=HEAD_ROW + 1)
        ]
    else:
        cells = [
            (column, f"{column_letters(c)}{HEAD_ROW + 1}:{column_letters(c)}{last}")
            for c, column in enumerate(filled.columns, start=1)
        ]
    for column, where in cells:
        choices = ("yes", "no") if column.kind == "flag" else column.choices
        quoted = '"' + ",".join(choices) + '"'
        if not choices or len(quoted) > _SHORTEST_CHOICES:
            continue
        offer = DataValidation(type="list", formula1=quoted, allow_blank=True)
        offer.errorTitle, offer.error = column.head, "One of: " + ", ".join(choices)
        offer.showErrorMessage = True
        offer.add(where)
        sheet.add_data_validation(offer)
    _offer_names(sheet, filled)


def _offer_names(sheet: Worksheet, filled: FilledSheet) -> None:
    """Drop-down lists of the names on another sheet: groups of members, cases of loads."""
    from openpyxl.worksheet.datavalidation import DataValidation

    layout = next(s for s in SHEETS if s.title == filled.title)
    if not isinstance(layout, RowSheet) or layout.place.count(EACH) + layout.listed < 2:
        return
    head = layout.keys[0].head
    source = {"Group": "Groups", "Case": "Cases"}[head]
    c = [column.head for column in filled.columns].index(head) + 1
    letter, last = column_letters(c), HEAD_ROW + len(filled.rows) + SPARE_ROWS
    offer = DataValidation(
        type="list", formula1=f"{source}!$A${HEAD_ROW + 1}:$A${HEAD_ROW + SPARE_ROWS}"
    )
    offer.errorTitle, offer.error = head, f"A name from the sheet {source}"
    offer.errorStyle, offer.showErrorMessage = "warning", True
    offer.add(f"{letter}{HEAD_ROW + 1}:{letter}{last}")
    sheet.add_data_validation(offer)
