"""Units in column heads: what a unit measures and its factor to SI, however it is written."""

from __future__ import annotations

import re
from functools import lru_cache

from sizing.units import Kind, QuantityError, factor

STANDARD_GRAVITY = 9.80665
"""m/s², turns a weight per length (N/m) into a mass per length (ISO 80000-3)."""

KINDS: dict[str, Kind] = {
    "length": "length",
    "area": "area",
    "second moment": "second moment",
    "mass per length": "mass per length",
    "weight per length": "line load",
    "density": "density",
    "mass": "mass",
}
"""What a unit may measure here, in the words of :mod:`sizing.units`.

A mass comes before a weight: lb/ft in a section table is a mass.
"""

_WORDS = {"lbs": "lb", "plf": "lb/ft", "inch": "in", "inches": "in", "kgs": "kg", "metre": "m"}


@lru_cache(maxsize=256)
def unit_factor(unit: str) -> tuple[str, float] | None:
    """Return (what it measures, factor to SI) of a unit such as ``cm2``, ``in⁴`` or ``lb/ft``.

    Factors lead to m, m², m⁴, kg/m, N/m, kg/m³ and kg. None when it is no unit of those.
    """
    text = _plain(unit)
    for what, kind in KINDS.items():
        try:
            return what, float(factor(text, kind))
        except QuantityError:
            continue
    return None


def _plain(unit: str) -> str:
    """Bring trade spellings to words, powers, * and /: ``sq. in.``, ``cm^4``, ``lbs/ft``."""
    text = re.sub(r"\bsq\.?\s*([A-Za-z]+)", r"\g<1>2", unit.strip())
    text = re.sub(r"\s+per\s+", "/", text)
    text = re.sub(r"[\s.]", "", text)
    return "/".join(_WORDS.get(part.casefold(), part) for part in text.split("/"))
