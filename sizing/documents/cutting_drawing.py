"""A drawing of the bars as they are cut: one row per pattern, to scale along the bar."""

from __future__ import annotations

from xml.etree import ElementTree as Xml

from sizing.documents.cutting_table import saw_length
from sizing.documents.label_layout import text_width
from sizing.documents.plain_text import shortened, visible
from sizing.documents.quantities import ShownUnits
from sizing.documents.svg_paper import PAPER, QUIET, Paper, svg_document
from sizing.results import CutPattern, OptionResult

SHEET, BORDER, LEFT = 900.0, 20.0, 190.0
"""Width of the sheet in px, its border, and where bars begin."""

ROW, BAR, TYPE = 26.0, 16.0, 10.5
"""Px from bar to bar, height of a bar, size of type."""

SHADE, LOST = "#dfe7ee", "#f3efe4"
"""Pieces and offcuts."""


def cutting_drawing(option: OptionResult, units: ShownUnits) -> Xml.Element | None:
    """Return the drawing of every cutting pattern of one option; None without any."""
    rows = [
        (f"{shortened(visible(result.designation), 18)}, {pattern.bars} ×", pattern)
        for result in option.cutting
        for pattern in result.patterns
    ]
    if not rows:
        return None
    longest = max(pattern.stock_length for _, pattern in rows)
    scale = (SHEET - LEFT - BORDER) / longest
    paper = Paper()
    for k, (label, pattern) in enumerate(rows):
        top = BORDER + k * ROW
        paper.text(label, (BORDER, top + BAR - 4.0), size=TYPE, full=label)
        _bar(paper, pattern, top, scale, units)
    return svg_document(
        paper,
        SHEET,
        2 * BORDER + len(rows) * ROW,
        title="Cutting list",
        text="One row for each cutting pattern: bars, pieces to scale, offcut at the end.",
    )


def _bar(paper: Paper, pattern: CutPattern, top: float, scale: float, units: ShownUnits) -> None:
    saw = saw_length(units)
    _block(paper, LEFT, LEFT + pattern.stock_length * scale, top, LOST)
    # Saw cuts and the lost end are too thin to draw: pieces stand side by side before the offcut.
    taken = sum(length * count for length, count in pattern.pieces)
    between = pattern.stock_length - taken - pattern.offcut
    count = sum(number for _, number in pattern.pieces)
    x = LEFT
    for length, number in pattern.pieces:
        words = f"{saw.of(length):.{saw.places}f}"
        for _ in range(number):
            end = x + length * scale
            _block(paper, x, end, top, SHADE)
            if text_width(words, TYPE) < end - x - 4.0:
                middle = (0.5 * (x + end), top + BAR - 4.5)
                paper.text(words, middle, size=TYPE, anchor="middle")
            x = end + max(0.0, between) / count * scale
    rest = f"{saw.of(pattern.offcut):.{saw.places}f}"
    room = LEFT + pattern.stock_length * scale - x
    if pattern.offcut > 0.0 and text_width(rest, TYPE) < room - 6.0:
        paper.text(rest, (x + 4.0, top + BAR - 4.5), size=TYPE, ink=QUIET)


def _block(paper: Paper, start: float, end: float, top: float, fill: str = PAPER) -> None:
    corners = ((start, top), (end, top), (end, top + BAR), (start, top + BAR))
    paper.polygon(corners, fill=fill)
