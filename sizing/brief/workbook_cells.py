"""One value of a brief in one cell: how it is written there, and how it is read back.

Trade spelling comes first: numbers are numbers, lists are ``A0, A1``, yes and no are words. What
that spelling cannot hold for certain (a text that looks like a number, an empty list) is written
as TOML, ``"12"`` or ``[]``, and read as such.
"""

from __future__ import annotations

import math
import re
import tomllib
from collections.abc import Callable
from dataclasses import dataclass
from datetime import date, datetime, time, timedelta
from typing import Any, Literal

from sizing.brief.catalogue_numbers import NumberError, marks_of, plain, read_number
from sizing.brief.toml_writer import toml_string, toml_value

Kind = Literal[
    "text", "date", "choice", "flag", "list", "quantities", "list or word", "table", "any"
]
"""What a cell holds. ``any``: a quantity or whatever else; ``quantities``: a list of such;
``date``: text that is a date."""

CellValue = str | int | float | bool

LARGEST_WHOLE = 2**53
"""Beyond it a cell does not hold every whole number."""

LONGEST_TEXT = 32_767
"""Characters that a cell holds (limit of spreadsheet programs)."""

_PARTS = re.compile(r'(?:"(?:[^"\\]|\\.)*"|\[[^\]]*\]|\{[^}]*\}|[^,"\[{])+|["\[{]')
"""What stands between commas that are outside quotation marks and brackets."""
_STRUCTURED = ('"', "'", "[", "{")
_LOOKALIKES = ("x005F_", "_x")
"""Spreadsheet files write a character by its code as ``_x0041_``."""


@dataclass(frozen=True, kw_only=True, slots=True)
class Oddity:
    """A cell's content that is no value; messages show ``words`` as what was found."""

    words: str

    def __str__(self) -> str:
        return self.words


@dataclass(frozen=True, kw_only=True, slots=True)
class Decoded:
    """A value read from a cell, and a remark where something was taken for granted."""

    value: Any
    remark: str = ""


def encode(value: Any, kind: Kind, choices: tuple[str, ...] = ()) -> CellValue | None:
    """Return the cell for a value of a brief; None when this kind of cell cannot hold it."""
    try:
        cell = _ENCODERS[kind](value)
    except TypeError:
        return None
    if cell is None or (isinstance(cell, str) and len(cell) > LONGEST_TEXT):
        return None
    back = decode(cell, kind, choices)
    same = not back.remark and _same(back.value, value)
    return cell if same else None


def decode(cell: Any, kind: Kind, choices: tuple[str, ...] = ()) -> Decoded:
    """Return the value in a cell that is not empty."""
    if isinstance(cell, Oddity):
        return Decoded(value=cell)
    if isinstance(cell, str):
        cell = cell.strip()
    if kind == "choice" and isinstance(cell, str):
        folded = {choice.casefold(): choice for choice in reversed(choices)}
        if cell not in choices and cell.casefold() in folded:
            return Decoded(value=folded[cell.casefold()])
    return _DECODERS[kind](cell)


def toml_of(text: str) -> Any:
    """Return the TOML value that the text is; None when it is none."""
    try:
        return tomllib.loads(f"value = {text}").get("value")
    except (tomllib.TOMLDecodeError, ValueError, RecursionError):
        return None


def pairs_of(text: str) -> dict[str, Any] | None:
    """Return the table that TOML's ``key = value, key = value`` is; None when it is none."""
    flat = text.replace("\n", " ").strip()
    table = toml_of(flat if flat.startswith("{") else "{ " + flat + " }")
    return table if isinstance(table, dict) else None


def named_values(text: str) -> dict[str, Any] | None:
    """Return the table that ``NAME = value, NAME = value`` is, whatever the names hold.

    Names with a point or a space need no quotation marks here, unlike TOML's keys. None when
    the text is no such row, or holds a name twice.
    """
    table: dict[str, Any] = {}
    for part in _PARTS.findall(text.replace("\n", " ")):
        name, mark, value = part.partition("=")
        key, read = _text(name.strip()).value, toml_of(value)
        if not mark or not name.strip() or read is None or key in table:
            return None
        table[key] = read
    return table


def _same(a: Any, b: Any) -> bool:
    """Compare values; true is not 1, in lists and tables neither."""
    if isinstance(a, list) and isinstance(b, list):
        return len(a) == len(b) and all(_same(x, y) for x, y in zip(a, b, strict=True))
    if isinstance(a, dict) and isinstance(b, dict):
        return a.keys() == b.keys() and all(_same(v, b[k]) for k, v in a.items())
    return isinstance(a, bool) == isinstance(b, bool) and bool(a == b)


def _text_cell(value: Any) -> str | None:
    if not isinstance(value, str):
        return None
    risky = any(mark in value for mark in _LOOKALIKES)
    legible = all(c.isprintable() or c == "\n" for c in value)
    if value and value == value.strip() and value[0] not in _STRUCTURED and legible and not risky:
        return value
    return quoted_text(value)


def quoted_text(value: str) -> str:
    """Return a text in quotation marks, as TOML: then it is nothing but that text."""
    risky = any(mark in value for mark in _LOOKALIKES)
    return toml_string(value).replace("_", "\\u005F" if risky else "_")


def _any_cell(value: Any) -> CellValue | None:
    if isinstance(value, bool):
        return value
    if isinstance(value, (int, float)):
        held = abs(value) <= LARGEST_WHOLE if isinstance(value, int) else math.isfinite(value)
        return value if held else None
    if isinstance(value, str):
        cell = _text_cell(value)
        return cell if cell is None or _any(cell).value == value else quoted_text(value)
    return toml_value(value)


def _flag_cell(value: Any) -> str | None:
    return ("yes" if value else "no") if isinstance(value, bool) else None


def _list_cell(value: Any) -> str | None:
    if not isinstance(value, list):
        return None
    if value and all(isinstance(item, str) for item in value):
        plain_row = ", ".join(value)
        if _list(plain_row).value == value and _text_cell(plain_row) == plain_row:
            return plain_row
    return toml_value(value)


def _quantities_cell(value: Any) -> str | None:
    if not isinstance(value, list):
        return None
    row = "; ".join(str(item) for item in value)
    return row if value and _same(_quantities(row).value, value) else toml_value(value)


def _list_or_word_cell(value: Any) -> CellValue | None:
    return _list_cell(value) if isinstance(value, list) else _any_cell(value)


def _table_cell(value: Any) -> str | None:
    if not isinstance(value, dict):
        return None
    friendly = ", ".join(f"{_text_cell(k)} = {toml_value(v)}" for k, v in value.items())
    return friendly if value and named_values(friendly) == value else toml_value(value)


_ENCODERS: dict[Kind, Callable[[Any], CellValue | None]] = {
    "text": _text_cell,
    "date": _text_cell,
    "choice": _text_cell,
    "flag": _flag_cell,
    "list": _list_cell,
    "quantities": _quantities_cell,
    "list or word": _list_or_word_cell,
    "table": _table_cell,
    "any": _any_cell,
}


def _text(cell: Any) -> Decoded:
    """A name or text; a whole number is a name made of digits."""
    if isinstance(cell, str):
        value = toml_of(cell) if cell.startswith('"') else None
        return Decoded(value=value if isinstance(value, str) else cell)
    if isinstance(cell, float) and cell.is_integer():
        cell = int(cell)
    if isinstance(cell, int) and not isinstance(cell, bool):
        return Decoded(value=str(cell))
    return Decoded(value=_odd(cell))


def _date(cell: Any) -> Decoded:
    if isinstance(cell, (datetime, date)):
        return Decoded(value=cell.isoformat()[:10])
    return _text(cell)


def _odd(cell: Any) -> Any:
    """Dates are what spreadsheets make of ``1-2``; say so where no date belongs."""
    if isinstance(cell, (datetime, date, time, timedelta)):
        shown = cell.isoformat(" ") if isinstance(cell, datetime) else str(cell)
        return Oddity(words=f"a date or a time ({shown.removesuffix(' 00:00:00')})")
    return cell


def _flag(cell: Any) -> Decoded:
    if isinstance(cell, str):
        return Decoded(value=_FLAGS.get(cell.casefold(), cell))
    return Decoded(value=_odd(cell))


_FLAGS = {"yes": True, "no": False, "true": True, "false": False}


def _list(cell: Any) -> Decoded:
    """Names between commas; between semicolons or lines where there are any."""
    if not isinstance(cell, str):
        single = _text(cell).value
        return Decoded(value=[single] if isinstance(single, str) else single)
    if cell.startswith("["):
        value = toml_of(cell)
        if isinstance(value, list):
            return Decoded(value=value)
    mark = next((m for m in (";", "\n") if m in cell), ",")
    items = [item.strip() for item in cell.split(mark)]
    return Decoded(value=[item for item in items if item])


def _quantities(cell: Any) -> Decoded:
    """Numbers and quantities between semicolons; between commas where each is followed by a space.

    A comma without a space may be a decimal one and is left to the reader of quantities.
    """
    if not isinstance(cell, str):
        value = _odd(cell)
        number = isinstance(value, (int, float)) and not isinstance(value, bool)
        return Decoded(value=[value] if number else value)
    if cell.startswith("["):
        value = toml_of(cell)
        if isinstance(value, list):
            return Decoded(value=value)
    mark = next((m for m in (";", "\n") if m in cell), ", ")
    items = [item.strip() for item in cell.split(mark)]
    return Decoded(value=[_any(item).value for item in items if item])


def _list_or_word(cell: Any) -> Decoded:
    """``all``, ``strength`` and ``serviceability`` are words, ``y`` an axis, the rest lists."""
    if isinstance(cell, str):
        if cell.casefold() in _WORDS:
            return Decoded(value=cell.casefold())
        if cell.startswith(_STRUCTURED):
            return _any(cell)
    return _list(cell)


_WORDS = ("all", "strength", "serviceability")


def _table(cell: Any) -> Decoded:
    if isinstance(cell, str):
        table = toml_of(cell) if cell.startswith("{") else named_values(cell)
        if isinstance(table, dict):
            return Decoded(value=table)
    return Decoded(value=_odd(cell))


def _any(cell: Any) -> Decoded:
    """A number, a quantity with its unit, or TOML; a number stored as text is told."""
    if not isinstance(cell, str):
        return Decoded(value=_odd(cell))
    if cell.startswith(_STRUCTURED):
        value = toml_of(cell)
        return Decoded(value=cell if value is None else value)
    if cell.casefold() in ("true", "false"):
        return Decoded(value=cell.casefold() == "true")
    number = _stored_as_text(cell)
    if number is not None:
        return Decoded(value=number, remark=f"{cell!r} is stored as text; read as {number:g}")
    return Decoded(value=cell)


def _stored_as_text(cell: str) -> int | float | None:
    """Return the number that a text can only be; a comma followed by three digits is open."""
    text = plain(cell)
    try:
        value = read_number(text, marks_of([text], delimiter=";", declared=None)).value
    except NumberError:
        return None
    return int(value) if text.lstrip("+-").isdigit() else value


_DECODERS: dict[Kind, Callable[[Any], Decoded]] = {
    "text": _text,
    "date": _date,
    "choice": _text,
    "flag": _flag,
    "list": _list,
    "quantities": _quantities,
    "list or word": _list_or_word,
    "table": _table,
    "any": _any,
}
