"""Documents of a small fixed job stay as they were approved, part by part.

After a wanted change run this file with UPDATE_GOLDEN=1 in the environment, look at the new
documents, and commit the files in ``golden`` with the change.
"""

from __future__ import annotations

import json
import os
import re
from dataclasses import replace
from datetime import date
from io import BytesIO
from pathlib import Path

import openpyxl
import pytest

from sizing.documents.drawing import draw_options, svg_bytes
from sizing.documents.report import report_bytes
from sizing.documents.result_json import json_bytes
from sizing.documents.workbook import workbook_bytes

GOLDEN = Path(__file__).parent / "golden"
ISSUED = date(2026, 3, 1)
FIGURES = 9
"""Figures compared: above rounding of the analysis on any machine, below anything printed."""


@pytest.fixture(scope="module")
def job(make_job):
    """A three-panel girder; the time taken by the search is the volatile field."""
    result = make_job(3)
    options = tuple(replace(option, seconds=0.0) for option in result.options)
    return replace(result, options=options)


def _rounded(value):
    if isinstance(value, float):
        number = float(f"{value:.{FIGURES}g}")
        return 0.0 if abs(number) < 1e-9 else number
    if isinstance(value, dict):
        return {k: _rounded(v) for k, v in value.items()}
    if isinstance(value, list | tuple):
        return [_rounded(v) for v in value]
    return value


def _sheet(sheet):
    """One sheet as plain data: page, and per row the cells with their format."""
    return {
        "page": [
            sheet.freeze_panes, sheet.auto_filter.ref, sheet.print_area, sheet.print_title_rows,
            sheet.page_setup.paperSize, sheet.page_setup.orientation,
            sheet.oddHeader.left.text, sheet.oddFooter.left.text, sheet.oddFooter.right.text,
        ],
        "widths": [d.width for _, d in sorted(sheet.column_dimensions.items())],
        "rows": [
            [[c.value, c.number_format, c.font.b] for c in row if c.value is not None]
            for row in sheet.iter_rows()
        ],
    }  # fmt: skip


def _compare(name: str, text: str) -> None:
    path = GOLDEN / name
    if os.environ.get("UPDATE_GOLDEN"):
        path.write_text(text, encoding="utf-8")
    assert text == path.read_text(encoding="utf-8")


def test_workbook_as_approved(job):
    """Every sheet's cells, formats and page set-up."""
    book = openpyxl.load_workbook(BytesIO(workbook_bytes(job, ISSUED)))
    sheets = {sheet.title: _rounded(_sheet(sheet)) for sheet in book}
    lines = []
    for title, content in sheets.items():
        lines.append(f"== {title}")
        lines.append(json.dumps([content["page"], content["widths"]], ensure_ascii=False))
        lines += [json.dumps(row, ensure_ascii=False) for row in content["rows"]]
    _compare("schedule.txt", "\n".join(lines) + "\n")


def test_drawing_as_approved(job):
    """Every line and label of the drawing."""
    text = svg_bytes(job, draw_options(job)).decode("utf-8")
    _compare("truss.svg", re.sub(r"><(?=g|line|text|polygon|circle)", ">\n<", text))


def test_result_as_approved(job):
    """Every key and number of result.json."""
    document = _rounded(json.loads(json_bytes(job)))
    _compare("result.json", json.dumps(document, ensure_ascii=False, indent=1) + "\n")


def test_report_as_approved(job):
    """Every word of the report, the drawing apart."""
    page = report_bytes(job, ISSUED, draw_options(job)).decode("utf-8")
    _compare("report.html", re.sub(r"<svg.*?</svg>", "<svg/>", page, flags=re.DOTALL))
