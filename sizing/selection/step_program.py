"""One step of the search: an integer program over the linear model of the current design.

Each group may move within a window of sections neighbouring in stiffness. One elastic variable
e >= 0, the predicted excess over the limits, keeps the program feasible. Rows are added lazily:
solve, predict the answer with the same linear model, add what it breaks, solve again.
"""

from __future__ import annotations

import math
from collections.abc import Callable, Iterable
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray
from scipy import sparse

from sizing.selection.choices import Choices
from sizing.selection.highs import LinearModel, solve
from sizing.selection.linearisation import Linearisation, Prediction
from sizing.selection.problem import SizingProblem

FloatArray = NDArray[np.float64]
IntArray = NDArray[np.intp]
BoolArray = NDArray[np.bool_]

WATCHED = 0.7
"""Checks used at least this much at the current design enter the first program of a step."""

ROW_TOLERANCE = 1e-6
"""Predicted excess over the elastic variable at which a missing row is added."""

ROUNDS = 12
"""Most programs of one step; the answer is analysed exactly anyway."""

ROWS_A_ROUND = 60
"""Most rows added in one round."""


@dataclass(frozen=True, kw_only=True, slots=True)
class Step:
    """The design a step proposes, with what the linear model predicts for it."""

    sections: IntArray
    excess: float


@dataclass(frozen=True, kw_only=True, slots=True)
class StepRules:
    """What a step asks for.

    cost_weight, excess_weight: objective = cost_weight · cost/scale + excess_weight · e.
    margin: limits are tightened by this part. most_excess: greatest e allowed.
    cost_limit: the design must cost no more. forbidden: designs (each (g,)) not wanted again.
    """

    cost_weight: float
    excess_weight: float
    margin: float = 0.0
    least_excess: float = 0.0
    most_excess: float = math.inf
    cost_limit: float = math.inf
    forbidden: tuple[IntArray, ...] = ()
    seconds: float = 10.0
    gap: float = 1e-6


def stiffness_order(problem: SizingProblem) -> IntArray:
    """Place (s,) of each section in the order of stiffness, ties by number."""
    order = np.argsort(problem.stiffness, kind="stable")
    place = np.empty_like(order)
    place[order] = np.arange(order.size)
    return place


def window(problem: SizingProblem, base: BoolArray, centre: IntArray, reach: int) -> BoolArray:
    """Pairs (g, s) of ``base`` within ``reach`` places of the centre's section, centre included."""
    place = stiffness_order(problem)
    mask = np.zeros_like(base)
    for g in range(problem.groups):
        usable = np.flatnonzero(base[g])
        usable = usable[np.argsort(place[usable], kind="stable")]
        here = int(np.searchsorted(place[usable], place[centre[g]]))
        mask[g, usable[max(0, here - reach) : here + reach + 1]] = True
        mask[g, centre[g]] = True
    return mask


def propose(
    model: Linearisation, mask: BoolArray, rules: StepRules, stop: Callable[[], bool] | None = None
) -> Step | None:
    """Solve one step over the pairs in ``mask``; None when the program has no answer."""
    choices = Choices.of(mask)
    rows = _Rows(model, choices, rules.margin)
    rows.watch()
    answer: Step | None = None
    for _ in range(ROUNDS):
        solved = solve(_program(rows, rules), seconds=rules.seconds, stop=stop, gap=rules.gap)
        if solved.values is None:
            return answer
        sections = choices.design(solved.values[:-1])
        excess = float(solved.values[-1])
        answer = Step(sections=sections, excess=excess)
        if rows.add_broken(model.predict(sections), excess) == 0:
            break
    return answer


class _Rows:
    """The rows of the linear model in force, each once."""

    def __init__(self, model: Linearisation, choices: Choices, margin: float) -> None:
        self.model = model
        self.choices = choices
        self.margin = margin
        self.rows: list[FloatArray] = []
        self.bounds: list[float] = []
        self._known: set[tuple[int, int, float]] = set()

    def watch(self) -> None:
        """Put the checks in force that are well used at the current design."""
        centre = self.model.centre
        self._add(centre.strength, centre.deflection, centre.forces, centre.movements, WATCHED)

    def add_broken(self, predicted: Prediction, excess: float) -> int:
        """Put the rows in force that ``predicted`` breaks by more than ``excess``."""
        before = len(self.rows)
        limit = 1.0 - self.margin + excess + ROW_TOLERANCE
        self._add(
            predicted.strength, predicted.deflection, predicted.forces, predicted.movements, limit
        )
        return len(self.rows) - before

    def _add(
        self,
        strength: FloatArray,
        deflection: FloatArray,
        forces: FloatArray,
        movements: FloatArray,
        above: float,
    ) -> None:
        for place in _greatest(strength.ravel(), above):
            i, c = (int(n) for n in np.unravel_index(place, strength.shape))
            sign = math.copysign(1.0, forces[i, c])
            if self._new((i, c, sign)):
                self._put(*self.model.strength_row(i, c, sign, self.choices))
        for r in _greatest(deflection, above):
            sign = math.copysign(1.0, movements[r])
            if self._new((r, -1, sign)):
                self._put(*self.model.deflection_row(r, sign, self.choices))

    def _new(self, key: tuple[int, int, float]) -> bool:
        fresh = key not in self._known
        self._known.add(key)
        return fresh

    def _put(self, coefficients: FloatArray, bound: float) -> None:
        self.rows.append(np.append(coefficients, -1.0))
        self.bounds.append(bound - self.margin)


def _program(rows: _Rows, rules: StepRules) -> LinearModel:
    choices, problem = rows.choices, rows.model.problem
    v = choices.count
    cost = choices.cost(problem)
    scale = float(np.abs(rows.model.centre.objective)) or 1.0
    extra, extra_bounds = list(rows.rows), list(rows.bounds)
    if math.isfinite(rules.cost_limit):
        extra.append(np.append(cost / scale, 0.0))
        extra_bounds.append(rules.cost_limit / scale)
    for design in rules.forbidden:
        taken = np.asarray(choices.section == design[choices.group], dtype=np.float64)
        if taken.sum() == design.size:
            extra.append(np.append(taken, 0.0))
            extra_bounds.append(float(design.size - 1))
    matrix = sparse.hstack([choices.one_each(), sparse.csr_array((design_count(choices), 1))])
    if extra:
        matrix = sparse.vstack([matrix, sparse.csr_array(np.array(extra))])
    ones = np.ones(design_count(choices))
    return LinearModel(
        cost=np.append(rules.cost_weight * cost / scale, rules.excess_weight),
        lower=np.append(np.zeros(v), rules.least_excess),
        upper=np.append(np.ones(v), rules.most_excess),
        matrix=sparse.csr_array(matrix),
        row_lower=np.concatenate([ones, np.full(len(extra), -np.inf)]),
        row_upper=np.concatenate([ones, np.array(extra_bounds)]),
        integer=np.append(np.ones(v, dtype=bool), False),
    )


def design_count(choices: Choices) -> int:
    """Number of groups."""
    return len(choices.slices)


def _greatest(values: FloatArray, above: float) -> Iterable[int]:
    order = np.argsort(-values, kind="stable")[:ROWS_A_ROUND]
    return [int(p) for p in order if values[p] > above]
