"""Area and line loads as an engineer gives them, shared out to the nodes of a chord.

A load per length q on a straight panel of the chord of length l puts q l / 2 at either end, so
that each inner node takes half of the panels beside it and the end nodes half a panel (common
practice, purlins at the nodes). An area load has q = pressure x coefficient x spacing.
"""

from __future__ import annotations

from collections.abc import Sequence
from typing import Any

from sizing.brief.area_loads import read_area_load
from sizing.brief.findings import Findings, KeyPath, Quantities
from sizing.brief.line_loads import read_line_load
from sizing.brief.load_shares import LoadReader, SpreadLoads
from sizing.brief.nodes_and_supports import NodeTable


def read_spread_loads(
    path: KeyPath,
    area_loads: Sequence[Any],
    line_loads: Sequence[Any],
    nodes: NodeTable,
    findings: Findings,
    quantities: Quantities,
) -> SpreadLoads:
    """Return the nodal shares of one load case's area and line loads."""
    reader = LoadReader(nodes=nodes, findings=findings, quantities=quantities)
    loads = SpreadLoads()
    for place, value in enumerate(area_loads, start=1):
        if not read_area_load((*path, "area_loads", place), value, reader, loads):
            loads.good = False
    for place, value in enumerate(line_loads, start=1):
        if not read_line_load((*path, "line_loads", place), value, reader, loads):
            loads.good = False
    return loads
