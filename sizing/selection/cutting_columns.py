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
from dataclasses import dataclass, replace
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
"""Values become whole multiples of 2^-42 of the greatest expense, finer than any solver's dual."""

SHARES = 8
"""Patterns taken at most from one filling of the knapsack, for each stock length."""

ROUGH_ROOM = 12_500
"""Steps on the longest bar while patterns are gathered: 1 mm on 12 m. The exact knapsack, many
times slower on tenths of a millimetre, has the last word."""

DEAREST_PIECE = 1e4
"""Bars' worth that a piece may be valued at: only where bars at hand run out is it ever more than
one, and a truss has fewer pieces. A limit on values never makes a bound wrong."""

ROUNDS_BETWEEN_BOUNDS = 20
"""Rounds of gathering between two looks at the exact bound, which may already do."""

MOST_BITS = 60
"""A value per length, on a whole bar, stays below 2^60: sums are held in 63 bits."""

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


_NOTHING = Relaxation(
    patterns=(),
    share=(),
    bound=Fraction(0),
    values=(),
    charges=(),
    top=Fraction(0),
    scale=1,
    finished=False,
)


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
        *,
        exact: bool = True,
        enough: int | None = None,
    ) -> Relaxation:
        """Return the relaxation for ``numbers`` of the pieces, starting from ``patterns``.

        ``enough``: ends as soon as the bound, rounded up to whole steps, reaches it.
        Not ``exact``: ends when the rough knapsack knows no more patterns; the shares are then
        good enough to round, and the bound is nothing.
        """
        # On coarse lengths the rough knapsack is as fine as the exact one and gathers everything.
        rough = _RoughKnapsack(self._sizes, numbers, self._rooms)
        fine: Knapsack | None = None
        known = list(dict.fromkeys(self._start(numbers, patterns)))
        program = LinearProgram(self._dual_model(numbers, available, known))
        best = _NOTHING
        rounds = 0
        while True:
            answer = program.run()
            if answer.values is None or answer.row_duals is None:
                return _with_shares(best, known, (0.0,) * len(known), finished=False)
            share = tuple(max(0.0, -float(dual)) for dual in answer.row_duals)
            found = self._whole_values(answer.values)
            stopping = watch.stop()
            new = [] if stopping else rough.violated(found, self.expenses, set(known))
            rounds += 1
            if exact and (not new or rounds % ROUNDS_BETWEEN_BOUNDS == 0):
                fine = fine or self.knapsack(numbers)
                found = self._bounded(found, numbers, available, fine)
                best = found if found.bound > best.bound else best
                if enough is not None and math.ceil(best.bound) >= enough:
                    return _with_shares(best, known, share, finished=False)
                new = new or _worth_adding(found, fine, self._rooms, self.expenses, set(known))
            if not new or stopping:
                return _with_shares(best, known, share, finished=exact and not new)
            known += new
            self._add(program, new)

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
        greatest = DEAREST_PIECE * max(self.expenses)
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

    def _whole_values(self, duals: np.ndarray) -> Relaxation:
        """Return the dual values as whole numbers, not yet with their bound."""
        pieces = len(self._sizes)
        scale = self._scale(duals[:pieces])
        return replace(
            _NOTHING,
            values=tuple(math.floor(max(0.0, float(v)) * scale) for v in duals[:pieces]),
            charges=tuple(math.ceil(max(0.0, float(m)) * scale) for m in duals[pieces:]),
            scale=scale,
        )

    def _bounded(
        self,
        found: Relaxation,
        numbers: Sequence[int],
        available: Sequence[int | None],
        knapsack: Knapsack,
    ) -> Relaxation:
        """Return whole values with the exact bound that they give."""
        knapsack.fill(found.values)
        top = max(
            Fraction(knapsack.greatest(room), found.scale * self.expenses[j] + found.charges[j])
            for j, room in enumerate(self._rooms)
            if room > 0
        )
        if top <= 0:
            return found
        gain = sum(v * d for v, d in zip(found.values, numbers, strict=True))
        loss = sum(m * a for m, a in zip(found.charges, available, strict=True) if a is not None)
        bound = (gain / top - loss) / found.scale
        return replace(found, bound=max(bound, Fraction(0)), top=top)

    def _scale(self, values: np.ndarray) -> int:
        """Return the whole number by which values are multiplied: no sum on a bar overflows."""
        dearest = float(np.max(values / np.array(self._sizes), initial=0.0)) * max(self._rooms)
        finest = (1 << SCALE_BITS) // max(self.expenses)
        most = (1 << MOST_BITS) / dearest if dearest > 0.0 else math.inf
        return max(1, finest if finest <= most else int(most))


class _RoughKnapsack:
    """Patterns found with sizes rounded up to a coarse unit: each fits, some are missed."""

    def __init__(self, sizes: Sequence[int], numbers: Sequence[int], rooms: Sequence[int]) -> None:
        self._unit = -(-max(rooms) // ROUGH_ROOM)
        self._rooms = [room // self._unit for room in rooms]
        self._knapsack = Knapsack(
            [-(-size // self._unit) for size in sizes], numbers, max(self._rooms)
        )

    def violated(
        self, found: Relaxation, expenses: Sequence[int], known: set[Pattern]
    ) -> list[Pattern]:
        """Return patterns whose rows the values violate."""
        self._knapsack.fill(found.values)
        return _worth_adding(found, self._knapsack, self._rooms, expenses, known)


def _worth_adding(
    found: Relaxation,
    knapsack: Knapsack,
    rooms: Sequence[int],
    expenses: Sequence[int],
    known: set[Pattern],
) -> list[Pattern]:
    new: list[Pattern] = []
    for j, room in enumerate(rooms):
        if room <= 0:
            continue
        limit = (found.scale * expenses[j] + found.charges[j]) * (1.0 + WORTH_ADDING)
        # The tables also hold the best patterns without the last pieces: more for one filling.
        count = len(found.values)
        firsts = sorted({-(-count * k // SHARES) for k in range(1, SHARES + 1)}, reverse=True)
        new += [
            (j, knapsack.pattern(room, first))
            for first in firsts
            if knapsack.greatest(room, first) > limit
        ]
    return [pattern for pattern in dict.fromkeys(new) if pattern not in known]


def _with_shares(
    relaxation: Relaxation, patterns: Sequence[Pattern], share: Sequence[float], *, finished: bool
) -> Relaxation:
    return replace(relaxation, patterns=tuple(patterns), share=tuple(share), finished=finished)
