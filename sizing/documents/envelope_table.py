"""The envelope of member forces: the extremes of every group over all strength combinations."""

from __future__ import annotations

from sizing.documents.plain_text import visible
from sizing.documents.quantities import Quantity, ShownUnits
from sizing.documents.tables import Cell, Column, Table
from sizing.documents.wording import SIGNS
from sizing.results import MemberResult, OptionResult
from sizing.standards.contract import Sense


def envelope_table(option: OptionResult, units: ShownUnits) -> Table:
    """Return greatest tension and compression of each group, with member and combination."""
    force = units.force.fitted(f for m in option.members for f in m.forces)
    columns = (
        Column(head="Group"),
        Column(head="Section"),
        Column(head="Members", style="whole"),
        Column(head="Greatest tension", unit=force.unit, style="force", places=force.places),
        Column(head="in member"),
        Column(head="in combination"),
        Column(head="Greatest compression", unit=force.unit, style="force", places=force.places),
        Column(head="in member"),
        Column(head="in combination"),
        Column(head="Members that reverse", style="whole"),
    )
    rows = []
    for group in option.groups:
        own = [m for m in option.members if m.group == group.name]
        rows.append(
            (
                visible(group.name),
                visible(group.designation),
                len(own),
                *_extreme(own, "tension", force),
                *_extreme(own, "compression", force),
                sum(m.reversal for m in own),
            )
        )
    return Table(
        name="Envelope",
        title="Envelope of member forces",
        columns=columns,
        rows=tuple(rows),
        notes=(f"{SIGNS} Extremes over all strength combinations, as factored.",),
    )


def _extreme(members: list[MemberResult], sense: Sense, force: Quantity) -> tuple[Cell, Cell, Cell]:
    found = [
        (abs(extreme.force), m, extreme)
        for m in members
        if (extreme := m.tension if sense == "tension" else m.compression) is not None
    ]
    if not found:
        return "none", "", ""
    _, member, extreme = max(found, key=lambda entry: entry[0])
    return force.of(extreme.force), visible(member.mark), visible(extreme.combination)
