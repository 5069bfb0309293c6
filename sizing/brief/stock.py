"""Stock bars of a brief: ``[stock]`` with its lengths, saw and transport, nothing of it guessed.

::

    [stock]
    lengths = ["6 m", "12 m"]        # unless the catalogue has a column "stock lengths [m]"
    kerf = "3 mm"
    trim = "0 mm"                    # lost at the start of every bar
    minimise = "length"              # of bars used; or bars (their number), or cost
    trusses = 4                      # cut together
    longest_piece = "11.5 m"         # that can be carried to the site
    [stock.per_section."SHS 120*"]
    lengths = ["7.5 m", "15 m"]
    prices = [210, 400]              # per bar, where cost is minimised
    numbers = [10, 4]                # bars at hand, where they are limited
"""

from __future__ import annotations

from typing import Any, Literal

from pydantic import Field

from sizing.brief.findings import Findings, KeyPath, Quantities, shown
from sizing.brief.model import Stock, StockBars
from sizing.brief.raw_tables import RawTable, read_entry

LONGEST_BAR = 100.0
"""m. Rails are rolled to 120 m, sections are sold up to some 24 m (common practice)."""
THICKEST_SAW = 0.02
"""m. Saws and flames take 1 to 10 mm (common practice)."""
LONGEST_TRIM = 1.0
"""m. A clean end takes some centimetres (common practice); beyond a metre it is a slip."""
MOST_BARS = 100_000
MOST_TRUSSES = 1_000
MOST_STOCK_LENGTHS = 20


class RawStock(RawTable):
    """``stock``."""

    REQUIRED = ("kerf",)
    lengths: list[Any] = Field([], description='stock lengths, such as ["6 m", "12 m"]')
    prices: list[Any] = Field([], description="a price per bar for each of lengths")
    numbers: list[Any] = Field([], description="bars at hand of each of lengths")
    kerf: Any = Field(None, description='the width of a saw cut, such as "3 mm"')
    trim: Any = Field(0, description='a length lost at the start of every bar, such as "20 mm"')
    minimise: Literal["length", "bars", "cost"] = Field(
        "length", description='"length" of the bars, "bars" (their number), or "cost"'
    )
    trusses: Any = Field(1, description="the number of trusses cut together")
    longest_piece: Any = Field(None, description='a length, such as "11.5 m"')
    per_section: dict[str, Any] = Field(
        {}, description="tables by designation or pattern, such as [stock.per_section.NAME]"
    )


class RawSectionStock(RawTable):
    """One table of ``stock.per_section``."""

    REQUIRED = ("lengths",)
    lengths: list[Any] = Field([], description='stock lengths, such as ["6 m", "12 m"]')
    prices: list[Any] = Field([], description="a price per bar for each of lengths")
    numbers: list[Any] = Field([], description="bars at hand of each of lengths")


def read_stock(
    raw: dict[str, Any] | None, findings: Findings, quantities: Quantities
) -> Stock | None:
    """Return the stock of the brief; None where the brief has no such table."""
    if raw is None:
        return None
    path: KeyPath = ("stock",)
    entry, faulty = read_entry(RawStock, raw, path, findings, "a table with kerf and lengths")
    if entry is None:
        return None
    limits = {"kerf": THICKEST_SAW, "trim": LONGEST_TRIM, "longest_piece": LONGEST_BAR}
    sizes: dict[str, float | None] = {}
    for key, most in limits.items():
        given = getattr(entry, key)
        absent = given is None or key in faulty
        sizes[key] = None if absent else _length((*path, key), given, most, findings, quantities)
    if sizes["longest_piece"] == 0.0:
        findings.add((*path, "longest_piece"), found="0", expected="a length above 0")
    priced = entry.minimise == "cost"
    per_section = []
    for pattern, value in entry.per_section.items():
        here: KeyPath = (*path, "per_section", pattern)
        own, wrong = read_entry(RawSectionStock, value, here, findings, "a table with lengths")
        if own is not None and "lengths" not in wrong:
            bars = _bars(here, own, findings, quantities, priced=priced)
            if bars is not None:
                per_section.append((pattern, bars))
    return Stock(
        bars=_bars(path, entry, findings, quantities, priced=priced) if entry.lengths else None,
        per_section=tuple(per_section),
        kerf=sizes["kerf"] or 0.0,
        trim=sizes["trim"] or 0.0,
        minimise=entry.minimise,
        trusses=_whole((*path, "trusses"), entry.trusses, (1, MOST_TRUSSES), findings) or 1,
        longest_piece=sizes["longest_piece"],
    )


def _length(
    path: KeyPath, given: object, most: float, findings: Findings, quantities: Quantities
) -> float | None:
    value = quantities.read(path, given, "length")
    if value is not None and not 0.0 <= value <= most:
        findings.add(path, found=f"{value:g} m", expected=f"a length from 0 to {most:g} m")
        return None
    return value


def _whole(
    path: KeyPath, given: object, between: tuple[int, int], findings: Findings
) -> int | None:
    low, high = between
    if isinstance(given, bool) or not isinstance(given, int) or not low <= given <= high:
        findings.add(path, found=shown(given), expected=f"a whole number from {low} to {high}")
        return None
    return given


def _bars(
    path: KeyPath,
    entry: RawStock | RawSectionStock,
    findings: Findings,
    quantities: Quantities,
    *,
    priced: bool,
) -> StockBars | None:
    """Return lengths with prices and numbers; None when a length is faulty."""
    before = len(findings)
    place: KeyPath = (*path, "lengths")
    if not 1 <= len(entry.lengths) <= MOST_STOCK_LENGTHS:
        findings.add(
            place,
            found=shown(entry.lengths),
            expected=f"1 to {MOST_STOCK_LENGTHS} stock lengths",
        )
        return None
    lengths: list[float] = []
    for k, given in enumerate(entry.lengths, start=1):
        value = _length((*place, k), given, LONGEST_BAR, findings, quantities)
        if value is not None and (value == 0.0 or value in lengths):
            findings.add((*place, k), found=shown(given), expected="each length once, above 0")
        elif value is not None:
            lengths.append(value)
    for key in ("prices", "numbers"):
        given = getattr(entry, key)
        if given and len(given) != len(entry.lengths):
            findings.add((*path, key), found=shown(given), expected="one value for each of lengths")
    if priced and not entry.prices:
        findings.add(
            (*path, "prices"),
            found="nothing while cost is minimised",
            expected="a price per bar for each of lengths",
            fix='Give prices, or write minimise = "length".',
        )
    prices = [
        _price((*path, "prices", k), given, findings, quantities)
        for k, given in enumerate(entry.prices, start=1)
    ]
    numbers = [
        _whole((*path, "numbers", k), given, (0, MOST_BARS), findings)
        for k, given in enumerate(entry.numbers, start=1)
    ]
    if len(findings) > before:
        return None
    return StockBars(
        lengths=tuple(lengths),
        prices=tuple(price for price in prices if price is not None),
        numbers=tuple(number for number in numbers if number is not None),
    )


def _price(
    path: KeyPath, given: object, findings: Findings, quantities: Quantities
) -> float | None:
    value = quantities.read(path, given, "dimensionless")
    if value is not None and not 0.01 <= value <= 1e7:
        findings.add(path, found=f"{value:g}", expected="a price per bar from 0.01 to 10 million")
        return None
    return value
