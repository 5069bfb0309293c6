"""The schedule workbook: one table per sheet, typed cells, ready to print.

Text goes in as text even where it begins with ``=``, ``+``, ``-`` or ``@``; there are no macros
and no merged cells, and formulas on the sheet Recheck only. The file's bytes depend on the
tables alone.
"""

from __future__ import annotations

import math
import re
import zipfile
from collections.abc import Iterable, Mapping
from datetime import date
from io import BytesIO
from typing import TYPE_CHECKING, Any

from sizing.documents import recheck_sheet
from sizing.documents.plain_text import shortened, visible
from sizing.documents.recheck import not_rechecked, recheck_blocks, sheet_units
from sizing.documents.rows import JobTables, job_tables
from sizing.documents.sheets import Footer, Looks, put, set_page
from sizing.documents.tables import Cell, Column, Table, printed
from sizing.documents.wording import ALARMS, mark_runs, met
from sizing.results import JobResult, OptionResult

if TYPE_CHECKING:
    from openpyxl import Workbook
    from openpyxl.worksheet.worksheet import Worksheet

LONGEST_SHEET_NAME = 31
"""Characters in a sheet name (limit of spreadsheet programs)."""

ZIP_DATE = (1980, 1, 1, 0, 0, 0)
"""The earliest time a ZIP entry can hold; fixed so that equal content gives equal bytes."""

WIDEST_TEXT, WIDEST_PROSE, NARROWEST = 46, 60, 5
"""Column widths in characters, so that a page stays legible."""

CHARACTER, BOLD_HEAD = 0.85, 1.1
"""Width of a character of 9 point type in column units (an 11 point digit); bold over regular."""

TITLE_ROOM, EMPTY_COLUMN = 118.0, 8.43
"""Column units that title and notes may take on a page, and those of an untouched column."""

SLACK = 0.6
"""Characters by which a text may exceed its column before it is taken to wrap (rounding)."""

ROW = 12.75
"""Height of a row of 9 point type, points."""

RECHECK_AFTER = "Restraint"
"""The table behind which the sheet Recheck stands."""

_FORMULA_CELL = re.compile(rb'(<c r="([A-Z]+[0-9]+)"[^>]*><f>[^<]*</f>)<v\s*(?:/>|></v>)')
_ILLEGAL_IN_SHEET_NAME = re.compile(r"[\[\]:*?/\\]")


def workbook_bytes(
    job: JobResult, issued: date, previous: Mapping[str, Any] | None = None
) -> bytes:
    """Return schedule.xlsx for ``job``, with what changed since ``previous`` where given."""
    from openpyxl import Workbook

    tables = job_tables(job, issued, previous)
    book = Workbook()
    book.remove(book.active)
    looks = Looks(book)
    footer = Footer(job, issued)
    names = _SheetNames()
    for table in tables.shared:
        sheet = book.create_sheet(names.take(table.name))
        _fill(sheet, table, visible(job.brief.title), looks, footer, tables)
        if table.name == "Cover":
            _signing_boxes(sheet, looks)
    several = len(tables.by_option) > 1
    worked: dict[str, dict[str, float]] = {}
    for option, own in tables.by_option:
        for table in own:
            wanted = f"{table.name} {option.option}" if several else table.name
            sheet = book.create_sheet(names.take(wanted))
            above = f"{visible(job.brief.title)} · option {visible(option.option)}"
            _fill(sheet, table, above, looks, footer, tables)
            if table.name == RECHECK_AFTER:
                wanted = f"{recheck_sheet.NAME} {option.option}" if several else recheck_sheet.NAME
                sheet = book.create_sheet(names.take(wanted))
                worked[sheet.title] = _recheck(sheet, job, option, above, looks, footer, tables)
    book.calculation.fullCalcOnLoad = True
    book.properties.title = shortened(visible(job.brief.title), 200)
    book.properties.creator = f"sizing {job.version}"
    return _fixed_bytes(book, issued, worked)


def _recheck(
    sheet: Worksheet,
    job: JobResult,
    option: OptionResult,
    above: str,
    looks: Looks,
    footer: Footer,
    tables: JobTables,
) -> dict[str, float]:
    """Fill and set up the sheet Recheck; return what its formulas give."""
    from openpyxl.utils import get_column_letter

    us = tables.units.us
    found = recheck_sheet.fill_recheck(
        sheet,
        recheck_blocks(job.brief, option),
        above,
        sheet_units(us=us),
        looks,
        mark_runs(not_rechecked(option)),
    )
    wide = max(1, math.ceil((sheet.max_column - 5) / recheck_sheet.COLUMNS_A_PAGE))
    sheet.sheet_view.showGridLines = False
    sheet.print_area = f"A1:{get_column_letter(sheet.max_column)}{sheet.max_row}"
    sheet.print_title_rows = "1:2"
    sheet.print_title_cols = "A:A"
    set_page(sheet, footer, us=us, large_paper=True, pages_wide=wide)
    return found


class _SheetNames:
    """Hands out legal sheet names, unique without regard to case."""

    def __init__(self) -> None:
        self._taken: set[str] = {"history"}  # reserved by spreadsheet programs

    def take(self, wanted: str) -> str:
        """Return ``wanted`` made legal, shortened and, where taken, numbered."""
        legal = _ILLEGAL_IN_SHEET_NAME.sub("-", visible(wanted)).strip().strip("'") or "Sheet"
        name = _utf16_cut(legal, LONGEST_SHEET_NAME).rstrip("' ")
        number = 2
        while name.lower() in self._taken:
            tail = f" {number}"
            name = _utf16_cut(legal, LONGEST_SHEET_NAME - len(tail)).rstrip("' ") + tail
            number += 1
        self._taken.add(name.lower())
        return name


def _utf16_cut(text: str, units: int) -> str:
    """Cut to ``units`` UTF-16 code units, which is how spreadsheet programs count."""
    kept = ""
    used = 0
    for character in text:
        used += 1 if ord(character) < 0x10000 else 2
        if used > units:
            break
        kept += character
    return kept


def _fill(
    sheet: Worksheet,
    table: Table,
    above: str,
    looks: Looks,
    footer: Footer,
    tables: JobTables,
) -> None:
    put(sheet, 1, 1, table.title).font = looks.title
    lines = (above, *table.notes)
    for i, line in enumerate(lines, 2):
        put(sheet, i, 1, line).font = looks.quiet
    head = len(lines) + 2
    for j, column in enumerate(table.columns, 1):
        cell = put(sheet, head, j, f"{column.head}\n{column.unit}" if column.unit else column.head)
        cell.font, cell.fill, cell.border = looks.bold, looks.head_fill, looks.head_border
        cell.alignment = looks.alignment(
            horizontal="right" if column.numeric else "left",
            vertical="bottom",
            wrap_text=True,
            indent=0 if column.numeric else 1,
        )
    for i, row in enumerate(table.rows, head + 1):
        for j, (value, column) in enumerate(zip(row, table.columns, strict=True), 1):
            _put_styled(sheet, i, j, value, column, looks, total=False)
    last = head + len(table.rows)
    if table.totals is not None:
        for j, (value, column) in enumerate(zip(table.totals, table.columns, strict=True), 1):
            _put_styled(sheet, last + 1, j, value, column, looks, total=True)
    _size_columns(sheet, table, head)
    _page(sheet, table, head, last, footer, tables)


def _put_styled(
    sheet: Worksheet, row: int, j: int, value: Cell, column: Column, looks: Looks, *, total: bool
) -> None:
    alarm = value in ALARMS or (
        column.style == "ratio" and isinstance(value, float) and not met(value)
    )
    cell = put(sheet, row, j, value)
    prefixed = cell.quotePrefix
    cell.style = looks.of(column, text=isinstance(value, str), total=total, alarm=alarm)
    if prefixed:
        cell.quotePrefix = True


def _size_columns(sheet: Worksheet, table: Table, head: int) -> None:
    from openpyxl.utils import get_column_letter

    deepest = 1
    for j, column in enumerate(table.columns):
        cells = [*table.rows, *([table.totals] if table.totals else [])]
        widest = max((len(printed(row[j], column)) for row in cells), default=0)
        cap = WIDEST_PROSE if column.style == "prose" else WIDEST_TEXT
        if len(table.columns) == 2 and column.style == "prose":
            cap = 110
        words = max(len(word) for word in f"{column.head} {column.unit}".split())
        characters = min(max(widest, words * BOLD_HEAD, NARROWEST), cap)
        width = round(characters * CHARACTER + (1.5 if column.numeric else 2.5), 1)
        sheet.column_dimensions[get_column_letter(j + 1)].width = width
        room = (width - 1.5) / (CHARACTER * BOLD_HEAD)
        deepest = max(deepest, _lines(column.head, room) + (1 if column.unit else 0))
    sheet.row_dimensions[1].height = 20
    sheet.row_dimensions[head].height = ROW * deepest + 3
    for i, row in enumerate(table.rows, head + 1):
        lines = 1
        for j, (value, column) in enumerate(zip(row, table.columns, strict=True), 1):
            if isinstance(value, str) and not column.numeric:
                width = sheet.column_dimensions[get_column_letter(j)].width - 2.5
                lines = max(lines, _lines(value, width / CHARACTER + SLACK))
        if lines > 1:
            sheet.row_dimensions[i].height = min(ROW * lines + 1, 400)


def _lines(text: str, width: float) -> int:
    """Return how many lines the words of ``text`` take in a column of ``width`` characters."""
    lines, used = 1, 0
    for word in text.split(" "):
        length = len(word)
        if used and used + 1 + length > width:
            lines, used = lines + 1, 0
        if length > width:
            lines += int(length // width)
            length = int(length % width)
        used += length + (1 if used else 0)
    return lines


def _page(
    sheet: Worksheet, table: Table, head: int, last: int, footer: Footer, tables: JobTables
) -> None:
    from openpyxl.utils import get_column_letter

    right = get_column_letter(len(table.columns))
    bottom = last + (1 if table.totals is not None else 0)
    items = len(table.columns) == 2
    keys = 0 if items else table.keys
    sheet.sheet_view.showGridLines = False
    sheet.sheet_format.defaultRowHeight, sheet.sheet_format.customHeight = ROW, True
    sheet.freeze_panes = sheet.cell(row=head + 1, column=keys + 1)
    if table.rows and not items:
        sheet.auto_filter.ref = f"A{head}:{right}{last}"
    sheet.print_area = f"A1:{get_column_letter(_columns_to_print(sheet, table))}{bottom}"
    sheet.print_title_rows = f"1:{head}"
    if table.pages_wide > 1:
        sheet.print_title_cols = f"A:{get_column_letter(keys)}"
    set_page(
        sheet,
        footer,
        us=tables.units.us,
        large_paper=table.large_paper,
        pages_wide=table.pages_wide,
    )


def _columns_to_print(sheet: Worksheet, table: Table) -> int:
    """Return how many columns to print: beyond a narrow table, so that its title is not cut."""
    width = sum(dimension.width for dimension in sheet.column_dimensions.values())
    beyond = math.ceil((TITLE_ROOM - float(width)) / EMPTY_COLUMN)
    return len(table.columns) + max(0, beyond)


def _signing_boxes(sheet: Worksheet, looks: Looks) -> None:
    """Add empty boxes for who prepared and who checked, on the cover below the facts."""
    row = sheet.max_row + 2
    for label in ("Prepared by, date", "Checked by, date", "Revision"):
        name, box = put(sheet, row, 1, label), put(sheet, row, 2, None)
        name.font, name.border, box.border = looks.bold, looks.box, looks.box
        name.alignment = looks.alignment(vertical="center")
        sheet.row_dimensions[row].height = 28
        row += 1
    sheet.print_area = f"A1:B{row - 1}"


def _fixed_bytes(book: Workbook, issued: date, worked: Mapping[str, Mapping[str, float]]) -> bytes:
    """Save the book with fixed times: document properties by ``issued``, ZIP entries by 1980.

    ``worked`` holds what formulas give, by sheet and cell.
    """
    raw = BytesIO()
    book.save(raw)
    fixed = BytesIO()
    stamp = f"{issued.isoformat()}T00:00:00Z".encode()
    by_part = {
        f"xl/worksheets/sheet{i}.xml": worked.get(title, {})
        for i, title in enumerate(book.sheetnames, 1)
    }
    with zipfile.ZipFile(raw) as source, zipfile.ZipFile(fixed, "w") as target:
        for name in _sorted_parts(source.namelist()):
            content = source.read(name)
            if name == "docProps/core.xml":
                content = re.sub(
                    rb"(<dcterms:(?:created|modified)[^>]*>)[^<]*", rb"\g<1>" + stamp, content
                )
            elif values := by_part.get(name):
                content = _with_values(content, values)
            entry = zipfile.ZipInfo(name, date_time=ZIP_DATE)
            entry.external_attr = 0o644 << 16
            target.writestr(entry, content, compress_type=zipfile.ZIP_DEFLATED, compresslevel=6)
    return fixed.getvalue()


def _with_values(content: bytes, values: Mapping[str, float]) -> bytes:
    """Put what each formula gives beside it, for programs that show files without working."""

    def valued(match: re.Match[bytes]) -> bytes:
        return match.group(1) + b"<v>" + repr(values[match.group(2).decode()]).encode() + b"</v>"

    return _FORMULA_CELL.sub(valued, content)


def _sorted_parts(names: Iterable[str]) -> list[str]:
    """Content types first, as readers expect, the rest by name."""
    return sorted(names, key=lambda name: (name != "[Content_Types].xml", name))
