"""From the plain tables of a brief to the rows of its sheets, nothing lost on the way.

The inverse of :mod:`sizing.brief.workbook_reader`. What has no column of its own goes into the
column Further of its row or becomes a further item, written as TOML.
"""

from __future__ import annotations

from collections.abc import Iterator, Mapping, Sequence
from copy import deepcopy
from dataclasses import dataclass
from typing import Any

from sizing.brief.toml_writer import toml_key, toml_pairs, toml_value
from sizing.brief.workbook_cells import LONGEST_TEXT, CellValue, encode, quoted_text
from sizing.brief.workbook_layout import (
    EACH,
    FURTHER,
    FURTHER_NOTE,
    ITEM,
    NOTE,
    SHEETS,
    UNITS,
    VALUE,
    Column,
    ItemSheet,
    RowSheet,
)

Cells = tuple[CellValue | None, ...]


@dataclass(frozen=True, kw_only=True, slots=True)
class FilledSheet:
    """A sheet ready to be written: title, note, columns, and rows of cells.

    ``row_columns``: for a sheet of items, what each row holds.
    """

    title: str
    note: str
    columns: tuple[Column, ...]
    rows: tuple[Cells, ...]
    row_columns: tuple[Column, ...] = ()


class CannotHoldError(Exception):
    """A value that a cell cannot hold."""


def filled_sheets(tables: Mapping[str, Any]) -> tuple[FilledSheet, ...]:
    """Return the sheets that hold the tables; raise :class:`CannotHoldError` where none can."""
    rest = deepcopy(dict(tables))
    units = rest.get("units")
    units = units if isinstance(units, dict) else {}
    units = {kind: units[kind] for kind, known in UNITS.items() if units.get(kind) in known}
    filled: dict[str, FilledSheet] = {}
    deepest_first = sorted(SHEETS, key=lambda sheet: -len(sheet.place))
    for sheet in deepest_first:
        if isinstance(sheet, RowSheet):
            filled[sheet.title] = _rows(sheet, rest, tables, units)
    for sheet in deepest_first:
        if isinstance(sheet, ItemSheet):
            filled[sheet.title] = _items(sheet, rest)
    order = [sheet.title for sheet in SHEETS]
    return tuple(filled[title] for title in order if title in filled)


def _rows(
    sheet: RowSheet, rest: dict[str, Any], tables: Mapping[str, Any], units: Mapping[str, str]
) -> FilledSheet:
    entries = list(_taken(sheet, rest))
    names = _factor_names(sheet, entries, tables)
    rows, further_used = [], False
    for keys, entry in entries:
        key_cells = tuple(encode(key, "text") for key in keys)
        cells, further = _entry_cells(sheet, entry, names)
        further_used = further_used or further is not None
        own = (*cells, *key_cells) if sheet.keys_last else (*key_cells, *cells)
        rows.append((own, further, len(own) - len(names) if sheet.factors else len(own)))
    keys_and_columns = (
        (*sheet.columns, *sheet.keys) if sheet.keys_last else (*sheet.keys, *sheet.columns)
    )
    further_column = (Column(head=FURTHER, kind="text", note=FURTHER_NOTE),) if further_used else ()
    factor_columns = tuple(
        Column(head=_name_head(name, (*sheet.keys, *sheet.columns))) for name in names
    )
    own_columns = tuple(_with_unit(column, units) for column in keys_and_columns)
    return FilledSheet(
        title=sheet.title,
        note=sheet.note,
        columns=(*own_columns, *further_column, *factor_columns),
        rows=tuple(
            (*own[:cut], *((further,) if further_used else ()), *own[cut:])
            for own, further, cut in rows
        ),
    )


def _name_head(name: str, others: Sequence[Column]) -> str:
    """Return a name as a head: in quotation marks where it might be taken for another head."""
    words = {FURTHER, *(column.head for column in others)}
    words |= {str(column.path[0]) for column in others if column.path}
    flat = name.partition("[")[0].strip().casefold()
    clash = (
        not flat or flat in {word.casefold() for word in words} or name != " ".join(name.split())
    )
    return quoted_text(name) if clash else str(encode(name, "text"))


def _with_unit(column: Column, units: Mapping[str, str]) -> Column:
    unit = units.get(column.unit, "") if column.unit else ""
    if not unit:
        return column
    return Column(
        head=f"{column.head} [{unit}]",
        path=column.path,
        kind=column.kind,
        choices=column.choices,
        note=column.note,
        unit=column.unit,
    )


def _taken(sheet: RowSheet, rest: dict[str, Any]) -> Iterator[tuple[tuple[str, ...], Any]]:
    """Yield (key texts, entry) of every row, and take the entries out of ``rest``.

    A table or list that would come back otherwise (an empty one, one of another type) stays.
    """
    for keys, holder, last in _holders(sheet, rest):
        inside: Any = holder[last]
        good: Any
        if sheet.listed:
            good = isinstance(inside, list) and inside
            if good and all(_is_row(sheet, item) for item in inside):
                del holder[last]
                yield from ((keys, item) for item in inside)
            continue
        good = isinstance(inside, dict) and inside
        if good and all(_is_row(sheet, item) for item in inside.values()):
            del holder[last]
            yield from (((*keys, name), item) for name, item in inside.items())


def _holders(
    sheet: RowSheet, rest: dict[str, Any]
) -> Iterator[tuple[tuple[str, ...], dict[str, Any], str]]:
    """Yield (key texts so far, table, key in it) of the lists or tables that hold the rows."""
    place = sheet.place if sheet.listed else sheet.place[:-1]
    found: list[tuple[tuple[str, ...], Any]] = [((), rest)]
    for part in place[:-1]:
        inner = []
        for keys, table in found:
            if not isinstance(table, dict):
                continue
            if part == EACH:
                inner += [((*keys, name), entry) for name, entry in table.items()]
            elif part in table:
                inner.append((keys, table[part]))
        found = inner
    for keys, table in found:
        if isinstance(table, dict) and place[-1] in table:
            yield keys, table, place[-1]


def _is_row(sheet: RowSheet, item: Any) -> bool:
    if sheet.shape == "table":
        return isinstance(item, dict)
    return sheet.shape == "components" or encode(item, sheet.columns[0].kind) is not None


def _factor_names(
    sheet: RowSheet, entries: Sequence[tuple[tuple[str, ...], Any]], tables: Mapping[str, Any]
) -> tuple[str, ...]:
    """Return the load cases in their order, then whatever else has factors."""
    if not sheet.factors:
        return ()
    cases = tables.get("cases")
    names = dict.fromkeys(cases if isinstance(cases, dict) else ())
    for _, entry in entries:
        factors = entry.get(sheet.factors)
        names |= dict.fromkeys(factors if isinstance(factors, dict) else ())
    return tuple(names)


def _entry_cells(
    sheet: RowSheet, entry: Any, names: tuple[str, ...]
) -> tuple[Cells, CellValue | None]:
    """Return the cells of the columns, and of the column Further where something is left."""
    if sheet.shape == "value":
        return (encode(entry, sheet.columns[0].kind),), None
    if sheet.shape == "components":
        cells = _component_cells(sheet, entry)
        if cells is None:
            return (None,) * len(sheet.columns), _limited(toml_value(entry))
        return cells, None
    left = deepcopy(entry)
    cells = tuple(_take_cell(left, column, sheet.columns) for column in _deepest_first(sheet))
    by_path = dict(zip((c.path for c in _deepest_first(sheet)), cells, strict=True))
    factors = tuple(
        _take_cell(left, Column(head=name, path=(sheet.factors, name)), ()) for name in names
    )
    further = _limited(toml_pairs(left)) if left else None
    if not entry and not sheet.keys:
        further = "{}"  # else the row would be empty, and none
    return (*(by_path[column.path] for column in sheet.columns), *factors), further


def _deepest_first(sheet: RowSheet) -> list[Column]:
    return sorted(sheet.columns, key=lambda column: -len(column.path))


def _component_cells(sheet: RowSheet, entry: Any) -> Cells | None:
    if not isinstance(entry, list) or not 2 <= len(entry) <= len(sheet.columns):
        return None
    cells = [encode(component, "any") for component in entry]
    if None in cells:
        return None
    return (*cells, *[None] * (len(sheet.columns) - len(cells)))


def _take_cell(left: dict[str, Any], column: Column, columns: Sequence[Column]) -> CellValue | None:
    """Return the cell of a column and take its value out; None where it holds none."""
    *way, last = (str(part) for part in column.path)
    tables: list[Any] = [left]
    for key in way:
        tables.append(tables[-1].get(key) if isinstance(tables[-1], dict) else None)
    table = tables[-1]
    if not isinstance(table, dict) or last not in table:
        return None
    value = table[last]
    has_parts = any(c.path[: len(column.path)] == column.path for c in columns if c is not column)
    if has_parts and isinstance(value, dict):
        return None
    cell = encode(value, column.kind, column.choices)
    if cell is not None:
        del table[last]
        for key, holder in zip(reversed(way), reversed(tables[:-1]), strict=True):
            if not holder[key]:
                del holder[key]
    return cell


def _limited(text: str) -> str:
    if len(text) > LONGEST_TEXT:
        raise CannotHoldError(f"a value of {len(text)} characters; a cell holds {LONGEST_TEXT}")
    return text


def _items(sheet: ItemSheet, rest: dict[str, Any]) -> FilledSheet:
    bases = _bases(sheet, rest)
    tables = [_inside(rest, base) for base in bases]
    rows: list[tuple[Column, Cells]] = []
    for column in sheet.rows:
        parts = [c for c in sheet.rows if c is not column]
        rows.append((column, tuple(_take_cell(t, column, parts) for t in tables)))
    further: dict[tuple[str, ...], list[Any]] = {}
    for i, table in enumerate(tables):
        for path, value in _leaves(table):
            further.setdefault(path, [None] * len(tables))[i] = value
    for path, values in further.items():
        head = ".".join(toml_key(key) for key in path)
        if head.casefold() in (column.head.casefold() for column in sheet.rows):
            head = quoted_text(head)  # a key all the same, and not the item of that name
        cells = tuple(None if v is None else _needed(encode(v, "any"), head) for v in values)
        rows.append((Column(head=head, path=path, note="Further key"), cells))
    for head in {base[0] for base in bases if base}:
        del rest[head]
    note = Column(head=NOTE, kind="text")
    item = Column(head=ITEM, kind="text")
    heads = tuple(
        Column(head=_name_head(base[-1], (item, note)) if sheet.each else VALUE) for base in bases
    )
    heads = heads or (() if sheet.each else (Column(head=VALUE),))
    notes = [(column.head, column.note) for column, _ in rows]
    filled = [cells or (None,) * len(heads) for _, cells in rows]
    if sheet.each:
        lines = tuple((h, n, *c) for (h, n), c in zip(notes, filled, strict=True))
        columns = (item, note, *heads)
    else:
        lines = tuple((h, *c, n) for (h, n), c in zip(notes, filled, strict=True))
        columns = (item, *heads, note)
    return FilledSheet(
        title=sheet.title,
        note=sheet.note,
        columns=columns,
        rows=lines,
        row_columns=tuple(column for column, _ in rows),
    )


def _needed(cell: CellValue | None, head: str) -> CellValue:
    if cell is None:
        raise CannotHoldError(f"a value for {head} that no cell holds")
    return cell


def _bases(sheet: ItemSheet, rest: Mapping[str, Any]) -> list[tuple[str, ...]]:
    if not sheet.each:
        table = _inside(rest, sheet.place)
        return [sheet.place] if isinstance(table, dict) and table else []
    table = rest.get(sheet.place[0])
    good = isinstance(table, dict) and table and all(isinstance(v, dict) for v in table.values())
    return [(*sheet.place, name) for name in table] if good and table else []


def _inside(rest: Mapping[str, Any], base: tuple[str, ...]) -> Any:
    table: Any = rest
    for key in base:
        table = table.get(key) if isinstance(table, dict) else None
    return table


def _leaves(
    table: Mapping[str, Any], path: tuple[str, ...] = ()
) -> Iterator[tuple[tuple[str, ...], Any]]:
    """Yield the path and value of everything that is no table, and of empty tables."""
    for key, value in table.items():
        if isinstance(value, dict) and value:
            yield from _leaves(value, (*path, key))
        else:
            yield (*path, key), value
