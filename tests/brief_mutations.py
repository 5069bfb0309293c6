"""Breaking sound briefs, catalogues and workbooks at random, and judging what is still accepted."""

from __future__ import annotations

import math
import resource
import time
from collections.abc import Iterator, Sequence
from contextlib import contextmanager
from copy import deepcopy
from dataclasses import fields, is_dataclass
from datetime import date, datetime
from typing import Any

import numpy as np
from hypothesis import strategies as st

from sizing.brief.model import Brief
from sizing.brief.sections import Catalogue

LONGEST = 10.0
"""Seconds that reading one file may take."""
MOST_MEMORY = 1024**3
"""Bytes by which reading may grow the process."""

NESTED: list[Any] = []
for _ in range(60):
    NESTED = [NESTED]

PAYLOADS: list[Any] = [
    math.nan, math.inf, -math.inf, 1e308, -1e308, 1e-308, 5e-324, 10**30, -(10**400), 0, 0.0, -0.0,
    -1, 1, 2, 3, 1e9, 0.5, True, False, "", " ", "NaN", "inf", "-inf m", "1e999 m", "0 m", "-5 m",
    "12 parsec", "5 kg", "1,5 m", "1 000 kN", "\u22125 kN", "0x10", "1_000", "٣ m", "=1+1", "#REF!",
    "\u202edorhc", "ß", "\U0001f477", "a\x00b", "\n", "A0", "B1", "A0-A1", "A1-A0", "A0-A0",
    "A0..A2", "A0..A99999999", "A2..A0 by 0", "*", "?" * 40, "*a" * 30, "A0-A1-A2-B1", "x", "y",
    "z", "all",
    "span/250", "span/0", "height/1e9", "S355", "EN 1993-1-1", "EN 1995-1-1", "elastic", "snow",
    "permanent", "serviceability", "EN 1990", "../../x.csv", "square-hollow-sections", "x" * 70_000,
    [], {}, [[]], {"a": {"b": {}}}, NESTED, [0, 0], [0, 0, 0], [1e308, -1e308], [math.nan, 1.0],
    ["A0", "A0"], ["x", "y", "z"], {"A0": 1.0}, {"snow": 1.0}, {"in_plane": 0.0}, [None] * 3,
    date(2026, 2, 1), datetime(2026, 2, 1, 12), list(range(3_000)),
    {f"k{i}": i for i in range(500)},
]  # fmt: skip
"""What may stand in a file where it does not belong. None is no TOML but may come from a sheet."""

OPERATIONS = ("replace", "replace", "delete", "twice", "swap", "scale", "rename", "wrap")

edits = st.lists(
    st.tuples(
        st.floats(0, 1, exclude_max=True),
        st.sampled_from(OPERATIONS),
        st.integers(0, len(PAYLOADS) - 1),
        st.floats(0, 1, exclude_max=True),
    ),
    min_size=1,
    max_size=4,
)
"""Where, what, with what, and where else."""

cuts = st.lists(
    st.tuples(
        st.floats(0, 1, exclude_max=True),
        st.sampled_from(["flip", "cut", "insert", "double"]),
        st.binary(min_size=1, max_size=6),
    ),
    min_size=1,
    max_size=5,
)
"""Edits of bytes."""


def _spots(value: Any) -> Iterator[tuple[Any, Any]]:
    items = value.items() if isinstance(value, dict) else enumerate(value)
    for key, inner in items:
        yield value, key
        if isinstance(inner, (dict, list)) and len(inner) < 400:
            yield from _spots(inner)


def mutated(tables: dict[str, Any], changes: Sequence[tuple[float, str, int, float]]) -> Any:
    """Return the tables with the edits applied, one after the other."""
    tables = deepcopy(tables)
    for where, operation, payload, elsewhere in changes:
        spots = list(_spots(tables))
        if not spots:
            break
        holder, key = spots[int(where * len(spots))]
        other = spots[int(elsewhere * len(spots))]
        _apply(operation, holder, key, other, deepcopy(PAYLOADS[payload]))
    return tables


def _apply(operation: str, holder: Any, key: Any, other: tuple[Any, Any], payload: Any) -> None:
    value = holder[key]
    if operation == "delete":
        del holder[key]
    elif operation == "twice" and isinstance(holder, list):
        holder.insert(key, deepcopy(value))
    elif operation == "twice":
        holder[f"{key} "] = deepcopy(value)
    elif operation == "swap":
        holder[key] = deepcopy(other[0][other[1]])
    elif operation == "scale" and isinstance(value, (int, float)):
        holder[key] = -value if isinstance(payload, str) else value * 1_000_000
    elif operation == "rename" and isinstance(holder, dict):
        holder[str(payload)[:50]] = holder.pop(key)
    elif operation == "wrap":
        holder[key] = [value]
    else:
        holder[key] = payload


def cut_up(data: bytes, changes: Sequence[tuple[float, str, bytes]]) -> bytes:
    """Return the bytes with some flipped, cut out, put in or doubled."""
    for where, operation, piece in changes:
        at, size = int(where * len(data)), len(piece)
        if operation == "flip":
            middle = bytes(a ^ b for a, b in zip(data[at : at + size], piece, strict=False))
        elif operation == "cut":
            middle = b""
        elif operation == "insert":
            middle = piece + data[at : at + size]
        else:
            middle = data[at : at + size * 20] * 2
            size *= 20
        data = data[:at] + middle + data[at + size :]
    return data


@contextmanager
def bounded() -> Iterator[None]:
    """Hold what happens inside to the bounds of time and memory."""
    start, before = time.perf_counter(), resource.getrusage(resource.RUSAGE_SELF).ru_maxrss
    yield
    grown = (resource.getrusage(resource.RUSAGE_SELF).ru_maxrss - before) * 1024
    assert time.perf_counter() - start < LONGEST
    assert grown < MOST_MEMORY


def must_be_sane(brief: Brief) -> None:
    """Whatever was accepted, no nonsense value is in it."""
    assert all(math.isfinite(x) for x in _floats(brief))
    assert len({node.position for node in brief.nodes}) == len(brief.nodes) >= 2
    assert brief.supports
    assert any(any(support.held) for support in brief.supports)
    assert brief.groups
    assert all(group.members for group in brief.groups)
    assert all(0.0 < group.utilisation_cap <= 1.0 for group in brief.groups)
    assert all(0.0 < group.net_section_factor <= 1.0 for group in brief.groups)
    assert all(member.length > 0.0 for member in brief.members)
    for index in range(len(brief.members)):
        assert all(0.0 < length < 1e6 for length in brief.buckling_lengths(index))
    assert any(any(f) for case in brief.cases for f in case.nodal.values())
    assert any(c.state == "strength" for c in brief.combinations)
    assert all(c.factors and all(c.factors.values()) for c in brief.combinations)
    for limit in brief.deflection_limits:
        assert limit.limit > 0.0
        assert limit.nodes
        assert limit.combinations
        assert math.isclose(math.hypot(*limit.direction), 1.0)
    assert brief.options
    assert all(option.standard and option.catalogue for option in brief.options)


def _floats(value: Any) -> Iterator[float]:
    if isinstance(value, float):
        yield value
    elif is_dataclass(value) and not isinstance(value, type):
        for field in fields(value):
            if field.name != "settings":  # not interpreted yet; the standard validates them
                yield from _floats(getattr(value, field.name))
    elif isinstance(value, dict):
        yield from (x for inner in value.values() for x in _floats(inner))
    elif isinstance(value, (list, tuple)):
        yield from (x for inner in value for x in _floats(inner))


def must_be_a_sane_catalogue(catalogue: Catalogue) -> None:
    """Areas, masses and second moments are finite, positive and in order."""
    assert len(catalogue) > 0
    assert np.all(np.isfinite(catalogue.area) & (catalogue.area > 0.0))
    assert not np.any(np.isinf(catalogue.mass) | (catalogue.mass <= 0.0))
    assert np.all(np.isfinite(catalogue.i_major) & (catalogue.i_least > 0.0))
    assert np.all(catalogue.i_least <= catalogue.i_minor)
    assert np.all(catalogue.i_minor <= catalogue.i_major)
