"""A brief in the making: nodes, groups and cases as plain tables, with remarks.

Nodes of a chord are a letter and a number, ``A0`` to ``A12``; members are written as chains and
ranges wherever that is shorter.
"""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from dataclasses import dataclass, field
from itertools import pairwise
from typing import Any

from sizing.errors import InputError, Problem

PLACES = 4
"""Decimals of coordinates in m: a tenth of a millimetre, finer than any setting-out."""

SLACK = 1e-3
"""m by which a distance between restraints may be exceeded: coordinates are rounded."""

NodeRef = tuple[str, int]
Pair = tuple[NodeRef, NodeRef]


@dataclass(kw_only=True)
class Sketch:
    """Plain tables of a brief, in the order in which they are written, and their remarks."""

    title: str
    nodes: dict[str, list[float]] = field(default_factory=dict)
    supports: dict[str, Any] = field(default_factory=dict)
    groups: dict[str, dict[str, Any]] = field(default_factory=dict)
    cases: dict[str, dict[str, Any]] = field(default_factory=dict)
    limits: list[dict[str, Any]] = field(default_factory=list)
    options: dict[str, dict[str, Any]] = field(default_factory=dict)
    comments: dict[tuple[str, ...], str] = field(default_factory=dict)

    def node(self, name: str, *coordinates: float) -> None:
        """Set a node, rounded to a tenth of a millimetre."""
        self.nodes[name] = [round(float(x), PLACES) + 0.0 for x in coordinates]

    def group(self, name: str, members: Sequence[str], buckling: Any = 1.0, **more: Any) -> None:
        """Set a group; one without members is left out."""
        if members:
            self.groups[name] = {"members": list(members), "buckling_length": buckling} | more

    def case(self, name: str, kind: str, **more: Any) -> None:
        """Set a load case."""
        self.cases[name] = {"kind": kind} | more

    def tables(self) -> dict[str, Any]:
        """Return the brief as plain tables."""
        return {
            "title": self.title,
            "units": {"force": "kN", "length": "m"},
            "minimise": "mass",
            "combination_rule": "EN 1990",
            "nodes": self.nodes,
            "supports": self.supports,
            "groups": self.groups,
            "cases": self.cases,
            "deflection_limits": self.limits,
            "options": self.options,
        }


def runs(letter: str, panels: Iterable[int]) -> list[str]:
    """Return chains over consecutive panels: panel k runs from node k to node k + 1."""
    words: list[str] = []
    for first, last in _stretches(sorted(panels)):
        one, end = f"{letter}{first}", f"{letter}{last + 1}"
        words.append(f"{one}-{end}" if first == last else f"{one}..{end}")
    return words


def _stretches(numbers: Sequence[int]) -> list[tuple[int, int]]:
    stretches: list[tuple[int, int]] = []
    for k in numbers:
        if stretches and stretches[-1][1] == k - 1:
            stretches[-1] = (stretches[-1][0], k)
        else:
            stretches.append((k, k))
    return stretches


def pairs(members: Sequence[Pair]) -> list[str]:
    """Return members as words, those in step as ``B0..B3 to A1..A4``."""
    words: list[str] = []
    stretch: list[Pair] = []
    for member in [*members, None]:
        if stretch and (member is None or not _in_step(stretch[-1], member)):
            (a, i), (b, k) = stretch[0]
            n = len(stretch) - 1
            words.append(f"{a}{i}..{a}{i + n} to {b}{k}..{b}{k + n}" if n else f"{a}{i}-{b}{k}")
            stretch = []
        if member is not None:
            stretch.append(member)
    return words


def _in_step(one: Pair, other: Pair) -> bool:
    return all(a == c and j == i + 1 for (a, i), (c, j) in zip(one, other, strict=True))


def restrained(
    shape: str, names: Sequence[str], along: Sequence[float], greatest: float
) -> list[str]:
    """Return nodes of a chord as words; see :func:`restrained_places`."""
    return stepped(names, restrained_places(shape, along, greatest))


def restrained_places(shape: str, along: Sequence[float], greatest: float) -> list[int]:
    """Return nodes of a chord, no farther apart than ``greatest``, the same from both ends.

    ``along`` are the nodes' places on the chord in m. Raises :class:`InputError` when a single
    panel is longer.
    """
    longest = max(b - a for a, b in pairwise(along))
    if longest > greatest + SLACK:
        raise InputError(
            [
                Problem(
                    file=f"shape {shape}",
                    place="restraint",
                    found=f"{greatest:.3f} m, less than a panel of {longest:.3f} m",
                    expected="restraint at nodes, so at least a panel apart",
                    fix="Take more panels or a greater distance.",
                )
            ]
        )
    last = len(along) - 1
    half = along[0] + (along[-1] - along[0]) / 2.0
    chosen = {0, last}
    here = 0
    while True:
        there = _farthest(along, here, greatest)
        if there == here or along[there] > half + SLACK:
            break
        chosen |= {there, last - there}
        here = there
    ordered = sorted(chosen)
    for a, b in pairwise(ordered):  # close what is too wide in the middle
        at = a
        while along[b] - along[at] > greatest + SLACK:
            at = _farthest(along, at, greatest)
            chosen.add(at)
    return sorted(chosen)


def _farthest(along: Sequence[float], start: int, reach: float) -> int:
    reachable = [k for k in range(start, len(along)) if along[k] - along[start] <= reach + SLACK]
    return reachable[-1]


def stepped(names: Sequence[str], chosen: Sequence[int]) -> list[str]:
    """Return the chosen names, as one range in steps where they are evenly counted."""
    gaps = {b - a for a, b in pairwise(chosen)}
    same_letter = len({name.rstrip("0123456789") for name in names}) == 1
    if same_letter and len(gaps) == 1 and len(chosen) > 3:
        (gap,) = gaps
        word = f"{names[chosen[0]]}..{names[chosen[-1]]}"
        return [word if gap == 1 else f"{word} by {gap}"]
    return [names[k] for k in chosen]
