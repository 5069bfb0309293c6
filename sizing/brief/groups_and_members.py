"""Groups and members of a brief: from the tables as written to records in SI units."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass, replace
from typing import Any

from sizing.brief.buckling import read_buckling_length
from sizing.brief.chains import members_named
from sizing.brief.findings import Findings, KeyPath, Names, Quantities, quoted
from sizing.brief.limits import read_fraction, read_slenderness
from sizing.brief.marks import member_marks
from sizing.brief.model import BucklingLength, Group, Member
from sizing.brief.name_ranges import all_nodes_named
from sizing.brief.nodes_and_supports import NodeTable
from sizing.brief.order_lengths import read_end_deduction, read_order_step
from sizing.brief.raw_tables import RawGroup, read_entry
from sizing.brief.restraint import restrained_lengths

MOST_MEMBERS = 5_000


@dataclass(frozen=True, kw_only=True)
class GroupTable:
    """The groups and their members, and the groups' names.

    ``whole``: every member of every group is good, so that what is missing is missing indeed.
    """

    groups: tuple[Group, ...]
    members: tuple[Member, ...]
    names: Names
    whole: bool


@dataclass(kw_only=True)
class _Draft:
    """A group on its way: the raw entry, its faulty keys, its members' end nodes.

    ``sound``: all members and restrained nodes are good, so that the chain of members and its
    restraints may be judged without follow-on noise.
    """

    name: str
    entry: RawGroup
    faulty: frozenset[str]
    ends: list[tuple[int, int]]
    sound: bool
    restrained: list[int]


def read_groups(
    raw: dict[str, Any],
    nodes: NodeTable,
    findings: Findings,
    quantities: Quantities,
    *,
    present: bool,
    reserved: Sequence[str] = (),
) -> GroupTable:
    """Return groups and members, members in the order of the groups and of their lists.

    Marks keep clear of the names of nodes and of those in ``reserved``.
    """
    names = Names(findings, "group", raw, complete=present)
    if present and not raw:
        findings.add(("groups",), found="an empty table", expected="at least one group of members")
    drafts: list[_Draft] = []
    seen: dict[frozenset[str], str] = {}
    whole = present
    for name, value in raw.items():
        findings.check_name(("groups", name), name, "group")
        entry, faulty = read_entry(
            RawGroup, value, ("groups", name), findings, "a table with the members of the group"
        )
        if entry is None:
            whole = False
            continue
        ends, all_good = _read_members(name, entry, faulty, nodes, findings, seen)
        whole = whole and all_good
        names.index[name] = len(drafts)
        restrained, known = all_nodes_named(
            ("groups", name, "restrained_nodes"), entry.restrained_nodes, nodes.names, findings
        )
        drafts.append(
            _Draft(
                name=name,
                entry=entry,
                faulty=faulty,
                ends=ends,
                sound=all_good and known and "restrained_nodes" not in faulty,
                restrained=restrained,
            )
        )
    if len(seen) > MOST_MEMBERS:
        findings.add(("groups",), found=f"{len(seen)} members", expected=f"at most {MOST_MEMBERS}")
        return GroupTable(groups=(), members=(), names=names, whole=False)
    members = _make_members(drafts, nodes, reserved)
    groups, members = _make_groups(drafts, members, nodes, names, findings, quantities)
    return GroupTable(groups=tuple(groups), members=tuple(members), names=names, whole=whole)


def _read_members(
    group: str,
    entry: RawGroup,
    faulty: frozenset[str],
    nodes: NodeTable,
    findings: Findings,
    seen: dict[frozenset[str], str],
) -> tuple[list[tuple[int, int]], bool]:
    path: KeyPath = ("groups", group, "members")
    all_good = "members" not in faulty and bool(entry.members)
    if not entry.members and "members" not in faulty:
        findings.add(
            path, found="an empty list", expected="at least one member", fix="Delete the group."
        )
    ends: list[tuple[int, int]] = []
    for place, text in enumerate(entry.members, start=1):
        here = (*path, place)
        pairs = None if text is None else members_named(here, text, nodes.names, findings)
        if text is None or pairs is None:
            all_good = False
            continue
        for start, end in pairs:
            key = frozenset((start, end))
            if key not in seen:
                seen[key] = findings.place(here)
                if start in nodes.names.index and end in nodes.names.index:
                    ends.append((nodes.names.index[start], nodes.names.index[end]))
                else:
                    all_good = False
                continue
            which = f"{start}-{end} of {quoted(text)}" if len(pairs) > 1 else quoted(text)
            findings.add(
                here,
                found=f"member {which}, which stands already in {seen[key]}",
                expected="each member once, in one group",
                fix="Delete one of the two." if len(pairs) == 1 else "Shorten one of the two.",
            )
    return ends, all_good


def _make_members(drafts: list[_Draft], nodes: NodeTable, reserved: Sequence[str]) -> list[Member]:
    names = [*(node.name for node in nodes.nodes), *reserved]
    marks = member_marks([d.name for d in drafts], [len(d.ends) for d in drafts], names)
    return [
        Member(
            name=f"{nodes.nodes[start].name}-{nodes.nodes[end].name}",
            mark=mark,
            start=start,
            end=end,
            group=g,
            length=math.dist(nodes.nodes[start].position, nodes.nodes[end].position),
        )
        for g, draft in enumerate(drafts)
        for (start, end), mark in zip(draft.ends, marks[g], strict=True)
    ]


def _make_groups(
    drafts: list[_Draft],
    members: list[Member],
    nodes: NodeTable,
    names: Names,
    findings: Findings,
    quantities: Quantities,
) -> tuple[list[Group], list[Member]]:
    own = {g: [i for i, m in enumerate(members) if m.group == g] for g in range(len(drafts))}
    free = [_free_ends(d, nodes, findings, quantities) for d in drafts]
    groups = []
    for g, draft in enumerate(drafts):
        group = _plain_group(draft, own[g], members, findings, quantities)
        path: KeyPath = ("groups", draft.name)
        others = names.resolve_all((*path, "continues_in"), draft.entry.continues_in)
        if not draft.entry.restrained_nodes:
            _must_be_alone(path, draft, findings)
        elif all(drafts[k].sound for k in (g, *others)):
            chain = list(dict.fromkeys(i for k in (g, *others) for i in own[k]))
            held = list(dict.fromkeys(n for k in (g, *others) for n in drafts[k].restrained))
            ends = {n: factor for k in (*others, g) for n, factor in free[k].items()}
            lengths = restrained_lengths(
                path, [members[i] for i in chain], len(own[g]), held, ends, nodes, findings
            )
            spans = dict(zip(own[g], lengths, strict=True))
            for i, length in spans.items():
                members[i] = replace(members[i], out_of_plane=length)
            group = replace(
                group,
                out_of_plane=BucklingLength(rule="length", value=max(spans.values(), default=1.0)),
                restrained_nodes=tuple(draft.restrained),
            )
        groups.append(group)
    return groups, members


def _must_be_alone(path: KeyPath, draft: _Draft, findings: Findings) -> None:
    """Record the keys that say nothing without restrained nodes."""
    for key in ("unrestrained_ends", "continues_in"):
        if getattr(draft.entry, key) and "restrained_nodes" not in draft.faulty:
            findings.add(
                (*path, key),
                found=f"{key} without restrained_nodes",
                expected="restrained_nodes in the same group",
            )


def _free_ends(
    draft: _Draft, nodes: NodeTable, findings: Findings, quantities: Quantities
) -> dict[int, float]:
    ends: dict[int, float] = {}
    for name, value in draft.entry.unrestrained_ends.items():
        place: KeyPath = ("groups", draft.name, "unrestrained_ends", name)
        node = nodes.names.resolve(place, name)
        factor = quantities.read(place, value, "dimensionless")
        if factor is not None and not 1.0 <= factor <= 10.0:
            findings.add(
                place,
                found=f"{factor:g}",
                expected="a factor from 1 to 10 on the distance to the next restrained node",
                fix="A free cantilever end has 2.0.",
            )
        elif node is not None and factor is not None:
            ends[node] = factor
    return ends


def _plain_group(
    draft: _Draft,
    own: list[int],
    members: list[Member],
    findings: Findings,
    quantities: Quantities,
) -> Group:
    entry, path = draft.entry, ("groups", draft.name)
    in_plane, out_of_plane = read_buckling_length(
        path,
        entry,
        [members[i].length for i in own],
        findings,
        quantities,
        given="buckling_length" not in draft.faulty,
    )
    slenderness = (
        None
        if entry.slenderness_limits is None
        else read_slenderness(
            (*path, "slenderness_limits"), entry.slenderness_limits, findings, quantities
        )
    )
    return Group(
        name=draft.name,
        members=tuple(own),
        in_plane=in_plane,
        out_of_plane=out_of_plane,
        depth_in_plane=entry.section_depth == "in plane",
        net_section_factor=read_fraction(
            (*path, "net_section_factor"), entry.net_section_factor, findings, quantities
        ),
        utilisation_cap=read_fraction(
            (*path, "utilisation_cap"), entry.utilisation_cap, findings, quantities
        ),
        slenderness=slenderness,
        families=_words(entry.families, (*path, "families"), findings),
        designations=_words(entry.sections, (*path, "sections"), findings),
        end_deduction=read_end_deduction(
            path, entry, [members[i].length for i in own], findings, quantities
        ),
        order_step=read_order_step(path, entry, findings, quantities),
        continuous=entry.continuous,
        splices=entry.splices,
    )


def _words(words: list[str | None], path: KeyPath, findings: Findings) -> tuple[str, ...]:
    for place, word in enumerate(words, start=1):
        if word is not None and not word.strip():
            findings.add((*path, place), found="an empty text", expected="a name or a pattern")
    return tuple(word for word in words if word is not None)
