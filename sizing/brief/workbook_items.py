"""Reading a sheet with one value in each row: General, Combination rule, Options."""

from __future__ import annotations

import tomllib
from typing import Any

from sizing.brief.findings import KeyPath, quoted
from sizing.brief.workbook_cells import decode
from sizing.brief.workbook_file import Grid, Spot
from sizing.brief.workbook_layout import ITEM, NOTE, VALUE, Column, ItemSheet
from sizing.brief.workbook_tables import (
    CannotPlaceError,
    Draft,
    head_of,
    put,
    refuse_merged,
    rows_below,
)

MOST_ROWS_ABOVE = 10
"""Rows in which the heads are looked for; titles may stand above them."""


def read_items(sheet: ItemSheet, grid: Grid, draft: Draft) -> None:
    """Put the values of the sheet into the draft's tables; mistakes go to its findings."""
    if not grid.cells:
        return
    head = next(
        (
            spot
            for spot, value in grid.cells.items()
            if spot[0] <= MOST_ROWS_ABOVE and _says(value, ITEM)
        ),
        None,
    )
    if head is None:
        expected = f"a row of heads with {ITEM} and {'names of options' if sheet.each else VALUE}"
        draft.problem(sheet.title, (1, 1), found="no head " + ITEM, expected=expected)
        return
    if refuse_merged(grid, head[0], sheet.title, draft):
        return
    columns = _value_columns(sheet, grid, head, draft)
    known = _known(sheet)
    for base in columns.values():
        if sheet.each and base[-1] not in draft.tables.setdefault(str(base[0]), {}):
            draft.tables[str(base[0])][base[-1]] = {}
    for row, filled in rows_below(grid, head[0]):
        item = grid.cells.get((row, head[1]))
        given = [c for c in filled if c in columns]
        if item is None:
            for c in given:
                draft.problem(
                    sheet.title,
                    (row, c),
                    found="a value in a row without an item",
                    expected=f"what it is for, in the column {ITEM}",
                )
            continue
        column = _column(item, known, (row, head[1]), sheet, draft, needed=bool(given))
        if column is not None:
            _read_row(sheet, grid, row, columns, column, draft)


def _says(value: Any, word: str) -> bool:
    return isinstance(value, str) and value.strip().casefold() == word.casefold()


def _value_columns(
    sheet: ItemSheet, grid: Grid, head: Spot, draft: Draft
) -> dict[int, tuple[str, ...]]:
    """Return the columns that hold values, each with the place of its table."""
    columns: dict[int, tuple[str, ...]] = {}
    heads = {c: v for (r, c), v in grid.cells.items() if r == head[0] and c != head[1]}
    for c, value in heads.items():
        if _says(value, NOTE):
            continue
        if not sheet.each:
            if _says(value, VALUE):
                columns[c] = sheet.place
            continue
        name = decode(value, "text").value
        path = (*sheet.place, name) if isinstance(name, str) else ()
        if not path:
            draft.problem(
                sheet.title, (head[0], c), found=str(name), expected="the name of an option as text"
            )
        elif path in columns.values():
            draft.problem(
                sheet.title,
                (head[0], c),
                found=f"option {quoted(str(name))} for the second time",
                expected="each option once",
            )
        else:
            columns[c] = path
            draft.places.record(path, sheet.title, (head[0], c))
    filled = {c for r, c in grid.cells if r > head[0]}
    for c in sorted(filled - set(heads) - {head[1]}) if sheet.each else ():
        draft.problem(
            sheet.title,
            (head[0], c),
            found="values below a cell without a name",
            expected="the name of an option",
        )
    return columns


def _known(sheet: ItemSheet) -> dict[str, Column]:
    return {column.head.casefold(): column for column in sheet.rows}


def _column(
    item: Any, known: dict[str, Column], spot: Spot, sheet: ItemSheet, draft: Draft, *, needed: bool
) -> Column | None:
    """Return what the row holds: a known item, or a key of its own such as ``gamma_M1``."""
    text = str(item).strip()
    column = known.get(head_of(text, spot).text.casefold())
    if column is not None:
        return column
    path = _dotted(text)
    if path:
        return Column(head=text, path=path)
    if needed:
        draft.problem(
            sheet.title,
            spot,
            found=f"the item {quoted(text)}",
            expected="an item of this sheet or a key such as gamma_M1",
            fix=draft.findings.did_you_mean(text, [column.head for column in sheet.rows]),
        )
    return None


def _dotted(text: str) -> KeyPath:
    """Return the path of a key such as ``psi.snow``; empty for what is no key."""
    try:
        table: Any = tomllib.loads(f"{text.strip()} = 0")
    except (tomllib.TOMLDecodeError, ValueError, RecursionError):
        return ()
    path: list[str] = []
    while isinstance(table, dict) and len(table) == 1:
        key, table = next(iter(table.items()))
        path.append(key)
    return tuple(path) if table == 0 else ()


def _read_row(
    sheet: ItemSheet,
    grid: Grid,
    row: int,
    columns: dict[int, tuple[str, ...]],
    column: Column,
    draft: Draft,
) -> None:
    for c, base in columns.items():
        spot, path = (row, c), (*base, *column.path)
        if spot not in grid.cells:
            draft.places.record_empty(path, sheet.title, spot)
            continue
        draft.places.record(path, sheet.title, spot)
        try:
            put(draft.tables, path, draft.decoded(grid, sheet.title, spot, column))
        except CannotPlaceError as error:
            draft.problem(
                sheet.title, spot, found=str(error), expected="each value once", fix="Delete one."
            )
