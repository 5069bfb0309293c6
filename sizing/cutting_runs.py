"""Continuous chords as runs of members in one line, and where a run is spliced.

A run goes through every node at which two members of its group lie in one line. Its length is cut
into stock pieces that end at nodes: as few as possible, then with the least loss were each piece
cut from a bar of its own, then as equal as possible.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from sizing.brief.model import Brief

IN_LINE = 1e-6
"""Greatest sine of the angle between members in one line: coordinates are written to some
millimetres over some metres, and a bar bends through a thousandth unseen; below that the brief
means a straight chord."""

FITS = 1e-7
"""m by which a piece may exceed a length: rounding of sums of coordinates."""


@dataclass(frozen=True, kw_only=True, slots=True)
class Run:
    """Members (indices) end to end and the nodes (indices) they run through, one more."""

    members: tuple[int, ...]
    nodes: tuple[int, ...]


def runs_of(brief: Brief, group: int) -> tuple[Run, ...]:
    """Return the group's members as runs; a member that continues in no other is its own run."""
    members = brief.groups[group].members
    position = [np.asarray(node.position) for node in brief.nodes]
    onward = _continuations(brief, members, position)
    runs: list[Run] = []
    used: set[int] = set()
    for first in members:
        if first in used:
            continue
        start, end = brief.members[first].start, brief.members[first].end
        ahead_members, ahead_nodes = _follow(brief, onward, first, end, used | {first})
        taken = used | {first, *ahead_members}
        behind_members, behind_nodes = _follow(brief, onward, first, start, taken)
        run = Run(
            members=(*reversed(behind_members), first, *ahead_members),
            nodes=(*reversed(behind_nodes), start, end, *ahead_nodes),
        )
        used |= set(run.members)
        runs.append(run)
    return tuple(runs)


def _continuations(
    brief: Brief, members: Sequence[int], position: Sequence[NDArray[np.float64]]
) -> dict[tuple[int, int], int]:
    """Return (member, node) -> the member that carries the line on beyond the node."""
    meeting: dict[int, list[tuple[int, NDArray[np.float64]]]] = {}
    for i in members:
        this = brief.members[i]
        direction = (position[this.end] - position[this.start]) / this.length
        meeting.setdefault(this.start, []).append((i, direction))
        meeting.setdefault(this.end, []).append((i, -direction))
    onward = {}
    for node, outgoing in meeting.items():
        for i, own in outgoing:
            for k, other in outgoing:
                if k != i and float(np.linalg.norm(own + other)) <= IN_LINE:
                    onward[i, node] = k
    return onward


def _follow(
    brief: Brief, onward: dict[tuple[int, int], int], member: int, node: int, used: set[int]
) -> tuple[list[int], list[int]]:
    members: list[int] = []
    nodes: list[int] = []
    seen = set(used)
    while (member, node) in onward and onward[member, node] not in seen:
        member = onward[member, node]
        seen.add(member)
        this = brief.members[member]
        node = this.end if this.start == node else this.start
        members.append(member)
        nodes.append(node)
    return members, nodes


def splices_of(lengths: Sequence[float], stock: Sequence[float], longest: float) -> list[int]:
    """Return the places (after so many members) at which a run is spliced.

    ``lengths`` of the run's members in m, ends deducted; ``stock``: usable bar lengths in m;
    ``longest``: the longest piece, m. A member longer than that stands alone.
    """
    count = len(lengths)
    best: list[tuple[int, float, float]] = [(0, 0.0, 0.0)] + [(count + 1, 0.0, 0.0)] * count
    origin = [0] * (count + 1)
    for end in range(1, count + 1):
        for start in range(end - 1, -1, -1):
            piece = math.fsum(lengths[start:end])
            if piece > longest + FITS and end - start > 1:
                break
            loss = min((bar - piece for bar in stock if bar >= piece - FITS), default=0.0)
            found = (
                best[start][0] + 1,
                round(best[start][1] + max(0.0, loss), 6),
                round(best[start][2] + piece * piece, 6),
            )
            if found < best[end]:
                best[end], origin[end] = found, start
    places = []
    at = count
    while origin[at] > 0:
        at = origin[at]
        places.append(at)
    return places[::-1]
