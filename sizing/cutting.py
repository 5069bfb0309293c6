"""The cutting list of one answer: pieces by section, cut from the stock that the brief names."""

from __future__ import annotations

import math
from fnmatch import fnmatchcase

from sizing.brief.model import Brief, Stock, StockBars
from sizing.brief.sections import Catalogue
from sizing.cutting_pieces import Piece, pieces_of
from sizing.errors import DisagreementError
from sizing.results import CutPattern, CutPiece, CuttingResult
from sizing.selection.cutting_check import faults_of
from sizing.selection.cutting_problem import CuttingPlan, CuttingProblem, StockLength
from sizing.selection.cutting_stock import cut_stock

PER_METRE = 10_000
"""Lengths are cut in tenths of a millimetre (a whole inch is 254 of them): pieces and saw cuts
taken up, bars taken down."""

NOISE = 1e-3
"""Part of that unit that counts as rounding of the machine."""

PER_CURRENCY = 100
"""Prices are taken to hundredths of the currency."""

SECONDS = 10.0
"""Time for one section; what is then not proven says so with its gap. A truss takes far less."""

TOO_LONG_TO_CARRY = "longer than the longest piece that can be carried"
TOO_LONG_TO_CUT = "longer than every bar"


def cutting_list(
    brief: Brief,
    catalogue: Catalogue,
    sections: list[int],
) -> tuple[CuttingResult, ...]:
    """Return one result per section used, in catalogue order; empty without ``[stock]``.

    ``sections``: catalogue row of each group. Raises :class:`DisagreementError` when the
    independent look at a plan finds a fault.
    """
    if brief.stock is None:
        return ()
    return tuple(
        _section(brief, brief.stock, catalogue, s, sections) for s in sorted(set(sections))
    )


def bars_for(stock: Stock, catalogue: Catalogue, section: int) -> StockBars | None:
    """Return the bars of a section: its own table in the brief, the catalogue, then all others."""
    name = catalogue.designation[section]
    for pattern, bars in stock.per_section:
        if fnmatchcase(name, pattern):
            return bars
    if catalogue.stock_lengths and catalogue.stock_lengths[section]:
        return StockBars(lengths=catalogue.stock_lengths[section])
    return stock.bars


def _section(
    brief: Brief,
    stock: Stock,
    catalogue: Catalogue,
    section: int,
    sections: list[int],
) -> CuttingResult:
    bars = bars_for(stock, catalogue, section)
    usable = [] if bars is None else [length - stock.trim for length in bars.lengths]
    pieces: list[Piece] = []
    splices: list[tuple[str, str]] = []
    for g, s in enumerate(sections):
        if s == section:
            own = pieces_of(brief, g, usable, stock.longest_piece)
            pieces += own.pieces
            splices += own.splices
    listed = _gathered(pieces, stock, max(usable, default=math.inf))
    plan = None if bars is None else _plan(stock, bars, listed)
    common = {
        "designation": catalogue.designation[section],
        "pieces": listed,
        "kerf": stock.kerf,
        "trim": stock.trim,
        "trusses": stock.trusses,
        "splices": tuple(splices),
        "lead_time": catalogue.lead_time[section] if catalogue.lead_time else "",
    }
    return _result(stock, plan, common)


def _gathered(pieces: list[Piece], stock: Stock, most: float) -> tuple[CutPiece, ...]:
    """Return the pieces by length, longest first; equal to a tenth of a millimetre is equal."""
    by_length: dict[int, list[Piece]] = {}
    for piece in pieces:
        by_length.setdefault(_up(piece.length), []).append(piece)
    found = []
    for units, same in sorted(by_length.items(), reverse=True):
        notes = []
        if stock.longest_piece is not None and units > _up(stock.longest_piece):
            notes.append(TOO_LONG_TO_CARRY)
        if not math.isinf(most) and units > _down(most):
            notes.append(TOO_LONG_TO_CUT)
        found.append(
            CutPiece(
                length=units / PER_METRE,
                number=len(same) * stock.trusses,
                marks=tuple(dict.fromkeys(piece.mark for piece in same)),
                note="; ".join(notes),
            )
        )
    return tuple(found)


def _plan(stock: Stock, bars: StockBars, pieces: tuple[CutPiece, ...]) -> CuttingPlan:
    """Cut what fits a bar at all; what does not is named in the list of pieces."""
    fitting = [piece for piece in pieces if TOO_LONG_TO_CUT not in piece.note]
    prices = bars.prices or (0.0,) * len(bars.lengths)
    numbers = bars.numbers or (None,) * len(bars.lengths)
    priced = stock.minimise == "cost" and bool(bars.prices)
    problem = CuttingProblem(
        lengths=tuple(_up(piece.length) for piece in fitting),
        numbers=tuple(piece.number for piece in fitting),
        stock=tuple(
            StockLength(length=_down(length), price=round(price * PER_CURRENCY), available=number)
            for length, price, number in zip(bars.lengths, prices, numbers, strict=True)
        ),
        kerf=_up(stock.kerf),
        trim=_up(stock.trim),
        # Lengths from a catalogue have no price per bar: the least length is the nearest thing.
        minimise="length" if stock.minimise == "cost" and not priced else stock.minimise,
    )
    plan = cut_stock(problem, seconds=SECONDS)
    faults = faults_of(plan)
    if faults:
        raise DisagreementError(f"the cutting list does not add up: {'; '.join(faults)}")
    return plan


def _result(stock: Stock, plan: CuttingPlan | None, common: dict[str, object]) -> CuttingResult:
    if plan is None:
        return CuttingResult(
            status="no stock lengths",
            method="",
            minimised=stock.minimise,
            objective=None,
            bound=None,
            patterns=(),
            bars=0,
            stock_length=0.0,
            piece_length=0.0,
            waste=0.0,
            **common,  # type: ignore[arg-type]  # keys and types as gathered above
        )
    problem = plan.problem
    scale = {"length": PER_METRE, "bars": 1, "cost": PER_CURRENCY}[problem.minimise]
    return CuttingResult(
        status=plan.status,
        method=plan.method,
        minimised=problem.minimise,
        objective=None if plan.objective is None else plan.objective / scale,
        bound=None if plan.objective is None else plan.bound / scale,
        patterns=tuple(
            CutPattern(
                stock_length=problem.stock[p.stock].length / PER_METRE,
                bars=p.bars,
                pieces=tuple(
                    (length / PER_METRE, count)
                    for length, count in zip(problem.lengths, p.pieces, strict=True)
                    if count
                ),
                offcut=p.offcut(problem) / PER_METRE,
            )
            for p in plan.patterns
        ),
        bars=plan.bars,
        stock_length=plan.stock_length / PER_METRE,
        piece_length=plan.piece_length / PER_METRE,
        waste=plan.waste / PER_METRE,
        **common,  # type: ignore[arg-type]  # keys and types as gathered above
    )


def _up(length: float) -> int:
    return math.ceil(length * PER_METRE - NOISE)


def _down(length: float) -> int:
    return math.floor(length * PER_METRE + NOISE)
