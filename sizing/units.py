"""Units at the edges: quantities to SI on the way in, SI to printed numbers on the way out.

Inside the package everything is SI: N, m, Pa, kg, K. A quantity in a file is a bare number,
which takes the brief's unit for its kind, or text with a unit such as ``"120 mm"``. Conversion
is exact (rational arithmetic, rounded once), so that 35 mm and 0.035 m are the same float.
Common units stand in a table that a test compares with pint; every other unit asks pint.
"""

from __future__ import annotations

import math
import re
from dataclasses import dataclass
from difflib import get_close_matches
from fractions import Fraction
from functools import lru_cache
from typing import Any, Literal, Protocol

Kind = Literal[
    "length",
    "force",
    "line load",
    "pressure",
    "stress",
    "area",
    "second moment",
    "section modulus",
    "surface per length",
    "mass per length",
    "mass",
    "density",
    "temperature difference",
    "dimensionless",
    "price",
]
Dimension = tuple[int, int, int, int, int]
"""Powers of mass, length, time, temperature, and of anything else (current, angle, money)."""


class UnitPair(Protocol):
    """The brief's units: the names of its force and its length unit."""

    @property
    def force(self) -> str: ...  # noqa: D102 - the class docstring says it
    @property
    def length(self) -> str: ...  # noqa: D102 - the class docstring says it


class QuantityError(ValueError):
    """A quantity that cannot be used: what was found, what belongs there, how to mend it."""

    def __init__(self, *, found: str, expected: str, fix: str = "") -> None:
        self.found, self.expected, self.fix = found, expected, fix
        super().__init__(f"found {found}; expected {expected}. {fix}".strip())


_NONE: Dimension = (0, 0, 0, 0, 0)
_MASS: Dimension = (1, 0, 0, 0, 0)
_LENGTH: Dimension = (0, 1, 0, 0, 0)
_FORCE: Dimension = (1, 1, -2, 0, 0)
_PRESSURE: Dimension = (1, -1, -2, 0, 0)
_LINE: Dimension = (1, 0, -2, 0, 0)
_WARMTH: Dimension = (0, 0, 0, 1, 0)

_KINDS: dict[Kind, tuple[Dimension, str, str]] = {
    "length": (_LENGTH, "a length", "120 mm"),
    "force": (_FORCE, "a force", "12 kN"),
    "line load": (_LINE, "a load per length", "12 kN/m"),
    "pressure": (_PRESSURE, "a pressure", "3.5 kN/m2"),
    "stress": (_PRESSURE, "a stress", "150 N/mm2"),
    "area": ((0, 2, 0, 0, 0), "an area", "12.5 cm2"),
    "second moment": ((0, 4, 0, 0, 0), "a second moment of area", "171 cm4"),
    "section modulus": ((0, 3, 0, 0, 0), "a section modulus", "42 cm3"),
    "surface per length": (_LENGTH, "a surface per length", "0.39 m2/m"),
    "mass per length": ((1, -1, 0, 0, 0), "a mass per length", "9.2 kg/m"),
    "mass": (_MASS, "a mass", "250 kg"),
    "density": ((1, -3, 0, 0, 0), "a density", "420 kg/m3"),
    "temperature difference": (_WARMTH, "a temperature difference", "20 degC"),
    "dimensionless": (_NONE, "a number without a unit", "0.9"),
    "price": (_NONE, "a price as a bare number", "14.5"),
}
_NAMES_OF_DIMENSIONS = {
    _NONE: "no dimension",
    _WARMTH: "temperature",
    (0, 0, 1, 0, 0): "time",
    (1, 2, -2, 0, 0): "moment or energy",
    (0, 1, -1, 0, 0): "speed",
    _LINE: "load per length",
    _PRESSURE: "pressure or stress",
    _LENGTH: "length",
} | {
    dimension: noun.split(" ", 1)[1]
    for kind, (dimension, noun, _) in _KINDS.items()
    if dimension not in (_NONE, _LENGTH, _PRESSURE, _LINE, _WARMTH)
}

# Exact by definition: inch 25.4 mm, pound 0.45359237 kg, standard gravity 9.80665 m/s2
# (international yard and pound agreement 1959; 3rd CGPM 1901). A test compares all with pint.
_INCH = Fraction(254, 10000)
_FOOT = 12 * _INCH
_POUND = Fraction(45359237, 10**8)
_POUND_FORCE = _POUND * Fraction(980665, 10**5)
_ATOMS: dict[str, tuple[Fraction, Dimension]] = {
    "mm": (Fraction(1, 1000), _LENGTH),
    "cm": (Fraction(1, 100), _LENGTH),
    "m": (Fraction(1), _LENGTH),
    "km": (Fraction(1000), _LENGTH),
    "in": (_INCH, _LENGTH),
    "ft": (_FOOT, _LENGTH),
    "N": (Fraction(1), _FORCE),
    "kN": (Fraction(1000), _FORCE),
    "MN": (Fraction(10**6), _FORCE),
    "lbf": (_POUND_FORCE, _FORCE),
    "kip": (1000 * _POUND_FORCE, _FORCE),
    "Pa": (Fraction(1), _PRESSURE),
    "kPa": (Fraction(10**3), _PRESSURE),
    "MPa": (Fraction(10**6), _PRESSURE),
    "GPa": (Fraction(10**9), _PRESSURE),
    "psi": (_POUND_FORCE / _INCH**2, _PRESSURE),
    "ksi": (1000 * _POUND_FORCE / _INCH**2, _PRESSURE),
    "psf": (_POUND_FORCE / _FOOT**2, _PRESSURE),
    "ksf": (1000 * _POUND_FORCE / _FOOT**2, _PRESSURE),
    "plf": (_POUND_FORCE / _FOOT, _LINE),
    "klf": (1000 * _POUND_FORCE / _FOOT, _LINE),
    "kg": (Fraction(1), _MASS),
    "t": (Fraction(1000), _MASS),
    "lb": (_POUND, _MASS),
    "pcf": (_POUND / _FOOT**3, (1, -3, 0, 0, 0)),
    "K": (Fraction(1), _WARMTH),
    "degC": (Fraction(1), _WARMTH),
    "degF": (Fraction(5, 9), _WARMTH),
    "%": (Fraction(1, 100), _NONE),
}
FORCE_UNITS = ("N", "kN", "MN", "lbf", "kip")
LENGTH_UNITS = ("mm", "cm", "m", "in", "ft")
US_FORCE_UNITS = ("lbf", "kip")

_PLAUSIBLE = {
    _LENGTH: (Fraction(1, 1000), Fraction(10**4)),
    _MASS: (Fraction(1, 1000), Fraction(10**6)),
    _FORCE: (Fraction(1, 10), Fraction(10**7)),
    _PRESSURE: (Fraction(1), Fraction(10**11)),
}
"""Units outside these sizes (SI) are slips of the keyboard: mN for MN, mPa for MPa, nm for mm."""

_POUND_WORDS = {"lb": "lbf", "lbs": "lbf", "pound": "lbf", "pounds": "lbf"}
"""The US trade writes lb for the force as well; a force kind reads it so, a mass kind as mass."""

_LONGEST_TEXT = 80
_LARGEST_EXPONENT = 250
"""Beyond 1e250 no unit can keep the result a finite float."""
_NUMBER = re.compile(r"[+-]?(?:\d+\.?\d*|\.\d+)(?:[eE][+-]?\d+)?")
_DECIMAL_COMMA = re.compile(r"[+-]?\d+,\d+")
_SPACED_DIGITS = re.compile(r"[+-]?\d+ +\d")
_FACTOR = re.compile(r"([A-Za-z_%]+)\^?([1-4])?")
_PLAIN = str.maketrans(
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


def parse(value: object, kind: Kind, units: UnitPair, *, bare: bool = True) -> float:
    """Return a quantity in SI units.

    ``value`` is a number in the brief's unit for its kind (see :func:`bare_unit`) or text with
    a unit. ``bare=False`` refuses numbers without a unit. Raises :class:`QuantityError` for a
    wrong dimension, an unknown unit, a boolean, NaN, infinity, a decimal comma and the like.
    """
    _, noun, example = _KINDS[kind]
    expected = f"{noun}, such as {example if _is_plain(kind) else _quoted(example)}"
    if isinstance(value, bool) or not isinstance(value, (int, float, str)):
        raise QuantityError(found=_shown(value), expected=expected)
    if isinstance(value, str):
        return _from_text(value, kind, expected)
    if not bare and not _is_plain(kind):
        fix = f'Write the unit with it, for instance "{value} {example.split()[1]}".'
        raise QuantityError(found=f"{value} without a unit", expected=expected, fix=fix)
    digits = str(value) if len(str(value)) <= _LONGEST_TEXT else "inf"
    return _converted(digits, _shown(value), expected, factor(bare_unit(kind, units), kind))


def factor(unit: str, kind: Kind) -> Fraction:
    """Return the size of one ``unit`` in SI units, exactly; raise :class:`QuantityError`."""
    dimension, noun, example = _KINDS[kind]
    text = unit.translate(_PLAIN).replace("°", "deg").strip()
    if kind == "price" and text:
        raise QuantityError(
            found=_quoted(unit),
            expected=noun,
            fix="Leave the currency out; one currency holds for the whole job.",
        )
    size, found = _size(text, dimension[2] == -2)
    if found != dimension:
        what = _NAMES_OF_DIMENSIONS.get(found, "another kind")
        fix = f"The unit {_quoted(unit)} measures {what}."
        if found == _MASS and dimension == _FORCE:
            fix += " A mass is not a force: give its weight, for instance in kN."
        elif close := _near(text, dimension):
            fix += f" Did you mean {_quoted(close)}?"
        raise QuantityError(
            found=f"the unit {_quoted(unit)}", expected=f"a unit of {noun}, such as {example}",
            fix=fix,
        )  # fmt: skip
    return size


def bare_unit(kind: Kind, units: UnitPair) -> str:
    """Return the unit that a bare number of this kind takes, e.g. ``kN/m2`` for a stress."""
    us = is_us(units)
    f, m = units.force, units.length
    names: dict[Kind, str] = {
        "length": m,
        "force": f,
        "line load": f"{f}/{m}",
        "pressure": f"{f}/{m}2",
        "stress": f"{f}/{m}2",
        "area": f"{m}2",
        "second moment": f"{m}4",
        "section modulus": f"{m}3",
        "surface per length": f"{m}2/{m}",
        "mass per length": "lb/ft" if us else "kg/m",
        "mass": "lb" if us else "kg",
        "density": "lb/ft3" if us else "kg/m3",
        "temperature difference": "degF" if us else "degC",
        "dimensionless": "",
        "price": "",
    }
    return names[kind]


def is_us(units: UnitPair) -> bool:
    """Return whether documents print US units: the force unit is kip or lbf."""
    return units.force in US_FORCE_UNITS


def _is_plain(kind: Kind) -> bool:
    return _KINDS[kind][0] == _NONE


def _from_text(value: str, kind: Kind, expected: str) -> float:
    shown = _shown(value)
    text = " ".join(value.translate(_PLAIN).split())
    if _DECIMAL_COMMA.match(text):
        number = text.split(" ")[0].replace(",", ".")
        fix = f"Write a decimal point, for instance {number}, and thousands without any mark."
        raise QuantityError(found=f"{shown} with a comma", expected=expected, fix=fix)
    if _SPACED_DIGITS.match(text):
        fix = "Write the digits of a number without spaces."
        raise QuantityError(found=shown, expected=expected, fix=fix)
    number_match = _NUMBER.match(text)
    if len(text) > _LONGEST_TEXT or number_match is None:
        raise QuantityError(found=shown, expected=expected)
    unit = text[number_match.end() :].strip()
    if not unit:
        fix = "Write a bare number without quotation marks"
        fix += "." if _is_plain(kind) else ", or add the unit to the text."
        raise QuantityError(found=f"{shown} without a unit", expected=expected, fix=fix)
    try:
        size = factor(unit, kind)
    except QuantityError as error:
        raise QuantityError(found=shown, expected=expected, fix=error.fix) from None
    return _converted(number_match.group(), shown, expected, size)


def _converted(digits: str, shown: str, expected: str, size: Fraction) -> float:
    """Return number × size, rounded once; huge exponents never reach the exact arithmetic."""
    _, _, exponent = digits.casefold().partition("e")
    number, result = float(digits), math.nan
    if math.isfinite(number) and abs(int(exponent or 0)) < _LARGEST_EXPONENT:
        result = float(Fraction(digits) * size)
    if not math.isfinite(result):
        raise QuantityError(found=shown, expected=f"{expected}, and finite")
    return result


def _size(text: str, force_like: bool) -> tuple[Fraction, Dimension]:
    """Return size and dimension of a compound unit such as ``kip/in2``."""
    size, powers = Fraction(1), [0] * 5
    if not text:
        return size, _NONE
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
    import pint  # noqa: PLC0415 - slow to import, rarely needed

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
    import pint  # noqa: PLC0415 - slow to import, rarely needed

    return pint.UnitRegistry(cache_folder=None)


def _unknown(text: str) -> QuantityError:
    close = _near(text, None)
    fix = f"The unit {_quoted(text)} is not known."
    if close:
        fix += f" Did you mean {_quoted(close)}?"
    return QuantityError(found=f"the unit {_quoted(text)}", expected="a known unit", fix=fix)


def _near(text: str, dimension: Dimension | None) -> str:
    """Return the known unit that looks most like ``text``, case first; empty when none does."""
    names = [n for n, (_, d) in _ATOMS.items() if dimension is None or d == dimension]
    same = [n for n in names if n.casefold() == text.casefold() and n != text]
    close = same or [n for n in get_close_matches(text, names, n=1, cutoff=0.6) if n != text]
    return close[-1] if close else ""


def _quoted(text: str) -> str:
    return f'"{text}"'


def _shown(value: object) -> str:
    if isinstance(value, bool):
        return str(value).lower()
    if isinstance(value, str):
        return _quoted(value if len(value) <= 40 else value[:37] + "...")
    if isinstance(value, (int, float)):
        text = str(value)
        return text if len(text) <= 40 else text[:37] + "..."
    if isinstance(value, dict):
        return "a table"
    if isinstance(value, (list, tuple)):
        return "a list"
    return "nothing" if value is None else str(value)


@dataclass(frozen=True, kw_only=True, slots=True)
class DisplayUnit:
    """How one kind is printed: printed number = SI value × ``factor``, with its ``decimals``."""

    label: str
    factor: float
    decimals: int

    def value(self, si: float) -> float:
        """Return the printed number of an SI value, unrounded."""
        return si * self.factor

    def number(self, si: float) -> str:
        """Return the printed number as text, rounded for print, never ``-0.0``."""
        rounded = round(self.value(si), self.decimals) + 0.0
        return f"{rounded:.{self.decimals}f}"

    def text(self, si: float) -> str:
        """Return number and unit, e.g. ``12.3 kN``."""
        return f"{self.number(si)} {self.label}"


@dataclass(frozen=True, kw_only=True, slots=True)
class Display:
    """The units of every document of one brief; heads carry the label, cells the number."""

    force: DisplayUnit
    length: DisplayUnit
    small_length: DisplayUnit
    line_load: DisplayUnit
    pressure: DisplayUnit
    stress: DisplayUnit
    area: DisplayUnit
    second_moment: DisplayUnit
    section_modulus: DisplayUnit
    mass: DisplayUnit
    mass_per_length: DisplayUnit
    density: DisplayUnit
    surface: DisplayUnit
    surface_per_length: DisplayUnit
    temperature_difference: DisplayUnit
    dimensionless: DisplayUnit

    @classmethod
    def of(cls, units: UnitPair) -> Display:
        """Return the display of a brief's units: US units for kip and lbf, metric otherwise."""
        us = is_us(units)
        f, m = units.force, units.length

        def unit(kind: Kind, metric: str, american: str, decimals: int) -> DisplayUnit:
            label = american if us else metric
            return DisplayUnit(
                label=label, factor=float(1 / factor(label, kind)), decimals=decimals
            )

        return cls(
            force=unit("force", f, f, {"N": 0, "kN": 1, "MN": 4, "lbf": 0, "kip": 2}[f]),
            length=unit("length", m, m, {"mm": 0, "cm": 1, "m": 3, "in": 2, "ft": 3}[m]),
            small_length=unit("length", "mm", "in", 3 if us else 1),
            line_load=unit("line load", f"{f}/{m}", f"{f}/{m}", 3),
            pressure=unit("pressure", "kN/m²", "psf", 2),
            stress=unit("stress", "N/mm²", "ksi", 2 if us else 1),
            area=unit("area", "cm²", "in²", 2),
            second_moment=unit("second moment", "cm⁴", "in⁴", 2),
            section_modulus=unit("section modulus", "cm³", "in³", 2),
            mass=unit("mass", "kg", "lb", 1),
            mass_per_length=unit("mass per length", "kg/m", "lb/ft", 2),
            density=unit("density", "kg/m³", "lb/ft³", 1),
            surface=unit("area", "m²", "ft²", 2),
            surface_per_length=unit("surface per length", "m²/m", "ft²/ft", 3),
            temperature_difference=unit("temperature difference", "K", "degF", 1),
            dimensionless=DisplayUnit(label="-", factor=1.0, decimals=2),
        )
