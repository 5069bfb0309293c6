"""The outline of a brief in words, for the screen."""

from __future__ import annotations

import sys
from collections.abc import Sequence
from itertools import pairwise

import numpy as np

from sizing.brief.findings import counted
from sizing.brief.model import Brief
from sizing.brief.stated_loads import force_text
from sizing.documents.plain_text import visible
from sizing.documents.quantities import shown_units
from sizing.outline import CaseOutline, Outline
from sizing.units import Display

CLOSING = (
    "No section was picked or checked. A licensed engineer must check the brief and the design "
    "against the code in force where it is built."
)


def print_outline(outline: Outline) -> None:
    """Print the outline; what the screen's encoding cannot show comes as an escape."""
    encoding = sys.stdout.encoding or "utf-8"
    for line in outline_lines(outline):
        sys.stdout.write(line.encode(encoding, "backslashreplace").decode(encoding) + "\n")


def outline_lines(outline: Outline) -> list[str]:
    """Return the outline as lines of text."""
    brief = outline.brief
    return [
        f"{visible(brief.title)}",
        "",
        *_truss(outline),
        "",
        *_loads(outline),
        "",
        *_combinations(brief),
        "",
        *_lengths(outline),
        "",
        *_cautions(outline),
    ]


def _truss(outline: Outline) -> list[str]:
    brief, count = outline.brief, outline.count
    kind = "Plane" if brief.dimensions == 2 else "Space"
    length = Display.of(brief.units).length
    sizes = [max(c) - min(c) for c in zip(*(n.position for n in brief.nodes), strict=True)]
    extent = " by ".join(length.number(size) for size in sizes)
    lines = [
        f"{kind} truss, {extent} {length.label}: {len(brief.nodes)} nodes, {count.members} "
        f"members in {len(brief.groups)} groups, {len(brief.supports)} supported nodes.",
        "Statically determinate: equilibrium alone gives every member force."
        if count.determinate
        else f"Statically indeterminate, {count.redundants} redundant: the member forces depend "
        "on the sections.",
    ]
    lines += _spans(brief)
    small = shown_units(brief.units).movement
    lines += [
        f"Deflection limit {visible(limit.name)}: {visible(limit.limit_text)} = "
        f"{small.text(limit.limit)} along {limit.direction_text} at "
        f"{counted(len(limit.nodes), 'node')} in "
        f"{counted(len(limit.combinations), 'combination')}."
        for limit in brief.deflection_limits
    ]
    return lines


def _spans(brief: Brief) -> list[str]:
    """Return the spans of a plane truss between supports that hold it up."""
    lines = sorted({brief.nodes[s.node].position[0] for s in brief.supports if s.held[-1]})
    if brief.dimensions == 3 or len(lines) < 2:
        return []
    length = Display.of(brief.units).length
    spans = " + ".join(length.number(b - a) for a, b in pairwise(lines))
    return [f"Span {spans} {length.label} between supports that hold it up."]


def _loads(outline: Outline) -> list[str]:
    brief = outline.brief
    lines = ["Load cases, before factors:"]
    for one in outline.cases:
        total = force_text(np.array(one.total), brief.units)
        parts = [f"{total} in all"] if one.case.nodal else []
        parts += ["the weight of the members"] if one.case.self_weight else []
        lines.append(f"  {visible(one.case.name)} ({one.case.kind}): {', and '.join(parts)}")
        lines += [f"    {visible(row.text)}" for row in one.case.stated]
        lines += _reactions(one, brief)
    if outline.reactions_from:
        lines.append(f"Reactions from {outline.reactions_from}, without the weight of the members.")
    else:
        lines.append(
            "More directions are held than equilibrium settles: the reactions depend on the "
            "sections."
        )
    return lines


def _reactions(one: CaseOutline, brief: Brief) -> list[str]:
    if one.reactions is None or not one.case.nodal:
        return []
    parts = [
        f"{visible(brief.nodes[node].name)} {force_text(np.array(force), brief.units)}"
        for node, force in one.reactions.items()
    ]
    return [f"    reactions: {', '.join(parts)}"]


def _combinations(brief: Brief) -> list[str]:
    strength = len(brief.combinations_of("strength"))
    service = len(brief.combinations_of("serviceability"))
    ruled = sum(c.origin != "brief" for c in brief.combinations)
    written = len(brief.combinations) - ruled
    made = f" ({ruled} made by the rule, {written} written out)" if ruled else ""
    return [
        f"{strength} strength and {service} serviceability combinations{made}; "
        f"options: {', '.join(visible(option.name) for option in brief.options)}."
    ]


def _lengths(outline: Outline) -> list[str]:
    length = Display.of(outline.brief.units).length
    rows: list[Sequence[str]] = [("Group", "in plane", "at", "out of plane", "at")]
    rows += [
        (
            visible(one.group),
            length.number(one.in_plane),
            one.in_plane_member,
            length.number(one.out_of_plane),
            one.out_of_plane_member,
        )
        for one in outline.lengths
    ]
    widths = [max(len(row[k]) for row in rows) for k in range(len(rows[0]))]
    lines = [f"Longest buckling lengths ({length.label}):"]
    for row in rows:
        cells = [
            cell.rjust(width) if k in (1, 3) else cell.ljust(width)
            for k, (cell, width) in enumerate(zip(row, widths, strict=True))
        ]
        lines.append("  " + "  ".join(cells).rstrip())
    return lines


def _cautions(outline: Outline) -> list[str]:
    lines = [f"Caution: {visible(text)}" for text in outline.cautions]
    return [*lines, CLOSING]
