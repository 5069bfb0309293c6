"""How the standards write one worked line: an input with its origin, or a formula."""

from __future__ import annotations

from sizing.standards.contract import FloatArray, Step
from sizing.standards.formula import Formula, text_of


def step(
    symbol: str,
    origin: str | Formula,
    value: float | FloatArray,
    unit: str,
    clause: str,
    meaning: str = "",
) -> Step:
    """Return ``symbol`` = ``value`` in SI ``unit``.

    ``origin`` is where an input comes from (``catalogue``, ``brief``, a table), or the formula
    in the symbols of earlier lines.
    """
    formula = origin if isinstance(origin, Formula) else None
    return Step(
        symbol=symbol,
        expression=text_of(origin) if isinstance(origin, Formula) else origin,
        value=float(value),
        unit=unit,
        clause=clause,
        meaning=meaning,
        formula=formula,
    )
