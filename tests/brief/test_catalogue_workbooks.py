"""Catalogues in workbooks read like the same table in a CSV file."""

from __future__ import annotations

import io
import zipfile
from datetime import date
from pathlib import Path
from typing import Any

import openpyxl
import pytest

from sizing.brief.catalogue_reader import read_catalogue
from sizing.errors import InputError

HEADS = ["designation", "family", "area [cm2]", "mass [kg/m]", "I [cm4]", "thickness [mm]"]
SHS100 = ["SHS 100x100x5", "SHS", 18.7, 14.7, 279, 5]
SHS80 = ["SHS 80x80x5", "SHS", 14.7, 11.6, 137, 5]


def save(path: Path, **sheets: list[list[Any]]) -> None:
    book = openpyxl.Workbook()
    book.remove(book.active)
    for title, rows in sheets.items():
        sheet = book.create_sheet(title)
        for row in rows:
            sheet.append(row)
    book.save(path)


def refused(folder: Path, name: str = "stock.xlsx") -> str:
    with pytest.raises(InputError) as caught:
        read_catalogue(name, folder)
    return str(caught.value)


def test_workbook_reads_like_a_text_table(tmp_path: Path) -> None:
    """Header lines, a title, an empty row: numbers as stored, lines as row numbers."""
    rows = [["# product = EN 10210-2"], ["Yard stock"], [], HEADS, SHS100, [], SHS80]
    save(tmp_path / "stock.xlsx", Notes=[["nothing here"]], Stock=rows)
    catalogue = read_catalogue("stock.xlsx", tmp_path)
    assert catalogue.designation == ("SHS 100x100x5", "SHS 80x80x5")
    assert catalogue.row == (5, 7)
    assert catalogue.area * 1e4 == pytest.approx([18.7, 14.7])
    assert catalogue.product == ("EN 10210-2", "EN 10210-2")
    assert catalogue.header == ("product = EN 10210-2", "Yard stock")
    assert catalogue.remarks == (
        "Read from sheet 'Stock'; line numbers are its row numbers.",
        "Sheets not read: 'Notes'.",
        "Taken as a title, above the column heads: Yard stock.",
    )


def test_mistakes_in_a_workbook_name_the_row(tmp_path: Path) -> None:
    """Dates that a spreadsheet made of designations, text and errors in number cells."""
    bad = ["SHS 80x80x5", "SHS", "14,7", "#N/A", date(2026, 3, 4), True]
    save(tmp_path / "stock.xlsx", Stock=[HEADS, SHS100, bad])
    place = "stock.xlsx: line 3 (SHS 80x80x5), column "
    assert refused(tmp_path).splitlines() == [
        place + "'area [cm2]': found '14,7'; expected a number with a decimal point, as elsewhere "
        "in the file. Write every number of the file with the same decimal mark.",
        place + "'mass [kg/m]': found '#N/A'; expected a number. Save the sheet with values, not "
        "with formulas or errors.",
        place + "'I [cm4]': found '2026-03-04T00:00:00 (a date)'; expected a number.",
        place + "'thickness [mm]': found 'True'; expected a number.",
    ]


def test_formulas_without_values_are_empty_cells(tmp_path: Path) -> None:
    """A formula that no spreadsheet has computed yet holds nothing."""
    save(tmp_path / "stock.xlsx", Stock=[HEADS, ["S1", "SHS", "=2*9", 14.7, 279, 5]])
    assert refused(tmp_path) == (
        "stock.xlsx: line 2 (S1), column 'area [cm2]': found an empty cell; expected the area."
    )


def test_empty_and_damaged_workbooks_are_refused(tmp_path: Path) -> None:
    """No filled cell, an archive of something else, a file cut short, a packed trap."""
    advice = "Or save the sheet as CSV (UTF-8) and name that file."
    path = tmp_path / "stock.xlsx"
    save(path, Stock=[[]])
    assert refused(tmp_path) == (
        "stock.xlsx: file: found a workbook without filled cells; expected a sheet with column "
        f"heads and rows. {advice}"
    )
    save(path, Stock=[["# only this"]])
    assert refused(tmp_path) == (
        "stock.xlsx: file: found only header lines; expected a line of column heads and at least "
        f"one row. {advice}"
    )
    save(path, Stock=[HEADS, SHS100])
    path.write_bytes(path.read_bytes()[:-200])
    assert refused(tmp_path) == (
        "stock.xlsx: file: found a damaged or foreign workbook (BadZipFile); expected an .xlsx "
        f"workbook. {advice}"
    )
    packed = io.BytesIO()
    with zipfile.ZipFile(packed, "w", zipfile.ZIP_DEFLATED) as archive:
        archive.writestr("xl/workbook.xml", b"0" * (21 * 1024 * 1024))
    path.write_bytes(packed.getvalue())
    assert refused(tmp_path) == (
        f"stock.xlsx: file: found a workbook of 21 MiB unpacked; expected at most 20 MiB. {advice}"
    )
