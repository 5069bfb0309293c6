"""Units at the edges: quantities to SI on the way in, SI to printed numbers on the way out.

Inside the package everything is SI: N, m, Pa, kg, K. A quantity in a file is a bare number,
which takes the brief's unit for its kind, or text with a unit such as ``"120 mm"``. Conversion
is exact (rational arithmetic, rounded once), so that 35 mm and 0.035 m are the same float.
Which words are units says :mod:`sizing.unit_words`.
"""

from __future__ import annotations

import math
import re
from dataclasses import dataclass
from fractions import Fraction
from typing import Literal, Protocol

from sizing.unit_words import (
    FORCE,
    LENGTH,
    LINE_LOAD,
    MASS,
    NO_DIMENSION,
    PLAIN_SIGNS,
    PRESSURE,
    TEMPERATURE,
    Dimension,
    QuantityError,
    nearest_unit,
    quoted,
    size_of,
)

__all__ = [
    "Display",
    "DisplayUnit",
    "Kind",
    "QuantityError",
    "UnitPair",
    "bare_unit",
    "factor",
    "is_us",
    "parse",
]

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


class UnitPair(Protocol):
    """The brief's units: the names of its force and its length unit."""

    @property
    def force(self) -> str: ...  # noqa: D102 - the class docstring says it
    @property
    def length(self) -> str: ...  # noqa: D102 - the class docstring says it


_KINDS: dict[Kind, tuple[Dimension, str, str]] = {
    "length": (LENGTH, "a length", "120 mm"),
    "force": (FORCE, "a force", "12 kN"),
    "line load": (LINE_LOAD, "a load per length", "12 kN/m"),
    "pressure": (PRESSURE, "a pressure", "3.5 kN/m2"),
    "stress": (PRESSURE, "a stress", "150 N/mm2"),
    "area": ((0, 2, 0, 0, 0), "an area", "12.5 cm2"),
    "second moment": ((0, 4, 0, 0, 0), "a second moment of area", "171 cm4"),
    "section modulus": ((0, 3, 0, 0, 0), "a section modulus", "42 cm3"),
    "surface per length": (LENGTH, "a surface per length", "0.39 m2/m"),
    "mass per length": ((1, -1, 0, 0, 0), "a mass per length", "9.2 kg/m"),
    "mass": (MASS, "a mass", "250 kg"),
    "density": ((1, -3, 0, 0, 0), "a density", "420 kg/m3"),
    "temperature difference": (TEMPERATURE, "a temperature difference", "20 degC"),
    "dimensionless": (NO_DIMENSION, "a number without a unit", "0.9"),
    "price": (NO_DIMENSION, "a price as a bare number", "14.5"),
}
_NAMES_OF_DIMENSIONS = {
    NO_DIMENSION: "no dimension",
    TEMPERATURE: "temperature",
    (0, 0, 1, 0, 0): "time",
    (1, 2, -2, 0, 0): "moment or energy",
    (0, 1, -1, 0, 0): "speed",
    LINE_LOAD: "load per length",
    PRESSURE: "pressure or stress",
    LENGTH: "length",
} | {
    dimension: noun.split(" ", 1)[1]
    for kind, (dimension, noun, _) in _KINDS.items()
    if dimension not in (NO_DIMENSION, LENGTH, PRESSURE, LINE_LOAD, TEMPERATURE)
}

US_FORCE_UNITS = ("lbf", "kip")

_LONGEST_TEXT = 80
_LARGEST_EXPONENT = 250
"""Powers of ten beyond this are refused before exact arithmetic: no quantity of this world."""
_NUMBER = re.compile(r"[+-]?(?:\d+\.?\d*|\.\d+)(?:[eE][+-]?\d+)?", re.ASCII)
_DECIMAL_COMMA = re.compile(r"[+-]?\d+,\d+", re.ASCII)
_MARKED_DIGITS = re.compile(r"[+-]?\d[\d.]*['’,]\d", re.ASCII)
_SPACED_DIGITS = re.compile(r"[+-]?\d+ +\d")


def parse(value: object, kind: Kind, units: UnitPair, *, bare: bool = True) -> float:
    """Return a quantity in SI units.

    ``value`` is a number in the brief's unit for its kind (see :func:`bare_unit`) or text with
    a unit. ``bare=False`` refuses numbers without a unit. Raises :class:`QuantityError` for a
    wrong dimension, an unknown unit, a boolean, NaN, infinity, a decimal comma and the like.
    """
    _, noun, example = _KINDS[kind]
    expected = f"{noun}, such as {example if _is_plain(kind) else quoted(example)}"
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
    text = unit.translate(PLAIN_SIGNS).replace("°", "deg").strip()
    if _is_plain(kind) and text and (kind == "price" or text != "%"):
        fix = "Leave the currency out; one currency holds for the whole job."
        raise QuantityError(
            found=quoted(unit), expected=noun, fix=fix if kind == "price" else "Leave the unit out."
        )
    size, found = size_of(text, dimension[2] == -2)
    if found != dimension:
        what = _NAMES_OF_DIMENSIONS.get(found, "another kind")
        fix = f"The unit {quoted(unit)} measures {what}."
        if found == MASS and dimension == FORCE:
            fix += " A mass is not a force: give its weight, for instance in kN."
        elif close := nearest_unit(text, dimension):
            fix += f" Did you mean {quoted(close)}?"
        raise QuantityError(
            found=f"the unit {quoted(unit)}", expected=f"a unit of {noun}, such as {example}",
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
    return _KINDS[kind][0] == NO_DIMENSION


def _from_text(value: str, kind: Kind, expected: str) -> float:
    shown = _shown(value)
    text = " ".join(value.translate(PLAIN_SIGNS).split())
    if _DECIMAL_COMMA.match(text):
        number = text.split(" ")[0].replace(",", ".")
        fix = f"Write a decimal point, for instance {number}, and thousands without any mark."
        raise QuantityError(found=f"{shown} with a comma", expected=expected, fix=fix)
    if _SPACED_DIGITS.match(text):
        fix = "Write the digits of a number without spaces."
        raise QuantityError(found=shown, expected=expected, fix=fix)
    if _MARKED_DIGITS.match(text):
        fix = "Write a decimal point, and thousands without any mark."
        raise QuantityError(found=shown, expected=expected, fix=fix)
    number_match = _NUMBER.match(text)
    if len(text) > _LONGEST_TEXT or number_match is None:
        raise QuantityError(found=shown, expected=expected)
    unit = text[number_match.end() :].strip()
    if not unit:
        if _is_plain(kind):
            fix = "Delete the quotation marks."
            raise QuantityError(found=f"{shown} as text", expected=expected, fix=fix)
        fix = "Write a bare number without quotation marks, or add the unit to the text."
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


def _shown(value: object) -> str:
    if isinstance(value, bool):
        return str(value).lower()
    if isinstance(value, str):
        return quoted(value if len(value) <= 40 else value[:37] + "...")
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
