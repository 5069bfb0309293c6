"""What is wrong with a truss as a drawing: nodes on top of each other, loose nodes, overlaps."""

from __future__ import annotations

from collections.abc import Sequence
from itertools import pairwise

import numpy as np
from numpy.typing import NDArray

from sizing.brief.findings import Findings, counted, listed
from sizing.brief.groups_and_members import GroupTable
from sizing.brief.model import LoadCase, Member, Node, Support
from sizing.brief.nodes_and_supports import NodeTable

SAME_PLACE = 1e-3
"""m. Nodes closer than 1 mm are one node: no setting-out is finer."""

FloatArray = NDArray[np.float64]


def check_truss(nodes: NodeTable, groups: GroupTable, findings: Findings) -> None:
    """Record coincident nodes, nodes without a member, passed nodes, and several trusses."""
    if len(nodes.nodes) < 2:
        return
    position = np.array([node.position for node in nodes.nodes])
    twins = _coincident(nodes.nodes, position, findings)
    if groups.whole and nodes.whole:
        _loose(nodes.nodes, groups.members, twins, findings)
    passing = _passing(position, groups.members, twins)
    for member, passed in passing.items():
        _add_passing(nodes.nodes, groups, member, passed, findings)
    if nodes.dimensions == 2 and not passing and not twins:
        _caution_crossing(position, groups.members, findings)
    if groups.whole and nodes.whole and not twins:
        _caution_separate(nodes.nodes, groups.members, findings)


def caution_without_load(
    cases: Sequence[LoadCase], supports: Sequence[Support], findings: Findings
) -> None:
    """Say when every load acts on held nodes in held directions, and so strains no member."""
    held = {support.node: support.held for support in supports}
    if not cases or any(case.self_weight for case in cases):
        return
    for case in cases:
        for node, force in case.nodal.items():
            taken = held.get(node, (False,) * len(force))
            if any(f != 0.0 and not fixed for f, fixed in zip(force, taken, strict=True)):
                return
    findings.caution(
        "No load reaches a member: every load acts at a support, in a direction that it holds, "
        "and no load case has self_weight = true."
    )


def _coincident(nodes: Sequence[Node], position: FloatArray, findings: Findings) -> set[int]:
    twins: set[int] = set()
    for i in range(len(nodes) - 1):
        distance = np.linalg.norm(position[i + 1 :] - position[i], axis=1)
        for j in (np.flatnonzero(distance < SAME_PLACE) + i + 1).tolist():
            twins |= {i, j}
            findings.add(
                ("nodes", nodes[j].name),
                found=f"the same place as node {nodes[i].name}",
                expected="nodes at least 1 mm apart",
                fix="Delete one of the two, or correct its coordinates.",
            )
    return twins


def _loose(
    nodes: Sequence[Node], members: Sequence[Member], twins: set[int], findings: Findings
) -> None:
    joined = {end for member in members for end in (member.start, member.end)}
    for i, node in enumerate(nodes):
        if i not in joined and i not in twins:
            findings.add(
                ("nodes", node.name),
                found="a node without any member",
                expected="at least one member at every node",
                fix="Join it, or delete it.",
            )


def _passing(
    position: FloatArray, members: Sequence[Member], twins: set[int]
) -> dict[int, list[int]]:
    """Return, for each member that runs over a node between its ends, those nodes."""
    passed: dict[int, list[int]] = {}
    for i, member in enumerate(members):
        if member.length < SAME_PLACE or {member.start, member.end} & twins:
            continue
        start = position[member.start]
        axis = (position[member.end] - start) / member.length
        along = (position - start) @ axis
        aside = np.linalg.norm(position - start - along[:, None] * axis, axis=1)
        on_line = (aside < SAME_PLACE) & (along > SAME_PLACE) & (along < member.length - SAME_PLACE)
        found = [n for n in np.flatnonzero(on_line).tolist() if n not in twins]
        if found:
            passed[i] = sorted(found, key=lambda n: float(along[n]))
    return passed


def _add_passing(
    nodes: Sequence[Node],
    groups: GroupTable,
    member: int,
    passed: Sequence[int],
    findings: Findings,
) -> None:
    this = groups.members[member]
    group = groups.groups[this.group].name
    line = {this.start, this.end, *passed}
    covered = [m.name for m in groups.members if m is not this and {m.start, m.end} <= line]
    names = listed([nodes[n].name for n in passed])
    over = f", and so over {counted(len(covered), 'member')} {listed(covered)}" if covered else ""
    parts = [nodes[n].name for n in (this.start, *passed, this.end)]
    split = ", ".join(f"{a}-{b}" for a, b in pairwise(parts))
    findings.add(
        ("groups", group, "members"),
        found=f"member {this.name}, which runs over node {names}{over}",
        expected="members that end at every node on their line",
        fix=f"Delete {this.name}." if covered else f"Split it into {split}.",
    )


def _caution_separate(nodes: Sequence[Node], members: Sequence[Member], findings: Findings) -> None:
    """Say that the members fall into parts that share no node, with a node of each."""
    ends = np.array([(m.start, m.end) for m in members], dtype=int).reshape(-1, 2)
    part = np.arange(len(nodes))
    while True:  # every node takes the lowest number that it is joined to
        lowest = part[ends].min(axis=1)
        joined = part.copy()
        np.minimum.at(joined, ends, lowest[:, None])
        joined = joined[joined]  # and the number of that one, which halves long chains
        if (joined == part).all():
            break
        part = joined
    first = sorted(set(part[ends[:, 0]].tolist()))
    if len(first) > 1:
        names = listed([f"with node {nodes[n].name}" for n in first], most=6)
        findings.caution(
            f"The members form {len(first)} separate trusses: one {names.replace(', ', ', one ')}; "
            "they share no node and are sized together."
        )


def _caution_crossing(position: FloatArray, members: Sequence[Member], findings: Findings) -> None:
    """Say which members of a plane truss cross away from a node."""
    crossing = [f"{members[i].name} and {members[k].name}" for i, k in _crossing(position, members)]
    if crossing:
        pairs = listed(crossing, most=6)
        findings.caution(
            f"{counted(len(crossing), 'pair')} of members cross without a node ({pairs}): they "
            "are taken to pass each other freely, each over its whole length; put a node where "
            "they are joined."
        )


def _crossing(position: FloatArray, members: Sequence[Member]) -> list[tuple[int, int]]:
    """Return the pairs of members whose lines cross between their ends."""
    start = position[[m.start for m in members]]
    axis = position[[m.end for m in members]] - start
    margin = SAME_PLACE / np.maximum(np.array([m.length for m in members]), SAME_PLACE)
    found = []
    for i in range(len(members) - 1):
        gap, other = start[i + 1 :] - start[i], axis[i + 1 :]
        turn = _cross(axis[i], other)
        with np.errstate(divide="ignore", invalid="ignore"):  # parallel ones give no number
            here, there = _cross(gap, other) / turn, _cross(gap, axis[i]) / turn
        inside = (here > margin[i]) & (here < 1.0 - margin[i])
        inside &= (there > margin[i + 1 :]) & (there < 1.0 - margin[i + 1 :])
        found += [(i, k + i + 1) for k in np.flatnonzero(inside).tolist()]
    return found


def _cross(a: FloatArray, b: FloatArray) -> FloatArray:
    return np.asarray(a[..., 0] * b[..., 1] - a[..., 1] * b[..., 0])
