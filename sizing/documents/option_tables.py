"""The member-side tables of one option: members, sections, groups, restraint."""

from __future__ import annotations

import math
from collections import Counter
from itertools import groupby

from sizing.brief.model import Brief
from sizing.documents.plain_text import visible
from sizing.documents.quantities import ShownUnits
from sizing.documents.tables import Cell, Column, Table
from sizing.documents.wording import (
    NOT_A_CUT_LENGTH,
    SIGNS,
    extreme_force,
    governing_check,
    mark_runs,
    met,
    ratio,
)
from sizing.results import Extreme, LighterResult, MemberResult, OptionResult

FOOT = 0.3048
"""Metres (exact)."""

SAME_LENGTH = 1e-6
"""Relative difference below which a buckling length equals the system length (rounding)."""


def members_table(brief: Brief, option: OptionResult, units: ShownUnits) -> Table:
    """Return the member schedule: one row per member."""
    force = units.force.fitted(f for m in option.members for f in m.forces)
    mass = units.mass.fitted(m.mass for m in option.members)
    length, per_length = units.length, units.mass_per_length
    columns = (
        Column(head="Mark"),
        Column(head="Group"),
        Column(head="Number off", style="whole", essential=False),
        Column(head="From node"),
        Column(head="To node"),
        Column(head="Section"),
        Column(head="Grade", essential=False),
        Column(head="System length", unit=length.unit, style="number", places=length.places),
        Column(
            head="Mass per length",
            unit=per_length.unit, style="number", places=per_length.places, essential=False,
        ),
        Column(head="Mass each", unit=mass.unit, style="number", places=mass.places),
        Column(
            head="Mass of all alike",
            unit=mass.unit, style="number", places=mass.places, essential=False,
        ),
        Column(
            head="Outer surface",
            unit=units.surface.unit, style="number", places=units.surface.places, essential=False,
        ),
        Column(
            head="Section factor A/V",
            unit="1/ft" if units.us else "1/m", style="number", places=0, essential=False,
        ),
        Column(head="Greatest tension", unit=force.unit, style="force", places=force.places),
        Column(head="in combination"),
        Column(head="Greatest compression", unit=force.unit, style="force", places=force.places),
        Column(head="in combination"),
        Column(head="Reversal", essential=False),
        Column(
            head="Buckling length in plane",
            unit=length.unit, style="number", places=length.places, essential=False,
        ),
        Column(
            head="Buckling length out of plane",
            unit=length.unit, style="number", places=length.places, essential=False,
        ),
        Column(head="Slenderness in plane", style="number", places=1),
        Column(head="Slenderness out of plane", style="number", places=1),
        Column(head="Slenderness limit", style="number", places=0, essential=False),
        Column(head="Restraint assumed in plane", style="prose", essential=False),
        Column(head="Restraint assumed out of plane", style="prose", essential=False),
        Column(head="Utilisation", style="ratio"),
        Column(head="Check met", essential=False),
        Column(head="Governing check"),
        Column(head="Governing combination"),
        Column(head="Note", style="prose", essential=False),
    )  # fmt: skip
    off = Counter(_piece(m) for m in option.members)
    per_metre = {
        s.designation: s.surface / s.total_length for s in option.sections if s.total_length > 0.0
    }
    rows = tuple(
        (
            visible(m.mark),
            visible(m.group),
            off[_piece(m)],
            visible(m.start),
            visible(m.end),
            visible(m.designation),
            visible(option.grade),
            length.of(m.length),
            per_length.of(m.mass_per_metre),
            mass.of(m.mass),
            mass.of(m.mass * off[_piece(m)]),
            *_surface(m, per_metre.get(m.designation, math.nan), units),
            *_extreme(m.tension, force.scale),
            *_extreme(m.compression, force.scale),
            "yes" if m.reversal else "no",
            length.of(m.in_plane),
            length.of(m.out_of_plane),
            m.slenderness_in,
            m.slenderness_out,
            m.slenderness_limit if m.slenderness_limit is not None else "none set",
            *(
                _held(m.length, buckling, pressed=m.compression is not None, units=units)
                for buckling in (m.in_plane, m.out_of_plane)
            ),
            ratio(m.utilisation),
            "yes" if met(m.utilisation) else "NO",
            governing_check(m),
            visible(m.governing_combination),
            visible(m.note),
        )
        for m in option.members
    )
    totals: list[Cell] = [None] * len(columns)
    totals[0] = "Total"
    totals[_at(columns, "System length")] = length.of(math.fsum(m.length for m in option.members))
    totals[_at(columns, "Mass each")] = mass.of(math.fsum(m.mass for m in option.members))
    surfaces = [m.length * per_metre.get(m.designation, math.nan) for m in option.members]
    if all(math.isfinite(s) for s in surfaces):
        totals[_at(columns, "Outer surface")] = units.surface.of(math.fsum(surfaces))
    notes = [SIGNS + " Strength combinations only; reversal: both occur.", NOT_A_CUT_LENGTH]
    notes.append(
        "Number off: pieces of the group alike in section and in order length (system length "
        "where none is given). A/V: outer surface over volume, all sides exposed."
    )
    if any(group.utilisation_cap != 1.0 for group in brief.groups):
        notes.append("Utilisation 1.00 is the group's cap on utilisation (see Groups).")
    return Table(
        name="Members",
        title="Member schedule",
        columns=columns,
        rows=rows,
        notes=tuple(notes),
        totals=tuple(totals),
        large_paper=True,
    )


def _at(columns: tuple[Column, ...], head: str) -> int:
    return next(j for j, column in enumerate(columns) if column.head == head)


def _piece(member: MemberResult) -> tuple[str, str, float]:
    """Return what identical pieces share: group, section, and length to a tenth of a millimetre."""
    length = member.length if member.order_length is None else member.order_length
    return member.group, member.designation, round(length, 4)


def _surface(member: MemberResult, per_metre: float, units: ShownUnits) -> tuple[Cell, Cell]:
    """Return outer surface and section factor of a member."""
    if not math.isfinite(per_metre):
        return "not given", "not given"
    factor = per_metre / member.area
    return units.surface.of(member.length * per_metre), factor * (FOOT if units.us else 1.0)


def _extreme(extreme: Extreme | None, scale: float) -> tuple[Cell, Cell]:
    if extreme is None:
        return "none", ""
    return extreme.force * scale, visible(extreme.combination)


def sections_table(option: OptionResult, units: ShownUnits) -> Table:
    """Return the take-off: one row per catalogue section."""
    mass = units.mass.fitted(s.mass for s in option.sections)
    length, per_length, surface = units.length, units.mass_per_length, units.surface
    columns = (
        Column(head="Section"),
        Column(head="Product"),
        Column(head="Grade"),
        Column(head="Catalogue row", style="whole"),
        Column(head="Pieces", style="whole"),
        Column(head="Total system length", unit=length.unit, style="number", places=length.places),
        Column(
            head="Mass per length", unit=per_length.unit, style="number", places=per_length.places
        ),
        Column(head="Mass", unit=mass.unit, style="number", places=mass.places),
        Column(head="Outer surface", unit=surface.unit, style="number", places=surface.places),
    )
    rows = tuple(
        (
            visible(s.designation),
            visible(s.product),
            visible(option.grade),
            s.catalogue_row,
            s.pieces,
            length.of(s.total_length),
            per_length.of(s.mass_per_metre),
            mass.of(s.mass),
            surface.of(s.surface) if math.isfinite(s.surface) else "not given",
        )
        for s in option.sections
    )
    surfaces = [s.surface for s in option.sections]
    known = all(math.isfinite(s) for s in surfaces)
    totals: tuple[Cell, ...] = (
        "Total",
        None,
        None,
        None,
        sum(s.pieces for s in option.sections),
        length.of(math.fsum(s.total_length for s in option.sections)),
        None,
        mass.of(math.fsum(s.mass for s in option.sections)),
        surface.of(math.fsum(surfaces)) if known else None,
    )
    return Table(
        name="Sections",
        title="Summary by section",
        columns=columns,
        rows=rows,
        notes=(
            f"Catalogue: {visible(option.catalogue_source.name)}; row is the line in that file.",
            NOT_A_CUT_LENGTH,
            "Check stock lengths and that each size can be had before ordering.",
        ),
        totals=totals,
    )


def groups_table(brief: Brief, option: OptionResult, units: ShownUnits) -> Table:
    """Return the groups, what governs each, and why the next lighter section fails."""
    mass = units.mass.fitted(g.mass for g in option.groups)
    length = units.length
    lighter = {entry.group: entry for entry in option.lighter}
    caps = {group.name: group.utilisation_cap for group in brief.groups}
    marks = {m.name: m.mark for m in option.members}
    columns = (
        Column(head="Group"),
        Column(head="Section"),
        Column(head="Catalogue row", style="whole", essential=False),
        Column(head="Members", style="prose"),
        Column(
            head="Total system length",
            unit=length.unit, style="number", places=length.places, essential=False,
        ),
        Column(head="Mass", unit=mass.unit, style="number", places=mass.places),
        Column(head="Utilisation cap", style="ratio", essential=False),
        Column(head="Utilisation", style="ratio"),
        Column(head="Governed by", style="prose"),
        Column(head="Governing member"),
        Column(head="Governing combination"),
        Column(head="Next lighter section"),
        Column(head="Mass it would save", unit=mass.unit, style="number", places=mass.places),
        Column(head="It fails in", style="prose"),
        Column(head="at"),
        Column(head="in combination"),
        Column(head="with utilisation", style="number", places=2),
    )  # fmt: skip
    rows = tuple(
        (
            visible(g.name),
            visible(g.designation),
            g.catalogue_row,
            mark_runs([marks.get(name, name) for name in g.members]),
            length.of(g.total_length),
            mass.of(g.mass),
            caps.get(g.name),
            ratio(g.utilisation),
            visible(g.governed_by),
            visible(g.governing_member),
            visible(g.governing_combination),
            *_why_not(lighter.get(g.name), mass.scale),
        )
        for g in option.groups
    )
    totals: list[Cell] = [None] * len(columns)
    totals[0] = "Total"
    totals[4] = length.of(math.fsum(g.total_length for g in option.groups))
    totals[5] = mass.of(math.fsum(g.mass for g in option.groups))
    return Table(
        name="Groups",
        title="Groups, and why not lighter",
        columns=columns,
        rows=rows,
        notes=(
            "Next lighter section: put in for this group alone, all other groups as listed.",
            "Utilisation is of the cap where a cap below 1.00 is set.",
        ),
        totals=tuple(totals),
        large_paper=True,
    )


def _why_not(entry: LighterResult | None, scale: float) -> tuple[Cell, ...]:
    if entry is None:
        return "not examined", None, "", "", "", None
    if entry.designation is None:
        return "none: lightest it may take", None, "", "", "", None
    return (
        visible(entry.designation),
        entry.mass_saved * scale,
        "nothing: it passes" if entry.fails == "nothing" else visible(entry.fails),
        visible(entry.where),
        visible(entry.combination),
        entry.utilisation if math.isfinite(entry.utilisation) else "not usable",
    )


def restraint_table(brief: Brief, option: OptionResult, units: ShownUnits) -> Table:
    """Return where members must be held: one row per group and pair of buckling lengths."""
    force = units.force.fitted(f for m in option.members for f in m.forces)
    length = units.length
    columns = (
        Column(head="Group"),
        Column(head="Section"),
        Column(head="Members", style="prose"),
        Column(head="System length", unit=length.unit, style="number", places=length.places),
        Column(
            head="Buckling length in plane",
            unit=length.unit, style="number", places=length.places,
        ),
        Column(
            head="Buckling length out of plane",
            unit=length.unit, style="number", places=length.places,
        ),
        Column(head="Greatest compression", unit=force.unit, style="force", places=force.places),
        Column(head="in combination"),
        Column(head="Assumed in plane", style="prose"),
        Column(head="Assumed out of plane", style="prose"),
        Column(head="Nodes held out of plane", style="prose"),
    )  # fmt: skip
    held_nodes = {
        group.name: visible(", ".join(brief.nodes[n].name for n in group.restrained_nodes))
        for group in brief.groups
        if group.restrained_nodes
    }
    rows: list[tuple[Cell, ...]] = []
    for _, same in groupby(sorted(option.members, key=_restraint_key), key=_restraint_key):
        alike = list(same)
        first = alike[0]
        worst = min(alike, key=lambda m: extreme_force(m.compression))
        pressed = worst.compression is not None
        rows.append(
            (
                visible(first.group),
                visible(first.designation),
                mark_runs([m.mark for m in alike]),
                length.of(first.length),
                length.of(first.in_plane),
                length.of(first.out_of_plane),
                *_extreme(worst.compression, force.scale),
                _held(first.length, first.in_plane, pressed=pressed, units=units),
                _held(first.length, first.out_of_plane, pressed=pressed, units=units),
                held_nodes.get(first.group, "not listed"),
            )
        )
    order = {g.name: i for i, g in enumerate(option.groups)}
    rows.sort(key=lambda row: order.get(str(row[0]), len(order)))
    return Table(
        name="Restraint",
        title="Restraint that the compression checks assume",
        columns=columns,
        rows=tuple(rows),
        notes=(
            "These restraints must stand on the drawings and be built: compression resistance is "
            "lost without them.",
            "Points that hold a member must themselves be held, by diagonal bracing to something "
            "stiff. Restraint forces are not designed here.",
        ),
    )


def _restraint_key(member: MemberResult) -> tuple[str, str, float, float, float]:
    return (
        member.group,
        member.designation,
        round(member.length, 6),
        round(member.in_plane, 6),
        round(member.out_of_plane, 6),
    )


def _held(length: float, buckling: float, *, pressed: bool, units: ShownUnits) -> str:
    if not pressed:
        return "never compressed in these combinations"
    if abs(buckling - length) <= SAME_LENGTH * length:
        return "held at both end nodes"
    if buckling > length:
        return f"held at points no more than {units.length.text(buckling)} apart"
    return (
        f"buckling length {buckling / length:.2f} of the system length: held between its nodes, "
        "or ends that do not rotate; to be justified"
    )
