"""Names on a view: nodes, member marks and sections, each where there is room."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass
from typing import Literal

from sizing.brief.model import Brief
from sizing.documents.label_layout import Box, Layout, Point, text_width
from sizing.documents.plain_text import shortened, visible
from sizing.documents.svg_paper import QUIET, Paper
from sizing.results import MemberResult, OptionResult

LONGEST_LABEL = 26
NAMES_AT_ONE_POINT = 3
BOLD = 1.08
"""Width of bold over regular type."""

Wanted = Literal["all", "missing", "where free"]
"""Which names a view must carry, room or not: all, those that no other view shows clearly, or
none."""


@dataclass(kw_only=True, slots=True)
class Names:
    """The names of one view on their way to the paper.

    ``elsewhere`` collects over all views the names that stand alone and clear of everything;
    ``sections`` are written with the marks where set.
    """

    paper: Paper
    layout: Layout
    size: float
    wanted: Wanted
    elsewhere: set[str]
    sections: bool

    def must(self, names: Sequence[str]) -> bool:
        """Return whether these names have to be written even where there is no room."""
        if self.wanted == "missing":
            return not self.elsewhere.issuperset(names)
        return self.wanted == "all"

    def stand_clearly(self, names: Sequence[str]) -> None:
        """Note a name that stands alone and clear; names that share a place do not count."""
        if len(names) == 1:
            self.elsewhere.update(names)


def at_points(points: Sequence[Point], places: int = 1) -> dict[Point, list[int]]:
    """Return node indices by where they fall on the paper (several may share a point)."""
    together: dict[Point, list[int]] = {}
    for i, (x, y) in enumerate(points):
        together.setdefault((round(x, places), round(y, places)), []).append(i)
    return together


def write_nodes(names: Names, brief: Brief, points: Sequence[Point]) -> None:
    """Draw the nodes with their names, each on the side where there is room."""
    paper, layout, size = names.paper, names.layout, names.size
    neighbours: dict[int, list[int]] = {}
    for member in brief.members:
        neighbours.setdefault(member.start, []).append(member.end)
        neighbours.setdefault(member.end, []).append(member.start)
    together = list(at_points(points).values())
    for nodes in together:
        x, y = points[nodes[0]]
        paper.circle((x, y), 2.4)
        layout.add(Box(x, y, 6.0, 6.0), "sign")
    for nodes in together:
        x, y = points[nodes[0]]
        here = [brief.nodes[i].name for i in nodes]
        words, full = joined(here)
        ends = [points[k] for i in nodes for k in neighbours.get(i, ())]
        boxes = _around((x, y), ends, text_width(words, size), size)
        best = min(boxes, key=lambda box: (layout.clashes(box), boxes.index(box)))
        clear = not layout.clashes(best, ("text", "sign"))  # a line beneath stays readable
        if not clear and not names.must([f"node {name}" for name in here]):
            continue
        names.stand_clearly([f"node {name}" for name in here] if clear else [])
        layout.add(best, "text")
        paper.text_in(words, best, size=size, halo=True, ink=QUIET, full=full)


def _around(at: Point, ends: Sequence[Point], width: float, size: float) -> list[Box]:
    """Return places for a node's name, the side without members first."""
    away = math.atan2(-sum(_unit(at, e)[1] for e in ends), -sum(_unit(at, e)[0] for e in ends))
    boxes = []
    for reach in (6.0, 14.0):
        for turn in (0, 0.25, -0.25, 0.5, -0.5, 0.75, -0.75, 1.0):
            angle = away + turn * math.pi
            dx, dy = math.cos(angle), math.sin(angle)
            across = reach + abs(dx) * width / 2
            boxes.append(Box(at[0] + dx * across, at[1] + dy * (reach + size * 0.55), width, size))
    return boxes


def _unit(a: Point, b: Point) -> Point:
    length = math.dist(a, b) or 1.0
    return (b[0] - a[0]) / length, (b[1] - a[1]) / length


def joined(names: Sequence[str]) -> tuple[str, str]:
    """Return names at one point as a short label, and in full."""
    full = ", ".join(visible(name) for name in names)
    few = ", ".join(shortened(visible(n), LONGEST_LABEL) for n in names[:NAMES_AT_ONE_POINT])
    more = len(names) - NAMES_AT_ONE_POINT
    return (f"{few} +{more}" if more > 0 else few), full


def write_marks(names: Names, brief: Brief, option: OptionResult, points: Sequence[Point]) -> None:
    """Write marks and sections along the members, the longest first."""
    lines: dict[tuple[Point, Point], list[MemberResult]] = {}
    for member, result in zip(brief.members, option.members, strict=True):
        ends = (points[member.start], points[member.end])
        a, b = sorted((round(x, 1), round(y, 1)) for x, y in ends)
        lines.setdefault((a, b), []).append(result)
    for (a, b), members in sorted(lines.items(), key=lambda item: -math.dist(*item[0])):
        if math.dist(a, b) < names.size:
            continue  # seen end on: it is labelled in another view
        mark, full = joined([m.mark for m in members])
        section = shortened(visible(members[0].designation), LONGEST_LABEL)
        variants = [section] if names.sections and len(members) == 1 else []
        whole = f"{full}: {visible(members[0].designation)}"
        marks = [f"mark {m.mark}" for m in members]
        if _beside_line(names, (a, b), mark, [*variants, ""], whole):
            names.stand_clearly(marks)
        elif names.must(marks):
            _upon_line(names, (a, b), mark, whole)


def _beside_line(
    names: Names, ends: tuple[Point, Point], mark: str, sections: Sequence[str], full: str
) -> bool:
    """Put the mark, with its section where there is room, beside its line; False if no room."""
    size = names.size
    for section in sections:
        width = text_width(mark, size) * BOLD + (text_width(f"  {section}", size) if section else 0)
        boxes = beside(ends, width, size)
        free = names.layout.first_free(boxes)
        if free is not None:
            names.layout.add(boxes[free], "text")
            names.paper.text_in(mark, boxes[free], size=size, full=full, bold=True, after=section)
            return True
    return False


def _upon_line(names: Names, ends: tuple[Point, Point], mark: str, full: str) -> None:
    """Put the mark on its line, off other names where that can be had."""
    boxes = _upon(ends, text_width(mark, names.size) * BOLD, names.size)
    box = boxes[names.layout.first_free(boxes, ("text", "sign")) or 0]
    names.layout.add(box, "text")
    names.paper.text_in(mark, box, size=names.size, halo=True, full=full, bold=True)


def beside(ends: tuple[Point, Point], width: float, size: float) -> list[Box]:
    """Return places along a member, above its line first, near its middle first."""
    (ax, ay), (bx, by) = ends
    angle = math.atan2(by - ay, bx - ax)
    if not -math.pi / 2 < angle <= math.pi / 2 - 1e-9:
        angle += math.pi if angle <= 0 else -math.pi
    nx, ny = math.sin(angle), -math.cos(angle)
    off = size * 0.5 + 4.0
    return [
        Box(
            ax + (bx - ax) * t + side * nx * off, ay + (by - ay) * t + side * ny * off,
            width + 2.0, size, angle,
        )
        for t in (0.5, 0.4, 0.6, 0.32, 0.68, 0.25, 0.75)
        for side in (1.0, -1.0)
    ]  # fmt: skip


def _upon(ends: tuple[Point, Point], width: float, size: float) -> list[Box]:
    """Return upright places on the line itself, for when there is no room beside it."""
    (ax, ay), (bx, by) = ends
    return [
        Box(ax + (bx - ax) * t, ay + (by - ay) * t, width, size)
        for t in (0.5, 0.4, 0.6, 0.3, 0.7, 0.22, 0.78)
    ]
