"""The checker accepts what the search proves and refuses whatever has been tampered with."""

from dataclasses import fields, replace

import numpy as np
import pytest
from enumerable_trusses import every_design, random_truss
from lattice_girders import girder

from sizing.selection import analysis, certificate
from sizing.selection.analysis import DesignAnalysis
from sizing.selection.certificate import (
    MOVEMENT,
    NO_SPLIT,
    ONE_DESIGN,
    SECTION_SPLIT,
    Certificate,
    ForceBasis,
    verify,
)
from sizing.selection.range_branching import RangeBranching
from sizing.selection.range_branching_boxes import BranchingRules

SEED = 198  # three redundants, self-weight, movements limited, a design left to be analysed


def proof(problem, *, energy=True, forces=True):
    """A finished proof of a problem from scratch."""
    stiff = np.where(problem.allowed, problem.stiffness, -1.0).argmax(axis=1)
    rules = BranchingRules(energy=energy, forces=forces)
    branching = RangeBranching(problem, DesignAnalysis(problem), rules, None, stiff)
    branching.run(100_000, lambda: False)
    assert branching.finished
    return branching.certificate()


@pytest.fixture(scope="module")
def proven():
    """A problem with its certificate."""
    problem = random_truss(SEED)
    return problem, proof(problem, forces=False)


def tampered_arrays(data):
    """Name and altered copy of every array field, in ways that matter."""
    split = int(np.flatnonzero(data.split_kind == SECTION_SPLIT)[-1])
    closed = int(np.flatnonzero(data.split_kind == NO_SPLIT)[0])

    def changed(name, place, value):
        array = getattr(data, name).copy()
        array[place] = value
        return replace(data, **{name: array})

    yield "bound", replace(data, bound=data.bound * 1.001)
    yield "bound not finite", replace(data, bound=np.inf)
    yield "requirement_start", replace(data, requirement_start=data.requirement_start[:-2])
    yield "requirement_basic", replace(data, requirement_basic=data.requirement_basic[::-1] * 0)
    yield "requirement off the end", changed("requirement_basic", 0, 10**9)
    yield "requirement negative", changed("requirement_basic", 0, -1)
    yield "cut_stiffness", replace(data, cut_stiffness=data.cut_stiffness * 7.0)
    yield "cut_stiffness negative", replace(data, cut_stiffness=-data.cut_stiffness)
    yield "cut_flexibility", replace(data, cut_flexibility=data.cut_flexibility[::-1] * 9.0)
    yield "cut_weight", replace(data, cut_weight=data.cut_weight + data.cut_weight.max() * 50.0)
    yield "cut_requirement", replace(data, cut_requirement=np.roll(data.cut_requirement, 1))
    yield "cut_scale", replace(data, cut_scale=data.cut_scale * 100.0)
    yield "cut_scale zero", replace(data, cut_scale=data.cut_scale * 0.0)
    yield "split_kind of a leaf", changed("split_kind", closed, SECTION_SPLIT)
    yield "split_kind of a split", changed("split_kind", split, NO_SPLIT)
    yield "split_kind claims one design", changed("split_kind", 0, ONE_DESIGN)
    yield "split_kind unknown", changed("split_kind", split, 7)
    yield "split_group", replace(data, split_group=(data.split_group + 1) % 3)
    yield "split_group negative", changed("split_group", 0, -1)
    yield "split_place", replace(data, split_place=data.split_place * 0 - 1)
    yield "children swapped", replace(data, children=data.children[:, ::-1])
    yield "child left out", changed("children", (split, 1), data.children[split, 0])
    yield "child is its parent", changed("children", (split, 1), split)
    other = np.concatenate([[0], np.cumsum(np.diff(data.step_start)[::-1])])
    yield "step_start", replace(data, step_start=other)
    yield "step_start falling", replace(data, step_start=data.step_start[::-1])
    yield "step_kind", changed("step_kind", slice(None), MOVEMENT)
    yield "step_kind unknown", changed("step_kind", 0, 5)
    yield "step_index", replace(data, step_index=np.roll(data.step_index, 5))
    yield "step_index negative", changed("step_index", 0, -1)
    yield "step_value", replace(data, step_value=data.step_value * 0.0)
    yield "step_value negative", replace(data, step_value=-data.step_value)
    yield "step_value huge", replace(data, step_value=data.step_value * 1e3)
    yield "step_value not a number", changed("step_value", 0, np.nan)


def tampered_bases(basis):
    """Name and altered copy of the force basis."""
    yield "factors", replace(basis, factors=basis.factors * 1.01)
    yield "forces", replace(basis, forces=basis.forces * 0.9)
    yield "own", replace(basis, own=basis.own * 0.5)
    yield "weight", replace(basis, weight=basis.weight * 0.5)
    yield "states", replace(basis, states=basis.states[:, :-1])
    yield "states repeated", replace(basis, states=np.roll(basis.states, 1, axis=0))
    yield "movement", replace(basis, movement=basis.movement * 0.9)
    yield "passes", replace(basis, passes=0)


def test_an_untouched_certificate_is_accepted(proven):
    """What the search records is enough for the checker."""
    problem, data = proven
    assert verify(problem, data).accepted


def test_every_field_of_the_certificate_is_guarded(proven):
    """Each field, altered so that it no longer proves the claim, makes the checker refuse."""
    problem, data = proven
    names = set()
    for name, altered in tampered_arrays(data):
        verdict = verify(problem, altered)
        assert not verdict.accepted, name
        assert verdict.reason, name
        names.add(name.split()[0])
    covered = names | {"basis", "child", "children"}
    assert {field.name for field in fields(Certificate)} <= covered


def test_every_field_of_the_force_basis_is_guarded():
    """Forces out of equilibrium, missing states or combinations make the checker refuse."""
    problem = girder((4, 4))
    data = proof(problem, energy=False)
    assert verify(problem, data).accepted
    names = set()
    for name, altered in tampered_bases(data.basis):
        assert not verify(problem, replace(data, basis=altered)).accepted, name
        names.add(name.split()[0])
    assert {field.name for field in fields(ForceBasis)} <= names
    assert not verify(problem, replace(data, basis=None)).accepted


def test_a_certificate_holds_for_its_problem_only(proven):
    """The same data for a lighter-loaded or cheaper problem proves nothing."""
    problem, data = proven
    assert not verify(replace(problem, cost=problem.cost * 0.9), data).accepted
    assert not verify(replace(problem, loads=problem.loads * 0.5), data).accepted
    limit = problem.deflection_limit * 3.0
    weaker = replace(problem, tension=problem.tension * 3.0, compression=problem.compression * 3.0)
    assert not verify(replace(weaker, deflection_limit=limit), data).accepted


def test_a_claim_above_the_optimum_is_refused_however_it_is_dressed():
    """No altered multipliers let a bound above the true optimum through."""
    chance = np.random.default_rng(4)
    for seed in (1, 15, 28, 119, 138, 198):
        problem = random_truss(seed)
        _, found = every_design(problem)
        if not found.feasible.any():
            continue
        optimum = found.objective[found.feasible].min()
        data = proof(problem)
        for _ in range(40):
            noise = 10.0 ** chance.normal(0.0, 1.0, data.step_value.shape)
            altered = replace(
                data, bound=optimum * (1.0 + 1e-9), step_value=data.step_value * noise
            )
            assert not verify(problem, altered).accepted, seed


def test_checker_and_analysis_agree_on_what_is_nothing():
    """The shares that count as no force and no movement are those of the exact analysis."""
    assert certificate.NO_FORCE == analysis.NO_FORCE
    assert certificate.NO_MOVEMENT == analysis.NO_MOVEMENT


def test_the_checker_imports_nothing_of_the_search():
    """The checker's file needs the problem and numpy alone."""
    from pathlib import Path

    text = Path(certificate.__file__).read_text(encoding="utf-8")
    imported = {line for line in text.splitlines() if line.startswith(("from ", "import "))}
    assert imported == {
        "from __future__ import annotations",
        "from dataclasses import dataclass",
        "import numpy as np",
        "from numpy.typing import NDArray",
        "from sizing.selection.problem import FEASIBILITY_TOLERANCE, SizingProblem",
    }
