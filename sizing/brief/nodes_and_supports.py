"""Nodes and supports of a brief: from the tables as written to records in SI units."""

from __future__ import annotations

import math
import re
from collections import Counter
from dataclasses import dataclass
from typing import Any

from sizing.brief.findings import (
    Findings,
    KeyPath,
    Names,
    Quantities,
    counted,
    listed,
    quoted,
    shown,
)
from sizing.brief.model import Node, Support
from sizing.brief.name_ranges import nodes_named
from sizing.brief.raw_tables import RawBrief, RawSupport, read_entry

AXES = ("x", "y", "z")
FARTHEST = 10_000.0
"""m. No truss is 10 km long: such a coordinate is in another unit than the brief says."""
SMALLEST_TRUSS = 0.05
"""m. A truss smaller than a hand is in another unit than the brief says."""
MOST_NODES = 5_000
NODE_NAME = re.compile(r"[\w.']{1,24}")
NODE_NAME_TEXT = "a name of letters, digits, _ . and ' only (the hyphen joins two nodes)"


@dataclass(frozen=True, kw_only=True)
class NodeTable:
    """The good nodes, the names, and the number of coordinates (0 while unknown).

    ``whole``: every node of the table is good, so that what is missing is missing indeed.
    """

    nodes: tuple[Node, ...]
    names: Names
    dimensions: int
    whole: bool

    @property
    def axes(self) -> tuple[str, ...]:
        """The names of the axes; the last one points up."""
        return AXES[: self.dimensions]


def read_nodes(
    raw: dict[str, Any], findings: Findings, quantities: Quantities, *, present: bool
) -> NodeTable:
    """Return the nodes; all must have the same number of coordinates, 2 or 3."""
    own = [name for name in raw if name not in RawBrief.model_fields]
    names = Names(findings, "node", own, complete=present)
    before = len(findings)
    if present and not raw:
        findings.add(("nodes",), found="an empty table", expected="at least two nodes")
    if len(raw) > MOST_NODES:
        findings.add(("nodes",), found=f"{len(raw)} nodes", expected=f"at most {MOST_NODES}")
        raw = {}
    written = {n: v for n, v in raw.items() if _is_point(n, v, findings)}
    sizes = Counter(len(v) for v in written.values())
    dimensions = max(sizes, key=lambda size: (sizes[size], -size), default=0)
    nodes: list[Node] = []
    for name, values in written.items():
        path: KeyPath = ("nodes", name)
        if len(values) != dimensions:
            findings.add(
                path,
                found=counted(len(values), "coordinate"),
                expected=f"{dimensions} coordinates, as most nodes have",
            )
            continue
        position = quantities.vector(path, values, "length")
        _must_be_near(path, position, findings)
        if all(math.isfinite(x) and abs(x) <= FARTHEST for x in position):
            names.index[name] = len(nodes)
            nodes.append(Node(name=name, position=position))
    whole = present and len(findings) == before
    if whole and nodes:
        _must_have_size(nodes, findings)
    return NodeTable(nodes=tuple(nodes), names=names, dimensions=dimensions, whole=whole)


def _is_point(name: str, value: Any, findings: Findings) -> bool:
    path: KeyPath = ("nodes", name)
    if name in RawBrief.model_fields:
        findings.add(
            path,
            found=shown(value),
            expected="2 or 3 coordinates",
            fix=f"A key of the whole brief stands before the first table: move {name} there.",
        )
        return False
    if not NODE_NAME.fullmatch(name):
        findings.add(path, found=f"the node name {quoted(name)}", expected=NODE_NAME_TEXT)
    if not isinstance(value, list) or len(value) not in (2, 3):
        found = counted(len(value), "coordinate") if isinstance(value, list) else shown(value)
        findings.add(path, found=found, expected="2 or 3 coordinates, such as [0.0, 2.5]")
        return False
    return True


def _must_be_near(path: KeyPath, position: tuple[float, ...], findings: Findings) -> None:
    for place, x in enumerate(position, start=1):
        if abs(x) > FARTHEST:
            findings.add(
                (*path, place),
                found=f"a coordinate of {x / 1000:.6g} km",
                expected="at most 10 km",
                fix="Check the unit of length.",
            )


def _must_have_size(nodes: list[Node], findings: Findings) -> None:
    columns = list(zip(*(n.position for n in nodes), strict=True))
    extent = max(max(c) - min(c) for c in columns)
    if len(nodes) > 1 and extent < SMALLEST_TRUSS:
        findings.add(
            ("nodes",),
            found=f"a truss that measures {extent * 1000:.3g} mm",
            expected=f"at least {SMALLEST_TRUSS * 1000:.0f} mm",
            fix="Check the unit of length.",
        )


def read_supports(
    raw: dict[str, Any], nodes: NodeTable, findings: Findings, *, present: bool
) -> tuple[Support, ...]:
    """Return the supports in the order of the brief; a range or pattern names many nodes."""
    if present and not raw:
        findings.add(
            ("supports",),
            found="an empty table",
            expected='at least one support, such as A0 = { held = ["x", "y"] }',
        )
    supports: list[Support] = []
    for name, value in raw.items():
        path: KeyPath = ("supports", name)
        if name in RawBrief.model_fields and name not in nodes.names.declared:
            findings.add(
                path,
                found=shown(value),
                expected="a support of a node",
                fix=f"A key of the whole brief stands before the first table: move {name} there.",
            )
            continue
        found = nodes_named(path, name, nodes.names, findings) or []
        entry, faulty = read_entry(
            RawSupport, value, path, findings, 'a table such as { held = ["x", "y"] }'
        )
        if entry is None:
            continue
        held = _directions(entry, faulty, (*path, "held"), nodes, findings)
        if any(held):
            supports += [
                Support(node=nodes.names.index[node], held=held)
                for node in found
                if node in nodes.names.index
            ]
    _must_be_held_once(supports, nodes, findings)
    return tuple(supports)


def _must_be_held_once(supports: list[Support], nodes: NodeTable, findings: Findings) -> None:
    times = Counter(support.node for support in supports)
    twice = [nodes.nodes[node].name for node, count in times.items() if count > 1]
    if twice:
        findings.add(
            ("supports",),
            found=f"{counted(len(twice), 'node')} held by two entries: {listed(twice)}",
            expected="each node once, named itself or through a range",
        )


def _directions(
    entry: RawSupport,
    faulty: frozenset[str],
    path: KeyPath,
    nodes: NodeTable,
    findings: Findings,
) -> tuple[bool, ...]:
    axes = nodes.axes
    wanted = ["" if axis is None else axis.lower() for axis in entry.held]
    if not wanted and "held" not in faulty:
        findings.add(path, found="an empty list", expected='directions held, such as ["x", "y"]')
    for place, axis in enumerate(wanted, start=1):
        if not axis:
            continue
        if axes and axis not in axes:
            findings.add(
                (*path, place),
                found=quoted(axis),
                expected=f"one of {listed(axes)}: the nodes have {len(axes)} coordinates",
                fix=f"In a plane truss {axes[-1]} points up.",
            )
        if axis in wanted[: place - 1]:
            findings.add(
                (*path, place),
                found=f"{quoted(axis)} for the second time",
                expected="each direction once",
                fix="Delete it.",
            )
    return tuple(axis in wanted for axis in axes)
