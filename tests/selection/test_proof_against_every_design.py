"""Bounds of small trusses against the optimum found by trying every design.

Truth by construction: exhaustive enumeration with the exact analysis.
"""

import numpy as np
import pytest
from enumerable_trusses import every_design, random_truss

from sizing.selection.analysis import DesignAnalysis
from sizing.selection.bounds import prove
from sizing.selection.certificate import verify
from sizing.selection.outcome import Limits
from sizing.selection.range_branching import RangeBranching
from sizing.selection.range_branching_boxes import BranchingRules

SEEDS = range(210)


def feasible_optimum(problem):
    designs, found = every_design(problem)
    cost = np.where(found.feasible, found.objective, np.inf)
    return designs, cost


@pytest.mark.parametrize("block", range(10))
def test_a_finished_proof_equals_the_optimum_and_its_certificate_holds(block):
    """A finished proof finds the optimum of every design, and the checker accepts it."""
    for seed in SEEDS[block::10]:
        problem = random_truss(seed)
        designs, cost = feasible_optimum(problem)
        incumbent = None
        if np.isfinite(cost).any() and seed % 3:
            rank = np.argsort(cost)[: int(np.isfinite(cost).sum())]
            incumbent = designs[rank[-1] if seed % 3 == 1 else rank[rank.size // 4]]
        objective = None if incumbent is None else problem.objective(incumbent)
        bound = prove(problem, incumbent, objective, DesignAnalysis(problem), Limits(seconds=60.0))
        if not np.isfinite(cost).any():
            assert bound.status == "none feasible", seed
            assert bound.sections is None, seed
        else:
            assert bound.status == "proven", seed
            assert bound.value <= cost.min(), seed
            assert bound.value == pytest.approx(cost.min(), rel=1e-6), seed
            assert bound.objective == pytest.approx(cost.min(), rel=1e-7), seed
            assert problem.objective(bound.sections) == bound.objective, seed


@pytest.mark.parametrize(
    ("energy", "forces"), [(True, False), (False, True), (True, True)], ids=str
)
def test_an_unfinished_proof_never_exceeds_the_optimum(energy, forces):
    """Whatever has been done so far, the bound stays below the optimum and can be checked."""
    rules = BranchingRules(energy=energy, forces=forces)
    for seed in SEEDS[::7]:
        problem = random_truss(seed)
        if problem.length.size == problem.loads.shape[0] and not forces:
            continue
        _, cost = feasible_optimum(problem)
        stiff = np.where(problem.allowed, problem.stiffness, -1.0).argmax(axis=1)
        branching = RangeBranching(problem, DesignAnalysis(problem), rules, None, stiff)
        for _ in range(3):
            branching.run(2, lambda: False)
            certificate = branching.certificate()
            assert branching.bound <= cost.min(), seed
            assert certificate.bound <= branching.bound, seed
            verdict = verify(problem, certificate)
            assert verdict.accepted, (seed, verdict.reason)
