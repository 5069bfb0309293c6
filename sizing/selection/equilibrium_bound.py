"""A lower bound for any truss: equilibrium and the resistance of each section, nothing else.

Dropping compatibility and the deflection limits leaves, over the choices x and any forces in
equilibrium with the loads,

    N_q = N0_q + e_q D w(x) + Z X_q,   Bᵀ N0 = loads,  Bᵀ D = self-weight of each group,  Bᵀ Z = 0,
    -Σ_s R⁻_s x_gs  <=  Σ_q f_cq N_iq  <=  Σ_s R⁺_s x_gs .

The forces of every feasible design are among them, so the least cost is a lower bound, self-weight
and grouping included (the lower-bound theorem of plastic design used the other way round). Rows
are added lazily; the bound of every relaxation holds.
"""

from __future__ import annotations

import math

import numpy as np
from numpy.typing import NDArray
from scipy import sparse

from sizing.selection.choices import Choices
from sizing.selection.determinate_rows import SLACK
from sizing.selection.highs import LinearModel, LinearProgram, solve
from sizing.selection.problem import SizingProblem
from sizing.selection.watch import Watch

FloatArray = NDArray[np.float64]
IntArray = NDArray[np.intp]
BoolArray = NDArray[np.bool_]

MOST_MEMBERS = 600
"""Members up to which the dense self-stress states are worth their time."""

ROUNDS = 40
ROWS_A_ROUND = 150
"""Rounds of lazy rows, and rows added in each."""

VIOLATION = 1e-7
"""Violation, relative to the greatest resistance of the row, above which a row is added."""

NO_FORCE = 1e-9
"""Part of the greatest load effect that counts as no force (see `analysis`)."""


def equilibrium_bound(
    problem: SizingProblem, mask: BoolArray, watch: Watch, *, whole_seconds: float
) -> float:
    """Return a lower bound on the cost over the pairs (g, s) in ``mask``; inf: nothing fits.

    ``whole_seconds`` is spent on whole sections after the relaxation with mixtures.
    """
    floor = float(np.where(mask, problem.cost, np.inf).min(axis=1).sum())
    if problem.length.size > MOST_MEMBERS:
        return floor
    rows = _Rows(problem, Choices.of(mask))
    program = LinearProgram(rows.model(integer=False))
    bound = floor
    for _ in range(ROUNDS):
        answer = program.run(seconds=watch.left)
        if answer.status == "infeasible":
            return math.inf
        if answer.values is None or watch.stop():
            return bound
        bound = max(bound, answer.bound * rows.cost_scale)
        new = rows.add_violated(answer.values)
        if new is None:
            break
        program.add_rows(new[0], np.full(new[1].size, -np.inf), new[1])
    if whole_seconds > 0.0:
        whole = solve(
            rows.model(integer=True),
            seconds=min(whole_seconds, watch.left),
            stop=watch.asked,
        )
        bound = max(bound, whole.bound * rows.cost_scale)
    return bound


class _Rows:
    # Columns: x (v,), then the self-stress multipliers X (k, q) over ``force_scale``.

    def __init__(self, problem: SizingProblem, choices: Choices) -> None:
        self.problem, self.choices = problem, choices
        A = np.asarray(problem.compatibility.toarray().T, dtype=np.float64)
        left, size, right = np.linalg.svd(A, full_matrices=True)
        rank = int((size > 1e-10 * size.max(initial=0.0)).sum())
        self.Z = right[rank:].T
        inverse = (right[:rank].T / size[:rank]) @ left[:, :rank].T
        members = np.arange(problem.length.size)
        lengths = sparse.csr_array(
            (problem.length, (members, problem.group)), shape=(members.size, problem.groups)
        )
        own = inverse @ np.asarray((problem.self_weight_share @ lengths).toarray())
        self.fixed = (inverse @ problem.loads) @ problem.strength_factors.T
        self.own_factor = problem.strength_factors @ problem.self_weight_factor
        self.per_weight = own
        self.force_scale = float(np.abs(self.fixed).max(initial=0.0)) or 1.0
        self.states = self.Z.shape[1] * problem.loads.shape[1]
        dearest = np.where(choices.mask, problem.cost, 0.0).max(axis=1).sum()
        self.cost_scale = float(dearest) / 1000.0 or 1.0
        self.rows: list[FloatArray] = []
        self.bounds: list[float] = []
        self._known: set[tuple[int, int, float]] = set()

    def model(self, *, integer: bool) -> LinearModel:
        choices, v = self.choices, self.choices.count
        groups = len(choices.slices)
        pad = sparse.csr_array((groups, self.states))
        matrix = sparse.hstack([choices.one_each(), pad])
        if self.rows:
            matrix = sparse.vstack([matrix, sparse.csr_array(np.array(self.rows))])
        free = np.full(self.states, np.inf)
        kinds = np.concatenate([np.ones(v, dtype=bool), np.zeros(self.states, dtype=bool)])
        return LinearModel(
            cost=np.append(choices.cost(self.problem) / self.cost_scale, np.zeros(self.states)),
            lower=np.append(np.zeros(v), -free),
            upper=np.append(np.ones(v), free),
            matrix=sparse.csr_array(matrix),
            row_lower=np.append(np.ones(groups), np.full(len(self.rows), -np.inf)),
            row_upper=np.append(np.ones(groups), np.array(self.bounds)),
            integer=kinds if integer else None,
        )

    def add_violated(self, values: FloatArray) -> tuple[sparse.csr_array, FloatArray] | None:
        problem, choices = self.problem, self.choices
        x = values[: choices.count]
        states = values[choices.count :].reshape(self.Z.shape[1], problem.loads.shape[1])
        X = states * self.force_scale
        w = choices.averages(problem.weight, x)
        forces = self.fixed + np.outer(self.per_weight @ w, self.own_factor)
        forces = forces + (self.Z @ X) @ problem.strength_factors.T
        found = []
        for sign, table in ((1.0, problem.tension), (-1.0, problem.compression)):
            mixed = np.empty((forces.shape[0], table.shape[2]))
            for g, part in enumerate(choices.slices):
                inside = np.flatnonzero(problem.group == g)
                mixed[inside] = np.einsum(
                    "isk,s->ik", table[np.ix_(inside, choices.section[part])], x[part]
                )
            excess = (sign * forces - mixed[:, problem.duration]) / self.force_scale
            for i, c in zip(*np.nonzero(excess > VIOLATION), strict=True):
                if (int(i), int(c), sign) not in self._known:
                    found.append((float(excess[i, c]), int(i), int(c), sign))
        found.sort(reverse=True)
        if not found:
            return None
        first = len(self.rows)
        for _, i, c, sign in found[:ROWS_A_ROUND]:
            self._known.add((i, c, sign))
            self._add(i, c, sign)
        return sparse.csr_array(np.array(self.rows[first:])), np.array(self.bounds[first:])

    def _add(self, i: int, c: int, sign: float) -> None:
        problem, choices = self.problem, self.choices
        table = problem.tension if sign > 0.0 else problem.compression
        own = choices.slices[problem.group[i]]
        x = sign * self.own_factor[c] * self.per_weight[i][choices.group]
        x = x * problem.weight[choices.section]
        resistance = table[i, choices.section[own], problem.duration[c]]
        x[own] -= resistance
        X = sign * np.outer(self.Z[i], problem.strength_factors[c]).ravel() * self.force_scale
        scale = self.force_scale
        self.rows.append(np.append(x, X) / scale)
        slack = SLACK * max(1.0, float(resistance.max()) / scale) + NO_FORCE
        self.bounds.append(-sign * self.fixed[i, c] / scale + slack)
