"""The tables of the cutting list: bars to order, how each bar is cut, and the pieces."""

from __future__ import annotations

import math
from dataclasses import replace

from sizing.documents.plain_text import visible
from sizing.documents.quantities import Quantity, ShownUnits
from sizing.documents.tables import Cell, Column, Table
from sizing.documents.wording import mark_runs
from sizing.results import CutPattern, CuttingResult, OptionResult

PLACES_US, PLACES = 2, 1
"""Decimals of a length to saw: hundredths of an inch, tenths of a millimetre."""

_STATUS = {
    "proven": "proven: no plan is better",
    "not enough stock": "no plan: the bars at hand are not enough",
    "no stock lengths": "no stock lengths given",
}


def cutting_tables(option: OptionResult, units: ShownUnits) -> tuple[Table, ...]:
    """Return the three tables; none where the brief asks for no cutting list."""
    if not option.cutting:
        return ()
    return (
        _bars_table(option, units),
        _patterns_table(option, units),
        _pieces_table(option, units),
    )


def with_order_length(table: Table, option: OptionResult, units: ShownUnits) -> Table:
    """Return the member schedule with the order length beside the system length, if any."""
    if all(m.order_length is None for m in option.members):
        return table
    at = next(j for j, c in enumerate(table.columns) if c.head == "System length") + 1
    length = units.length
    column = Column(head="Order length", unit=length.unit, style="number", places=length.places)

    def put(row: tuple[Cell, ...], cell: Cell) -> tuple[Cell, ...]:
        return (*row[:at], cell, *row[at:])

    cells = [None if m.order_length is None else length.of(m.order_length) for m in option.members]
    note = (
        "Order length: system length less the end deductions of the brief, rounded up; none for "
        "members that are part of a longer piece or without deduction."
    )
    return replace(
        table,
        columns=(*table.columns[:at], column, *table.columns[at:]),
        rows=tuple(put(row, cell) for row, cell in zip(table.rows, cells, strict=True)),
        totals=None if table.totals is None else put(table.totals, None),
        notes=(*table.notes, note),
    )


def saw_length(units: ShownUnits) -> Quantity:
    """Return the unit in which lengths to saw are printed."""
    return replace(units.movement, places=PLACES_US if units.us else PLACES)


def pieces_text(pattern: CutPattern, saw: Quantity) -> str:
    """Return the pieces on a bar, ``3 × 2950.0 + 1 × 2825.0``."""
    return " + ".join(
        f"{count} × {saw.of(length):.{saw.places}f}" for length, count in pattern.pieces
    )


def result_text(result: CuttingResult) -> str:
    """Return how good the plan is, in words."""
    if result.status in _STATUS:
        return _STATUS[result.status]
    if result.objective is None or result.bound is None:
        return "no plan found in the time given"
    gap = (result.objective - result.bound) / result.objective
    return f"not proven best: at most {gap:.1%} too much"


def _bars_table(option: OptionResult, units: ShownUnits) -> Table:
    length = units.length
    rows: list[tuple[Cell, ...]] = []
    for result in option.cutting:
        bars: dict[float, int] = {}
        for pattern in result.patterns:
            bars[pattern.stock_length] = bars.get(pattern.stock_length, 0) + pattern.bars
        share = result.waste / result.stock_length * 100.0 if result.stock_length else None
        closing = (share, result_text(result), visible(result.lead_time))
        name = visible(result.designation)
        if not bars:
            rows.append((name, None, None, None, None, *closing))
        for k, (stock, number) in enumerate(sorted(bars.items())):
            last = closing if k == len(bars) - 1 else (None, "", "")
            rows.append((name, length.of(stock), number, length.of(stock * number), None, *last))
        if bars:
            rows[-1] = (*rows[-1][:4], length.of(result.piece_length), *rows[-1][5:])
    some = option.cutting[0]
    saw = saw_length(units)
    fine = replace(saw, places=saw.places + 1)
    trusses = "1 truss" if some.trusses == 1 else f"{some.trusses} trusses"
    stock = math.fsum(r.stock_length for r in option.cutting)
    pieces = math.fsum(r.piece_length for r in option.cutting)
    return Table(
        name="Bars to order",
        title=f"Bars to order for {trusses}",
        columns=(
            Column(head="Section"),
            Column(head="Stock length", unit=length.unit, style="number", places=length.places),
            Column(head="Bars", style="whole"),
            Column(head="Length of bars", unit=length.unit, style="number", places=length.places),
            Column(head="Length of pieces", unit=length.unit, style="number", places=length.places),
            Column(head="Waste", unit="%", style="number", places=1),
            Column(head="Result"),
            Column(head="Lead time"),
        ),
        rows=tuple(rows),
        notes=(
            f"Saw cut {fine.text(some.kerf)}, lost at the start of every bar "
            f"{fine.text(some.trim)}. "
            "Waste, as a part of the bars: offcuts, saw cuts and lost ends.",
            "Lengths are those of the pieces as listed; allowances for welding, end machining or "
            "waste on site are not included.",
        ),
        totals=(
            "Total",
            None,
            sum(r.bars for r in option.cutting),
            length.of(stock),
            length.of(pieces),
            (stock - pieces) / stock * 100.0 if stock else None,
            "",
            "",
        ),
    )


def _patterns_table(option: OptionResult, units: ShownUnits) -> Table:
    length, saw = units.length, saw_length(units)
    rows = tuple(
        (
            visible(result.designation),
            k,
            pattern.bars,
            length.of(pattern.stock_length),
            pieces_text(pattern, saw),
            saw.of(pattern.offcut),
        )
        for result in option.cutting
        for k, pattern in enumerate(result.patterns, start=1)
    )
    return Table(
        name="Cutting",
        title="Cutting list: how each bar is cut",
        columns=(
            Column(head="Section"),
            Column(head="Pattern", style="whole"),
            Column(head="Bars cut so", style="whole"),
            Column(head="Stock length", unit=length.unit, style="number", places=length.places),
            Column(head=f"Pieces on each bar, {saw.unit}", style="prose"),
            Column(head="Offcut", unit=saw.unit, style="number", places=saw.places),
        ),
        rows=rows,
        keys=2,
    )


def _pieces_table(option: OptionResult, units: ShownUnits) -> Table:
    saw = saw_length(units)
    rows = tuple(
        (
            visible(result.designation),
            saw.of(piece.length),
            piece.number,
            mark_runs(piece.marks),
            visible(piece.note),
        )
        for result in option.cutting
        for piece in result.pieces
    )
    splices = tuple(
        f"{visible(result.designation)}: {visible(run)} spliced {visible(where)}."
        for result in option.cutting
        for run, where in result.splices
    )
    return Table(
        name="Pieces",
        title="Pieces to saw",
        columns=(
            Column(head="Section"),
            Column(head="Length", unit=saw.unit, style="number", places=saw.places),
            Column(head="Number", style="whole"),
            Column(head="Marks in one truss", style="prose"),
            Column(head="Note", style="prose"),
        ),
        rows=rows,
        notes=splices,
        keys=2,
    )
