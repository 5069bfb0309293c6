"""The load-side tables of one option: combinations, deflections, reactions, joint forces."""

from __future__ import annotations

from sizing.brief.model import Brief, DeflectionLimit
from sizing.documents.plain_text import visible
from sizing.documents.quantities import Quantity, ShownUnits
from sizing.documents.tables import Cell, Column, Table
from sizing.documents.wording import SIGNS, met, ratio
from sizing.results import Extreme, MemberResult, OptionResult, ReactionResult

NO_REACTION = 1e-9
"""A reaction below this share of the greatest one is rounding of the analysis, not a force."""

COMBINATIONS_A_PAGE = 8
"""Columns of combinations that stay legible beside the key columns on one wide page."""

AXES = ("x", "y", "z")


def axes(brief: Brief) -> tuple[str, ...]:
    """Return the names of the brief's axes; the last one points up."""
    return AXES[: brief.dimensions]


def combinations_table(brief: Brief, option: OptionResult, units: ShownUnits) -> Table:
    """Return every combination as analysed, with factors, applied load and residual."""
    cases = [case.name for case in brief.cases]
    force = units.force.fitted(a for c in option.combinations for a in c.applied)
    columns = (
        Column(head="Combination"),
        Column(head="State"),
        Column(head="Load duration"),
        *(Column(head=visible(case), style="number", places=3) for case in cases),
        *(
            Column(head=f"Applied {axis}", unit=force.unit, style="number", places=force.places)
            for axis in axes(brief)
        ),
        Column(head="Residual"),
        Column(head="Origin", style="prose"),
    )
    rows = tuple(
        (
            visible(c.name),
            c.state,
            c.duration,
            *(dict(c.factors).get(case) for case in cases),
            *(force.of(component) for component in c.applied),
            f"{c.residual:.1e}",
            visible(c.origin),
        )
        for c in option.combinations
    )
    return Table(
        name="Combinations",
        title="Combinations, expanded",
        columns=columns,
        rows=rows,
        notes=(
            "Factors on load cases; an empty cell means that the case is left out.",
            f"Applied: sum of all loads with the weight of the chosen sections; axis "
            f"{axes(brief)[-1]} points up.",
            "Residual: greatest out-of-balance force at a node over the greatest nodal load.",
        ),
    )


def deflections_table(brief: Brief, option: OptionResult, units: ShownUnits) -> Table:
    """Return every deflection check."""
    movement = units.movement
    kinds = {limit.name: _kind_of_movement(brief, limit) for limit in brief.deflection_limits}
    columns = (
        Column(head="Limit"),
        Column(head="Node"),
        Column(head="Direction"),
        Column(head="Movement"),
        Column(head="Combination"),
        Column(head="Deflection", unit=movement.unit, style="number", places=movement.places),
        Column(head="Allowed", unit=movement.unit, style="number", places=movement.places),
        Column(head="Limit as written"),
        Column(head="Utilisation", style="ratio"),
        Column(head="Check met"),
    )
    rows = tuple(
        (
            visible(d.limit_name),
            visible(d.node),
            visible(d.direction),
            kinds.get(d.limit_name, ""),
            visible(d.combination),
            movement.of(d.value),
            movement.of(d.limit),
            visible(d.limit_text),
            ratio(d.utilisation),
            "yes" if met(d.utilisation) else "NO",
        )
        for d in option.deflections
    )
    none = () if rows else ("No deflection limit is set in the brief: deflection is not checked.",)
    return Table(
        name="Deflections",
        title="Deflection checks",
        columns=columns,
        rows=rows,
        notes=(
            "Sign along the direction named. Pin-jointed truss; slip in joints is left out.",
            *none,
        ),
        deciding=_worst_deflections(option),
    )


def _worst_deflections(option: OptionResult) -> tuple[int, ...]:
    """Return the rows with the greatest utilisation of each limit at each node."""
    worst: dict[tuple[str, str], int] = {}
    for i, d in enumerate(option.deflections):
        best = worst.setdefault((d.limit_name, d.node), i)
        if d.utilisation > option.deflections[best].utilisation:
            worst[d.limit_name, d.node] = i
    return tuple(sorted(worst.values()))


def _kind_of_movement(brief: Brief, limit: DeflectionLimit) -> str:
    """Return which movement is limited: elastic or final, less precamber, relative to a node."""
    words = {"instantaneous": "elastic", "final": "final, with creep"}
    kind = words.get(limit.component, "final, less precamber")
    if limit.relative_to is None:
        return kind
    return f"{kind}; relative to {visible(brief.nodes[limit.relative_to].name)}"


def reactions_table(brief: Brief, option: OptionResult, units: ShownUnits) -> Table:
    """Return the reaction of every support in every combination, uplift told by word."""
    force = units.force.fitted(r for e in option.reactions for r in e.components)
    held = {brief.nodes[s.node].name: s.held for s in brief.supports}
    noise = _reaction_noise(option)
    columns = (
        Column(head="Support at node"),
        Column(head="Combination"),
        Column(head="State"),
        *(
            Column(head=f"Reaction {axis}", unit=force.unit, style="number", places=force.places)
            for axis in axes(brief)
        ),
        Column(head="Vertical action"),
    )
    rows = tuple(
        (
            visible(entry.node),
            visible(entry.combination),
            entry.state,
            *_components(entry, held.get(entry.node), force, noise),
            vertical_action(entry, held.get(entry.node), noise),
        )
        for entry in option.reactions
    )
    return Table(
        name="Reactions",
        title="Support reactions",
        columns=columns,
        rows=rows,
        notes=(
            f"Force of the support on the truss along the brief's axes; {axes(brief)[-1]} points "
            "up. Combinations as factored: strength values are design values.",
            "Uplift: the support must hold the truss down.",
        ),
        deciding=_extreme_reactions(option),
    )


def _reaction_noise(option: OptionResult) -> float:
    return NO_REACTION * max((abs(r) for e in option.reactions for r in e.components), default=0.0)


def _extreme_reactions(option: OptionResult) -> tuple[int, ...]:
    """Return the rows with the greatest and least of each component per support and state."""
    alike: dict[tuple[str, str], list[int]] = {}
    for i, entry in enumerate(option.reactions):
        alike.setdefault((entry.node, entry.state), []).append(i)
    noise = _reaction_noise(option)
    kept: set[int] = set()
    for rows in alike.values():
        for axis in range(len(option.reactions[rows[0]].components)):
            values = [option.reactions[i].components[axis] for i in rows]
            if max(map(abs, values)) > noise:
                kept |= {rows[values.index(max(values))], rows[values.index(min(values))]}
    return tuple(sorted(kept))


def _components(
    entry: ReactionResult, held: tuple[bool, ...] | None, force: Quantity, noise: float
) -> tuple[Cell, ...]:
    flags = held or (True,) * len(entry.components)
    return tuple(
        (force.of(r) if abs(r) > noise else 0.0) if h else "free"
        for r, h in zip(entry.components, flags, strict=True)
    )


def vertical_action(
    entry: ReactionResult, held: tuple[bool, ...] | None, noise: float = 0.0
) -> str:
    """Return what the support does vertically: bearing, uplift (it holds down), or nothing."""
    if held is not None and not held[-1]:
        return "not held"
    vertical = entry.components[-1]
    if abs(vertical) <= noise:
        return "none"
    return "bearing" if vertical > 0.0 else "UPLIFT"


def joint_forces_table(brief: Brief, option: OptionResult, units: ShownUnits) -> Table:
    """Return member end forces node by node: the extremes, then every strength combination."""
    force = units.force.fitted(f for m in option.members for f in m.forces)
    strength = [i for i, c in enumerate(option.combinations) if c.state == "strength"]
    columns = (
        Column(head="Node"),
        Column(head="Mark"),
        Column(head="To node"),
        Column(head="Section"),
        Column(head="Greatest tension", unit=force.unit, style="force", places=force.places),
        Column(head="in combination"),
        Column(head="Greatest compression", unit=force.unit, style="force", places=force.places),
        Column(head="in combination"),
        *(
            Column(
                head=visible(option.combinations[i].name),
                unit=force.unit, style="force", places=force.places, essential=False,
            )
            for i in strength
        ),
    )  # fmt: skip
    noise = NO_REACTION * max((abs(f) for m in option.members for f in m.forces), default=0.0)
    rows = tuple(
        (
            visible(node),
            visible(member.mark),
            visible(other),
            visible(member.designation),
            *_extreme(member.tension, force),
            *_extreme(member.compression, force),
            *(
                force.of(member.forces[i]) if abs(member.forces[i]) > noise else 0.0
                for i in strength
            ),
        )
        for node, member, other in member_ends(brief, option)
    )
    return Table(
        name="Joint forces",
        title="Member end forces at each node, for the design of joints",
        columns=columns,
        rows=rows,
        notes=(
            f"{SIGNS} A member in tension pulls on the joint, one in compression pushes on it.",
            "Strength combinations as factored. Joints are not designed here.",
        ),
        keys=4,
        pages_wide=max(1, -(-(len(strength) + 4) // COMBINATIONS_A_PAGE)),
        large_paper=True,
    )


def member_ends(brief: Brief, option: OptionResult) -> list[tuple[str, MemberResult, str]]:
    """Return (node, member, other node) for both ends of every member, node by node."""
    order = {node.name: i for i, node in enumerate(brief.nodes)}
    ends = [(m.start, m, m.end) for m in option.members]
    ends += [(m.end, m, m.start) for m in option.members]
    position = {id(m): i for i, m in enumerate(option.members)}
    return sorted(ends, key=lambda e: (order.get(e[0], len(order)), position[id(e[1])]))


def _extreme(extreme: Extreme | None, force: Quantity) -> tuple[Cell, Cell]:
    if extreme is None:
        return "none", ""
    return force.of(extreme.force), visible(extreme.combination)
