"""Load cases of a brief: from the tables as written to records in SI units."""

from __future__ import annotations

import math
from collections.abc import Mapping, Sequence
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
from sizing.brief.load_shares import SpreadLoads
from sizing.brief.model import LoadCase, Member
from sizing.brief.name_ranges import nodes_named
from sizing.brief.nodes_and_supports import NodeTable
from sizing.brief.point_loads import read_point_loads
from sizing.brief.raw_tables import RawCase, read_entry
from sizing.brief.spread_loads import read_spread_loads

GREATEST_FORCE = 1e9
"""N. No truss node carries 1 GN: such a force is in another unit than the brief says."""

LOADS = frozenset({"nodal", "area_loads", "line_loads", "point_loads", "self_weight"})
"""Keys of a load case of which one at least must be given."""

GRAVITY_KINDS = ("permanent", "imposed", "imposed roof", "snow")


@dataclass(frozen=True, kw_only=True)
class CaseTable:
    """The load cases and their names. ``whole``: all were read without a mistake."""

    cases: tuple[LoadCase, ...]
    names: Names
    whole: bool


def read_cases(
    raw: dict[str, Any],
    nodes: NodeTable,
    members: Sequence[Member],
    findings: Findings,
    quantities: Quantities,
    *,
    present: bool,
    lump: bool = False,
) -> CaseTable:
    """Return the load cases in the order of the brief.

    ``lump``: loads on a member between its nodes are shared between the two, else refused.
    """
    names = Names(findings, "load case", raw, complete=present)
    before, loads_known = len(findings), True
    if present and not raw:
        findings.add(("cases",), found="an empty table", expected="at least one load case")
    cases: list[LoadCase] = []
    for name, value in raw.items():
        path: KeyPath = ("cases", name)
        findings.check_name(path, name, "load case")
        entry, faulty = read_entry(
            RawCase, value, path, findings, 'a table such as { kind = "snow", nodal = { ... } }'
        )
        if entry is None:
            continue
        nodal, good = _read_nodal(entry, (*path, "nodal"), nodes, findings, quantities)
        loads = read_spread_loads(
            path, entry.area_loads, entry.line_loads, nodes, findings, quantities
        )
        read_point_loads(
            path, entry.point_loads, nodes, members, findings, quantities, loads, lump=lump
        )
        loads_known = loads_known and good and loads.good
        if not any(getattr(entry, key) for key in LOADS) and not faulty & LOADS:
            findings.add(
                path,
                found="a load case without loads",
                expected="nodal = { ... }, area_loads, line_loads, point_loads or "
                "self_weight = true",
            )
        if entry.may_be_absent and entry.kind != "permanent" and "kind" not in faulty:
            findings.add(
                (*path, "may_be_absent"),
                found=f"true in a case of kind {quoted(entry.kind)}",
                expected="true for permanent loads only",
                fix="Every other load may be absent as it is.",
            )
        names.index[name] = len(cases)
        cases.append(
            LoadCase(
                name=name,
                kind=entry.kind,
                nodal=_joined(nodal, loads),
                self_weight=entry.self_weight,
                duration=entry.duration,
                action=entry.action,
                alternative_set=entry.alternative_set,
                may_be_absent=entry.may_be_absent,
                stated=tuple(loads.stated),
            )
        )
    whole = present and loads_known and len(findings) == before
    if whole:
        _check_cases(cases, findings)
    return CaseTable(cases=tuple(cases), names=names, whole=whole)


def _joined(
    nodal: Mapping[int, tuple[float, ...]], loads: SpreadLoads
) -> dict[int, tuple[float, ...]]:
    """Return the forces given at nodes together with the shares of the other loads."""
    joined = dict(nodal)
    for node, force in loads.nodal.items():
        before = joined.get(node, (0.0,) * len(force))
        joined[node] = tuple(a + b for a, b in zip(before, force.tolist(), strict=True))
    return joined


def _read_nodal(
    entry: RawCase, path: KeyPath, nodes: NodeTable, findings: Findings, quantities: Quantities
) -> tuple[dict[int, tuple[float, ...]], bool]:
    """Return the forces by node, and whether all are good."""
    nodal: dict[int, tuple[float, ...]] = {}
    good = True
    for name, value in entry.nodal.items():
        place = (*path, name)
        if name not in nodes.names.declared and "-" in name:
            findings.add(
                place,
                found=f"a load on {quoted(name)}",
                expected="a node",
                fix="Loads on a member stand in point_loads or line_loads.",
            )
            good = False
            continue
        found = nodes_named(place, name, nodes.names, findings)
        wanted = nodes.dimensions
        if not isinstance(value, list) or (wanted and len(value) != wanted):
            what = f"{wanted or 2} force components"
            example = [0.0, 0.0, -9.6][-(wanted or 2) :]
            given = counted(len(value), "component") if isinstance(value, list) else shown(value)
            findings.add(place, found=given, expected=f"{what}, such as {example}")
            good = False
            continue
        force = quantities.vector(place, value, "force")
        for component, f in enumerate(force, start=1):
            if abs(f) > GREATEST_FORCE:
                findings.add(
                    (*place, component),
                    found=f"a force of {f / 1e6:.6g} MN",
                    expected="at most 1000 MN",
                    fix="Check the unit of force.",
                )
        if found is None or not all(math.isfinite(f) for f in force):
            good = False
            continue
        loaded = [nodes.names.index[node] for node in found if node in nodes.names.index]
        good = good and len(loaded) == len(found)
        twice = [nodes.nodes[node].name for node in loaded if node in nodal]
        if twice:
            findings.add(
                place,
                found=f"a second load on {listed(twice)}",
                expected="each node once, named itself or through a range",
                fix="Shorten the range, or add the loads.",
            )
        nodal |= dict.fromkeys(loaded, force)
    return nodal, good


def _check_cases(cases: list[LoadCase], findings: Findings) -> None:
    """Record a brief without any load but self-weight; caution against likely slips."""
    if not any(any(force) for case in cases for force in case.nodal.values()):
        findings.add(
            ("cases",),
            found="no load other than self-weight",
            expected="at least one load that is not zero",
        )
        return
    for case in cases:
        total = sum(force[-1] for force in case.nodal.values())
        if case.nodal and not any(any(force) for force in case.nodal.values()):
            findings.caution(f"Load case {case.name}: all its nodal forces are zero.")
        if case.kind in GRAVITY_KINDS and total > 0.0:
            findings.caution(
                f"Load case {case.name} ({case.kind}) acts upwards in all; forces count positive "
                "along the axes, so a load that acts downwards is negative."
            )
        if case.self_weight and case.kind != "permanent":
            findings.caution(
                f"Load case {case.name}: self-weight stands in a case of kind {quoted(case.kind)}."
            )
