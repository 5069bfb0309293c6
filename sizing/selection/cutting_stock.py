"""One-dimensional cutting stock: the fewest bars, the least length of bars or the least cost.

In turn, until plan and bound meet: first fit; the linear program over all patterns (column
generation), whose bound is rounded up to the next possible objective; rounding; an integer
program over the patterns found; the same over every pattern that a better plan can hold, which
is a proof; and the flow along the bar where those are too many.
"""

from __future__ import annotations

import math
from collections.abc import Callable
from dataclasses import replace
from fractions import Fraction

from sizing.selection.cutting_columns import Pattern, PatternProgram, Relaxation
from sizing.selection.cutting_dive import rounded_plan
from sizing.selection.cutting_flow import over_flow
from sizing.selection.cutting_problem import CuttingPlan, CuttingProblem, CuttingStatus
from sizing.selection.cutting_programs import Improvement, over_patterns
from sizing.selection.cutting_start import (
    Bars,
    expense_of,
    first_plan,
    gathered,
    without_surplus,
)
from sizing.selection.outcome import Limits
from sizing.selection.watch import Watch

MOST_PATTERNS = 20_000
"""Patterns of the proving integer program; beyond, the flow along the bar is no larger."""

NODES_OVER_FOUND = 2_000
"""Branching nodes over the patterns found: enough to round well, and the same on every machine."""


def cut_stock(
    problem: CuttingProblem, *, seconds: float = 60.0, stop: Callable[[], bool] | None = None
) -> CuttingPlan:
    """Return the best plan found in ``seconds``, with a bound that no plan undercuts.

    ``proven``: nothing is better. ``stopped``: out of time, or too large to prove; the gap says
    how far. ``not enough stock``: no plan exists with the bars available (or a piece fits none).
    ``stop`` is polled. The answer depends on the problem alone, as long as time does not run out.
    """
    watch = Watch(Limits(seconds=seconds, stop=stop))
    small, places = _merged(problem)
    if not small.lengths:
        return _plan(problem, "proven", [], 0, "nothing to cut")
    if problem.too_long():
        return _plan(problem, "not enough stock", None, 0, "a piece is longer than every bar")
    search = _Search(small, watch)
    search.run()
    if search.bars is None and search.closed:
        return _plan(problem, "not enough stock", None, 0, search.method)
    bars = None if search.bars is None else _spread(problem, search.bars, places)
    status: CuttingStatus = "proven" if search.closed else "stopped"
    return _plan(problem, status, bars, search.floor * small.step, search.method)


class _Search:
    """Plan and bound of one problem, both in steps of the objective.

    ``ceiling`` is the plan's objective; without a plan it is one more than any plan can cost.
    """

    def __init__(self, problem: CuttingProblem, watch: Watch) -> None:
        self.problem = problem
        self.watch = watch
        self.bars: Bars | None = None
        self.floor = 0
        self.ceiling = _most_expense(problem) // problem.step + 1
        self.method = "first fit decreasing"

    @property
    def closed(self) -> bool:
        """Whether plan and bound meet."""
        return self.floor >= self.ceiling

    def run(self) -> None:
        """Go through the steps until plan and bound meet or time is up."""
        problem = self.problem
        self._take(first_plan(problem, problem.numbers), "first fit decreasing")
        self.floor = min(_by_length_alone(problem), self.ceiling)
        if self.closed:
            return
        program = PatternProgram(problem)
        available = [bar.available for bar in problem.stock]
        relaxation = program.solve(
            problem.numbers, available, self.bars or [], self.watch, enough=self.ceiling
        )
        self.floor = max(self.floor, min(math.ceil(relaxation.bound), self.ceiling))
        if self.closed or self.watch.stop():
            return
        self._take(rounded_plan(program, relaxation, self.watch), "rounding of the linear program")
        if self.closed or self.watch.stop():
            return
        found = over_patterns(
            problem, relaxation.patterns, self._between, self.watch, NODES_OVER_FOUND
        )
        self._take(found.bars, "integer program over generated patterns")
        if self.closed or self.watch.stop():
            return
        self._prove(program, relaxation)

    def _prove(self, program: PatternProgram, relaxation: Relaxation) -> None:
        patterns = self._worthwhile(program, relaxation)
        if patterns is not None:
            found: Improvement | None = over_patterns(
                self.problem, patterns, self._between, self.watch
            )
            method = "integer program over all patterns of a better plan"
        else:
            found = over_flow(self.problem, self._between, self.watch)
            method = "integer program of the flow along the bar"
        if found is not None:
            self._take(found.bars, method)
            self.floor = min(max(self.floor, found.bound), self.ceiling)
            if self.closed:
                self.method = method

    def _worthwhile(self, program: PatternProgram, relaxation: Relaxation) -> list[Pattern] | None:
        """Return every full pattern that a plan better than the one at hand can hold.

        The reduced costs of a plan's patterns (none is negative) add up to its objective less
        the bound, surplus pieces only add; so a pattern whose own is larger than the room
        between is in no better plan. A pattern that is not full may be filled up: it then cuts
        surplus, for the same bar. None when they are too many, or time is up.
        """
        if not relaxation.values:  # the linear program gave up
            return None
        room_between = Fraction(self.ceiling - 1) - relaxation.bound
        if room_between < 0:
            return []
        knapsack = program.knapsack(self.problem.numbers)
        knapsack.fill(relaxation.values)
        patterns: list[Pattern] = []
        for j in range(len(self.problem.stock)):
            if self.problem.room(j) <= 0:
                continue
            free = relaxation.scale * (program.expenses[j] - room_between) + relaxation.charges[j]
            least = max(0, math.ceil(relaxation.top * free))
            try:
                for pieces in knapsack.full_patterns(
                    self.problem.room(j), least, lambda: not self.watch.stop()
                ):
                    if any(pieces):
                        patterns.append((j, pieces))
                    if len(patterns) > MOST_PATTERNS:
                        return None
            except TimeoutError:
                return None
        return patterns

    @property
    def _between(self) -> tuple[int, int]:
        return self.floor, self.ceiling

    def _take(self, bars: Bars | None, method: str) -> None:
        """Keep ``bars`` if they are better than the plan at hand and use no more than there is."""
        if bars is None:
            return
        exact = without_surplus(bars, self.problem.numbers)
        steps = expense_of(self.problem, exact) // self.problem.step
        if steps < self.ceiling and self._at_hand(exact):
            self.bars, self.ceiling, self.method = exact, steps, method

    def _at_hand(self, bars: Bars) -> bool:
        counts = [0] * len(self.problem.stock)
        for stock, _ in bars:
            counts[stock] += 1
        return all(
            bar.available is None or count <= bar.available
            for bar, count in zip(self.problem.stock, counts, strict=True)
        )


def _most_expense(problem: CuttingProblem) -> int:
    """Return what no plan exceeds: a bar for every piece, or every bar at hand."""
    dearest = max(problem.expense(j) for j in range(len(problem.stock)))
    most = sum(problem.numbers) * dearest
    counts = [bar.available for bar in problem.stock]
    if None not in counts:
        most = min(most, sum(problem.expense(j) * (n or 0) for j, n in enumerate(counts)))
    return most


def _by_length_alone(problem: CuttingProblem) -> int:
    """Return the steps that the total length costs at the least expense per room."""
    pairs = zip(problem.lengths, problem.numbers, strict=True)
    taken = sum((length + problem.kerf) * number for length, number in pairs)
    rate = min(
        Fraction(problem.expense(j), problem.room(j) * problem.step)
        for j in range(len(problem.stock))
        if problem.room(j) > 0
    )
    return math.ceil(taken * rate)


def _merged(problem: CuttingProblem) -> tuple[CuttingProblem, list[int]]:
    """Return the problem with each length once, longest first, and the lengths' first places."""
    numbers: dict[int, int] = {}
    for length, number in zip(problem.lengths, problem.numbers, strict=True):
        if number:
            numbers[length] = numbers.get(length, 0) + number
    lengths = sorted(numbers, reverse=True)
    merged = replace(
        problem, lengths=tuple(lengths), numbers=tuple(numbers[length] for length in lengths)
    )
    return merged, lengths


def _spread(problem: CuttingProblem, bars: Bars, lengths: list[int]) -> Bars:
    """Give the pieces of merged lengths back to the entries that asked for them."""
    left = list(problem.numbers)
    owners = [[i for i, own in enumerate(problem.lengths) if own == length] for length in lengths]
    spread: Bars = []
    for stock, pieces in bars:
        counts = [0] * len(problem.lengths)
        for places, count in zip(owners, pieces, strict=True):
            missing = count
            for i in places:
                taken = min(missing, left[i])
                counts[i] += taken
                left[i] -= taken
                missing -= taken
        spread.append((stock, tuple(counts)))
    return spread


def _plan(
    problem: CuttingProblem, status: CuttingStatus, bars: Bars | None, bound: int, method: str
) -> CuttingPlan:
    return CuttingPlan(
        problem=problem,
        status=status,
        patterns=() if bars is None else gathered(bars),
        objective=None if bars is None else expense_of(problem, bars),
        bound=bound,
        method=method,
    )
