"""Files that are traps are refused with a message: nothing hangs, nothing is read by stealth."""

from __future__ import annotations

import io
import os
import zipfile
from collections.abc import Callable
from pathlib import Path

import openpyxl
import pytest

from sizing.brief.catalogue_reader import read_catalogue, shipped_folder
from sizing.brief.model import SourceFile
from sizing.brief.toml_reader import read_brief
from sizing.brief.workbook_file import read_grids
from sizing.errors import InputError

SOUND = (Path(__file__).parent / "broken" / "sound.toml").read_text(encoding="utf-8")
SHS = (shipped_folder() / "square-hollow-sections.csv").read_bytes()


def refused(read: Callable[[], object]) -> str:
    with pytest.raises(InputError) as refusal:
        read()
    return str(refusal.value)


def workbook(parts: dict[str, bytes] | None = None, *, without: str = "") -> bytes:
    """A small workbook, with parts put in its archive besides or instead."""
    book = openpyxl.Workbook()
    book.active.append(["Item", "Value"])
    stream = io.BytesIO()
    book.save(stream)
    packed = io.BytesIO()
    parts = parts or {}
    with zipfile.ZipFile(stream) as old, zipfile.ZipFile(packed, "w", zipfile.ZIP_DEFLATED) as new:
        for name in old.namelist():
            if name != without and name not in parts:
                new.writestr(name, old.read(name))
        for name, content in parts.items():
            new.writestr(name, content)
    return packed.getvalue()


@pytest.mark.parametrize("name", ["brief.toml", "brief.xlsx"])
@pytest.mark.parametrize(
    ("make", "words"),
    [(lambda p: p.mkdir(), "a folder"), (os.mkfifo, "a pipe")],
    ids=["folder", "pipe"],
)
def test_what_is_no_file_is_not_waited_for(
    name: str, make: Callable[[Path], None], words: str, tmp_path: Path
) -> None:
    """A folder and a pipe in the place of a brief."""
    path = tmp_path / name
    make(path)
    assert refused(lambda: read_brief(path)) == (
        f"{path}: the file: found {words}; expected a file."
    )


def test_devices_are_not_read() -> None:
    """A device gives bytes without end."""
    zero = Path("/dev/zero")
    assert refused(lambda: read_brief(zero)) == (
        "/dev/zero: the file: found a device; expected a file."
    )
    assert refused(lambda: read_catalogue("/dev/zero", Path())) == (
        "/dev/zero: file: found a device; expected a text table (CSV)."
    )


def test_a_catalogue_that_is_a_pipe_or_a_folder_is_told(tmp_path: Path) -> None:
    """The same for catalogues."""
    os.mkfifo(tmp_path / "stock.csv")
    assert refused(lambda: read_catalogue("stock.csv", tmp_path)) == (
        "stock.csv: file: found a pipe; expected a text table (CSV)."
    )
    (tmp_path / "folder.csv").mkdir()
    assert refused(lambda: read_catalogue("folder.csv", tmp_path)) == (
        "folder.csv: file: found a folder; expected a text table (CSV)."
    )


def test_links_that_lead_elsewhere_are_told(tmp_path: Path) -> None:
    """A job folder from elsewhere cannot show what lies outside it."""
    secret = tmp_path / "secret.txt"
    secret.write_text("not for you = 1", encoding="utf-8")
    job = tmp_path / "job"
    job.mkdir()
    (job / "brief.toml").symlink_to(secret)
    (job / "stock.csv").symlink_to("../secret.txt")
    (job / "lists").symlink_to(tmp_path)
    path = job / "brief.toml"
    where = secret.resolve()
    advice = "Copy the file there, or name the file itself."
    assert refused(lambda: read_brief(path)) == (
        f"{path}: the file: found a link brief.toml that leads to {where}; expected a file, or a "
        f"link inside its own folder. {advice}"
    )
    assert refused(lambda: read_catalogue("stock.csv", job)) == (
        f"stock.csv: file: found a link stock.csv that leads to {where}; expected a file, or a "
        f"link inside its own folder. {advice}"
    )
    assert refused(lambda: read_catalogue("lists/secret.txt", job)) == (
        f"lists/secret.txt: file: found a link lists that leads to {tmp_path.resolve()}; expected "
        f"a file, or a link inside its own folder. {advice}"
    )


def test_links_inside_the_folder_and_paths_as_written_are_followed(tmp_path: Path) -> None:
    """The user's own words count: ``..`` and a link to the next file are read."""
    (tmp_path / "stock.csv").write_bytes(SHS)
    job = tmp_path / "job"
    job.mkdir()
    (job / "own.csv").write_bytes(SHS)
    (job / "list.csv").symlink_to("own.csv")
    for name in ("../stock.csv", "list.csv", str(tmp_path / "stock.csv")):
        assert len(read_catalogue(name, job)) == 87


def test_a_ring_of_links_is_told(tmp_path: Path) -> None:
    """A link to itself is an error, not a traceback."""
    path = tmp_path / "brief.toml"
    path.symlink_to("brief.toml")
    assert refused(lambda: read_brief(path)).startswith(
        f"{path}: the file: found a file that cannot be opened ("
    )


@pytest.mark.parametrize("name", ["", "~nobody-of-this-name/stock.csv", "a\x00b", "x" * 5000])
def test_names_that_are_none_are_told(name: str, tmp_path: Path) -> None:
    """An empty name, somebody's folder, a zero byte, a name too long for the disk."""
    assert "found no shipped catalogue of this name" in refused(
        lambda: read_catalogue(name, tmp_path)
    )


def test_a_file_that_may_not_be_read_is_told(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    """Missing permission is a message."""
    path = tmp_path / "brief.toml"
    path.write_text(SOUND, encoding="utf-8")

    def forbid(*_: object) -> int:
        raise PermissionError(13, "Permission denied")

    monkeypatch.setattr("sizing.brief.plain_files.os.open", forbid)
    assert refused(lambda: read_brief(path)) == (
        f"{path}: the file: found a file that cannot be opened (Permission denied); expected a "
        "file."
    )


def test_files_beyond_all_size_are_not_read(tmp_path: Path) -> None:
    """Six mebibytes are no brief and no catalogue, whatever they hold."""
    for name in ("brief.toml", "brief.xlsx", "stock.csv"):
        path = tmp_path / name
        with path.open("wb") as stream:
            stream.truncate(6 * 1024 * 1024)
    limit = "found more than 5 MiB; expected at most 5 MiB."
    for name in ("brief.toml", "brief.xlsx"):
        path = tmp_path / name
        assert refused(lambda path=path: read_brief(path)) == f"{path}: the file: {limit}"
    assert refused(lambda: read_catalogue("stock.csv", tmp_path)) == f"stock.csv: file: {limit}"


@pytest.mark.parametrize("suffix", [".xls", ".ods", ".xlsm", ".txt", ""])
def test_files_of_another_kind_are_refused_by_name(suffix: str, tmp_path: Path) -> None:
    """Only .toml and .xlsx are briefs."""
    path = tmp_path / f"brief{suffix}"
    path.write_text(SOUND, encoding="utf-8")
    found = f'a name that ends in "{suffix}"' if suffix else "no ending"
    fix = "" if suffix in ("", ".txt") else " Save it as .xlsx."
    assert refused(lambda: read_brief(path)) == (
        f"{path}: the file: found {found}; expected a brief, a file .toml or .xlsx.{fix}"
    )


ENTITIES = (
    b'<?xml version="1.0"?><!DOCTYPE x [<!ENTITY a "aaaaaaaaaa">'
    b'<!ENTITY b "&a;&a;&a;&a;&a;&a;&a;&a;">]><x>&b;</x>'
)
"""Entities that hold each other grow without end; two are enough to show them refused."""

TRAPS = {
    "entities": (
        workbook({"xl/workbook.xml": ENTITIES}),
        "found a document type or an entity in the part 'xl/workbook.xml'; expected plain XML, as "
        "workbooks have it",
    ),
    "entities in UTF-16": (
        workbook({"xl/styles.xml": ENTITIES.decode().encode("utf-16")}),
        "found a document type or an entity in the part 'xl/styles.xml'; expected plain XML, as "
        "workbooks have it",
    ),
    "packed out of proportion": (
        workbook({"xl/media/image.bin": b"\x00" * (8 * 1024 * 1024)}),
        "found the part 'xl/media/image.bin', packed out of all proportion; expected a part that "
        "unpacks to at most 200 times its size",
    ),
    "large unpacked": (
        workbook({"xl/media/image.bin": os.urandom(17) + b"\x00" * (17 * 1024 * 1024)}),
        "found a workbook of 17 MiB unpacked; expected at most 10 MiB",
    ),
    "an archive inside": (
        workbook({"xl/embeddings/more.xlsx": b"PK"}),
        "found the archive 'xl/embeddings/more.xlsx' inside the workbook; expected sheets only",
    ),
    "a place outside": (
        workbook({"../../outside.xml": b"<x/>"}),
        "found the part '../../outside.xml', which names a place outside; expected an .xlsx "
        "workbook",
    ),
    "very many parts": (
        workbook({f"xl/p{i}.xml": b"<x/>" for i in range(600)}),
        "found a workbook of 609 parts; expected at most 500",
    ),
    "no workbook inside": (
        workbook(without="xl/workbook.xml"),
        "found a damaged or foreign workbook (KeyError); expected an .xlsx workbook",
    ),
    "no archive": (
        b"Item;Value",
        "found a damaged or foreign workbook (BadZipFile); expected an .xlsx workbook",
    ),
}


@pytest.mark.parametrize("trap", TRAPS)
def test_traps_in_a_workbook_are_refused(trap: str, tmp_path: Path) -> None:
    """Entities, archives that unpack to much, archives inside archives, parts from outside."""
    data, told = TRAPS[trap]
    path = tmp_path / "brief.xlsx"
    path.write_bytes(data)
    assert refused(lambda: read_brief(path)) == f"{path}: the file: {told}."
    (tmp_path / "stock.xlsx").write_bytes(data)
    refused(lambda: read_catalogue("stock.xlsx", tmp_path))


def test_the_library_itself_refuses_entities(monkeypatch: pytest.MonkeyPatch) -> None:
    """Behind the look into the archive stands defusedxml, which openpyxl uses."""
    monkeypatch.setattr("sizing.brief.archives._refuse_declarations", lambda *_: None)
    assert openpyxl.DEFUSEDXML
    for part in ("xl/workbook.xml", "xl/worksheets/sheet1.xml", "xl/styles.xml"):
        told = refused(lambda part=part: read_grids(workbook({part: ENTITIES}), "brief.xlsx"))
        assert told.startswith("brief.xlsx: the file: found a damaged or foreign workbook (")


SHEET = (
    b'<worksheet xmlns="http://schemas.openxmlformats.org/spreadsheetml/2006/main">%s</worksheet>'
)
ODD_SHEETS = {
    "one cell a million rows down": (
        b'<sheetData><row r="1048576"><c r="A1048576"><v>1</v></c></row></sheetData>',
        "found a sheet of 1048576 rows and 1 columns; expected at most 20000 rows, 1000 columns "
        "and 3000000 cells",
    ),
    "one cell far down and one far right": (
        b'<sheetData><row r="1"><c r="ALL1"><v>1</v></c></row>'
        b'<row r="19999"><c r="A19999"><v>1</v></c></row></sheetData>',
        "found a sheet of 19999 rows and 1000 columns; expected at most 20000 rows, 1000 columns "
        "and 3000000 cells",
    ),
    "a row twice": (
        b'<sheetData><row r="2"/><row r="2"/></sheetData>',
        "found row 2 after row 2; expected rows in their order",
    ),
    "a cell twice": (
        b'<sheetData><row r="2"><c r="B2"><v>1</v></c><c r="B2"><v>2</v></c></row></sheetData>',
        "found cell B2 out of its order; expected cells in their order",
    ),
}


@pytest.mark.parametrize("name", ODD_SHEETS)
def test_sheets_made_to_waste_time_or_to_hide_rows_are_refused(name: str) -> None:
    """Cells in places that no brief has, rows that a reader would pass over."""
    content, told = ODD_SHEETS[name]
    data = workbook({"xl/worksheets/sheet1.xml": SHEET % content})
    assert refused(lambda: read_grids(data, "brief.xlsx")) == f"brief.xlsx: the file: {told}."


def test_a_merged_field_of_the_whole_sheet_costs_nothing() -> None:
    """Merged cells are named by their range, not cell by cell."""
    content = (
        b'<sheetData><row r="1"><c r="A1"><v>1</v></c></row></sheetData>'
        b'<mergeCells><mergeCell ref="A1:XFD1048576"/></mergeCells>'
    )
    (grid,) = read_grids(workbook({"xl/worksheets/sheet1.xml": SHEET % content}), "brief.xlsx")
    assert grid.merged == (("A1:XFD1048576", 1048576),)
    assert dict(grid.cells) == {(1, 1): 1}


def test_nothing_outside_is_asked_for(tmp_path: Path) -> None:
    """The source record names the file that was read and nothing else."""
    path = tmp_path / "brief.toml"
    path.write_text(SOUND, encoding="utf-8")
    source = read_brief(path).source
    assert isinstance(source, SourceFile)
    assert source.path == path.resolve()
