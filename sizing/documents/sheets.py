"""What every sheet of the workbook shares: styles, cells written by type, page set-up."""

from __future__ import annotations

import re
from datetime import date
from typing import TYPE_CHECKING, Any

from sizing.documents.plain_text import shortened, visible
from sizing.documents.tables import Cell, Column
from sizing.results import JobResult

if TYPE_CHECKING:
    from openpyxl import Workbook
    from openpyxl.worksheet.worksheet import Worksheet

_PAPER = {(False, False): 9, (False, True): 8, (True, False): 1, (True, True): 3}
"""(US, large) to paper size code of ISO/IEC 29500: A4, A3, letter, tabloid."""

_ESCAPE_LOOKALIKE = re.compile(r"_(?=x[0-9A-Fa-f]{4}_)")


class Footer:
    """Traceability on every page: brief and its hash, page n of N, version and date."""

    def __init__(self, job: JobResult, issued: date) -> None:
        source = job.brief.source
        name = shortened(visible(source.name), 50)
        self.left = _no_codes(f"{name} · SHA-256 {source.sha256[:12]}")
        self.right = _no_codes(f"sizing {job.version} · {issued.isoformat()}")
        self.title = _no_codes(shortened(visible(job.brief.title), 70))


def _no_codes(text: str) -> str:
    return text.replace("&", "&&")


class Looks:
    """The styles of the workbook, each registered once."""

    def __init__(self, book: Workbook) -> None:
        from openpyxl.styles import Alignment, Border, Font, PatternFill, Side

        self.book = book
        self.fine = Side(style="thin", color="9AA5AE")
        self.hair = Side(style="hair", color="9AA5AE")
        self.strong = Side(style="medium", color="2B3A46")
        self.font = Font(name="Arial", size=9)
        self.bold = Font(name="Arial", size=9, bold=True)
        self.title = Font(name="Arial", size=14, bold=True, color="2B3A46")
        self.quiet = Font(name="Arial", size=9, italic=True, color="4A5560")
        self.alarm = Font(name="Arial", size=9, bold=True, color="8A2C0D")
        self.head_fill = PatternFill("solid", start_color="E6EAED")
        self.under = Border(bottom=self.hair)
        self.over = Border(top=self.strong)
        self.box = Border(top=self.fine, bottom=self.fine, left=self.fine, right=self.fine)
        self.head_border = Border(top=self.fine, bottom=self.strong)
        self.alignment = Alignment
        self._known: dict[tuple[object, ...], Any] = {}

    def of(self, column: Column, *, text: bool, total: bool, alarm: bool) -> str:
        """Return the name of the style for one kind of cell."""
        key = (column.style, column.places, text, total, alarm)
        if key not in self._known:
            from openpyxl.styles import NamedStyle

            name = f"cell {len(self._known) + 1}"
            style = NamedStyle(name=name)
            style.font = self.alarm if alarm else self.bold if total else self.font
            style.border = self.over if total else self.under
            style.number_format = "@" if text else _number_format(column)
            style.alignment = self.alignment(
                horizontal="right" if column.numeric else "left",
                vertical="top",
                wrap_text=text and not column.numeric,
                indent=0 if column.numeric else 1,
            )
            self.book.add_named_style(style)
            self._known[key] = name
        return str(self._known[key])


def _number_format(column: Column) -> str:
    if column.style == "whole":
        return "0"
    places = 2 if column.style == "ratio" else column.places
    plain = "0." + "0" * places if places else "0"
    return f'{plain} "T";-{plain} "C";{plain}' if column.style == "force" else plain


def put(sheet: Worksheet, row: int, column: int, value: Cell) -> Any:
    """Write a cell with its type and return it: text stays text, whatever it begins with."""
    cell = sheet.cell(row=row, column=column)
    if isinstance(value, str):
        cell.value = _ESCAPE_LOOKALIKE.sub("_x005F_", value)
        cell.data_type = "s"  # whatever the text looks like
        if value.startswith(("=", "+", "-", "@")):
            cell.quotePrefix = True
    elif value is not None:
        cell.value = value
    return cell


def set_page(
    sheet: Worksheet, footer: Footer, *, us: bool, large_paper: bool, pages_wide: int
) -> None:
    """Set paper, margins, and what stands at the head and foot of every page."""
    setup = sheet.page_setup
    setup.orientation = "landscape"
    setup.paperSize = _PAPER[us, large_paper]
    setup.pageOrder = "overThenDown"
    setup.fitToWidth, setup.fitToHeight = pages_wide, 0
    sheet.sheet_properties.pageSetUpPr.fitToPage = True
    margins = sheet.page_margins
    margins.left = margins.right = 0.5
    margins.top, margins.bottom, margins.header, margins.footer = 0.7, 0.7, 0.35, 0.35
    sheet.oddHeader.left.text = footer.title
    sheet.oddHeader.right.text = _no_codes(sheet.title)
    sheet.oddFooter.left.text = footer.left
    sheet.oddFooter.center.text = "Page &P of &N"
    sheet.oddFooter.right.text = footer.right
    for part in (sheet.oddHeader.left, sheet.oddHeader.right, sheet.oddFooter.left,
                 sheet.oddFooter.center, sheet.oddFooter.right):  # fmt: skip
        part.size = 8
