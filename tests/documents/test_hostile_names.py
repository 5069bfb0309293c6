"""Names of any kind are shown literally in every document and steer none of them."""

from __future__ import annotations

import csv
import io
import json
import re
import shutil
import subprocess
import zipfile
from datetime import date
from html.parser import HTMLParser

import openpyxl
import pytest
from defusedxml import ElementTree
from rich.console import Console

from sizing.documents.drawing import draw_options, svg_bytes
from sizing.documents.plain_text import visible
from sizing.documents.report import report_bytes
from sizing.documents.result_json import json_bytes
from sizing.documents.screen import print_result
from sizing.documents.workbook import workbook_bytes

ISSUED = date(2026, 3, 1)
SOFFICE = shutil.which("soffice")


@pytest.fixture(scope="module")
def workbook(hostile_job):
    return workbook_bytes(hostile_job, ISSUED)


def test_control_and_direction_characters_become_visible():
    """What cannot be seen is shown by a sign; letters of every script stay."""
    assert visible("a\nb\x00c\x7f") == "a␊b␀c␡"
    assert visible("exe\u202egnp") == "exe<U+202E>gnp"
    assert visible("שלום 🏗️ é") == "שלום 🏗️ é"
    assert visible("\ud800\ufffe") == "\ufffd\ufffd"
    assert visible("x" * 40_000).endswith("… (shortened)")


def test_workbook_holds_names_as_text(workbook, hostile_names):
    """Names are string cells, letter for letter, also where they look like formulas."""
    book = openpyxl.load_workbook(io.BytesIO(workbook))
    cells = [c for sheet in book for row in sheet.iter_rows() for c in row if c.value is not None]
    texts = {c.value for c in cells if c.data_type == "s"}
    assert not [c for c in cells if c.data_type == "e"]
    formulas = [c for c in cells if c.data_type == "f"]
    assert {c.parent.title.split(" ")[0] for c in formulas} == {"Recheck"}
    assert all(re.fullmatch(r"=[A-Z0-9.()*/+^-]+", c.value) for c in formulas)
    for name in hostile_names:
        shown = visible(name).replace("_x0041_", "_x005F_x0041_")  # escaped as ISO/IEC 29500 asks
        assert shown in texts
    with zipfile.ZipFile(io.BytesIO(workbook)) as parts:
        for part in parts.namelist():
            ElementTree.fromstring(parts.read(part))


@pytest.mark.skipif(SOFFICE is None, reason="soffice is not on this machine")
def test_another_program_reads_the_same_names(workbook, hostile_names, tmp_path):
    """A second, unrelated reader of the workbook shows every name as it was given."""
    (tmp_path / "s.xlsx").write_bytes(workbook)
    every_sheet = "csv:Text - txt - csv (StarCalc):44,34,76,1,,0,false,true,false,false,false,-1"
    subprocess.run(
        [SOFFICE, f"-env:UserInstallation=file://{tmp_path}/profile", "--headless",
         "--convert-to", every_sheet, "--outdir", str(tmp_path), str(tmp_path / "s.xlsx")],
        check=True, capture_output=True, timeout=120,
    )  # fmt: skip
    found = {
        cell
        for path in tmp_path.glob("s-Nodes*.csv")
        for row in csv.reader(io.StringIO(path.read_text(encoding="utf-8")))
        for cell in row
    }
    assert {visible(name) for name in hostile_names} <= found


class _Page(HTMLParser):
    """Collects text and tags of a page."""

    def __init__(self) -> None:
        super().__init__()
        self.words: list[str] = []
        self.tags: set[str] = set()
        self.links: set[str] = set()
        self.handlers: set[str] = set()

    def handle_starttag(self, tag, attributes):
        self.tags.add(tag)
        for name, value in attributes:
            if name in ("href", "src"):
                self.links.add(value or "")
            if name.startswith("on"):
                self.handlers.add(name)

    def handle_data(self, data):
        self.words.append(data)


def test_report_shows_names_and_runs_nothing_of_theirs(hostile_job, hostile_names):
    """The one script is the page's own; no event handler, no outside link, every name as text."""
    page = _Page()
    content = report_bytes(hostile_job, ISSUED, draw_options(hostile_job)).decode("utf-8")
    page.feed(content)
    assert content.count("<script>") == 1
    assert content.count("<script") == 1 + len(hostile_job.options)  # and data, not run
    assert "default-src 'none'" in content
    assert not page.tags & {"iframe", "img", "link", "object", "form"}
    assert not page.handlers
    assert all(link.startswith("#") for link in page.links)
    words = set(page.words)
    for name in hostile_names:
        assert visible(name) in words


def test_drawing_shows_names_as_text(hostile_job, hostile_names):
    """The drawing parses, holds no script, and carries every node's name, long ones on pointing."""
    root = ElementTree.fromstring(svg_bytes(hostile_job, draw_options(hostile_job)))
    tags = {element.tag.rsplit("}", 1)[-1] for element in root.iter()}
    assert tags <= {"svg", "g", "line", "text", "tspan", "title", "desc", "rect", "polygon",
                    "circle"}  # fmt: skip
    words = {element.text for element in root.iter() if element.text}
    for name in hostile_names:
        assert visible(name) in words


def test_result_file_keeps_names_exactly(hostile_job, hostile_names):
    """Scripts read back exactly the names of the brief."""
    document = json.loads(json_bytes(hostile_job))
    assert set(document["nodes"]) == set(hostile_names)
    assert set(document["options"]) == set(hostile_names[:8])


@pytest.mark.parametrize("encoding", ["utf-8", "ascii", "cp1252"])
def test_screen_prints_names_in_any_encoding(hostile_job, encoding):
    """No name is read as markup, and no screen is too poor for the answer."""
    raw = io.BytesIO()
    stream = io.TextIOWrapper(raw, encoding=encoding)
    print_result(hostile_job, Console(file=stream, width=80))
    stream.flush()
    text = raw.getvalue().decode(encoding)
    assert "<script>alert(1)</script>" in text
    assert "\x1b" not in text
    assert "\x07" not in text
    assert all(len(line) <= 80 for line in text.splitlines() if line.isascii())
