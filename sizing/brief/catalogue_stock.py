"""What a catalogue says of supply: stock lengths, available or not, preferred, lead time.

All four columns are optional. ``stock lengths [m]`` holds ``6;12`` (also ``6 / 12``), the other
cells yes or no, and the lead time any text. An empty cell says nothing: the row is available.
"""

from __future__ import annotations

import re
from collections.abc import Callable, Mapping
from dataclasses import dataclass
from typing import Any

from sizing.brief.catalogue_heads import Column
from sizing.brief.catalogue_numbers import EMPTY
from sizing.brief.catalogue_text import Row

SUPPLY = ("stock_lengths", "available", "preferred", "lead_time")
"""The properties read here."""

YES = frozenset({"yes", "y", "true", "1", "x", "ja"})
NO = frozenset({"no", "n", "false", "0", "nein"})

PLAUSIBLE_STOCK = (0.5, 100.0)
"""m. Rails are rolled to 120 m, sections are sold up to some 24 m (common practice)."""

_BETWEEN = re.compile(r"\s*[;/|]\s*|\s+")


@dataclass(frozen=True, kw_only=True, slots=True)
class Supply:
    """What one row says: lengths in m, None or empty where it says nothing."""

    stock_lengths: tuple[float, ...] = ()
    available: bool | None = None
    preferred: bool | None = None
    lead_time: str = ""


NOTHING_SAID = Supply()


class SupplyError(Exception):
    """A cell that cannot be read, with the words for what belongs there."""


def lengths_of(cell: str, column: Column) -> tuple[float, ...]:
    """Return the stock lengths of a cell in m, in rising order; raise :class:`SupplyError`."""
    if cell.casefold() in EMPTY:
        return ()
    found = set()
    for part in _BETWEEN.split(cell.strip()):
        try:
            value = float(part.replace(",", ".")) * column.factor
        except ValueError as error:
            raise SupplyError("stock lengths such as 6;12") from error
        if not PLAUSIBLE_STOCK[0] <= value <= PLAUSIBLE_STOCK[1]:
            raise SupplyError("stock lengths from 0.5 to 100 m, such as 6;12")
        found.add(value)
    return tuple(sorted(found))


def yes_or_no(cell: str) -> bool | None:
    """Return True, False, or None for an empty cell; raise :class:`SupplyError`."""
    word = cell.strip().casefold()
    if word in YES:
        return True
    if word in NO:
        return False
    if word in EMPTY:
        return None
    raise SupplyError("yes or no")


def read_supply(
    row: Row, columns: Mapping[str, Column], complain: Callable[[Column, str, str], None]
) -> Supply:
    """Return what a row says of supply; ``complain`` takes column, cell and what belongs there."""
    said: dict[str, Any] = {}
    for name in SUPPLY:
        column = columns.get(name)
        if column is None or column.index >= len(row.cells):
            continue
        cell = " ".join(row.cells[column.index].split())
        try:
            if name == "stock_lengths":
                said[name] = lengths_of(cell, column)
            elif name == "lead_time":
                said[name] = "" if cell.casefold() in EMPTY else cell
            else:
                said[name] = yes_or_no(cell)
        except SupplyError as error:
            complain(column, cell, str(error))
    return Supply(**said)
