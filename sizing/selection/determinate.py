"""The exact pick for statically determinate trusses: integer programs with rows added lazily.

The linear relaxation collects the rows that matter; integer programs over them follow. Each
answer is analysed exactly: a design that passes is the lightest, one that fails is cut off by the
exact rows it breaks (or, where only rounding lets it through, by itself) and the next is sought.
"""

from __future__ import annotations

import math
from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray
from scipy import sparse

from sizing.selection.analysis import DesignAnalysis, Evaluation
from sizing.selection.choices import Choices
from sizing.selection.determinate_forces import DeterminateForces
from sizing.selection.determinate_hull import with_hulls
from sizing.selection.determinate_rows import (
    DeflectionRows,
    StrengthRows,
    remove_too_weak,
    strength_rows,
)
from sizing.selection.highs import LinearModel, LinearProgram, solve
from sizing.selection.problem import SizingProblem
from sizing.selection.search import first_designs
from sizing.selection.watch import Watch

FloatArray = NDArray[np.float64]
IntArray = NDArray[np.intp]
BoolArray = NDArray[np.bool_]

VIOLATION = 1e-7
"""Relative violation above which a row is added to the linear relaxation; integer answers are
held to the exact analysis instead."""

NEAR_LIMIT = 1e-8
"""A failing design that breaks no row by more than this fails by rounding: only it is cut off."""

ROWS_A_ROUND = 40
"""Most strength rows (and as many deflection rows) added in one round."""

HULLS_A_ROUND = 2
"""Most deflection limits written out exactly after one failing design: each is a large block."""

ROUNDS = 60
"""Most rounds of the linear relaxation; it only prepares, so ending early loses nothing."""

LEAST_GAIN = 1e-6
"""Relative gain in bound below which a further round of the relaxation is not worth its time."""

WORTH_TIGHTENING = 0.8
"""When fewer pairs than this part remain, ranges are narrowed and the relaxation is run again."""

ROUNDING = 1e-9
"""Relative difference between bound and objective that is rounding."""


@dataclass(frozen=True, kw_only=True, slots=True)
class ExactAnswer:
    """What the integer programs found: the best checked design and a valid lower bound.

    ``finished`` is False when time or a stop request ended the search. Without a design,
    ``bound`` = inf says that none is feasible and ``least_bad`` is the design nearest to it.
    """

    best: Evaluation | None
    bound: float
    finished: bool
    least_bad: Evaluation | None = None


class RowPool:
    """Rows in force, each once, with the way to find more at a point x."""

    def __init__(self, problem: SizingProblem, forces: DeterminateForces, choices: Choices) -> None:
        self.problem = problem
        self.choices = choices
        self.strength: StrengthRows = strength_rows(problem, forces, choices)
        self.deflection = DeflectionRows(problem=problem, forces=forces, choices=choices)
        self.rows: list[FloatArray] = []
        self.bounds: list[float] = []
        self._in_force: set[int] = set()
        self.hulls: list[tuple[int, float]] = []

    def add(self, coefficients: FloatArray, bound: float) -> None:
        """Put coefficients · x <= bound in force."""
        self.rows.append(coefficients)
        self.bounds.append(bound)

    def add_violated(self, x: FloatArray, tolerance: float) -> int:
        """Put the rows most violated at x (v,) in force; return how many."""
        problem, choices = self.problem, self.choices
        before = len(self.rows)
        w = choices.averages(problem.weight, x)
        self._add_strength(self.strength.violation(choices, x, w), tolerance)
        if problem.deflection_limit.size:
            y = choices.averages(1.0 / problem.stiffness, x)
            u = self.deflection.movements(y, w)
            limit = problem.deflection_limit
            excess = (np.abs(u) - limit) / np.where(limit > 0.0, limit, np.abs(u).max() or 1.0)
            for r in _worst(excess, tolerance):
                self.add(*self.deflection.row(r, math.copysign(1.0, u[r]), y))
        return len(self.rows) - before

    def _add_strength(self, excess: FloatArray, tolerance: float) -> int:
        new = [t for t in _worst(excess, tolerance) if t not in self._in_force]
        for t in new:
            self._in_force.add(t)
            self.add(*self.strength.row(t, self.choices, self.problem.weight))
        return len(new)

    def cut_off(self, found: Evaluation) -> None:
        """Cut off a failing design by the exact limits it breaks, or by itself when none does."""
        problem, design = self.problem, found.sections
        x = self.choices.point(design)
        new = 0
        if x is not None:
            w = self.choices.averages(problem.weight, x)
            new = self._add_strength(self.strength.violation(self.choices, x, w), NEAR_LIMIT)
            for r in _worst(found.deflection - 1.0, NEAR_LIMIT)[:HULLS_A_ROUND]:
                limit = (r, math.copysign(1.0, found.movements[r]))
                if limit not in self.hulls:
                    self.hulls.append(limit)
                    new += 1
        if new == 0:
            self.forbid(design)

    def forbid(self, design: IntArray) -> None:
        """Cut off one design: not all its choices together."""
        taken = np.asarray(self.choices.section == design[self.choices.group], dtype=np.float64)
        self.add(taken, float(len(design) - 1))

    def model(self, scale: float, *, integer: bool) -> LinearModel:
        """Build the model: cost over ``scale``, one choice for each group, all rows in force."""
        model = build_model(self.problem, self.choices, self.rows, self.bounds, scale, integer)
        return with_hulls(model, self.deflection, self.hulls) if self.hulls else model


def build_model(
    problem: SizingProblem,
    choices: Choices,
    rows: list[FloatArray],
    bounds: list[float],
    scale: float,
    integer: bool,
) -> LinearModel:
    """Build min cost · x / scale over one choice for each group and rows · x <= bounds."""
    v, groups = choices.count, len(choices.slices)
    matrix = choices.one_each()
    if rows:
        matrix = sparse.vstack([matrix, sparse.csr_array(np.array(rows))], format="csr")
    return LinearModel(
        cost=choices.cost(problem) / scale,
        lower=np.zeros(v),
        upper=np.ones(v),
        matrix=matrix,
        row_lower=np.concatenate([np.ones(groups), np.full(len(rows), -np.inf)]),
        row_upper=np.concatenate([np.ones(groups), np.array(bounds)]),
        integer=np.ones(v, dtype=bool) if integer else None,
    )


def cost_scale(problem: SizingProblem, mask: BoolArray) -> float:
    """Return the unit in which the dearest design costs 1000: a size that solvers like."""
    return float(np.where(mask, problem.cost, 0.0).max(axis=1).sum()) / 1000.0 or 1.0


def solve_determinate(
    problem: SizingProblem, forces: DeterminateForces, analysis: DesignAnalysis, watch: Watch
) -> ExactAnswer:
    """Find the cheapest feasible design of a determinate truss and prove it."""
    mask = remove_too_weak(problem, forces, problem.allowed)
    if not mask.any(axis=1).all():
        return _closed(None)
    record = first_designs(analysis, mask, watch)
    answer = _prove(problem, forces, analysis, watch, mask, record.best)
    return replace(answer, least_bad=record.least_bad)


def _prove(
    problem: SizingProblem,
    forces: DeterminateForces,
    analysis: DesignAnalysis,
    watch: Watch,
    mask: BoolArray,
    best: Evaluation | None,
) -> ExactAnswer:
    mask = remove_too_weak(problem, forces, _affordable(problem, mask, best))
    bound = -math.inf
    while mask.any(axis=1).all() and not watch.stop():
        pool = RowPool(problem, forces, Choices.of(mask))
        scale = cost_scale(problem, mask)
        relaxed = _relax(pool, scale, watch, best)
        bound = max(bound, relaxed.bound)
        if math.isinf(relaxed.bound) or (best and relaxed.bound >= best.objective):
            return _closed(best)
        if relaxed.reduced_costs is None:
            break
        keep = _worth_keeping(pool, relaxed, best)
        keep = remove_too_weak(problem, forces, _affordable(problem, keep, best))
        if keep.sum() > WORTH_TIGHTENING * mask.sum():
            found = _integer_rounds(pool, scale, analysis, watch, best)
            bound = max(bound, found.bound)
            return ExactAnswer(best=found.best, bound=bound, finished=found.finished)
        mask = keep
    if watch.stop() and mask.any(axis=1).all():
        return ExactAnswer(best=best, bound=bound, finished=False)
    return _closed(best)


def _affordable(problem: SizingProblem, mask: BoolArray, best: Evaluation | None) -> BoolArray:
    # Beside the cheapest sections of all other groups, a section must not cost more than ``best``.
    if best is None:
        return mask
    least = np.where(mask, problem.cost, np.inf).min(axis=1)
    room = best.objective * (1.0 + ROUNDING) - least.sum() + least
    return np.asarray(mask & (problem.cost <= room[:, None]))


def _closed(best: Evaluation | None) -> ExactAnswer:
    # Nothing cheaper than ``best`` is left; without one, nothing at all.
    bound = math.inf if best is None else best.objective
    return ExactAnswer(best=best, bound=bound, finished=True)


@dataclass(frozen=True, kw_only=True, slots=True)
class _Relaxed:
    bound: float
    reduced_costs: FloatArray | None


def _relax(pool: RowPool, scale: float, watch: Watch, best: Evaluation | None) -> _Relaxed:
    # Cutting planes on the linear relaxation; bound inf: nothing fits.
    program = LinearProgram(pool.model(scale, integer=False))
    relaxed = _Relaxed(bound=-math.inf, reduced_costs=None)
    for _ in range(ROUNDS):
        answer = program.run(seconds=watch.left)
        if answer.status == "infeasible":
            return _Relaxed(bound=math.inf, reduced_costs=None)
        if answer.values is None or answer.reduced_costs is None:
            break
        gain = answer.bound * scale - relaxed.bound
        relaxed = _Relaxed(bound=answer.bound * scale, reduced_costs=answer.reduced_costs * scale)
        watch.report("bounding", best.objective if best else None, relaxed.bound, 0)
        first = len(pool.rows)
        done = watch.stop() or gain < LEAST_GAIN * abs(relaxed.bound)
        if done or pool.add_violated(answer.values, VIOLATION) == 0:
            break
        new = sparse.csr_array(np.array(pool.rows[first:]))
        upper = np.array(pool.bounds[first:])
        program.add_rows(new, np.full(upper.size, -np.inf), upper)
    return relaxed


def _worth_keeping(pool: RowPool, relaxed: _Relaxed, best: Evaluation | None) -> BoolArray:
    # Reduced-cost fixing: with x_j = 1 nothing costs less than bound + reduced cost.
    keep = pool.choices.mask.copy()
    if best is None or relaxed.reduced_costs is None:
        return keep
    room = best.objective - relaxed.bound + ROUNDING * abs(best.objective)
    out = relaxed.reduced_costs > room
    keep[pool.choices.group[out], pool.choices.section[out]] = False
    return keep


def _capped(model: LinearModel, limit: float) -> LinearModel:
    # Nothing dearer than what is known is of interest.
    if math.isinf(limit):
        return model
    return replace(
        model,
        matrix=sparse.csr_array(sparse.vstack([model.matrix, sparse.csr_array([model.cost])])),
        row_lower=np.append(model.row_lower, -np.inf),
        row_upper=np.append(model.row_upper, limit),
    )


def _integer_rounds(
    pool: RowPool,
    scale: float,
    analysis: DesignAnalysis,
    watch: Watch,
    best: Evaluation | None,
) -> ExactAnswer:
    bound = -math.inf
    while not watch.stop():
        limit = math.inf if best is None else best.objective * (1.0 + ROUNDING)
        answer = solve(
            _capped(pool.model(scale, integer=True), limit / scale),
            seconds=watch.left,
            stop=watch.asked,
        )
        if answer.status == "infeasible":
            return _closed(best)
        bound = max(bound, answer.bound * scale)
        if answer.values is None:
            break
        found = analysis.evaluate(pool.choices.design(answer.values[: pool.choices.count]))
        if found.feasible and (best is None or found.objective < best.objective):
            best = found
        watch.report("proving", best.objective if best else None, bound, analysis.count)
        if answer.status != "optimal":
            break
        if best is not None and bound >= best.objective * (1.0 - ROUNDING):
            return _closed(best)
        pool.cut_off(found)
    return ExactAnswer(best=best, bound=bound, finished=False)


def _worst(excess: FloatArray, tolerance: float) -> list[int]:
    order = np.argsort(-excess, kind="stable")[:ROWS_A_ROUND]
    return [int(t) for t in order if excess[t] > tolerance]
