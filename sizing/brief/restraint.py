"""Buckling lengths out of plane from the nodes that are held sideways.

The members of a chord form a chain. Between two neighbouring restrained nodes the chord can
bow sideways in one half wave, so that the buckling length of each member in between is the
distance from the one to the other along the chain (common practice).
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence

from sizing.brief.findings import Findings, KeyPath, listed
from sizing.brief.model import Member
from sizing.brief.nodes_and_supports import NodeTable


def restrained_lengths(
    group: KeyPath,
    members: Sequence[Member],
    own: int,
    restrained: Sequence[int],
    free_ends: Mapping[int, float],
    nodes: NodeTable,
    findings: Findings,
) -> list[float]:
    """Return the buckling length out of plane in m of the first ``own`` of ``members``.

    ``members`` are the group's own and after them those of the groups that carry the chain on.
    ``free_ends`` gives, for chain ends that nothing holds, the factor on the distance to the
    next restrained node. Where the chain branches or an end is neither restrained nor declared
    free, the mistake is recorded and the member keeps its own length.
    """
    at: dict[int, list[int]] = {}
    for i, member in enumerate(members):
        at.setdefault(member.start, []).append(i)
        at.setdefault(member.end, []).append(i)
    names = [node.name for node in nodes.nodes]
    _must_be_on_chain(group, at, restrained, free_ends, names, findings)
    lengths = [member.length for member in members]
    if _branches(group, at, names, findings):
        return lengths[:own]
    stops = set(restrained)
    loose: list[str] = []
    done: set[int] = set()
    for i in range(own):
        if i in done:
            continue
        run, ends = _run(i, members, at, stops)
        done.update(run)
        total = sum(members[k].length for k in run)
        open_ends = [end for end in ends if end not in stops]
        factor = 1.0
        for end in open_ends:
            if end in free_ends and len(open_ends) == 1:
                factor = free_ends[end]
            elif names[end] not in loose:
                loose.append(names[end])
        for k in run:
            lengths[k] = factor * total
    if loose:
        _add_loose_ends(group, loose, findings)
    return lengths[:own]


def _run(
    first: int, members: Sequence[Member], at: Mapping[int, Sequence[int]], stops: set[int]
) -> tuple[list[int], list[int]]:
    """Return the members joined to ``first`` without passing a stop, and the two end nodes."""
    run, ends = [first], []
    for node in (members[first].start, members[first].end):
        here, last = node, first
        while here not in stops:
            onward = [k for k in at[here] if k != last]
            if not onward or onward[0] in run:
                break
            last = onward[0]
            run.append(last)
            here = members[last].end if members[last].start == here else members[last].start
        ends.append(here)
    return run, ends


def _must_be_on_chain(
    group: KeyPath,
    at: Mapping[int, Sequence[int]],
    restrained: Sequence[int],
    free_ends: Mapping[int, float],
    names: Sequence[str],
    findings: Findings,
) -> None:
    astray = [names[n] for n in restrained if n not in at]
    if astray:
        findings.add(
            (*group, "restrained_nodes"),
            found=f"{listed(astray)}, where no member of the chain ends",
            expected="nodes of the group's members, or of the groups named in continues_in",
        )
    for end in free_ends:
        if len(at.get(end, ())) != 1 or end in restrained:
            findings.add(
                (*group, "unrestrained_ends", names[end]),
                found=f"node {names[end]}, which is no free end of the group's chain of members",
                expected="an end of the chain that is not restrained",
            )


def _branches(
    group: KeyPath, at: Mapping[int, Sequence[int]], names: Sequence[str], findings: Findings
) -> bool:
    branching = [names[n] for n, joined in at.items() if len(joined) > 2]
    if branching:
        findings.add(
            (*group, "restrained_nodes"),
            found=f"more than two members of the group at {listed(branching)}",
            expected="a group whose members form chains",
            fix="Put the branches into groups of their own, or give out_of_plane as a length.",
        )
    return bool(branching)


def _add_loose_ends(group: KeyPath, loose: Sequence[str], findings: Findings) -> None:
    one = loose[0]
    findings.add(
        (*group, "restrained_nodes"),
        found=f"a chain of members that ends at {listed(loose)} without restraint",
        expected="both ends of the chain among the restrained nodes",
        fix=f"List {one} if a purlin, a support or bracing holds it sideways; where the chord goes "
        "on in another group, write continues_in = [that group]; if the end is truly free, write "
        f"unrestrained_ends = {{ {one} = 2.0 }} (factor on the distance to the next restrained "
        "node, 2.0 for a cantilever end).",
    )
