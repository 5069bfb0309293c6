"""One step of the search: an integer program over the linear model of the current design.

Each group may move within a window of sections neighbouring in stiffness. One elastic variable
e >= 0, the predicted excess over the limits, keeps the program feasible. Rows are added lazily:
solve, predict the answer with the same linear model, add what it breaks, solve again.
"""

from __future__ import annotations

import math
from collections.abc import Callable, Iterable
from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray
from scipy import sparse

from sizing.selection.choices import Choices
from sizing.selection.highs import LinearAnswer, LinearModel, LinearProgram, solve
from sizing.selection.linearisation import Linearisation, Prediction

FloatArray = NDArray[np.float64]
IntArray = NDArray[np.intp]

WATCHED = 0.7
"""Checks used at least this much at the current design enter the first program of a step."""

ROW_TOLERANCE = 1e-6
"""Predicted excess over the elastic variable at which a missing row is added."""

EXCESS_PRICE = 5.0
"""Price of predicted excess in units of the present cost: well above what any relaxation of a
limit has been worth, so that the steps end feasible."""

ROUNDS = 4
"""Most programs of one step; the answer is analysed exactly anyway."""

ROWS_A_ROUND = 200
"""Most rows added in one round."""


@dataclass(frozen=True, kw_only=True, slots=True)
class Step:
    """The design a step proposes, with what the linear model predicts for it."""

    sections: IntArray
    excess: float


@dataclass(frozen=True, kw_only=True, slots=True)
class StepRules:
    """What a step asks for.

    cost_weight, excess_weight: objective = cost_weight · cost/cost_scale + excess_weight · e.
    margin: limits are tightened by this part. most_excess: greatest e allowed.
    core: sections a group among which the integer program chooses.
    cost_limit: the design must cost no more. forbidden: designs (each (g,)) not wanted again.
    """

    cost_scale: float
    cost_weight: float
    excess_weight: float
    core: int = 8
    margin: float = 0.0
    least_excess: float = 0.0
    most_excess: float = math.inf
    cost_limit: float = math.inf
    forbidden: tuple[IntArray, ...] = ()
    seconds: float = 20.0
    nodes: int = 30
    gap: float = 1e-6
    stop: Callable[[], bool] | None = None


def propose(
    model: Linearisation,
    choices: Choices,
    near: FloatArray,
    rules: StepRules,
) -> Step | None:
    """Solve one step over ``choices``; None when the program has no answer.

    ``near`` (v,) is the point, whole or fractional, whose well used checks enter first. The
    relaxation comes first, always for least cost: its reduced costs choose the ``rules.core``
    sections of each group that the integer program may take.
    """
    rows = _Rows(model, choices, rules.margin)
    rows.watch(near)
    relaxed = _relax(
        rows,
        replace(
            rules,
            cost_weight=1.0,
            excess_weight=EXCESS_PRICE,
            least_excess=0.0,
            cost_limit=math.inf,
            forbidden=(),
        ),
    )
    if relaxed is None or relaxed.reduced_costs is None:
        return None
    liked = _core(choices, relaxed.reduced_costs[:-1], rules.core)
    liked[near == 1.0] = 1.0
    upper = np.append(liked, rules.most_excess)
    answer: Step | None = None
    start = _start(rows, near, upper, rules)
    for _ in range(ROUNDS):
        program = replace(rows.program(rules, integer=True), upper=upper)
        solved = solve(
            program,
            start=start,
            seconds=rules.seconds,
            stop=rules.stop,
            gap=rules.gap,
            nodes=rules.nodes,
        )
        if solved.values is None:
            return answer
        sections = choices.design(solved.values[:-1])
        excess = float(solved.values[-1])
        answer = Step(sections=sections, excess=excess)
        x = choices.point(sections)
        if x is None or rows.add_broken(model.predict(choices, x), excess) == 0:
            break
    return answer


def relaxed_step(
    model: Linearisation, choices: Choices, near: FloatArray, rules: StepRules
) -> FloatArray | None:
    """Solve the step with mixtures of sections allowed; return x (v,) or None."""
    rows = _Rows(model, choices, rules.margin)
    rows.watch(near)
    relaxed = _relax(rows, rules)
    if relaxed is None or relaxed.values is None:
        return None
    return np.clip(relaxed.values[:-1], 0.0, 1.0)


def _relax(rows: _Rows, rules: StepRules) -> LinearAnswer | None:
    program = LinearProgram(rows.program(rules, integer=False))
    best: LinearAnswer | None = None
    for _ in range(4 * ROUNDS):
        solved = program.run(seconds=rules.seconds)
        if solved.values is None or solved.reduced_costs is None:
            break
        best = solved
        x = np.clip(solved.values[:-1], 0.0, 1.0)
        first = len(rows.rows)
        broken = rows.add_broken(rows.model.predict(rows.choices, x), float(solved.values[-1]))
        if broken == 0:
            break
        new, upper = np.array(rows.rows[first:]), np.array(rows.bounds[first:])
        program.add_rows(sparse.csr_array(new), np.full(upper.size, -np.inf), upper)
    return best


def _start(rows: _Rows, near: FloatArray, upper: FloatArray, rules: StepRules) -> FloatArray | None:
    # The present design with the excess it has, where the program admits it.
    if not (near[near > 0.0] == 1.0).all():
        return None
    excess = max(
        rows.model.predict(rows.choices, near).worst - 1.0 + rules.margin, rules.least_excess
    )
    return np.append(near, excess) if excess <= min(upper[-1], MOST_START) else None


MOST_START = 1e3
"""Excess beyond which the present design is no start worth giving."""


def _core(choices: Choices, reduced_costs: FloatArray, size: int) -> FloatArray:
    # Upper bounds (v,) that leave the ``size`` cheapest sections of each group by reduced cost.
    upper = np.zeros(choices.count)
    for part in choices.slices:
        order = np.argsort(reduced_costs[part], kind="stable")[:size]
        upper[part.start + order] = 1.0
    return upper


class _Rows:
    """The rows of the linear model in force, each once."""

    def __init__(self, model: Linearisation, choices: Choices, margin: float) -> None:
        self.model = model
        self.choices = choices
        self.margin = margin
        self.rows: list[FloatArray] = []
        self.bounds: list[float] = []
        self._known: set[tuple[int, int, float]] = set()

    def watch(self, near: FloatArray) -> Prediction:
        """Put the checks in force that are well used at ``near`` (v,)."""
        predicted = self.model.predict(self.choices, near)
        self._add(predicted, WATCHED)
        return predicted

    def add_broken(self, predicted: Prediction, excess: float) -> int:
        """Put the rows in force that ``predicted`` breaks by more than ``excess``."""
        before = len(self.rows)
        self._add(predicted, 1.0 - self.margin + excess + ROW_TOLERANCE)
        return len(self.rows) - before

    def _add(self, predicted: Prediction, above: float) -> None:
        for place in _greatest(predicted.strength.ravel(), above):
            i, c = (int(n) for n in np.unravel_index(place, predicted.strength.shape))
            sign = math.copysign(1.0, predicted.forces[i, c])
            if self._new((i, c, sign)):
                self._put(*self.model.strength_row(i, c, sign, self.choices))
        for r in _greatest(predicted.deflection, above):
            sign = math.copysign(1.0, predicted.movements[r])
            if self._new((r, -1, sign)):
                self._put(*self.model.deflection_row(r, sign, self.choices))

    def _new(self, key: tuple[int, int, float]) -> bool:
        fresh = key not in self._known
        self._known.add(key)
        return fresh

    def _put(self, coefficients: FloatArray, bound: float) -> None:
        self.rows.append(np.append(coefficients, -1.0))
        self.bounds.append(bound - self.margin)

    def program(self, rules: StepRules, *, integer: bool) -> LinearModel:
        """Build the model: variables x (v,) and the elastic e, rows as in force."""
        choices = self.choices
        v, groups = choices.count, len(choices.slices)
        cost = choices.cost(self.model.problem) / rules.cost_scale
        extra, bounds = list(self.rows), list(self.bounds)
        if math.isfinite(rules.cost_limit):
            extra.append(np.append(cost, 0.0))
            bounds.append(rules.cost_limit / rules.cost_scale)
        for design in rules.forbidden:
            taken = np.asarray(choices.section == design[choices.group], dtype=np.float64)
            if taken.sum() == groups:
                extra.append(np.append(taken, 0.0))
                bounds.append(groups - 1.0)
        matrix = sparse.hstack([choices.one_each(), sparse.csr_array((groups, 1))])
        if extra:
            matrix = sparse.vstack([matrix, sparse.csr_array(np.array(extra))])
        ones = np.ones(groups)
        return LinearModel(
            cost=np.append(rules.cost_weight * cost, rules.excess_weight),
            lower=np.append(np.zeros(v), rules.least_excess),
            upper=np.append(np.ones(v), rules.most_excess),
            matrix=sparse.csr_array(matrix),
            row_lower=np.concatenate([ones, np.full(len(extra), -np.inf)]),
            row_upper=np.concatenate([ones, np.array(bounds)]),
            integer=np.append(np.ones(v, dtype=bool), False) if integer else None,
        )


def _greatest(values: FloatArray, above: float) -> Iterable[int]:
    order = np.argsort(-values, kind="stable")[:ROWS_A_ROUND]
    return [int(p) for p in order if values[p] > above]
