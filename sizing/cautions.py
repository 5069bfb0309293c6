"""The cautions that go with every answer, each with the members and combinations concerned."""

from __future__ import annotations

from sizing.brief.model import Brief, Option
from sizing.results import MemberResult
from sizing.standards.contract import Standard

ALWAYS = (
    "Joints, gussets, welds, bolts, plates and their local effects are not designed here; the "
    "member forces at each joint are listed for whoever designs them.",
    "Members are taken as pin-ended two-force bars whose centre lines meet at the nodes: no "
    "eccentricity, no joint stiffness, no bending from loads between nodes.",
    "Loads act at nodes only. Bending of chords loaded between nodes is not covered.",
    "Deflections are elastic and pin-jointed; slip in the joints is not included.",
    "Stability of the truss as a whole out of its plane, and of the bracing that the restraints "
    "rely on, is not checked. Restraint without diagonal bracing is no restraint.",
    "Handling, lifting, transport and temporary states, fatigue, fire, corrosion, vibration and "
    "accidental loss of a member are not checked.",
    "Availability of the sections and stock lengths must be confirmed with the supplier.",
    "A licensed engineer must check this design against the code in force at the site before it "
    "is used.",
)


def cautions_for(
    brief: Brief, option: Option, standard: Standard, members: tuple[MemberResult, ...]
) -> tuple[str, ...]:
    """Return every caution of one answer: specific ones first, then those that always hold."""
    return (
        *_restraint(brief, members),
        *_reversal(members),
        *_absent_actions(brief),
        *_self_weight(brief, option),
        *_no_creep(brief, standard),
        *brief.cautions,
        *standard.cautions(),
        *ALWAYS,
    )


def _restraint(brief: Brief, members: tuple[MemberResult, ...]) -> list[str]:
    lines = []
    for group in brief.groups:
        lengths = sorted({round(members[i].out_of_plane, 3) for i in group.members})
        spread = (
            f"{lengths[0]:.2f} m"
            if len(lengths) == 1
            else f"{lengths[0]:.2f} to {lengths[-1]:.2f} m"
        )
        longer = any(members[i].out_of_plane > members[i].length * 1.001 for i in group.members)
        if longer:
            lines.append(
                f"Group {group.name}: restraint out of plane is assumed so that the buckling "
                f"length is {spread}; it must be shown on the drawings and built."
            )
    return lines


def _reversal(members: tuple[MemberResult, ...]) -> list[str]:
    turned: dict[str, list[MemberResult]] = {}
    for member in members:
        if member.reversal:
            turned.setdefault(member.group, []).append(member)
    lines = []
    for group, found in turned.items():
        pairs = [(m.compression.force, m) for m in found if m.compression is not None]
        force, worst = min(pairs, key=lambda pair: pair[0])
        combination = worst.compression.combination if worst.compression else ""
        lines.append(
            f"Group {group}: {_members(len(found))} between tension and compression; the "
            f"greatest compression is {abs(force) / 1e3:.1f} kN in {worst.mark}, combination "
            f"{combination}, with restraint out of plane every {worst.out_of_plane:.2f} m assumed."
        )
    return lines


def _members(number: int) -> str:
    return "1 member changes" if number == 1 else f"{number} members change"


def _absent_actions(brief: Brief) -> list[str]:
    kinds = {case.kind for case in brief.cases}
    lines = [
        f"The brief holds no {kind} load case; confirm that none is needed."
        for kind in ("snow", "wind")
        if kind not in kinds
    ]
    if sum(case.kind == "snow" for case in brief.cases) == 1:
        lines.append(
            "Only one snow arrangement is given; one-sided and drifted snow often governs webs."
        )
    upward = any(
        case.kind == "wind" and sum(force[-1] for force in case.nodal.values()) > 0.0
        for case in brief.cases
    )
    if "wind" in kinds and not upward:
        lines.append("No wind case lifts the truss; confirm that uplift cannot govern.")
    return lines


def _no_creep(brief: Brief, standard: Standard) -> list[str]:
    """Say which deflection limits leave out the creep that the material has.

    A limit beside which another one holds the same nodes and direction with creep is complete.
    """
    limits = brief.deflection_limits
    with_creep = {
        (frozenset(limit.nodes), limit.direction, limit.relative_to)
        for limit in limits
        if limit.component != "instantaneous"
    }
    elastic = [
        limit.name
        for limit in limits
        if limit.component == "instantaneous"
        and (frozenset(limit.nodes), limit.direction, limit.relative_to) not in with_creep
    ]
    if standard.material.creep == 0.0 or not elastic:
        return []
    return [
        f"Deflections without creep in {', '.join(elastic)}: under lasting load this material "
        f"deflects {1.0 + standard.material.creep:.2f} times as far; write component = "
        '"final" in the limit, or in a second one, to check that.'
    ]


def _self_weight(brief: Brief, option: Option) -> list[str]:
    if not any(case.self_weight for case in brief.cases):
        return ["Self-weight of the members is in no load case."]
    if option.connection_allowance == 0.0:
        return [
            "Self-weight and mass are those of the bare members; nothing is added for gussets, "
            "welds, bolts and fittings."
        ]
    return [
        f"Self-weight includes an allowance of {option.connection_allowance:.0%} for connections; "
        "the masses in the schedule do not."
    ]
