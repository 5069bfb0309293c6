"""The exact integer program of a cutting problem as a flow along the bar.

Valério de Carvalho 1999, "Exact solution of bin-packing problems using column generation and
branch-and-bound". Nodes are the sums of sizes (length + kerf) that pieces in order of falling
size can reach; an arc adds one piece or ends a bar. Every plan is such a flow, and every flow
falls apart into bars, so the program knows every plan. It is small where few pieces fit a bar or
lengths are coarse.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray
from scipy import sparse

from sizing.selection.cutting_problem import CuttingProblem
from sizing.selection.cutting_programs import Improvement, most_bars, whole_bound
from sizing.selection.cutting_start import Bars
from sizing.selection.highs import LinearModel, solve
from sizing.selection.watch import Watch

MOST_ARCS = 60_000
"""Arcs of the flow program; beyond, its linear program alone takes longer than a user waits."""

NO_ARC = -1


@dataclass(frozen=True, kw_only=True)
class _Flow:
    """``reached``: sums in rising order. ``steps``: (from, to, piece). ``ends``: (from, stock)."""

    reached: tuple[int, ...]
    steps: tuple[tuple[int, int, int], ...]
    ends: tuple[tuple[int, int], ...]


def over_flow(
    problem: CuttingProblem, between: tuple[int, int], watch: Watch
) -> Improvement | None:
    """Look for a plan with floor <= objective < ceiling (steps); None when the flow is too large.

    Unlike a choice of patterns this holds every plan: its bound is one of the problem.
    """
    flow = _flow_of(problem)
    if flow is None:
        return None
    floor, ceiling = between
    step_count, end_count = len(flow.steps), len(flow.ends)
    cost = np.zeros(step_count + end_count)
    cost[step_count:] = [problem.expense(j) // problem.step for _, j in flow.ends]
    needed = np.array(problem.numbers, dtype=np.float64)
    nodes = len(flow.reached)
    started = np.zeros(nodes)
    started[0] = -np.inf  # as many bars begin as are wanted
    stocks = len(problem.stock)
    answer = solve(
        LinearModel(
            cost=cost,
            lower=np.zeros(cost.size),
            upper=np.full(cost.size, float(needed.sum())),
            matrix=_matrix(problem, flow, cost),
            row_lower=np.concatenate([started, needed, np.full(stocks, -np.inf), [float(floor)]]),
            row_upper=np.concatenate(
                [np.zeros(nodes), needed, most_bars(problem), [float(ceiling - 1)]]
            ),
            integer=np.ones(cost.size, dtype=bool),
        ),
        seconds=watch.left,
        stop=watch.asked if watch.limits.stop else None,
    )
    bars = None if answer.values is None else _bars_of(problem, flow, answer.values)
    return Improvement(bars=bars, bound=whole_bound(answer, floor, ceiling))


def _flow_of(problem: CuttingProblem) -> _Flow | None:
    sizes = [length + problem.kerf for length in problem.lengths]
    longest = max(problem.room(j) for j in range(len(problem.stock)))
    reached = {0}
    steps: set[tuple[int, int, int]] = set()
    for i in sorted(range(len(sizes)), key=lambda k: -sizes[k]):
        added = set()
        for start in reached:
            most = min(problem.numbers[i], (longest - start) // sizes[i])
            for count in range(most):
                end = start + (count + 1) * sizes[i]
                steps.add((end - sizes[i], end, i))
                added.add(end)
            if len(steps) > MOST_ARCS:
                return None
        reached |= added
    ends = [(sum_, j) for sum_ in sorted(reached) if sum_ > 0 for j in _stocks_for(problem, sum_)]
    if len(steps) + len(ends) > MOST_ARCS:
        return None
    return _Flow(reached=tuple(sorted(reached)), steps=tuple(sorted(steps)), ends=tuple(ends))


def _stocks_for(problem: CuttingProblem, taken: int) -> list[int]:
    """Return the stock lengths that hold ``taken``, up to the first one that never runs out."""
    fitting = [j for j in range(len(problem.stock)) if problem.room(j) >= taken]
    kept = []
    for j in sorted(fitting, key=problem.expense):
        kept.append(j)
        if problem.stock[j].available is None:
            break
    return kept


def _matrix(problem: CuttingProblem, flow: _Flow, cost: NDArray[np.float64]) -> sparse.csr_array:
    """Return rows: balance of each sum (in less out), pieces cut, bars of each stock, expense."""
    row_of = {sum_: row for row, sum_ in enumerate(flow.reached)}
    nodes, pieces, stocks = len(flow.reached), len(problem.lengths), len(problem.stock)
    triplets: list[tuple[int, int, float]] = []
    for k, (start, end, piece) in enumerate(flow.steps):
        triplets += [(row_of[start], k, -1.0), (row_of[end], k, 1.0), (nodes + piece, k, 1.0)]
    for k, (start, stock) in enumerate(flow.ends, len(flow.steps)):
        triplets += [
            (row_of[start], k, -1.0),
            (nodes + pieces + stock, k, 1.0),
            (nodes + pieces + stocks, k, float(cost[k])),
        ]
    rows, columns, entries = zip(*triplets, strict=True)
    shape = (nodes + pieces + stocks + 1, cost.size)
    return sparse.csr_array((entries, (rows, columns)), shape=shape)


def _bars_of(problem: CuttingProblem, flow: _Flow, values: NDArray[np.float64]) -> Bars:
    """Take the flow apart: walk from 0 along arcs in use until a bar ends."""
    step_count = len(flow.steps)
    onward: dict[int, list[int]] = {sum_: [] for sum_ in flow.reached}
    left = [round(value) for value in values]
    for k, (start, _, _) in enumerate(flow.steps):
        onward[start].append(k)
    for k, (start, _) in enumerate(flow.ends, step_count):
        onward[start].append(k)
    bars: Bars = []
    while True:
        at, pieces = 0, [0] * len(problem.lengths)
        stock: int | None = None
        while stock is None:
            k = next((k for k in onward[at] if left[k] > 0), NO_ARC)
            if k == NO_ARC:
                return bars
            left[k] -= 1
            if k < step_count:
                _, at, piece = flow.steps[k]
                pieces[piece] += 1
            else:
                stock = flow.ends[k - step_count][1]
        bars.append((stock, tuple(pieces)))
