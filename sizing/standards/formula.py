"""Small formulas that can be printed, evaluated, and set into a spreadsheet.

A standard writes each worked line once, as an expression of the symbols of earlier lines::

    chi, A, fy, gamma = symbols("χ_in", "A", "fy", "γM1")
    chi * A * fy / gamma         # prints: χ_in A fy / γM1

From that one expression come the text of the report, its value, and the live formula of the
recheck sheet, so that none of the three can say something else than the others.
"""

from __future__ import annotations

import math
import re
from collections.abc import Callable, Mapping
from dataclasses import dataclass
from typing import Literal

Real = int | float

SUM, PRODUCT, POWER, ATOM = range(4)
"""How tightly a printed term binds; a weaker term inside a stronger one takes brackets."""

PI_TEXT = "π"

_BRACKETS = re.compile(r"\([^()]*\)")
_COMPOUND = re.compile(r"[ /]")


class Formula:
    """A term. Terms combine with ``+ - * / **`` and with plain numbers."""

    def __add__(self, other: Formula | Real) -> Formula:
        return Binary(operation="+", left=self, right=term(other))

    def __radd__(self, other: Real) -> Formula:
        return Binary(operation="+", left=term(other), right=self)

    def __sub__(self, other: Formula | Real) -> Formula:
        return Binary(operation="-", left=self, right=term(other))

    def __rsub__(self, other: Real) -> Formula:
        return Binary(operation="-", left=term(other), right=self)

    def __mul__(self, other: Formula | Real) -> Formula:
        return Binary(operation="*", left=self, right=term(other))

    def __rmul__(self, other: Real) -> Formula:
        return Binary(operation="*", left=term(other), right=self)

    def __truediv__(self, other: Formula | Real) -> Formula:
        return Binary(operation="/", left=self, right=term(other))

    def __rtruediv__(self, other: Real) -> Formula:
        return Binary(operation="/", left=term(other), right=self)

    def __pow__(self, other: Formula | Real) -> Formula:
        return Binary(operation="^", left=self, right=term(other))

    def __rpow__(self, other: Real) -> Formula:
        return Binary(operation="^", left=term(other), right=self)


@dataclass(frozen=True, kw_only=True, slots=True)
class Symbol(Formula):
    """The value of the earlier line whose symbol is ``name``."""

    name: str


@dataclass(frozen=True, kw_only=True, slots=True)
class Constant(Formula):
    """A number of the standard, SI, of ``unit`` (``-``, ``m``, ``Pa``), printed as ``text``."""

    value: float
    unit: str
    text: str


@dataclass(frozen=True, kw_only=True, slots=True)
class Binary(Formula):
    """``left`` ``operation`` ``right``."""

    operation: Literal["+", "-", "*", "/", "^"]
    left: Formula
    right: Formula


@dataclass(frozen=True, kw_only=True, slots=True)
class Call(Formula):
    """A square root, the least or the greatest of ``arguments``."""

    name: Literal["sqrt", "min", "max"]
    arguments: tuple[Formula, ...]


@dataclass(frozen=True, kw_only=True, slots=True)
class Choice(Formula):
    """``first`` where ``left`` ≤ ``right``, else ``second``."""

    left: Formula
    right: Formula
    first: Formula
    second: Formula


PI = Constant(value=math.pi, unit="-", text=PI_TEXT)


def symbols(*names: str) -> tuple[Symbol, ...]:
    """Return the symbols of these names."""
    return tuple(Symbol(name=name) for name in names)


def number(value: float, unit: str = "-", text: str = "") -> Constant:
    """Return a constant of the standard; ``value`` in SI, printed as ``text`` where given."""
    return Constant(value=float(value), unit=unit, text=text or f"{value:g}")


def term(value: Formula | Real) -> Formula:
    """Return a plain number as a term, a term as it is."""
    return value if isinstance(value, Formula) else number(value)


def root(value: Formula | Real) -> Formula:
    """Return √value."""
    return Call(name="sqrt", arguments=(term(value),))


def least(*values: Formula | Real) -> Formula:
    """Return min(values); of a single value, the value itself."""
    return _of_several("min", values)


def greatest(*values: Formula | Real) -> Formula:
    """Return max(values); of a single value, the value itself."""
    return _of_several("max", values)


def _of_several(name: Literal["min", "max"], values: tuple[Formula | Real, ...]) -> Formula:
    terms = tuple(term(value) for value in values)
    return terms[0] if len(terms) == 1 else Call(name=name, arguments=terms)


def up_to(left: Formula, right: Formula | Real, first: Formula | Real, second: Formula) -> Formula:
    """Return ``first`` where left ≤ right, else ``second``."""
    return Choice(left=left, right=term(right), first=term(first), second=second)


def text_of(formula: Formula) -> str:
    """Return the formula as it is printed: products side by side, roots and squares as signs."""
    return _printed(formula)[0]


def _printed(formula: Formula) -> tuple[str, int]:  # noqa: PLR0911 -- one case for each kind
    match formula:
        case Symbol():
            return formula.name, _binding_of_name(formula.name)
        case Constant():
            return formula.text, _binding_of_name(formula.text)
        case Call(name="sqrt"):
            inner, binding = _printed(formula.arguments[0])
            return f"√{inner}" if binding == ATOM and len(inner) == 1 else f"√({inner})", ATOM
        case Call():
            inside = ", ".join(text_of(argument) for argument in formula.arguments)
            return f"{formula.name}({inside})", ATOM
        case Choice():
            return (
                f"{text_of(formula.first)} for {text_of(formula.left)} ≤ "
                f"{text_of(formula.right)}, else {text_of(formula.second)}",
                SUM - 1,
            )
        case Binary(operation="+" | "-"):
            left, _ = _printed(formula.left)
            right = _bracketed(formula.right, PRODUCT)
            return f"{left} {'+' if formula.operation == '+' else '−'} {right}", SUM
        case Binary(operation="^", right=Constant(value=2.0)):
            return f"{_bracketed(formula.left, ATOM)}²", POWER
        case Binary(operation="^"):
            return f"{_bracketed(formula.left, ATOM)}^{_bracketed(formula.right, ATOM)}", POWER
        case Binary(operation="*"):
            return f"{_bracketed(formula.left, PRODUCT)} {_factor(formula.right)}", PRODUCT
        case Binary():
            return f"{_bracketed(formula.left, PRODUCT)} / {_factor(formula.right)}", PRODUCT
    raise TypeError(f"no formula: {formula!r}")


def _binding_of_name(name: str) -> int:
    """Return how a name reads: ``Lc/r`` or ``0.5 m`` squared needs brackets, ``(le/d)_in`` not."""
    return PRODUCT if _COMPOUND.search(_BRACKETS.sub("", name)) else ATOM


def _factor(formula: Formula) -> str:
    """Return a right-hand factor: a product there needs brackets, a power does not."""
    return _bracketed(formula, POWER)


def _bracketed(formula: Formula, binding: int) -> str:
    text, own = _printed(formula)
    return text if own >= binding else f"({text})"


def value_of(formula: Formula, values: Mapping[str, float]) -> float:
    """Return the value with the SI ``values`` of the symbols. Raises KeyError for an unknown one.

    Powers, roots and quotients outside the real numbers raise ValueError or ZeroDivisionError.
    """
    match formula:
        case Symbol():
            return values[formula.name]
        case Constant():
            return formula.value
        case Call():
            found = [value_of(argument, values) for argument in formula.arguments]
            return math.sqrt(found[0]) if formula.name == "sqrt" else _PICK[formula.name](found)
        case Choice():
            first = value_of(formula.left, values) <= value_of(formula.right, values)
            return value_of(formula.first if first else formula.second, values)
        case Binary():
            left, right = value_of(formula.left, values), value_of(formula.right, values)
            return _OPERATIONS[formula.operation](left, right)
    raise TypeError(f"no formula: {formula!r}")


_PICK: dict[str, Callable[[list[float]], float]] = {"min": min, "max": max}
_OPERATIONS: dict[str, Callable[[float, float], float]] = {
    "+": lambda a, b: a + b,
    "-": lambda a, b: a - b,
    "*": lambda a, b: a * b,
    "/": lambda a, b: a / b,
    "^": math.pow,
}


def spreadsheet_of(
    formula: Formula, cell: Callable[[str], str], scale: Callable[[str], float]
) -> str:
    """Return the formula in spreadsheet notation, without the leading equals sign.

    ``cell`` gives the reference of a symbol and ``scale`` the number in the sheet's unit for one
    SI unit; the sheet's units must form one system (N, mm, N/mm²), so that no factor enters.
    Every term is bracketed: nothing then rests on the precedence rules of a program.
    """

    def put(part: Formula) -> str:
        match part:
            case Symbol():
                return cell(part.name)
            case Constant(text="π"):
                return "PI()"
            case Constant():
                return repr(part.value * scale(part.unit))
            case Call():
                return f"{part.name.upper()}({','.join(put(a) for a in part.arguments)})"
            case Choice():
                condition = f"{put(part.left)}<={put(part.right)}"
                return f"IF({condition},{put(part.first)},{put(part.second)})"
            case Binary():
                return f"({put(part.left)}{part.operation}{put(part.right)})"
        raise TypeError(f"no formula: {part!r}")

    text = put(formula)
    return text[1:-1] if isinstance(formula, Binary) else text


def symbols_in(formula: Formula) -> frozenset[str]:
    """Return the names of all symbols that the formula refers to."""
    match formula:
        case Symbol():
            return frozenset({formula.name})
        case Call():
            parts: tuple[Formula, ...] = formula.arguments
        case Choice():
            parts = (formula.left, formula.right, formula.first, formula.second)
        case Binary():
            parts = (formula.left, formula.right)
        case _:
            parts = ()
    return frozenset[str]().union(*(symbols_in(part) for part in parts))
