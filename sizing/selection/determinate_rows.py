"""Rows of the exact integer program for determinate trusses.

Strength is linear in x as it stands:  ±(N0 + e D w(x)) <= Σ_s R_s x_gs.  R is clipped to the
range that the demand can take at all, which changes no design's verdict and tightens the
relaxation.

A movement holds products y_g h_g(w). With l <= h_g <= u over all weights in play, and any λ,

    y_g h_g  >=  λ h_g(w) + Σ_s x_gs (y_s - λ) · (l if y_s > λ else u)

is linear in x, holds for every design, and is exact wherever y_g = λ. So a row made at a design
is exact there: it either admits the design rightly or cuts it off.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from sizing.selection.choices import Choices
from sizing.selection.determinate_forces import DeterminateForces, force_range
from sizing.selection.problem import SizingProblem

FloatArray = NDArray[np.float64]
IntArray = NDArray[np.intp]
BoolArray = NDArray[np.bool_]

SLACK = 4e-9
"""Relative slack on every row: the feasibility tolerance of designs (1e-9) plus twice that of the
solver, so that no design that counts as feasible is lost to rounding. What slips through is found
by the exact analysis and cut off."""

NO_FORCE = 1e-9
"""A demand below this part of the greatest force is rounding and asks for no resistance."""


@dataclass(frozen=True, kw_only=True)
class StrengthRows:
    """All strength rows that can bind (t of them): demand - resistance <= 0.

    demand = fixed + per_weight w; resistance (t, v) in blocks of the row's own group. ``nothing``
    is the force that counts as none.
    """

    fixed: FloatArray
    per_weight: FloatArray
    group: IntArray
    resistance: tuple[FloatArray, ...]
    rows_of_group: tuple[IntArray, ...]
    scale: FloatArray
    nothing: float

    def violation(self, choices: Choices, x: FloatArray, w: FloatArray) -> FloatArray:
        """Demand less resistance over the row's scale (t,) at a point x."""
        out = self.fixed + self.per_weight @ w
        for g, rows in enumerate(self.rows_of_group):
            if rows.size == 0:
                continue
            out[rows] -= self.resistance[g] @ x[choices.slices[g]]
        return out / self.scale

    def row(self, t: int, choices: Choices, weight: FloatArray) -> tuple[FloatArray, float]:
        """Coefficients (v,) and upper bound of row t, scaled to order one."""
        g = int(self.group[t])
        place = int(np.flatnonzero(self.rows_of_group[g] == t)[0])
        coefficients = self.per_weight[t][choices.group] * weight[choices.section]
        coefficients[choices.slices[g]] -= self.resistance[g][place]
        bound = -self.fixed[t] / self.scale[t]
        slack = SLACK * max(1.0, abs(bound)) + self.nothing / self.scale[t]
        return coefficients / self.scale[t], bound + slack


def remove_too_weak(
    problem: SizingProblem, forces: DeterminateForces, mask: BoolArray
) -> BoolArray:
    """Return the pairs (g, s) left when sections that fail under every weight in play are out.

    Repeats while the weights in play narrow. A group may end up empty: then nothing fits.
    """
    mask = mask.copy()
    while True:
        low, high = force_range(forces, *weight_range(problem, mask))
        keep = mask & _strong_enough(problem, low, high)
        if not keep.any(axis=1).all() or (keep == mask).all():
            return keep
        mask = keep


def weight_range(problem: SizingProblem, mask: BoolArray) -> tuple[FloatArray, FloatArray]:
    """Least and greatest self-weight per length (g,) of the sections in play."""
    return (
        np.where(mask, problem.weight, np.inf).min(axis=1),
        np.where(mask, problem.weight, -np.inf).max(axis=1),
    )


def _strong_enough(problem: SizingProblem, low: FloatArray, high: FloatArray) -> BoolArray:
    # A section must resist the least demand of every member and combination.
    nothing = NO_FORCE * max(np.abs(low).max(initial=0.0), np.abs(high).max(initial=0.0))
    keep = np.ones(problem.allowed.shape, dtype=bool)
    for demand, resistance in ((low, problem.tension), (-high, problem.compression)):
        least = np.where(demand > nothing, demand, 0.0) * (1.0 - SLACK)
        for k in range(resistance.shape[2]):
            combos = np.flatnonzero(problem.duration == k)
            if combos.size == 0:
                continue
            asked = least[:, combos].max(axis=1)
            fits = resistance[:, :, k] >= asked[:, None]
            for g in range(problem.groups):
                keep[g] &= fits[problem.group == g].all(axis=0)
    return keep


def strength_rows(
    problem: SizingProblem, forces: DeterminateForces, choices: Choices
) -> StrengthRows:
    """Collect the strength rows in which some section in play might fail."""
    low, high = force_range(forces, *weight_range(problem, choices.mask))
    nothing = NO_FORCE * max(np.abs(low).max(initial=0.0), np.abs(high).max(initial=0.0))
    found = []
    for sign, least, most, resistance in (
        (1.0, low, high, problem.tension),
        (-1.0, -high, -low, problem.compression),
    ):
        for i, c in zip(*np.nonzero(most > nothing), strict=True):
            g = problem.group[i]
            r = resistance[i, choices.section[choices.slices[g]], problem.duration[c]]
            if r.min() < most[i, c]:
                found.append((sign, i, c, np.clip(r, max(least[i, c], 0.0), most[i, c])))
    return _collect(problem, forces, found, nothing)


def _collect(
    problem: SizingProblem,
    forces: DeterminateForces,
    found: list[tuple[float, int, int, FloatArray]],
    nothing: float,
) -> StrengthRows:
    sign = np.array([f[0] for f in found])
    i = np.array([f[1] for f in found], dtype=np.intp)
    c = np.array([f[2] for f in found], dtype=np.intp)
    group = problem.group[i]
    rows_of_group = tuple(np.flatnonzero(group == g) for g in range(problem.groups))
    return StrengthRows(
        fixed=sign * forces.fixed[i, c],
        per_weight=(sign * forces.factor[c])[:, None] * forces.per_weight[i],
        group=group,
        resistance=tuple(
            np.array([found[t][3] for t in rows]) if rows.size else np.zeros((0, 0))
            for rows in rows_of_group
        ),
        rows_of_group=rows_of_group,
        scale=np.array([f[3].max(initial=nothing) for f in found]),
        nothing=nothing,
    )


@dataclass(frozen=True, kw_only=True)
class DeflectionRows:
    """The two-sided deflection limits; ``row`` writes one of them, exact at a given design."""

    problem: SizingProblem
    forces: DeterminateForces
    choices: Choices

    def movements(self, y: FloatArray, w: FloatArray) -> FloatArray:
        """u (r,) at averages y, w (g,)."""
        return self.forces.movement_shares(w) @ y

    def row(self, r: int, sign: float, y: FloatArray) -> tuple[FloatArray, float]:
        """Coefficients (v,) and bound of sign · u_r <= limit, exact where y_g = ``y``."""
        problem, choices = self.problem, self.choices
        flexibility = 1.0 / problem.stiffness[choices.section]
        weight = problem.weight[choices.section]
        b = sign * self.forces.movement_per_weight(r)
        lightest, heaviest = weight_range(problem, choices.mask)
        up, down = np.maximum(b, 0.0), np.minimum(b, 0.0)
        low, high = up @ lightest + down @ heaviest, up @ heaviest + down @ lightest
        excess = flexibility - y[choices.group]
        range_end = np.where(excess > 0.0, low[choices.group], high[choices.group])
        coefficients = sign * self.forces.movement[r, choices.group] * flexibility
        coefficients += excess * range_end + (y @ b)[choices.group] * weight
        limit = problem.deflection_limit[r]
        size = limit if limit > 0.0 else np.abs(coefficients).max(initial=1e-300)
        return coefficients / size, limit / size * (1.0 + SLACK) + (SLACK if limit == 0.0 else 0.0)
