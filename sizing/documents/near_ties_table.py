"""Other designs nearly as good as the pick: an office often prefers one of them."""

from __future__ import annotations

from sizing.brief.model import Brief
from sizing.documents.plain_text import visible
from sizing.documents.quantities import ShownUnits
from sizing.documents.tables import Cell, Column, Table
from sizing.documents.wording import ratio
from sizing.results import OptionResult


def near_ties_tables(brief: Brief, option: OptionResult, units: ShownUnits) -> tuple[Table, ...]:
    """Return the table of near ties, or nothing where none was asked for."""
    if not option.near_ties:
        return ()
    mass = units.mass
    picked = tuple(group.designation for group in option.groups)
    rows: list[tuple[Cell, ...]] = [
        ("the pick", mass.of(option.mass), 0.0, ratio(option.utilisation), *map(visible, picked))
    ]
    for place, tie in enumerate(option.near_ties, start=1):
        more = 100.0 * (tie.objective / option.objective - 1.0) if option.objective else 0.0
        changes = (
            visible(name) if name != kept else "as picked"
            for name, kept in zip(tie.designations, picked, strict=True)
        )
        rows.append((f"design {place}", mass.of(tie.mass), more, ratio(tie.utilisation), *changes))
    return (
        Table(
            name="Near ties",
            title="Other designs nearly as good as the pick",
            columns=(
                Column(head="Design"),
                Column(head="Mass of members", unit=mass.unit, style="number", places=mass.places),
                Column(head=f"More {option.objective_text}", unit="%", style="number", places=2),
                Column(head="Greatest utilisation", style="ratio"),
                *(Column(head=visible(group.name)) for group in brief.groups),
            ),
            rows=tuple(rows),
            notes=("Each passes every check of this schedule.",),
            large_paper=True,
        ),
    )
