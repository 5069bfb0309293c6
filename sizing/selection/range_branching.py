"""Branch and bound on section ranges, with energy cuts and redundant forces, in batches of boxes.

A box holds, for every group, the sections still possible and, where forces are followed, the
range of every redundant force. Boxes with the least bounds are taken first, a few hundred at a
time; each is narrowed, given inequalities at the mean of its least designs, bounded by Lagrangian
multipliers, stripped of the sections that cannot beat the incumbent, and parted in two. Every step
is recorded, so that the tree becomes a certificate.

What to part: with energy cuts the group with the greatest (energy in the cuts) × (cosh of a
quarter of its logarithmic range - 1), like the error of the cut towards the ends of the range; with
redundant forces the group whose range moves the member forces most; with both the greatest sum.
"""

from __future__ import annotations

import heapq
from collections.abc import Callable

import numpy as np
from numpy.typing import NDArray

from sizing.selection.analysis import DesignAnalysis
from sizing.selection.certificate import Certificate, ladders
from sizing.selection.energy_cuts import EnergyCuts
from sizing.selection.problem import SizingProblem
from sizing.selection.range_branching_boxes import (
    BoxBounding,
    Boxes,
    BranchingRules,
    root_boxes,
    stacked,
)
from sizing.selection.range_branching_record import ProofRecord
from sizing.selection.redundant_forces import RedundantForces, make_basis

FloatArray = NDArray[np.float64]
IntArray = NDArray[np.intp]

SMALLER = 1e-8
"""Boxes are closed when nothing in them is lighter than the incumbent by more than this share:
two designs of the same weight must not keep a box open by rounding."""

CLAIM_MARGIN = 1e-8
"""Share by which the claim stays below the bounds found: room for the checker's rounding."""

BATCH_ENTRIES = 1_500_000
"""Array entries of a batch, so that it stays in the processor's memory."""

MOST_BOXES = 256
"""Boxes taken at once; more would waste work on boxes that a better incumbent closes."""

TRIALS = 4
"""Least designs analysed with each batch: cheap beside the batch, and a lighter incumbent closes
boxes at once."""

LITTLE = 1e-3
"""Weight of the bare logarithmic range beside the scores, for boxes where all scores vanish."""


class RangeBranching:
    """One branch-and-bound run that can be continued."""

    def __init__(
        self,
        problem: SizingProblem,
        analysis: DesignAnalysis,
        rules: BranchingRules,
        incumbent: IntArray | None,
        reference: IntArray,
    ) -> None:
        self.problem = problem
        self.analysis = analysis
        self.ladder = ladders(problem)
        self.best: IntArray | None = None
        dearest = np.where(self.ladder.valid, np.abs(self.ladder.cost), 0.0).max(axis=1).sum()
        self.objective = 2.0 * float(dearest) + 1.0
        if incumbent is not None:
            self.best = np.asarray(incumbent, dtype=np.intp)
            self.objective = problem.objective(self.best)
        self.energy = EnergyCuts(problem, self.ladder) if rules.energy else None
        self.forces: RedundantForces | None = None
        if rules.forces:
            self.forces = RedundantForces(problem, self.ladder, make_basis(problem, reference))
        self.bounding = BoxBounding(
            self.ladder, rules, self.energy, self.forces, problem.stiffness[reference]
        )
        self.record = ProofRecord(groups=problem.groups)
        self.boxes = 0
        self._heap: list[tuple[float, int]] = []
        self._open: dict[int, tuple[Boxes, int]] = {}
        self.record.node()
        self._push(root_boxes(self.ladder, rules, self.energy, self.forces))

    @property
    def cutoff(self) -> float:
        """What a design must stay below to be of interest."""
        return self.objective - SMALLER * abs(self.objective)

    @property
    def finished(self) -> bool:
        """Whether every box is closed."""
        return not self._heap

    @property
    def bound(self) -> float:
        """Lower bound on the objective of every feasible design (not yet checked)."""
        return min(self.cutoff, self._heap[0][0]) if self._heap else self.cutoff

    def offer(self, sections: IntArray, objective: float) -> None:
        """Take over a feasible design found elsewhere, if it is lighter."""
        if objective < self.objective:
            self.best, self.objective = sections, objective

    def run(self, boxes: int, stop: Callable[[], bool]) -> None:
        """Work on about ``boxes`` more boxes, unless finished or asked to stop."""
        end = self.boxes + boxes
        while self._heap and self.boxes < end and not stop():
            self._work(self._pop())

    def certificate(self) -> Certificate:
        """Return the proof so far, claiming the present bound less a margin for rounding."""
        claim = self.bound - CLAIM_MARGIN * abs(self.objective)
        need = None if self.energy is None else self.energy.requirements.members_of
        return self.record.certificate(
            claim, need, None if self.forces is None else self.forces.basis
        )

    def _push(self, boxes: Boxes) -> None:
        for place, number in enumerate(boxes.number.tolist()):
            heapq.heappush(self._heap, (float(boxes.known[place]), number))
            self._open[number] = (boxes, place)

    def _pop(self) -> Boxes:
        free, members = self.problem.loads.shape[0], self.problem.length.size
        entries = max(4 * self.ladder.valid.size, 40 * members)
        if self.energy is not None:
            entries = max(entries, 2 * free * free)
        count = int(np.clip(BATCH_ENTRIES // entries, 8, MOST_BOXES))
        taken = [heapq.heappop(self._heap)[1] for _ in range(min(count, len(self._heap)))]
        return stacked([self._open.pop(number) for number in taken])

    def _work(self, boxes: Boxes) -> None:
        self.boxes += boxes.count
        boxes = boxes.take(boxes.known < self.cutoff)
        if self.forces is not None and boxes.count:
            boxes = boxes.take(~self.forces.narrow(boxes.mask, boxes.low, boxes.high))
        one = (boxes.mask.sum(axis=2) == 1).all(axis=1)
        self._try_designs(boxes.take(one))
        boxes = boxes.take(~one)
        if boxes.count == 0:
            return
        found = self.bounding.bound(boxes, self.cutoff, self.record)
        least = found.column.min(axis=2)
        beats = found.column + (found.bound[:, None] - least)[:, :, None] < self.cutoff
        boxes.mask = boxes.mask & beats
        boxes.known = np.maximum(boxes.known, found.bound)
        self._try_least(boxes, found.column)
        left = boxes.mask.sum(axis=2)
        open_ = (boxes.known < self.cutoff) & (left > 0).all(axis=1)
        one = open_ & (left == 1).all(axis=1)
        self._try_designs(boxes.take(one))
        open_ &= ~one
        self._branch(boxes.take(open_), found.energy_share[open_])

    def _try_designs(self, boxes: Boxes) -> None:
        groups = np.arange(self.problem.groups)
        for place, number in enumerate(boxes.number.tolist()):
            design = self.ladder.section[groups, boxes.mask[place].argmax(axis=1)]
            self.record.one_design(number)
            if self.problem.objective(design) < self.cutoff:
                found = self.analysis.evaluate(design)
                if found.feasible:
                    self.best, self.objective = found.sections, found.objective

    def _try_least(self, boxes: Boxes, column: FloatArray) -> None:
        # The least designs of the most promising boxes are sometimes feasible.
        first = np.argsort(boxes.known, kind="stable")[:TRIALS]
        first = first[boxes.known[first] < self.cutoff]
        groups = np.arange(self.problem.groups)
        designs = self.ladder.section[groups, column[first].argmin(axis=2)]
        designs = np.unique(designs, axis=0)
        cost = self.problem.cost[groups, designs].sum(axis=1)
        designs = designs[cost < self.cutoff]
        if designs.shape[0] == 0:
            return
        found = self.analysis.evaluate_many(designs)
        cost = np.where(found.feasible, found.objective, np.inf)
        if cost.min() < self.cutoff:
            self.best, self.objective = designs[cost.argmin()], float(cost.min())

    def _branch(self, boxes: Boxes, energy_share: FloatArray) -> None:
        if boxes.count == 0:
            return
        ladder = self.ladder
        low = np.where(boxes.mask, ladder.stiffness, np.inf).min(axis=2)
        high = np.where(boxes.mask, ladder.stiffness, 0.0).max(axis=2)
        span = np.log(high / low)
        several = boxes.mask.sum(axis=2) > 1
        score = LITTLE**3 * span
        if self.energy is not None:
            error = energy_share * (np.cosh(span / 4.0) - 1.0)
            total = error.sum(axis=1, keepdims=True)
            score += error / np.where(total > 0.0, total, 1.0)
        if self.forces is not None:
            rooms = self.forces.rooms(boxes.mask, boxes.low, boxes.high)
            score += self.forces.spread_by_group(rooms, boxes.low, boxes.high) + LITTLE * span
        # Equal stiffnesses within one group leave no span; they are parted by count.
        group = np.where(several, score + LITTLE**6, -1.0).argmax(axis=1)
        box = np.arange(boxes.count)
        middle = np.sqrt(low[box, group] * high[box, group])
        position = np.arange(ladder.valid.shape[1])
        inside = boxes.mask[box, group]
        first, last = inside.argmax(axis=1), position[-1] - inside[:, ::-1].argmax(axis=1)
        below = (ladder.stiffness[group] <= middle[:, None]).sum(axis=1) - 1
        place = np.clip(below, first, last - 1)
        left, right = boxes.take(box), boxes.take(box)
        for b, number in enumerate(boxes.number.tolist()):
            g, after = int(group[b]), int(place[b]) + 1
            left.mask[b, g, after:] = False
            right.mask[b, g, :after] = False
            left.number[b], right.number[b] = self.record.part(number, g, after - 1)
        self._push(left)
        self._push(right)
