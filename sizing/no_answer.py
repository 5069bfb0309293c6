"""Why an option has no answer: which member, which combination, how far the best falls short."""

from __future__ import annotations

import numpy as np

from sizing.formulation import Formulation
from sizing.selection.outcome import Pick, Shortfall

PROVEN = "proven infeasible"
"""Words in the method of a pick that tell a proof from a search that found nothing."""

MOST_REASONS = 3
"""Reasons named; sections of one catalogue are mostly left out for the same one or two."""


def why_none(formulation: Formulation, picked: Pick) -> str:
    """Say which member, which combination, and how far the best section falls short."""
    option, fall = formulation.option.name, picked.shortfall
    if picked.status == "stopped":
        return (
            f"option {option}: stopped after {picked.seconds:.0f} s before any adequate design was "
            "found; allow more time"
        )
    found = (
        "no choice of sections passes every check"
        if fall is None
        else _shortfall_text(formulation, fall)
    )
    proven = "" if PROVEN in picked.method else " (that nothing else fits is not proven)"
    return f"option {option}: {found}{proven}"


def _shortfall_text(formulation: Formulation, fall: Shortfall) -> str:
    brief, catalogue = formulation.brief, formulation.catalogue
    section = f" with {catalogue.designation[fall.section]}" if fall.section is not None else ""
    how_far = (
        f"no section has any resistance there{_reasons(formulation, fall)}"
        if np.isinf(fall.utilisation)
        else f"utilisation is at best {fall.utilisation:.3f}"
    )
    if fall.kind == "deflection" and fall.row is not None:
        limit, node, c = formulation.deflection_keys[fall.row]
        return (
            f"no choice of sections keeps deflection limit {brief.deflection_limits[limit].name!r} "
            f"at node {brief.nodes[node].name} in combination {brief.combinations[c].name}: "
            f"{how_far}{section}; give the truss more depth, relax the limit, or add heavier "
            "sections to the catalogue"
        )
    if fall.member is not None and fall.combination is not None:
        member = brief.members[fall.member]
        combination = brief.combinations[formulation.strength[fall.combination]]
        return (
            f"no section of catalogue {catalogue.name} is adequate for member {member.name} "
            f"(group {brief.groups[member.group].name}) in {fall.kind}, combination "
            f"{combination.name}: {how_far}{section}; add heavier sections, a higher grade, or "
            "closer restraint"
        )
    return "no choice of sections passes every check"


def _reasons(formulation: Formulation, fall: Shortfall) -> str:
    """Return why sections were left out for the member that has no resistance at all."""
    if fall.member is None:
        return ""
    table = formulation.table
    notes, counts = np.unique(table.notes[fall.member], return_counts=True)
    named = [
        f"{table.reasons[note]} ({count} sections)"
        for note, count in sorted(zip(notes, counts, strict=True), key=lambda pair: -pair[1])
        if table.reasons[note]
    ]
    return f" ({'; '.join(named[:MOST_REASONS])})" if named else ""
