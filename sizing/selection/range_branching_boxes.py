"""A batch of boxes of section ranges, and the bounds that their inequalities give."""

from __future__ import annotations

from dataclasses import dataclass, fields

import numpy as np
from numpy.typing import NDArray

from sizing.selection.certificate import (
    ENERGY,
    MOVEMENT,
    Ladders,
)
from sizing.selection.energy_cuts import Cuts, EnergyCuts
from sizing.selection.range_branching_dual import (
    Choices,
    DualAnswer,
    Inequalities,
    raise_bounds,
)
from sizing.selection.range_branching_record import ProofRecord
from sizing.selection.redundant_forces import RedundantForces

FloatArray = NDArray[np.float64]
IntArray = NDArray[np.intp]
BoolArray = NDArray[np.bool_]


@dataclass(frozen=True, kw_only=True, slots=True)
class BranchingRules:
    """What a branching run uses.

    ``energy`` and ``forces``: which inequalities. ``new_cuts`` energy cuts are made a round and
    ``kept_cuts`` handed down; ``movements`` rows a box; ``steps`` of the dual ascent a round.
    ``towards_incumbent``: where the first cuts are taken, 0 in the middle of the box, 1 at the
    incumbent. Figures chosen on the published benchmark trusses.
    """

    energy: bool
    forces: bool
    new_cuts: int = 2
    kept_cuts: int = 4
    movements: int = 3
    steps: int = 15
    rounds: int = 2
    towards_incumbent: float = 0.5


@dataclass(kw_only=True, slots=True)
class Boxes:
    """A batch of b boxes: sections possible, ranges of X, what is handed down from the parents.

    Energy cuts (b, k, ...) are divided by ``size``; their multipliers ``lam`` refer to that.
    row_lam (b, ·) refer to movement inequalities that are not scaled.
    """

    number: IntArray
    known: FloatArray
    mask: BoolArray
    low: FloatArray
    high: FloatArray
    alpha: FloatArray
    beta: FloatArray
    omega: FloatArray
    right: FloatArray
    size: FloatArray
    requirement: IntArray
    cut: IntArray
    lam: FloatArray
    row: IntArray
    row_lam: FloatArray

    @property
    def count(self) -> int:
        """Number of boxes."""
        return int(self.number.size)

    def take(self, chosen: IntArray | BoolArray) -> Boxes:
        """Return some of the boxes."""
        return Boxes(**{name: getattr(self, name)[chosen] for name in NAMES})


NAMES = tuple(field.name for field in fields(Boxes))
_PER_CUT = ("alpha", "beta", "omega", "right", "size", "requirement", "cut", "lam")


def stacked(parts: list[tuple[Boxes, int]]) -> Boxes:
    """Return one batch of single boxes taken from others."""
    return Boxes(
        **{
            name: np.array([getattr(boxes, name)[place] for boxes, place in parts])
            for name in NAMES
        }
    )


def root_boxes(
    ladder: Ladders,
    rules: BranchingRules,
    energy: EnergyCuts | None,
    forces: RedundantForces | None,
) -> Boxes:
    """Return the one box that holds everything."""
    groups = ladder.valid.shape[0]
    kept = rules.kept_cuts if energy is not None else 0
    reach = np.zeros((0, 0)) if forces is None else forces.reach()
    weights = groups if energy is not None and energy.self_weight else 0
    return Boxes(
        number=np.zeros(1, dtype=np.intp),
        known=np.full(1, -np.inf),
        mask=ladder.valid[None].copy(),
        low=-reach[None],
        high=reach[None],
        alpha=np.zeros((1, kept, groups)),
        beta=np.zeros((1, kept, groups)),
        omega=np.zeros((1, kept, weights)),
        right=np.zeros((1, kept)),
        size=np.full((1, kept), np.inf),
        requirement=np.full((1, kept), -1),
        cut=np.full((1, kept), -1),
        lam=np.zeros((1, kept)),
        row=np.zeros((1, 0), dtype=np.intp),
        row_lam=np.zeros((1, 0)),
    )


@dataclass(frozen=True, kw_only=True, slots=True)
class BoxBounds:
    """Bounds (b,), reduced costs (b, g, s) and each group's part in the uncertainty (b, g)."""

    bound: FloatArray
    column: FloatArray
    energy_share: FloatArray


@dataclass(frozen=True, kw_only=True, slots=True)
class _ForcePart:
    """Movement inequalities, linear in r, scaled by ``size`` (b, k)."""

    beta: FloatArray
    right: FloatArray
    size: FloatArray


class BoxBounding:
    """Makes the inequalities of boxes, bounds the boxes and records what was used."""

    def __init__(
        self,
        ladder: Ladders,
        rules: BranchingRules,
        energy: EnergyCuts | None,
        forces: RedundantForces | None,
        anchor: FloatArray,
    ) -> None:
        self.ladder = ladder
        self.rules = rules
        self.energy = energy
        self.forces = forces
        self.anchor = anchor

    def bound(self, boxes: Boxes, target: float, record: ProofRecord) -> BoxBounds:
        """Bound the boxes; their multipliers and cuts in use are kept in them for the children."""
        part = self._force_part(boxes)
        if self.energy is None:
            inequalities = self._joined(boxes, part)
            answer = self._raise(boxes, inequalities, part, target)
        else:
            inequalities, answer = self._energy_rounds(boxes, part, target, record)
        column = inequalities.reduced(Choices.all_of(self.ladder, boxes.mask), answer.multipliers)
        share = self._energy_share(boxes)
        self._record_steps(boxes, record)
        self._keep_best_cuts(boxes)
        return BoxBounds(bound=answer.bound, column=column, energy_share=share)

    def _ends(self, boxes: Boxes) -> tuple[FloatArray, FloatArray]:
        ladder = self.ladder
        low = np.where(boxes.mask, ladder.stiffness, np.inf).min(axis=2)
        return low, np.where(boxes.mask, ladder.stiffness, 0.0).max(axis=2)

    def _force_part(self, boxes: Boxes) -> _ForcePart:
        forces = self.forces
        if forces is None:
            nothing = np.zeros((boxes.count, 0))
            beta = np.zeros((boxes.count, 0, self.ladder.valid.shape[0]))
            return _ForcePart(beta=beta, right=nothing, size=nothing)
        rooms = forces.rooms(boxes.mask, boxes.low, boxes.high)
        middle = (rooms.least + rooms.most) / 2.0
        least, most = forces.member_forces(rooms, boxes.low, boxes.high)
        rows, limit = forces.movements(least, most)
        place = np.arange(boxes.count)[:, None]
        # The rows in use, then those most exceeded in the middle of the box.
        demand = np.einsum("bjg,bg->bj", -rows, middle) / -limit
        known = np.zeros(demand.shape)
        known[place, boxes.row] = boxes.row_lam
        rank = np.where(known > 0.0, np.inf, demand)
        chosen = np.argsort(-rank, axis=1, kind="stable")[:, : self.rules.movements]
        boxes.row, boxes.row_lam = chosen, known[place, chosen]
        beta, right = rows[place, chosen], limit[chosen]
        size = np.abs(beta * middle[:, None, :]).sum(axis=2)
        size = np.where(size > 0.0, size, 1.0)
        return _ForcePart(beta=beta / size[:, :, None], right=right / size, size=size)

    def _joined(self, boxes: Boxes, part: _ForcePart) -> Inequalities:
        count, groups = part.right.shape[1], boxes.mask.shape[1]
        if self.energy is None:
            own = np.zeros((boxes.count, 0), dtype=np.intp)
            table = np.zeros((boxes.count, 0, 0))
        else:
            own, table = self.energy.tables(boxes.requirement, boxes.size)
        nothing = np.zeros((boxes.count, count, groups))
        omega = np.zeros((boxes.count, count, boxes.omega.shape[2]))
        return Inequalities(
            alpha=np.concatenate([boxes.alpha, nothing], axis=1),
            beta=np.concatenate([boxes.beta, part.beta], axis=1),
            omega=np.concatenate([boxes.omega, omega], axis=1),
            right=np.concatenate([boxes.right, part.right], axis=1),
            own=own,
            table=table,
        )

    def _raise(
        self,
        boxes: Boxes,
        inequalities: Inequalities,
        part: _ForcePart,
        target: float,
    ) -> DualAnswer:
        start = np.concatenate([boxes.lam, boxes.row_lam * part.size], axis=1)
        answer = raise_bounds(
            self.ladder, boxes.mask, inequalities, start, target, self.rules.steps
        )
        cuts = boxes.lam.shape[1]
        boxes.lam = answer.multipliers[:, :cuts]
        boxes.row_lam = answer.multipliers[:, cuts:] / part.size
        return answer

    def _energy_rounds(
        self, boxes: Boxes, part: _ForcePart, target: float, record: ProofRecord
    ) -> tuple[Inequalities, DualAnswer]:
        # Cuts are taken first between the middle of the box and the incumbent, then at the mean
        # of the designs that the multipliers find least, drawn half way to the middle.
        assert self.energy is not None
        low, high = self._ends(boxes)
        share = self.rules.towards_incumbent
        nearest = np.clip(self.anchor, low, high)
        stiffness = nearest**share * np.sqrt(low * high) ** (1.0 - share)
        flexibility = 1.0 / stiffness
        taken = []
        for turn in range(self.rules.rounds):
            fresh, weight = self.energy.separate(
                stiffness, flexibility, boxes.mask, self.rules.new_cuts
            )
            taken.append((stiffness, flexibility, weight, fresh))
            _put_in_front(boxes, fresh)
            inequalities = self._joined(boxes, part)
            answer = self._raise(boxes, inequalities, part, target)
            if turn + 1 < self.rules.rounds:
                stiffness = (answer.stiffness + (low + high) / 2.0) / 2.0
                flexibility = (answer.flexibility + (1.0 / low + 1.0 / high) / 2.0) / 2.0
        self._record_cuts(boxes, taken, record)
        return inequalities, answer

    def _record_cuts(
        self,
        boxes: Boxes,
        taken: list[tuple[FloatArray, FloatArray, FloatArray, Cuts]],
        record: ProofRecord,
    ) -> None:
        for turn, (stiffness, flexibility, weight, fresh) in enumerate(reversed(taken)):
            count = fresh.right.shape[1]
            first = turn * count
            box, cut = np.nonzero(boxes.lam[:, first : first + count] > 0.0)
            numbers = record.cuts(
                stiffness[box],
                flexibility[box],
                weight[box],
                fresh.requirement[box, cut],
                fresh.square[box, cut],
            )
            boxes.cut[box, first + cut] = numbers

    def _record_steps(self, boxes: Boxes, record: ProofRecord) -> None:
        box, cut = np.nonzero(boxes.lam > 0.0)
        value = boxes.lam[box, cut] / boxes.size[box, cut]
        record.steps(boxes.number[box], np.full(box.size, ENERGY), boxes.cut[box, cut], value)
        if self.forces is None:
            return
        box, place = np.nonzero(boxes.row_lam > 0.0)
        row, side = np.divmod(boxes.row[box, place], 2)
        index = 2 * self.forces.rows[row] + side
        value = boxes.row_lam[box, place]
        record.steps(boxes.number[box], np.full(box.size, MOVEMENT), index, value)

    def _keep_best_cuts(self, boxes: Boxes) -> None:
        kept = self.rules.kept_cuts
        if boxes.lam.shape[1] <= kept:
            return
        order = np.argsort(-boxes.lam, axis=1, kind="stable")[:, :kept]
        place = np.arange(boxes.count)[:, None]
        for name in _PER_CUT:
            setattr(boxes, name, getattr(boxes, name)[place, order])
        idle = boxes.lam <= 0.0
        boxes.requirement[idle], boxes.size[idle], boxes.right[idle] = -1, np.inf, 0.0
        boxes.alpha[idle], boxes.beta[idle], boxes.omega[idle] = 0.0, 0.0, 0.0

    def _energy_share(self, boxes: Boxes) -> FloatArray:
        low, high = self._ends(boxes)
        middle = np.sqrt(low * high)
        share = np.einsum("bk,bkg->bg", boxes.lam, boxes.alpha) * middle
        share += np.einsum("bk,bkg->bg", boxes.lam, boxes.beta) / middle
        return np.asarray(share)


def _put_in_front(boxes: Boxes, fresh: Cuts) -> None:
    new = {
        "alpha": fresh.alpha,
        "beta": fresh.beta,
        "omega": fresh.omega[:, :, : boxes.omega.shape[2]],
        "right": fresh.right,
        "size": fresh.size,
        "requirement": fresh.requirement,
        "cut": np.full(fresh.right.shape, -1),
        "lam": np.zeros(fresh.right.shape),
    }
    for name, array in new.items():
        setattr(boxes, name, np.concatenate([array, getattr(boxes, name)], axis=1))
