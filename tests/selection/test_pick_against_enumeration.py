"""Small random trusses: the pick against trying every design."""

from __future__ import annotations

import numpy as np
import pytest
from selection.random_problems import enumerated, random_problem

from sizing.selection.analysis import DesignAnalysis
from sizing.selection.equilibrium_bound import equilibrium_bound
from sizing.selection.outcome import Limits
from sizing.selection.pick import pick
from sizing.selection.watch import Watch

ROUNDING = 1e-9


def build(seed, redundants):
    rng = np.random.default_rng(seed)
    return random_problem(
        rng,
        dimensions=2 if seed % 3 else 3,
        nodes=int(rng.integers(4, 7)),
        redundants=redundants,
        groups=int(rng.integers(3, 5)),
        sections=int(rng.integers(4, 8)),
        self_weight=bool(seed % 2),
        deflection=seed % 5 != 0,
        tightness=(1.0, 0.6, 1.6)[seed % 3],
    )


@pytest.mark.parametrize("seed", range(30))
def test_determinate_pick_is_the_enumerated_optimum(seed):
    """A determinate truss: proven, and equal to the cheapest of all designs, or none exists."""
    problem = build(seed, 0)
    optimum = enumerated(problem)
    found = pick(problem, Limits(seconds=60.0))
    if optimum is None:
        assert found.status == "no adequate section"
        assert found.shortfall is not None
        assert found.shortfall.utilisation > 1.0
        return
    assert found.status == "proven"
    assert found.objective == pytest.approx(optimum, rel=ROUNDING)
    assert DesignAnalysis(problem).evaluate(found.sections).feasible


@pytest.mark.parametrize("seed", range(100, 112))
def test_indeterminate_pick_claims_nothing_false(seed):
    """Proven means optimal, no bound exceeds the optimum, and every design given back passes."""
    problem = build(seed, 1 + seed % 3)
    optimum = enumerated(problem)
    found = pick(problem, Limits(seconds=8.0))
    if optimum is None:
        assert found.sections is None
        return
    assert found.sections is not None
    assert DesignAnalysis(problem).evaluate(found.sections).feasible
    assert found.objective >= optimum * (1.0 - ROUNDING)
    assert found.bound <= optimum * (1.0 + ROUNDING)
    if found.status == "proven":
        assert found.objective == pytest.approx(optimum, rel=1e-7)


@pytest.mark.parametrize("seed", range(200, 220))
def test_equilibrium_bound_holds(seed):
    """Dropping compatibility never gives a bound above the optimum."""
    problem = build(seed, seed % 4)
    optimum = enumerated(problem)
    bound = equilibrium_bound(problem, problem.allowed, Watch(Limits()), whole_seconds=5.0)
    if optimum is not None:
        assert bound <= optimum * (1.0 + ROUNDING)
