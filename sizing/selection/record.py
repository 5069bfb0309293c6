"""What a search has tried: the best feasible design, the least bad one, and all others."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from sizing.selection.analysis import DesignAnalysis, Evaluation
from sizing.selection.step_program import EXCESS_PRICE
from sizing.selection.watch import Watch

IntArray = NDArray[np.intp]

STEP_SECONDS = 20.0
"""Most time for one integer program of a step; nodes end it long before, and repeatably."""

WORST_PRICED = 1e6
"""Excess at which the price stops growing; it is infinite where there is no resistance."""


class Record:
    """Keeps the designs tried by one search, with the limits on a single step."""

    def __init__(self, analysis: DesignAnalysis, watch: Watch) -> None:
        self.analysis = analysis
        self.watch = watch
        self.best: Evaluation | None = None
        self.least_bad: Evaluation | None = None
        self.step_gap = 2e-3
        self._tried: dict[bytes, Evaluation] = {}

    @property
    def step_seconds(self) -> float:
        """Time for one integer program of a step."""
        return min(STEP_SECONDS, self.watch.left)

    def try_design(self, sections: IntArray) -> Evaluation:
        """Analyse a design exactly and remember it."""
        found = self.analysis.evaluate(sections)
        self._tried[found.sections.tobytes()] = found
        if found.feasible and (self.best is None or found.objective < self.best.objective):
            self.best = found
            self.watch.report("searching", found.objective, None, self.analysis.count)
        if self.least_bad is None or found.worst < self.least_bad.worst:
            self.least_bad = found
        return found

    def designs(self) -> tuple[IntArray, ...]:
        """Return all designs tried."""
        return tuple(found.sections for found in self._tried.values())

    def tried(self) -> tuple[Evaluation, ...]:
        """Return all designs tried with their evaluations."""
        return tuple(self._tried.values())

    def merit(self, found: Evaluation) -> float:
        """Cost plus the price of the worst excess."""
        excess = min(max(0.0, found.worst - 1.0), WORST_PRICED)
        return found.objective * (1.0 + EXCESS_PRICE * excess)
