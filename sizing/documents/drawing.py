"""truss.svg: the truss to scale with marks, sections, supports and the governing sense.

A member's line is as heavy as its area asks; solid and blue where tension governs, dashed and
vermilion where compression does (the pair is told apart by dash alone, and by readers who do
not see red and green apart), dotted where there is no force.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass
from xml.etree import ElementTree as Xml

from sizing.documents.label_layout import text_width
from sizing.documents.plain_text import shortened, visible
from sizing.documents.projection import View, views_of
from sizing.documents.quantities import ShownUnits, shown_units
from sizing.documents.svg_paper import QUIET, Paper, number, svg_document
from sizing.documents.view_drawing import (
    COMPRESSION,
    NONE,
    TENSION,
    TYPE,
    DrawnView,
    draw_views,
    line_width,
)
from sizing.documents.wording import CLOSING_CAUTION, mark_runs, outcome_sentence
from sizing.results import JobResult, OptionResult

SHORTEST, MANY = 130.0, 60
"""Wanted px of a short member, for room beside it; halved from ``MANY`` members on."""

NODE_ROOM = 34.0
"""Px along a member that the names of its nodes take beside its own label."""

SMALLEST_SIDE, GREATEST_SIDE = 460.0, 4600.0
"""Extent in px of the truss itself, between which the scale may move."""

BORDER, GAP = 28.0, 30.0
LANDSCAPE = 1.4
"""Width over height that sheets of paper have (ISO 216), aimed at when placing views."""

NARROWEST_SHEET = 900.0


@dataclass(frozen=True, slots=True)
class Sheet:
    """The drawing of one option and its size in px."""

    paper: Paper
    width: float
    height: float


def draw_options(job: JobResult) -> tuple[Xml.Element, ...]:
    """Return one drawing per option, each a complete SVG element."""
    return tuple(_drawing(job, option) for option in job.options)


def svg_bytes(job: JobResult, drawings: Sequence[Xml.Element]) -> bytes:
    """Return truss.svg: the drawings of all options, one below the other."""
    if len(drawings) == 1:
        root = drawings[0]
    else:
        width = max((float(d.get("width", "0")) for d in drawings), default=NARROWEST_SHEET)
        height = sum(float(d.get("height", "0")) for d in drawings)
        root = svg_document(
            Paper(), width, height, title=visible(job.brief.title), text=CLOSING_CAUTION
        )
        down = 0.0
        for one in drawings:
            placed = Xml.SubElement(root, "svg", {**one.attrib, "y": number(down)})
            placed.extend(one)
            down += float(one.get("height", "0"))
    return f'<?xml version="1.0" encoding="UTF-8"?>\n{svg_text(root)}\n'.encode()


def svg_text(drawing: Xml.Element) -> str:
    """Return a drawing as text that can be set into a page."""
    text: str = Xml.tostring(drawing, encoding="unicode")
    return text


def _drawing(job: JobResult, option: OptionResult) -> Xml.Element:
    sheet = _sheet(job, option)
    title = visible(f"{job.brief.title}, option {option.option}")
    text = f"Line diagram with member marks, sections and supports. {CLOSING_CAUTION}"
    return svg_document(sheet.paper, sheet.width, sheet.height, title=title, text=text)


def _sheet(job: JobResult, option: OptionResult) -> Sheet:
    units = shown_units(job.brief.units)
    views = views_of(job.brief)
    scale = _scale(job, option, views[0])
    drawn = draw_views(job.brief, option, views, scale, units)
    places, width, height = _arrange(drawn)
    width = max(width, NARROWEST_SHEET - 2 * BORDER)
    paper = Paper()
    top = _heading(paper, job, option, units, width)
    for one, (x, y) in zip(drawn, places, strict=True):
        paper.add(one.paper, right=BORDER + x, down=top + y)
    bottom = _legend(paper, job, option, units, top + height + GAP, width)
    return Sheet(paper, width + 2 * BORDER, bottom)


def _scale(job: JobResult, option: OptionResult, view: View) -> float:
    """Return px per m: a short member gets room for its mark, the whole stays bounded."""
    lengths = sorted(math.dist(view.points[m.start], view.points[m.end]) for m in job.brief.members)
    short = lengths[len(lengths) // 4] or lengths[-1] or 1.0
    labels = (text_width(f"{m.mark} {m.designation}", TYPE) for m in option.members)
    room = min(max(SHORTEST, max(labels, default=0.0) + NODE_ROOM), 2 * SHORTEST)
    wanted = room if len(lengths) <= MANY else SHORTEST / 2
    left, bottom, right, top = view.box
    extent = max(right - left, top - bottom) or 1.0
    return min(max(wanted / short, SMALLEST_SIDE / extent), GREATEST_SIDE / extent)


def _arrange(drawn: list[DrawnView]) -> tuple[list[tuple[float, float]], float, float]:
    """Place views in a row or in a column, whichever is nearer the shape of a sheet."""
    row = (sum(d.width for d in drawn) + GAP * (len(drawn) - 1), max(d.height for d in drawn))
    column = (max(d.width for d in drawn), sum(d.height for d in drawn) + GAP * (len(drawn) - 1))
    in_row = abs(math.log(row[0] / row[1] / LANDSCAPE)) <= abs(
        math.log(column[0] / column[1] / LANDSCAPE)
    )
    places, along = [], 0.0
    for one in drawn:
        places.append((along, row[1] - one.height) if in_row else (0.0, along))
        along += GAP + (one.width if in_row else one.height)
    return places, *(row if in_row else column)


def _heading(
    paper: Paper, job: JobResult, option: OptionResult, units: ShownUnits, width: float
) -> float:
    y = BORDER + 18.0
    for line in _wrapped(visible(job.brief.title), width, 18.0, most=3):
        paper.text(line, (BORDER, y), size=18.0, bold=True, full=visible(job.brief.title))
        y += 23.0
    facts = (
        f"Option {visible(option.option)}: {visible(option.standard)}, {visible(option.grade)}, "
        f"catalogue {visible(option.catalogue)}. Members {units.mass.text(option.mass)}."
    )
    for text in (facts, outcome_sentence(option)):
        for line in _wrapped(text, width, 12.0, most=3):
            paper.text(line, (BORDER, y), size=12.0, ink=QUIET, full=text)
            y += 16.0
    return y + 6.0


def _legend(
    paper: Paper,
    job: JobResult,
    option: OptionResult,
    units: ShownUnits,
    top: float,
    width: float,
) -> float:
    y, x = top + 12.0, BORDER
    for ink, dash, words in (
        (*TENSION, "tension governs"),
        (*COMPRESSION, "compression governs"),
        (*NONE, "no force"),
    ):
        paper.line((x, y - 4), (x + 40, y - 4), ink=ink, width=2.5, dash=dash)
        paper.text(words, (x + 48, y), size=11.0)
        x += 78 + text_width(words, 11.0)
    paper.text("Line weight by area of section.", (x, y), size=11.0, ink=QUIET)
    y += 20.0
    y = _group_lines(paper, option, units, y, width)
    behind = (
        " Members behind one another share a line in a view; each is named in one view or another."
        if job.brief.dimensions == 3
        else ""
    )
    notes = (
        f"Centre lines, true to scale; dimensions in {units.length.unit}; nodes are system "
        "points. Supports: triangle on hatching is held in both directions, triangle on a line "
        "slides along it, square in plan; letters name the axes held." + behind,
        CLOSING_CAUTION,
        f"{visible(job.brief.source.name)}, SHA-256 {job.brief.source.sha256[:12]}; "
        f"sizing {job.version}",
    )
    y += 6.0
    for note in notes:
        for line in _wrapped(note, width, 11.0, most=4):
            paper.text(line, (BORDER, y), size=11.0, ink=QUIET)
            y += 15.0
    return y + BORDER - 10.0


def _group_lines(
    paper: Paper, option: OptionResult, units: ShownUnits, y: float, width: float
) -> float:
    greatest = max((m.area for m in option.members), default=1.0)
    areas = {m.designation: m.area for m in option.members}
    names = [shortened(visible(g.name), 30) for g in option.groups]
    sections = [shortened(visible(g.designation), 34) for g in option.groups]
    second = BORDER + 56 + max((text_width(n, 11.0) for n in names), default=0.0) + 18
    third = second + max((text_width(s, 11.0) for s in sections), default=0.0) + 18
    for group, name, section in zip(option.groups, names, sections, strict=True):
        weight = line_width(areas.get(group.designation, greatest), greatest)
        paper.line((BORDER, y - 4), (BORDER + 40, y - 4), width=weight)
        paper.text(name, (BORDER + 48, y), size=11.0, full=visible(group.name))
        paper.text(section, (second, y), size=11.0, bold=True, full=visible(group.designation))
        marks = mark_runs([m.mark for m in option.members if m.group == group.name])
        words = f"{marks} ({units.mass.text(group.mass)})"
        room = max(int((BORDER + width - third) / (0.57 * 11.0)), 12)
        paper.text(shortened(words, room), (third, y), size=11.0, full=words)
        y += 16.0
    return y


def _wrapped(text: str, width: float, size: float, *, most: int) -> list[str]:
    """Break text into at most ``most`` lines of ``width`` px; the last is cut where needed."""
    room = max(int(width / (0.55 * size)), 20)
    lines, line = [], ""
    for word in text.split(" "):
        wider = f"{line} {word}".strip()
        if len(wider) > room and line:
            lines.append(line)
            line = word
        else:
            line = wider
    lines.append(line)
    kept = [shortened(one, room) for one in lines[:most]]
    if len(lines) > most:
        kept[-1] = shortened(kept[-1] + " …", room)
    return kept
