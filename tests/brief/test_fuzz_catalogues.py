"""Broken section catalogues end in sane sections or in messages, as text and as workbooks."""

from __future__ import annotations

import io
from collections.abc import Sequence
from pathlib import Path
from typing import Any

import openpyxl
import pytest
from brief_mutations import PAYLOADS, bounded, cut_up, cuts, must_be_a_sane_catalogue
from hypothesis import HealthCheck, Phase, given, settings
from hypothesis import strategies as st

from sizing.brief.catalogue_reader import catalogue_from_bytes, shipped_catalogues, shipped_folder
from sizing.brief.model import SourceFile
from sizing.errors import InputError

SOURCE = SourceFile(name="list.csv", path=Path("list.csv"), sha256="0" * 64)
QUIET: dict[str, Any] = {
    "deadline": None,
    "suppress_health_check": list(HealthCheck),
    "phases": [Phase.explicit, Phase.reuse, Phase.generate],
}


def first_rows(name: str, rows: int = 12) -> str:
    """The header, the heads and the first rows of a shipped catalogue."""
    lines = (shipped_folder() / f"{name}.csv").read_text(encoding="utf-8").splitlines()
    header = [line for line in lines if line.startswith("#")]
    body = [line for line in lines if not line.startswith("#")]
    return "\n".join([*header, *body[: rows + 1]]) + "\n"


LISTS = [first_rows(name) for name in shipped_catalogues()]
CELLS = [
    "nan", "inf", "-1", "0", "1e99", "1,234", "1.234,5", "−5", "", "x", "1\u00a0234", '"', "=A1",
    "#N/A", "٣", "\x00", "1e-9", "999999", "-", "SHS 1x1x1", "TRUE", "area [m2]",
    "mass [lb/ft]", "[", "cm4", "# decimal = comma", "family", "angle", "a" * 5000,
]  # fmt: skip

numbers = st.integers(0, 10_000)
cell_edits = st.lists(
    st.tuples(
        numbers, numbers, st.sampled_from(["put", "swap", "drop", "twice", "times"]),
        st.integers(0, len(CELLS) - 1),
    ),
    min_size=1,
    max_size=4,
)  # fmt: skip
whiches = st.integers(0, len(LISTS) - 1)
Edits = Sequence[tuple[int, int, str, int]]


def accept(data: bytes) -> bool:
    """Whether the list was accepted; then it is sane, and otherwise there are messages."""
    refusal: InputError | None = None
    with bounded():
        try:
            catalogue = catalogue_from_bytes(data, name="list", source=SOURCE)
        except InputError as error:
            refusal = error
    if refusal is None:
        must_be_a_sane_catalogue(catalogue)
        return True
    assert refusal.problems
    assert all(text.isprintable() for text in str(refusal).split("\n"))
    return False


def edited(rows: list[list[Any]], changes: Edits, payloads: Sequence[Any]) -> list[list[Any]]:
    """Put, swap, drop and double cells and rows; multiply numbers by powers of ten."""
    rows = [list(row) for row in rows]
    for r, c, operation, payload in changes:
        row = rows[r % len(rows)]
        if not row:
            continue
        at = c % len(row)
        if operation == "put":
            row[at] = payloads[payload % len(payloads)]
        elif operation == "swap":
            other = rows[payload % len(rows)]
            row[at], other[-1] = other[-1] if other else "", row[at]
        elif operation == "drop":
            del row[at]
        elif operation == "twice":
            rows.insert(r % len(rows), list(row))
        else:
            row[at] = f"{row[at]}e{payload % 9}"
    return rows


def broken_cells(which: int, changes: Edits) -> None:
    rows = [line.split(",") for line in LISTS[which].splitlines()]
    text = "\n".join(",".join(row) for row in edited(rows, changes, CELLS))
    accept(text.encode())


def broken_bytes(which: int, changes: Any) -> None:
    accept(cut_up(LISTS[which].encode(), changes))


def broken_workbook(which: int, changes: Edits) -> None:
    """The list in a workbook, numbers as numbers, with odd values in its cells."""
    rows = [line.split(",") for line in LISTS[which].splitlines()]
    book = openpyxl.Workbook()
    plain = [p for p in PAYLOADS if not isinstance(p, (list, dict))]
    for row in edited([[as_number(cell) for cell in row] for row in rows], changes, plain):
        legal = [v if not isinstance(v, str) or v.isprintable() else "?" for v in row]
        book.active.append([v[:30_000] if isinstance(v, str) else v for v in legal])
    stream = io.BytesIO()
    book.save(stream)
    accept(stream.getvalue())


def as_number(cell: str) -> float | str:
    try:
        return float(cell)
    except ValueError:
        return cell


@pytest.mark.parametrize("text", LISTS, ids=shipped_catalogues())
def test_the_lists_that_are_broken_below_are_sound(text: str) -> None:
    """Nothing is wrong with the starting points."""
    assert accept(text.encode())


@settings(max_examples=200, **QUIET)
@given(whiches, cell_edits)
def test_broken_cells(which: int, changes: Any) -> None:
    """Cells swapped, doubled, dropped, or filled with what does not belong there."""
    broken_cells(which, changes)


@settings(max_examples=150, **QUIET)
@given(whiches, cuts)
def test_broken_bytes(which: int, changes: Any) -> None:
    """Bytes flipped, cut out and put in."""
    broken_bytes(which, changes)


@settings(max_examples=40, **QUIET)
@given(whiches, cell_edits)
def test_broken_workbooks(which: int, changes: Any) -> None:
    """The same in a workbook."""
    broken_workbook(which, changes)


@pytest.mark.bench
@settings(max_examples=20_000, **QUIET)
@given(whiches, cell_edits, cuts)
def test_many_broken_lists(which: int, changes: Any, cut: Any) -> None:
    """Twenty thousand times."""
    broken_cells(which, changes)
    broken_bytes(which, cut)


@pytest.mark.bench
@settings(max_examples=2_000, **QUIET)
@given(whiches, cell_edits)
def test_many_broken_list_workbooks(which: int, changes: Any) -> None:
    """Two thousand times."""
    broken_workbook(which, changes)
