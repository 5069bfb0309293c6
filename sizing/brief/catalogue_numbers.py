"""Numbers as people write them in tables: which mark is the decimal one, and what is refused.

``1,234`` may be one and a bit or more than a thousand, and reading it the wrong way gives a
silently wrong section. Such a number is accepted only when the file itself settles the matter:
by declaring its decimal mark, or by other numbers that can be read in one way only.
"""

from __future__ import annotations

import re
from collections.abc import Iterable
from dataclasses import dataclass
from typing import Literal

Decimal = Literal["point", "comma"]

_SPACES = re.compile(r"[\u0020\u00a0\u2007\u2009\u202f'\u2019]")
_GROUPED = re.compile(
    r"^[+-]?[0-9]{1,3}(?:[\u0020\u00a0\u2007\u2009\u202f'\u2019][0-9]{3})+(?![0-9])"
)
_MINUS = re.compile(r"[\u2212\u2012\u2013\u2014](?=[0-9.,])")
_NUMBER = re.compile(r"^[+-]?(?:[0-9]+\.?[0-9]*|\.[0-9]+)(?:[eE][+-]?[0-9]{1,2})?$")
_UNDECIDED = re.compile(r"^[+-]?[1-9][0-9]{0,2}[.,][0-9]{3}$")
_POINT_SHAPE = re.compile(r"^[+-]?[0-9]{1,3}(?:,[0-9]{3})*\.[0-9]*(?:[eE][+-]?[0-9]{1,2})?$")
_COMMA_SHAPE = re.compile(r"^[+-]?[0-9]{1,3}(?:\.[0-9]{3})*,[0-9]*(?:[eE][+-]?[0-9]{1,2})?$")

EMPTY = frozenset({"", "-", "–", "—", "n/a", "na"})
"""Cells that hold no value."""


@dataclass(frozen=True, kw_only=True, slots=True)
class Number:
    """A number read from a cell; ``half`` is half a unit in its last printed place."""

    value: float
    half: float


@dataclass(frozen=True, kw_only=True, slots=True)
class Marks:
    """How the numbers of a file are written.

    ``decimal`` is the decimal mark; ``settled``: it is beyond doubt, being declared, forced by
    the delimiter or shown by some number. ``thousands``: the other mark can only group
    thousands, because the decimal mark is declared or shown. A comma in a file separated by
    commas needs a number that shows it, ``1,234.5``.
    """

    decimal: Decimal
    settled: bool
    thousands: bool


class NumberError(ValueError):
    """A cell that is not one certain number; ``expected`` and ``fix`` complete the message."""

    def __init__(self, expected: str, fix: str = "") -> None:
        self.expected, self.fix = expected, fix
        super().__init__(expected)


def plain(cell: str) -> str:
    """Return the cell with Unicode minus signs made plain and spaces between thousands closed."""
    text = _MINUS.sub("-", cell.strip())
    return _SPACES.sub("", text) if _GROUPED.match(text) else text


def marks_of(cells: Iterable[str], *, delimiter: str, declared: Decimal | None) -> Marks:
    """Find the decimal mark from the numbers that can be read in one way only.

    In a file separated by commas it is the point unless the header declares otherwise.
    """
    texts = [plain(cell) for cell in cells]
    certain = [text for text in texts if not _UNDECIDED.match(text)]
    commas = sum(bool(_COMMA_SHAPE.match(text)) for text in certain)
    points = sum(bool(_POINT_SHAPE.match(text)) for text in certain)
    if declared is not None:
        decimal = declared
    elif delimiter == ",":
        decimal = "point"
    else:
        decimal = "comma" if commas > points else "point"
    shape, other = (_COMMA_SHAPE, ".") if decimal == "comma" else (_POINT_SHAPE, ",")
    shown = [text for text in certain if shape.match(text)]
    return Marks(
        decimal=decimal,
        settled=bool(shown) or declared is not None or delimiter == ",",
        thousands=declared is not None
        or (bool(shown) and delimiter != ",")
        or any(other in text for text in shown),
    )


def read_number(cell: str, marks: Marks) -> Number:
    """Return the number in a cell; raise :class:`NumberError` when it is not one for certain."""
    text = plain(cell)
    mark, other = (",", ".") if marks.decimal == "comma" else (".", ",")
    if _UNDECIDED.match(text):
        certain = (mark in text and marks.settled) or (other in text and marks.thousands)
        if not certain:
            raise _undecided(text)
    if other in text:
        shape = _COMMA_SHAPE if marks.decimal == "comma" else _POINT_SHAPE
        whole = re.compile(rf"^[+-]?[0-9]{{1,3}}(?:\{other}[0-9]{{3}})+$")
        if not (shape.match(text) or whole.match(text)):
            raise NumberError(
                f"a number with a decimal {marks.decimal}, as elsewhere in the file",
                "Write every number of the file with the same decimal mark.",
            )
        text = text.replace(other, "")
    return _value(text.replace(",", "."))


def _undecided(text: str) -> NumberError:
    as_decimal = text.replace(",", ".")
    as_thousands = text.replace(",", "").replace(".", "")
    return NumberError(
        f"a number that can be read in one way only (this is {as_decimal} or {as_thousands})",
        "Declare the decimal mark in the header, # decimal = comma or # decimal = point, or "
        "leave thousands marks out.",
    )


def _value(text: str) -> Number:
    if not _NUMBER.match(text):
        raise NumberError("a number", _number_advice(text))
    mantissa = re.split(r"[eE]", text)
    exponent = int(mantissa[1]) if len(mantissa) > 1 else 0
    decimals = len(mantissa[0].partition(".")[2])
    return Number(value=float(text), half=0.5 * 10.0 ** (exponent - decimals))


def _number_advice(text: str) -> str:
    if re.match(r"^[+-]?(nan|inf|infinity)$", text, re.IGNORECASE):
        return "Only finite numbers can be used."
    if re.match(r"^[+-]?[0-9.,]+[eE][+-]?[0-9]+$", text):
        return "No property of a section is of this size."
    if re.match(r"^[0-9]+[ -]?[0-9]*/[0-9]+$", text):
        return "Write fractions as decimals, 3/8 as 0.375."
    if text.startswith(("=", "#")):
        return "Save the sheet with values, not with formulas or errors."
    if re.match(r"^[0-9.,]+\s*[A-Za-zµ²³⁴]", text):
        return "Put the unit into the column head, in square brackets."
    return ""
