"""A sheet of SVG on which lines, shapes and text are put; every text is escaped by the writer."""

from __future__ import annotations

import math
from collections.abc import Iterable
from xml.etree import ElementTree as Xml

from sizing.documents.label_layout import Box, Point

SVG = "http://www.w3.org/2000/svg"
TYPEFACE = "Arial, Helvetica, 'Liberation Sans', 'DejaVu Sans', sans-serif"
INK, QUIET, PAPER = "#1d2730", "#5b6770", "#ffffff"

LEVEL = 1e-3
"""Radians below which text is not turned: less than a pixel over the longest label."""


def number(value: float) -> str:
    """Return a coordinate with one decimal, without a negative zero."""
    text = f"{value:.1f}"
    return "0" if float(text) == 0.0 else text.removesuffix(".0")


class Paper:
    """An SVG group under construction."""

    def __init__(self) -> None:
        self.group = Xml.Element("g")

    def line(
        self, start: Point, end: Point, *, ink: str = INK, width: float = 1.0, dash: str = ""
    ) -> Xml.Element:
        """Draw a straight line."""
        line = self._put(
            "line",
            x1=number(start[0]), y1=number(start[1]), x2=number(end[0]), y2=number(end[1]),
            stroke=ink,
        )  # fmt: skip
        line.set("stroke-width", number(width))
        if dash:
            line.set("stroke-dasharray", dash)
        return line

    def polygon(self, points: Iterable[Point], *, fill: str = PAPER, ink: str = INK) -> None:
        """Draw a closed shape."""
        where = " ".join(f"{number(x)},{number(y)}" for x, y in points)
        shape = self._put("polygon", points=where, fill=fill, stroke=ink)
        shape.set("stroke-width", "1.2")

    def circle(self, centre: Point, radius: float, *, fill: str = PAPER) -> None:
        """Draw a small circle."""
        shape = self._put(
            "circle", cx=number(centre[0]), cy=number(centre[1]), r=number(radius), fill=fill,
            stroke=INK,
        )  # fmt: skip
        shape.set("stroke-width", "1")

    def text(
        self,
        words: str,
        at: Point,
        *,
        size: float,
        anchor: str = "start",
        ink: str = INK,
        bold: bool = False,
        halo: bool = False,
        full: str = "",
        turn: float = 0.0,
        after: str = "",
    ) -> Xml.Element:
        """Write ``words`` with their base line at ``at``, turned by ``turn`` radians.

        ``full`` is the whole text where ``words`` is shortened; viewers show it on pointing.
        ``after`` follows in regular type.
        """
        put = self._put("text", x=number(at[0]), y=number(at[1]), fill=ink)
        put.set("font-size", number(size))
        if anchor != "start":
            put.set("text-anchor", anchor)
        if halo:
            put.set("stroke", PAPER)
            put.set("stroke-width", "3")
            put.set("stroke-linejoin", "round")
            put.set("paint-order", "stroke")
        if abs(turn) > LEVEL:
            put.set(
                "transform", f"rotate({math.degrees(turn):.1f} {number(at[0])} {number(at[1])})"
            )
        if not words.isascii():
            put.set("unicode-bidi", "isolate")
        if full and full != words:
            Xml.SubElement(put, "title").text = full
        first = Xml.SubElement(put, "tspan")
        first.text = words
        if bold:
            first.set("font-weight", "bold")
        if after:
            second = Xml.SubElement(put, "tspan", dx=number(0.45 * size))
            second.text = after
        return put

    def text_in(
        self,
        words: str,
        box: Box,
        *,
        size: float,
        ink: str = INK,
        bold: bool = False,
        halo: bool = False,
        full: str = "",
        after: str = "",
    ) -> Xml.Element:
        """Write ``words`` centred in ``box``, along its direction."""
        down = 0.36 * size
        at = (box.x - math.sin(box.angle) * down, box.y + math.cos(box.angle) * down)
        return self.text(
            words, at, size=size, anchor="middle", ink=ink, bold=bold, halo=halo, full=full,
            turn=box.angle, after=after,
        )  # fmt: skip

    def add(self, other: Paper, *, right: float, down: float) -> None:
        """Put another group on this one, moved right and down."""
        other.group.set("transform", f"translate({number(right)} {number(down)})")
        self.group.append(other.group)

    def _put(self, tag: str, **attributes: str) -> Xml.Element:
        return Xml.SubElement(self.group, tag, attributes)


def svg_document(
    paper: Paper, width: float, height: float, *, title: str, text: str
) -> Xml.Element:
    """Return the root element of a drawing ``width`` by ``height`` px with a description."""
    root = Xml.Element(
        "svg",
        {
            "xmlns": SVG,
            "width": number(width),
            "height": number(height),
            "viewBox": f"0 0 {number(width)} {number(height)}",
            "font-family": TYPEFACE,
            "role": "img",
        },
    )
    Xml.SubElement(root, "title").text = title
    Xml.SubElement(root, "desc").text = text
    Xml.SubElement(root, "rect", {"width": "100%", "height": "100%", "fill": PAPER})
    root.append(paper.group)
    return root
