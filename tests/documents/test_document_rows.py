"""The tables behind all documents: complete, consistent, and careful with odd numbers."""

from __future__ import annotations

import math
from dataclasses import replace
from datetime import date

import pytest

from sizing.brief.model import Units
from sizing.documents.force_tables import vertical_action
from sizing.documents.option_tables import groups_table, restraint_table
from sizing.documents.quantities import shown_units
from sizing.documents.rows import job_tables
from sizing.documents.tables import Column, essential_part, printed
from sizing.documents.wording import mark_runs, met, ratio
from sizing.results import ReactionResult

ISSUED = date(2026, 3, 1)


def test_every_table_is_rectangular(girder_job, tower_job):
    """Rows and totals are as wide as the heads, in full and in part."""
    for job in (girder_job, tower_job):
        tables = job_tables(job, ISSUED)
        for table in (*tables.shared, *(t for _, own in tables.by_option for t in own)):
            for one in (table, essential_part(table)):
                widths = {len(row) for row in (*one.rows, *((one.totals,) if one.totals else ()))}
                assert widths <= {len(one.columns)}


def test_joint_forces_list_both_ends_of_every_member(girder_job):
    """Each member stands at its two nodes, with equal force at both ends."""
    table = next(t for t in job_tables(girder_job, ISSUED).by_option[0][1]
                 if t.name == "Joint forces")  # fmt: skip
    ends: dict[str, list[tuple]] = {}
    for node, mark, other, *rest in table.rows:
        ends.setdefault(mark, []).append((node, other, rest))
    assert len(ends) == len(girder_job.brief.members)
    for (node, other, first), (node2, other2, second) in ends.values():
        assert (node, other) == (other2, node2)
        assert first == second


@pytest.mark.parametrize(
    ("marks", "text"),
    [
        (["T1", "T2", "T3", "T5"], "T1 to T3, T5"),
        (["T1", "T2"], "T1, T2"),
        (["T9", "T10", "T11"], "T9 to T11"),
        (["A", "B"], "A, B"),
        (["T01", "T02", "T03"], "T01, T02, T03"),
        ([], ""),
    ],
)
def test_consecutive_marks_are_joined(marks, text):
    """Long lists of marks read as runs, and nothing that is not consecutive is joined."""
    assert mark_runs(marks) == text


def test_met_compares_before_rounding():
    """1.004 prints as 1.00 and is still not met; rounding in the analysis is forgiven."""
    assert printed(1.004, Column(head="u", style="ratio")) == "1.00"
    assert not met(1.004)
    assert met(1.0 + 1e-12)
    assert not met(math.inf)
    assert ratio(math.inf) == "no resistance"


@pytest.mark.parametrize(
    ("cell", "style", "text"),
    [
        (12.34, "force", "12.3 T"),
        (-12.34, "force", "-12.3 C"),
        (-0.01, "force", "0.0"),
        (-0.01, "number", "0.0"),
        (None, "number", ""),
        ("none", "force", "none"),
        (7, "whole", "7"),
    ],
)
def test_cells_print_with_their_sense(cell, style, text):
    """T and C stand beside the sign, and nothing prints as minus zero."""
    assert printed(cell, Column(head="h", style=style, places=1)) == text


def test_vertical_action_is_told_by_word():
    """A support that pulls the truss down is uplift; rounding is no force; unheld says so."""

    def at(vertical):
        return ReactionResult(
            node="A", combination="U", state="strength", components=(0.0, vertical)
        )

    assert vertical_action(at(5.0), (True, True)) == "bearing"
    assert vertical_action(at(-5.0), (True, True)) == "UPLIFT"
    assert vertical_action(at(-1e-9), (True, True), 1e-6) == "none"
    assert vertical_action(at(0.0), (True, False)) == "not held"


def test_restraint_tells_what_must_be_built(girder_job):
    """A buckling length beyond the member says how far apart it may be held."""
    units = shown_units(girder_job.brief.units)
    table = restraint_table(girder_job.brief, girder_job.options[0], units)
    by_group = {row[0]: row for row in table.rows}
    assert by_group["top chord"][-2] == "held at points no more than 6.000 m apart"
    assert by_group["posts"][-2] == "held at both end nodes"
    assert by_group["bottom chord"][5] == 9.0


def test_why_not_lighter_is_complete(girder_job):
    """Every group tells its next lighter section and its failing check, or that none is."""
    units = shown_units(girder_job.brief.units)
    option = girder_job.options[0]
    table = groups_table(girder_job.brief, option, units)
    heads = [c.head for c in table.columns]
    section = heads.index("Next lighter section")
    for row, entry in zip(table.rows, option.lighter, strict=True):
        assert row[section] == (entry.designation or "none: lightest it may take")
    odd = (replace(option.lighter[0], fails="nothing"),)
    rows = groups_table(girder_job.brief, replace(option, lighter=odd), units).rows
    assert rows[0][section + 2] == "nothing: it passes"
    assert rows[1][section] == "not examined"


def test_small_trusses_keep_three_figures():
    """A model of a few newtons does not print 0.0 kN throughout."""
    force = shown_units(Units()).force
    assert force.places == 1
    assert force.fitted([1.23, -4.5]).places == 5
    assert force.fitted([123e3]).places == 1
    assert force.fitted([]).places == 1
    assert force.fitted([0.0, math.inf]).places == 1


def test_report_keeps_the_deciding_rows(large_job):
    """Of many combinations the report shows the extreme reactions and the worst deflections."""
    tables = {t.name: t for t in job_tables(large_job, ISSUED).by_option[0][1]}
    reactions, short = tables["Reactions"], essential_part(tables["Reactions"])
    assert len(short.rows) < len(reactions.rows)
    for node in {row[0] for row in reactions.rows}:
        vertical = [row[4] for row in reactions.rows if row[0] == node and row[2] == "strength"]
        kept = [row[4] for row in short.rows if row[0] == node and row[2] == "strength"]
        assert (max(kept), min(kept)) == (max(vertical), min(vertical))
    more = len(reactions.rows) - len(short.rows)
    assert short.notes[-1] == f"Deciding rows only; the workbook holds {more} more."
    assert essential_part(short) == short
