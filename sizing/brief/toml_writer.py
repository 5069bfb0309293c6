"""Writing plain tables as a TOML brief that a person can read on with.

The inverse of ``tomllib.loads``: ``tomllib.loads(toml_text(tables)) == tables`` for every
table of texts, numbers, booleans, dates, lists and tables.
"""

from __future__ import annotations

import re
from collections.abc import Iterator, Mapping
from datetime import date, datetime, time
from textwrap import wrap
from typing import Any

LINE = 100
"""Characters: a list or an inline table that is longer goes over several lines."""

HEADED = frozenset({"groups", "cases", "options"})
"""Tables whose entries have a head ``[groups.NAME]`` each, however short they are."""

INLINE = frozenset({"units"})
"""Tables that stand on one line among the first keys of the file."""

_BARE_KEY = re.compile(r"[A-Za-z0-9_-]+")
_ESCAPES = {
    "\b": "\\b", "\t": "\\t", "\n": "\\n", "\f": "\\f", "\r": "\\r", '"': '\\"', "\\": "\\\\",
}  # fmt: skip


Comments = Mapping[tuple[str, ...], str]
"""Remarks by the path of a table, ``("cases", "snow")``; ``()`` is the head of the file."""


def toml_text(tables: Mapping[str, Any], comments: Comments | None = None) -> str:
    """Return the tables as TOML: single values first, then one section for each table.

    ``comments`` stand above the head of their table. Raises :class:`TypeError` for a value that
    TOML has no form for (``None``).
    """
    remarks = comments or {}
    blocks = [_comment_lines(remarks[()])] if () in remarks else []
    for path, block in _blocks(tables):
        blocks.append([*(_comment_lines(remarks[path]) if path in remarks else ()), *block])
    return "\n\n".join("\n".join(block) for block in blocks) + "\n"


def _comment_lines(text: str) -> list[str]:
    """Return remark lines; what a comment may not hold becomes a space."""
    parts = ["".join(c if c.isprintable() else " " for c in part) for part in text.split("\n")]
    return [f"# {line}".rstrip() for part in parts for line in wrap(part, LINE - 2) or [""]]


def toml_key(name: str) -> str:
    """Return a key, in quotation marks where TOML needs them."""
    return name if _BARE_KEY.fullmatch(name) else toml_string(name)


def toml_value(value: Any) -> str:
    """Return a value on one line; raise :class:`TypeError` when TOML has no form for it."""
    if isinstance(value, bool):
        return "true" if value else "false"
    if isinstance(value, (int, float)):
        return repr(value)
    if isinstance(value, str):
        return toml_string(value)
    if isinstance(value, (datetime, date, time)):
        return value.isoformat()
    if isinstance(value, (list, tuple)):
        return "[" + ", ".join(toml_value(item) for item in value) + "]"
    if isinstance(value, Mapping):
        return "{ " + toml_pairs(value) + " }" if value else "{}"
    raise TypeError(f"TOML has no form for {value!r}")


def toml_pairs(table: Mapping[str, Any]) -> str:
    """Return ``key = value, key = value``, the inside of an inline table."""
    return ", ".join(f"{toml_key(str(k))} = {toml_value(v)}" for k, v in table.items())


def toml_string(text: str) -> str:
    """Return a text in quotation marks, with everything escaped that may not stand in it."""
    return '"' + "".join(_escaped(c) for c in text) + '"'


def _escaped(character: str) -> str:
    if character in _ESCAPES:
        return _ESCAPES[character]
    if character.isprintable():
        return character
    code = ord(character)
    return f"\\u{code:04X}" if code <= 0xFFFF else f"\\U{code:08X}"


Block = tuple[tuple[str, ...], list[str]]
"""The path of a table and its lines; the single values of the top level have the path ``(".",)``,
which is that of no table."""


def _blocks(tables: Mapping[str, Any]) -> Iterator[Block]:
    plain = {k: v for k, v in tables.items() if k in INLINE or not _is_section(v)}
    if plain:
        yield (".",), [line for k, v in plain.items() for line in _lines(k, v)]
    for key, value in tables.items():
        if key in plain:
            continue
        if isinstance(value, list):
            for place, entry in enumerate(value):
                path = (key,) if place == 0 else (key, str(place))
                yield path, [f"[[{toml_key(key)}]]", *_entry_lines(entry)]
        else:
            yield from _section((key,), value)


def _is_section(value: Any) -> bool:
    """Say whether a value of the top level is a table, or a list of tables only."""
    if isinstance(value, list):
        return bool(value) and all(isinstance(item, Mapping) for item in value)
    return isinstance(value, Mapping)


def _section(path: tuple[str, ...], table: Mapping[str, Any]) -> Iterator[Block]:
    """Yield the blocks of a table; what is too long for a line gets a head of its own."""
    headed = len(path) == 1 and path[0] in HEADED
    below = {
        k: v
        for k, v in table.items()
        if isinstance(v, Mapping) and (headed or len(f"{toml_key(k)} = {toml_value(v)}") > LINE)
    }
    rows = {k: v for k, v in table.items() if _is_rows(v)}
    own = {k: v for k, v in table.items() if k not in below and k not in rows}
    if own or not (below or rows):
        yield path, [f"[{'.'.join(toml_key(p) for p in path)}]", *_entry_lines(own)]
    for key, value in rows.items():
        for entry in value:
            head = ".".join(toml_key(p) for p in (*path, key))
            yield (*path, key), [f"[[{head}]]", *_entry_lines(entry)]
    for key, value in below.items():
        yield from _section((*path, key), value)


def _is_rows(value: Any) -> bool:
    """Say whether a value is a list of tables of which one is too long for a line."""
    return (
        isinstance(value, list)
        and all(isinstance(item, Mapping) for item in value)
        and any(len(toml_value(item)) > LINE - 5 for item in value)
    )


def _entry_lines(table: Mapping[str, Any]) -> list[str]:
    return [line for key, value in table.items() for line in _lines(key, value)]


def _lines(key: str, value: Any) -> Iterator[str]:
    """Yield ``key = value``; long lists are wrapped, texts of several lines keep them."""
    start = f"{toml_key(key)} = "
    if isinstance(value, str) and "\n" in value:
        body = "\n".join("".join(_escaped(c) for c in line) for line in value.split("\n"))
        yield from f'{start}"""\n{body}"""'.split("\n")
        return
    line = start + toml_value(value)
    if len(line) <= LINE or not isinstance(value, list):
        yield line
        return
    yield start + "["
    row = "   "
    for item in value:
        text = f" {toml_value(item)},"
        if len(row) + len(text) > LINE and row.strip():
            yield row
            row = "   "
        row += text
    yield row
    yield "]"
