"""Column heads of a catalogue: which property each column holds, about which axis, in what unit.

A head is a name and a unit: ``area [cm2]``, ``I major (cm⁴)``, ``t in mm``. Trade words and the
usual letters are understood; where a letter has two meanings (A: area or leg; i and I: radius of
gyration or second moment) the unit decides.
"""

from __future__ import annotations

import difflib
import re
from collections.abc import Mapping
from dataclasses import dataclass, replace
from typing import Literal

from sizing.brief.catalogue_names import (
    AXES,
    CONCEPTS,
    FILLERS,
    NUMBER_NAMES,
    PLAIN_HEADS,
    PRICES,
    STOCK_LENGTHS,
    STRENGTH_OF_AXIS_LETTER,
    TEXT_NAMES,
)
from sizing.brief.catalogue_text import TextTable
from sizing.brief.catalogue_units import unit_factor
from sizing.errors import Problem

Axis = Literal["major", "minor", "least", "any"]

LONGEST_LETTER_NAME = 2
"""Names this short have many meanings: W is a weight or a section modulus. With a unit of another
kind they are not used, where a full word with such a unit is a mistake."""

_BRACKETED = re.compile(r"^(.*?)[\s_]*[\[(]\s*(.*?)\s*[\])]\s*$")
_WORDED = re.compile(r"^(.+?)(?:\s+in\s+|\s*/\s*)(\S+)$")
_CURRENCY = re.compile(r"^\s*([^/\d]{0,12}?)\s*(?:/|\bper\b)\s*([A-Za-z]+)\s*$")


@dataclass(frozen=True, kw_only=True, slots=True)
class Column:
    """One column: its ``property``, ``axis`` (second moments, radii), unit and factor to SI.

    ``property`` is a key of the tables above, ``second moment``, ``radius`` or ``price``.
    ``unit`` is as written; ``per`` is what a price is per: ``m`` or ``kg``.
    """

    index: int
    head: str
    property: str
    axis: Axis = "any"
    unit: str = ""
    kind: str = ""
    factor: float = 1.0
    per: str = ""


@dataclass(frozen=True, kw_only=True, slots=True)
class Heads:
    """What the column heads say: understood columns, heads not used, remarks, problems."""

    columns: tuple[Column, ...]
    unused: tuple[str, ...]
    remarks: tuple[str, ...]
    problems: tuple[Problem, ...]


@dataclass(frozen=True, kw_only=True, slots=True)
class _Head:
    index: int
    text: str
    name: str
    unit: str


def read_heads(cells: tuple[str, ...], *, file: str, line: int) -> Heads:
    """Return what each column holds; problems are collected, none is raised."""
    heads = [_split(i, cell) for i, cell in enumerate(cells) if cell]
    letters, problems, remarks = _axis_letters(heads, file=file, line=line)
    heads = _root_radius(heads)
    columns: list[Column] = []
    unused: list[str] = []
    for head in heads:
        column = _understand(head, letters, file=file, line=line)
        if isinstance(column, Problem):
            problems.append(column)
        elif column is None:
            unused.append(head.text)
        else:
            columns.append(column)
    columns = _web_and_flange(_one_depth(columns, unused))
    columns, again = _without_repeats(columns, file=file, line=line)
    problems += again
    if unused:
        remarks.append(_unused_remark(unused))
    return Heads(
        columns=tuple(columns),
        unused=tuple(unused),
        remarks=tuple(remarks),
        problems=tuple(problems),
    )


def _split(index: int, cell: str) -> _Head:
    match = _BRACKETED.match(cell)
    if match is None:
        worded = _WORDED.match(cell)  # A/V and the like are names, not units
        match = worded if worded and unit_factor(worded[2]) is not None else None
    name, unit = (match[1], match[2]) if match else (cell, "")
    words = re.sub(r"[\s_\-.,:]+", " ", name).strip().casefold()
    return _Head(index=index, text=cell, name=words, unit=unit)


def _root_radius(heads: list[_Head]) -> list[_Head]:
    """Beside a flange (or a web s and t) a bare ``r`` is the root radius, no radius of gyration."""
    names = {head.name for head in heads}
    if not (names & NUMBER_NAMES["flange"][0] or {"s", "t"} <= names):
        return heads
    return [replace(head, name="r1") if head.name == "r" else head for head in heads]


def _understand(
    head: _Head, letters: Mapping[str, str], *, file: str, line: int
) -> Column | Problem | None:
    """Return the column, a problem with its unit, or None for a head that is not used."""
    for name, words in (*TEXT_NAMES.items(), ("plies", NUMBER_NAMES["plies"][0])):
        if head.name in words:
            return Column(index=head.index, head=head.text, property=name)
    measured = unit_factor(head.unit) if head.unit else None
    if head.name in PRICES | STOCK_LENGTHS:
        read = _price if head.name in PRICES else _stock_lengths
        return read(head, file=file, line=line)
    gyration = _gyration(head.name, letters)
    wanted = _wanted(head.name, gyration)
    if not wanted:
        return None
    if measured is None or measured[0] not in wanted.values():
        if head.unit and len(head.name) <= LONGEST_LETTER_NAME:
            return None
        return _unit_problem(head, wanted, measured, file=file, line=line)
    kind, factor = measured
    prop = next(key for key, value in wanted.items() if value == kind)
    return Column(
        index=head.index,
        head=head.text,
        property="mass" if prop == "weight" else prop,
        axis=gyration[1] if gyration is not None else "any",
        unit=head.unit,
        kind=kind,
        factor=factor,
    )


def _wanted(name: str, gyration: tuple[str, Axis] | None) -> dict[str, str]:
    """Return {property: kind of unit} that a name may stand for; empty when it is not used."""
    if gyration is not None:
        both = {"second moment": "second moment", "radius": "length"}
        concept = gyration[0]
        if concept:
            key = "radius" if concept == "radius of gyration" else concept
            return {key: both[key]}
        return both
    wanted: dict[str, str] = {}
    for prop, (names, kinds) in NUMBER_NAMES.items():
        if name in names:
            for kind in kinds:
                wanted["weight" if kind == "weight per length" else prop] = kind
    return wanted


def _gyration(name: str, letters: Mapping[str, str]) -> tuple[str, Axis] | None:
    """Return (concept, axis) of a second moment or radius of gyration, None for other heads."""
    words = name.split()
    glued = re.match(r"^([ir])(max|min|xx?|yy?|zz?|vv?)$", words[0]) if words else None
    if glued:
        words = [glued[1], glued[2], *words[1:]]
    concepts = [word for word in words if word in CONCEPTS]
    axes = [AXES[word] for word in words if word in AXES]
    known = set(CONCEPTS) | set(AXES) | FILLERS
    if not concepts or any(word not in known for word in words) or len(set(axes)) > 1:
        return None
    if name == "r":  # root radius in one table, radius of gyration in the next
        return None
    axis = axes[0] if axes else "any"
    axis = letters.get(axis, axis)
    if axis not in {"major", "minor", "least", "any"}:
        return None
    return CONCEPTS[concepts[-1]], axis  # type: ignore[return-value]  # one of the four words


def _axis_letters(
    heads: list[_Head], *, file: str, line: int
) -> tuple[dict[str, str], list[Problem], list[str]]:
    """Decide what the axis letters x, y, z stand for, from those that the file uses."""
    used: dict[str, str] = {}
    for head in heads:
        for letter in "xyz":
            probe = _gyration(head.name, {letter: "major"})
            if probe is not None and re.search(rf"(?:^[ir]|\s){letter}{letter}?$", head.name):
                used.setdefault(letter, head.text)
    if not used:
        return {}, [], []
    key = "x y" if {"x", "y"} <= set(used) else "y z" if {"y", "z"} <= set(used) else "".join(used)
    meaning = STRENGTH_OF_AXIS_LETTER.get(key)
    if meaning is None or not set(used) <= set(meaning):
        first = next(iter(used.values()))
        problem = Problem(
            file=file,
            place=f"line {line}, column {first!r}",
            found="an axis letter whose partner is missing",
            expected="the pair x and y, or the pair y and z",
            fix="Write I major and I minor instead: the same letter is the strong axis in one "
            "country and the weak one in the next.",
        )
        return {}, [problem], []
    said = ", ".join(f"{letter}-{letter} {meaning[letter]}" for letter in sorted(used))
    return dict(meaning), [], [f"Axis letters are read as {said}."]


def _price(head: _Head, *, file: str, line: int) -> Column | Problem:
    match = _CURRENCY.match(head.unit)
    measured = unit_factor(match[2]) if match else None
    if match and measured is not None and measured[0] in {"length", "mass"}:
        return Column(
            index=head.index,
            head=head.text,
            property="price",
            unit=head.unit,
            kind=match[1],
            factor=1.0 / measured[1],
            per="m" if measured[0] == "length" else "kg",
        )
    return Problem(
        file=file,
        place=f"line {line}, column {head.text!r}",
        found=repr(head.unit) if head.unit else "no unit",
        expected="a currency per length or per mass, such as EUR/m, USD/ft or EUR/t",
        fix="Write for instance: price [EUR/m]",
    )


def _stock_lengths(head: _Head, *, file: str, line: int) -> Column | Problem:
    measured = unit_factor(head.unit) if head.unit else None
    if measured is None or measured[0] != "length":
        return Problem(
            file=file,
            place=f"line {line}, column {head.text!r}",
            found=repr(head.unit) if head.unit else "no unit",
            expected="a unit of length in square brackets: m, mm or ft",
            fix="Write for instance: stock lengths [m]",
        )
    return Column(
        index=head.index,
        head=head.text,
        property="stock_lengths",
        unit=head.unit,
        kind=measured[0],
        factor=measured[1],
    )


def _unit_problem(
    head: _Head, wanted: Mapping[str, str], measured: tuple[str, float] | None,
    *, file: str, line: int,
) -> Problem:  # fmt: skip
    examples = {
        "length": "mm, cm or in", "area": "cm2, mm2 or in2", "second moment": "cm4, mm4 or in4",
        "mass per length": "kg/m or lb/ft", "weight per length": "N/m or kN/m",
    }  # fmt: skip
    expected = " or ".join(f"{examples[kind]}" for kind in dict.fromkeys(wanted.values()))
    if not head.unit:
        found = "no unit"
    elif measured is None:
        found = f"unknown unit {head.unit!r}"
    else:
        found = f"{head.unit!r}, a unit of {measured[0]}"
    first = examples[next(iter(wanted.values()))].split(",")[0].split(" or ")[0]
    name = _WORDED.sub(r"\1", _BRACKETED.sub(r"\1", head.text))
    return Problem(
        file=file,
        place=f"line {line}, column {head.text!r}",
        found=found,
        expected=f"a unit in square brackets: {expected}",
        fix=f"Write for instance: {name} [{first}]",
    )


def _one_depth(columns: list[Column], unused: list[str]) -> list[Column]:
    """Drop a column ``d`` beside a plain depth: in I tables it is the depth between fillets."""
    depths = [column for column in columns if column.property == "depth"]
    if len(depths) < 2:
        return columns
    letter_d = [c for c in depths if re.match(r"^d\b", c.head.strip(), re.IGNORECASE)]
    if len(letter_d) == 1:
        unused.append(letter_d[0].head)
        return [column for column in columns if column is not letter_d[0]]
    return columns


def _web_and_flange(columns: list[Column]) -> list[Column]:
    """Beside a web ``s`` the thickness ``t`` is the flange's (central European I tables)."""
    heads = {_split(0, c.head).name: c for c in columns if c.property == "thickness"}
    if set(heads) != {"s", "t"}:
        return columns
    return [replace(c, property="flange") if c is heads["t"] else c for c in columns]


def _without_repeats(
    columns: list[Column], *, file: str, line: int
) -> tuple[list[Column], list[Problem]]:
    """Return the columns without second ones for the same property, and problems for those."""
    problems = []
    seen: dict[tuple[str, str], Column] = {}
    for column in columns:
        first = seen.setdefault((column.property, column.axis), column)
        if first is not column:
            problems.append(
                Problem(
                    file=file,
                    place=f"line {line}, column {column.head!r}",
                    found=f"a second column for what {first.head!r} holds already",
                    expected="each property once",
                    fix="Remove one of the two columns.",
                )
            )
    return list(seen.values()), problems


def looks_like_heads(cells: list[str]) -> bool:
    """Say whether a line can be the column heads: a designation and at least two more."""
    names = {_BRACKETED.sub(r"\1", cell).strip().casefold() for cell in cells}
    return len(names - {""}) >= 3 and bool(names & TEXT_NAMES["designation"])


def with_unit_row(table: TextTable) -> TextTable:
    """Return the table with a row of units below the heads put into the heads.

    Such a row has at least two units and nothing that begins like a number.
    """
    if not table.rows:
        return table
    first = table.rows[0]
    units = [cell.strip("[]() ") for cell in first.cells]
    if any(re.match(r"^[-+\u2212.,]?[0-9]", unit) for unit in units):
        return table
    if sum(unit_factor(unit) is not None for unit in units if unit) < 2:
        return table
    padded = [*units, *[""] * len(table.heads.cells)]
    cells = tuple(
        head if not unit or _split(0, head).unit else f"{head} [{unit}]"
        for head, unit in zip(table.heads.cells, padded, strict=False)
    )
    remark = f"Units are taken from line {first.line}, below the column heads."
    return replace(
        table,
        heads=replace(table.heads, cells=cells),
        rows=table.rows[1:],
        remarks=(*table.remarks, remark),
    )


def _unused_remark(unused: list[str]) -> str:
    plain = [re.sub(r"\s*\[.*$", "", head) for head in PLAIN_HEADS.split(", ")]
    said = []
    for head in unused:
        name = _split(0, head).name
        near = difflib.get_close_matches(name, plain, n=1, cutoff=0.8) if len(name) > 4 else []
        said.append(f"{head!r} (is {near[0]} meant?)" if near else repr(head))
    return f"Columns not used: {', '.join(said)}."
