"""General-purpose ways to solve the same sizing problem, for comparison in the same run.

Each peer uses the package's own analysis routine, so that only the search differs, and gets the
same wall time. None of them gives a bound but the one-shot integer program.
"""

from __future__ import annotations

import math
import time
from dataclasses import dataclass, field

import numpy as np
from scipy import sparse

from sizing.selection.analysis import DesignAnalysis
from sizing.selection.highs import LinearModel, solve
from sizing.selection.problem import SizingProblem


@dataclass
class Trace:
    """What a peer found: (seconds, objective) at each improvement, analyses, bound."""

    name: str
    improvements: list[tuple[float, float]] = field(default_factory=list)
    analyses: int = 0
    bound: float | None = None

    @property
    def best(self) -> float:
        return self.improvements[-1][1] if self.improvements else math.inf

    def seconds_to(self, objective: float) -> float:
        """Seconds until a design within `objective` was known; inf if it never was."""
        return next((t for t, value in self.improvements if value <= objective), math.inf)


class _Budget:
    """Counts time and notes improvements; penalises what is not feasible."""

    def __init__(self, problem: SizingProblem, seconds: float, name: str) -> None:
        self.analysis = DesignAnalysis(problem)
        self.trace = Trace(name)
        self.begin = time.perf_counter()
        self.seconds = seconds

    @property
    def elapsed(self) -> float:
        return time.perf_counter() - self.begin

    @property
    def over(self) -> bool:
        return self.elapsed >= self.seconds

    def worst(self, designs: np.ndarray) -> tuple[np.ndarray, np.ndarray]:
        """Objective and worst utilisation (b,) of designs (b, g); improvements are noted."""
        found = self.analysis.evaluate_many(designs)
        if found.feasible.any():
            best = float(found.objective[found.feasible].min())
            if best < self.trace.best - 1e-12:
                self.trace.improvements.append((self.elapsed, best))
        self.trace.analyses = self.analysis.count
        return found.objective, found.worst


def by_stiffness(problem: SizingProblem) -> np.ndarray:
    """Sections in order of E·A, so that neighbouring integers are neighbouring sizes."""
    return np.argsort(problem.stiffness, kind="stable")


def differential_evolution_peer(problem: SizingProblem, seconds: float) -> Trace:
    """scipy.optimize.differential_evolution with integrality, penalty on excess utilisation."""
    from scipy.optimize import differential_evolution

    budget = _Budget(problem, seconds, "differential evolution (scipy)")
    order = by_stiffness(problem)

    def cost(x: np.ndarray) -> np.ndarray:
        designs = order[np.clip(np.rint(x.T).astype(int), 0, problem.sections - 1)]
        objective, worst = budget.worst(np.atleast_2d(designs))
        excess = np.maximum(0.0, np.minimum(worst, 1e6) - 1.0 - 1e-9)
        return objective * (1.0 + excess) ** 2 + np.where(excess > 0, objective, 0.0)

    differential_evolution(
        cost,
        [(0, problem.sections - 1)] * problem.groups,
        integrality=np.ones(problem.groups, dtype=bool),
        maxiter=1_000_000,
        popsize=max(5, 60 // problem.groups),
        rng=1,
        polish=False,
        tol=0.0,
        vectorized=True,
        updating="deferred",
        callback=lambda *_, **__: budget.over,
    )
    return budget.trace


def genetic_peer(problem: SizingProblem, seconds: float) -> Trace:
    """pymoo's genetic algorithm on integers, worst utilisation as a constraint."""
    from pymoo.algorithms.soo.nonconvex.ga import GA
    from pymoo.core.problem import Problem
    from pymoo.operators.crossover.sbx import SBX
    from pymoo.operators.mutation.pm import PM
    from pymoo.operators.repair.rounding import RoundingRepair
    from pymoo.operators.sampling.rnd import IntegerRandomSampling
    from pymoo.optimize import minimize
    from pymoo.termination import get_termination

    budget = _Budget(problem, seconds, "genetic algorithm (pymoo)")
    order = by_stiffness(problem)

    class Sizing(Problem):
        def __init__(self) -> None:
            super().__init__(
                n_var=problem.groups, n_obj=1, n_ieq_constr=1, xl=0, xu=problem.sections - 1,
                vtype=int,
            )  # fmt: skip

        def _evaluate(self, x, out, *_, **__):
            objective, worst = budget.worst(order[x.astype(int)])
            out["F"] = objective[:, None]
            out["G"] = (np.minimum(worst, 1e6) - 1.0 - 1e-9)[:, None]

    minimize(
        Sizing(),
        GA(
            pop_size=60,
            sampling=IntegerRandomSampling(),
            crossover=SBX(prob=0.9, eta=3.0, vtype=float, repair=RoundingRepair()),
            mutation=PM(prob=1.0, eta=3.0, vtype=float, repair=RoundingRepair()),
            eliminate_duplicates=True,
        ),
        get_termination("time", max(1, math.ceil(seconds))),
        seed=1,
        verbose=False,
    )
    return budget.trace


def one_shot_program(problem: SizingProblem, seconds: float) -> Trace:
    """The exact problem as one integer program (no self-weight), solved by HiGHS.

    x[g,s] binary; q[i,s] force of member i if it has section s, per load case; u displacements:
    Bᵀ Σ_s q = p,  |q[i,s] - (E A_s / L) b·u| <= M (1 - x),  -C x <= combined q <= T x, and the
    deflection rows. M = (E A_s / L) times the greatest elongation any section of the member may
    have. A design counts only when the exact analysis calls it feasible.
    """
    budget = _Budget(problem, seconds, "one-shot integer program (HiGHS)")
    model, x_columns = one_shot_model(problem)
    answer = solve(model, seconds=seconds)
    budget.trace.bound = answer.bound
    if answer.values is not None:
        x = answer.values[: x_columns.size].reshape(x_columns.shape)
        budget.worst(np.argmax(x, axis=1)[None, :])
    return budget.trace


class _Rows:
    """Sparse rows with bounds, added block by block."""

    def __init__(self) -> None:
        self.parts: list[tuple[np.ndarray, np.ndarray, np.ndarray]] = []
        self.low: list[np.ndarray] = []
        self.high: list[np.ndarray] = []
        self.count = 0

    def add(self, row, column, value, low, high) -> None:
        """Add a block whose row numbers start at 0."""
        self.parts.append((row + self.count, column, value))
        self.low.append(low)
        self.high.append(high)
        self.count += low.size

    def matrix(self, columns: int) -> sparse.csr_array:
        row, column, value = (np.concatenate([part[k] for part in self.parts]) for k in range(3))
        return sparse.csr_array((value, (row, column)), shape=(self.count, columns))


def one_shot_model(problem: SizingProblem) -> tuple[LinearModel, np.ndarray]:
    """Build the program; returns it and the column index of x (g, s)."""
    assert not problem.self_weight_factor.any(), "self-weight is not part of this peer"
    assert np.array_equal(problem.strength_factors, np.eye(problem.loads.shape[1]))
    m, n = problem.compatibility.shape
    cases, g, s = problem.loads.shape[1], problem.groups, problem.sections
    x_at = np.arange(g * s).reshape(g, s)
    q_at = g * s + np.arange(m * s * cases).reshape(m, s, cases)
    u_at = g * s + m * s * cases + np.arange(n * cases).reshape(n, cases)
    total = g * s + (m * s + n) * cases
    rows = _Rows()
    rows.add(np.repeat(np.arange(g), s), x_at.ravel(), np.ones(g * s), np.ones(g), np.ones(g))
    for case in range(cases):
        _equilibrium(rows, problem, q_at[:, :, case], case)
        for member in range(m):
            _member(rows, problem, member, x_at, q_at[member, :, case], u_at[:, case])
        _movements(rows, problem, u_at[:, case], case)
    lower, upper = np.full(total, -np.inf), np.full(total, np.inf)
    lower[: g * s], upper[: g * s] = 0.0, problem.allowed.ravel().astype(float)
    cost = np.zeros(total)
    cost[: g * s] = problem.cost.ravel()
    model = LinearModel(
        cost=cost,
        lower=lower,
        upper=upper,
        matrix=rows.matrix(total),
        row_lower=np.concatenate(rows.low),
        row_upper=np.concatenate(rows.high),
        integer=np.arange(total) < g * s,
    )
    return model, x_at


def _equilibrium(rows: _Rows, problem: SizingProblem, q: np.ndarray, case: int) -> None:
    B = problem.compatibility.tocoo()
    s = problem.sections
    loads = problem.loads[:, case]
    rows.add(np.repeat(B.col, s), q[B.row].ravel(), np.repeat(B.data, s), loads, loads)


def _member(
    rows: _Rows,
    problem: SizingProblem,
    member: int,
    x_at: np.ndarray,
    q: np.ndarray,
    u: np.ndarray,
) -> None:
    s = problem.sections
    k = problem.stiffness / problem.length[member]
    T, C = problem.tension[member, :, 0], problem.compression[member, :, 0]
    big = k * np.max(np.maximum(T, C) / k)
    x = x_at[problem.group[member]]
    b = problem.compatibility[[member]].tocoo()
    r, none, ones = np.arange(s), np.full(s, -np.inf), np.ones(s)
    for sign in (1.0, -1.0):
        rows.add(
            np.concatenate([r, np.repeat(r, b.nnz), r]),
            np.concatenate([q, np.tile(u[b.col], s), x]),
            np.concatenate([sign * ones, -sign * np.outer(k, b.data).ravel(), big]),
            none,
            big,
        )
    for sign, resistance in ((1.0, T), (-1.0, C)):
        rows.add(
            np.tile(r, 2),
            np.concatenate([q, x]),
            np.concatenate([sign * ones, -resistance]),
            none,
            np.zeros(s),
        )


def _movements(rows: _Rows, problem: SizingProblem, u: np.ndarray, case: int) -> None:
    factor = problem.deflection_factors[:, case]
    vectors = problem.deflection_vectors.tocoo()
    limit = np.where(factor != 0.0, problem.deflection_limit, np.inf)
    rows.add(vectors.row, u[vectors.col], vectors.data * factor[vectors.row], -limit, limit)
