"""What changed since an earlier issue is told by name: all of it, and nothing else."""

from __future__ import annotations

import io
import json
from dataclasses import replace
from datetime import date

import openpyxl
import pytest

from sizing.documents.changes import changes_lines, changes_table, read_previous
from sizing.documents.drawing import draw_options
from sizing.documents.issue import write_documents
from sizing.documents.report import report_bytes
from sizing.documents.result_json import json_bytes
from sizing.documents.workbook import workbook_bytes
from sizing.errors import InputError

ISSUED = date(2026, 3, 1)


@pytest.fixture
def previous(girder_job, tmp_path):
    path = tmp_path / "result.json"
    path.write_bytes(json_bytes(girder_job))
    return read_previous(path)


def changed(job):
    """The same girder with another top chord, a turned check, and one reaction moved."""
    option = job.options[0]
    members = tuple(
        replace(m, designation="SHS 180x180x8", governing_combination="U9")
        if m.group == "top chord"
        else m
        for m in option.members
    )
    groups = tuple(
        replace(g, designation="SHS 180x180x8") if g.name == "top chord" else g
        for g in option.groups
    )
    first = option.reactions[0]
    moved = replace(first, components=(first.components[0], first.components[1] + 1000.0))
    return replace(
        job,
        options=(
            replace(
                option, members=members, groups=groups, mass=option.mass + 100.0,
                reactions=(moved, *option.reactions[1:]),
            ),
        ),
    )  # fmt: skip


def test_the_same_result_has_no_changes(girder_job, previous):
    """Not one row, and words that say so."""
    table = changes_table(previous, girder_job)
    assert table.rows == ()
    assert "Nothing of it changed." in table.notes[1]
    assert changes_lines(previous, girder_job) == ["no changes since result.json"]


def test_order_is_no_change(girder_job, previous):
    """Members, groups and reactions in another order are the same."""
    option = girder_job.options[0]
    turned = replace(option, members=option.members[::-1], reactions=option.reactions[::-1])
    assert changes_table(previous, replace(girder_job, options=(turned,))).rows == ()


def test_every_change_is_told_once(girder_job, previous):
    """Sections, mass, governing checks and the reaction that differs, before and now."""
    rows = changes_table(previous, changed(girder_job)).rows
    told = [(row[1], row[2]) for row in rows]
    assert told.count(("mass of members", "")) == 1
    assert told.count(("section", "group top chord")) == 1
    chords = [m for m in girder_job.options[0].members if m.group == "top chord"]
    for member in chords:
        assert told.count(("section", f"{member.mark} ({member.name})")) == 1
        assert told.count(("governing check", f"{member.mark} ({member.name})")) == 1
    reactions = [row for row in rows if str(row[1]).startswith("reaction")]
    assert len(reactions) == 1
    assert reactions[0][1:3] == ("reaction y", "A0, combination U1")
    assert str(reactions[0][5]).startswith("+1.0 kN")
    assert len(rows) == 3 + 2 * len(chords)


def test_documents_carry_the_changes(girder_job, previous, tmp_path):
    """A sheet and a section of the report, only where an earlier result is given."""
    job = changed(girder_job)
    book = openpyxl.load_workbook(io.BytesIO(workbook_bytes(job, ISSUED, previous)))
    assert book.sheetnames[:3] == ["Cover", "Summary", "Changes"]
    page = report_bytes(job, ISSUED, draw_options(job), previous).decode("utf-8")
    assert "What changed since the earlier issue" in page
    assert "SHS 150x150x8" in page
    without = report_bytes(job, ISSUED, draw_options(job)).decode("utf-8")
    assert "What changed since" not in without
    paths = write_documents(job, tmp_path / "new", issued=ISSUED, previous=previous)
    assert (tmp_path / "new" / "result.json") in paths


def test_options_and_members_come_and_go(tower_job, previous, tmp_path):
    """What stands on one side only is named with the side it is missing on."""
    path = tmp_path / "tower.json"
    path.write_bytes(json_bytes(tower_job))
    one = replace(tower_job, options=tower_job.options[:1])
    assert changes_table(read_previous(path), one).rows == (
        ("tube two", "option", "", "answered", "not there", ""),
    )
    rows = changes_table(previous, tower_job).rows
    assert ("tube", "option", "", "not there", "answered", "") in rows


@pytest.mark.parametrize(
    ("content", "found"),
    [
        (None, "no such file"),
        (b"\xff\xfe", "no JSON"),
        (b"[" * 5000, "no JSON"),
        (b"[]", "another kind of file"),
        (b'{"format": {"name": "sizing result", "version": 99}}', "another version"),
        (b'{"format": {"name": "sizing result", "version": 1}}', "entries are missing"),
        (
            b'{"format": {"name": "sizing result", "version": 1}, "options": {"a": {"mass_kg": 1,'
            b' "sections": {}, "members": {"b": 3}, "reactions": []}}}',
            "entries are missing",
        ),
    ],
)
def test_other_files_are_refused_in_words(tmp_path, content, found):
    """Whatever is named, an answer in words: never a traceback."""
    path = tmp_path / "old.json"
    if content is not None:
        path.write_bytes(content)
    with pytest.raises(InputError, match=found):
        read_previous(path)


def test_a_null_in_the_earlier_file_is_no_error(girder_job, tmp_path):
    """A member that had no resistance had no number; its check compares all the same."""
    document = json.loads(json_bytes(girder_job))
    member = next(iter(document["options"]["steel"]["members"].values()))
    member["utilisation"], member["clause"] = None, "6.3.1"
    path = tmp_path / "old.json"
    path.write_text(json.dumps(document), encoding="utf-8")
    rows = changes_table(read_previous(path), girder_job).rows
    assert len(rows) == 1
    assert "no resistance" in str(rows[0][3])
