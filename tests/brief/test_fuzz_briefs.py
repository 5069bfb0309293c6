"""Broken briefs end in a sane brief or in messages: as tables, as text, as sheets, as bytes."""

from __future__ import annotations

import io
import tomllib
from collections.abc import Callable, Sequence
from pathlib import Path
from typing import Any

import openpyxl
import pytest
from brief_mutations import PAYLOADS, bounded, cut_up, cuts, edits, must_be_sane, mutated
from hypothesis import HealthCheck, Phase, given, settings
from hypothesis import strategies as st

from sizing.brief.findings import key_path_text
from sizing.brief.model import SourceFile
from sizing.brief.toml_reader import brief_from_tables, read_brief
from sizing.brief.workbook_file import Grid, read_grids
from sizing.brief.workbook_reader import tables_of_grids
from sizing.brief.workbook_writer import workbook_bytes
from sizing.errors import InputError

HERE = Path(__file__).parent
SOURCE = SourceFile(name="brief", path=Path("brief"), sha256="")
SOUND = (HERE / "broken" / "sound.toml").read_text(encoding="utf-8")
EVERY_KEY = """
title = "Invented truss with every key"
units = { force = "kN", length = "m" }
between_nodes = "lump"
combination_rule = { rule = "EN 1990", psi = { snow = [0.5, 0.2, 0.0] } }
[nodes]
A0 = [0.0, 0.0]
A1 = [3.0, 0.0]
A2 = ["6.0 m", 0.0]
B1 = [3.0, 2.0]
[supports]
A0 = { held = ["x", "y"] }
A2 = { held = ["y"] }
[groups.bottom-chord]
members = ["A0..A2"]
buckling_length = { in_plane = 0.9 }
restrained_nodes = ["A0", "A2"]
section_depth = "in plane"
net_section_factor = 0.9
utilisation_cap = 0.95
slenderness_limits = { compression = 180, tension = 300 }
families = ["SHS"]
sections = ["SHS *"]
[groups.webs]
members = ["A0-B1-A2", "A1-B1"]
buckling_length = 1.0
[cases.permanent]
kind = "permanent"
self_weight = true
[cases.snow]
kind = "snow"
duration = "short"
alternative_set = "snow"
nodal = { "B*" = [0.0, -9.6] }
[[cases.snow.area_loads]]
pressure = "0.8 kN/m2"
on = "plan"
chord = "A0..A2"
spacing = "4.0 m"
coefficients = { "A0..A1" = 0.8, "A1..A2" = 0.4 }
[[cases.snow.line_loads]]
load = "1.5 kN/m"
along = "chord"
chord = "A0..A2"
[[cases.snow.point_loads]]
force = [0.0, -2.0]
member = "A0-A1"
distance = "1.0 m"
[[combinations]]
name = "S9"
state = "serviceability"
factors = { permanent = 1.0, snow = 1.0 }
long_term = { permanent = 1.0 }
[[deflection_limits]]
name = "sag"
nodes = ["A1"]
direction = [0, 1]
limit = "span/250"
span = "6.0 m"
combinations = ["S9"]
relative_to = "A0"
component = "net final"
precamber = { permanent = 1.0 }
[options.steel]
standard = "EN 1993-1-1"
grade = "S355"
catalogue = "square-hollow-sections"
connection_allowance = "5 %"
cost = { currency = "EUR", per_kg = 2.1, source = "invented", date = "2026-10" }
carbon = { a1_a3 = 1.13, source = "invented", date = "2026-10" }
gamma_M1 = 1.1
"""
TEXTS = [SOUND, EVERY_KEY]
TABLES = [tomllib.loads(text) for text in TEXTS]
BOOK = workbook_bytes(TABLES[1])
GRIDS = read_grids(BOOK, "brief")
QUIET: dict[str, Any] = {
    "deadline": None,
    "suppress_health_check": list(HealthCheck),
    "phases": [Phase.explicit, Phase.reuse, Phase.generate],  # making them smaller takes minutes
}


def accept(read: Callable[[], Any]) -> bool:
    """Whether the brief was accepted; then it is sane, and otherwise there are messages."""
    refusal: InputError | None = None
    with bounded():
        try:
            brief = read()
        except InputError as error:
            refusal = error
    if refusal is None:
        must_be_sane(brief)
        return True
    assert refusal.problems
    assert all(p.place and p.found and p.expected for p in refusal.problems)
    assert all(text.isprintable() for text in str(refusal).split("\n"))
    return False


@pytest.mark.parametrize("text", TEXTS)
def test_the_briefs_that_are_broken_below_are_sound(text: str) -> None:
    """Nothing is wrong with the starting points."""
    assert accept(lambda: brief_from_tables(tomllib.loads(text), SOURCE))


def broken_tables(which: int, changes: Sequence[tuple[float, str, int, float]]) -> None:
    tables = mutated(TABLES[which], changes)
    accept(lambda: brief_from_tables(tables, SOURCE, key_path_text))


def broken_text(path: Path, which: int, changes: Sequence[tuple[float, str, bytes]]) -> None:
    path.write_bytes(cut_up(TEXTS[which].encode(), changes))
    accept(lambda: read_brief(path))


def broken_cells(changes: Sequence[tuple[float, int]]) -> None:
    """Put payloads into cells of the workbook, heads and names too."""
    spots = [(i, spot) for i, grid in enumerate(GRIDS) for spot in grid.cells]
    cells = [dict(grid.cells) for grid in GRIDS]
    for where, payload in changes:
        i, spot = spots[int(where * len(spots))]
        value = PAYLOADS[payload]
        if value is None or isinstance(value, (list, dict)):
            cells[i].pop(spot, None)
        else:
            cells[i][spot] = value
    grids = [Grid(title=g.title, cells=c) for g, c in zip(GRIDS, cells, strict=True)]

    def read() -> Any:
        book = tables_of_grids(grids, SOURCE)
        return brief_from_tables(book.tables, SOURCE, book.places)

    accept(read)


def broken_book(path: Path, changes: Sequence[tuple[float, str, bytes]]) -> None:
    path.write_bytes(cut_up(BOOK, changes))
    accept(lambda: read_brief(path))


def broken_part(path: Path, which: float, changes: Sequence[tuple[float, str, bytes]]) -> None:
    """Cut up one part inside an archive that is sound, so that the part itself is read."""
    import zipfile

    packed = io.BytesIO()
    with zipfile.ZipFile(io.BytesIO(BOOK)) as old, zipfile.ZipFile(packed, "w") as new:
        names = old.namelist()
        chosen = names[int(which * len(names))]
        for name in names:
            content = old.read(name)
            new.writestr(name, cut_up(content, changes) if name == chosen else content)
    path.write_bytes(packed.getvalue())
    accept(lambda: read_brief(path))


whiches = st.integers(0, len(TEXTS) - 1)
shares = st.floats(0, 1, exclude_max=True)
cell_edits = st.lists(st.tuples(shares, st.integers(0, len(PAYLOADS) - 1)), min_size=1, max_size=4)


@pytest.fixture(scope="module")
def folder(tmp_path_factory: pytest.TempPathFactory) -> Path:
    return tmp_path_factory.mktemp("broken")


@settings(max_examples=250, **QUIET)
@given(whiches, edits)
def test_broken_tables(which: int, changes: Any) -> None:
    """Types swapped, keys deleted, doubled, renamed, numbers out of all bounds."""
    broken_tables(which, changes)


@settings(max_examples=150, **QUIET)
@given(whiches, cuts)
def test_broken_text(folder: Path, which: int, changes: Any) -> None:
    """Bytes of a TOML file flipped, cut and put in."""
    broken_text(folder / "brief.toml", which, changes)


@settings(max_examples=150, **QUIET)
@given(cell_edits)
def test_broken_cells(changes: Any) -> None:
    """Cells of a workbook with anything in them."""
    broken_cells(changes)


@settings(max_examples=60, **QUIET)
@given(cuts)
def test_broken_workbook_files(folder: Path, changes: Any) -> None:
    """Bytes of a workbook flipped, cut and put in."""
    broken_book(folder / "brief.xlsx", changes)


@settings(max_examples=40, **QUIET)
@given(shares, cuts)
def test_broken_parts_of_workbooks(folder: Path, which: float, changes: Any) -> None:
    """The same inside the archive."""
    broken_part(folder / "brief.xlsx", which, changes)


@pytest.mark.bench
@settings(max_examples=20_000, **QUIET)
@given(whiches, edits)
def test_many_broken_tables(which: int, changes: Any) -> None:
    """Twenty thousand times."""
    broken_tables(which, changes)


@pytest.mark.bench
@settings(max_examples=10_000, **QUIET)
@given(whiches, cuts)
def test_many_broken_texts(folder: Path, which: int, changes: Any) -> None:
    """Ten thousand times."""
    broken_text(folder / "brief.toml", which, changes)


@pytest.mark.bench
@settings(max_examples=10_000, **QUIET)
@given(cell_edits)
def test_many_broken_cells(changes: Any) -> None:
    """Ten thousand times."""
    broken_cells(changes)


@pytest.mark.bench
@settings(max_examples=2_000, **QUIET)
@given(shares, cuts)
def test_many_broken_parts_of_workbooks(folder: Path, which: float, changes: Any) -> None:
    """Two thousand times, the file as a whole and a part of it."""
    broken_part(folder / "brief.xlsx", which, changes)
    broken_book(folder / "brief.xlsx", changes)


def test_a_sheet_that_fills_the_bounds_is_read_in_time(tmp_path: Path) -> None:
    """Twenty thousand rows of loads on one sheet are read, or told, within the bounds."""
    book = openpyxl.load_workbook(io.BytesIO(BOOK))
    sheet = book["Loads"]
    for row in range(6, 20_000):
        sheet.cell(row, 1).value = "snow"
        sheet.cell(row, 2).value = f"N{row}"
    path = tmp_path / "brief.xlsx"
    book.save(path)
    assert not accept(lambda: read_brief(path))


def test_a_number_of_hundreds_of_digits_among_settings_is_told() -> None:
    """A whole number beyond all floating-point numbers, where a rule expects one up to 1."""
    tables = tomllib.loads(EVERY_KEY)
    tables["combination_rule"]["psi"]["snow"] = [10**400, 0.2, 0.0]
    assert not accept(lambda: brief_from_tables(tables, SOURCE))
