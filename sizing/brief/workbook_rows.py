"""Reading a sheet with one entry in each row: Nodes, Groups, Loads, Combinations and the like."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, field
from typing import Any

from sizing.brief.findings import KeyPath, listed, quoted
from sizing.brief.workbook_cells import Oddity, decode, pairs_of, toml_of
from sizing.brief.workbook_file import Grid, Spot, spot_text
from sizing.brief.workbook_items import MOST_ROWS_ABOVE
from sizing.brief.workbook_layout import EACH, FURTHER, Column, RowSheet
from sizing.brief.workbook_tables import (
    CannotPlaceError,
    Draft,
    Head,
    head_of,
    put,
    refuse_merged,
    rows_below,
)

_FURTHER_COLUMN = Column(head=FURTHER, kind="text")


@dataclass(kw_only=True)
class _Heads:
    """The row of heads: which column of the sheet holds what."""

    row: int
    keys: dict[str, int] = field(default_factory=dict)
    columns: dict[int, Column] = field(default_factory=dict)
    factors: dict[int, str] = field(default_factory=dict)
    further: int = 0

    @property
    def all(self) -> set[int]:
        own = {*self.keys.values(), *self.columns, *self.factors}
        return own | {self.further} if self.further else own


def read_rows(sheet: RowSheet, grid: Grid, draft: Draft) -> None:
    """Put the entries of the sheet into the draft's tables; mistakes go to its findings."""
    if not grid.cells:
        return
    heads = _find_heads(sheet, grid, draft)
    if heads is None or refuse_merged(grid, heads.row, sheet.title, draft):
        return
    stray: list[str] = []
    unknown: set[str] = set()
    for row, filled in rows_below(grid, heads.row):
        stray += [spot_text(sheet.title, (row, c)) for c in filled if c not in heads.all]
        if any(c in heads.all for c in filled):
            _read_row(sheet, grid, row, heads, draft, unknown)
    if stray:
        draft.findings.caution(f"Not read, for want of a column head: {listed(stray, most=5)}.")


def _find_heads(sheet: RowSheet, grid: Grid, draft: Draft) -> _Heads | None:
    needed = [key.head for key in sheet.keys] or [sheet.columns[0].head]
    for row in range(1, MOST_ROWS_ABOVE + 1):
        cells = {c: v for (r, c), v in grid.cells.items() if r == row}
        texts = {head_of(str(v), (row, c)).text.casefold() for c, v in cells.items()}
        if all(head.casefold() in texts for head in needed):
            return _read_heads(sheet, grid, row, cells, draft)
    every = [c.head for c in (*sheet.keys, *sheet.columns)]
    draft.problem(
        sheet.title,
        (1, 1),
        found=f"no row with the {'head' if len(needed) == 1 else 'heads'} {listed(needed)}",
        expected=f"a row of heads: {listed(every, most=len(every))}",
    )
    return None


def _read_heads(
    sheet: RowSheet, grid: Grid, row: int, cells: dict[int, Any], draft: Draft
) -> _Heads:
    heads = _Heads(row=row)
    keys = {key.head.casefold(): key for key in sheet.keys}
    columns = {column.head.casefold(): column for column in sheet.columns}
    columns |= {str(column.path[0]): column for column in sheet.columns if _is_plain_key(column)}
    seen: dict[str, Spot] = {}
    for c, value in cells.items():
        head = head_of(str(value), (row, c))
        word = head.text.casefold()
        column = keys.get(word) or columns.get(word)
        name = FURTHER if word == FURTHER.casefold() else "" if column is None else column.head
        if not name:
            _read_other_head(sheet, grid, head, value, heads, draft)
            continue
        if name in seen:
            _twice(sheet, head.spot, name, draft)
            continue
        seen[name] = head.spot
        if column is None:
            heads.further = c
        elif word in keys:
            heads.keys[column.head] = c
        else:
            heads.columns[c] = column
            draft.note_unit(column, head, sheet.title)
    return heads


def _is_plain_key(column: Column) -> bool:
    return len(column.path) == 1 and isinstance(column.path[0], str)


def _read_other_head(
    sheet: RowSheet, grid: Grid, head: Head, value: Any, heads: _Heads, draft: Draft
) -> None:
    """A head that the sheet does not know: a load case where factors stand, else a mistake."""
    row, c = head.spot
    used = any(column == c and r > row for r, column in grid.cells)
    if sheet.factors:
        name = decode(value, "text").value
        if isinstance(name, str) and name not in heads.factors.values():
            heads.factors[c] = name
        elif used:
            _twice(sheet, head.spot, str(name), draft)
    elif used:
        known = [c.head for c in (*sheet.keys, *sheet.columns)]
        draft.problem(
            sheet.title,
            head.spot,
            found=f"the unknown head {quoted(head.text)}",
            expected=f"one of {listed(known, most=len(known))}",
            fix=draft.findings.did_you_mean(head.text, known),
        )


def _twice(sheet: RowSheet, spot: Spot, name: str, draft: Draft) -> None:
    draft.problem(
        sheet.title, spot, found=f"the head {quoted(name)} again", expected="each head once"
    )


def _read_row(
    sheet: RowSheet, grid: Grid, row: int, heads: _Heads, draft: Draft, unknown: set[str]
) -> None:
    names = _names(sheet, grid, row, heads, draft)
    if names is None:
        return
    home = _home(sheet, names, (row, min(heads.all)), draft, unknown)
    if home is None:
        return
    path, table = home
    value = _entry(sheet, grid, row, heads, draft)
    first = (row, min([*heads.keys.values(), *heads.columns]))
    if isinstance(table, list):
        table.append(value)
        path = (*path, len(table))
        paths: list[KeyPath] = [path]
        name = value.get("name") if isinstance(value, dict) and not sheet.keys else None
        if isinstance(name, str):
            paths.append((*path[:-1], f"[{name}]"))
    else:
        if names[-1] in table:
            draft.problem(
                sheet.title,
                first,
                found=f"{quoted(names[-1])} for the second time",
                expected="each one once",
                fix=f"It stands in {draft.places(path)} already.",
            )
            return
        table[names[-1]] = value
        paths = [path]
    for entry_path in paths:
        _record(sheet, grid, row, heads, entry_path, value, draft)


def _names(
    sheet: RowSheet, grid: Grid, row: int, heads: _Heads, draft: Draft
) -> tuple[str, ...] | None:
    """Return the texts of the key columns; None, with the mistake recorded, when one is none."""
    names = []
    for key in sheet.keys:
        spot = (row, heads.keys[key.head])
        value = draft.decoded(grid, sheet.title, spot, key) if spot in grid.cells else None
        if not isinstance(value, str):
            found = "an empty cell" if value is None else str(value)
            expected = f"the name of a {key.head.casefold()}"
            fix = "Format the column as text." if isinstance(value, Oddity) else ""
            draft.problem(sheet.title, spot, found=found, expected=expected, fix=fix)
            return None
        names.append(value)
    return tuple(names)


def _home(
    sheet: RowSheet, names: Sequence[str], spot: Spot, draft: Draft, unknown: set[str]
) -> tuple[KeyPath, Any] | None:
    """Return the entry's path and the table or list that it belongs into.

    A row that belongs to an entry of another sheet needs that entry.
    """
    texts = iter(names)
    path = tuple(next(texts) if part == EACH else part for part in sheet.place)
    table: Any = draft.tables
    steps = path if sheet.listed else path[:-1]
    for i, key in enumerate(steps):
        parent_named = sheet.place[i] == EACH
        if parent_named and key not in table:
            if key not in unknown:
                unknown.add(key)
                noun = sheet.keys[0].head.casefold()
                draft.problem(
                    sheet.title,
                    spot,
                    found=f"the unknown {noun} {quoted(key)}",
                    expected=f"one of {listed(table)}" if table else f"a {noun} of this brief",
                    fix=draft.findings.did_you_mean(key, table),
                )
            return None
        last = i == len(steps) - 1
        table = table.setdefault(key, [] if last and sheet.listed else {})
        if not isinstance(table, list if last and sheet.listed else dict):
            draft.problem(
                sheet.title,
                spot,
                found=f"a row beside {key} of another kind",
                expected=f"{key} in one place",
            )
            return None
    return path, table


def _entry(sheet: RowSheet, grid: Grid, row: int, heads: _Heads, draft: Draft) -> Any:
    values = {
        c: draft.decoded(grid, sheet.title, (row, c), column)
        for c, column in heads.columns.items()
        if (row, c) in grid.cells
    }
    spot = (row, heads.further)
    further = str(grid.cells[spot]).strip() if spot in grid.cells else ""
    if sheet.shape == "table":
        return _table(sheet, grid, row, heads, values, further, draft)
    if further:
        whole = toml_of(further)
        if values or whole is None:
            draft.problem(
                sheet.title,
                spot,
                found=quoted(further),
                expected="a value as in the text form, and nothing beside it",
            )
        return whole
    empty = Oddity(words="an empty cell")
    if sheet.shape == "value":
        return next(iter(values.values()), empty)
    by_axis = {column.path[0]: values[c] for c, column in heads.columns.items() if c in values}
    return [
        by_axis.get(i, empty)
        for i in range(1, 1 + max(2, *(i for i in by_axis if isinstance(i, int)), 2))
    ]


def _table(
    sheet: RowSheet,
    grid: Grid,
    row: int,
    heads: _Heads,
    values: dict[int, Any],
    further: str,
    draft: Draft,
) -> dict[str, Any]:
    entry: dict[str, Any] = {}

    def place(c: int, path: KeyPath, value: Any) -> None:
        try:
            put(entry, path, value)
        except CannotPlaceError as error:
            draft.problem(sheet.title, (row, c), found=str(error), expected="each value once")

    for c, value in values.items():
        place(c, heads.columns[c].path, value)
    for c, name in heads.factors.items():
        if (row, c) in grid.cells:
            value = draft.decoded(grid, sheet.title, (row, c), Column(head=name))
            place(c, (sheet.factors, name), value)
    pairs = pairs_of(further) if further else {}
    if pairs is None:
        draft.problem(
            sheet.title,
            (row, heads.further),
            found=quoted(further),
            expected='further keys as in the text form, such as key = 1.5, other = "text"',
        )
    for key, value in (pairs or {}).items():
        place(heads.further, (key,), value)
    return entry


def _record(
    sheet: RowSheet,
    grid: Grid,
    row: int,
    heads: _Heads,
    path: KeyPath,
    value: Any,
    draft: Draft,
) -> None:
    """Say where the entry and its keys stand, or would stand."""
    places, title = draft.places, sheet.title
    own = [c for c in (*heads.keys.values(), *heads.columns) if (row, c) in grid.cells]
    places.record(path, title, (row, min(own, default=min(heads.all))))
    paths = {c: (*path, *column.path) for c, column in heads.columns.items()}
    paths |= {c: (*path, sheet.factors, name) for c, name in heads.factors.items()}
    for c, cell_path in paths.items():
        if (row, c) in grid.cells:
            places.record(cell_path, title, (row, c))
        else:
            places.record_empty(cell_path, title, (row, c))
        if c in heads.columns and len(cell_path) > len(path) + 1:
            places.record_empty(cell_path[:-1], title, (row, c))
    if heads.further and isinstance(value, dict) and (row, heads.further) in grid.cells:
        filled = {p[len(path)] for c, p in paths.items() if (row, c) in grid.cells}
        for key in value.keys() - filled:
            places.record((*path, key), title, (row, heads.further))
