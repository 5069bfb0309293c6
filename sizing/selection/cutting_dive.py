"""Good cutting plans by rounding: fix what the linear program is sure of, solve again for the rest.

Sequential rounding as in Wäscher and Gau 1996, "Heuristics for the integer one-dimensional
cutting stock problem": whole parts first, else the pattern with the greatest share, once.
"""

from __future__ import annotations

import math

from sizing.selection.cutting_columns import PatternProgram, Relaxation
from sizing.selection.cutting_start import Bars, first_plan
from sizing.selection.watch import Watch

WHOLE = 1e-6
"""A share this close below a whole number counts as whole: the solver's tolerance is 1e-9."""


def rounded_plan(program: PatternProgram, relaxation: Relaxation, watch: Watch) -> Bars | None:
    """Return the bars of a plan near ``relaxation``, None when stock ran out on the way."""
    problem = program.problem
    numbers = list(problem.numbers)
    available = [bar.available for bar in problem.stock]
    bars: Bars = []
    while any(numbers):
        chosen = _sure(relaxation)
        if not chosen or watch.stop():
            break
        for k, count in chosen:
            stock, pieces = relaxation.patterns[k]
            for _ in range(count):
                number = available[stock]
                cut = tuple(min(a, d) for a, d in zip(pieces, numbers, strict=True))
                if not any(cut) or number == 0:
                    continue
                available[stock] = None if number is None else number - 1
                numbers = [d - a for d, a in zip(numbers, cut, strict=True)]
                bars.append((stock, cut))
        if any(numbers):
            relaxation = program.solve(numbers, available, relaxation.patterns, watch, exact=False)
    if any(numbers):
        rest = first_plan(problem, numbers)
        if rest is None:
            return None
        bars += rest
    return bars


def _sure(relaxation: Relaxation) -> list[tuple[int, int]]:
    """Return (pattern, bars) to fix: whole parts, or the greatest share once."""
    whole = [(k, math.floor(share + WHOLE)) for k, share in enumerate(relaxation.share)]
    chosen = [(k, count) for k, count in whole if count > 0]
    if not chosen and relaxation.share:
        k = max(range(len(relaxation.share)), key=lambda j: relaxation.share[j])
        if relaxation.share[k] > WHOLE:
            chosen = [(k, 1)]
    return chosen
