"""Places labels on a drawing so that they do not lie on one another or on lines."""

from __future__ import annotations

import math
import unicodedata
from collections import defaultdict
from collections.abc import Iterable, Iterator
from dataclasses import dataclass
from functools import cached_property

Point = tuple[float, float]

CELL = 60.0
"""Side of the squares of the search grid, px: about one label."""

WIDE, NARROW = 1.0, 0.57
"""Width of a character over the type size: East Asian and pictographs, and all others (mean of
capitals and digits of a plain sans-serif face, common practice)."""


def text_width(text: str, size: float) -> float:
    """Return the estimated width of ``text`` in type of ``size`` px."""
    return size * sum(
        WIDE if unicodedata.east_asian_width(c) in "WF" or ord(c) > 0x1F000 else NARROW
        for c in text
    )


@dataclass(frozen=True)
class Box:
    """A rectangle turned by ``angle`` (radians, y downwards) about its centre."""

    x: float
    y: float
    width: float
    height: float
    angle: float = 0.0

    @cached_property
    def corners(self) -> tuple[Point, ...]:
        """The four corners in order."""
        c, s = math.cos(self.angle), math.sin(self.angle)
        w, h = self.width / 2, self.height / 2
        return tuple(
            (self.x + dx * c - dy * s, self.y + dx * s + dy * c)
            for dx, dy in ((-w, -h), (w, -h), (w, h), (-w, h))
        )

    @cached_property
    def extent(self) -> tuple[float, float, float, float]:
        """Least x, least y, greatest x and greatest y of the corners."""
        xs, ys = zip(*self.corners, strict=True)
        return min(xs), min(ys), max(xs), max(ys)

    def meets(self, other: Box) -> bool:
        """Return whether two rectangles overlap (separating axes)."""
        left, top, right, bottom = self.extent
        left2, top2, right2, bottom2 = other.extent
        if right <= left2 or right2 <= left or bottom <= top2 or bottom2 <= top:
            return False
        return not (self._apart(other) or other._apart(self))

    def _apart(self, other: Box) -> bool:
        """Return whether one of this rectangle's own axes separates the two."""
        c, s = math.cos(self.angle), math.sin(self.angle)
        along = [(x - self.x) * c + (y - self.y) * s for x, y in other.corners]
        if min(along) >= self.width / 2 or max(along) <= -self.width / 2:
            return True
        across = [(y - self.y) * c - (x - self.x) * s for x, y in other.corners]
        return min(across) >= self.height / 2 or max(across) <= -self.height / 2


def segment_box(start: Point, end: Point, thickness: float) -> Box:
    """Return a line of some thickness as a box."""
    dx, dy = end[0] - start[0], end[1] - start[1]
    return Box(
        (start[0] + end[0]) / 2,
        (start[1] + end[1]) / 2,
        math.hypot(dx, dy),
        thickness,
        math.atan2(dy, dx),
    )


class Layout:
    """What already stands on the paper, found quickly by a grid."""

    def __init__(self) -> None:
        self._cells: dict[tuple[int, int], list[tuple[Box, str]]] = defaultdict(list)

    def add(self, box: Box, kind: str) -> None:
        """Put ``box`` on the paper; ``kind`` is ``line``, ``text`` or ``sign``."""
        for cell in self._squares(box):
            self._cells[cell].append((box, kind))

    def clashes(self, box: Box, kinds: Iterable[str] = ("line", "text", "sign")) -> int:
        """Return how many things of these kinds ``box`` would lie on."""
        wanted = frozenset(kinds)
        seen: set[int] = set()
        for cell in self._squares(box):
            for other, kind in self._cells.get(cell, ()):
                if kind in wanted and id(other) not in seen and box.meets(other):
                    seen.add(id(other))
        return len(seen)

    def first_free(
        self, boxes: Iterable[Box], kinds: Iterable[str] = ("line", "text", "sign")
    ) -> int | None:
        """Return the index of the first box that lies on nothing, or None."""
        wanted = tuple(kinds)
        return next((i for i, box in enumerate(boxes) if not self.clashes(box, wanted)), None)

    def _squares(self, box: Box) -> Iterator[tuple[int, int]]:
        if box.width > 4 * CELL and box.height < CELL:  # a long line: walk along it
            yield from self._along(box)
            return
        left, top, right, bottom = box.extent
        for i in range(math.floor(left / CELL), math.floor(right / CELL) + 1):
            for j in range(math.floor(top / CELL), math.floor(bottom / CELL) + 1):
                yield i, j

    def _along(self, box: Box) -> Iterator[tuple[int, int]]:
        steps = math.ceil(2 * box.width / CELL)
        c, s = math.cos(box.angle), math.sin(box.angle)
        cells: set[tuple[int, int]] = set()
        for k in range(steps + 1):
            along = (k / steps - 0.5) * box.width
            i = math.floor((box.x + along * c) / CELL)
            j = math.floor((box.y + along * s) / CELL)
            cells |= {(i + a, j + b) for a in (-1, 0, 1) for b in (-1, 0, 1)}
        yield from sorted(cells)
