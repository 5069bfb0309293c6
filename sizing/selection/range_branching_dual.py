"""Lagrangian bounds of many boxes of section ranges at once.

Every inequality has columns linear in what a section brings: c[g,s] = α_g EA_s + β_g / EA_s +
ω_g w_s, and 4·(its limit) in the one group whose member it checks. With multipliers λ >= 0 the
bound is Σ_g min_s (cost - Σ λ c) + Σ λ rhs; it is raised by subgradient steps of the length that
Polyak (1969, USSR Comput Math Math Phys 9:14-29) gives for a known target.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from sizing.selection.certificate import Ladders

FloatArray = NDArray[np.float64]
IntArray = NDArray[np.intp]
BoolArray = NDArray[np.bool_]

AIM = 1.002
"""The steps aim a little above the cutoff, so that a box that can be closed is closed."""

PORTIONS = 4
"""Portions of a batch by width; more would make the arrays too small to be quick."""

FLAT = 1e-18
"""Squared length of a subgradient that counts as zero; inequalities are scaled to order one."""

LATE_SHARE = 3.0
"""Weight of the second half of the steps in the mean answer: the first half still swings."""


@dataclass(kw_only=True, slots=True)
class Inequalities:
    """Columns of k inequalities in each of b boxes.

    alpha, beta, omega (b, k, g), right (b, k); the first e of them have a limit that depends on
    the section of group ``own`` (b, e), -1 for none, with table (b, e, s).
    """

    alpha: FloatArray
    beta: FloatArray
    omega: FloatArray
    right: FloatArray
    own: IntArray
    table: FloatArray

    def of(self, boxes: IntArray) -> Inequalities:
        """Return the part for some boxes."""
        return Inequalities(
            alpha=self.alpha[boxes],
            beta=self.beta[boxes],
            omega=self.omega[boxes],
            right=self.right[boxes],
            own=self.own[boxes],
            table=self.table[boxes],
        )

    def reduced(self, choices: Choices, lam: FloatArray) -> FloatArray:
        """cost - Σ λ c, (b, g, w)."""
        boxes = np.arange(lam.shape[0])
        value = np.einsum("bk,bkg->bg", lam, self.alpha)[:, :, None] * choices.stiffness
        value += np.einsum("bk,bkg->bg", lam, self.beta)[:, :, None] * choices.flexibility
        if self.omega.shape[2]:
            value += np.einsum("bk,bkg->bg", lam, self.omega)[:, :, None] * choices.weight
        np.subtract(choices.cost, value, out=value)
        for e in range(self.own.shape[1]):
            group = self.own[:, e]
            has = boxes[(group >= 0) & (lam[:, e] > 0.0)]
            value[has, group[has]] -= lam[has, e, None] * self.table[has, e]
        return np.asarray(value)

    def slack(self, choices: Choices, place: IntArray) -> FloatArray:
        """rhs - Σ c (b, k) of the designs at ``place`` (b, g): positive where violated."""
        boxes = np.arange(place.shape[0])[:, None]
        groups = np.arange(place.shape[1])
        at = (boxes, groups, place)
        value = self.right - np.einsum("bkg,bg->bk", self.alpha, choices.stiffness[at])
        value -= np.einsum("bkg,bg->bk", self.beta, choices.flexibility[at])
        if self.omega.shape[2]:
            value -= np.einsum("bkg,bg->bk", self.omega, choices.weight[at])
        count = self.own.shape[1]
        if count:
            chosen = place[boxes, np.maximum(self.own, 0)]
            taken = self.table[boxes, np.arange(count), chosen]
            value[:, :count] -= np.where(self.own >= 0, taken, 0.0)
        return np.asarray(value)


@dataclass(kw_only=True, slots=True)
class Choices:
    """The sections left in each box, closed up: all (b, g, w), padded with infinite cost."""

    stiffness: FloatArray
    flexibility: FloatArray
    weight: FloatArray
    cost: FloatArray

    @classmethod
    def all_of(cls, ladder: Ladders, mask: BoolArray) -> Choices:
        """Return every section in its place on the ladder."""
        shape = mask.shape
        return cls(
            stiffness=np.broadcast_to(ladder.stiffness, shape),
            flexibility=np.broadcast_to(ladder.flexibility, shape),
            weight=np.broadcast_to(ladder.weight, shape),
            cost=np.where(mask, ladder.cost, np.inf),
        )

    def at(self, place: IntArray) -> Choices:
        """Return the sections at places (b, g, w) of these."""
        return Choices(
            **{name: np.take_along_axis(getattr(self, name), place, 2) for name in self.__slots__}
        )

    def of(self, boxes: IntArray) -> Choices:
        """Return the part for some boxes."""
        return Choices(**{name: getattr(self, name)[boxes] for name in self.__slots__})


@dataclass(frozen=True, kw_only=True, slots=True)
class DualAnswer:
    """Bounds (b,), multipliers (b, k), mean EA, 1/EA and weight (b, g) of the least designs."""

    bound: FloatArray
    multipliers: FloatArray
    stiffness: FloatArray
    flexibility: FloatArray
    weight: FloatArray


def raise_bounds(
    ladder: Ladders,
    mask: BoolArray,
    inequalities: Inequalities,
    start: FloatArray,
    target: float,
    steps: int,
) -> DualAnswer:
    """Raise the Lagrangian bounds of all boxes until they reach ``target`` or steps run out.

    mask (b, g, s) sections left, ``start`` (b, k) multipliers to begin with. Boxes are taken in
    portions of like width, each closed up to its widest group.
    """
    boxes, groups = start.shape[0], mask.shape[1]
    width = mask.sum(axis=2).max(axis=1)
    every = Choices.all_of(ladder, mask)
    best, multipliers = np.full(boxes, -np.inf), start.copy()
    means = np.zeros((3, boxes, groups))
    for portion in np.array_split(np.argsort(width, kind="stable"), PORTIONS):
        if portion.size == 0:
            continue
        place = np.argsort(~mask[portion], axis=2, kind="stable")
        place = place[:, :, : int(width[portion].max())]
        part = inequalities.of(portion)
        group = np.maximum(part.own, 0)
        box = np.arange(portion.size)[:, None]
        part.table = np.take_along_axis(part.table, place[box, group], 2)
        choices = every.of(portion).at(place)
        best[portion], multipliers[portion], means[:, portion] = _ascend(
            choices, part, start[portion], target, steps
        )
    return DualAnswer(
        bound=best,
        multipliers=multipliers,
        stiffness=means[0],
        flexibility=means[1],
        weight=means[2],
    )


def _ascend(
    choices: Choices, part: Inequalities, start: FloatArray, target: float, steps: int
) -> tuple[FloatArray, FloatArray, FloatArray]:
    boxes, groups = start.shape[0], np.arange(choices.cost.shape[1])
    best = np.full(boxes, -np.inf)
    best_at, lam = start.copy(), start.copy()
    sums = np.zeros((3, boxes, groups.size))
    weight = np.zeros(boxes)
    live = np.arange(boxes)
    for step in range(steps):
        value = part.reduced(choices, lam[live])
        place = value.argmin(axis=2)
        at = (np.arange(live.size)[:, None], groups, place)
        bound = value[at].sum(axis=1) + np.einsum("bk,bk->b", lam[live], part.right)
        better = bound > best[live]
        best[live[better]] = bound[better]
        best_at[live[better]] = lam[live[better]]
        share = LATE_SHARE if 2 * step >= steps else 1.0
        sums[0, live] += share * choices.stiffness[at]
        sums[1, live] += share * choices.flexibility[at]
        sums[2, live] += share * choices.weight[at]
        weight[live] += share
        slack = part.slack(choices, place)
        slack = np.where((lam[live] <= 0.0) & (slack < 0.0), 0.0, slack)
        length = np.einsum("bk,bk->b", slack, slack)
        on = (bound < target) & (length > FLAT)
        if not on.any():
            break
        stride = (AIM * target - bound[on]) / length[on]
        if 4 * on.sum() < 3 * on.size:
            # Few are left: go on with those alone.
            keep = np.flatnonzero(on)
            live, part, choices = live[keep], part.of(keep), choices.of(keep)
            lam[live] = np.maximum(0.0, lam[live] + stride[:, None] * slack[on])
        else:
            lam[live[on]] = np.maximum(0.0, lam[live[on]] + stride[:, None] * slack[on])
    return best, best_at, sums / weight[:, None]
