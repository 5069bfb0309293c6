"""Views of the truss: lines, supports and overall dimensions."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass

from sizing.brief.model import Brief
from sizing.documents.label_layout import Box, Layout, Point, segment_box, text_width
from sizing.documents.projection import View
from sizing.documents.quantities import ShownUnits
from sizing.documents.svg_paper import INK, QUIET, Paper
from sizing.documents.view_names import Names, Wanted, at_points, joined, write_marks, write_nodes
from sizing.results import OptionResult

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


@dataclass(frozen=True, slots=True)
class DrawnView:
    """A view on its own paper, origin at its upper left corner."""

    paper: Paper
    width: float
    height: float


def line_width(area: float, greatest: float) -> float:
    """Return the px of a line for a section area: 1.2 and up to 3.6 more by share of greatest."""
    return 1.2 + 3.6 * max(area, 0.0) / greatest if greatest > 0.0 else 2.0


def draw_views(
    brief: Brief, option: OptionResult, views: Sequence[View], scale: float, units: ShownUnits
) -> list[DrawnView]:
    """Draw ``views`` with ``scale`` px per m.

    The general view of a space truss comes last, when it is known which names stand clearly in
    the flat views and may be left out where it is crowded.
    """
    elsewhere: set[str] = set()
    order = sorted(range(len(views)), key=lambda i: views[i].axes is None)
    drawn = {i: _draw_view(brief, option, views[i], scale, units, elsewhere) for i in order}
    return [drawn[i] for i in range(len(views))]


def _wanted(brief: Brief, view: View) -> Wanted:
    if view.axes is None:
        return "missing"
    return "where free" if brief.dimensions == 3 and view.axes == PLAN else "all"


def _draw_view(
    brief: Brief,
    option: OptionResult,
    view: View,
    scale: float,
    units: ShownUnits,
    elsewhere: set[str],
) -> DrawnView:
    left, bottom, right, top = view.box
    size = TYPE if len(brief.members) <= MANY_MEMBERS else SMALL_TYPE
    side = _room_for_names(brief, view, size)
    width = (right - left) * scale + DIMENSION_ROOM + 2 * side
    height = (top - bottom) * scale + MARGIN_TOP + MARGIN_BOTTOM
    origin = (DIMENSION_ROOM + side, MARGIN_TOP)
    points = [
        (origin[0] + (x - left) * scale, origin[1] + (top - y) * scale) for x, y in view.points
    ]
    paper, layout = Paper(), Layout()
    paper.text(view.title, (origin[0], 16.0), size=12.0, bold=True)
    _members(paper, layout, brief, option, points)
    draw_supports(paper, layout, brief, view, points)
    names = Names(
        paper=paper,
        layout=layout,
        size=size,
        wanted=_wanted(brief, view),
        elsewhere=elsewhere,
        sections=view.main,
    )
    write_nodes(names, brief, points)
    write_marks(names, brief, option, points)
    if view.axes is not None:
        _dimensions(paper, view, origin, scale, units)
    return DrawnView(paper, max(width, origin[0] + text_width(view.title, 12.0) + 8), height)


def _room_for_names(brief: Brief, view: View, size: float) -> float:
    """Return the px that the names of the nodes may take at either side."""
    together = at_points(view.points, places=6).values()
    names = (joined([brief.nodes[i].name for i in nodes])[0] for nodes in together)
    return max(LEAST_ROOM, max(text_width(name, size) for name in names) + 10.0)


def _members(
    paper: Paper, layout: Layout, brief: Brief, option: OptionResult, points: Sequence[Point]
) -> None:
    greatest = max((m.area for m in option.members), default=1.0)
    looks = {"tension": TENSION, "compression": COMPRESSION, None: NONE}
    for i, (member, result) in enumerate(zip(brief.members, option.members, strict=True)):
        a, b = points[member.start], points[member.end]
        ink, dash = looks[result.governing]
        line = paper.line(a, b, ink=ink, width=line_width(result.area, greatest), dash=dash)
        line.set("data-member", str(i))
        layout.add(segment_box(a, b, 2.5), "line")


def draw_supports(
    paper: Paper, layout: Layout, brief: Brief, view: View, points: Sequence[Point]
) -> None:
    """Draw the support signs of a view and keep their places free of names."""
    held = {s.node: s.held for s in brief.supports}
    for nodes in at_points(points).values():
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
