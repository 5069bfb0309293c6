"""Point loads that need not stand at a node: refused, or shared between the nodes beside them.

A force F at the distance a along a member of length L is shared by the lever rule,
F (1 − a/L) at its start and F a/L at its end: the same resultant in the same line. The member
then also bends, which a truss of two-force members does not show.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from typing import Any

import numpy as np
from numpy.typing import NDArray

from sizing.brief.chains import members_named
from sizing.brief.findings import Findings, KeyPath, Quantities, counted, quoted, shown
from sizing.brief.load_shares import SpreadLoads
from sizing.brief.model import Member
from sizing.brief.nodes_and_supports import NodeTable
from sizing.brief.raw_tables import RawPointLoad, read_entry
from sizing.brief.stated_loads import force_text, number_with_unit

FloatArray = NDArray[np.float64]

AT_A_NODE = 1e-3
"""m. A load within 1 mm of a node stands at it: no setting-out is finer."""
GREATEST_FORCE = 1e9
"""N. No truss carries 1 GN at one point."""


def read_point_loads(
    path: KeyPath,
    point_loads: Sequence[Any],
    nodes: NodeTable,
    members: Sequence[Member],
    findings: Findings,
    quantities: Quantities,
    loads: SpreadLoads,
    *,
    lump: bool,
) -> None:
    """Add the point loads of one case to ``loads``; members' names serve the messages."""
    for place, value in enumerate(point_loads, start=1):
        here = (*path, "point_loads", place)
        what = 'a table such as { member = "B3-B4", distance = "0.8 m", force = [0.0, -9.6] }'
        entry, faulty = read_entry(RawPointLoad, value, here, findings, what)
        force = None
        if entry is not None and "force" not in faulty:
            force = _force((*here, "force"), entry.force, nodes, findings, quantities)
        if entry is None or faulty:
            loads.good = False
            continue
        found = _place(here, entry, nodes, members, findings, quantities)
        if found is None or force is None:
            loads.good = False
            continue
        _put(here, found, force, nodes, findings, quantities, loads, lump=lump)


def _force(
    path: KeyPath, value: Any, nodes: NodeTable, findings: Findings, quantities: Quantities
) -> FloatArray | None:
    d = nodes.dimensions
    if not isinstance(value, list) or (d and len(value) != d):
        found = counted(len(value), "component") if isinstance(value, list) else shown(value)
        findings.add(path, found=found, expected=f"{d or 2} force components")
        return None
    force = np.array(quantities.vector(path, value, "force"))
    if np.any(np.abs(force) > GREATEST_FORCE):
        findings.add(path, found=shown(value), expected="at most 1000 MN", fix="Check the unit.")
        return None
    return force if np.isfinite(force).all() else None


Place = tuple[int, int, float, float]
"""The two nodes beside a load, its distance from the first, and the distance between them."""


def _place(
    path: KeyPath,
    entry: RawPointLoad,
    nodes: NodeTable,
    members: Sequence[Member],
    findings: Findings,
    quantities: Quantities,
) -> Place | None:
    by_member = entry.member is not None and entry.distance is not None
    if by_member == (entry.position is not None) or (
        entry.position is not None and (entry.member is not None or entry.distance is not None)
    ):
        findings.add(
            path,
            found="a load whose place is not clear",
            expected="member and distance, or position",
        )
        return None
    if entry.position is not None:
        return _at_position(
            (*path, "position"), entry.position, nodes, members, findings, quantities
        )
    return _on_member(path, entry, nodes, members, findings, quantities)


def _on_member(
    path: KeyPath,
    entry: RawPointLoad,
    nodes: NodeTable,
    members: Sequence[Member],
    findings: Findings,
    quantities: Quantities,
) -> Place | None:
    text = str(entry.member)
    distance = quantities.read((*path, "distance"), entry.distance, "length")
    pairs = members_named((*path, "member"), text, nodes.names, findings)
    if pairs is None or distance is None:
        return None
    ends = [nodes.names.index.get(name) for name in pairs[0]]
    start, end = ends
    if start is None or end is None:
        return None
    if len(pairs) > 1 or not any({m.start, m.end} == {start, end} for m in members):
        names = [m.name for m in members]
        findings.add(
            (*path, "member"),
            found=f"{quoted(text)}, which is no member",
            expected="a member of a group",
            fix=findings.did_you_mean(text, names),
        )
        return None
    length = math.dist(nodes.nodes[start].position, nodes.nodes[end].position)
    if not 0.0 <= distance <= length:
        findings.add(
            (*path, "distance"),
            found=shown(entry.distance),
            expected=f"0 to {number_with_unit(length, 'length', quantities.units)}, the length "
            f"of {text}",
        )
        return None
    return start, end, distance, length


def _at_position(
    path: KeyPath,
    value: Any,
    nodes: NodeTable,
    members: Sequence[Member],
    findings: Findings,
    quantities: Quantities,
) -> Place | None:
    d = nodes.dimensions
    if not isinstance(value, list) or len(value) != d:
        found = counted(len(value), "coordinate") if isinstance(value, list) else shown(value)
        findings.add(path, found=found, expected=f"{d} coordinates")
        return None
    point = np.array(quantities.vector(path, value, "length"))
    if not np.isfinite(point).all():
        return None
    for n, node in enumerate(nodes.nodes):
        if math.dist(node.position, point) <= AT_A_NODE:
            return n, n, 0.0, 0.0
    for member in members:
        start = np.array(nodes.nodes[member.start].position)
        axis = (np.array(nodes.nodes[member.end].position) - start) / member.length
        along = float((point - start) @ axis)
        if 0.0 < along < member.length and (
            float(np.linalg.norm(point - start - along * axis)) <= AT_A_NODE
        ):
            return member.start, member.end, along, member.length
    nearest = min(nodes.nodes, key=lambda node: math.dist(node.position, point))
    findings.add(
        path,
        found="a place where neither a node nor a member is",
        expected="a place on the truss",
        fix=f"The nearest node is {nearest.name}.",
    )
    return None


def _put(
    path: KeyPath,
    place: Place,
    force: FloatArray,
    nodes: NodeTable,
    findings: Findings,
    quantities: Quantities,
    loads: SpreadLoads,
    *,
    lump: bool,
) -> None:
    start, end, distance, length = place
    first, second = nodes.nodes[start].name, nodes.nodes[end].name
    units = quantities.units
    if distance <= AT_A_NODE or distance >= length - AT_A_NODE:
        node, name = (start, first) if distance <= AT_A_NODE else (end, second)
        loads.add(node, force)
        text = f"point load {path[-1]} at node {name}: {force_text(force, units)}"
        loads.state(text, force, force)
        return
    where = f"member {first}-{second}, {number_with_unit(distance, 'length', units)} from {first}"
    if not lump:
        loads.good = False
        findings.add(
            path,
            found=f"a load on {where}",
            expected="loads at nodes only",
            fix='Put a node there, or write between_nodes = "lump" before the first table to '
            f"share it between {first} and {second}; the bending of the member is then not "
            "covered.",
        )
        return
    part = distance / length
    loads.add(start, (1.0 - part) * force)
    loads.add(end, part * force)
    applied = (1.0 - part) * force + part * force
    text = (
        f"point load {path[-1]} on {where}: {force_text(force, units)}; at the nodes {first} "
        f"{force_text((1.0 - part) * force, units)}, {second} {force_text(part * force, units)}"
    )
    loads.state(text, force, applied)
    findings.caution(
        f"Load case {path[1]}: the load on {where} is shared between {first} and {second}; the "
        "bending of the member between its nodes is not covered."
    )
