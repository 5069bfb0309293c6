"""Why an option has no answer: which member, which combination, how far the best falls short."""

from __future__ import annotations

import numpy as np

from sizing.formulation import Formulation
from sizing.selection.outcome import Pick, Shortfall


def why_none(formulation: Formulation, picked: Pick) -> str:
    """Say which member, which combination, and how far the best section falls short."""
    option, fall = formulation.option.name, picked.shortfall
    if picked.status == "stopped":
        return (
            f"option {option}: stopped after {picked.seconds:.0f} s before any adequate design was "
            "found; allow more time"
        )
    if fall is None:
        return f"option {option}: no choice of sections passes every check"
    return f"option {option}: {_shortfall_text(formulation, fall)}"


def _shortfall_text(formulation: Formulation, fall: Shortfall) -> str:
    brief, catalogue = formulation.brief, formulation.catalogue
    section = f" with {catalogue.designation[fall.section]}" if fall.section is not None else ""
    how_far = (
        "no section has any resistance there"
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
