"""Loads as the brief states them beside what reaches the nodes, and the total of every case."""

from __future__ import annotations

from sizing.brief.model import Brief
from sizing.documents.force_tables import axes
from sizing.documents.plain_text import visible
from sizing.documents.quantities import ShownUnits
from sizing.documents.tables import Cell, Column, Table


def load_totals_table(brief: Brief, units: ShownUnits) -> Table:
    """Return a row for each stated load, with its resultant, and one with each case's total."""
    names = axes(brief)
    totals = [
        tuple(sum(force[axis] for force in case.nodal.values()) for axis in range(brief.dimensions))
        for case in brief.cases
    ]
    force = units.force.fitted(value for total in totals for value in total)
    rows: list[tuple[Cell, ...]] = []
    for case, total in zip(brief.cases, totals, strict=True):
        rows += [
            (visible(case.name), visible(load.text), *(force.of(value) for value in load.applied))
            for load in case.stated
        ]
        own = ", without the weight of the members" if case.self_weight else ""
        rows.append((visible(case.name), f"total at the nodes{own}", *map(force.of, total)))
    return Table(
        name="Load totals",
        title="Loads as given, and what reaches the nodes",
        columns=(
            Column(head="Load case"),
            Column(head="Load", style="prose"),
            *(
                Column(head=f"Sum {axis}", unit=force.unit, style="number", places=force.places)
                for axis in names
            ),
        ),
        rows=tuple(rows),
        notes=("Compare the totals with the load take-down: pressure times area.",),
    )
