"""The linear program over all cutting patterns, by column generation, with a bound in fractions.

Dual of the covering program (Gilmore and Gomory 1961): with e_j the expense of a bar of stock j,
a the counts of a pattern, d the numbers needed, A_j the bars available,

    maximise Σ d_i v_i - Σ A_j m_j   with   Σ a_i v_i - m_j <= e_j for every pattern of stock j.

Patterns are rows that a knapsack adds while one is violated. Values v, m >= 0 are then rounded to
whole numbers and put through the knapsack once more: with t the greatest Σ a v / (e_j + m_j), the
values v / t are feasible (Farley 1990), so the bound holds whatever the solver's tolerances.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass
from fractions import Fraction

import numpy as np
from scipy import sparse

from sizing.selection.cutting_knapsack import Knapsack
from sizing.selection.cutting_problem import CuttingProblem
from sizing.selection.highs import LinearModel, LinearProgram
from sizing.selection.watch import Watch

Pattern = tuple[int, tuple[int, ...]]
"""Stock length (index) and the number of each piece on one bar."""

SCALE_BITS = 42
"""Values become whole multiples of 2^-42 of the greatest expense: finer than any solver's dual,
and sums over a few thousand pieces on one bar still fit 63 bits."""

WORTH_ADDING = 1e-7
"""A pattern joins when its row is violated by more than this part of its expense; anything
smaller changes the bound in the seventh digit only, and the bound itself is exact."""


@dataclass(frozen=True, kw_only=True)
class Relaxation:
    """The solved program: ``patterns`` with their numbers ``share``, and an exact ``bound``.

    ``bound`` is in steps of the objective. ``values`` (pieces), ``charges`` (stock lengths) and
    ``top`` are its certificate: whole numbers in ``scale``, Σ a v <= top (scale e_j + charge_j)
    for every pattern.
    """

    patterns: tuple[Pattern, ...]
    share: tuple[float, ...]
    bound: Fraction
    values: tuple[int, ...]
    charges: tuple[int, ...]
    top: Fraction
    scale: int
    finished: bool


class PatternProgram:
    """Column generation for one problem; solves again for fewer pieces from known patterns."""

    def __init__(self, problem: CuttingProblem) -> None:
        self.problem = problem
        self.expenses = [problem.expense(j) // problem.step for j in range(len(problem.stock))]
        self._sizes = [length + problem.kerf for length in problem.lengths]
        self._rooms = [problem.room(j) for j in range(len(problem.stock))]

    def knapsack(self, numbers: Sequence[int]) -> Knapsack:
        """Return the empty tables for at most ``numbers`` of each piece on a bar."""
        return Knapsack(self._sizes, numbers, max(self._rooms))

    def solve(
        self,
        numbers: Sequence[int],
        available: Sequence[int | None],
        patterns: Sequence[Pattern],
        watch: Watch,
    ) -> Relaxation:
        """Return the relaxation for ``numbers`` of the pieces, starting from ``patterns``."""
        knapsack = self.knapsack(numbers)
        known = list(dict.fromkeys(self._start(numbers, patterns)))
        program = LinearProgram(self._dual_model(numbers, available, known))
        best: Relaxation | None = None
        while True:
            answer = program.run()
            if answer.values is None or answer.row_duals is None:
                break
            found = self._priced(answer.values, numbers, available, knapsack)
            new = self._violated(found, knapsack, set(known))
            if best is None or found.bound > best.bound:
                best = found
            share = tuple(max(0.0, -float(dual)) for dual in answer.row_duals)
            if not new or watch.stop():
                return _with_shares(best, known, share, finished=not new)
            known += new
            self._add(program, new)
        empty = self._priced(
            np.zeros(len(numbers) + len(self._rooms)), numbers, available, knapsack
        )
        return _with_shares(best or empty, known, (0.0,) * len(known), finished=False)

    def _start(self, numbers: Sequence[int], patterns: Sequence[Pattern]) -> list[Pattern]:
        """Return the patterns cut down to ``numbers``, and one for each piece alone."""
        start = []
        for stock, pieces in patterns:
            cut = tuple(min(a, d) for a, d in zip(pieces, numbers, strict=True))
            if any(cut):
                start.append((stock, cut))
        for i, (size, number) in enumerate(zip(self._sizes, numbers, strict=True)):
            for j, room in enumerate(self._rooms):
                count = min(number, room // size)
                if count > 0:
                    alone = tuple(count if k == i else 0 for k in range(len(numbers)))
                    start.append((j, alone))
        return start

    def _dual_model(
        self, numbers: Sequence[int], available: Sequence[int | None], known: Sequence[Pattern]
    ) -> LinearModel:
        # Bounded values keep the program bounded where the stock at hand is not enough.
        greatest = 4.0 * sum(self.expenses) * (1 + sum(numbers))
        limited = [math.inf if a is None else float(a) for a in available]
        charge = np.array([0.0 if math.isinf(a) else a for a in limited])
        most = np.array([0.0 if math.isinf(a) else greatest for a in limited])
        wanted = np.array(numbers, dtype=np.float64)
        matrix, limit = self._rows(known)
        return LinearModel(
            cost=np.concatenate([-wanted, charge]),
            lower=np.zeros(wanted.size + charge.size),
            upper=np.concatenate([np.where(wanted > 0.0, greatest, 0.0), most]),
            matrix=matrix,
            row_lower=np.full(len(known), -np.inf),
            row_upper=limit,
        )

    def _rows(self, patterns: Sequence[Pattern]) -> tuple[sparse.csr_array, np.ndarray]:
        pieces, stocks = len(self._sizes), len(self._rooms)
        table = np.zeros((len(patterns), pieces + stocks))
        for row, (stock, counts) in enumerate(patterns):
            table[row, :pieces] = counts
            table[row, pieces + stock] = -1.0
        limit = np.array([float(self.expenses[stock]) for stock, _ in patterns])
        return sparse.csr_array(table), limit

    def _add(self, program: LinearProgram, patterns: Sequence[Pattern]) -> None:
        matrix, limit = self._rows(patterns)
        program.add_rows(matrix, np.full(limit.size, -np.inf), limit)

    def _priced(
        self,
        duals: np.ndarray,
        numbers: Sequence[int],
        available: Sequence[int | None],
        knapsack: Knapsack,
    ) -> Relaxation:
        """Return the exact bound that the dual values give, rounded to whole numbers first."""
        scale = (1 << SCALE_BITS) // max(self.expenses)
        pieces = len(numbers)
        values = [math.floor(max(0.0, float(v)) * scale) for v in duals[:pieces]]
        charges = [math.ceil(max(0.0, float(m)) * scale) for m in duals[pieces:]]
        knapsack.fill(values)
        top = max(
            Fraction(knapsack.greatest(room), scale * self.expenses[j] + charges[j])
            for j, room in enumerate(self._rooms)
            if room > 0
        )
        gain = sum(v * d for v, d in zip(values, numbers, strict=True))
        loss = sum(m * a for m, a in zip(charges, available, strict=True) if a is not None)
        bound = (gain / top - loss) / scale if top > 0 else Fraction(0)
        return Relaxation(
            patterns=(),
            share=(),
            bound=max(bound, Fraction(0)),
            values=tuple(values),
            charges=tuple(charges),
            top=top,
            scale=scale,
            finished=False,
        )

    def _violated(
        self, found: Relaxation, knapsack: Knapsack, known: set[Pattern]
    ) -> list[Pattern]:
        new = []
        for j, room in enumerate(self._rooms):
            if room <= 0:
                continue
            limit = found.scale * self.expenses[j] + found.charges[j]
            if knapsack.greatest(room) > limit * (1.0 + WORTH_ADDING):
                pattern = (j, knapsack.pattern(room))
                if pattern not in known:
                    new.append(pattern)
        return new


def _with_shares(
    relaxation: Relaxation, patterns: Sequence[Pattern], share: Sequence[float], *, finished: bool
) -> Relaxation:
    return Relaxation(
        patterns=tuple(patterns),
        share=tuple(share),
        bound=relaxation.bound,
        values=relaxation.values,
        charges=relaxation.charges,
        top=relaxation.top,
        scale=relaxation.scale,
        finished=finished,
    )
