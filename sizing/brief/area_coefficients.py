"""Coefficients of an area load by part of the chord, or left and right of the ridge."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from itertools import pairwise
from typing import Any

from sizing.brief.findings import KeyPath, listed, quoted
from sizing.brief.load_shares import LoadReader
from sizing.brief.raw_tables import RawAreaLoad

GREATEST_COEFFICIENT = 10.0
"""Pressure coefficients of roofs lie between -3 and 2, drifted snow below 5."""
HALVES = ("left", "right")


def panel_factors(
    path: KeyPath, entry: RawAreaLoad, chain: Sequence[int], reader: LoadReader
) -> list[float] | None:
    """Return the factor of each panel of the chain; None with the mistake recorded."""
    place = (*path, "coefficients")
    if not entry.coefficients:
        if entry.ridge is not None:
            reader.findings.add(
                (*path, "ridge"),
                found="a ridge without coefficients",
                expected="coefficients = { left = ..., right = ... } beside it",
            )
        given = 1.0 if entry.coefficient is None else entry.coefficient
        factor = reader.bounded(
            (*path, "coefficient"), given, "dimensionless", GREATEST_COEFFICIENT
        )
        return None if factor is None else [factor] * (len(chain) - 1)
    if entry.coefficient is not None:
        reader.findings.add(
            (*path, "coefficient"),
            found="a coefficient beside coefficients",
            expected="one of the two",
        )
        return None
    parts = _parts(path, entry, chain, reader)
    return None if parts is None else _by_panel(place, entry.chord, chain, parts, reader)


def _by_panel(
    place: KeyPath,
    chord: str,
    chain: Sequence[int],
    parts: Mapping[str, tuple[list[int], Any]],
    reader: LoadReader,
) -> list[float] | None:
    """Return the factor of each panel, each given exactly once."""
    factors: dict[frozenset[int], float] = {}
    panels = {frozenset(pair): reader.panel(*pair) for pair in pairwise(chain)}
    before = len(reader.findings)
    for name, (nodes, value) in parts.items():
        factor = reader.bounded((*place, name), value, "dimensionless", GREATEST_COEFFICIENT)
        for a, b in pairwise(nodes):
            panel = frozenset((a, b))
            if panel not in panels or panel in factors:
                how = "for the second time" if panel in factors else "off the chord"
                reader.findings.add(
                    (*place, name),
                    found=f"panel {reader.panel(a, b)} {how}",
                    expected=f"each panel of {chord} once",
                )
            factors[panel] = 1.0 if factor is None else factor
    missing = [name for panel, name in panels.items() if panel not in factors]
    if missing and len(reader.findings) == before:
        reader.findings.add(
            place,
            found=f"no coefficient for {listed(missing)}",
            expected=f"each panel of {chord} once",
            fix="Write 0.0 for a part without load.",
        )
    if len(reader.findings) > before:
        return None
    return [factors[frozenset(pair)] for pair in pairwise(chain)]


def _parts(
    path: KeyPath, entry: RawAreaLoad, chain: Sequence[int], reader: LoadReader
) -> dict[str, tuple[list[int], Any]] | None:
    """Return the parts of the chord that the coefficients name, by that name."""
    place = (*path, "coefficients")
    if any(name in HALVES for name in entry.coefficients):
        strangers = [name for name in entry.coefficients if name not in HALVES]
        if strangers or len(entry.coefficients) != 2:
            reader.findings.add(
                place,
                found=listed([quoted(name) for name in entry.coefficients]),
                expected="both left and right, or parts of the chord",
            )
            return None
        halves = _halves(path, entry, chain, reader)
        return (
            None
            if halves is None
            else {name: (halves[name], entry.coefficients[name]) for name in HALVES}
        )
    if entry.ridge is not None:
        reader.findings.add(
            (*path, "ridge"),
            found="a ridge beside coefficients of parts",
            expected="it beside left and right only",
            fix="Delete it.",
        )
        return None
    found = {name: reader.chain((*place, name), name) for name in entry.coefficients}
    if any(nodes is None for nodes in found.values()):
        return None
    return {
        name: (nodes, entry.coefficients[name])
        for name, nodes in found.items()
        if nodes is not None
    }


def _halves(
    path: KeyPath, entry: RawAreaLoad, chain: Sequence[int], reader: LoadReader
) -> Mapping[str, list[int]] | None:
    """Return the nodes left and right of the ridge, the highest node unless it is named."""
    inner = list(chain[1:-1])
    if entry.ridge is not None:
        ridge = reader.nodes.names.resolve((*path, "ridge"), entry.ridge)
        if ridge is not None and ridge not in inner:
            reader.findings.add(
                (*path, "ridge"),
                found=f"node {entry.ridge}",
                expected=f"a node between the ends of {entry.chord}",
            )
            return None
    else:
        height = {node: float(reader.position(node)[-1]) for node in chain}
        top = [node for node in chain if height[node] == max(height.values())]
        ridge = top[0] if len(top) == 1 and top[0] in inner else None
        if ridge is None:
            reader.findings.add(
                (*path, "coefficients"),
                found=f"left and right, but {entry.chord} has no single highest node inside",
                expected="a ridge",
                fix="Name it: ridge = ...",
            )
    if ridge is None:
        return None
    at = list(chain).index(ridge)
    first, second = list(chain[: at + 1]), list(chain[at:])
    rightwards = reader.position(chain[-1])[0] >= reader.position(chain[0])[0]
    return dict(zip(HALVES, (first, second) if rightwards else (second, first), strict=True))
