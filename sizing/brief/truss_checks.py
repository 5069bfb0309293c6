"""What is wrong with a truss as a drawing: nodes on top of each other, loose nodes, overlaps."""

from __future__ import annotations

from collections.abc import Sequence
from itertools import pairwise

import numpy as np
from numpy.typing import NDArray

from sizing.brief.findings import Findings, counted, listed
from sizing.brief.groups_and_members import GroupTable
from sizing.brief.model import Member, Node
from sizing.brief.nodes_and_supports import NodeTable

SAME_PLACE = 1e-3
"""m. Nodes closer than 1 mm are one node: no setting-out is finer."""

FloatArray = NDArray[np.float64]


def check_truss(nodes: NodeTable, groups: GroupTable, findings: Findings) -> None:
    """Record coincident nodes, nodes without a member, and nodes passed by a member."""
    if len(nodes.nodes) < 2:
        return
    position = np.array([node.position for node in nodes.nodes])
    twins = _coincident(nodes.nodes, position, findings)
    if groups.whole and nodes.whole:
        _loose(nodes.nodes, groups.members, twins, findings)
    for member, passed in _passing(position, groups.members, twins).items():
        _add_passing(nodes.nodes, groups, member, passed, findings)


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
