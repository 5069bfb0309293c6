"""One design or many: the same forces, and the numbers that other methods give."""

from __future__ import annotations

import dataclasses

import numpy as np
import pytest
from selection.benchmark_problems import NAMES, load
from selection.random_problems import every_design, random_problem

from sizing.errors import UnstableTrussError
from sizing.selection.analysis import DesignAnalysis
from sizing.selection.choices import Choices
from sizing.selection.linearisation import Linearisation


def test_batches_agree_with_single_designs_and_every_one_counts():
    """evaluate_many gives the same verdicts as evaluate, and each design counts once."""
    for seed in range(6):
        problem = random_problem(np.random.default_rng(seed), dimensions=2 + seed % 2)
        designs = every_design(problem)[:40]
        analysis = DesignAnalysis(problem)
        many = analysis.evaluate_many(designs)
        assert analysis.count == len(designs)
        single = [analysis.evaluate(d) for d in designs]
        assert analysis.count == 2 * len(designs)
        assert many.worst == pytest.approx([e.worst for e in single], rel=1e-9)
        assert (many.feasible == [e.feasible for e in single]).all()
        analysis.evaluate(designs[0])
        assert analysis.count == 2 * len(designs)


def test_forces_balance_loads_and_self_weight():
    """Bᵀ N equals the nodal loads with the self-weight of the design."""
    problem = random_problem(np.random.default_rng(3), redundants=2)
    analysis = DesignAnalysis(problem)
    found = analysis.evaluate(np.zeros(problem.groups, dtype=np.intp))
    w = problem.weight[found.sections][problem.group] * problem.length
    loads = problem.loads + np.outer(problem.self_weight_share @ w, problem.self_weight_factor)
    balance = problem.compatibility.T @ found.case_forces
    assert np.abs(balance - loads).max() <= 1e-9 * np.abs(loads).max()


@pytest.mark.parametrize("rational", [False, True])
def test_local_model_has_the_slope_of_the_analysis(rational):
    """For a small change of one section the local model and the analysis agree to first order."""
    problem = random_problem(np.random.default_rng(11), redundants=3, nodes=7, sections=5)
    analysis = DesignAnalysis(problem)
    design = np.full(problem.groups, 2, dtype=np.intp)
    centre = analysis.evaluate(design)
    step = 1e-5
    stiffness, weight = problem.stiffness.copy(), problem.weight.copy()
    stiffness[3] = stiffness[2] * (1.0 + step)
    weight[3] = weight[2] * (1.0 - step)
    near = dataclasses.replace(
        problem, stiffness=stiffness, weight=weight, allowed=np.ones_like(problem.allowed)
    )
    other = DesignAnalysis(near)
    model = dataclasses.replace(Linearisation.at(other, other.evaluate(design)), rational=rational)
    choices = Choices.of(near.allowed)
    for g in range(near.groups):
        moved = design.copy()
        moved[g] = 3
        exact = other.evaluate(moved).forces - centre.forces
        point = choices.point(moved)
        assert point is not None
        told = model.predict(choices, point).forces - centre.forces
        assert np.abs(told - exact).max() <= 1e-3 * np.abs(exact).max() + 1e-9


def test_a_member_without_resistance_passes_only_without_force():
    """Zero resistance: rounding passes, any force that matters is infinitely too much."""
    problem = load("6bar_42areas").problem
    none = dataclasses.replace(problem, compression=np.zeros_like(problem.compression))
    found = DesignAnalysis(none).evaluate(np.full(problem.groups, 41, dtype=np.intp))
    assert np.isinf(found.worst)
    assert not found.feasible
    unloaded = dataclasses.replace(none, loads=np.zeros_like(problem.loads))
    assert DesignAnalysis(unloaded).evaluate(np.zeros(problem.groups, dtype=np.intp)).feasible


def test_a_mechanism_is_refused_in_words():
    """A truss that cannot stand raises, alone and in a batch."""
    problem = load("6bar_42areas").problem
    loose = dataclasses.replace(problem, compatibility=problem.compatibility * 0.0)
    with pytest.raises(UnstableTrussError, match="mechanism"):
        DesignAnalysis(loose).evaluate(np.zeros(problem.groups, dtype=np.intp))
    with pytest.raises(UnstableTrussError, match="mechanism"):
        DesignAnalysis(loose).evaluate_many(np.zeros((2, problem.groups), dtype=np.intp))


def test_benchmark_files_are_all_there():
    """Seven published problems, each with its source in its file."""
    assert len(NAMES) == 7
