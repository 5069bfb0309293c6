"""Time limits, stop requests, wrong incumbents and repetition of proofs."""

import itertools
import time
from dataclasses import replace

import numpy as np
import pytest
from benchmark_problems import load
from enumerable_trusses import random_truss
from lattice_girders import girder

from sizing.selection.analysis import DesignAnalysis
from sizing.selection.bounds import cheapest, prove
from sizing.selection.certificate import verify
from sizing.selection.outcome import Limits


def dearest(problem):
    """The design of the dearest section in every group, and its objective."""
    design = np.where(problem.allowed, problem.cost, -np.inf).argmax(axis=1)
    return design, problem.objective(design)


def test_a_stop_request_ends_at_once_with_a_valid_bound():
    """Asked to stop, the proof returns what it has, and what it has is valid."""
    problem = load("72bar_32areas").problem
    design, objective = dearest(problem)
    limits = Limits(seconds=600.0, stop=lambda: True)
    bound = prove(problem, design, objective, DesignAnalysis(problem), limits)
    assert bound.status == "open"
    assert bound.value == cheapest(problem)
    assert bound.objective <= objective


def test_a_time_limit_is_kept_and_the_bound_checked():
    """At the time limit the bound is one that the checker accepts."""
    problem = load("25bar_30areas").problem
    design, objective = dearest(problem)
    start = time.monotonic()
    bound = prove(problem, design, objective, DesignAnalysis(problem), Limits(seconds=1.0))
    assert time.monotonic() - start < 60.0
    assert bound.value <= 484.8542  # published optimum, Camp & Bichon 2004
    if bound.certificate is not None:
        assert verify(problem, bound.certificate).accepted


def test_an_accepted_gap_ends_the_work():
    """Work ends when the bound is as near as asked for."""
    problem = girder((4, 4))
    full = prove(problem, None, None, DesignAnalysis(problem), Limits(seconds=120.0))
    part = prove(
        problem,
        full.sections,
        full.objective,
        DesignAnalysis(problem),
        Limits(seconds=120.0, gap=0.5),
    )
    assert full.status == "proven"
    assert part.boxes <= full.boxes
    assert part.value >= 0.5 * part.objective


def test_a_poor_incumbent_is_replaced_by_the_optimum():
    """Started from the dearest design, the proof finds the lightest of the ten-bar truss."""
    problem = load("10bar_42areas").problem
    design, objective = dearest(problem)
    bound = prove(problem, design, objective, DesignAnalysis(problem), Limits(seconds=300.0))
    assert bound.status == "proven"
    assert bound.objective == pytest.approx(5490.7379, abs=1e-3)  # Sonmez 2011, from memory
    assert DesignAnalysis(problem).evaluate(bound.sections).feasible


def test_progress_is_reported_and_never_falls():
    """Bounds told while running rise and stay below the objective told with them."""
    told = []
    problem = girder((6, 6))
    prove(
        problem,
        None,
        None,
        DesignAnalysis(problem),
        Limits(seconds=120.0),
        lambda _phase, known, bound, _count: told.append((known, bound)),
    )
    bounds = [bound for _, bound in told if bound is not None]
    assert bounds
    assert all(a <= b * (1.0 + 1e-7) for a, b in itertools.pairwise(bounds))
    assert all(bound <= known for known, bound in told if known is not None and bound is not None)


def test_proofs_repeat_exactly():
    """Two runs give the same design, bound, boxes and certificate."""
    for problem in (random_truss(198), girder((4, 4))):
        one, two = (
            prove(problem, None, None, DesignAnalysis(problem), Limits(seconds=300.0))
            for _ in range(2)
        )
        assert one.boxes == two.boxes
        assert one.value == two.value
        assert (one.sections == two.sections).all()
        assert (one.certificate.step_value == two.certificate.step_value).all()


def test_units_do_not_matter():
    """Forces in N or MN, lengths in m or mm: the same design is proven."""
    problem = girder((4, 4))
    design = prove(problem, None, None, DesignAnalysis(problem), Limits(seconds=120.0)).sections
    for force, length in ((1e-6, 1.0), (1.0, 1e3), (1e3, 1e-3)):
        scaled = replace(
            problem,
            length=problem.length * length,
            stiffness=problem.stiffness * force,
            weight=problem.weight * force / length,
            loads=problem.loads * force,
            tension=problem.tension * force,
            compression=problem.compression * force,
            deflection_limit=problem.deflection_limit * length,
        )
        bound = prove(scaled, None, None, DesignAnalysis(scaled), Limits(seconds=120.0))
        assert bound.status == "proven"
        assert (bound.sections == design).all()
