"""The search: descend from a few starts by linear steps, then improve the best design found."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from sizing.selection.analysis import DesignAnalysis, Evaluation
from sizing.selection.linearisation import Linearisation
from sizing.selection.starts import stiffest, strengthened, stress_ratio_design
from sizing.selection.step_program import StepRules, propose, window
from sizing.selection.watch import Watch

IntArray = NDArray[np.intp]
BoolArray = NDArray[np.bool_]

EXCESS_PRICE = 5.0
"""Price of predicted excess in units of the present cost: well above what any relaxation of a
limit has been worth, so that the steps end feasible."""


class Search:
    """Keeps the best feasible design and the least bad one while designs are tried."""

    def __init__(self, analysis: DesignAnalysis, mask: BoolArray, watch: Watch) -> None:
        self.analysis = analysis
        self.mask = mask
        self.watch = watch
        self.best: Evaluation | None = None
        self.least_bad: Evaluation | None = None
        self.tried: dict[bytes, IntArray] = {}

    def try_design(self, sections: IntArray) -> Evaluation:
        """Analyse a design exactly and keep it if it is the best yet."""
        found = self.analysis.evaluate(sections)
        self.note(found)
        return found

    def note(self, found: Evaluation) -> None:
        """Remember an analysed design."""
        self.tried[found.sections.tobytes()] = found.sections
        if found.feasible and (self.best is None or found.objective < self.best.objective):
            self.best = found
            self.watch.report("searching", found.objective, None, self.analysis.count)
        if self.least_bad is None or found.worst < self.least_bad.worst:
            self.least_bad = found

    def merit(self, found: Evaluation) -> float:
        """Cost plus the price of the worst excess."""
        excess = min(max(0.0, found.worst - 1.0), 1e6)
        return found.objective * (1.0 + EXCESS_PRICE * excess)


def run_search(analysis: DesignAnalysis, mask: BoolArray, watch: Watch) -> Search:
    """Search for a light feasible design over the pairs (g, s) in ``mask``."""
    search = Search(analysis, mask, watch)
    search.note(analysis.evaluate(stiffest(analysis.problem, mask)))
    light = stress_ratio_design(analysis, mask, 3)
    search.note(light)
    strong = strengthened(analysis, mask, light)
    search.note(strong)
    for start in (light, strong):
        _descend(search, start)
    return search


def _descend(search: Search, start: Evaluation) -> None:
    problem = search.analysis.problem
    current = start
    reach = 3
    while reach >= 1 and not search.watch.stop():
        model = Linearisation.at(search.analysis, current)
        rules = StepRules(
            cost_weight=1.0, excess_weight=EXCESS_PRICE, seconds=min(3.0, search.watch.left)
        )
        pairs = window(problem, search.mask, current.sections, reach)
        step = propose(model, pairs, rules, search.watch.asked)
        if step is None:
            return
        found = search.try_design(step.sections)
        if search.merit(found) < search.merit(current):
            current = found
        else:
            reach -= 1
