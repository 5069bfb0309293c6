"""The pick: chooses the method, keeps the limits and states what is proven."""

from __future__ import annotations

import itertools
import math
from collections.abc import Callable
from dataclasses import replace

from sizing.errors import SolverError
from sizing.selection.analysis import DesignAnalysis, Evaluation
from sizing.selection.bounds import Bound, prove
from sizing.selection.certificate import Certificate
from sizing.selection.determinate import solve_determinate
from sizing.selection.determinate_forces import DeterminateForces, determinate_forces
from sizing.selection.equilibrium_bound import equilibrium_bound
from sizing.selection.near_ties import near_ties
from sizing.selection.outcome import Limits, NearTie, Pick, Shortfall, Status
from sizing.selection.problem import SizingProblem
from sizing.selection.record import Record
from sizing.selection.search import search_stages
from sizing.selection.shortfall import explain, none_allowed
from sizing.selection.starts import stiffest
from sizing.selection.watch import Watch

ROUNDING = 3e-8
"""Relative difference between bound and objective that is rounding: the design is proven. The
checker of the bounds claims up to 2e-8 less than it finds."""

SEARCH_SHARE = 0.5
"""Part of the time that the search may take; the rest is for the proof."""

FIRST_BATCHES = 50
"""Batches of boxes of the first short proof: a second or two, enough for most small trusses."""

MORE_BATCHES = 5
"""How much longer the next short proof is: little is lost with each that does not close."""

MOST_BATCHES = 250
"""Batches of the longest short proof; a truss that needs more has its search ended first."""

TURN_SHARE = 0.2
"""Most of the time for one short proof; the batches end it long before, and repeatably."""

WHOLE_SHARE = 0.02
"""Part of the time for the equilibrium bound with whole sections."""

EXACT = "exact integer program for a statically determinate truss, re-analysed"
SEARCHED = "integer programs over local models, re-analysed"
BOUNDED = "equilibrium and the resistance of each section"


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
    if answer.best is None and answer.finished:
        least_bad = answer.least_bad or analysis.evaluate(stiffest(problem, problem.allowed))
        return _nothing(analysis, watch, f"{EXACT}: proven infeasible", explain(problem, least_bad))
    if not watch.limits.certificate or answer.best is None:
        return _conclude(analysis, watch, answer.best, answer.bound, EXACT)
    proof = _prove(problem, answer.best, analysis, watch)
    best = _better(analysis, answer.best, proof)
    method = f"{EXACT}; bound: {proof.method}"
    return _conclude(analysis, watch, best, proof.value, method, proof.certificate)


def _pick_indeterminate(problem: SizingProblem, analysis: DesignAnalysis, watch: Watch) -> Pick:
    record = Record(analysis, watch.part(SEARCH_SHARE))
    proof = _search_and_prove(problem, record, watch)
    if proof is not None:
        method = f"{SEARCHED}; bound: {proof.method}"
        return _conclude(analysis, watch, record.best, proof.value, method, proof.certificate)
    best = record.best
    objective = None if best is None else best.objective
    watch.report("bounding", objective, None, analysis.count)
    bound = equilibrium_bound(
        problem, problem.allowed, watch, whole_seconds=WHOLE_SHARE * watch.limits.seconds
    )
    least_bad = record.least_bad or analysis.evaluate(stiffest(problem, problem.allowed))
    if math.isinf(bound):
        method = f"{BOUNDED}: proven infeasible by equilibrium alone"
        return _nothing(analysis, watch, method, explain(problem, least_bad))
    method = f"{SEARCHED}; bound: equilibrium and the resistance of each section"
    certify = watch.limits.certificate
    if not certify and (watch.stop() or _near(objective, bound, watch.limits.gap)):
        return _conclude(analysis, watch, best, bound, method)
    proof = _prove(problem, best, analysis, watch)
    best = _better(analysis, best, proof)
    if proof.status == "none feasible" and best is None:
        method = f"{proof.method}: proven infeasible"
        return _nothing(analysis, watch, method, explain(problem, least_bad))
    if best is None and not watch.stop():
        method = f"{SEARCHED}; that nothing fits is not proven"
        return _nothing(analysis, watch, method, explain(problem, least_bad))
    if certify or proof.value > bound:
        bound, method = proof.value, f"{SEARCHED}; bound: {proof.method}"
    certificate = proof.certificate if bound <= proof.value else None
    return _conclude(analysis, watch, best, bound, method, certificate)


def _search_and_prove(problem: SizingProblem, record: Record, watch: Watch) -> Bound | None:
    """Search in stages with a short proof between two; return the proof that closed, if one did.

    Each hands its lighter designs to the other.
    """
    batches = FIRST_BATCHES
    for _ in search_stages(record, problem.allowed):
        if record.best is None or batches > MOST_BATCHES or watch.stop():
            continue
        proof = _prove(problem, record.best, record.analysis, watch, batches)
        batches *= MORE_BATCHES
        if proof.sections is not None:
            record.try_design(proof.sections)
        if _near(record.best.objective, proof.value, watch.limits.gap):
            return proof
    return None


def _better(analysis: DesignAnalysis, best: Evaluation | None, proof: Bound) -> Evaluation | None:
    """Return the design that the proof met on its way where it is feasible and cheaper."""
    if proof.sections is None:
        return best
    found = analysis.evaluate(proof.sections)
    cheaper = best is None or found.objective < best.objective
    return found if found.feasible and cheaper else best


def _prove(
    problem: SizingProblem,
    best: Evaluation | None,
    analysis: DesignAnalysis,
    watch: Watch,
    batches: int | None = None,
) -> Bound:
    """Prove in the time left, or with about ``batches`` batches of boxes in part of it."""
    limits = replace(watch.limits, seconds=watch.left)
    if batches is not None:
        seconds = min(TURN_SHARE * watch.limits.seconds, watch.left)
        limits = replace(limits, seconds=seconds, stop=_after(batches, watch))
    return prove(
        problem,
        None if best is None else best.sections,
        None if best is None else best.objective,
        analysis,
        limits,
        watch.report,
    )


def _after(batches: int, watch: Watch) -> Callable[[], bool]:
    # The proof asks once before every batch: a count ends it where a clock would not repeat.
    asked = itertools.count(1)
    return lambda: next(asked) > batches or watch.asked()


def _near(objective: float | None, bound: float, gap: float) -> bool:
    if objective is None:
        return False
    return objective - bound <= max(gap, ROUNDING) * abs(objective)


def _conclude(
    analysis: DesignAnalysis,
    watch: Watch,
    best: Evaluation | None,
    bound: float,
    method: str,
    certificate: Certificate | None = None,
) -> Pick:
    objective = None if best is None else best.objective
    known = bound if math.isfinite(bound) else None
    status: Status = "within gap"
    if objective is not None and known is not None and _near(objective, known, 0.0):
        status, known = "proven", objective
    elif best is None or (watch.stop() and not _near(objective, bound, watch.limits.gap)):
        status = "stopped"
    wanted = watch.limits.near_ties
    ties: tuple[NearTie, ...] = ()
    if best is not None and wanted > 0 and not watch.asked():
        ties = near_ties(analysis, watch, best, wanted, watch.limits.near_tie_margin)
        if ties and ties[0].objective < best.objective * (1.0 - ROUNDING):
            return _lighter_tie(analysis, watch, ties, bound, method, certificate)
    watch.report("done", objective, known, analysis.count)
    return Pick(
        status=status,
        sections=None if best is None else best.sections,
        objective=objective,
        bound=known,
        analyses=analysis.count,
        seconds=watch.seconds,
        method=method,
        near_ties=ties,
        certificate=certificate,
    )


def _lighter_tie(
    analysis: DesignAnalysis,
    watch: Watch,
    ties: tuple[NearTie, ...],
    bound: float,
    method: str,
    certificate: Certificate | None,
) -> Pick:
    # The list of near ties has met a cheaper design: it becomes the pick.
    if bound > ties[0].objective * (1.0 + ROUNDING):
        raise SolverError(
            f"the bound {bound} exceeds the cost {ties[0].objective} of a design that passes"
        )
    best = analysis.evaluate(ties[0].sections)
    limits = replace(watch.limits, near_ties=0)
    concluded = _conclude(analysis, watch.with_limits(limits), best, bound, method, certificate)
    return replace(concluded, near_ties=ties[1:])


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
