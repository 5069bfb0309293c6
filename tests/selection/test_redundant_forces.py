"""Ranges of forces hold the true forces, and narrowing never strikes a feasible design."""

import numpy as np
from enumerable_trusses import every_design, random_truss
from lattice_girders import girder

from sizing.selection.analysis import DesignAnalysis
from sizing.selection.certificate import ladders
from sizing.selection.redundant_forces import RedundantForces, make_basis


def followed(problem):
    """Redundant forces centred on the stiffest design."""
    stiff = np.where(problem.allowed, problem.stiffness, -1.0).argmax(axis=1)
    return RedundantForces(problem, ladders(problem), make_basis(problem, stiff))


def test_the_basis_is_in_equilibrium_and_complete():
    """N0 balances the loads, Z balances nothing, and there are m - n states."""
    for problem in (girder((4, 4)), girder((4, 4, 4)), random_truss(22)):
        forces = followed(problem)
        B, basis = problem.compatibility.toarray(), forces.basis
        m, n = B.shape
        assert basis.states.shape == (m, m - n)
        own = (
            forces.phi
            * (problem.self_weight_share @ (problem.length * basis.weight[problem.group]))[:, None]
        )
        loads = problem.loads @ basis.factors.T + own
        assert np.abs(B.T @ basis.forces - loads).max() <= 1e-12 * np.abs(basis.forces).max()
        if m > n:
            assert np.abs(B.T @ basis.states).max() <= 1e-12 * np.abs(basis.states).max()
            assert np.linalg.matrix_rank(basis.states) == m - n


def test_ranges_hold_the_forces_of_every_design_in_the_box():
    """Forces of random designs lie in the ranges that their boxes allow."""
    for seed in range(40):
        problem = random_truss(seed, most_designs=400)
        forces = followed(problem)
        analysis = DesignAnalysis(problem)
        chance = np.random.default_rng(seed)
        reach = forces.reach()[None]
        mask = forces.ladder.valid[None].copy()
        mask[0] &= chance.random(mask[0].shape) < 0.6
        mask[0, np.arange(problem.groups), 0] = True
        low, high = -reach.copy(), reach.copy()
        rooms = forces.rooms(mask, low, high)
        for _ in range(2):
            forces._enclose(rooms, low, high)
        least, most = forces.member_forces(rooms, low, high)
        for _ in range(5):
            place = [chance.choice(np.flatnonzero(kept)) for kept in mask[0]]
            design = forces.ladder.section[np.arange(problem.groups), place]
            true = analysis.evaluate(design).case_forces @ forces.basis.factors.T
            assert (true >= least[0]).all(), seed
            assert (true <= most[0]).all(), seed


def test_narrowing_keeps_every_feasible_design():
    """Sections of feasible designs are never struck."""
    for seed in range(40):
        problem = random_truss(seed, most_designs=400)
        designs, found = every_design(problem)
        forces = followed(problem)
        mask, reach = forces.ladder.valid[None].copy(), forces.reach()[None]
        empty = forces.narrow(mask, -reach, reach)
        kept = np.zeros((problem.groups, problem.sections), dtype=bool)
        group, place = np.nonzero(mask[0])
        kept[group, forces.ladder.section[group, place]] = True
        feasible = designs[found.feasible]
        assert kept[np.arange(problem.groups), feasible].all(), seed
        if feasible.size:
            assert not empty[0], seed


def test_one_redundant_is_enclosed_exactly():
    """With one redundant and one design left the range closes on the true force."""
    problem = girder((4, 4), self_weight=False)
    forces = followed(problem)
    chance = np.random.default_rng(1)
    place = chance.integers(0, forces.ladder.valid.shape[1], problem.groups)
    mask = (np.arange(forces.ladder.valid.shape[1]) == place[:, None])[None]
    reach = forces.reach()[None]
    low, high = -reach, reach.copy()
    rooms = forces.rooms(mask, low, high)
    forces._enclose(rooms, low, high)
    least, most = forces.member_forces(rooms, low, high)
    design = forces.ladder.section[np.arange(problem.groups), place]
    true = DesignAnalysis(problem).evaluate(design).case_forces @ forces.basis.factors.T
    size = np.abs(true).max()
    assert np.abs(least[0] - true).max() <= 1e-7 * size
    assert np.abs(most[0] - true).max() <= 1e-7 * size
