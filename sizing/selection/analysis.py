"""Exact analysis of one design or of many: forces, movements, utilisations.

Every design solved counts as one analysis, whether alone or in a batch. Small trusses are solved
with dense matrices (a batch in one call), large ones with a sparse factorisation.

Notation: k = EA/L, K = Bᵀ diag(k) B, K u = p, elongation e = B u, N = k e, y_g = 1/(EA)_g.
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property

import numpy as np
from numpy.typing import NDArray
from scipy import sparse

from sizing.errors import UnstableTrussError
from sizing.selection.problem import FEASIBILITY_TOLERANCE, SizingProblem

FloatArray = NDArray[np.float64]
IntArray = NDArray[np.intp]
BoolArray = NDArray[np.bool_]

DENSE_LIMIT = 400
"""Free displacements up to which a dense solution is used: about where a sparse one gets faster."""

BATCH_ENTRIES = 4_000_000
"""Matrix entries solved in one batch (32 MB of float64)."""

NO_FORCE = 1e-9
"""Force, relative to the greatest in any combination, that is rounding: a member without
resistance passes with it. Far above rounding (1e-12), far below any force that matters."""

NO_MOVEMENT = 1e-12
"""Movement, relative to the greatest displacement, that is rounding (for limits of zero)."""

RESIDUAL_TOLERANCE = 1e-6
"""Greatest out-of-balance over the greatest load after one step of refinement; more means that
the stiffness matrix is singular to working accuracy."""


@dataclass(frozen=True, kw_only=True, slots=True)
class Evaluation:
    """One design, analysed exactly.

    forces (m, c) per strength combination, case_forces (m, q) and displacements (n, q) per load
    case, movements (r,). strength (m, c) = N/tension or -N/compression, deflection (r,) =
    |movement|/limit, infinite where a limit of zero is exceeded. ``worst`` is the greatest of
    both (0 without any check); ``feasible`` also asks that every section is allowed.
    """

    sections: IntArray
    objective: float
    displacements: FloatArray
    case_forces: FloatArray
    forces: FloatArray
    movements: FloatArray
    strength: FloatArray
    deflection: FloatArray
    worst: float
    feasible: bool


@dataclass(frozen=True, kw_only=True, slots=True)
class Response:
    """What a truss with group flexibilities y = 1/(EA) and self-weights w (g,) does.

    displacements (n, q) and case_forces (m, q) per load case, forces (m, c), movements (r,).
    """

    y: FloatArray
    w: FloatArray
    displacements: FloatArray
    case_forces: FloatArray
    forces: FloatArray
    movements: FloatArray


@dataclass(frozen=True, kw_only=True, slots=True)
class BatchEvaluation:
    """Many designs (b, g) at once: objective, worst utilisation and feasibility (b,)."""

    objective: FloatArray
    worst: FloatArray
    feasible: BoolArray


class DesignAnalysis:
    """Exact analysis of designs of one problem; counts them in ``count``."""

    def __init__(self, problem: SizingProblem) -> None:
        self.problem = problem
        self.count = 0
        self._compatibility = sparse.csr_array(problem.compatibility)
        self._members = np.arange(problem.length.size)
        self._group_loads = _group_self_weight(problem)
        self._strength_self_weight = problem.strength_factors @ problem.self_weight_factor
        self._deflection_self_weight = problem.deflection_factors @ problem.self_weight_factor
        self._vectors = sparse.csr_array(problem.deflection_vectors)
        self._known: dict[bytes, Evaluation] = {}

    @property
    def group_loads(self) -> FloatArray:
        """Nodal self-weight load (n, g) of each group per unit of weight per length."""
        return self._group_loads

    @property
    def strength_self_weight(self) -> FloatArray:
        """Factor of self-weight in each strength combination (c,)."""
        return self._strength_self_weight

    @property
    def deflection_self_weight(self) -> FloatArray:
        """Factor of self-weight in each deflection row (r,)."""
        return self._deflection_self_weight

    @cached_property
    def _dense(self) -> FloatArray:
        return np.asarray(self._compatibility.toarray(), dtype=np.float64)

    def loads(self, sections: IntArray) -> FloatArray:
        """Nodal loads (n, q) with the self-weight of the design in the cases that include it."""
        own = self._group_loads @ self.problem.weight[sections]
        return self.problem.loads + np.outer(own, self.problem.self_weight_factor)

    def member_stiffness(self, sections: IntArray) -> FloatArray:
        """k = EA/L (m,) of the design."""
        return self.problem.stiffness[sections][self.problem.group] / self.problem.length

    def evaluate(self, sections: IntArray) -> Evaluation:
        """Analyse one design (g,). A design seen before is returned again and not counted.

        Raises UnstableTrussError when the stiffness matrix cannot be solved.
        """
        design = np.ascontiguousarray(sections, dtype=np.intp)
        key = design.tobytes()
        if key not in self._known:
            self.count += 1
            self._known[key] = self._evaluate(design)
        return self._known[key]

    def known(self, sections: IntArray) -> bool:
        """Return whether the design has been analysed before."""
        return np.ascontiguousarray(sections, dtype=np.intp).tobytes() in self._known

    def respond(self, y: FloatArray, w: FloatArray) -> Response:
        """Analyse a truss whose groups lie between sections; counts as one analysis.

        Raises UnstableTrussError when the stiffness matrix cannot be solved.
        """
        self.count += 1
        return self._respond(y, w)

    def _respond(self, y: FloatArray, w: FloatArray) -> Response:
        problem = self.problem
        k = 1.0 / (y[problem.group] * problem.length)
        p = problem.loads + np.outer(self._group_loads @ w, problem.self_weight_factor)
        u = self.solve(k, p)
        case_forces = k[:, None] * (self._compatibility @ u)
        # One step of refinement on equilibrium: the forces then balance the loads to rounding,
        # however different the stiffnesses are.
        rest = p - self._compatibility.T @ case_forces
        du = self.solve(k, rest)
        u = u + du
        case_forces = case_forces + k[:, None] * (self._compatibility @ du)
        self._check_balance(case_forces, p)
        return Response(
            y=y,
            w=w,
            displacements=u,
            case_forces=case_forces,
            forces=case_forces @ problem.strength_factors.T,
            movements=np.einsum("rq,rq->r", self._vectors @ u, problem.deflection_factors),
        )

    def _evaluate(self, sections: IntArray) -> Evaluation:
        problem = self.problem
        found = self._respond(1.0 / problem.stiffness[sections], problem.weight[sections])
        u, forces, movements = found.displacements, found.forces, found.movements
        strength = self._strength(sections, forces)
        deflection = self._deflection(movements, float(np.abs(u).max(initial=0.0)))
        worst = max(float(strength.max(initial=0.0)), float(deflection.max(initial=0.0)))
        allowed = bool(problem.allowed[np.arange(problem.groups), sections].all())
        return Evaluation(
            sections=sections,
            objective=problem.objective(sections),
            displacements=u,
            case_forces=found.case_forces,
            forces=forces,
            movements=movements,
            strength=strength,
            deflection=deflection,
            worst=worst,
            feasible=allowed and worst <= 1.0 + FEASIBILITY_TOLERANCE,
        )

    def evaluate_many(self, designs: IntArray) -> BatchEvaluation:
        """Analyse designs (b, g) in batches; each counts as one analysis."""
        problem = self.problem
        designs = np.asarray(designs, dtype=np.intp)
        objective = problem.cost[np.arange(problem.groups), designs].sum(axis=1)
        worst = np.empty(designs.shape[0])
        n = problem.loads.shape[0]
        if n > DENSE_LIMIT:
            worst[:] = [self.evaluate(design).worst for design in designs]
        else:
            step = max(1, BATCH_ENTRIES // max(1, n * (n + problem.length.size)))
            for first in range(0, designs.shape[0], step):
                part = designs[first : first + step]
                worst[first : first + step] = self._worst_of_batch(part)
            self.count += designs.shape[0]
        allowed = problem.allowed[np.arange(problem.groups), designs].all(axis=1)
        feasible = allowed & (worst <= 1.0 + FEASIBILITY_TOLERANCE)
        return BatchEvaluation(objective=objective, worst=worst, feasible=feasible)

    def _worst_of_batch(self, designs: IntArray) -> FloatArray:
        problem, B = self.problem, self._dense
        k = problem.stiffness[designs][:, problem.group] / problem.length
        own = problem.weight[designs] @ self._group_loads.T
        p = problem.loads + own[:, :, None] * problem.self_weight_factor
        K = (B.T * k[:, None, :]) @ B
        try:
            u = np.linalg.solve(K, p)
        except np.linalg.LinAlgError as error:
            raise UnstableTrussError(_MECHANISM) from error
        case_forces = k[:, :, None] * (B @ u)
        # Refinement with the same matrices, as for a single design.
        du = np.linalg.solve(K, p - B.T @ case_forces)
        case_forces += k[:, :, None] * (B @ du)
        u = u + du
        forces = case_forces @ problem.strength_factors.T
        worst = np.zeros(designs.shape[0])
        for place, design in enumerate(designs):
            self._check_balance(case_forces[place], p[place])
            moves = np.einsum("rq,rq->r", self._vectors @ u[place], problem.deflection_factors)
            scale = float(np.abs(u[place]).max(initial=0.0))
            strength = self._strength(design, forces[place]).max(initial=0.0)
            worst[place] = max(strength, self._deflection(moves, scale).max(initial=0.0))
        return worst

    def solve(self, k: FloatArray, right: FloatArray) -> FloatArray:
        """Solve K x = right (n, any) with K = Bᵀ diag(k) B; not counted, not refined.

        Raises UnstableTrussError when K is singular or the answer is not finite.
        """
        try:
            if right.shape[0] <= DENSE_LIMIT:
                x = np.linalg.solve((self._dense.T * k) @ self._dense, right)
            else:
                from scipy.sparse.linalg import splu

                B = self._compatibility
                x = splu(sparse.csc_array(B.T @ sparse.diags_array(k) @ B)).solve(right)
        except (np.linalg.LinAlgError, RuntimeError) as error:
            raise UnstableTrussError(_MECHANISM) from error
        if not np.isfinite(x).all():
            raise UnstableTrussError(_MECHANISM)
        return np.asarray(x, dtype=np.float64)

    def _check_balance(self, case_forces: FloatArray, p: FloatArray) -> None:
        rest = np.abs(p - self._compatibility.T @ case_forces).max(initial=0.0)
        if not rest <= RESIDUAL_TOLERANCE * np.abs(p).max(initial=0.0):
            raise UnstableTrussError(_MECHANISM)

    def resistances(self, sections: IntArray) -> tuple[FloatArray, FloatArray]:
        """Tension and compression resistance (m, c) of the design in every combination."""
        problem = self.problem
        chosen = sections[problem.group]
        tension = problem.tension[self._members, chosen][:, problem.duration]
        return tension, problem.compression[self._members, chosen][:, problem.duration]

    def _strength(self, sections: IntArray, forces: FloatArray) -> FloatArray:
        tension, compression = self.resistances(sections)
        return _ratio(
            np.abs(forces),
            np.where(forces >= 0.0, tension, compression),
            NO_FORCE * float(np.abs(forces).max(initial=0.0)),
        )

    def _deflection(self, movements: FloatArray, scale: float) -> FloatArray:
        return _ratio(np.abs(movements), self.problem.deflection_limit, NO_MOVEMENT * scale)


_MECHANISM = (
    "The stiffness equations cannot be solved: the truss is a mechanism or all but one. "
    "Check supports and bracing."
)


def _group_self_weight(problem: SizingProblem) -> FloatArray:
    # Σ over the members of the group of share_i · L_i, as (n, g).
    members = np.arange(problem.length.size)
    lengths = sparse.csr_array(
        (problem.length, (members, problem.group)), shape=(members.size, problem.groups)
    )
    return np.asarray((problem.self_weight_share @ lengths).toarray(), dtype=np.float64)


def _ratio(demand: FloatArray, limit: FloatArray, nothing: float) -> FloatArray:
    # Against a limit of zero anything but rounding is infinitely too much.
    ratio = np.where(demand > nothing, np.inf, 0.0)
    return np.divide(demand, limit, out=ratio, where=limit > 0.0)
