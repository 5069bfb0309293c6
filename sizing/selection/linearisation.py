"""The linear model of one analysed design: forces and movements in reciprocal stiffness.

About a design with y_g = 1/(EA)_g and self-weight w_g,

    N(x) ≈ N + Σ_g dN/dy_g (y_g(x) - y_g) + Σ_g dN/dw_g (w_g(x) - w_g),   y_g(x) = Σ_s y_s x_gs,

exact in forces and movements for a determinate truss without self-weight (Schmit & Farshi 1974,
approximation concepts with reciprocal variables). The resistance of each section stays in the
row, so a jump in the catalogue is seen as the jump it is.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from sizing.selection.analysis import DesignAnalysis, Evaluation, Sensitivities
from sizing.selection.choices import Choices
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
    """Linear model about ``centre``; y and w are those of the centre (g,)."""

    problem: SizingProblem
    analysis: DesignAnalysis
    centre: Evaluation
    slopes: Sensitivities
    y: FloatArray
    w: FloatArray

    @classmethod
    def at(cls, analysis: DesignAnalysis, centre: Evaluation) -> Linearisation:
        """Linearise about an analysed design."""
        problem = analysis.problem
        return cls(
            problem=problem,
            analysis=analysis,
            centre=centre,
            slopes=analysis.sensitivities(centre),
            y=1.0 / problem.stiffness[centre.sections],
            w=problem.weight[centre.sections],
        )

    def predict(self, sections: IntArray) -> Prediction:
        """Predict forces, movements and utilisations of a design (g,)."""
        problem, slopes = self.problem, self.slopes
        dy = 1.0 / problem.stiffness[sections] - self.y
        dw = problem.weight[sections] - self.w
        forces = (
            self.centre.forces
            + np.tensordot(dy, slopes.force_per_flexibility, 1)
            + np.tensordot(dw, slopes.force_per_weight, 1)
        )
        movements = (
            self.centre.movements
            + dy @ slopes.movement_per_flexibility
            + dw @ slopes.movement_per_weight
        )
        tension, compression = self.analysis.resistances(sections)
        nothing = NO_FORCE * np.abs(forces).max(initial=0.0)
        strength = _ratio(np.abs(forces), np.where(forces > 0.0, tension, compression), nothing)
        deflection = _ratio(np.abs(movements), problem.deflection_limit, 0.0)
        worst = max(float(strength.max(initial=0.0)), float(deflection.max(initial=0.0)))
        return Prediction(
            forces=forces,
            movements=movements,
            strength=strength,
            deflection=deflection,
            worst=worst,
        )

    def strength_row(
        self, i: int, c: int, sign: float, choices: Choices
    ) -> tuple[FloatArray, float]:
        """Coefficients (v,) and bound: sign · N_ic(x) <= Σ_s R_s x_gs, over the resistance."""
        problem, slopes = self.problem, self.slopes
        per_y, per_w = slopes.force_per_flexibility[:, i, c], slopes.force_per_weight[:, i, c]
        fixed = self.centre.forces[i, c] - per_y @ self.y - per_w @ self.w
        coefficients = sign * self._spread(per_y, per_w, choices)
        table = problem.tension if sign > 0.0 else problem.compression
        own = choices.slices[problem.group[i]]
        resistance = table[i, choices.section[own], problem.duration[c]]
        coefficients[own] -= resistance
        scale = self._scale(resistance, abs(self.centre.forces[i, c]))
        return coefficients / scale, -sign * fixed / scale

    def deflection_row(self, r: int, sign: float, choices: Choices) -> tuple[FloatArray, float]:
        """Coefficients (v,) and bound: sign · u_r(x) <= limit, over the limit."""
        slopes = self.slopes
        per_y, per_w = slopes.movement_per_flexibility[:, r], slopes.movement_per_weight[:, r]
        fixed = self.centre.movements[r] - per_y @ self.y - per_w @ self.w
        coefficients = sign * self._spread(per_y, per_w, choices)
        limit = self.problem.deflection_limit[r]
        scale = limit if limit > 0.0 else max(abs(self.centre.movements[r]), 1e-300)
        return coefficients / scale, (limit - sign * fixed) / scale

    def _spread(self, per_y: FloatArray, per_w: FloatArray, choices: Choices) -> FloatArray:
        flexibility = 1.0 / self.problem.stiffness[choices.section]
        weight = self.problem.weight[choices.section]
        return per_y[choices.group] * flexibility + per_w[choices.group] * weight

    def _scale(self, resistance: FloatArray, force: float) -> float:
        # The resistance that the group would need now, or the nearest to it.
        enough = resistance[resistance >= force]
        scale = float(enough.min() if enough.size else resistance.max(initial=0.0))
        return scale if scale > 0.0 else max(force, 1e-300)


def _ratio(demand: FloatArray, limit: FloatArray, nothing: float) -> FloatArray:
    ratio = np.where(demand > nothing, np.inf, 0.0)
    return np.divide(demand, limit, out=ratio, where=limit > 0.0)
