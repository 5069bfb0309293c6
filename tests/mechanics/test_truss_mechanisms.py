"""Mechanisms are found, counted and named; sound trusses have none."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from random_trusses import double_layer_grid, lattice_girder, random_truss

from sizing.errors import SolverError, UnstableTrussError
from sizing.mechanics.geometry import truss_geometry
from sizing.mechanics.mechanisms import find_mechanisms
from sizing.mechanics.self_stress import self_stress_basis
from sizing.mechanics.stability import (
    Determinacy,
    determinacy,
    direction_text,
    nearly_flat_text,
    require_stable,
)


def girder_names(g):
    return [f"{'AB'[i % 2]}{i // 2}" for i in range(g.nodes)]


def without(g, members):
    keep = np.setdiff1d(np.arange(g.members), members)
    return truss_geometry(g.position, g.start[keep], g.end[keep], g.held)


def diagonals(g, panel):
    slanting = np.abs(g.cosines).min(axis=1) > 0.1
    return np.flatnonzero(slanting & (np.minimum(g.start, g.end) // 2 == panel))


def message(g, names):
    with pytest.raises(UnstableTrussError) as caught:
        require_stable(g, names)
    return str(caught.value)


@settings(deadline=None, max_examples=40)
@given(st.integers(0, 2**32 - 1), st.sampled_from([2, 3]), st.integers(0, 4))
def test_random_stable_trusses_have_none(seed, d, redundants):
    """A truss grown to be stable has no mechanism and as many redundants as spare members."""
    rng = np.random.default_rng(seed)
    g = random_truss(rng, nodes=9, dimensions=d, redundants=redundants)
    found = find_mechanisms(g)
    assert found.found == ()
    assert found.redundants == g.members - g.free.size
    assert require_stable(g, [str(i) for i in range(9)]).rank == g.free.size


@settings(deadline=None, max_examples=60)
@given(st.integers(0, 2**32 - 1), st.sampled_from([2, 3]), st.integers(1, 5))
def test_every_movement_strains_nothing_and_all_are_found(seed, d, removed):
    """Members and supports taken out at random: as many movements as numpy's rank leaves."""
    rng = np.random.default_rng(seed)
    g = random_truss(rng, nodes=9, dimensions=d, redundants=2)
    g = without(g, rng.permutation(g.members)[:removed])
    held = g.held & (rng.random(g.held.shape) < 0.8)
    g = truss_geometry(g.position, g.start, g.end, held)
    found = find_mechanisms(g)
    rank = np.linalg.matrix_rank(g.compatibility.toarray(), tol=1e-9)
    assert found.rank == rank
    assert len(found.found) == g.free.size - rank
    movements = np.array([m.movement.ravel() for m in found.found])
    for m in found.found:
        assert np.abs(g.full_compatibility @ m.movement.ravel()).max() < 1e-7
        assert (m.movement[g.held] == 0).all()
        assert np.linalg.norm(m.movement, axis=1).max() == pytest.approx(1.0)
        if m.stop is not None:
            a, c = m.stop
            way = g.position[c] - g.position[a]
            assert abs(way @ (m.movement[c] - m.movement[a])) > 0
    if len(movements):
        assert np.linalg.matrix_rank(movements, tol=1e-6) == len(movements)


@settings(deadline=None, max_examples=30)
@given(st.integers(0, 2**32 - 1), st.sampled_from([2, 3]))
def test_adding_the_named_members_mends_a_linkage(seed, d):
    """With the member named for each movement put in, none of those movements is left."""
    rng = np.random.default_rng(seed)
    g = random_truss(rng, nodes=9, dimensions=d, redundants=0)
    g = without(g, rng.permutation(g.members)[:2])
    before = find_mechanisms(g)
    stops = [m.stop for m in before.found if m.stop is not None]
    start = [*g.start, *(a for a, _ in stops)]
    end = [*g.end, *(c for _, c in stops)]
    after = find_mechanisms(truss_geometry(g.position, start, end, g.held))
    assert len(after.found) == len(before.found) - len(stops)


def test_missing_diagonal_is_named():
    """A panel without its diagonals is named, with the members that would brace it."""
    g = lattice_girder(2)
    text = message(without(g, diagonals(g, 1)), girder_names(g))
    assert text == (
        "The truss is a mechanism: one movement strains no member.\n"
        "- Nodes move together without straining any member (B0 along x, A1 along y, "
        "B1 along (0.71, -0.71), B2 along x): the panel A1-B1-B2-A2 has no diagonal. "
        "Add a member A1-B2 or B1-A2, or a support."
    )


@pytest.mark.parametrize("panels", [6, 500])
def test_two_open_panels_are_told_apart(panels):
    """Two missing diagonals give two movements, each blamed on its own panel."""
    g = lattice_girder(panels)
    taken = np.concatenate([diagonals(g, 2), diagonals(g, 4)])
    found = find_mechanisms(without(g, taken))
    blamed = {frozenset(m.panel) for m in found.found}
    assert blamed == {frozenset((4, 5, 6, 7)), frozenset((8, 9, 10, 11))}


@pytest.mark.parametrize(
    ("node", "axis", "line"),
    [
        (0, 0, "The whole truss can slide along x: no support stops it. Hold a node along x."),
        (
            4,
            1,
            "The whole truss can turn about node A0: too few supports. "
            "Hold, for example, B2 along (-0.45, 0.89).",
        ),
    ],
)
def test_missing_support_is_named(node, axis, line):
    """A support too few lets the whole truss slide or turn, and the message says which."""
    g = lattice_girder(2)
    held = g.held.copy()
    held[node, axis] = False
    text = message(truss_geometry(g.position, g.start, g.end, held), girder_names(g))
    assert text.splitlines()[1:] == [f"- {line}"]


def test_node_in_a_straight_chain_is_named():
    """A node between two members in one line moves across them."""
    g = truss_geometry(
        [[0, 0], [1, 0], [2, 0], [1, 1]],
        [0, 1, 0, 2],
        [1, 2, 3, 3],
        [[1, 1], [0, 0], [1, 1], [0, 0]],
    )
    assert message(g, "ABCD") == (
        "The truss is a mechanism: one movement strains no member.\n"
        "- Node B can move along y: every member there stands square to that. "
        "Add a member at it with a component along y, or hold it along y."
    )


@pytest.mark.parametrize("panels", [3, 700])
def test_plane_truss_in_space_is_named(panels):
    """A plane truss in space without restraint across its plane: every node is loose."""
    g = lattice_girder(panels)
    position = np.insert(g.position, 1, 0.0, axis=1)
    held = np.insert(g.held, 1, g.held[:, 1], axis=1)
    g3 = truss_geometry(position, g.start, g.end, held)
    loose = g.nodes - 2
    assert message(g3, girder_names(g)) == (
        f"The truss is a mechanism: {loose} independent movements strain no member.\n"
        f"- Nodes B0, A1, B1, A2, B2, {'A3' if panels > 3 else 'B3'}"
        f"{f' and {loose - 6} more' if panels > 3 else ''} can each move along y: every member at "
        "them stands square to that. Add a member at each of them with a component along y, or "
        "hold each of them along y."
    )


def test_parallelogram_on_the_ground_is_named():
    """Two parallel legs under one beam sway; a member across stops it."""
    g = truss_geometry(
        [[0, 0], [2, 0], [1, 2], [3, 2]], [0, 1, 2], [2, 3, 3], [[1, 1], [1, 1], [0, 0], [0, 0]]
    )
    assert message(g, "ABCD") == (
        "The truss is a mechanism: one movement strains no member.\n"
        "- Nodes move together without straining any member (C along (0.89, -0.45), "
        "D along (0.89, -0.45)). A member B-C would stop it; so would a support in its way."
    )


def test_separate_part_and_bare_node_are_named():
    """A part that is not joined to the rest, and a node without members, are told apart."""
    g = truss_geometry(
        [[0, 0], [2, 0], [1, 1], [5, 0], [6, 0], [5.5, 1], [9, 9]],
        [0, 1, 0, 3, 4, 3],
        [1, 2, 2, 4, 5, 5],
        [[1, 1], [0, 1], [0, 0], [0, 1], [0, 1], [0, 0], [0, 0]],
    )
    assert message(g, "ABCDEFG") == (
        "The truss is a mechanism: 3 independent movements strain no member.\n"
        "- Node G has no member. Join it to the truss or take it out.\n"
        "- The separate part with nodes D, E, F can slide along x: no support stops it. "
        "Hold a node along x."
    )


def test_nearly_straight_chain_is_cautioned():
    """A node 0.1 mm out of line in a metre stands, but is reported."""
    g = truss_geometry([[0, 0], [1, 1e-4], [2, 0]], [0, 1], [1, 2], [[1, 1], [0, 0], [1, 1]])
    found = require_stable(g, "ABC")
    assert found.condition > 1e7
    assert nearly_flat_text(found, "ABC") == (
        "Node B is nearly unstable: its members lie in one line or plane to within 1.4e-04 of "
        "their length, and no support holds it across that.",
    )


def test_count():
    """The count follows Maxwell's rule with Calladine's redundants."""
    g = lattice_girder(3)
    assert determinacy(g) == Determinacy(
        members=16, free_displacements=13, mechanisms=0, redundants=3
    )
    open_panel = without(g, diagonals(g, 1))
    assert determinacy(open_panel) == Determinacy(
        members=14, free_displacements=13, mechanisms=1, redundants=2
    )
    assert not determinacy(g).determinate


@pytest.mark.parametrize("g", [lattice_girder(120), double_layer_grid(9)], ids=["girder", "grid"])
def test_search_in_large_trusses_agrees_with_the_full_decomposition(g, monkeypatch):
    """The block search finds the same rank and condition as the full decomposition."""
    found = find_mechanisms(g)
    monkeypatch.setattr("sizing.mechanics.null_space.DENSE_COLUMNS", 10**6)
    full = find_mechanisms(g)
    assert (found.rank, found.redundants) == (full.rank, full.redundants)
    assert found.condition == pytest.approx(full.condition, rel=0.02)


def test_very_many_open_panels_are_counted_up_to_a_limit(monkeypatch):
    """Very many movements at once are counted up to the limit and refused beyond it."""
    monkeypatch.setattr("sizing.mechanics.null_space.MOST", 128)
    g = lattice_girder(100)
    bare = without(g, np.concatenate([diagonals(g, p) for p in range(100)]))
    assert len(find_mechanisms(bare).found) == 100
    g = lattice_girder(140)
    bare = without(g, np.concatenate([diagonals(g, p) for p in range(140)]))
    with pytest.raises(SolverError, match="More than 128 independent movements"):
        find_mechanisms(bare)


@pytest.mark.parametrize(
    "g",
    [lattice_girder(4), lattice_girder(250), double_layer_grid(8), double_layer_grid(12)],
    ids=["4 panels", "250 panels", "8 bays", "12 bays"],
)
def test_self_stress_states_balance_without_load(g):
    """Bᵀ Z = 0, Z orthonormal, one column per redundant."""
    Z = self_stress_basis(g)
    assert Z.shape == (g.members, g.members - g.free.size)
    assert np.abs(g.compatibility.T @ Z).max() < 1e-9
    np.testing.assert_allclose(Z.T @ Z, np.eye(Z.shape[1]), atol=1e-9)


def test_directions_in_words():
    """Directions near an axis take its name, others two figures."""
    assert direction_text(np.array([0.0, -2.0])) == "along y"
    assert direction_text(np.array([1.0, 0.0, 1.0])) == "along (0.71, 0, 0.71)"
