"""The integer program of a cutting problem over given patterns.

It looks only for plans that are better than the one at hand, so that "there is none" is a proof,
as far as the patterns hold every such plan.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray
from scipy import sparse

from sizing.selection.cutting_columns import Pattern
from sizing.selection.cutting_problem import CuttingProblem
from sizing.selection.cutting_start import Bars
from sizing.selection.highs import LinearAnswer, LinearModel, solve
from sizing.selection.watch import Watch

ROUNDING = 1e-6
"""What an integer variable may be off a whole number, and a bound off a whole objective, before
rounding: the solver's own tolerance is 1e-9 for rows of a few thousand entries."""


@dataclass(frozen=True, kw_only=True)
class Improvement:
    """``bars`` better than the plan at hand (None: not found); ``bound`` in steps.

    ``bound`` holds for every plan that the program knows and that is better than the one at
    hand; it equals ``ceiling`` (the plan at hand) when there is none.
    """

    bars: Bars | None
    bound: int


def over_patterns(
    problem: CuttingProblem,
    patterns: Sequence[Pattern],
    between: tuple[int, int],
    watch: Watch,
    nodes: int | None = None,
) -> Improvement:
    """Choose numbers of ``patterns``: floor <= objective < ceiling, in steps of the objective."""
    pieces, stocks = len(problem.lengths), len(problem.stock)
    floor, ceiling = between
    expense = np.array([problem.expense(j) // problem.step for j, _ in patterns], dtype=np.float64)
    cover = np.array([counts for _, counts in patterns], dtype=np.float64).reshape(-1, pieces).T
    used = np.zeros((stocks, len(patterns)))
    used[[j for j, _ in patterns], np.arange(len(patterns))] = 1.0
    needed = np.array(problem.numbers, dtype=np.float64)
    answer = solve(
        LinearModel(
            cost=expense,
            lower=np.zeros(expense.size),
            upper=np.full(expense.size, float(needed.sum())),
            matrix=sparse.csr_array(np.vstack([cover, used, expense])),
            row_lower=np.concatenate([needed, np.full(stocks, -np.inf), [float(floor)]]),
            row_upper=np.concatenate(
                [np.full(pieces, np.inf), most_bars(problem), [float(ceiling - 1)]]
            ),
            integer=np.ones(expense.size, dtype=bool),
        ),
        seconds=watch.left,
        stop=watch.asked if watch.limits.stop else None,
        nodes=nodes,
    )
    bars: Bars | None = None
    if answer.values is not None:
        bars = []
        for (stock, counts), number in zip(patterns, answer.values, strict=True):
            bars += [(stock, counts)] * round(number)
    return Improvement(bars=bars, bound=whole_bound(answer, floor, ceiling))


def most_bars(problem: CuttingProblem) -> NDArray[np.float64]:
    """Return the bars available of each stock length, infinity where that is no matter."""
    return np.array([np.inf if b.available is None else float(b.available) for b in problem.stock])


def whole_bound(answer: LinearAnswer, floor: int, ceiling: int) -> int:
    """Return the solver's bound as a whole objective between ``floor`` and ``ceiling``."""
    if math.isinf(answer.bound):
        return ceiling if answer.bound > 0.0 else floor
    return min(ceiling, max(floor, math.ceil(answer.bound - ROUNDING)))
