"""The local model of one analysed design: forces and movements as sums over the groups' choices.

With x_gs = 1 when group g takes section s,

    N(x) ≈ N + Σ_gs x_gs ΔN_gs,

where ΔN_gs is what changing group g alone to section s does: either linear in y = 1/(EA) (Schmit
& Farshi 1974, approximation concepts), which suits mixtures of sections, or rational (see
`group_changes`), which suits whole sections far apart. Both are linear in x, and the resistance
of each section stays in the row, so a jump in the catalogue is seen as the jump it is.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from sizing.selection.analysis import DesignAnalysis, Evaluation, Response
from sizing.selection.choices import Choices
from sizing.selection.group_changes import GroupChanges, group_changes
from sizing.selection.problem import SizingProblem

FloatArray = NDArray[np.float64]
IntArray = NDArray[np.intp]

NO_FORCE = 1e-9
"""A demand below this part of the greatest force is rounding and asks for no resistance."""


@dataclass(frozen=True, kw_only=True, slots=True)
class Prediction:
    """Predicted utilisations: tension, compression (m, c), deflection (r,); ``worst`` of all."""

    forces: FloatArray
    movements: FloatArray
    strength: FloatArray
    deflection: FloatArray
    worst: float


@dataclass(frozen=True, kw_only=True)
class Linearisation:
    """Local model about a centre with flexibility y, self-weight w (g,), forces and movements.

    ``rational`` chooses between the two ways to see a change of section.
    """

    problem: SizingProblem
    analysis: DesignAnalysis
    forces: FloatArray
    movements: FloatArray
    changes: GroupChanges
    y: FloatArray
    w: FloatArray
    rational: bool

    @classmethod
    def at(cls, analysis: DesignAnalysis, centre: Evaluation) -> Linearisation:
        """Model the surroundings of an analysed design, for whole sections."""
        y = 1.0 / analysis.problem.stiffness[centre.sections]
        w = analysis.problem.weight[centre.sections]
        return cls._about(analysis, y, w, centre, rational=True)

    @classmethod
    def between(
        cls, analysis: DesignAnalysis, centre: Response, *, rational: bool = False
    ) -> Linearisation:
        """Model the surroundings of a truss whose groups lie between sections."""
        return cls._about(analysis, centre.y, centre.w, centre, rational=rational)

    @classmethod
    def _about(
        cls,
        analysis: DesignAnalysis,
        y: FloatArray,
        w: FloatArray,
        centre: Evaluation | Response,
        *,
        rational: bool,
    ) -> Linearisation:
        problem = analysis.problem
        combined = centre.case_forces @ problem.deflection_factors.T
        return cls(
            problem=problem,
            analysis=analysis,
            forces=centre.forces,
            movements=centre.movements,
            changes=group_changes(analysis, y, centre.forces, combined),
            y=y,
            w=w,
            rational=rational,
        )

    def predict(self, choices: Choices, x: FloatArray) -> Prediction:
        """Predict forces, movements and utilisations at a point x (v,), whole or fractional.

        A fractional x has the mixed resistance Σ_s R_s x_gs, as the rows see it.
        """
        problem = self.problem
        forces, movements = self.forces.copy(), self.movements.copy()
        for v in np.flatnonzero(x > 0.0):
            force, movement = self.change(choices, int(v))
            forces += x[v] * force
            movements += x[v] * movement
        resistance = np.where(
            forces > 0.0,
            self._mixed(problem.tension, choices, x),
            self._mixed(problem.compression, choices, x),
        )
        nothing = NO_FORCE * np.abs(forces).max(initial=0.0)
        strength = _ratio(np.abs(forces), resistance, nothing)
        deflection = _ratio(np.abs(movements), problem.deflection_limit, 0.0)
        worst = max(float(strength.max(initial=0.0)), float(deflection.max(initial=0.0)))
        return Prediction(
            forces=forces,
            movements=movements,
            strength=strength,
            deflection=deflection,
            worst=worst,
        )

    def change(self, choices: Choices, v: int) -> tuple[FloatArray, FloatArray]:
        """Change of forces (m, c) and movements (r,) by variable v alone."""
        changes, g = self.changes, choices.group[v]
        t, extra = self._step(choices, np.array([v]))
        force = self._answer(changes.force_first[g], changes.force_ratio[g], t)
        force += extra * changes.force_per_weight[g]
        inside = changes.inside[g]
        force[inside] += self._own(self.forces[inside], force[inside], t)
        movement = self._answer(changes.movement_first[g], changes.movement_ratio[g], t)
        return force, movement + extra * changes.movement_per_weight[g]

    def _mixed(self, table: FloatArray, choices: Choices, x: FloatArray) -> FloatArray:
        problem = self.problem
        mixed = np.empty((problem.length.size, table.shape[2]))
        for g, part in enumerate(choices.slices):
            inside = np.flatnonzero(problem.group == g)
            chosen = part.start + np.flatnonzero(x[part] > 0.0)
            block = table[np.ix_(inside, choices.section[chosen])]
            mixed[inside] = np.einsum("isk,s->ik", block, x[chosen])
        return mixed[:, problem.duration]

    def strength_row(
        self, i: int, c: int, sign: float, choices: Choices
    ) -> tuple[FloatArray, float]:
        """Coefficients (v,) and bound: sign · N_ic(x) <= Σ_s R_s x_gs, over the resistance."""
        problem, changes, group = self.problem, self.changes, choices.group
        t, extra = self._step(choices, np.arange(choices.count))
        first, ratio = changes.force_first[group, i, c], changes.force_ratio[group, i, c]
        change = self._answer(first, ratio, t) + extra * changes.force_per_weight[group, i, c]
        own = choices.slices[problem.group[i]]
        change[own] += self._own(self.forces[i, c], change[own], t[own])
        table = problem.tension if sign > 0.0 else problem.compression
        resistance = table[i, choices.section[own], problem.duration[c]]
        coefficients = sign * change
        coefficients[own] -= resistance
        scale = self._scale(resistance, abs(self.forces[i, c]))
        return coefficients / scale, -sign * self.forces[i, c] / scale

    def deflection_row(self, r: int, sign: float, choices: Choices) -> tuple[FloatArray, float]:
        """Coefficients (v,) and bound: sign · u_r(x) <= limit, over the limit."""
        changes, group = self.changes, choices.group
        t, extra = self._step(choices, np.arange(choices.count))
        change = self._answer(changes.movement_first[group, r], changes.movement_ratio[group, r], t)
        change += extra * changes.movement_per_weight[group, r]
        limit = self.problem.deflection_limit[r]
        scale = limit if limit > 0.0 else max(abs(self.movements[r]), 1e-300)
        return sign * change / scale, (limit - sign * self.movements[r]) / scale

    def _step(self, choices: Choices, v: IntArray) -> tuple[FloatArray, FloatArray]:
        # Size of the change (θ, or y/y0 - 1 in the linear model) and extra self-weight.
        group, section = choices.group[v], choices.section[v]
        relative = self.y[group] * self.problem.stiffness[section]
        t = 1.0 - relative if self.rational else 1.0 / relative - 1.0
        return t, self.problem.weight[section] - self.w[group]

    def _answer(self, first: FloatArray, ratio: FloatArray, t: FloatArray) -> FloatArray:
        return first * t / (1.0 - ratio * t) if self.rational else first * t

    def _own(self, force: FloatArray, change: FloatArray, t: FloatArray) -> FloatArray:
        # The group's own members: their stiffness changes besides their elongation.
        return -t * (force + change) if self.rational else -t * force

    def _scale(self, resistance: FloatArray, force: float) -> float:
        # The resistance that the group would need now, or the nearest to it.
        enough = resistance[resistance >= force]
        scale = float(enough.min() if enough.size else resistance.max(initial=0.0))
        return scale if scale > 0.0 else max(force, 1e-300)


def _ratio(demand: FloatArray, limit: FloatArray, nothing: float) -> FloatArray:
    ratio = np.where(demand > nothing, np.inf, 0.0)
    return np.divide(demand, limit, out=ratio, where=limit > 0.0)
