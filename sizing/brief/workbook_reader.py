"""Reading a brief from a workbook: its sheets as the same plain tables that a TOML brief has."""

from __future__ import annotations

import hashlib
from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from pathlib import Path
from typing import Any

from sizing.brief.findings import Findings, KeyPath, counted, listed, quoted
from sizing.brief.model import SourceFile
from sizing.brief.plain_files import PlainFileError, read_plain_file
from sizing.brief.workbook_file import Grid, read_grids, spot_text
from sizing.brief.workbook_items import read_items
from sizing.brief.workbook_layout import SHEETS, ItemSheet
from sizing.brief.workbook_places import Places
from sizing.brief.workbook_rows import read_rows
from sizing.brief.workbook_tables import Draft
from sizing.errors import InputError, Problem

LARGEST_WORKBOOK = 5 * 1024 * 1024
"""Bytes, as for a brief in TOML; a brief of 300 members takes 0.1 MiB."""

MOST_NAMED = 5
"""Cells that a caution names one by one."""


@dataclass(frozen=True, kw_only=True)
class WorkbookBrief:
    """The tables of a workbook, where each key stands in it, and what was taken for granted."""

    source: SourceFile
    tables: dict[str, Any]
    places: Places
    cautions: tuple[str, ...]


def load_workbook_brief(path: Path) -> WorkbookBrief:
    """Return the tables of the workbook at ``path``.

    Raises :class:`~sizing.errors.InputError` for a file that is no workbook, and with every
    mistake in the shape of its sheets: heads, names, merged cells, cells that cannot be placed.
    """
    name = str(path)
    try:
        data = read_plain_file(path, LARGEST_WORKBOOK)
    except PlainFileError as error:
        problem = Problem(
            file=name,
            place="the file",
            found=error.found,
            expected=error.expected,
            fix=error.fix,
        )
        raise InputError([problem]) from error
    source = SourceFile(name=name, path=path.resolve(), sha256=hashlib.sha256(data).hexdigest())
    return tables_of_grids(read_grids(data, name), source)


def tables_of_grids(grids: Sequence[Grid], source: SourceFile) -> WorkbookBrief:
    """Return the tables that the sheets hold; raises as :func:`load_workbook_brief` does."""
    findings = Findings(source.name, _as_told)
    draft = Draft(findings)
    found = _sheets(grids, findings)
    for sheet in SHEETS:
        grid = found.get(sheet.title)
        heads = {str(row.path[0]) for row in sheet.rows} if isinstance(sheet, ItemSheet) else set()
        for key in {sheet.place[0]} if sheet.place else heads:
            draft.places.record_sheet((key,), sheet.title)
        if grid is None:
            continue
        _caution_computed(grid, findings)
        if isinstance(sheet, ItemSheet):
            read_items(sheet, grid, draft)
        else:
            read_rows(sheet, grid, draft)
    if not found:
        findings.add(
            (),
            found=f"the {'sheet' if len(grids) == 1 else 'sheets'} "
            + listed([grid.title for grid in grids]),
            expected=f"sheets {listed([sheet.title for sheet in SHEETS], most=len(SHEETS))}",
            fix="Convert a brief to see how they look: sizing convert brief.toml brief.xlsx.",
        )
    draft.check_units()
    findings.raise_if_any()
    _caution_remarks(draft.remarks, findings)
    _members_first(draft.tables)
    return WorkbookBrief(
        source=source,
        tables=draft.tables,
        places=draft.places,
        cautions=tuple(findings.cautions),
    )


def _as_told(path: KeyPath) -> str:
    return str(path[0]) if path else "the workbook"


def _sheets(grids: Sequence[Grid], findings: Findings) -> dict[str, Grid]:
    """Return the sheets of a brief by their title; others are told."""
    titles = {sheet.title.casefold(): sheet.title for sheet in SHEETS}
    found: dict[str, Grid] = {}
    for grid in grids:
        title = titles.get(" ".join(grid.title.split()).casefold())
        if title is None:
            if grid.cells:
                near = findings.nearest(grid.title, titles.values())
                hint = f" (a brief has a sheet {quoted(near)})" if near else ""
                findings.caution(f"Sheet {quoted(grid.title)} is not read{hint}.")
        elif title in found:
            path: KeyPath = (f"sheet {grid.title}",)
            findings.add(path, found=f"a second sheet {title}", expected="each sheet once")
        else:
            found[title] = grid
            if grid.hidden and grid.cells:
                findings.caution(f"Sheet {quoted(grid.title)} is hidden; it is read all the same.")
    return found


def _members_first(tables: dict[str, Any]) -> None:
    """Put the members ahead of the other keys of their group, as one writes them by hand."""
    groups: Any = tables.get("groups")
    for name, group in groups.items() if isinstance(groups, dict) else ():
        if isinstance(group, dict) and "members" in group:
            groups[name] = {"members": group["members"], **group}


def _caution_computed(grid: Grid, findings: Findings) -> None:
    if grid.computed:
        cells = listed([spot_text(grid.title, spot) for spot in grid.computed], most=MOST_NAMED)
        findings.caution(
            f"{counted(len(grid.computed), 'formula')} read by the value computed last, in {cells}."
        )


def _caution_remarks(remarks: Mapping[str, str], findings: Findings) -> None:
    for place, remark in list(remarks.items())[:MOST_NAMED]:
        findings.caution(f"{place}: {remark}.")
    if len(remarks) > MOST_NAMED:
        findings.caution(f"{len(remarks)} cells in all hold numbers stored as text.")
