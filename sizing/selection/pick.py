"""The pick: chooses the method, keeps the limits and states what is proven."""

from __future__ import annotations

import math

import numpy as np

from sizing.selection.analysis import DesignAnalysis, Evaluation
from sizing.selection.determinate import solve_determinate
from sizing.selection.determinate_forces import DeterminateForces, determinate_forces
from sizing.selection.outcome import Limits, Pick, Shortfall, Status
from sizing.selection.problem import SizingProblem
from sizing.selection.search import run_search
from sizing.selection.shortfall import none_allowed, worst_check
from sizing.selection.starts import stiffest
from sizing.selection.watch import Watch

ROUNDING = 1e-9
"""Relative difference between bound and objective that is rounding: the design is proven."""


def pick(problem: SizingProblem, limits: Limits | None = None) -> Pick:
    """Find the cheapest feasible choice of one section for every group, with a lower bound.

    Deterministic. Ends at ``limits.seconds``, at ``limits.gap`` or when ``limits.stop`` returns
    True, with the best checked design so far. Every design given back has been analysed exactly
    and meets every limit within FEASIBILITY_TOLERANCE.

    Raises UnstableTrussError when the truss is a mechanism, SolverError when a solver fails.
    """
    watch = Watch(limits or Limits())
    analysis = DesignAnalysis(problem)
    empty = none_allowed(problem)
    if empty is not None:
        return _nothing(analysis, watch, "a group has no section to choose from", empty)
    forces = determinate_forces(problem)
    if forces is not None:
        return _pick_determinate(problem, forces, analysis, watch)
    return _pick_indeterminate(problem, analysis, watch)


def _pick_determinate(
    problem: SizingProblem, forces: DeterminateForces, analysis: DesignAnalysis, watch: Watch
) -> Pick:
    answer = solve_determinate(problem, forces, analysis, watch)
    method = "exact integer program for a statically determinate truss, re-analysed"
    if answer.best is None and answer.finished:
        least_bad = analysis.evaluate(stiffest(problem, problem.allowed))
        return _nothing(analysis, watch, method, worst_check(problem, least_bad))
    return _conclude(analysis, watch, answer.best, answer.bound, method)


def _pick_indeterminate(problem: SizingProblem, analysis: DesignAnalysis, watch: Watch) -> Pick:
    search = run_search(analysis, problem.allowed, watch)
    bound = float(np.where(problem.allowed, problem.cost, math.inf).min(axis=1).sum())
    method = "sequence of integer programs over linear models, re-analysed"
    if search.best is None and not watch.stop() and search.least_bad is not None:
        return _nothing(analysis, watch, method, worst_check(problem, search.least_bad))
    return _conclude(analysis, watch, search.best, bound, method)


def _conclude(
    analysis: DesignAnalysis, watch: Watch, best: Evaluation | None, bound: float, method: str
) -> Pick:
    objective = None if best is None else best.objective
    known = None if not math.isfinite(bound) else bound
    status: Status = "stopped" if watch.stop() or best is None else "within gap"
    if objective is not None and known is not None:
        known = min(known, objective)
        if objective - known <= ROUNDING * abs(objective):
            status = "proven"
    watch.report("done", objective, known, analysis.count)
    return Pick(
        status=status,
        sections=None if best is None else best.sections,
        objective=objective,
        bound=known,
        analyses=analysis.count,
        seconds=watch.seconds,
        method=method,
    )


def _nothing(analysis: DesignAnalysis, watch: Watch, method: str, shortfall: Shortfall) -> Pick:
    return Pick(
        status="no adequate section",
        sections=None,
        objective=None,
        bound=None,
        analyses=analysis.count,
        seconds=watch.seconds,
        method=method,
        shortfall=shortfall,
    )
