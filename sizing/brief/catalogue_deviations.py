"""How far a stated number may lie from the one that follows from its neighbours."""

from __future__ import annotations

import math

QUIET = 0.01
"""Relative deviation, beyond rounding, that is not worth a word: twice that of published tables."""

REFUSED = 0.03
"""Relative deviation of mass against area, and of i against sqrt(I/A), that is an error.

Within it lie other steel densities in use (7800 to 8000 kg/m³) and rounded walls; a slip of
neighbouring rows, of hot for cold (5 %) or of a unit lies beyond it.
"""


def outside(value: float, low: float, high: float) -> float:
    """Return how far a value lies outside a range, relative to the nearer end (0 inside)."""
    if value < low:
        return value / low - 1.0
    return value / high - 1.0 if value > high else 0.0


def beyond(deviation: float, rounding: float) -> float:
    """Take the rounding of the printed figures off a deviation, towards zero."""
    return math.copysign(max(0.0, abs(deviation) - rounding), deviation)


def rows_text(count: int) -> str:
    """Return ``1 row`` or ``3 rows``."""
    return "1 row" if count == 1 else f"{count} rows"
