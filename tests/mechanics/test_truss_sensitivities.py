"""Derivatives by flexibility against central differences of the analysis itself."""

from __future__ import annotations

import numpy as np
import pytest
from random_trusses import random_truss
from scipy import sparse

from sizing.mechanics.analysis import analyse, stiffness_of
from sizing.mechanics.sensitivity import (
    displacement_by_flexibility,
    displacement_by_group,
    elongation_influence,
    force_by_flexibility,
    force_by_group,
    force_response,
    sum_by_group,
    virtual_forces,
)

STEP = 1e-4
"""Relative step of the differences: truncation STEP² = 1e-8 meets rounding 1e-13/STEP."""

AGREE = 1e-6
"""Relative agreement asked of central differences of that step."""

GROUPS = 3


@pytest.fixture(params=range(8))
def case(request):
    rng = np.random.default_rng(request.param)
    d = 2 + request.param % 2
    g = random_truss(rng, nodes=8, dimensions=d, redundants=request.param % 5)
    EA = 1e6 * np.exp(rng.normal(size=g.members))
    loads = rng.normal(size=(g.nodes, d, 3))
    free = 1e-6 * rng.normal(size=(g.members, 3))
    group = rng.integers(0, GROUPS, g.members)
    rows = rng.normal(size=(3, g.free.size))
    return g, EA, loads, free, group, rows


def differences(case, which):
    """Central differences by y = 1/EA, all members of ``which`` together: force, row · u."""
    g, EA, loads, free, _, rows = case
    y = 1 / EA
    h = STEP * y[which].min()
    ends = []
    for sign in (1, -1):
        a = analyse(g, 1 / (y + sign * h * which), loads, free)
        ends.append((a.force, np.einsum("rn,nr->r", rows, a.displacement.reshape(-1, 3)[g.free])))
    return [(up - down) / (2 * h) for up, down in zip(*ends, strict=True)]


def test_group_derivatives(case):
    """Forces and displacements by 1/(EA) of a group agree with central differences."""
    g, EA, loads, free, group, rows = case
    force = analyse(g, EA, loads, free).force
    K = stiffness_of(g, EA)
    of_force = force_by_group(K, force, g.length, group, GROUPS)
    virtual = virtual_forces(K, rows)
    of_movement = displacement_by_group(virtual, force.T, g.length, group, GROUPS)
    assert of_force.shape == (3, g.members, GROUPS)
    # forces of a determinate truss do not change: measure against what stiffness alone would do
    scale = np.abs(force).max() * EA.max()
    for k in range(GROUPS):
        by_force, by_movement = differences(case, group == k)
        np.testing.assert_allclose(of_force[:, :, k].T, by_force, rtol=0, atol=AGREE * scale)
        np.testing.assert_allclose(
            of_movement[:, k], by_movement, rtol=0, atol=AGREE * np.abs(by_movement).max()
        )


def test_member_derivatives_sum_to_group_derivatives(case):
    """The member by member matrix, summed over groups, is the group derivative."""
    g, EA, loads, free, group, rows = case
    force = analyse(g, EA, loads, free).force
    K = stiffness_of(g, EA)
    full = force_by_flexibility(K, force)
    expected = force_by_group(K, force, g.length, group, GROUPS)
    np.testing.assert_allclose(
        sum_by_group(full * g.length, group, GROUPS),
        expected,
        rtol=0,
        atol=1e-9 * np.abs(force).max() * EA.max(),
    )
    again = force_by_flexibility(K, force, elongation_influence(K))
    np.testing.assert_array_equal(full, again)
    virtual = virtual_forces(K, sparse.csr_array(rows))
    single = displacement_by_flexibility(virtual, force.T)
    np.testing.assert_allclose(
        sum_by_group(single * g.length, group, GROUPS),
        displacement_by_group(virtual, force.T, g.length, group, GROUPS),
    )


def test_virtual_work_gives_the_displacement(case):
    """q·u = Σ n N L/(EA) + Σ n e⁰, the principle of virtual work with free elongations."""
    g, EA, loads, free, _, rows = case
    a = analyse(g, EA, loads, free)
    n = virtual_forces(stiffness_of(g, EA), rows)
    direct = np.einsum("rn,nr->r", rows, a.displacement.reshape(-1, 3)[g.free])
    by_work = np.einsum("rm,mr->r", n, a.force * (g.length / EA)[:, None] + free)
    np.testing.assert_allclose(by_work, direct, rtol=1e-9, atol=1e-11 * np.abs(direct).max())


def test_force_response_is_linear_in_load(case):
    """A change of load changes the forces by its own response."""
    g, EA, loads, free, _, _ = case
    extra = np.random.default_rng(5).normal(size=(g.free.size, 3))
    more = loads.reshape(-1, 3).copy()
    more[g.free] += extra
    before = analyse(g, EA, loads, free).force
    after = analyse(g, EA, more.reshape(loads.shape), free).force
    response = force_response(stiffness_of(g, EA), extra)
    np.testing.assert_allclose(after - before, response, atol=1e-10 * np.abs(after).max())
