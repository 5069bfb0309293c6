"""The span and the height that deflection limits are parts of, found from the supports."""

from __future__ import annotations

import math
from collections.abc import Sequence

from sizing.brief.findings import Findings, listed
from sizing.brief.model import Node, Support

SAME_LINE = 1e-3
"""m. Supports closer than 1 mm in plan stand on one line."""


def deflection_span(
    nodes: Sequence[Node],
    supports: Sequence[Support],
    limited: Sequence[int],
    limit_name: str,
    findings: Findings,
) -> float | None:
    """Return the span in m that holds for the ``limited`` nodes; None without two supports.

    Only supports that hold the vertical count. Plane truss: the span that the nodes stand in,
    the smallest one when they stand in several. Space truss: the greatest distance between
    neighbouring supports in plan (the longest edge of their minimum spanning tree). What is not
    beyond doubt goes out as a caution.
    """
    plan = _distinct([nodes[s.node].position[:-1] for s in supports if s.held[-1]])
    if len(plan) < 2:
        return None
    if len(plan[0]) > 1:
        span = max(_tree_edges(plan))
        if len(plan) > 2:
            findings.caution(
                f"Deflection limit {limit_name}: the span is taken as {span:.3f} m, the greatest "
                'distance between neighbouring supports; write span = "..." to state it.'
            )
        return span
    lines = sorted(p[0] for p in plan)
    places = [nodes[n].position[0] for n in limited]
    spans = {_bay(lines, x) for x in places}
    widths = sorted({round(lines[k + 1] - lines[k], 6) for k in spans})
    if len(widths) > 1:
        findings.caution(
            f"Deflection limit {limit_name}: its nodes stand in spans of "
            f"{widths[0]:.3f} m to {widths[-1]:.3f} m; the smallest is taken."
        )
    outside = [
        nodes[n].name
        for n, x in zip(limited, places, strict=True)
        if not lines[0] - SAME_LINE <= x <= lines[-1] + SAME_LINE
    ]
    if outside:
        findings.caution(
            f"Deflection limit {limit_name}: {listed(outside)} beyond the outer supports take the "
            'span next to them; a cantilever may want a limit of its own with span = "...".'
        )
    return min(lines[k + 1] - lines[k] for k in spans)


def height_above_supports(nodes: Sequence[Node], supports: Sequence[Support]) -> float | None:
    """Return the height in m of the highest node above the lowest support; None without any."""
    height = max(n.position[-1] for n in nodes) - min(nodes[s.node].position[-1] for s in supports)
    return height if height > SAME_LINE else None


def _bay(lines: Sequence[float], x: float) -> int:
    """Return the index of the span that ``x`` stands in, or that is next to it."""
    inside = sum(line < x - SAME_LINE for line in lines)
    return min(max(inside - 1, 0), len(lines) - 2)


def _distinct(points: Sequence[tuple[float, ...]]) -> list[tuple[float, ...]]:
    kept: list[tuple[float, ...]] = []
    for p in points:
        if all(math.dist(p, q) > SAME_LINE for q in kept):
            kept.append(p)
    return kept


def _tree_edges(points: Sequence[tuple[float, ...]]) -> list[float]:
    """Return the edge lengths of the minimum spanning tree (Prim's method)."""
    distance = {k: math.dist(points[0], points[k]) for k in range(1, len(points))}
    edges = []
    while distance:
        nearest = min(distance, key=lambda k: distance[k])
        edges.append(distance.pop(nearest))
        distance = {k: min(d, math.dist(points[nearest], points[k])) for k, d in distance.items()}
    return edges
