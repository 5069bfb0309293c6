"""Unit words: what ``kN``, ``in`` or ``degC`` measures and how large it is, exactly.

Common units stand in a table that a test compares with pint; every other word asks pint.
"""

from __future__ import annotations

import math
import re
from difflib import get_close_matches
from fractions import Fraction
from functools import lru_cache
from typing import Any

Dimension = tuple[int, int, int, int, int]
"""Powers of mass, length, time, temperature, and of anything else (current, angle, money)."""


class QuantityError(ValueError):
    """A quantity that cannot be used: what was found, what belongs there, how to mend it."""

    def __init__(self, *, found: str, expected: str, fix: str = "") -> None:
        self.found, self.expected, self.fix = found, expected, fix
        super().__init__(f"found {found}; expected {expected}. {fix}".strip())


NO_DIMENSION: Dimension = (0, 0, 0, 0, 0)
MASS: Dimension = (1, 0, 0, 0, 0)
LENGTH: Dimension = (0, 1, 0, 0, 0)
FORCE: Dimension = (1, 1, -2, 0, 0)
PRESSURE: Dimension = (1, -1, -2, 0, 0)
LINE_LOAD: Dimension = (1, 0, -2, 0, 0)
TEMPERATURE: Dimension = (0, 0, 0, 1, 0)

# Exact by definition: inch 25.4 mm, pound 0.45359237 kg, standard gravity 9.80665 m/s2
# (international yard and pound agreement 1959; 3rd CGPM 1901). A test compares all with pint.
_INCH = Fraction(254, 10000)
_FOOT = 12 * _INCH
_POUND = Fraction(45359237, 10**8)
_POUND_FORCE = _POUND * Fraction(980665, 10**5)
_ATOMS: dict[str, tuple[Fraction, Dimension]] = {
    "mm": (Fraction(1, 1000), LENGTH),
    "cm": (Fraction(1, 100), LENGTH),
    "m": (Fraction(1), LENGTH),
    "km": (Fraction(1000), LENGTH),
    "in": (_INCH, LENGTH),
    "ft": (_FOOT, LENGTH),
    "N": (Fraction(1), FORCE),
    "kN": (Fraction(1000), FORCE),
    "MN": (Fraction(10**6), FORCE),
    "lbf": (_POUND_FORCE, FORCE),
    "kip": (1000 * _POUND_FORCE, FORCE),
    "Pa": (Fraction(1), PRESSURE),
    "kPa": (Fraction(10**3), PRESSURE),
    "MPa": (Fraction(10**6), PRESSURE),
    "GPa": (Fraction(10**9), PRESSURE),
    "psi": (_POUND_FORCE / _INCH**2, PRESSURE),
    "ksi": (1000 * _POUND_FORCE / _INCH**2, PRESSURE),
    "psf": (_POUND_FORCE / _FOOT**2, PRESSURE),
    "ksf": (1000 * _POUND_FORCE / _FOOT**2, PRESSURE),
    "plf": (_POUND_FORCE / _FOOT, LINE_LOAD),
    "klf": (1000 * _POUND_FORCE / _FOOT, LINE_LOAD),
    "kg": (Fraction(1), MASS),
    "t": (Fraction(1000), MASS),
    "lb": (_POUND, MASS),
    "pcf": (_POUND / _FOOT**3, (1, -3, 0, 0, 0)),
    "K": (Fraction(1), TEMPERATURE),
    "degC": (Fraction(1), TEMPERATURE),
    "degF": (Fraction(5, 9), TEMPERATURE),
    "%": (Fraction(1, 100), NO_DIMENSION),
}
_PLAUSIBLE = {
    LENGTH: (Fraction(1, 1000), Fraction(10**4)),
    MASS: (Fraction(1, 1000), Fraction(10**6)),
    FORCE: (Fraction(1, 10), Fraction(10**7)),
    PRESSURE: (Fraction(1), Fraction(10**11)),
}
"""Units outside these sizes (SI) are slips of the keyboard: mN for MN, mPa for MPa, nm for mm."""

_POUND_WORDS = {"lb": "lbf", "lbs": "lbf", "pound": "lbf", "pounds": "lbf"}
"""The US trade writes lb for the force as well; a force kind reads it so, a mass kind as mass."""

_FACTOR = re.compile(r"([A-Za-z_%]+)\^?([1-4])?")
PLAIN_SIGNS = str.maketrans(
    {
        "\u2212": "-",
        "\u00a0": " ",
        "\u202f": " ",
        "\u2009": " ",
        "²": "2",
        "³": "3",
        "⁴": "4",
        "·": "*",
        "⋅": "*",
    }
)


def size_of(text: str, force_like: bool) -> tuple[Fraction, Dimension]:
    """Return size and dimension of a compound unit such as ``kip/in2``."""
    size, powers = Fraction(1), [0] * 5
    if not text:
        return size, NO_DIMENSION
    for place, part in enumerate(text.replace("**", "^").split("/")):
        sign = 1 if place == 0 else -1
        for word in part.split("*"):
            match = _FACTOR.fullmatch(word.strip())
            if match is None:
                raise _unknown(text)
            name, power = match.group(1), sign * int(match.group(2) or 1)
            one, dimension = _atom(_POUND_WORDS.get(name, name) if force_like else name)
            size *= one**power
            powers = [p + power * d for p, d in zip(powers, dimension, strict=True)]
    return size, (powers[0], powers[1], powers[2], powers[3], powers[4])


def _atom(name: str) -> tuple[Fraction, Dimension]:
    known = _ATOMS.get(name) or _asked_of_pint(name)
    if known is None:
        raise _unknown(name)
    size, dimension = known
    least, greatest = _PLAUSIBLE.get(dimension, (size, size))
    if not least <= size <= greatest:
        raise _unknown(name)
    return size, dimension


@lru_cache(maxsize=256)
def _asked_of_pint(name: str) -> tuple[Fraction, Dimension] | None:
    """Return what pint knows of one unit word; None when unknown or not a plain factor."""
    import pint  # here, because it loads slowly and is rarely needed

    registry = _registry()
    try:
        unit = registry.parse_units(name)
        one = registry.Quantity(1.0, unit).to_base_units()
        two = registry.Quantity(2.0, unit).to_base_units()
    except (pint.PintError, ValueError, TypeError, AttributeError):
        return None
    if not math.isclose(two.magnitude, 2.0 * one.magnitude, rel_tol=1e-12) or one.magnitude <= 0:
        return None  # a scale with an offset or a logarithm is no factor
    powers = dict(one.dimensionality)
    known = [powers.pop(f"[{word}]", 0) for word in ("mass", "length", "time", "temperature")]
    if any(p != int(p) for p in known):
        return None
    mass, length, time, warmth = (int(p) for p in known)
    return Fraction(repr(float(one.magnitude))), (mass, length, time, warmth, len(powers))


@lru_cache(maxsize=1)
def _registry() -> Any:
    import pint

    return pint.UnitRegistry(cache_folder=None)


def _unknown(text: str) -> QuantityError:
    close = nearest_unit(text, None)
    fix = f"The unit {quoted(text)} is not known."
    if close:
        fix += f" Did you mean {quoted(close)}?"
    return QuantityError(found=f"the unit {quoted(text)}", expected="a known unit", fix=fix)


def nearest_unit(text: str, dimension: Dimension | None) -> str:
    """Return the known unit that looks most like ``text``, case first; empty when none does."""
    names = [n for n, (_, d) in _ATOMS.items() if dimension is None or d == dimension]
    same = [n for n in names if n.casefold() == text.casefold() and n != text]
    close = same or [n for n in get_close_matches(text, names, n=1, cutoff=0.6) if n != text]
    return close[-1] if close else ""


def quoted(text: str) -> str:
    """Return the text in quotation marks."""
    return f'"{text}"'
