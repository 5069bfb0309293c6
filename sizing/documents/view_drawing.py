"""One view of the truss: lines, nodes, supports, labels and overall dimensions."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass

from sizing.brief.model import Brief
from sizing.documents.label_layout import Box, Layout, Point, segment_box, text_width
from sizing.documents.plain_text import shortened, visible
from sizing.documents.projection import View
from sizing.documents.quantities import ShownUnits
from sizing.documents.svg_paper import INK, QUIET, Paper
from sizing.results import MemberResult, OptionResult

TENSION = ("#0b5fa5", "")
COMPRESSION = ("#c2500a", "8 3.5")
NONE = ("#7a8690", "1.5 3")
"""Ink and dash per governing sense; blue and vermilion stay apart for colour-blind readers."""

MARGIN_TOP, MARGIN_BOTTOM, DIMENSION_ROOM, LEAST_ROOM = 52.0, 74.0, 34.0, 44.0
TYPE, SMALL_TYPE, MANY_MEMBERS = 10.0, 9.0, 60
SIGN = 13.0
"""Height of a support triangle, px."""

PLAN = (0, 1)
"""The two axes in the paper of a space truss seen from above."""

LONGEST_LABEL = 26
NAMES_AT_ONE_POINT = 3
BOLD = 1.08
"""Width of bold over regular type."""


@dataclass(frozen=True, slots=True)
class DrawnView:
    """A view on its own paper, origin at its upper left corner."""

    paper: Paper
    width: float
    height: float


def line_width(area: float, greatest: float) -> float:
    """Return the px of a line for a section area: 1.2 and up to 3.6 more by share of greatest."""
    return 1.2 + 3.6 * max(area, 0.0) / greatest if greatest > 0.0 else 2.0


def draw_view(
    brief: Brief, option: OptionResult, view: View, scale: float, units: ShownUnits
) -> DrawnView:
    """Draw ``view`` with ``scale`` px per m."""
    left, bottom, right, top = view.box
    size = TYPE if len(brief.members) <= MANY_MEMBERS else SMALL_TYPE
    side = _room_for_names(brief, view, size)
    width = (right - left) * scale + DIMENSION_ROOM + 2 * side
    height = (top - bottom) * scale + MARGIN_TOP + MARGIN_BOTTOM
    origin = (DIMENSION_ROOM + side, MARGIN_TOP)
    points = [
        (origin[0] + (x - left) * scale, origin[1] + (top - y) * scale) for x, y in view.points
    ]
    crowded = brief.dimensions == 3 and view.axes == PLAN
    paper, layout = Paper(), Layout()
    paper.text(view.title, (origin[0], 16.0), size=12.0, bold=True)
    _members(paper, layout, brief, option, points)
    _supports(paper, layout, brief, view, points)
    _nodes(paper, layout, brief, points, size, all_names=not crowded)
    _labels(paper, layout, brief, option, points, size, with_sections=view.main, must=not crowded)
    if view.axes is not None:
        _dimensions(paper, view, origin, scale, units)
    return DrawnView(paper, max(width, origin[0] + text_width(view.title, 12.0) + 8), height)


def _room_for_names(brief: Brief, view: View, size: float) -> float:
    """Return the px that the names of the nodes may take at either side."""
    together = _at_points(view.points, places=6).values()
    names = (_joined([brief.nodes[i].name for i in nodes])[0] for nodes in together)
    return max(LEAST_ROOM, max(text_width(name, size) for name in names) + 10.0)


def _members(
    paper: Paper, layout: Layout, brief: Brief, option: OptionResult, points: Sequence[Point]
) -> None:
    greatest = max((m.area for m in option.members), default=1.0)
    looks = {"tension": TENSION, "compression": COMPRESSION, None: NONE}
    for member, result in zip(brief.members, option.members, strict=True):
        a, b = points[member.start], points[member.end]
        ink, dash = looks[result.governing]
        paper.line(a, b, ink=ink, width=line_width(result.area, greatest), dash=dash)
        layout.add(segment_box(a, b, 2.5), "line")


def _at_points(points: Sequence[Point], places: int = 1) -> dict[Point, list[int]]:
    """Return node indices by where they fall on the paper (several may share a point)."""
    together: dict[Point, list[int]] = {}
    for i, (x, y) in enumerate(points):
        together.setdefault((round(x, places), round(y, places)), []).append(i)
    return together


def _supports(
    paper: Paper, layout: Layout, brief: Brief, view: View, points: Sequence[Point]
) -> None:
    held = {s.node: s.held for s in brief.supports}
    for nodes in _at_points(points).values():
        flags = [held[i] for i in nodes if i in held]
        if not flags:
            continue
        together = [any(f[a] for f in flags) for a in range(brief.dimensions)]
        x, y = points[nodes[0]]
        if brief.dimensions == 3 and view.axes == PLAN:
            _plan_support(paper, layout, (x, y), together)
            continue
        if view.axes is None:
            _triangle(paper, (x, y), upright=True, slides=not together[-1])
            letters = _letters(together)
            paper.text(letters, (x, y + SIGN + 16), size=9.0, anchor="middle", ink=QUIET)
            layout.add(Box(x, y + SIGN + 12, text_width(letters, 9.0), 11.0), "sign")
        else:
            across, up = together[view.axes[0]], together[view.axes[1]]
            if across or up:
                _triangle(paper, (x, y), upright=up, slides=not (across and up))
        layout.add(Box(x, y + SIGN * 0.7, SIGN * 1.5, SIGN * 1.6), "sign")


def _plan_support(paper: Paper, layout: Layout, at: Point, held: Sequence[bool]) -> None:
    """Draw a support seen from above: a square, with the axes held."""
    x, y = at
    half = SIGN * 0.5
    corners = (
        (x - half, y - half),
        (x + half, y - half),
        (x + half, y + half),
        (x - half, y + half),
    )
    paper.polygon(corners, fill="none")
    letters = _letters(held)
    box = Box(x, y + half + 8, text_width(letters, 9.0), 10.0)
    paper.text_in(letters, box, size=9.0, ink=QUIET, halo=True)
    layout.add(box, "sign")
    layout.add(Box(x, y, SIGN, SIGN), "sign")


def _letters(held: Sequence[bool]) -> str:
    return "".join(name for name, h in zip("xyz", held, strict=False) if h)


def _triangle(paper: Paper, at: Point, *, upright: bool, slides: bool) -> None:
    x, y = at
    h, w = SIGN, SIGN * 0.62

    def turned(dx: float, dy: float) -> Point:
        """Turn a sign that points up into one that points right, for a sideways support."""
        return (x + dx, y + dy) if upright else (x - dy, y + dx)

    paper.polygon((turned(0, 0), turned(-w, h), turned(w, h)))
    if slides:
        paper.line(turned(-w - 3, h + 4), turned(w + 3, h + 4), width=1.2)
    else:
        for k in range(-2, 3):
            paper.line(turned(k * w / 2 + 1, h), turned(k * w / 2 - 3, h + 5), width=0.8)


def _nodes(
    paper: Paper,
    layout: Layout,
    brief: Brief,
    points: Sequence[Point],
    size: float,
    *,
    all_names: bool,
) -> None:
    neighbours: dict[int, list[int]] = {}
    for member in brief.members:
        neighbours.setdefault(member.start, []).append(member.end)
        neighbours.setdefault(member.end, []).append(member.start)
    together = list(_at_points(points).values())
    for nodes in together:
        x, y = points[nodes[0]]
        paper.circle((x, y), 2.4)
        layout.add(Box(x, y, 6.0, 6.0), "sign")
    for nodes in together:
        x, y = points[nodes[0]]
        words, full = _joined([brief.nodes[i].name for i in nodes])
        ends = [points[k] for i in nodes for k in neighbours.get(i, ())]
        boxes = _around((x, y), ends, text_width(words, size), size)
        best = min(boxes, key=lambda box: (layout.clashes(box), boxes.index(box)))
        if not all_names and layout.clashes(best):
            continue  # another view names it
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


def _joined(names: Sequence[str]) -> tuple[str, str]:
    """Return names at one point as a short label, and in full."""
    full = ", ".join(visible(name) for name in names)
    few = ", ".join(shortened(visible(n), LONGEST_LABEL) for n in names[:NAMES_AT_ONE_POINT])
    more = len(names) - NAMES_AT_ONE_POINT
    return (f"{few} +{more}" if more > 0 else few), full


def _labels(
    paper: Paper,
    layout: Layout,
    brief: Brief,
    option: OptionResult,
    points: Sequence[Point],
    size: float,
    *,
    with_sections: bool,
    must: bool,
) -> None:
    lines: dict[tuple[Point, Point], list[MemberResult]] = {}
    for member, result in zip(brief.members, option.members, strict=True):
        ends = (points[member.start], points[member.end])
        a, b = sorted((round(x, 1), round(y, 1)) for x, y in ends)
        lines.setdefault((a, b), []).append(result)
    for (a, b), members in sorted(lines.items(), key=lambda item: -math.dist(*item[0])):
        if math.dist(a, b) < size:
            continue  # seen end on: it is labelled in another view
        mark, full = _joined([m.mark for m in members])
        section = shortened(visible(members[0].designation), LONGEST_LABEL)
        variants = [section] if with_sections and len(members) == 1 else []
        whole = f"{full}: {visible(members[0].designation)}"
        _place(paper, layout, (a, b), mark, [*variants, ""], size, whole, must=must)


def _place(
    paper: Paper,
    layout: Layout,
    ends: tuple[Point, Point],
    mark: str,
    sections: Sequence[str],
    size: float,
    full: str,
    *,
    must: bool,
) -> None:
    """Put the mark, with its section where there is room, beside the member or upon it.

    Where there is no room either way, the mark is written all the same if it ``must``.
    """
    for section in sections:
        width = text_width(mark, size) * BOLD + (text_width(f"  {section}", size) if section else 0)
        boxes = _beside(ends, width, size)
        free = layout.first_free(boxes)
        if free is not None:
            layout.add(boxes[free], "text")
            paper.text_in(mark, boxes[free], size=size, full=full, bold=True, after=section)
            return
    if not must:
        return
    boxes = _upon(ends, text_width(mark, size) * BOLD, size)
    free = layout.first_free(boxes, ("text", "sign"))
    box = boxes[free or 0]
    layout.add(box, "text")
    paper.text_in(mark, box, size=size, halo=True, full=full, bold=True)


def _beside(ends: tuple[Point, Point], width: float, size: float) -> list[Box]:
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


def _dimensions(paper: Paper, view: View, origin: Point, scale: float, units: ShownUnits) -> None:
    left, bottom, right, top = view.box
    across, up = right - left, top - bottom
    x0, x1 = origin[0], origin[0] + across * scale
    y0, y1 = origin[1], origin[1] + up * scale
    if across > 0.0:
        y = y1 + MARGIN_BOTTOM - 22
        _measure(paper, (x0, y), (x1, y))
        words = units.length.text(across)
        paper.text(words, ((x0 + x1) / 2, y - 4), size=10.0, anchor="middle", halo=True)
    if up > 0.0:
        x = 18.0
        _measure(paper, (x, y0), (x, y1))
        at = (x - 4, (y0 + y1) / 2)
        paper.text(
            units.length.text(up), at, size=10.0, anchor="middle", turn=-math.pi / 2, halo=True
        )


def _measure(paper: Paper, a: Point, b: Point) -> None:
    """Draw a dimension line with oblique strokes at its ends, as drawing offices do."""
    paper.line(a, b, ink=INK, width=0.7)
    for x, y in (a, b):
        paper.line((x - 4, y + 4), (x + 4, y - 4), ink=INK, width=1.2)
