"""Views of a truss on paper: where each node falls, in metres, right and up."""

from __future__ import annotations

import math
from dataclasses import dataclass

from sizing.brief.model import Brief

Point = tuple[float, float]

AZIMUTH, ELEVATION = math.radians(28.0), math.radians(18.0)
"""Direction of the oblique view: off the symmetry planes of square and triangular towers, so
that no two legs fall on one line."""


@dataclass(frozen=True, kw_only=True, slots=True)
class View:
    """One projection. ``points`` per node; ``main`` carries member labels with sections.

    ``axes`` are the two axes that lie in the paper (None for the oblique view).
    """

    title: str
    points: tuple[Point, ...]
    axes: tuple[int, int] | None
    main: bool

    @property
    def box(self) -> tuple[float, float, float, float]:
        """Left, bottom, right and top in m."""
        xs, ys = [p[0] for p in self.points], [p[1] for p in self.points]
        return min(xs), min(ys), max(xs), max(ys)


def views_of(brief: Brief) -> tuple[View, ...]:
    """Return the views that show the truss: one for a plane truss, four for a space truss."""
    if brief.dimensions == 2:
        return (_flat(brief, "Elevation", (0, 1), main=True),)
    return (
        View(
            title="General view",
            points=tuple(oblique(node.position) for node in brief.nodes),
            axes=None,
            main=True,
        ),
        _flat(brief, "Elevation x-z", (0, 2), main=False),
        _flat(brief, "Elevation y-z", (1, 2), main=False),
        _flat(brief, "Plan x-y", (0, 1), main=False),
    )


def _flat(brief: Brief, title: str, axes: tuple[int, int], *, main: bool) -> View:
    a, b = axes
    points = tuple((node.position[a], node.position[b]) for node in brief.nodes)
    return View(title=title, points=points, axes=axes, main=main)


def oblique(position: tuple[float, ...]) -> Point:
    """Return where a point, or a movement, falls in the general view (linear in ``position``)."""
    x, y, z = position
    depth = x * math.sin(AZIMUTH) + y * math.cos(AZIMUTH)
    across = x * math.cos(AZIMUTH) - y * math.sin(AZIMUTH)
    return across, z * math.cos(ELEVATION) + depth * math.sin(ELEVATION)
