"""The schedule workbook holds the tables as typed cells, prints well and never changes."""

from __future__ import annotations

import math
import re
import zipfile
from datetime import date
from io import BytesIO

import openpyxl
import pint
import pytest
from defusedxml import ElementTree

from sizing.documents.workbook import LONGEST_SHEET_NAME, workbook_bytes

ISSUED = date(2026, 3, 1)
SHEETS = [
    "Cover", "Summary", "Nodes", "Load totals", "Loads", "Members", "Sections", "Groups",
    "Combinations", "Deflections", "Reactions", "Envelope", "Joint forces",
    "Restraint", "Recheck", "Basis", "Cautions",
]  # fmt: skip
RECHECK = SHEETS.index("Recheck") + 1


def _book(job):
    return openpyxl.load_workbook(BytesIO(workbook_bytes(job, ISSUED)))


@pytest.fixture(scope="module")
def book(girder_job):
    return _book(girder_job)


def _table(sheet):
    """Heads and rows of the one table on a sheet, the total row apart."""
    head = sheet.freeze_panes
    row = int(re.sub(r"\D", "", head)) - 1
    heads = [c.value for c in sheet[row]]
    rows = [[c.value for c in r] for r in sheet.iter_rows(min_row=row + 1)]
    total = next((r for r in rows if r[0] == "Total"), None)
    return heads, [r for r in rows if r is not total], total


def test_sheets_stand_in_reading_order(book):
    """One option: every table on a sheet of its plain name."""
    assert book.sheetnames == SHEETS


def test_members_sheet_repeats_the_result(book, girder_job):
    """Every member stands with its numbers in the printed unit."""
    heads, rows, _ = _table(book["Members"])
    column = {h.replace("\n", " "): i for i, h in reversed(list(enumerate(heads)))}
    members = girder_job.options[0].members
    assert len(rows) == len(members)
    for row, member in zip(rows, members, strict=True):
        assert row[column["Mark"]] == member.mark
        assert row[column["System length m"]] == pytest.approx(member.length)
        assert row[column["Mass each kg"]] == pytest.approx(member.mass)
        assert row[column["Utilisation"]] == pytest.approx(member.utilisation)
        tension = row[column["Greatest tension kN"]]
        expected = "none" if member.tension is None else member.tension.force / 1e3
        assert tension == (expected if expected == "none" else pytest.approx(expected))
        assert row[column["Reversal"]] == ("yes" if member.reversal else "no")
    assert not any("cut length" in str(h).lower() for h in heads)


def test_totals_are_the_sums_of_their_columns(girder_job, tower_job):
    """Each total equals the sum of the cells above it, and the masses agree between sheets."""
    for job in (girder_job, tower_job):
        masses = {}
        for sheet in _book(job):
            heads, rows, total = _table(sheet) if sheet.freeze_panes else ([], [], None)
            for i, value in enumerate(total or ()):
                if isinstance(value, int | float):
                    assert value == pytest.approx(math.fsum(r[i] for r in rows), rel=1e-12)
                    if str(heads[i]).startswith(("Mass\n", "Mass each\n")):
                        masses.setdefault(round(value, 6), []).append(sheet.title)
        assert len(masses) == 1


def test_units_follow_the_brief(tower_job):
    """A brief in kip and ft prints kip, ft and lb, converted as pint converts."""
    ureg = pint.UnitRegistry(cache_folder=None)
    heads, rows, _ = _table(_book(tower_job)["Members tube"])
    column = {str(h).replace("\n", " "): i for i, h in enumerate(heads)}
    member = tower_job.options[0].members[2]
    row = rows[2]
    for head, si, unit in (
        ("System length ft", member.length * ureg.m, "ft"),
        ("Mass each lb", member.mass * ureg.kg, "lb"),
        ("Mass per length lb/ft", member.mass_per_metre * ureg.kg / ureg.m, "lb/ft"),
        ("Greatest compression kip", member.compression.force * ureg.N, "kip"),
    ):
        assert row[column[head]] == pytest.approx(si.to(unit).magnitude, rel=1e-12)


def test_forces_show_their_sense_by_word(book):
    """A force is a number whose format adds T or C, so that sign and word agree."""
    sheet = book["Joint forces"]
    formats = {c.number_format for row in sheet.iter_rows() for c in row}
    assert '0.0 "T";-0.0 "C";0.0' in formats
    assert any("Tension is positive (T)" in str(c.value) for row in sheet["A1:A4"] for c in row)


def test_uplift_is_told_where_the_support_pulls_down(book, girder_job):
    """The word UPLIFT stands beside every vertical reaction that is negative, nowhere else."""
    heads, rows, _ = _table(book["Reactions"])
    words = {row[-1] for row in rows}
    assert words == {"bearing", "UPLIFT"}
    for row, reaction in zip(rows, girder_job.options[0].reactions, strict=True):
        assert row[-1] == ("bearing" if reaction.components[-1] > 0 else "UPLIFT")
    assert "Reaction y\nkN" in heads
    assert any(row[heads.index("Reaction x\nkN")] == "free" for row in rows)


def test_pages_are_ready_to_print(book):
    """Every sheet: landscape, one page wide or more by design, heads repeated, page n of N."""
    for sheet in book:
        setup = sheet.page_setup
        assert setup.orientation == "landscape"
        assert sheet.sheet_properties.pageSetUpPr.fitToPage
        assert (setup.fitToWidth, setup.fitToHeight) == (1, 0)
        assert sheet.oddFooter.center.text == "Page &P of &N"
        assert "girder.toml" in sheet.oddFooter.left.text
        assert "sizing 0.1.0 · 2026-03-01" in sheet.oddFooter.right.text
        assert sheet.freeze_panes
        assert sheet.print_area
        assert sheet.print_title_rows


def test_filters_cover_heads_and_data_but_not_the_total(book):
    """Sorting by the filter must not carry the total row along."""
    sheet = book["Members"]
    heads, rows, total = _table(sheet)
    first = int(re.sub(r"\D", "", sheet.freeze_panes)) - 1
    assert total is not None
    assert heads[0] == "Mark"
    assert sheet.auto_filter.ref == f"A{first}:AD{first + len(rows)}"


def test_wide_tables_repeat_their_keys(large_job):
    """Twenty-five combinations spread over several pages with node and member on each."""
    sheet = _book(large_job)["Joint forces"]
    assert sheet.page_setup.fitToWidth == 4
    assert sheet.print_title_cols == "$A:$D"


def test_formulas_stand_on_the_recheck_only(girder_job):
    """No formulas elsewhere, no merged cells, macros or links to other files."""
    with zipfile.ZipFile(BytesIO(workbook_bytes(girder_job, ISSUED))) as parts:
        names = parts.namelist()
        assert not [n for n in names if "vba" in n.lower() or "externalLink" in n]
        for name in names:
            root = ElementTree.fromstring(parts.read(name))
            tags = {element.tag.rsplit("}", 1)[-1] for element in root.iter()}
            assert not tags & {"mergeCell", "hyperlink"}, name
            assert ("f" in tags) == (name == f"xl/worksheets/sheet{RECHECK}.xml"), name


def test_cover_has_boxes_for_who_prepared_and_checked(book):
    """The cover names the issue and leaves room to sign."""
    entries = {row[0].value: row[1].value for row in book["Cover"].iter_rows(max_col=2)}
    assert entries["Brief, SHA-256"] == "ab" * 32
    assert entries["Issued"] == "2026-03-01"
    assert entries["Prepared by, date"] is None
    assert entries["Checked by, date"] is None


def test_same_result_same_bytes(girder_job, tower_job):
    """Two runs give one file, and the time that the search took leaves no trace."""
    for job in (girder_job, tower_job):
        assert workbook_bytes(job, ISSUED) == workbook_bytes(job, ISSUED)
    with zipfile.ZipFile(BytesIO(workbook_bytes(girder_job, ISSUED))) as parts:
        assert {info.date_time for info in parts.infolist()} == {(1980, 1, 1, 0, 0, 0)}
        assert parts.read("docProps/core.xml").count(b"2026-03-01T00:00:00Z") == 2


def test_sheet_names_are_legal_and_unique(hostile_job):
    """Whatever options are called, sheet names obey the rules of spreadsheet programs."""
    names = _book(hostile_job).sheetnames
    assert len(names) == 5 + 12 * 8
    assert len({n.lower() for n in names}) == len(names)
    for name in names:
        assert len(name.encode("utf-16-le")) // 2 <= LONGEST_SHEET_NAME
        assert not re.search(r"[\[\]:*?/\\]", name)
        assert not name.startswith("'")
        assert not name.endswith("'")
