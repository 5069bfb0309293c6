"""Brief to arrays: geometry, loads per case, factors and shares of self-weight."""

from __future__ import annotations

from pathlib import Path

import numpy as np

from sizing.brief.model import (
    Brief,
    Combination,
    Group,
    LoadCase,
    Member,
    Node,
    SourceFile,
    Support,
    Units,
)
from sizing.mechanics.brief_loads import (
    case_loads,
    combination_factors,
    geometry_of,
    self_weight_share,
)

BRIEF = Brief(
    title="Invented two-bar bracket",
    source=SourceFile(name="bracket.toml", path=Path("bracket.toml"), sha256=""),
    units=Units(),
    minimise="mass",
    nodes=(
        Node(name="A", position=(0.0, 0.0)),
        Node(name="B", position=(0.0, 3.0)),
        Node(name="C", position=(4.0, 3.0)),
    ),
    supports=(
        Support(node=0, held=(True, False)),
        Support(node=0, held=(False, True)),
        Support(node=1, held=(True, True)),
    ),
    groups=(Group(name="all", members=(0, 1)),),
    members=(
        Member(name="A-C", mark="1", start=0, end=2, group=0, length=5.0),
        Member(name="B-C", mark="2", start=1, end=2, group=0, length=4.0),
    ),
    cases=(
        LoadCase(name="own", kind="permanent", nodal={}, self_weight=True),
        LoadCase(name="snow", kind="snow", nodal={2: (0.0, -9.0e3)}),
    ),
    combinations=(
        Combination(name="U1", state="strength", factors={0: 1.35, 1: 1.5}, duration="short"),
        Combination(name="U2", state="strength", factors={0: 1.35}, duration="permanent"),
    ),
    deflection_limits=(),
    options=(),
)


def test_geometry_of_a_brief():
    """Lengths and supports are the brief's; two support entries of one node add up."""
    g = geometry_of(BRIEF)
    np.testing.assert_allclose(g.length, [5.0, 4.0])
    assert g.held.tolist() == [[True, True], [True, True], [False, False]]
    assert g.free.tolist() == [4, 5]
    np.testing.assert_allclose(g.compatibility.toarray(), [[0.8, 0.6], [1.0, 0.0]])


def test_loads_and_factors():
    """Nodal loads stand at their node and case, factors at their combination and case."""
    loads = case_loads(BRIEF)
    assert loads.shape == (3, 2, 2)
    assert loads[2, 1, 1] == -9.0e3
    assert np.count_nonzero(loads) == 1
    assert combination_factors(BRIEF).tolist() == [[1.35, 1.5], [1.35, 0.0]]


def test_self_weight_goes_half_to_each_end():
    """The weights of all members arrive at the nodes, downwards, half at each end."""
    share = self_weight_share(geometry_of(BRIEF))
    loads = (share @ np.array([100.0, 60.0])).reshape(3, 2)
    assert loads.tolist() == [[0.0, -50.0], [0.0, -30.0], [0.0, -80.0]]
