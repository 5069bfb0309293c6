"""A brief written as a workbook and read back is the same brief, and tells the same mistakes."""

from __future__ import annotations

import re
import tomllib
from dataclasses import replace
from pathlib import Path
from typing import Any

import pytest
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st

from sizing.brief.model import SourceFile
from sizing.brief.shapes import SHAPES, shape_tables
from sizing.brief.toml_reader import brief_from_tables, read_brief
from sizing.brief.toml_writer import toml_text
from sizing.brief.workbook_file import Grid, read_grids
from sizing.brief.workbook_reader import WorkbookBrief, tables_of_grids
from sizing.brief.workbook_sheets import filled_sheets
from sizing.brief.workbook_writer import workbook_bytes
from sizing.errors import InputError, Problem

HERE = Path(__file__).parent
EXAMPLES = sorted((HERE.parents[1] / "examples").glob("*.toml"))
SOUND = (HERE / "broken" / "sound.toml").read_text(encoding="utf-8")
MISTAKES = tomllib.loads((HERE / "broken" / "mistakes.toml").read_text(encoding="utf-8"))
SOURCE = SourceFile(name="brief", path=Path("brief"), sha256="")

LENIENT = {
    "unit in the wrong case": "a word to choose from is taken in any case",
    "grade as a number": "a number in a cell for text is its digits",
}
"""Mistakes of a text file that are none in a workbook, and why."""


def through_a_workbook(tables: dict[str, Any]) -> WorkbookBrief:
    return tables_of_grids(read_grids(workbook_bytes(tables), "brief"), SOURCE)


def through_sheets(tables: dict[str, Any]) -> WorkbookBrief:
    """Read the filled sheets without a file between: fast enough for thousands."""
    grids = []
    for sheet in filled_sheets(tables):
        rows = [[column.head for column in sheet.columns], *sheet.rows]
        cells = {
            (r, c): value
            for r, row in enumerate(rows, start=1)
            for c, value in enumerate(row, start=1)
            if value is not None
        }
        grids.append(Grid(title=sheet.title, cells=cells))
    return tables_of_grids(grids, SOURCE)


def problems(tables: dict[str, Any], book: WorkbookBrief | None = None) -> list[Problem]:
    try:
        if book is None:
            brief_from_tables(tables, SOURCE)
        else:
            brief_from_tables(tables, SOURCE, book.places)
    except InputError as error:
        return list(error.problems)
    return []


def parsed(text: str) -> dict[str, Any] | None:
    try:
        return tomllib.loads(text)
    except tomllib.TOMLDecodeError:
        return None


@pytest.mark.parametrize("path", EXAMPLES, ids=lambda path: path.stem)
def test_examples_are_the_same_brief_as_a_workbook(path: Path, tmp_path: Path) -> None:
    """Tables and the brief in SI units agree to the last digit; nothing was taken for granted."""
    tables = tomllib.loads(path.read_text(encoding="utf-8"))
    book = through_a_workbook(tables)
    assert book.tables == tables
    assert book.cautions == ()
    (tmp_path / "brief.xlsx").write_bytes(workbook_bytes(tables))
    written, text = read_brief(tmp_path / "brief.xlsx"), read_brief(path)
    assert replace(written, source=text.source) == text


@pytest.mark.parametrize("mistake", MISTAKES["mistake"], ids=lambda m: m["name"])
def test_mistakes_are_told_as_in_a_text_file_but_with_their_cell(mistake: dict[str, Any]) -> None:
    """The same findings, each with the sheet and cell where it stands."""
    tables = parsed(SOUND.replace(mistake["old"], mistake["new"]))
    if tables is None or mistake["name"] in LENIENT:
        return
    book = through_sheets(tables)
    assert book.tables == tables
    told = problems(book.tables, book)
    assert {_plain(p) for p in told} == {_plain(p) for p in problems(tables)}
    for problem in told:
        assert re.match(r"[A-Z][a-z ]+![A-Z]+\d+|sheet [A-Z][a-z ]+", problem.place), problem.place


def _plain(problem: Problem) -> tuple[str, str, str]:
    """The problem without its place; the place of another member in it stands for any."""
    found = re.sub(r"groups\.\S+\.members\[\d+\]|Members!\w+", "(place)", problem.found)
    return found, problem.expected, problem.fix


@pytest.mark.parametrize("shape", SHAPES)
def test_every_shape_is_the_same_brief_as_a_workbook(shape: str) -> None:
    """The briefs that are written for a start survive the sheets."""
    tables = shape_tables(shape)
    book = through_sheets(tables)
    assert book.tables == tables
    assert book.cautions == ()


def test_every_digit_of_a_number_survives() -> None:
    """Numbers that need 17 digits, very small and very large ones, and whole ones."""
    numbers = [0.1 + 0.2, 1 / 3, 1e-300, 1.7976931348623157e308, 2**53, -(2**53) - 1, 5e-324, 7]
    tables = {"nodes": {f"A{i}": [x, -x] for i, x in enumerate(numbers)}}
    assert through_a_workbook(tables).tables == tables


names = st.one_of(
    st.sampled_from(["A0", "1", "snow", "Name", "State", "=1+1", "-x", "@", "#N/A", "all", "é"]),
    st.sampled_from(["a.b", "a,b", "a; b", '"q"', "'", "[x]", "{", "_x0041_", "x005F_", "TRUE"]),
    st.text(max_size=8),
)
texts = st.one_of(names, st.sampled_from(["7.2 m", "span/250", "0.9", "1,5", "12 kN", " padded "]))
numbers = st.one_of(
    st.integers(-10, 2000), st.floats(allow_nan=False, allow_infinity=False), st.booleans()
)
values = st.recursive(
    st.one_of(texts, numbers),
    lambda inner: st.one_of(st.lists(inner, max_size=3), st.dictionaries(names, inner, max_size=3)),
    max_leaves=6,
)


def table(*keys: str) -> st.SearchStrategy[dict[str, Any]]:
    return st.dictionaries(st.one_of(st.sampled_from(keys), names), values, max_size=5)


groups = table("members", "buckling_length", "slenderness_limits", "families", "section_depth")
members = st.fixed_dictionaries({"members": st.lists(texts, max_size=4)})
buckling = st.fixed_dictionaries(
    {"buckling_length": st.dictionaries(st.sampled_from(["in_plane", "out_of_plane", "x"]), values)}
)
cases = st.one_of(
    table("kind", "nodal", "self_weight", "duration", "area_loads", "line_loads"),
    st.fixed_dictionaries({"nodal": st.dictionaries(names, st.lists(numbers, max_size=3))}),
    st.fixed_dictionaries({"area_loads": st.lists(table("pressure", "on", "chord"), max_size=2)}),
)
combinations = st.one_of(
    table("name", "state", "factors", "long_term"),
    st.fixed_dictionaries({"name": texts, "factors": st.dictionaries(names, numbers)}),
)
limits = table("name", "nodes", "direction", "limit", "combinations", "precamber")
options = table("standard", "grade", "catalogue", "slenderness_limits", "cost", "gamma_M1")
briefs = st.fixed_dictionaries(
    {},
    optional={
        "title": texts,
        "units": st.one_of(table("force", "length"), values),
        "nodes": st.dictionaries(names, st.one_of(st.lists(numbers, max_size=4), values)),
        "supports": st.dictionaries(names, table("held")),
        "groups": st.one_of(st.dictionaries(names, st.one_of(groups, members, buckling)), values),
        "cases": st.one_of(st.dictionaries(names, cases), values),
        "combinations": st.one_of(st.lists(combinations, max_size=3), values),
        "combination_rule": values,
        "deflection_limits": st.one_of(st.lists(limits, max_size=3), values),
        "options": st.one_of(st.dictionaries(names, options, max_size=3), values),
        "unheard_of": values,
    },
)


def check_round_trips(tables: dict[str, Any], *, file: bool) -> None:
    assert tomllib.loads(toml_text(tables)) == tables
    book = through_a_workbook(tables) if file else through_sheets(tables)
    assert book.tables == tables
    assert book.cautions == ()


@settings(max_examples=100, deadline=None, suppress_health_check=list(HealthCheck))
@given(briefs)
def test_random_briefs_go_to_both_forms_and_back(tables: dict[str, Any]) -> None:
    """Tables of any content, sound or not, come back as they were from text and sheets."""
    check_round_trips(tables, file=False)


@settings(max_examples=15, deadline=None, suppress_health_check=list(HealthCheck))
@given(briefs)
def test_random_briefs_go_to_files_and_back(tables: dict[str, Any]) -> None:
    """The same through the file itself."""
    check_round_trips(tables, file=True)


@pytest.mark.bench
@settings(max_examples=10_000, deadline=None, suppress_health_check=list(HealthCheck))
@given(briefs)
def test_many_random_briefs_go_to_both_forms_and_back(tables: dict[str, Any]) -> None:
    """The same ten thousand times."""
    check_round_trips(tables, file=False)


@pytest.mark.bench
@settings(max_examples=1_000, deadline=None, suppress_health_check=list(HealthCheck))
@given(briefs)
def test_many_random_briefs_go_to_files_and_back(tables: dict[str, Any]) -> None:
    """The same a thousand times through the file itself."""
    check_round_trips(tables, file=True)
