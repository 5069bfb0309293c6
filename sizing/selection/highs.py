"""Linear and mixed-integer programs: the only place that touches the HiGHS library.

A model is plain arrays, an answer is plain arrays with a status from a total table. Everything is
deterministic: fixed seed, one thread unless told otherwise.
"""

from __future__ import annotations

import math
import threading
from collections.abc import Callable
from dataclasses import dataclass
from functools import cache
from typing import Any, Literal

import numpy as np
from numpy.typing import NDArray
from scipy import sparse

from sizing.errors import SolverError

FloatArray = NDArray[np.float64]
BoolArray = NDArray[np.bool_]

FEASIBILITY = 1e-9
"""Row, bound and reduced-cost tolerance. Rows are scaled to order one by their authors, so this
is a relative tolerance; the library's own 1e-6 would let a section through that fails its check."""

SMALLEST_COEFFICIENT = 1e-12
"""Coefficients below this are dropped by the library (its least allowed value)."""

POLL_SECONDS = 0.02
"""How often a running integer program asks whether it should stop."""

NO_BOUND = math.inf

LinearStatus = Literal[
    "optimal", "infeasible", "unbounded", "limit", "interrupted", "broken model", "failed"
]
"""``limit``: time, node or iteration limit, ``bound`` still holds. ``broken model``: the arrays
make no sense (a mistake of the caller). ``failed``: the library gave up without an answer."""


@dataclass(frozen=True, kw_only=True, slots=True)
class LinearModel:
    """Minimise cost · x with row_lower <= matrix x <= row_upper and lower <= x <= upper.

    v variables, e rows: cost, lower, upper (v,), matrix (e, v) sparse, row_lower, row_upper (e,),
    integer (v,) or None for a linear program. Use ``np.inf`` for an absent bound.
    """

    cost: FloatArray
    lower: FloatArray
    upper: FloatArray
    matrix: sparse.csr_array
    row_lower: FloatArray
    row_upper: FloatArray
    integer: BoolArray | None = None


@dataclass(frozen=True, kw_only=True, slots=True)
class LinearAnswer:
    """What the solver says.

    ``values`` (v,) is None when no feasible point is known. ``bound`` is the dual bound: no
    feasible point of the model costs less (-inf when nothing is known, +inf when infeasible).
    ``row_duals`` (e,) and ``reduced_costs`` (v,) belong to linear programs; the sign is that of
    d objective / d (row or variable bound).
    """

    status: LinearStatus
    values: FloatArray | None
    objective: float | None
    bound: float
    row_duals: FloatArray | None = None
    reduced_costs: FloatArray | None = None
    nodes: int = 0


class LinearProgram:
    """A model that stays loaded, to be solved again after changes (warm start for LPs).

    Rows, costs and bounds may be changed between solves; the last basis is used again. ``solve``
    is the short way for a model that is solved once.
    """

    def __init__(self, model: LinearModel, *, threads: int = 1) -> None:
        self._highs = _quiet_solver(threads)
        self._integer = model.integer is not None and bool(model.integer.any())
        self._variables = model.cost.shape[0]
        if self._highs.passModel(_library_model(model)).name == "kError":
            message = "The linear model was refused: an array has the wrong size or is not finite."
            raise SolverError(message)

    def set_cost(self, cost: FloatArray) -> None:
        """Replace the objective (v,)."""
        index = np.arange(self._variables, dtype=np.int32)
        self._highs.changeColsCost(index.size, index, np.asarray(cost, dtype=np.float64))

    def set_bounds(self, index: NDArray[np.intp], lower: FloatArray, upper: FloatArray) -> None:
        """Replace the bounds of the variables ``index``."""
        place = np.asarray(index, dtype=np.int32)
        self._highs.changeColsBounds(place.size, place, _finite(lower), _finite(upper))

    def set_row_bounds(self, index: NDArray[np.intp], lower: FloatArray, upper: FloatArray) -> None:
        """Replace the bounds of the rows ``index``."""
        low, high = _finite(lower), _finite(upper)
        for place, row in enumerate(np.asarray(index)):
            self._highs.changeRowBounds(int(row), float(low[place]), float(high[place]))

    def add_rows(self, matrix: sparse.csr_array, lower: FloatArray, upper: FloatArray) -> None:
        """Append rows lower <= matrix x <= upper."""
        rows = sparse.csr_array(matrix)
        self._highs.addRows(
            rows.shape[0],
            _finite(lower),
            _finite(upper),
            rows.nnz,
            rows.indptr[:-1].astype(np.int32),
            rows.indices.astype(np.int32),
            rows.data.astype(np.float64),
        )

    def run(
        self,
        *,
        seconds: float = math.inf,
        start: FloatArray | None = None,
        stop: Callable[[], bool] | None = None,
        gap: float = 0.0,
        nodes: int | None = None,
    ) -> LinearAnswer:
        """Solve within ``seconds``.

        ``start`` (v,) is a feasible point for an integer program, ``stop`` is polled and ends the
        run when it returns True, ``gap`` is the relative gap at which an integer program may end.
        A keyboard interrupt ends the run and is raised again afterwards.
        """
        highs = self._highs
        if seconds <= 0.0:
            return LinearAnswer(status="limit", values=None, objective=None, bound=-math.inf)
        # The library counts its time over all runs of one instance.
        limit = NO_BOUND if math.isinf(seconds) else highs.getRunTime() + seconds
        highs.setOptionValue("time_limit", limit)
        highs.setOptionValue("mip_rel_gap", float(gap))
        if nodes is not None:
            highs.setOptionValue("mip_max_nodes", int(nodes))
        if start is not None and self._integer:
            _hand_over_start(highs, start)
        if self._integer or stop is not None:
            _run_watched(highs, stop)
        else:
            highs.run()
        if highs.getModelStatus().name == "kUnboundedOrInfeasible":
            highs.setOptionValue("presolve", "off")
            highs.run()
            highs.setOptionValue("presolve", "choose")
        return _answer(highs, integer=self._integer)


def solve(
    model: LinearModel,
    *,
    seconds: float = math.inf,
    start: FloatArray | None = None,
    stop: Callable[[], bool] | None = None,
    gap: float = 0.0,
    threads: int = 1,
    nodes: int | None = None,
) -> LinearAnswer:
    """Solve ``model`` once; see `LinearProgram.run` for the options."""
    program = LinearProgram(model, threads=threads)
    return program.run(seconds=seconds, start=start, stop=stop, gap=gap, nodes=nodes)


_STATUS: dict[str, LinearStatus] = {
    "kNotset": "failed",
    "kLoadError": "broken model",
    "kModelError": "broken model",
    "kPresolveError": "failed",
    "kSolveError": "failed",
    "kPostsolveError": "failed",
    "kModelEmpty": "optimal",
    "kOptimal": "optimal",
    "kInfeasible": "infeasible",
    "kUnboundedOrInfeasible": "failed",
    "kUnbounded": "unbounded",
    "kObjectiveBound": "limit",
    "kObjectiveTarget": "limit",
    "kTimeLimit": "limit",
    "kIterationLimit": "limit",
    "kUnknown": "failed",
    "kSolutionLimit": "limit",
    "kInterrupt": "interrupted",
    "kHighsInterrupt": "interrupted",
    "kMemoryLimit": "limit",
}


@cache
def _quiet_class() -> Any:  # the library has no useful types
    import highspy

    class QuietHighs(highspy.Highs):  # type: ignore[misc] # untyped library
        """The library prints a banner when its callbacks are set up, unless told before."""

        def enableCallbacks(self) -> None:
            self.setOptionValue("output_flag", False)
            super().enableCallbacks()

    return QuietHighs


def _quiet_solver(threads: int) -> Any:
    highs = _quiet_class()()
    for option in (
        "primal_feasibility_tolerance",
        "dual_feasibility_tolerance",
        "mip_feasibility_tolerance",
    ):
        highs.setOptionValue(option, FEASIBILITY)
    highs.setOptionValue("small_matrix_value", SMALLEST_COEFFICIENT)
    highs.setOptionValue("mip_rel_gap", 0.0)
    highs.setOptionValue("mip_abs_gap", 0.0)
    highs.setOptionValue("threads", threads)
    highs.setOptionValue("parallel", "off" if threads == 1 else "on")
    highs.setOptionValue("random_seed", 0)
    return highs


def _library_model(model: LinearModel) -> Any:
    import highspy

    rows, variables = model.matrix.shape
    program = highspy.HighsLp()
    program.num_col_ = variables
    program.num_row_ = rows
    program.col_cost_ = np.asarray(model.cost, dtype=np.float64)
    program.col_lower_ = _finite(model.lower)
    program.col_upper_ = _finite(model.upper)
    program.row_lower_ = _finite(model.row_lower)
    program.row_upper_ = _finite(model.row_upper)
    matrix = sparse.csr_array(model.matrix)
    program.a_matrix_.format_ = highspy.MatrixFormat.kRowwise
    program.a_matrix_.start_ = matrix.indptr.astype(np.int32)
    program.a_matrix_.index_ = matrix.indices.astype(np.int32)
    program.a_matrix_.value_ = matrix.data.astype(np.float64)
    if model.integer is not None:
        kinds = (highspy.HighsVarType.kContinuous, highspy.HighsVarType.kInteger)
        program.integrality_ = [kinds[int(flag)] for flag in model.integer]
    return program


def _finite(values: FloatArray) -> FloatArray:
    # The library's own infinity is the IEEE one; only the type and layout matter.
    return np.ascontiguousarray(values, dtype=np.float64)


def _hand_over_start(highs: Any, start: FloatArray) -> None:
    import highspy

    solution = highspy.HighsSolution()
    solution.col_value = list(np.asarray(start, dtype=np.float64))
    highs.setSolution(solution)


def _run_watched(highs: Any, stop: Callable[[], bool] | None) -> None:
    # The solver works in its own thread and this one waits, so that Ctrl-C reaches Python while
    # the library computes; the callbacks only read a flag.
    wanted = threading.Event()

    def end_if_wanted(event: Any) -> None:
        if wanted.is_set():
            event.interrupt()

    watchers = (highs.cbMipInterrupt, highs.cbSimplexInterrupt, highs.cbIpmInterrupt)
    for watcher in watchers:
        watcher.subscribe(end_if_wanted)
    ended = threading.Event()

    def work() -> None:
        try:
            highs.run()
        finally:
            ended.set()

    threading.Thread(target=work, daemon=True).start()
    try:
        # Not Thread.join: an interrupt during join makes Python 3.11 forget the thread.
        while not ended.wait(POLL_SECONDS):
            if stop is not None and stop():
                wanted.set()
    except BaseException:
        wanted.set()
        ended.wait()
        raise
    finally:
        for watcher in watchers:
            watcher.unsubscribe(end_if_wanted)


def _answer(highs: Any, *, integer: bool) -> LinearAnswer:
    status = _STATUS[highs.getModelStatus().name]
    info = highs.getInfo()
    has_point = info.primal_solution_status == _FEASIBLE_POINT and status not in _NO_POINT
    solution = highs.getSolution()
    values = np.array(solution.col_value, dtype=np.float64) if has_point else None
    objective = float(info.objective_function_value) if has_point else None
    duals = not integer and status == "optimal"
    return LinearAnswer(
        status=status,
        values=values,
        objective=objective,
        bound=_dual_bound(status, objective, info, integer=integer),
        row_duals=np.array(solution.row_dual, dtype=np.float64) if duals else None,
        reduced_costs=np.array(solution.col_dual, dtype=np.float64) if duals else None,
        nodes=int(info.mip_node_count) if integer else 0,
    )


_FEASIBLE_POINT = 2  # the library's code for a point that meets all its tolerances
_NO_POINT = ("infeasible", "unbounded", "broken model", "failed")


def _dual_bound(status: str, objective: float | None, info: Any, *, integer: bool) -> float:
    if status == "infeasible":
        return math.inf
    if integer and status in ("optimal", "limit", "interrupted"):
        return float(info.mip_dual_bound)
    if status == "optimal" and objective is not None:
        return objective
    return -math.inf
