"""truss.svg before any section is chosen: lines, nodes, member marks and supports to scale."""

from __future__ import annotations

import math
from collections.abc import Sequence
from xml.etree import ElementTree as Xml

from sizing.brief.model import Brief
from sizing.documents.label_layout import Point, text_width
from sizing.documents.outline_text import CLOSING
from sizing.documents.plain_text import shortened, visible
from sizing.documents.projection import View, views_of
from sizing.documents.svg_paper import QUIET, Paper, svg_document

BORDER, GAP = 40.0, 56.0
SHORT_MEMBER = 70.0
"""Wanted px of a short member, for room beside it."""
LEAST, GREATEST = 420.0, 3200.0
"""Extent in px of a view, between which the scale may move."""
TYPE = 9.0
SIGN = 11.0
"""Height of the support sign, px."""
LONGEST_LABEL = 24
ALONG = 0.42
"""Place of a mark on its line, as a part of the length."""


def outline_svg(brief: Brief) -> bytes:
    """Return the drawing of the line diagram as an SVG file."""
    views = views_of(brief)
    scale = _scale(brief, views[0])
    paper = Paper()
    title = shortened(visible(brief.title), 110)
    paper.text(title, (BORDER, BORDER), size=16.0, bold=True)
    paper.text(
        "Geometry only: no section was picked or checked.", (BORDER, BORDER + 18), size=11.0,
        ink=QUIET,
    )  # fmt: skip
    top, width = BORDER + 40.0, text_width(title, 16.0)
    for view in views:
        drawn, across, down = _view(brief, view, scale)
        paper.add(drawn, right=BORDER, down=top)
        top += down + GAP
        width = max(width, across)
    root = svg_document(
        paper, width + 2 * BORDER, top, title=visible(brief.title),
        text=f"Line diagram with node names and member marks. {CLOSING}",
    )  # fmt: skip
    text: str = Xml.tostring(root, encoding="unicode")
    return f'<?xml version="1.0" encoding="UTF-8"?>\n{text}\n'.encode()


def _scale(brief: Brief, view: View) -> float:
    lengths = sorted(math.dist(view.points[m.start], view.points[m.end]) for m in brief.members)
    short = lengths[len(lengths) // 4] or lengths[-1] or 1.0
    left, bottom, right, top = view.box
    extent = max(right - left, top - bottom) or 1.0
    return min(max(SHORT_MEMBER / short, LEAST / extent), GREATEST / extent)


def _view(brief: Brief, view: View, scale: float) -> tuple[Paper, float, float]:
    """Return one view on its own paper with its width and height in px."""
    left, bottom, right, top = view.box
    paper = Paper()
    points = [((x - left) * scale + 20.0, (top - y) * scale + 30.0) for x, y in view.points]
    paper.text(view.title, (0.0, 8.0), size=11.0, bold=True)
    marked: set[tuple[Point, Point]] = set()
    for member in brief.members:
        a, b = points[member.start], points[member.end]
        paper.line(a, b, width=1.4)
        line = (min(a, b), max(a, b))
        if view.main and line not in marked and math.dist(a, b) > 3 * TYPE:
            marked.add(line)
            _mark(paper, a, b, visible(member.mark))
    for support in brief.supports:
        _support(paper, points[support.node], support.held)
    written: set[Point] = set()
    for node, (x, y) in zip(brief.nodes, points, strict=True):
        paper.circle((x, y), 2.0)
        if (round(x), round(y)) not in written:
            written.add((round(x), round(y)))
            name = shortened(visible(node.name), LONGEST_LABEL)
            paper.text(name, (x + 4, y - 5), size=TYPE, ink=QUIET, halo=True)
    return paper, (right - left) * scale + 60.0, (top - bottom) * scale + 30.0 + 2 * SIGN


def _mark(paper: Paper, a: Point, b: Point, mark: str) -> None:
    """Write a member's mark on its line, off the middle, where others may cross."""
    at = (a[0] + ALONG * (b[0] - a[0]), a[1] + ALONG * (b[1] - a[1]) + 0.35 * TYPE)
    paper.text(mark, at, size=TYPE, anchor="middle", bold=True, halo=True)


def _support(paper: Paper, at: Point, held: Sequence[bool]) -> None:
    """Draw a triangle below the node, with the axes held."""
    x, y = at
    paper.polygon(((x, y), (x - 0.6 * SIGN, y + SIGN), (x + 0.6 * SIGN, y + SIGN)))
    letters = "".join(axis for axis, h in zip("xyz", held, strict=False) if h)
    paper.text(letters, (x, y + SIGN + 9), size=TYPE - 1, anchor="middle", ink=QUIET)
