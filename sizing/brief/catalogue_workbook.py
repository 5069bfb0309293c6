"""A catalogue in a workbook (.xlsx): its cells as text, to be read like those of a CSV file.

Numbers are taken as stored, whatever the sheet shows; formulas by their last computed value.
"""

from __future__ import annotations

import io
import warnings
from collections.abc import Callable, Iterator
from datetime import date, datetime, time
from typing import Any

from sizing.brief.archives import ArchiveError, open_archive
from sizing.brief.catalogue_text import (
    MOST_TITLE_LINES,
    Row,
    TextProblemsError,
    TextTable,
    header_settings,
    is_comment,
)
from sizing.errors import Problem

LARGEST_UNPACKED = 20 * 1024 * 1024
"""Bytes. Sheets pack about ten to one; more than this is no section table but a trap."""
MOST_ROWS = 20_000
MOST_COLUMNS = 200


def workbook_table(
    data: bytes, file: str, looks_like_heads: Callable[[list[str]], bool]
) -> TextTable:
    """Return the first sheet that has column heads (else the first one) as a table of text.

    Raises :class:`TextProblemsError` for a file that is no workbook and for an empty one.
    """
    sheets = [(name, rows) for name, rows in _sheets(data, file) if rows]
    if not sheets:
        raise _refused(
            file, "a workbook without filled cells", "a sheet with column heads and rows"
        )
    with_heads = [s for s in sheets if _head_place(s[1], looks_like_heads) is not None]
    name, rows = (with_heads or sheets)[0]
    remarks = [f"Read from sheet {name!r}; line numbers are its row numbers."]
    if len(sheets) > 1:
        others = ", ".join(repr(other) for other, _ in sheets if other != name)
        remarks.append(f"Sheets not read: {others}.")
    comments = [" ".join(c for c in row.cells if c) for row in rows if is_comment(row.cells[0])]
    body = [row for row in rows if not is_comment(row.cells[0])]
    place = _head_place(body, looks_like_heads) or 0
    titles = [" ".join(cell for cell in row.cells if cell) for row in body[:place]]
    if titles:
        remarks.append(f"Taken as a title, above the column heads: {'; '.join(titles)}.")
    header = tuple(line.lstrip("#").strip() for line in comments)
    if not body:
        raise _refused(file, "only header lines", "a line of column heads and at least one row")
    return TextTable(
        header=(*header, *titles),
        settings=header_settings(header),
        delimiter=",",  # numbers are stored as such and written here with a decimal point
        heads=body[place],
        rows=tuple(body[place + 1 :]),
        remarks=tuple(remarks),
    )


def _head_place(rows: list[Row], looks_like_heads: Callable[[list[str]], bool]) -> int | None:
    first = enumerate(rows[:MOST_TITLE_LINES])
    return next((i for i, row in first if looks_like_heads(list(row.cells))), None)


def _sheets(data: bytes, file: str) -> list[tuple[str, list[Row]]]:
    """Return the filled rows of every sheet."""
    try:
        open_archive(data, LARGEST_UNPACKED).close()
        return list(_loaded(data))
    except ArchiveError as error:
        raise _refused(file, error.found, error.expected) from error
    except Exception as error:  # a damaged workbook fails in a dozen ways inside
        raise _refused(
            file, f"a damaged or foreign workbook ({type(error).__name__})", "an .xlsx workbook"
        ) from error


def _loaded(data: bytes) -> Iterator[tuple[str, list[Row]]]:
    import openpyxl  # slow to import, needed for workbooks only

    with warnings.catch_warnings():
        warnings.simplefilter("ignore")  # features of the sheet that carry no numbers
        book = openpyxl.load_workbook(
            io.BytesIO(data), read_only=True, data_only=True, keep_links=False
        )
        for sheet in book.worksheets:
            filled = []
            rows = sheet.iter_rows(max_row=MOST_ROWS, max_col=MOST_COLUMNS, values_only=True)
            for number, values in enumerate(rows, start=1):
                cells = tuple(_text(value) for value in values)
                if any(cells):
                    filled.append(Row(line=number, cells=cells))
            yield sheet.title, _same_width(filled)


def _same_width(rows: list[Row]) -> list[Row]:
    """Cut empty columns at the right and fill short rows up."""
    width = max((i + 1 for row in rows for i, cell in enumerate(row.cells) if cell), default=0)
    return [Row(line=row.line, cells=(*row.cells, *[""] * width)[:width]) for row in rows if width]


def _text(value: Any) -> str:
    if value is None:
        return ""
    if isinstance(value, (datetime, date, time)):
        return f"{value.isoformat()} (a date)" if isinstance(value, date) else value.isoformat()
    if isinstance(value, float):
        return f"{value:.15g}"  # 0.1 + 0.2 is stored as 0.30000000000000004
    return str(value).strip()


def _refused(file: str, found: str, expected: str) -> TextProblemsError:
    return TextProblemsError(
        Problem(
            file=file,
            place="file",
            found=found,
            expected=expected,
            fix="Or save the sheet as CSV (UTF-8) and name that file.",
        )
    )
