"""Laws that hold for every truss, tried on random stable trusses in a plane and in space."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from random_trusses import lattice_girder, random_truss

from sizing.errors import UnstableTrussError
from sizing.mechanics.analysis import analyse, combine, stiffness_of
from sizing.mechanics.geometry import truss_geometry
from sizing.mechanics.stiffness import Stiffness

RELATIVE = 1e-9
"""Rounding in the analysis of trusses this small is some 1e-13; their condition adds to it."""


@st.composite
def loaded_trusses(draw):
    """A stable truss with member stiffnesses, two load cases, misfits and settlements."""
    seed = draw(st.integers(0, 2**32 - 1))
    d = draw(st.sampled_from([2, 3]))
    rng = np.random.default_rng(seed)
    g = random_truss(
        rng,
        nodes=draw(st.integers(d + 1, 14)),
        dimensions=d,
        redundants=draw(st.integers(0, 4)),
        extra_supports=draw(st.integers(0, 2)),
    )
    EA = 1e8 * np.exp(rng.normal(size=g.members))
    loads = 1e4 * rng.normal(size=(g.nodes, d, 2))
    free = 1e-3 * rng.normal(size=(g.members, 2))
    moved = np.where(g.held[..., None], 1e-3 * rng.normal(size=(g.nodes, d, 2)), 0.0)
    return g, EA, loads, free, moved


def close(found, expected, scale=None):
    size = np.abs(expected).max() if scale is None else scale
    np.testing.assert_allclose(found, expected, rtol=0, atol=RELATIVE * size)


@settings(deadline=None, max_examples=60)
@given(loaded_trusses())
def test_every_node_and_the_whole_balance(case):
    """Forces balance at every node; loads and reactions balance as a whole, in turning too."""
    g, EA, loads, free, moved = case
    a = analyse(g, EA, loads, free, moved)
    assert a.residual.max() < 1e-11
    scale = max(np.abs(a.force).max(), np.abs(loads).max())
    for node in range(g.nodes):
        pull = sum(
            (a.force[i] * g.cosines[i][:, None] * (1 if g.start[i] == node else -1))
            for i in np.flatnonzero((g.start == node) | (g.end == node))
        )
        assert np.abs(pull + loads[node] + a.reaction[node]).max() < 1e-10 * scale
    outer = loads + a.reaction
    assert np.abs(outer.sum(axis=0)).max() < 1e-10 * scale
    turning = np.einsum("ja,jbq->abq", g.position, outer)
    assert np.abs(turning - turning.transpose(1, 0, 2)).max() < 1e-9 * scale
    assert (a.reaction[~g.held] == 0).all()


@settings(deadline=None, max_examples=40)
@given(loaded_trusses())
def test_dense_second_method(case):
    """A plain dense assembly, member by member, gives the same displacements and forces."""
    g, EA, loads, free, moved = case
    a = analyse(g, EA, loads, free, moved)
    d, size = g.dimensions, g.nodes * g.dimensions
    K = np.zeros((size, size))
    F = loads.reshape(size, 2).copy()
    for i in range(g.members):
        span = g.position[g.end[i]] - g.position[g.start[i]]
        L = np.sqrt(span @ span)
        block = EA[i] / L**3 * np.outer(span, span)
        s, e = g.start[i] * d, g.end[i] * d
        for p, q, sign in ((s, s, 1), (e, e, 1), (s, e, -1), (e, s, -1)):
            K[p : p + d, q : q + d] += sign * block
        push = EA[i] * np.outer(span / L, free[i]) / L
        F[s : s + d] -= push
        F[e : e + d] += push
    h = g.held.ravel()
    u = moved.reshape(size, 2).copy()
    u[~h] = np.linalg.solve(K[np.ix_(~h, ~h)], F[~h] - K[np.ix_(~h, h)] @ u[h])
    close(a.displacement.reshape(size, 2), u)


@settings(deadline=None, max_examples=40)
@given(loaded_trusses(), st.integers(0, 2**32 - 1))
def test_rotated_axes(case, seed):
    """Turning the axes turns displacements and leaves member forces as they are."""
    g, EA, loads, free, _ = case
    full = np.zeros_like(g.held)
    full[g.held.any(axis=1)] = True  # only full supports keep their meaning in turned axes
    held = truss_geometry(g.position, g.start, g.end, full)
    R, _ = np.linalg.qr(np.random.default_rng(seed).normal(size=(g.dimensions,) * 2))
    turned = truss_geometry(g.position @ R.T, g.start, g.end, full)
    a = analyse(held, EA, loads, free)
    b = analyse(turned, EA, np.einsum("ab,jbq->jaq", R, loads), free)
    close(b.force, a.force)
    close(b.displacement, np.einsum("ab,jbq->jaq", R, a.displacement))
    close(b.reaction, np.einsum("ab,jbq->jaq", R, a.reaction))


@settings(deadline=None, max_examples=40)
@given(loaded_trusses(), st.integers(0, 2**32 - 1))
def test_renumbered_nodes_and_members(case, seed):
    """The order of nodes and members, and which end comes first, changes nothing."""
    g, EA, loads, free, moved = case
    rng = np.random.default_rng(seed)
    nodes, members = rng.permutation(g.nodes), rng.permutation(g.members)
    new = np.argsort(nodes)
    a = analyse(g, EA, loads, free, moved)
    other = truss_geometry(
        g.position[nodes], new[g.end[members]], new[g.start[members]], g.held[nodes]
    )
    b = analyse(other, EA[members], loads[nodes], free[members], moved[nodes])
    close(b.force, a.force[members])
    close(b.displacement, a.displacement[nodes])
    close(b.reaction, a.reaction[nodes])


@settings(deadline=None, max_examples=40)
@given(loaded_trusses(), st.floats(-100, 100), st.floats(-100, 100))
def test_superposition(case, x, y):
    """Combining analysed cases equals analysing the combined case."""
    g, EA, loads, free, moved = case
    a = analyse(g, EA, loads, free, moved)
    factors = np.array([[x, y], [1.0, 0.0]])
    both = combine(factors, a)
    direct = analyse(g, EA, loads @ factors.T, free @ factors.T, moved @ factors.T)
    size = (1 + abs(x) + abs(y)) * np.abs(a.force).max()
    close(both.force, direct.force, size)
    close(both.reaction, direct.reaction, size)
    close(
        both.displacement, direct.displacement, (1 + abs(x) + abs(y)) * np.abs(a.displacement).max()
    )
    assert both.residual.shape == (2,)


@settings(deadline=None, max_examples=40)
@given(loaded_trusses(), st.sampled_from([1e-3, 0.3048, 25.4, 4448.2216]))
def test_units(case, factor):
    """Other units of length and force give the same truss."""
    g, EA, loads, free, moved = case
    a = analyse(g, EA, loads, free, moved)
    long = truss_geometry(g.position * factor, g.start, g.end, g.held)
    b = analyse(long, EA, loads, free * factor, moved * factor)
    close(b.force, a.force)
    close(b.displacement, a.displacement * factor)
    c = analyse(g, EA * factor, loads * factor, free, moved)
    close(c.force, a.force * factor)
    close(c.displacement, a.displacement)


@settings(deadline=None, max_examples=40)
@given(loaded_trusses())
def test_energy_and_reciprocity(case):
    """Work of the loads is the strain energy (Clapeyron); P₁·u₂ = P₂·u₁ (Betti)."""
    g, EA, loads, _, _ = case
    a = analyse(g, EA, loads)
    work = np.einsum("jap,jaq->pq", loads, a.displacement)
    strain = np.einsum("mp,mq->pq", a.force, a.force * (g.length / EA)[:, None])
    close(strain, work)
    assert abs(work[0, 1] - work[1, 0]) <= RELATIVE * np.abs(work).max()


def test_symmetric_truss_under_symmetric_load():
    """A symmetric girder with a symmetric load has equal forces in mirrored members."""
    g = lattice_girder(8)
    x_end = g.position[:, 0].max()
    held = g.held.copy()
    held[16] = held[0]  # both ends pinned: supports symmetric as well
    g = truss_geometry(g.position, g.start, g.end, held)
    loads = np.zeros((g.nodes, 2, 1))
    loads[1::2, 1] = -10e3
    a = analyse(g, np.full(g.members, 2e8), loads)
    mirror = {(round(x, 6), round(y, 6)): i for i, (x, y) in enumerate(g.position.tolist())}
    image = [mirror[(round(x_end - x, 6), round(y, 6))] for x, y in g.position.tolist()]
    by_ends = {
        frozenset((int(s), int(e))): i for i, (s, e) in enumerate(zip(g.start, g.end, strict=True))
    }
    for ends, i in by_ends.items():
        twin = by_ends[frozenset(image[n] for n in ends)]
        assert a.force[twin, 0] == pytest.approx(a.force[i, 0], abs=1e-6)


def test_band_and_full_factorisation_agree(monkeypatch):
    """The band factorisation of a larger truss gives what a dense solution gives."""
    g = lattice_girder(90)
    k = 2e8 / g.length
    K = Stiffness(g.compatibility, k)
    p = np.random.default_rng(0).normal(size=(K.free, 3))
    expected = np.linalg.solve(K.matrix().toarray(), p)
    np.testing.assert_allclose(K.solve(p), expected, rtol=0, atol=1e-7 * np.abs(expected).max())
    monkeypatch.setattr("sizing.mechanics.factor.DENSE_LIMIT", 10**6)
    full = Stiffness(g.compatibility, k).solve(p)
    np.testing.assert_allclose(K.solve(p), full, rtol=0, atol=1e-7 * np.abs(full).max())


@pytest.mark.parametrize("panels", [5, 90])
def test_singular_stiffness_is_refused(panels):
    """A girder without its supports has no stiffness matrix to factorise."""
    g = lattice_girder(panels)
    loose = truss_geometry(g.position, g.start, g.end, np.zeros_like(g.held))
    with pytest.raises(UnstableTrussError, match="mechanism or is not held"):
        stiffness_of(loose, np.full(g.members, 2e8))


@pytest.mark.parametrize(
    ("change", "message"),
    [
        ({"EA": np.zeros(3)}, "positive finite"),
        ({"EA": np.array([1.0, np.nan, 1.0])}, "positive finite"),
        ({"EA": np.ones(2)}, r"EA must be \(3,\)"),
        ({"loads": np.zeros((3, 2))}, "loads must be"),
        ({"loads": np.full((3, 2, 1), np.nan)}, "loads hold a number that is not finite"),
        ({"free": np.full((3, 1), np.inf)}, "free_elongation holds a number"),
        ({"moved": np.ones((3, 2, 1))}, "no support holds"),
        ({"free": np.ones(3)}, "free_elongation must be"),
    ],
)
def test_arrays_that_do_not_fit_are_refused(change, message):
    """Wrong shapes, stiffnesses that are not positive and loose settlements are refused."""
    g = truss_geometry([[0, 0], [2, 0], [1, 1]], [0, 1, 0], [1, 2, 2], [[1, 1], [0, 1], [0, 0]])
    given_ = {"EA": np.ones(3), "loads": np.zeros((3, 2, 1)), "free": None, "moved": None} | change
    with pytest.raises(ValueError, match=message):
        analyse(g, given_["EA"], given_["loads"], given_["free"], given_["moved"])


@pytest.mark.parametrize(
    ("position", "start", "end", "message"),
    [
        ([[0, 0], [0, 0]], [0], [1], "member 0 has no length"),
        ([[0, 0], [1, 0]], [0], [2], "outside 0 to 1"),
        ([[0, 0], [np.inf, 0]], [0], [1], "not a finite number"),
        ([[0], [1]], [0], [1], "2 or 3"),
        ([[0, 0], [1, 0]], [0, 1], [1], "alike"),
    ],
)
def test_line_diagrams_that_are_none(position, start, end, message):
    """A diagram with a member of no length or a node that does not exist is refused."""
    with pytest.raises(ValueError, match=message):
        truss_geometry(position, start, end, np.zeros(np.shape(position), dtype=bool))
