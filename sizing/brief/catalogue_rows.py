"""Catalogue rows as SI numbers with their places: reading of cells, families and defaults."""

from __future__ import annotations

import re
from collections.abc import Iterable, Mapping
from dataclasses import dataclass, field

from sizing.brief.catalogue_heads import Column
from sizing.brief.catalogue_numbers import (
    EMPTY,
    Marks,
    Number,
    NumberError,
    marks_of,
    read_number,
)
from sizing.brief.catalogue_stock import NOTHING_SAID, SUPPLY, Supply, read_supply
from sizing.brief.catalogue_text import Row, TextTable
from sizing.brief.catalogue_units import STANDARD_GRAVITY, unit_factor
from sizing.errors import Problem

FAMILIES = ("SHS", "RHS", "CHS", "angle", "I", "rectangle", "other")

FAMILY_WORDS: Mapping[str, str] = {
    **{family.casefold(): family for family in FAMILIES},
    "square hollow section": "SHS", "rectangular hollow section": "RHS",
    "circular hollow section": "CHS", "pipe": "CHS", "tube": "CHS",
    "equal angle": "angle", "unequal angle": "angle", "l": "angle", "winkel": "angle",
    "h": "I", "ipe": "I", "hea": "I", "heb": "I", "timber": "rectangle", "glulam": "rectangle",
    "lumber": "rectangle", "solid timber": "rectangle", "flat": "rectangle",
}  # fmt: skip
"""Accepted family words (any case)."""

_TIMES = r"\s*[x×X*/]\s*"
_FAMILY_BY_DESIGNATION = (
    (re.compile(r"^(SHS|QRO|QHP)\b", re.IGNORECASE), "SHS"),
    (re.compile(r"^(RHS|RRO|RHP)\b", re.IGNORECASE), "RHS"),
    (re.compile(r"^(CHS|RO|Rohr|Pipe)(?![a-z])", re.IGNORECASE), "CHS"),
    (re.compile(r"^L\s*[0-9]", re.IGNORECASE), "angle"),
    (re.compile(r"^(IPE|HEA|HEB|HEM|HE\s?[0-9]|W[0-9]|UB|UC)", re.IGNORECASE), "I"),
)
_HSS = re.compile(rf"^HSS\s*([0-9.,/-]+){_TIMES}([0-9.,/-]+)({_TIMES}[0-9.,/-]+)?", re.IGNORECASE)

PLAUSIBLE: Mapping[str, tuple[float, float, str]] = {
    "area": (1e-6, 10.0, "an area between 1 mm2 and 10 m2"),
    "second moment": (1e-13, 100.0, "a second moment between 0.1 mm4 and 100 m4"),
    "radius": (1e-4, 10.0, "a radius of gyration between 0.1 mm and 10 m"),
    "mass": (1e-3, 1e5, "a mass between 1 g/m and 100 t/m"),
    "surface": (1e-3, 100.0, "a surface between 0.001 and 100 m2/m"),
    "plies": (1.0, 20.0, "a number of plies between 1 and 20"),
    "price": (1e-6, 1e9, "a price"),
}
"""Least and greatest SI value of a property that any bar can have: beyond lies a slip."""

PLAUSIBLE_LENGTH = (1e-4, 10.0, "a dimension between 0.1 mm and 10 m")

PLAUSIBLE_DENSITY = (100.0, 20000.0)
"""kg/m³, from balsa to tungsten alloys."""

COARSEST_ROUNDING = 0.02
"""Relative rounding that is granted at most: an area printed as 7 may be 6.5, which is no use."""

MOST_PROBLEMS_OF_ONE_KIND = 10
"""After this many the rest of one kind is told in one line that lists their line numbers."""


@dataclass(frozen=True, kw_only=True, slots=True)
class Entry:
    """One row in SI: ``numbers`` by key (``area``, ``I major``, ``i least``, ...)."""

    line: int
    designation: str
    family: str
    product: str
    numbers: Mapping[str, Number]
    supply: Supply = NOTHING_SAID

    def value(self, key: str) -> float | None:
        """Return the number under ``key``, None where the cell is empty or missing."""
        number = self.numbers.get(key)
        return None if number is None else number.value

    def rounding(self, key: str) -> float:
        """Return the relative rounding of the printed number: half its last place.

        It is capped where the number is computed with; a radius beside its second moment is not.
        """
        number = self.numbers[key]
        rounding = number.half / abs(number.value)
        return rounding if key.startswith("i") else min(rounding, COARSEST_ROUNDING)


@dataclass(frozen=True, kw_only=True, slots=True)
class Checked:
    """A row with its second moments settled (m⁴) and the density its mass was held against."""

    entry: Entry
    area: float
    i_major: float
    i_minor: float
    i_least: float


@dataclass(kw_only=True, slots=True)
class Findings:
    """Collects what is wrong (``problem``) and what is odd (``remark``), with its place."""

    file: str
    heads: Mapping[str, str] = field(default_factory=dict)
    remarks: list[str] = field(default_factory=list)
    _problems: list[tuple[str, int, Problem]] = field(default_factory=list)
    _absent: dict[tuple[str, str], list[Entry]] = field(default_factory=dict)

    def problem(
        self, *, place: str, found: str, expected: str, fix: str = "", kind: str = "", line: int = 0
    ) -> None:
        """Add a problem; ``kind`` groups problems that would repeat on many rows."""
        self._problems.append(
            (
                kind,
                line,
                Problem(file=self.file, place=place, found=found, expected=expected, fix=fix),
            )
        )

    def in_row(
        self, entry: Entry, key: str, *, found: str, expected: str, fix: str, kind: str
    ) -> None:
        """Add a problem with a number of a row."""
        self.problem(
            place=f"{place_of(entry.line, entry.designation)}, column {self.head(key)!r}",
            found=found, expected=expected, fix=fix, kind=f"{kind} {key}", line=entry.line,
        )  # fmt: skip

    def absent(self, entry: Entry, what: str, head: str) -> None:
        """Note that a row needs ``what``, for which the file has no column such as ``head``."""
        self._absent.setdefault((what, head), []).append(entry)

    def head(self, key: str) -> str:
        """Return the column head under which ``key`` stands in the file."""
        return self.heads.get(key, key)

    def add(self, problems: Iterable[Problem]) -> None:
        """Add problems that stand alone."""
        self._problems += [("", 0, problem) for problem in problems]

    @property
    def any(self) -> bool:
        """Whether there is a problem."""
        return bool(self._problems or self._absent)

    def problems(self) -> tuple[Problem, ...]:
        """Return every problem; the eleventh and later ones of one kind share a line."""
        told: list[Problem] = []
        count: dict[str, int] = {}
        rest: dict[str, list[int]] = {}
        first: dict[str, Problem] = {}
        for kind, line, problem in self._problems:
            count[kind] = count.get(kind, 0) + 1
            first.setdefault(kind, problem)
            if kind and count[kind] > MOST_PROBLEMS_OF_ONE_KIND:
                rest.setdefault(kind, []).append(line)
            else:
                told.append(problem)
        for kind, lines in rest.items():
            told.append(
                Problem(
                    file=self.file,
                    place=f"{len(lines)} more, {ranges(lines)}",
                    found="the same kind of mistake",
                    expected=first[kind].expected.partition(" (")[0],
                    fix=first[kind].fix,
                )
            )
        for (what, head), entries in self._absent.items():
            place = place_of(entries[0].line, entries[0].designation)
            more = f" and {len(entries) - 1} more" if len(entries) > 1 else ""
            told.append(
                Problem(
                    file=self.file,
                    place=f"{place}{more}",
                    found=f"no column for what a section of family {entries[0].family} needs",
                    expected=what,
                    fix=f"Add a column: {head}",
                )
            )
        return tuple(told)


def place_of(line: int, designation: str) -> str:
    """Return the place of a row for a message."""
    return f"line {line} ({designation})" if designation else f"line {line}"


def ranges(lines: list[int]) -> str:
    """Return line numbers as ``line 3`` or ``lines 3-5, 9``."""
    parts: list[list[int]] = []
    for line in sorted(lines):
        if parts and line == parts[-1][1] + 1:
            parts[-1][1] = line
        else:
            parts.append([line, line])
    text = ", ".join(f"{a}-{b}" if b > a else f"{a}" for a, b in parts)
    return f"line {text}" if len(lines) == 1 else f"lines {text}"


def key_of(column: Column) -> str:
    """Return the key of a column's numbers: its property, or ``I``/``i`` with the axis."""
    if column.property == "second moment":
        return "I" if column.axis == "any" else f"I {column.axis}"
    if column.property == "radius":
        return "i" if column.axis == "any" else f"i {column.axis}"
    return column.property


def find_marks(table: TextTable, columns: Iterable[Column], findings: Findings) -> Marks:
    """Return how numbers are written in the file; what was detected goes to the remarks."""
    declared = table.settings.get("decimal", "").casefold()
    words = {"point": "point", ".": "point", "comma": "comma", ",": "comma"}
    if declared and declared not in words:
        findings.problem(
            place="header, decimal",
            found=repr(declared),
            expected="point or comma",
            fix="Write for instance: # decimal = comma",
        )
    numeric = [c.index for c in columns if c.property not in _TEXT]
    cells = [row.cells[i] for row in table.rows for i in numeric if i < len(row.cells)]
    decimal = words.get(declared)
    marks = marks_of(
        cells,
        delimiter=table.delimiter,
        declared="comma" if decimal == "comma" else "point" if decimal == "point" else None,
    )
    other = "." if marks.decimal == "comma" else ","
    if marks.decimal == "comma" and decimal is None:
        findings.remarks.append("Numbers are read with a decimal comma (detected).")
    grouped = [cell for cell in cells if (other in cell and marks.thousands)]
    if grouped:
        findings.remarks.append(f"Thousands are grouped by a mark, as in {grouped[0]}.")
    return marks


def read_entries(
    table: TextTable, columns: tuple[Column, ...], findings: Findings
) -> tuple[Entry, ...]:
    """Return every row as SI numbers; rows with an unreadable cell are left out and reported."""
    marks = find_marks(table, columns, findings)
    at = {column.property: column for column in columns if column.property in _TEXT}
    numeric = [column for column in columns if column.property not in _TEXT]
    family = _setting_family(table, findings)
    if not family and table.settings.get("density", "").casefold() == "from grade":
        family = "rectangle"
    entries = []
    guessed: dict[str, list[int]] = {}
    for row in table.rows:
        designation = " ".join(_text(row, at.get("designation")).split())
        if not designation:
            findings.problem(
                place=f"line {row.line}, column {findings.head('designation')!r}",
                found="an empty cell",
                expected="the section's designation, such as SHS 100x100x5",
                kind="designation",
                line=row.line,
            )
            continue
        entry_family, was_guessed = _family(row, at.get("family"), designation, family, findings)
        if was_guessed:
            guessed.setdefault(entry_family, []).append(row.line)
        numbers = _numbers(row, designation, numeric, marks, findings)
        if numbers is not None and entry_family:
            product = _text(row, at.get("product")) or table.settings.get("product", "")
            entries.append(
                Entry(
                    line=row.line,
                    designation=designation,
                    family=entry_family,
                    product=_product(product, numbers),
                    numbers=numbers,
                    supply=_supply(row, designation, at, findings),
                )
            )
    for name, lines in guessed.items():
        findings.remarks.append(
            f"Family not stated, taken as {name} from the designation: {ranges(lines)}."
        )
    return tuple(entries)


_TEXT = frozenset({"designation", "family", "product", *SUPPLY})


def _text(row: Row, column: Column | None) -> str:
    if column is None or column.index >= len(row.cells):
        return ""
    return "".join(c for c in row.cells[column.index] if c.isprintable() or c == " ")


def _supply(
    row: Row, designation: str, columns: Mapping[str, Column], findings: Findings
) -> Supply:
    def complain(column: Column, cell: str, expected: str) -> None:
        findings.problem(
            place=f"{place_of(row.line, designation)}, column {column.head!r}",
            found=repr(cell),
            expected=expected,
            kind=f"supply {column.index}",
            line=row.line,
        )

    return read_supply(row, columns, complain)


def _product(said: str, numbers: Mapping[str, Number]) -> str:
    """Return the product; one of several plies always says that it is built up."""
    product = " ".join(said.split())
    plies = numbers.get("plies")
    if plies is None or plies.value <= 1.0 or "built-up" in product.casefold():
        return product
    return f"{product} built-up".strip()


def _setting_family(table: TextTable, findings: Findings) -> str:
    said = table.settings.get("family", "")
    if said and said.casefold() not in FAMILY_WORDS:
        findings.problem(
            place="header, family",
            found=repr(said),
            expected=f"one of {', '.join(FAMILIES)}",
            fix="Write for instance: # family = SHS",
        )
    return FAMILY_WORDS.get(said.casefold(), "")


def _family(
    row: Row, column: Column | None, designation: str, default: str, findings: Findings
) -> tuple[str, bool]:
    """Return the family and whether it was guessed; empty when the word is unknown."""
    said = _text(row, column)
    if said in EMPTY:
        if default:
            return default, False
        return family_of(designation), True
    if said.casefold() in FAMILY_WORDS:
        return FAMILY_WORDS[said.casefold()], False
    findings.problem(
        place=f"{place_of(row.line, designation)}, column {findings.head('family')!r}",
        found=repr(said),
        expected=f"one of {', '.join(FAMILIES)}",
        fix="Use other for a section that fits none of these.",
        kind="family",
        line=row.line,
    )
    return "", False


def family_of(designation: str) -> str:
    """Return the family that a designation in common use points to, else ``other``."""
    hss = _HSS.match(designation)
    if hss:
        if hss[3] is None:
            return "CHS"
        return "SHS" if hss[1] == hss[2] else "RHS"
    for pattern, family in _FAMILY_BY_DESIGNATION:
        if pattern.match(designation):
            return family
    return "other"


def _numbers(
    row: Row,
    designation: str,
    columns: Iterable[Column],
    marks: Marks,
    findings: Findings,
) -> dict[str, Number] | None:
    """Return the row's numbers in SI, None when a cell cannot be read."""
    numbers: dict[str, Number] = {}
    good = True
    for column in columns:
        cell = row.cells[column.index] if column.index < len(row.cells) else ""
        if cell.casefold() in EMPTY:
            continue
        try:
            numbers[key_of(column)] = _si(read_number(cell, marks), column)
        except NumberError as error:
            good = False
            findings.problem(
                place=f"{place_of(row.line, designation)}, column {column.head!r}",
                found=repr(cell),
                expected=error.expected,
                fix=error.fix,
                kind=f"number {column.index} {error.expected[:24]}",
                line=row.line,
            )
    return numbers if good else None


def _si(number: Number, column: Column) -> Number:
    """Return a number in SI; raise :class:`NumberError` when no bar can have it."""
    if number.value == 0.0 and column.property == "root_radius":
        return number
    if number.value <= 0.0:
        raise NumberError("a number above zero")
    factor = column.factor
    if column.kind == "weight per length":
        factor /= STANDARD_GRAVITY
    low, high, words = PLAUSIBLE.get(column.property, PLAUSIBLE_LENGTH)
    if not low <= number.value * factor <= high:
        raise NumberError(words, "Compare the unit in the column head with the table.")
    return Number(value=number.value * factor, half=number.half * factor)


def read_density(table: TextTable, findings: Findings) -> float | str | None:
    """Return the header's density in kg/m³, ``from grade``, or None where it is not stated."""
    said = table.settings.get("density")
    if said is None:
        return None
    if said.casefold() == "from grade":
        return "from grade"
    match = re.match(r"^([0-9]+(?:[.,][0-9]+)?)\s*(\S+)$", said)
    measured = unit_factor(match[2]) if match else None
    if match is None or measured is None or measured[0] != "density":
        findings.problem(
            place="header, density",
            found=repr(said),
            expected="a density with its unit, or: from grade",
            fix="Write for instance: # density = 7850 kg/m3",
        )
        return None
    density = float(match[1].replace(",", ".")) * measured[1]
    if not PLAUSIBLE_DENSITY[0] <= density <= PLAUSIBLE_DENSITY[1]:
        findings.problem(
            place="header, density",
            found=f"{density:.4g} kg/m3",
            expected="the density of a building material, 100 to 20000 kg/m3",
        )
        return None
    return density
