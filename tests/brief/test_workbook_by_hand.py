"""Workbooks as people fill them in: what is meant is read, what is doubtful is told by cell."""

from __future__ import annotations

import io
import re
import tomllib
import zipfile
from collections.abc import Callable
from datetime import datetime
from pathlib import Path
from typing import Any

import openpyxl
import pytest

from sizing.brief.model import Brief
from sizing.brief.toml_reader import read_brief
from sizing.brief.workbook_writer import workbook_bytes
from sizing.errors import InputError

SOUND = tomllib.loads((Path(__file__).parent / "broken" / "sound.toml").read_text(encoding="utf-8"))
Edit = Callable[[Any], None]


def edited(folder: Path, edit: Edit) -> Path:
    """The sound brief as a workbook, edited as in a spreadsheet program."""
    book = openpyxl.load_workbook(io.BytesIO(workbook_bytes(SOUND)))
    edit(book)
    path = folder / "brief.xlsx"
    book.save(path)
    return path


def read(folder: Path, edit: Edit) -> Brief:
    return read_brief(edited(folder, edit))


def told(folder: Path, edit: Edit) -> list[str]:
    path = edited(folder, edit)
    with pytest.raises(InputError) as refusal:
        read_brief(path)
    return [line.removeprefix(f"{path}: ") for line in str(refusal.value).split("\n")]


def put(sheet: str, **cells: Any) -> Edit:
    def edit(book: Any) -> None:
        for cell, value in cells.items():
            book[sheet][cell] = value

    return edit


def test_what_people_do_to_a_sheet_does_no_harm(tmp_path: Path) -> None:
    """Empty rows, spaces, other cases, columns moved, rows above the heads, notes of their own."""

    def edit(book: Any) -> None:
        nodes = book["Nodes"]
        nodes.insert_rows(6, 3)
        nodes["A5"] = "  A0 "
        nodes["H9"] = None
        book["Supports"]["B5"] = "X; Y"
        book["Cases"]["B6"] = "Snow "
        book["Cases"]["C5"] = True
        members = book["Members"]
        members.move_range("A4:A20", cols=5)
        members["F4"] = " MEMBER "
        loads = book["Loads"]
        loads["C4"], loads["D4"] = "X", "y"
        book["Loads"].title = " LOADS "

    brief = read(tmp_path, edit)
    (tmp_path / "sound.xlsx").write_bytes(workbook_bytes(SOUND))
    sound = read_brief(tmp_path / "sound.xlsx")
    assert (brief.nodes, brief.supports, brief.members, brief.cases) == (
        sound.nodes, sound.supports, sound.members, sound.cases
    )  # fmt: skip
    assert brief.cautions == ()


def test_numbers_stored_as_text_are_read_where_they_can_mean_one_thing(tmp_path: Path) -> None:
    """Spaces, no-break spaces, a decimal comma, a true minus sign: read, and told by cell."""
    values = {"B6": "3,0", "B7": "\u00a06.0", "C8": "2.0 ", "B5": "\u22120"}
    brief = read(tmp_path, put("Nodes", **values))
    assert [node.position for node in brief.nodes] == [
        (0.0, 0.0), (3.0, 0.0), (6.0, 0.0), (3.0, 2.0)
    ]  # fmt: skip
    assert brief.cautions == (
        "Nodes!B5: '\u22120' is stored as text; read as 0.",
        "Nodes!B6: '3,0' is stored as text; read as 3.",
        "Nodes!B7: '6.0' is stored as text; read as 6.",
        "Nodes!C8: '2.0' is stored as text; read as 2.",
    )
    assert told(tmp_path, put("Loads", D5="-1,250")) == [
        'Loads!D5: found "-1,250" with a comma; expected a force, such as "12 kN". Write a decimal '
        "point, for instance -1.250, and thousands without any mark."
    ]


DOUBTFUL: dict[str, tuple[Edit, list[str]]] = {
    "a member that became a date": (
        put("Members", A6=datetime(2026, 2, 1)),
        ["Members!A6: found a date or a time (2026-02-01); expected members named by their two "
         'nodes, such as ["A0-A1", "A1-A2"].'],
    ),
    "a date for a number": (
        put("Nodes", B6=datetime(2026, 3, 4)),
        ["Nodes!B6: found a date or a time (2026-03-04); expected a length, such as \"120 mm\"."],
    ),
    "an error value": (
        put("Loads", D5="#REF!"),
        ["Loads!D5: found the error #REF!; expected a force, such as \"12 kN\"."],
    ),
    "a formula without a value": (
        put("Loads", D5="=-9.6*1.5"),
        ["Loads!D5: found a formula that no spreadsheet program has computed yet; expected a "
         'force, such as "12 kN".'],
    ),
    "a node twice": (
        put("Nodes", A9="A1", B9=1, C9=1),
        ['Nodes!A9: found "A1" for the second time; expected each one once. It stands in Nodes!A6 '
         "already."],
    ),
    "a load twice": (
        put("Loads", A6="snow", B6="B1", C6=0, D6=-1),
        ['Loads!A6: found "B1" for the second time; expected each one once. It stands in Loads!A5 '
         "already."],
    ),
    "a member of an unknown group": (
        put("Members", A10="A0-B1", B10="web"),
        ['Members!A10: found the unknown group "web"; expected one of bottom-chord, webs. Did you '
         'mean "webs"?'],
    ),
    "a load of an unknown case": (
        put("Loads", A5="snwo"),
        ['Loads!A5: found the unknown case "snwo"; expected one of permanent, snow. Did you mean '
         '"snow"?'],
    ),
    "a row without its name": (
        put("Nodes", B9=1, C9=1),
        ["Nodes!A9: found an empty cell; expected the name of a node."],
    ),
    "half a position": (
        put("Nodes", C6=None),
        ["Nodes!C6: found an empty cell; expected a length, such as \"120 mm\"."],
    ),
    "another unit in a head": (
        put("Nodes", C4="y [mm]"),
        ["Nodes!C4: found the unit [mm] in the head; expected [m], the unit of length on the sheet "
         "General. A number in another unit is written with it, such as 120 mm."],
    ),
    "a unit where none belongs": (
        put("Supports", B4="Held directions [m]"),
        ["Supports!B4: found the unit [m] in the head; expected a head without a unit."],
    ),
    "a head that is a slip": (
        put("Deflection limits", D4="Limt"),
        ['Deflection limits!D4: found the unknown head "Limt"; expected one of Name, Nodes, '
         "Direction, Limit, Span, Combinations, Relative to, Component, Precamber. Did you mean "
         '"Limit"?'],
    ),
    "a head twice": (
        put("Nodes", F4="x"),
        ['Nodes!F4: found the head "x" again; expected each head once.'],
    ),
    "no heads": (
        put("Supports", A4="Knot"),
        ["Supports!A1: found no row with the head Node; expected a row of heads: Node, Held "
         "directions."],
    ),
    "a row of General without an item": (
        put("General", A7=None),
        ["General!B7: found a value in a row without an item; expected what it is for, in the "
         "column Item."],
    ),
    "an item that is none": (
        put("General", A7="unit of power"),
        ['General!A7: found the item "unit of power"; expected an item of this sheet or a key such '
         'as gamma_M1. Did you mean "Unit of force"?'],
    ),
    "merged cells": (
        lambda book: book["Members"].merge_cells("B5:B6"),
        ["Members!B5:B6: found merged cells; expected one value in each cell. Split the cells and "
         "repeat the value."],
    ),
    "a value for both planes and one for each": (
        put("Groups", B5=1.0),
        [f"Groups!{cell}: found a value for buckling_length and one inside it; expected each value "
         "once." for cell in ("C5", "D5")],
    ),
    "a factor for a case that is none": (
        put("Combinations", G4="wind", G5=1.5),
        ['Combinations!G5: found the unknown load case "wind"; expected one of permanent, snow.'],
    ),
    "two combinations of one name": (
        put("Combinations", A6="U1"),
        ['Combinations!A5 and Combinations!A6: found combination "U1" for the second time; '
         "expected a name of its own for each combination."],
    ),
    "no kind of action": (
        put("Cases", B6=None),
        ["Cases!B6: found nothing; expected one of permanent, imposed, imposed roof, snow, wind, "
         "temperature, settlement, other."],
    ),
    "an option without a standard": (
        put("Options", C5=None),
        ['Options!C5: found nothing; expected the name of a standard, such as "EN 1993-1-1".'],
    ),
    "sheets of something else": (
        lambda book: [book.remove(book[name]) for name in book.sheetnames[:-1]]
        and setattr(book["Options"], "title", "Sheet1"),
        ["the workbook: found the sheet Sheet1; expected sheets General, Nodes, Supports, Groups, "
         "Members, Cases, Loads, Area loads, Line loads, Point loads, Combinations, Combination "
         "rule, Deflection limits, Options. Convert a brief to see how they look: sizing convert "
         "brief.toml brief.xlsx."],
    ),
    "no nodes at all": (
        lambda book: book.remove(book["Nodes"]),
        ["sheet Nodes: found nothing; expected a table of nodes, such as A0 = [0.0, 0.0]."],
    ),
}  # fmt: skip


@pytest.mark.parametrize("name", DOUBTFUL)
def test_what_is_doubtful_is_told_with_sheet_and_cell(name: str, tmp_path: Path) -> None:
    """One slip gives its own message and no others."""
    edit, messages = DOUBTFUL[name]
    assert told(tmp_path, edit) == messages


def test_sheets_and_cells_that_are_not_read_are_told(tmp_path: Path) -> None:
    """Sheets of one's own, hidden sheets, notes beside the table."""

    def edit(book: Any) -> None:
        book.create_sheet("Sketch")["A1"] = "chord"
        book.create_sheet("Node")["A1"] = "A9"
        book.create_sheet("Empty")
        book["Supports"].sheet_state = "hidden"
        book["Nodes"]["F6"] = "checked on site"

    assert set(read(tmp_path, edit).cautions) == {
        'Sheet "Sketch" is not read.',
        'Sheet "Node" is not read (a brief has a sheet "Nodes").',
        'Sheet "Supports" is hidden; it is read all the same.',
        "Not read, for want of a column head: Nodes!F6.",
    }


def with_computed(path: Path, part: str, formula: bytes, value: bytes) -> None:
    """Put the value into the file that a spreadsheet program would store beside a formula."""
    packed = io.BytesIO()
    with zipfile.ZipFile(path) as old, zipfile.ZipFile(packed, "w") as new:
        for name in old.namelist():
            content = old.read(name)
            if name == part:
                pattern = re.compile(rb"<f>" + re.escape(formula) + rb"</f><v\s*/>")
                content, times = pattern.subn(
                    b"<f>" + formula + b"</f><v>" + value + b"</v>", content
                )
                assert times == 1
            new.writestr(name, content)
    path.write_bytes(packed.getvalue())


def test_formulas_count_with_the_value_computed_last(tmp_path: Path) -> None:
    """Nothing is computed here, and the checking engineer is told."""
    path = edited(tmp_path, put("Loads", D5="=-6.4*1.5"))
    index = openpyxl.load_workbook(path).sheetnames.index("Loads") + 1
    with_computed(path, f"xl/worksheets/sheet{index}.xml", b"-6.4*1.5", b"-9.6")
    brief = read_brief(path)
    assert brief.cases[1].nodal == {3: (0.0, -9600.0)}
    assert brief.cautions == ("1 formula read by the value computed last, in Loads!D5.",)


def test_names_of_digits_are_names(tmp_path: Path) -> None:
    """Nodes called 1, 2, 3 come as numbers from a spreadsheet."""

    def edit(book: Any) -> None:
        for row, name in zip(range(5, 9), (1, 2, 3.0, 4), strict=True):
            book["Nodes"][f"A{row}"] = name
        book["Supports"]["A5"], book["Supports"]["A6"] = 1, 3
        for row, name in enumerate(("1-2", "2-3", "1-4", "4-3", "2-4"), start=5):
            book["Members"][f"A{row}"] = name
        book["Loads"]["B5"] = 4
        book["Deflection limits"]["B5"] = 2

    brief = read(tmp_path, edit)
    assert [node.name for node in brief.nodes] == ["1", "2", "3", "4"]
    assert brief.deflection_limits[0].nodes == (1,)


def test_settings_of_the_standard_and_of_a_rule_have_rows_of_their_own(tmp_path: Path) -> None:
    """A key as the item, with points for a table inside; numbers, words, lists and true."""

    def edit(book: Any) -> None:
        options = book["Options"]
        for row, (key, value) in enumerate(
            [("gamma_M1", 1.1), ("psi.snow", "[0.5, 0.2]"), ("sway", "true"), ("class", '"2"')], 40
        ):
            options[f"A{row}"], options[f"C{row}"] = key, value

    settings = read(tmp_path, edit).options[0].settings
    assert settings == {"gamma_M1": 1.1, "psi": {"snow": [0.5, 0.2]}, "sway": True, "class": "2"}


def test_text_that_looks_like_a_formula_stays_text() -> None:
    """Titles and names beginning with an equals sign are written as text."""
    tables = {"title": "=1+1", "notes": "@SUM(A1)", "nodes": {"=A0": [0, "=2"]}}
    book = openpyxl.load_workbook(io.BytesIO(workbook_bytes(tables)))
    assert all(cell.data_type != "f" for sheet in book for row in sheet.iter_rows() for cell in row)


def test_choices_and_heads_are_laid_out_for_filling_in() -> None:
    """Drop-down lists, heads that stay in sight, notes, text columns that keep 1-2 as it is."""
    book = openpyxl.load_workbook(io.BytesIO(workbook_bytes(SOUND)))
    for sheet in book:
        assert sheet.freeze_panes in ("A5", "B5")
        assert not sheet.merged_cells.ranges
    offered = {
        str(offer.sqref): offer.formula1 for offer in book["Cases"].data_validations.dataValidation
    }
    assert offered["C5:C206"] == '"yes,no"'
    assert offered["B5:B206"] == (
        '"permanent,imposed,imposed roof,snow,wind,temperature,settlement,other"'
    )
    (groups,) = book["Members"].data_validations.dataValidation
    assert (str(groups.sqref), groups.formula1) == ("B5:B209", "Groups!$A$5:$A$204")
    assert book["Members"].column_dimensions["A"].number_format == "@"
    assert book["Nodes"]["B4"].value == "x [m]"
    assert book["Loads"]["D4"].value == "y [kN]"
