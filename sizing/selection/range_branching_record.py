"""Keeps the steps of a branching run, so that its tree becomes a certificate."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from sizing.selection.certificate import (
    NO_SPLIT,
    ONE_DESIGN,
    SECTION_SPLIT,
    Certificate,
    ForceBasis,
)

FloatArray = NDArray[np.float64]
IntArray = NDArray[np.intp]


class ProofRecord:
    """Grows with the run: nodes with their splits, energy cuts in use, multipliers."""

    def __init__(self, *, groups: int) -> None:
        self._groups = groups
        self._kind: list[int] = []
        self._group: list[int] = []
        self._place: list[int] = []
        self._children: list[tuple[int, int]] = []
        self._cuts: list[tuple[FloatArray, FloatArray, FloatArray, IntArray, FloatArray]] = []
        self._cut_count = 0
        self._steps: list[tuple[IntArray, IntArray, IntArray, FloatArray]] = []

    def node(self) -> int:
        """Add a node without a split and return its number."""
        self._kind.append(NO_SPLIT)
        self._group.append(-1)
        self._place.append(-1)
        self._children.append((-1, -1))
        return len(self._kind) - 1

    def part(self, node: int, group: int, place: int) -> tuple[int, int]:
        """Part the sections of a group after a place of its ladder; return the two children."""
        self._kind[node], self._group[node], self._place[node] = SECTION_SPLIT, group, place
        self._children[node] = (self.node(), self.node())
        return self._children[node]

    def one_design(self, node: int) -> None:
        """Say that one design is left in the node, to be analysed exactly."""
        self._kind[node] = ONE_DESIGN

    def cuts(
        self,
        stiffness: FloatArray,
        flexibility: FloatArray,
        weight: FloatArray,
        requirement: IntArray,
        square: FloatArray,
    ) -> IntArray:
        """Add energy cuts (c) with the mean designs (c, g) they were taken at; return numbers."""
        self._cuts.append((stiffness, flexibility, weight, requirement, square))
        first = self._cut_count
        self._cut_count += requirement.size
        return np.arange(first, self._cut_count)

    def steps(self, node: IntArray, kind: IntArray, index: IntArray, value: FloatArray) -> None:
        """Add multipliers (e) of inequalities used in nodes."""
        self._steps.append((node, kind, index, value))

    def certificate(
        self, claim: float, members_of: tuple[IntArray, ...] | None, basis: ForceBasis | None
    ) -> Certificate:
        """Return the proof as recorded, claiming that nothing costs less than ``claim``."""
        nodes = len(self._kind)
        node, kind, index, value = (
            np.concatenate([np.zeros(0, dtype=dtype), *(step[k] for step in self._steps)])
            for k, dtype in enumerate((np.intp, np.intp, np.intp, np.float64))
        )
        order = np.argsort(node, kind="stable")
        count = np.bincount(node.astype(np.intp), minlength=nodes)
        requirement = np.concatenate([np.zeros(0, dtype=np.intp), *(cut[3] for cut in self._cuts)])
        # Only requirements in use are handed over.
        used, requirement = np.unique(requirement, return_inverse=True)
        lists = () if members_of is None else tuple(members_of[int(j)] for j in used)
        empty = np.zeros((0, self._groups))
        stiffness, flexibility, weight = (
            np.concatenate([empty, *(cut[k] for cut in self._cuts)]) for k in range(3)
        )
        none = np.zeros(0, dtype=np.intp)
        return Certificate(
            bound=claim,
            requirement_start=np.cumsum([0, *(len(found) for found in lists)]),
            requirement_basic=np.concatenate([none, *lists]).astype(np.intp),
            cut_stiffness=stiffness,
            cut_flexibility=flexibility,
            cut_weight=weight,
            cut_requirement=requirement.ravel().astype(np.intp),
            cut_scale=np.concatenate([np.zeros(0), *(cut[4] for cut in self._cuts)]),
            basis=basis,
            split_kind=np.array(self._kind, dtype=np.intp),
            split_group=np.array(self._group, dtype=np.intp),
            split_place=np.array(self._place, dtype=np.intp),
            children=np.array(self._children, dtype=np.intp).reshape(-1, 2),
            step_start=np.concatenate([[0], np.cumsum(count)]),
            step_kind=kind[order].astype(np.intp),
            step_index=index[order].astype(np.intp),
            step_value=value[order],
        )
