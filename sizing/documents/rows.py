"""The one set of tables from which every document is written."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from datetime import date
from typing import Any

from sizing.documents.changes import changes_table
from sizing.documents.cutting_table import cutting_tables, with_order_length
from sizing.documents.envelope_table import envelope_table
from sizing.documents.force_tables import (
    combinations_table,
    deflections_table,
    joint_forces_table,
    reactions_table,
)
from sizing.documents.job_tables import (
    basis_table,
    cautions_table,
    cover_table,
    loads_table,
    nodes_table,
)
from sizing.documents.near_ties_table import near_ties_tables
from sizing.documents.option_tables import (
    groups_table,
    members_table,
    restraint_table,
    sections_table,
)
from sizing.documents.quantities import ShownUnits, shown_units
from sizing.documents.stated_loads_table import load_totals_table
from sizing.documents.summary_table import summary_table
from sizing.documents.tables import Table
from sizing.results import JobResult, OptionResult


@dataclass(frozen=True, kw_only=True, slots=True)
class JobTables:
    """All tables of a job: ``shared`` ones, and ``by_option`` pairs of option and its tables."""

    units: ShownUnits
    shared: tuple[Table, ...]
    by_option: tuple[tuple[OptionResult, tuple[Table, ...]], ...]


def job_tables(
    job: JobResult, issued: date, previous: Mapping[str, Any] | None = None
) -> JobTables:
    """Return every table of ``job`` in the order in which it is printed.

    ``previous`` is an earlier result (see :mod:`sizing.documents.changes`).
    """
    units = shown_units(job.brief.units)
    return JobTables(
        units=units,
        shared=(
            cover_table(job, issued),
            summary_table(job, units),
            *(() if previous is None else (changes_table(previous, job),)),
            nodes_table(job.brief, units),
            load_totals_table(job.brief, units),
            loads_table(job.brief, units),
        ),
        by_option=tuple((option, option_tables(job, option, units)) for option in job.options),
    )


def option_tables(job: JobResult, option: OptionResult, units: ShownUnits) -> tuple[Table, ...]:
    """Return the tables of one option."""
    brief = job.brief
    return (
        with_order_length(members_table(brief, option, units), option, units),
        sections_table(option, units),
        *cutting_tables(option, units),
        groups_table(brief, option, units),
        *near_ties_tables(brief, option, units),
        combinations_table(brief, option, units),
        deflections_table(brief, option, units),
        reactions_table(brief, option, units),
        envelope_table(option, units),
        joint_forces_table(brief, option, units),
        restraint_table(brief, option, units),
        basis_table(job, option, units),
        cautions_table(option),
    )
