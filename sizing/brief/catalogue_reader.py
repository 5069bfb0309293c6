"""Reading a section catalogue: a shipped one by name, or the user's own file.

A catalogue is a text table with one row per section. Header lines begin with ``#``; some of
them are settings: ``# decimal = comma``, ``# delimiter = ;``, ``# density = 7850 kg/m3`` (or
``from grade``), ``# family = SHS``, ``# product = EN 10210-2``. Then a line of column heads, each
with its unit in square brackets, then the rows::

    designation, family, product, area [cm2], mass [kg/m], I major [cm4], I minor [cm4], ...

The first sheet with such heads in a workbook (.xlsx) is read the same way.

Needed are the designation, the area, the mass (or a density in the header), and the second
moment or radius of gyration about the major and the minor axis; for angles also about the least
axis.
"""

from __future__ import annotations

import difflib
import hashlib
import os
from collections.abc import Sequence
from dataclasses import replace
from pathlib import Path

import numpy as np

from sizing.brief.archives import MAGIC
from sizing.brief.catalogue_checks import check_rows
from sizing.brief.catalogue_heads import (
    Column,
    Heads,
    looks_like_heads,
    read_heads,
    with_unit_row,
)
from sizing.brief.catalogue_names import PLAIN_HEADS
from sizing.brief.catalogue_rows import (
    Checked,
    Entry,
    Findings,
    key_of,
    place_of,
    ranges,
    read_density,
    read_entries,
)
from sizing.brief.catalogue_text import LARGEST_FILE, TextProblemsError, decode, split
from sizing.brief.catalogue_workbook import workbook_table
from sizing.brief.model import SourceFile
from sizing.brief.plain_files import PlainFileError, read_plain_file
from sizing.brief.sections import Catalogue, FloatArray
from sizing.errors import InputError, Problem

SUFFIX = ".csv"
MOST_ROWS = 5_000
"""A whole range of a supplier has a few hundred rows; each is checked and may be tried in every
group, so that a hundred thousand would take minutes to read and hours to pick from."""

ALIKE_ON_BOTH_AXES = frozenset({"SHS", "CHS"})
"""Families with one second moment; equal angles too, about their geometric axes."""


SYMMETRIC = frozenset({"SHS", "RHS", "CHS", "I", "rectangle"})
"""Families whose minor axis is their least one."""

SHORT_FORMS = {
    "shs": "square-hollow-sections", "rhs": "rectangular-hollow-sections",
    "chs": "circular-hollow-sections", "tubes": "circular-hollow-sections",
    "angles": "equal-angles", "hss": "hss-square", "lumber": "dimension-lumber",
    "timber": "solid-timber", "gl": "glulam",
}  # fmt: skip
"""What somebody may write for a shipped catalogue, for the hint only."""


_SAME_SIGNS = str.maketrans({" ": None, "×": "x", "*": "x", ",": "."})


def shipped_folder() -> Path:
    """Return the folder of the shipped catalogues, in a source tree and in an installed package."""
    package = Path(__file__).resolve().parents[1]
    installed = package / "catalogs"
    return installed if installed.is_dir() else package.parent / "catalogs"


def shipped_catalogues() -> tuple[str, ...]:
    """Return the names of the shipped catalogues, sorted."""
    return tuple(sorted(path.stem for path in shipped_folder().glob(f"*{SUFFIX}")))


def read_catalogue(name_or_path: str, base: Path) -> Catalogue:
    """Read a shipped catalogue by name, or a file relative to the folder ``base``.

    Raises :class:`sizing.errors.InputError` with every problem found, each with file, line,
    column, what was found, what belongs there and how to mend it.
    """
    path = _find(name_or_path, base)
    try:
        data = read_plain_file(path, LARGEST_FILE, base=base)
    except PlainFileError as error:
        raise InputError([_unreadable(name_or_path, error)]) from error
    sha256 = hashlib.sha256(data).hexdigest()
    source = SourceFile(name=name_or_path, path=path.resolve(), sha256=sha256)
    return catalogue_from_bytes(data, name=name_or_path, source=source)


def catalogue_from_bytes(data: bytes, *, name: str, source: SourceFile) -> Catalogue:
    """Build a catalogue from the bytes of its file; raises as :func:`read_catalogue` does."""
    file = source.name
    try:
        if data.startswith(MAGIC):
            table = workbook_table(data, file, looks_like_heads)
        else:
            text, encoding = decode(data, file)
            table = split(text, file, looks_like_heads)
            table = replace(table, remarks=(*encoding, *table.remarks))
    except TextProblemsError as error:
        raise InputError(error.problems) from error
    if len(table.rows) > MOST_ROWS:
        raise InputError([_too_many_rows(file)])
    table = with_unit_row(table)
    findings = Findings(file=file, remarks=list(table.remarks))
    heads = read_heads(table.heads.cells, file=file, line=table.heads.line)
    findings.heads = {key_of(column): column.head for column in heads.columns}
    findings.remarks += heads.remarks
    findings.add(heads.problems)
    density = read_density(table, findings)
    unclear = {problem.place for problem in heads.problems}
    _require_columns(heads, density, bool(unclear), table.heads.line, findings)
    if not table.rows:
        findings.problem(
            place="file", found="column heads but no rows", expected="at least one section"
        )
    if "designation" not in findings.heads:
        raise InputError(findings.problems())
    entries = read_entries(table, heads.columns, findings)
    _refuse_twice(entries, findings)
    if heads.problems or "area" not in findings.heads:
        raise InputError(findings.problems())
    entries = tuple(_with_equal_sides(entry, findings) for entry in entries)
    rows = [row for entry in entries if (row := _settle(entry, density, findings)) is not None]
    _remark_on_least_axes(rows, findings)
    check_rows(rows, density, findings)
    if findings.any:
        raise InputError(findings.problems())
    price = next((column for column in heads.columns if column.property == "price"), None)
    columns = _said_columns(heads, density)
    return _catalogue(name, source, table.header, columns, rows, density, price, findings)


def _too_many_rows(file: str) -> Problem:
    return Problem(
        file=file,
        place="file",
        found=f"more than {MOST_ROWS} rows",
        expected="only those that may be picked",
        fix="Split the file into several catalogues.",
    )


def _find(name: str, base: Path) -> Path:
    """Return the path of a shipped catalogue or of the user's file."""
    if not name.strip() or "\x00" in name:
        raise InputError([_not_found(name, base)])
    shipped = shipped_folder() / f"{name}{SUFFIX}"
    if name in shipped_catalogues():
        return shipped
    try:
        path = base / Path(name).expanduser()
        if os.path.lexists(path):
            return path
    except (OSError, RuntimeError) as error:  # a name too long, a home folder nobody has
        raise InputError([_not_found(name, base)]) from error
    raise InputError([_not_found(name, base)])


def _not_found(name: str, base: Path) -> Problem:
    shipped = shipped_catalogues()
    words = name.strip().casefold().replace("_", "-").replace(" ", "-").removesuffix(SUFFIX)
    near = difflib.get_close_matches(words, shipped, n=1, cutoff=0.5)
    near = [SHORT_FORMS[words]] if words in SHORT_FORMS else near
    hint = f"Did you mean {near[0]}? " if near else ""
    return Problem(
        file=name or "(empty)",
        place="file",
        found=f"no shipped catalogue of this name and no such file in {base}",
        expected="a shipped name or the path of a file",
        fix=f"{hint}Shipped are: {', '.join(shipped)}.",
    )


def _unreadable(name: str, error: PlainFileError) -> Problem:
    expected = error.expected
    return Problem(
        file=name,
        place="file",
        found=error.found,
        expected="a text table (CSV)" if expected == "a file" else expected,
        fix=error.fix,
    )


def _require_columns(
    heads: Heads,
    density: float | str | None,
    unclear: bool,
    line: int,
    findings: Findings,
) -> None:
    """Every needed property must have a column; axes beyond the major one depend on the row."""
    have = {key_of(column) for column in heads.columns}
    missing = []
    if "designation" not in have:
        missing.append("designation")
    if "area" not in have:
        missing.append("area [cm2]")
    if "mass" not in have and density is None:
        missing.append("mass [kg/m] (or # density = 7850 kg/m3 in the header)")
    if not have & {"I major", "i major", "I", "i"}:
        missing.append("I major [cm4] (or i major [cm])")
    if unclear:  # a column may be there with a wrong unit, which is reported already
        missing = missing if "designation" not in have else []
    unused = f"Not understood here: {', '.join(map(repr, heads.unused))}. " if heads.unused else ""
    above = "Lines above the column heads must begin with #. " if "designation" in missing else ""
    for column in missing:
        unit = ", with its unit in square brackets" if "[" in column else ""
        findings.problem(
            place=f"line {line}",
            found=f"no column {column}",
            expected=f"a column for it{unit}",
            fix=f"{above}{unused}Heads that are understood: {PLAIN_HEADS}.",
        )


def _refuse_twice(entries: Sequence[Entry], findings: Findings) -> None:
    seen: dict[str, Entry] = {}
    for entry in entries:
        key = entry.designation.casefold().translate(_SAME_SIGNS)
        first = seen.setdefault(key, entry)
        if first is not entry:
            findings.problem(
                place=f"line {entry.line}, column {findings.head('designation')!r}",
                found=f"{entry.designation!r} again",
                expected="each designation once",
                fix=f"It stands in line {first.line} already; remove one or tell them apart "
                "by their designation.",
                kind="twice",
                line=entry.line,
            )


def _with_equal_sides(entry: Entry, findings: Findings) -> Entry:
    """Squares, tubes and angles given by one side, under h or b, have the other one alike."""
    given = [side for side in ("depth", "width") if side in entry.numbers]
    if len(given) != 1:
        return entry
    other = "width" if given == ["depth"] else "depth"
    alike = entry.family in ALIKE_ON_BOTH_AXES or (
        entry.family == "angle" and other not in findings.heads
    )
    if not alike:
        return entry
    return replace(entry, numbers={**entry.numbers, other: entry.numbers[given[0]]})


def _settle(entry: Entry, density: float | str | None, findings: Findings) -> Checked | None:
    """Settle area and second moments of a row; None when something needed is missing."""
    area = entry.value("area")
    if area is None:
        _missing(entry, "area", "the area", findings)
        return None
    if entry.value("mass") is None and density is None and "mass" in findings.heads:
        _missing(entry, "mass", "the mass", findings)
    plies = entry.value("plies")
    if plies is not None and plies != round(plies):
        findings.in_row(
            entry, "plies", found=f"{plies:g}", expected="a whole number of plies", fix="",
            kind="plies",
        )  # fmt: skip
    both = _about(entry, "", area) if _is_alike(entry) else None
    major = _about(entry, " major", area) or both
    least = _about(entry, " least", area)
    minor = _about(entry, " minor", area) or (major if _is_alike(entry) else None)
    if minor is None and entry.family in SYMMETRIC:
        minor = least
    if major is None or minor is None:
        axis = "major" if major is None else "minor"
        key = f"i {axis}" if f"i {axis}" in findings.heads else f"I {axis}"
        _missing(entry, key, f"a second moment or radius of gyration, {axis} axis", findings)
        return None
    if least is None and entry.family == "angle":
        key = "i least" if "i least" in findings.heads else "I least"
        _missing(entry, key, "a second moment or radius of gyration, least axis (v-v)", findings)
        return None
    return Checked(
        entry=entry,
        area=area,
        i_major=major,
        i_minor=minor,
        i_least=minor if least is None else least,
    )


def _about(entry: Entry, key: str, area: float) -> float | None:
    """Return a second moment as stated under ``I`` + key, else A i² from ``i`` + key."""
    inertia, radius = entry.value(f"I{key}"), entry.value(f"i{key}")
    if inertia is not None:
        return inertia
    return None if radius is None else area * radius**2


def _remark_on_least_axes(rows: Sequence[Checked], findings: Findings) -> None:
    """A shape that is not known may have a least axis that lies askew."""
    askew = [
        row.entry.line
        for row in rows
        if row.entry.family == "other" and not row.entry.numbers.keys() & {"I least", "i least"}
    ]
    if askew:
        findings.remarks.append(
            f"Least axis taken as the minor one for family other: {ranges(askew)}. A shape "
            "without an axis of symmetry needs its least principal axis (I least)."
        )


def _is_alike(entry: Entry) -> bool:
    """Say whether one second moment holds for both sides: squares, tubes and equal angles."""
    if entry.family in ALIKE_ON_BOTH_AXES:
        return True
    return entry.family == "angle" and entry.value("depth") == entry.value("width")


def _missing(entry: Entry, key: str, what: str, findings: Findings) -> None:
    """Report an empty cell, or a column that this row needs and the file does not have."""
    if key in findings.heads:
        findings.problem(
            place=f"{place_of(entry.line, entry.designation)}, column {findings.head(key)!r}",
            found="an empty cell",
            expected=what,
            kind=f"missing {key}",
            line=entry.line,
        )
    else:
        unit = {"area": "cm2", "mass": "kg/m"}.get(key, "cm4" if key.startswith("I") else "cm")
        findings.absent(entry, what, f"{key} [{unit}]")


def _said_columns(heads: Heads, density: float | str | None) -> tuple[tuple[str, str], ...]:
    """Say for every column head what it was taken for."""
    said = []
    for column in sorted(heads.columns, key=lambda column: column.index):
        what = column.property.replace("_", " ")
        if column.property in {"second moment", "radius"}:
            what = "radius of gyration" if column.property == "radius" else what
            what += " about both axes" if column.axis == "any" else f", {column.axis} axis"
        if column.kind == "weight per length":
            what += " from weight"
        said.append((column.head, f"{what} in {column.unit}" if column.unit else what))
    if isinstance(density, float):
        said.append(("(header)", f"density {density:.4g} kg/m3"))
    elif density is not None:
        said.append(("(header)", "mass from the density of the grade"))
    return (*said, *((head, "not used") for head in heads.unused))


def _catalogue(
    name: str,
    source: SourceFile,
    header: tuple[str, ...],
    columns: tuple[tuple[str, str], ...],
    rows: Sequence[Checked],
    density: float | str | None,
    price: Column | None,
    findings: Findings,
) -> Catalogue:
    def column(key: str) -> FloatArray:
        found = (row.entry.value(key) for row in rows)
        return np.array([np.nan if v is None else v for v in found], dtype=np.float64)

    area = np.array([row.area for row in rows], dtype=np.float64)
    # Printed figures may leave axes that are alike, in the wrong order by their rounding.
    inertia = np.array([(row.i_major, row.i_minor, row.i_least) for row in rows])
    mass = column("mass")
    if isinstance(density, float):
        mass = np.where(np.isnan(mass), area * density, mass)
    prices = column("price")
    if price is not None and price.per == "kg":
        prices = prices * mass
    plies = column("plies")
    return Catalogue(
        name=name,
        source=source,
        header=header,
        designation=tuple(row.entry.designation for row in rows),
        row=tuple(row.entry.line for row in rows),
        family=tuple(row.entry.family for row in rows),
        product=tuple(row.entry.product for row in rows),
        area=area,
        i_major=inertia.max(axis=1),
        i_minor=inertia[:, :2].min(axis=1),
        i_least=inertia.min(axis=1),
        mass=mass,
        depth=column("depth"),
        width=column("width"),
        thickness=column("thickness"),
        flange=column("flange"),
        root_radius=column("root_radius"),
        surface=column("surface"),
        price=prices,
        plies=tuple(1 if np.isnan(n) else round(float(n)) for n in plies),
        stock_lengths=tuple(row.entry.supply.stock_lengths for row in rows),
        available=tuple(row.entry.supply.available is not False for row in rows),
        preferred=tuple(row.entry.supply.preferred for row in rows),
        lead_time=tuple(row.entry.supply.lead_time for row in rows),
        columns=columns,
        remarks=tuple(findings.remarks),
    )
