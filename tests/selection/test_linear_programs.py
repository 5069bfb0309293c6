"""The solver adapter: every status, bounds at a limit, interruption."""

from __future__ import annotations

import signal
import time

import numpy as np
import pytest
from scipy import sparse

from sizing.selection.highs import LinearModel, LinearProgram, solve


def model(*, upper=5.0, most=6.5, least=-np.inf, integer=False):
    return LinearModel(
        cost=np.array([-1.0, -2.0]),
        lower=np.zeros(2),
        upper=np.full(2, upper),
        matrix=sparse.csr_array([[1.0, 1.0]]),
        row_lower=np.array([least]),
        row_upper=np.array([most]),
        integer=np.ones(2, dtype=bool) if integer else None,
    )


def hard(rows=30, columns=120):
    rng = np.random.default_rng(0)
    matrix = rng.random((rows, columns))
    return LinearModel(
        cost=-rng.random(columns),
        lower=np.zeros(columns),
        upper=np.ones(columns),
        matrix=sparse.csr_array(matrix),
        row_lower=np.full(rows, -np.inf),
        row_upper=matrix.sum(axis=1) / 3.0,
        integer=np.ones(columns, dtype=bool),
    )


def test_statuses_are_kept_apart():
    """Optimal, infeasible and unbounded are told apart, silently."""
    assert solve(model()).objective == pytest.approx(-11.5)
    assert solve(model(integer=True)).objective == pytest.approx(-11.0)
    assert solve(model(least=20.0, most=np.inf)).status == "infeasible"
    assert solve(model(upper=np.inf, most=np.inf)).status == "unbounded"


def test_nothing_is_printed(capfd):
    """The library says nothing on the screen."""
    solve(model(integer=True))
    captured = capfd.readouterr()
    assert captured.out == ""
    assert captured.err == ""


def test_duals_price_a_row():
    """The row dual is the change of the optimum per unit of its bound."""
    base, more = solve(model()), solve(model(most=6.6))
    assert (more.objective - base.objective) / 0.1 == pytest.approx(base.row_duals[0])


def test_a_limit_leaves_a_valid_bound_and_a_stop_is_obeyed():
    """At a time limit or on request the dual bound lies below the best point found."""
    start = time.monotonic()
    limited = solve(hard(), seconds=0.5)
    assert limited.status == "limit"
    assert limited.bound <= limited.objective
    stopped = solve(hard(), stop=lambda: time.monotonic() - start > 1.5)
    assert stopped.status == "interrupted"
    assert stopped.bound <= stopped.objective


def test_keyboard_interrupt_comes_through():
    """Ctrl-C during an integer program raises KeyboardInterrupt, not much later."""
    old = signal.signal(signal.SIGALRM, signal.default_int_handler)
    signal.setitimer(signal.ITIMER_REAL, 0.4)
    try:
        with pytest.raises(KeyboardInterrupt):
            solve(hard())
    finally:
        signal.setitimer(signal.ITIMER_REAL, 0.0)
        signal.signal(signal.SIGALRM, old)


def test_rows_may_be_added():
    """A loaded program takes new rows and bounds and is solved again."""
    program = LinearProgram(model())
    assert program.run().objective == pytest.approx(-11.5)
    program.add_rows(sparse.csr_array([[0.0, 1.0]]), np.array([-np.inf]), np.array([2.0]))
    assert program.run().objective == pytest.approx(-8.5)
    program.set_row_bounds(np.array([1]), np.array([-np.inf]), np.array([3.0]))
    assert program.run().objective == pytest.approx(-9.5)
    program.set_bounds(np.array([0]), np.array([0.0]), np.array([1.0]))
    assert program.run().objective == pytest.approx(-7.0)
    program.set_cost(np.array([1.0, 1.0]))
    assert program.run().objective == pytest.approx(0.0)
