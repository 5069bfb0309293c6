"""The 0-1 variables of a pick: one per group and section still in play."""

from __future__ import annotations

from dataclasses import dataclass
from itertools import pairwise

import numpy as np
from numpy.typing import NDArray
from scipy import sparse

from sizing.selection.problem import SizingProblem

FloatArray = NDArray[np.float64]
IntArray = NDArray[np.intp]
BoolArray = NDArray[np.bool_]


@dataclass(frozen=True, kw_only=True, slots=True)
class Choices:
    """Variables x (v,): x[j] = 1 means that group ``group[j]`` takes section ``section[j]``.

    Variables are sorted by group, then section; ``slices[g]`` are those of group g.
    """

    mask: BoolArray
    group: IntArray
    section: IntArray
    slices: tuple[slice, ...]

    @classmethod
    def of(cls, mask: BoolArray) -> Choices:
        """Return the variables of the pairs that ``mask`` (g, s) leaves in play."""
        group, section = np.nonzero(mask)
        ends = np.concatenate([[0], np.cumsum(mask.sum(axis=1))])
        slices = tuple(slice(int(a), int(b)) for a, b in pairwise(ends))
        return cls(mask=mask, group=group, section=section, slices=slices)

    @property
    def count(self) -> int:
        """Number of variables v."""
        return self.group.size

    def one_each(self) -> sparse.csr_array:
        """Rows (g, v) that add up the variables of each group; each sum must be 1."""
        ones = np.ones(self.count)
        shape = (len(self.slices), self.count)
        return sparse.csr_array((ones, (self.group, np.arange(self.count))), shape=shape)

    def cost(self, problem: SizingProblem) -> FloatArray:
        """Cost (v,) of each variable."""
        return problem.cost[self.group, self.section]

    def design(self, x: FloatArray) -> IntArray:
        """Return the section (g,) with the greatest variable in each group."""
        return np.array([self.section[s][np.argmax(x[s])] for s in self.slices], dtype=np.intp)

    def point(self, design: IntArray) -> FloatArray | None:
        """Return x (v,) of a design, or None when a section of it is out of play."""
        if not self.mask[np.arange(len(self.slices)), design].all():
            return None
        return np.asarray(self.section == design[self.group], dtype=np.float64)

    def averages(self, values: FloatArray, x: FloatArray) -> FloatArray:
        """Σ_s values[s] x[g, s] (g,), exact for a design."""
        weighted = values[self.section] * x
        return np.array([weighted[s].sum() for s in self.slices])
