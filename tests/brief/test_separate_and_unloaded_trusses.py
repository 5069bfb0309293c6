"""Cautions on members that share no node, and on loads that no member carries."""

from __future__ import annotations

from pathlib import Path
from typing import Any

import pytest

from sizing.brief.model import SourceFile
from sizing.brief.shapes import SHAPES, shape_tables
from sizing.brief.toml_reader import brief_from_tables

SEPARATE = "separate trusses"
UNLOADED = "No load reaches a member"


def cautions(tables: dict[str, Any]) -> list[str]:
    source = SourceFile(name="b", path=Path("b"), sha256="")
    return list(brief_from_tables(tables, source).cautions)


def beside(count: int) -> dict[str, Any]:
    """King-post trusses of invented loads, ``count`` of them side by side without a joint."""
    tables = shape_tables("king-post")
    nodes, supports = tables["nodes"], tables["supports"]
    tables["deflection_limits"] = []
    members = [
        ("A0", "A1"), ("A1", "A2"), ("A0", "B1"), ("B1", "B2"), ("B2", "B3"), ("B3", "A2"),
        ("A1", "B2"), ("A1", "B1"), ("A1", "B3"),
    ]  # fmt: skip
    for k in range(1, count):
        tables["nodes"] = tables["nodes"] | {
            f"{name}.{k}": [x + 100.0 * k, y] for name, (x, y) in nodes.items()
        }
        tables["supports"] = tables["supports"] | {f"{n}.{k}": s for n, s in supports.items()}
        chain = [f"{a}.{k}-{b}.{k}" for a, b in members]
        tables["groups"][f"further-{k}"] = {"members": chain, "buckling_length": 1.0}
    return tables


def test_trusses_without_a_common_node_are_told() -> None:
    """Two and three trusses: their number and the first node of each."""
    assert not any(SEPARATE in text for text in cautions(beside(1)))
    assert (
        "The members form 2 separate trusses: one with node A0, one with node A0.1; they share no "
        "node and are sized together."
    ) in cautions(beside(2))
    (told,) = [text for text in cautions(beside(9)) if SEPARATE in text]
    assert "9 separate trusses" in told
    assert "(9 in all)" in told


@pytest.mark.parametrize("name", SHAPES)
def test_ready_shapes_are_one_loaded_truss(name: str) -> None:
    """No ready shape is in parts or without load."""
    assert not any(SEPARATE in t or UNLOADED in t for t in cautions(shape_tables(name)))


def loaded(**cases: Any) -> dict[str, Any]:
    tables = shape_tables("king-post")
    tables["cases"] = {name: {"kind": "permanent", "nodal": nodal} for name, nodal in cases.items()}
    return tables


@pytest.mark.parametrize(
    ("tables", "told"),
    [
        (loaded(one={"A0": [3, -5]}), True),  # A0 holds x and y, A2 only y
        (loaded(one={"A0": [0, -5]}, two={"A2": [0, -5]}), True),
        (loaded(one={"B2": [0, 0], "A0": [1, 0]}), True),
        (loaded(one={"A2": [1, -5]}), False),
        (loaded(one={"A0": [0, -5]}, two={"B2": [0, -5]}), False),
    ],
)
def test_loads_that_supports_take_whole_are_told(tables: dict[str, Any], told: bool) -> None:
    """A load strains members only where its node is free to move its way."""
    assert any(UNLOADED in text for text in cautions(tables)) is told


def test_self_weight_reaches_the_members() -> None:
    """With self-weight every member is loaded."""
    tables = loaded(one={"A0": [0, -5]})
    tables["cases"]["own"] = {"kind": "permanent", "self_weight": True}
    assert not any(UNLOADED in text for text in cautions(tables))
