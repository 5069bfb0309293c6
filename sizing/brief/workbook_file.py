"""From the bytes of a workbook to the filled cells of its sheets; nothing is interpreted.

Formulas are never computed: what the spreadsheet program computed last is taken, and told.
"""

from __future__ import annotations

import io
import warnings
import zipfile
from collections.abc import Iterator, Mapping
from dataclasses import dataclass, field
from typing import Any

from sizing.brief.archives import ArchiveError, open_archive
from sizing.brief.workbook_cells import Oddity
from sizing.errors import InputError, Problem

LARGEST_UNPACKED = 10 * 1024 * 1024
"""Bytes. A brief of 300 members and 10 load cases unpacks to 1 MiB."""
MOST_ROWS = 20_000
MOST_COLUMNS = 1_000
"""A brief of more rows or columns than this is none that a person can check."""
MOST_CELLS = 3_000_000
"""Rows times columns: a cell far down and one far right span a field that takes long to cross."""
MOST_SHEETS = 100

Spot = tuple[int, int]
"""Row and column, both counted from 1."""


@dataclass(frozen=True, kw_only=True, slots=True)
class Grid:
    """One sheet: its filled cells by row and column, in that order.

    ``computed``: cells whose value a formula gave. ``merged``: ranges of merged cells as
    (name, last row).
    """

    title: str
    cells: Mapping[Spot, Any]
    computed: tuple[Spot, ...] = ()
    merged: tuple[tuple[str, int], ...] = ()
    hidden: bool = False


def spot_text(title: str, spot: Spot) -> str:
    """Return ``Loads!C7``."""
    return f"{title}!{column_letters(spot[1])}{spot[0]}"


def column_letters(number: int) -> str:
    """Return A, B, ..., Z, AA, ... for 1, 2, ..."""
    text = ""
    while number:
        number, place = divmod(number - 1, 26)
        text = chr(ord("A") + place) + text
    return text


def read_grids(data: bytes, file: str) -> tuple[Grid, ...]:
    """Return the sheets of the workbook in its order.

    Raises :class:`~sizing.errors.InputError` for a file that is no workbook, that is too large
    unpacked, or whose archive holds what no brief needs (see :mod:`sizing.brief.archives`).
    """
    try:
        with open_archive(data, LARGEST_UNPACKED) as archive:
            return _load(data, archive)
    except ArchiveError as error:
        raise _refused(file, error.found, error.expected) from error
    except Exception as error:  # a damaged workbook fails in a dozen ways inside
        found = f"a damaged or foreign workbook ({type(error).__name__})"
        raise _refused(file, found, "an .xlsx workbook") from error


def _refused(file: str, found: str, expected: str) -> InputError:
    return InputError([Problem(file=file, place="the file", found=found, expected=expected)])


def _load(data: bytes, archive: zipfile.ZipFile) -> tuple[Grid, ...]:
    book = _open(data, values=False)
    if len(book.worksheets) > MOST_SHEETS:
        raise ArchiveError(f"{len(book.worksheets)} sheets", f"at most {MOST_SHEETS}")
    outlines = [_outline(archive, sheet._worksheet_path) for sheet in book.worksheets]
    grids = []
    values: Any = None
    for i, (sheet, outline) in enumerate(zip(book.worksheets, outlines, strict=True)):
        cells = dict(_filled(sheet, outline))
        formulas = [spot for spot, cell in cells.items() if cell.data_type == "f"]
        if formulas and values is None:
            values = _open(data, values=True)
        computed = dict(_filled(values.worksheets[i], outline)) if formulas else {}
        found = {spot: _value(cell) for spot, cell in cells.items()}
        for spot in formulas:
            found[spot] = (
                _value(computed[spot])
                if spot in computed
                else Oddity(words="a formula that no spreadsheet program has computed yet")
            )
        grids.append(
            Grid(
                title=sheet.title,
                cells={spot: v for spot, v in found.items() if not _is_blank(v)},
                computed=tuple(spot for spot in formulas if spot in computed),
                merged=tuple(outline.merged),
                hidden=sheet.sheet_state != "visible",
            )
        )
    return tuple(grids)


def _open(data: bytes, *, values: bool) -> Any:
    import openpyxl  # slow to import, needed for workbooks only

    with warnings.catch_warnings():
        warnings.simplefilter("ignore")  # features of the sheet that carry no values
        return openpyxl.load_workbook(
            io.BytesIO(data), read_only=True, data_only=values, keep_links=False
        )


@dataclass(kw_only=True, slots=True)
class _Outline:
    """What is known of a sheet before its cells are read."""

    rows: int = 0
    columns: int = 0
    merged: list[tuple[str, int]] = field(default_factory=list)


def _outline(archive: zipfile.ZipFile, part: str) -> _Outline:
    """Look through a sheet for its size, its merged cells, and rows that are out of order.

    A row far down, or one that comes again, would cost much time or get lost.
    """
    from xml.parsers import expat  # document types and entities were refused before

    from openpyxl.utils.cell import coordinate_to_tuple, range_boundaries

    seen = _Outline()
    row = column = 0

    def begin(name: str, attributes: dict[str, str]) -> None:
        nonlocal row, column
        tag = name.rpartition(":")[2]
        if tag == "c":
            where = attributes.get("r")
            spot = coordinate_to_tuple(where) if where else (row, column + 1)
            if spot[0] != row or spot[1] <= column:
                raise ArchiveError(f"cell {where} out of its order", "cells in their order")
            column = spot[1]
        elif tag in ("v", "f", "t"):
            seen.rows, seen.columns = max(seen.rows, row), max(seen.columns, column)
        elif tag == "row":
            number = int(attributes.get("r", row + 1))
            if number <= row:
                raise ArchiveError(f"row {number} after row {row}", "rows in their order")
            row, column = number, 0
        elif tag == "mergeCell":
            merged = attributes.get("ref", "")
            seen.merged.append((merged, range_boundaries(merged)[3] or 0))

    parser = expat.ParserCreate()
    parser.StartElementHandler = begin
    parser.Parse(archive.read(part), True)
    large = seen.rows > MOST_ROWS or seen.columns > MOST_COLUMNS
    if large or seen.rows * seen.columns > MOST_CELLS:
        raise ArchiveError(
            f"a sheet of {seen.rows} rows and {seen.columns} columns",
            f"at most {MOST_ROWS} rows, {MOST_COLUMNS} columns and {MOST_CELLS} cells",
        )
    return seen


def _filled(sheet: Any, outline: _Outline) -> Iterator[tuple[Spot, Any]]:
    if not outline.rows:
        return
    with warnings.catch_warnings():
        warnings.simplefilter("ignore")  # numbers formatted as dates that are none: error cells
        rows = sheet.iter_rows(
            min_row=1, max_row=outline.rows, min_col=1, max_col=max(outline.columns, 1)
        )
        for r, row in enumerate(rows, start=1):
            for c, cell in enumerate(row, start=1):
                if cell.value is not None:
                    yield (r, c), cell


def _value(cell: Any) -> Any:
    if cell.data_type == "e":
        return Oddity(words=f"the error {cell.value}")
    return cell.value


def _is_blank(value: Any) -> bool:
    return value is None or (isinstance(value, str) and not value.strip())
