"""The sheet Recheck, worked by an unrelated spreadsheet program, agrees with the tool."""

from __future__ import annotations

import io
import math
import shutil
import subprocess
from dataclasses import replace
from datetime import date
from pathlib import Path

import openpyxl
import pytest

from sizing.brief.toml_reader import read_brief
from sizing.documents.recheck import SENSES, recheck_blocks, sheet_units
from sizing.documents.workbook import workbook_bytes
from sizing.job import pick_job
from sizing.selection.outcome import Limits

SOFFICE = shutil.which("soffice")
ISSUED = date(2026, 3, 1)
AGREEMENT = 1e-6
EXAMPLES = Path(__file__).parents[2] / "examples"

ELASTIC = """
[options.plain]
standard = "elastic"
catalogue = "square-hollow-sections"
E = "210 GPa"
density = "7850 kg/m3"
allowable_tension = "160 N/mm2"
allowable_compression = "140 N/mm2"
buckling_safety_factor = 2.5
"""


def job_of(name, folder):
    """Return a job with short searches: any adequate design serves here."""
    text = (EXAMPLES / f"{name}.toml").read_text(encoding="utf-8")
    path = folder / f"{name}.toml"
    path.write_text(text + (ELASTIC if name == "market-hall" else ""), encoding="utf-8")
    return pick_job(read_brief(path), limits=lambda _: Limits(seconds=5.0))


@pytest.fixture(
    scope="module", params=["market-hall", "village-hall-steel-timber", "village-hall-us"]
)
def job(request, tmp_path_factory):
    """EN 1993 and elastic; EN 1993 and EN 1995; AISC 360 and NDS."""
    return job_of(request.param, tmp_path_factory.mktemp("job"))


def recalculated(book, folder):
    """Return ``book``, saved without any value beside its formulas, as another program works it."""
    folder.mkdir(exist_ok=True)
    book.save(folder / "in.xlsx")
    subprocess.run(
        [SOFFICE, f"-env:UserInstallation=file://{folder}/profile", "--headless", "--convert-to",
         "xlsx:Calc MS Excel 2007 XML", "--outdir", str(folder / "out"), str(folder / "in.xlsx")],
        check=True, capture_output=True, timeout=300,
    )  # fmt: skip
    return openpyxl.load_workbook(folder / "out" / "in.xlsx", data_only=True)


@pytest.mark.skipif(SOFFICE is None, reason="soffice is not on this machine")
def test_live_formulas_agree_with_the_tool(job, tmp_path):
    """No error cell; each formula gives what stands in the file; both differences are nought."""
    content = workbook_bytes(job, ISSUED)
    formulas = openpyxl.load_workbook(io.BytesIO(content))
    given = openpyxl.load_workbook(io.BytesIO(content), data_only=True)
    worked = recalculated(formulas, tmp_path)
    count = 0
    for sheet in formulas:
        for cell in (c for row in sheet.iter_rows() for c in row):
            value = worked[sheet.title][cell.coordinate].value
            assert not str(value).startswith("#"), (sheet.title, cell.coordinate)
            if cell.data_type == "f":
                count += 1
                expected = given[sheet.title][cell.coordinate].value
                assert math.isclose(value, expected, rel_tol=AGREEMENT, abs_tol=AGREEMENT)
    assert count > 500
    for option in job.options:
        title = "Recheck" if len(job.options) == 1 else f"Recheck {option.option}"
        assert_every_check_agrees(worked[title[:31]], option)


def assert_every_check_agrees(sheet, option):
    """Compare resistance and utilisation of each sense of each member with the result."""
    rows = [[c.value for c in row] for row in sheet.iter_rows()]
    starts = [i for i, row in enumerate(rows) if str(row[0]).startswith("Governing ")]
    found = {}
    for start, end in zip(starts, [*starts[1:], len(rows)], strict=True):
        sense = rows[start][0].split(" ")[1].rstrip(":")
        for row in rows[start + 3 : end]:
            if row[0] is not None:
                cells = [value for value in row if value is not None]
                found[row[0], sense] = cells[-6:]
    expected = {
        (m.mark, sense): extreme
        for sense in SENSES
        for m in option.members
        if (extreme := getattr(m, sense)) is not None
    }
    assert set(found) == set(expected)
    for key, (resistance, tool, apart, use, tool_use, use_apart) in found.items():
        extreme = expected[key]
        assert math.isclose(resistance, tool, rel_tol=AGREEMENT)
        assert math.isclose(use, extreme.utilisation, rel_tol=AGREEMENT)
        assert math.isclose(tool_use, extreme.utilisation, rel_tol=1e-12)
        assert abs(apart) < AGREEMENT
        assert abs(use_apart) < AGREEMENT


@pytest.mark.skipif(SOFFICE is None, reason="soffice is not on this machine")
def test_the_recheck_is_alive(girder_job, tmp_path):
    """A force doubled and a yield strength halved in the sheet show in utilisations at once."""
    book = openpyxl.load_workbook(io.BytesIO(workbook_bytes(girder_job, ISSUED)))
    sheet = book["Recheck"]
    heads = next(r for r in sheet.iter_rows() if r[0].value == "Mark")
    at = {str(c.value).split("\n")[0]: c.column for c in heads}
    row = heads[0].row + 2
    before = next(e for m in girder_job.options[0].members if (e := m.tension)).utilisation
    for head, share in (("Force", 2.0), ("f_y", 0.5)):
        cell = sheet.cell(row=row, column=at[head])
        cell.value = cell.value * share
    worked = recalculated(book, tmp_path)["Recheck"]
    use = worked.cell(row=row, column=at["Utilisation"]).value
    assert use == pytest.approx(4.0 * before, rel=1e-9)
    assert worked.cell(row=row, column=at["Difference"]).value == pytest.approx(3.0, rel=1e-9)


def test_units_of_the_sheet_are_one_system():
    """Stress is force over length squared, to the last digit, in both systems."""
    for us in (False, True):
        units = sheet_units(us=us)
        assert units.scale("Pa") == units.scale("N") / units.scale("m") ** 2
        assert units.scale("-") == 1.0
    assert sheet_units(us=False).scale("Pa") == pytest.approx(1e-6)
    assert sheet_units(us=True).scale("Pa") == pytest.approx(1 / 6894757.293168)  # ksi, NIST SP 811


def test_checks_of_one_form_share_a_block(girder_job):
    """One block per sense where every member is checked by the same formulas."""
    blocks = recheck_blocks(girder_job.brief, girder_job.options[0])
    assert [block.sense for block in blocks] == ["tension", "compression"]
    members = girder_job.options[0].members
    assert len(blocks[0].rows) == sum(m.tension is not None for m in members)
    assert len(blocks[1].rows) == sum(m.compression is not None for m in members)


def test_heads_hold_for_every_row_below(girder_job):
    """Where members differ in an entry's origin, the head does not quote the first one's."""
    option = girder_job.options[0]
    first = next(i for i, m in enumerate(option.members) if m.tension)
    member = option.members[first]
    steps = tuple(
        replace(line, meaning="of another tube") if line.symbol == "A" else line
        for line in member.tension.steps
    )
    odd = replace(member, tension=replace(member.tension, steps=steps))
    members = (*option.members[:first], odd, *option.members[first + 1 :])
    blocks = recheck_blocks(girder_job.brief, replace(option, members=members))
    assert len(blocks) == 2
    assert [line.meaning for line in blocks[0].lines][:2] == ["", "yield strength"]
