"""Deflection limits of a brief: nodes, direction, limit, and the combinations that they hold in."""

from __future__ import annotations

import math
import re
from collections.abc import Sequence
from dataclasses import dataclass
from typing import Any

from sizing.brief.combinations import CombinationTable, named_place, read_factors
from sizing.brief.findings import Findings, KeyPath, Quantities, listed, quoted, shown
from sizing.brief.load_cases import CaseTable
from sizing.brief.model import Combination, DeflectionLimit, Support
from sizing.brief.name_ranges import all_nodes_named
from sizing.brief.nodes_and_supports import FARTHEST, NodeTable
from sizing.brief.raw_tables import DESCRIBED_HERE, RawLimit, read_entry
from sizing.brief.spans import deflection_span, height_above_supports

_PART = re.compile(r"(span|height)\s*/\s*(\d+(?:\.\d+)?)", re.IGNORECASE)
LEAST_DIVISOR = 10.0
"""Span over less than 10 is no deflection limit of the trade (l/60 to l/1000)."""


@dataclass(frozen=True, kw_only=True)
class _Known:
    """What limits refer to. ``supports_known``: the supports were read without a mistake."""

    nodes: NodeTable
    cases: CaseTable
    supports: tuple[Support, ...]
    table: CombinationTable
    findings: Findings
    quantities: Quantities
    supports_known: bool

    @property
    def combinations(self) -> tuple[Combination, ...]:
        return self.table.combinations


def read_deflection_limits(
    raw: Sequence[Any],
    nodes: NodeTable,
    supports: tuple[Support, ...],
    cases: CaseTable,
    table: CombinationTable,
    findings: Findings,
    quantities: Quantities,
    *,
    supports_known: bool,
) -> tuple[DeflectionLimit, ...]:
    """Return the deflection limits in the order of the brief."""
    known = _Known(
        nodes=nodes,
        cases=cases,
        supports=supports,
        table=table,
        findings=findings,
        quantities=quantities,
        supports_known=supports_known,
    )
    limits: list[DeflectionLimit] = []
    taken: set[str] = set()
    for place, value in enumerate(raw, start=1):
        path = named_place("deflection_limits", place, value)
        entry, faulty = read_entry(RawLimit, value, path, findings, "a table [[deflection_limits]]")
        if entry is None:
            continue
        if "name" not in faulty:
            findings.check_name((*path, "name"), entry.name, "deflection limit")
        if "name" not in faulty and entry.name in taken:
            findings.add(
                (*path, "name"),
                found=f"deflection limit {quoted(entry.name)} for the second time",
                expected="a name of its own for each deflection limit",
            )
        taken.add(entry.name)
        limit = _read(path, entry, faulty, known)
        if limit is not None:
            limits.append(limit)
    return tuple(limits)


def _read(
    path: KeyPath, entry: RawLimit, faulty: frozenset[str], known: _Known
) -> DeflectionLimit | None:
    origin = None
    if entry.relative_to is not None:
        origin = known.nodes.names.resolve((*path, "relative_to"), entry.relative_to)
    nodes = [] if "nodes" in faulty else _nodes((*path, "nodes"), entry.nodes, origin, known)
    direction, direction_text = _direction((*path, "direction"), entry.direction, known)
    limit = None if "limit" in faulty else _limit(path, entry, nodes, known)
    combinations = _combinations((*path, "combinations"), entry.combinations, known)
    precamber = _precamber((*path, "precamber"), entry, faulty, known)
    _caution_creep(entry, combinations, known)
    if not nodes or not direction or limit is None or not combinations:
        return None
    return DeflectionLimit(
        name=entry.name,
        nodes=tuple(nodes),
        direction=direction,
        direction_text=direction_text,
        limit=limit,
        limit_text=entry.limit if isinstance(entry.limit, str) else f"{entry.limit}",
        combinations=tuple(combinations),
        relative_to=origin,
        component=entry.component,
        precamber=precamber,
    )


def _precamber(
    path: KeyPath, entry: RawLimit, faulty: frozenset[str], known: _Known
) -> dict[int, float]:
    """Return the precamber as factors on load cases; it belongs to the net final deflection."""
    if not faulty & {"component", "precamber"}:
        if entry.precamber and entry.component != "net final":
            known.findings.add(
                path,
                found=f"a precamber beside component = {quoted(entry.component)}",
                expected='component = "net final"',
            )
        elif entry.component == "net final" and not entry.precamber:
            known.findings.add(
                path,
                found="nothing",
                expected="the load cases that the precamber takes up, such as { permanent = 1.0 }",
            )
    factors, _ = read_factors(
        path, entry.precamber, known.cases.names, known.findings, known.quantities
    )
    return factors


def _caution_creep(entry: RawLimit, combinations: Sequence[int], known: _Known) -> None:
    """Say where a final deflection rests on a long-term part that the brief does not state."""
    assumed = [known.combinations[c].name for c in combinations if c in known.table.assumed]
    if entry.component != "instantaneous" and assumed:
        known.findings.caution(
            f"Deflection limit {entry.name}: the part of {listed(assumed)} that acts for long is "
            "taken with the usual psi2 of EN 1990 Table A1.1; write long_term in the combination "
            "to state it."
        )


def _nodes(path: KeyPath, value: Any, origin: int | None, known: _Known) -> list[int]:
    """Return the nodes; ``"all"`` leaves out those that the supports hold entirely."""
    if value == "all":
        fixed = {s.node for s in known.supports if all(s.held)} if origin is None else {origin}
        return [n for n in range(len(known.nodes.nodes)) if n not in fixed]
    if not isinstance(value, list) or not all(isinstance(n, str) for n in value):
        known.findings.add(path, found=shown(value), expected=DESCRIBED_HERE["nodes"])
        return []
    if not value:
        known.findings.add(path, found="an empty list", expected=DESCRIBED_HERE["nodes"])
    nodes, _ = all_nodes_named(path, value, known.nodes.names, known.findings)
    if origin is not None and origin in nodes:
        known.findings.add(
            path,
            found=f"node {known.nodes.nodes[origin].name}, to which the movement is relative",
            expected="other nodes than relative_to",
        )
    return nodes


def _direction(path: KeyPath, value: Any, known: _Known) -> tuple[tuple[float, ...], str]:
    """Return the unit vector and its name; the vertical when nothing is said."""
    axes = known.nodes.axes
    if not axes:
        return (), ""
    if value is None:
        value = axes[-1]
    if isinstance(value, str) and value.lower() in axes:
        return tuple(float(axis == value.lower()) for axis in axes), value.lower()
    expected = f"one of {listed(axes)}, or a vector of {len(axes)} numbers"
    if not isinstance(value, list) or len(value) != len(axes):
        known.findings.add(path, found=shown(value), expected=expected)
        return (), ""
    vector = known.quantities.vector(path, value, "dimensionless")
    size = math.hypot(*vector)
    if math.isfinite(size) and size > 0.0:
        return tuple(x / size for x in vector), "(" + ", ".join(f"{x:g}" for x in vector) + ")"
    if size == 0.0:
        known.findings.add(path, found="a vector of zeros", expected=expected)
    return (), ""


def _limit(path: KeyPath, entry: RawLimit, nodes: list[int], known: _Known) -> float | None:
    """Return the limit in m: a length, or a part of the span or of the height."""
    place, value = (*path, "limit"), entry.limit
    part = _PART.fullmatch(value.strip()) if isinstance(value, str) else None
    if part is None:
        return _length_limit(path, place, value, entry, known)
    word, divisor = part[1].lower(), float(part[2])
    if divisor < LEAST_DIVISOR:
        known.findings.add(
            place, found=shown(value), expected=f"a divisor of {LEAST_DIVISOR:g} or more"
        )
        return None
    whole = _span(path, word, entry, nodes, known)
    return None if whole is None else whole / divisor


def _length_limit(
    path: KeyPath, place: KeyPath, value: Any, entry: RawLimit, known: _Known
) -> float | None:
    if entry.span is not None:
        known.findings.add(
            (*path, "span"),
            found="a span beside a limit that does not use it",
            expected='limit = "span/250" or the like',
            fix="Delete the span.",
        )
    if isinstance(value, bool) or not isinstance(value, (int, float, str)):
        known.findings.add(place, found=shown(value), expected=DESCRIBED_HERE["limit"])
        return None
    if isinstance(value, str) and not re.match(r"\s*[-+\u2212\d.]", value):
        divisor = re.search(r"/\s*(\d+)\s*$", value)
        known.findings.add(
            place,
            found=quoted(value),
            expected=DESCRIBED_HERE["limit"],
            fix=f"Did you mean {quoted('span/' + divisor[1])}?" if divisor else "",
        )
        return None
    length = known.quantities.read(place, value, "length")
    if length is not None and not 0.0 < length <= FARTHEST:
        known.findings.add(place, found=shown(value), expected="a length above 0")
        return None
    return length


def _span(
    path: KeyPath, word: str, entry: RawLimit, nodes: list[int], known: _Known
) -> float | None:
    place = (*path, "span")
    if entry.span is not None:
        span = known.quantities.read(place, entry.span, "length")
        if span is not None and not 0.0 < span <= FARTHEST:
            known.findings.add(place, found=shown(entry.span), expected="a length above 0")
            return None
        return span
    if not nodes or not known.supports_known:
        return None  # told where it stands
    points = known.nodes.nodes
    if word == "height":
        found = height_above_supports(points, known.supports)
    else:
        found = deflection_span(points, known.supports, nodes, entry.name, known.findings)
    if found is None:
        known.findings.add(
            (*path, "limit"),
            found=f"{shown(entry.limit)}, but the supports give no {word}",
            expected=f"a {word} between supports that hold the vertical"
            if word == "span"
            else "a node above the lowest support",
            fix=f'Give the {word}, for instance span = "24 m", or a length as the limit.',
        )
    return found


def _combinations(path: KeyPath, value: Any, known: _Known) -> list[int]:
    serviceability = [i for i, c in enumerate(known.combinations) if c.state == "serviceability"]
    if value is None or value == "serviceability":
        if not serviceability and known.table.whole:
            known.findings.add(
                path,
                found="no serviceability combination in the brief",
                expected="at least one to check the deflection in",
                fix='Add one with state = "serviceability", or name combinations here.',
            )
        return serviceability
    if value == "strength":
        return [i for i, c in enumerate(known.combinations) if c.state == "strength"]
    if not isinstance(value, list) or not value or not all(isinstance(n, str) for n in value):
        known.findings.add(
            path, found=shown(value), expected='a list of combinations or "serviceability"'
        )
        return []
    return known.table.names.resolve_all(path, value)
