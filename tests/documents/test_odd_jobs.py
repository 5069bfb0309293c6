"""Documents hold for odd jobs: priced, without answer, degenerate shapes, missing numbers."""

from __future__ import annotations

import io
import json
import math
import shutil
import subprocess
from dataclasses import replace
from datetime import date

import openpyxl
import pytest
from rich.console import Console

from sizing.documents.force_tables import deflections_table
from sizing.documents.issue import render_documents
from sizing.documents.option_tables import restraint_table
from sizing.documents.quantities import shown_units
from sizing.documents.screen import print_result
from sizing.documents.summary_table import summary_table
from sizing.documents.view_drawing import PLAN
from sizing.results import JobResult

ISSUED = date(2026, 3, 1)


def _with_option(job: JobResult, **changes) -> JobResult:
    return replace(job, options=(replace(job.options[0], **changes), *job.options[1:]))


def _summary(job):
    table = summary_table(job, shown_units(job.brief.units))
    return [c.head for c in table.columns], table


def test_cost_and_carbon_stand_in_the_summary_only_with_rates(girder_job):
    """Rates in the brief bring columns with currency and kgCO2e; without rates there are none."""
    heads, _ = _summary(girder_job)
    assert "Cost" not in heads
    priced = _with_option(
        girder_job, cost=4321.5, currency="EUR", carbon=3210.0, biogenic=-900.0, volume=0.25
    )
    priced = replace(priced, brief=replace(priced.brief, minimise="cost"))
    heads, table = _summary(priced)
    row = dict(zip(heads, table.rows[0], strict=True))
    assert (row["Cost"], row["Carbon A1 to A3"], row["Biogenic carbon, apart"]) == (
        4321.5, 3210.0, -900.0,
    )  # fmt: skip
    units = {c.head: c.unit for c in table.columns}
    assert units["Cost"] == units["Total minimised"] == "EUR"
    answer = json.loads(render_documents(priced, ISSUED)["result.json"])["options"]["steel"]
    assert answer["cost"] == 4321.5
    assert answer["bound_kg"] is None


def test_an_option_without_answer_is_told_everywhere(girder_job):
    """The reason stands on cover, summary, screen and in the result file."""
    reason = "no section of the catalogue carries member T4 in U1"
    job = replace(girder_job, without_answer=(("timber", reason),))
    documents = render_documents(job, ISSUED)
    assert json.loads(documents["result.json"])["without_answer"] == {"timber": reason}
    assert reason in documents["report.html"].decode()
    book = openpyxl.load_workbook(io.BytesIO(documents["schedule.xlsx"]))
    for name in ("Cover", "Summary"):
        assert any(reason in str(c.value) for row in book[name].iter_rows() for c in row)
    stream = io.StringIO()
    print_result(job, Console(file=stream, width=200))
    assert f"Option timber: no answer. {reason}" in stream.getvalue()


def test_missing_numbers_leave_words(girder_job):
    """No bound, no gap, no resistance, no deflection limit, no surface: words, not errors."""
    option = girder_job.options[0]
    failing = replace(option.members[0], utilisation=math.inf)
    bare = _with_option(
        girder_job,
        status="checked",
        bound=None,
        gap=None,
        adequate=False,
        deflections=(),
        lighter=(),
        worked=(),
        left_out=(),
        cautions=(),
        members=(failing, *option.members[1:]),
        groups=(replace(option.groups[0], utilisation=math.inf), *option.groups[1:]),
        sections=tuple(replace(s, surface=math.nan) for s in option.sections),
    )
    documents = render_documents(bare, ISSUED)
    book = openpyxl.load_workbook(io.BytesIO(documents["schedule.xlsx"]))
    words = {c.value for sheet in book for row in sheet.iter_rows() for c in row}
    assert {"no resistance", "not given", "none", "unknown", "no limit set"} <= words
    assert "No deflection limit is set in the brief: deflection is not checked." in words
    assert "nan" not in documents["report.html"].decode().lower().split()
    stream = io.StringIO()
    print_result(bare, Console(file=stream, width=80))
    assert "none NO" in stream.getvalue()
    assert "given sections, checked" in stream.getvalue()


@pytest.mark.parametrize("flat", [(1, 1, 0), (0, 1, 1), (0, 0, 1)])
def test_flat_and_straight_shapes_are_drawn(tower_job, flat):
    """A plane or straight arrangement in space still gives a drawing with finite numbers."""
    brief = tower_job.brief
    nodes = tuple(
        replace(n, position=tuple(p * f for p, f in zip(n.position, flat, strict=True)))
        for n in brief.nodes
    )
    svg = render_documents(replace(tower_job, brief=replace(brief, nodes=nodes)), ISSUED)[
        "truss.svg"
    ].decode()
    assert "nan" not in svg
    assert "inf" not in svg
    assert PLAN == (0, 1)


def test_limits_say_which_movement_they_hold_for(girder_job):
    """Final, cambered and relative movements are told apart from the elastic one."""
    option, units = girder_job.options[0], shown_units(girder_job.brief.units)
    limit = girder_job.brief.deflection_limits[0]
    for changes, text in (
        ({}, "elastic"),
        ({"component": "final"}, "final, with creep"),
        ({"component": "net final"}, "final, less precamber"),
        ({"relative_to": 0}, "elastic; relative to A0"),
    ):
        brief = replace(girder_job.brief, deflection_limits=(replace(limit, **changes),))
        assert deflections_table(brief, option, units).rows[0][3] == text


def test_restrained_nodes_are_named(girder_job):
    """Where the brief lists the held nodes, the restraint schedule names them."""
    group = replace(girder_job.brief.groups[0], restrained_nodes=(9, 11, 13))
    brief = replace(girder_job.brief, groups=(group, *girder_job.brief.groups[1:]))
    table = restraint_table(brief, girder_job.options[0], shown_units(brief.units))
    assert table.rows[0][-1] == "B0, B2, B4"
    assert table.rows[-1][-1] == "not listed"


def test_inputs_are_left_alone(girder_job):
    """Rendering alters no record."""
    before = repr(girder_job)
    render_documents(girder_job, ISSUED)
    assert repr(girder_job) == before


@pytest.mark.skipif(
    not (shutil.which("soffice") and shutil.which("pdftotext")),
    reason="soffice or pdftotext is not on this machine",
)
def test_printed_pages_are_numbered_and_headed(girder_job, tmp_path):
    """Printed by another program: page n of N on every page, heads on every member page."""
    (tmp_path / "s.xlsx").write_bytes(render_documents(girder_job, ISSUED)["schedule.xlsx"])
    soffice, pdftotext = shutil.which("soffice"), shutil.which("pdftotext")
    subprocess.run(
        [soffice, f"-env:UserInstallation=file://{tmp_path}/profile", "--headless",
         "--convert-to", "pdf", "--outdir", str(tmp_path), str(tmp_path / "s.xlsx")],
        check=True, capture_output=True, timeout=120,
    )  # fmt: skip
    run = subprocess.run(
        [pdftotext, "-layout", str(tmp_path / "s.pdf"), "-"],
        check=True, capture_output=True, timeout=60,
    )  # fmt: skip
    pages = run.stdout.decode().split("\f")[:-1]
    for number, page in enumerate(pages, 1):
        assert f"Page {number} of {len(pages)}" in page
        assert "girder.toml" in page
    joints = [page for page in pages if "for the design of joints" in page]
    assert len(joints) >= 2
    assert all("To node" in page for page in joints)
