"""Descent by linear steps: first with mixtures of sections, then from design to design."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
from numpy.typing import NDArray

from sizing.selection.analysis import DesignAnalysis, Evaluation
from sizing.selection.choices import Choices
from sizing.selection.linearisation import Linearisation
from sizing.selection.problem import SizingProblem
from sizing.selection.record import Record
from sizing.selection.step_program import EXCESS_PRICE, StepRules, propose, relaxed_step

FloatArray = NDArray[np.float64]
IntArray = NDArray[np.intp]
BoolArray = NDArray[np.bool_]

SAME = 1e-12
"""Difference of ln(EA) that is rounding."""

MIXED_STEPS = 15
"""Most steps with mixtures; they settle in about eight."""

SETTLED = 1e-3
"""Relative change of cost, and excess, at which the mixtures have settled."""

CORES = (4, 4, 4, 3)
"""Sections a group among which the integer program of a step chooses, for each reach."""

REACH = (0.8, 0.4, 0.2, 0.1)
"""Greatest change of ln(EA) in a whole step, smaller after a step that did not help: the linear
model holds for changes up to about a doubling."""

LEAST_MARGIN = 0.005
MOST_MARGIN = 0.03
"""Part by which the limits of the model are tightened, doubled from the least, when steps end at
designs that fail."""

EASED = (0.005, 0.01, 0.02, 0.03, 0.05, 0.08)
"""Parts by which the limits of the model are eased, one turn after the other."""

ALWAYS_IN_REACH = 1
"""Sections next stiffer and next softer that are always in reach."""


def descend_mixed(record: Record, choices: Choices, start: IntArray) -> FloatArray | None:
    """Follow relaxed steps from a design to a settled mixture x (v,) of sections."""
    problem, analysis = record.analysis.problem, record.analysis
    x = choices.point(start)
    cost = float("inf")
    for _ in range(MIXED_STEPS):
        if x is None or record.watch.stop():
            return x
        model = model_at(analysis, choices, x)
        predicted = model.predict(choices, x)
        before, cost = cost, float(choices.cost(problem) @ x)
        if abs(before - cost) <= SETTLED * cost and predicted.worst <= 1.0 + SETTLED:
            return x
        rules = StepRules(cost_scale=cost, cost_weight=1.0, excess_weight=EXCESS_PRICE)
        x = relaxed_step(model, choices, x, rules)
    return x


def model_at(
    analysis: DesignAnalysis, choices: Choices, x: FloatArray, *, rational: bool = False
) -> Linearisation:
    """Analyse a mixture x (v,) and model its surroundings."""
    problem = analysis.problem
    y = choices.averages(1.0 / problem.stiffness, x)
    w = choices.averages(problem.weight, x)
    return Linearisation.between(analysis, analysis.respond(y, w), rational=rational)


def in_reach(problem: SizingProblem, mask: BoolArray, y: FloatArray, reach: float) -> BoolArray:
    """Pairs (g, s) of ``mask`` with ln(EA) within ``reach`` of -ln(y_g), and the nearest ones."""
    distance = np.log(problem.stiffness) + np.log(y)[:, None]
    close = mask & (np.abs(distance) <= reach)
    for side in (distance, -distance):
        away = np.where(mask & (side >= -SAME), side, np.inf)
        nearest = np.argsort(away, axis=1, kind="stable")[:, : ALWAYS_IN_REACH + 1]
        np.put_along_axis(close, nearest, True, axis=1)
    return np.asarray(close & mask)


def round_mixture(record: Record, choices: Choices, x: FloatArray) -> Evaluation | None:
    """Step from a mixture to a design and analyse it."""
    problem = record.analysis.problem
    model = model_at(record.analysis, choices, x, rational=True)
    cost = float(choices.cost(problem) @ x)
    close = Choices.of(in_reach(problem, choices.mask, model.y, REACH[1]))
    step = propose(
        model, close, _within(choices, x, close), _rules(record, cost, CORES[1], choices.design(x))
    )
    return None if step is None else record.try_design(step.sections)


def oscillate(record: Record, choices: Choices) -> None:
    """Step from the best design below its cost with eased limits, then descend to feasible again.

    Crossing the limits leads around designs that only look best nearby (strategic oscillation,
    Glover 1977, in the space of catalogue sections).
    """
    problem = record.analysis.problem
    turn = 0
    while turn < len(EASED) and record.best is not None and not record.watch.stop():
        before = record.best
        model = Linearisation.at(record.analysis, before)
        close = Choices.of(in_reach(problem, choices.mask, model.y, REACH[1]))
        near = close.point(before.sections)
        if near is None:
            return
        rules = replace(
            _rules(record, before.objective, CORES[1], before.sections), margin=-EASED[turn]
        )
        step = propose(model, close, near, rules)
        if step is not None:
            descend(record, choices, record.try_design(step.sections), 1)
        turn = 0 if record.best is not before else turn + 1


def descend(record: Record, choices: Choices, start: Evaluation, level: int = 0) -> Evaluation:
    """Step from design to design while the merit falls.

    The reach shrinks after a step that did not help and grows again after one that did. While the
    design is not feasible, a step that did not help also tightens the limits of the model.
    """
    problem = record.analysis.problem
    current, margin = start, 0.0
    while level < len(REACH) and not record.watch.stop():
        model = Linearisation.at(record.analysis, current)
        close = Choices.of(in_reach(problem, choices.mask, model.y, REACH[level]))
        near = close.point(current.sections)
        if near is None:
            return current
        rules = _rules(record, current.objective, CORES[level], current.sections)
        step = propose(model, close, near, replace(rules, margin=margin))
        found = None if step is None else record.try_design(step.sections)
        if found is not None and record.merit(found) < record.merit(current):
            current, level, margin = found, max(0, level - 1), 0.0
        else:
            level += 1
        if not current.feasible and level == len(REACH) and margin < MOST_MARGIN:
            # The model sees the limits met, the analysis does not: ask for more.
            level, margin = len(REACH) - 2, max(2.0 * margin, LEAST_MARGIN)
    return current


def _rules(record: Record, cost: float, core: int, present: IntArray) -> StepRules:
    return StepRules(
        cost_scale=cost,
        cost_weight=1.0,
        excess_weight=EXCESS_PRICE,
        core=core,
        forbidden=tuple(d for d in record.designs() if not (d == present).all()),
        seconds=record.step_seconds,
        gap=record.step_gap,
        stop=record.watch.asked,
    )


def _within(choices: Choices, x: FloatArray, close: Choices) -> FloatArray:
    # The mixture on the variables of ``close``, shares that fell out spread over the rest.
    table = np.zeros(choices.mask.shape)
    table[choices.group, choices.section] = x
    table = np.where(close.mask, table, 0.0)
    table = np.where(table.sum(axis=1, keepdims=True) > 0.0, table, close.mask)
    table = table / table.sum(axis=1, keepdims=True)
    return np.asarray(table[close.group, close.section], dtype=np.float64)
