"""The pick beside general-purpose peers on every published benchmark, one table.

    pytest -m bench -s tests/bench/test_selection_table.py

prints, per problem: the best published weight, ours, the difference, exact analyses, bound, gap
and time; then each peer with the same wall time: weight, analyses, and the time it needed to come
within 0.1 % of the best known weight.
"""

from __future__ import annotations

import math
import os

import pytest
from benchmark_problems import NAMES, load
from peers import Trace, differential_evolution_peer, genetic_peer, one_shot_program

from sizing.selection.outcome import Limits, Progress
from sizing.selection.pick import pick

LIMIT = float(os.environ.get("SIZING_BENCH_SECONDS", "600"))
"""Time limit of each pick in seconds."""

LEAST_PEER_SECONDS = 5.0
CLOSE = 1.001


class Follow:
    """Notes when the pick's incumbent improves."""

    def __init__(self) -> None:
        self.trace = Trace("this package")

    def __call__(self, progress: Progress) -> None:
        value = progress.incumbent
        if value is not None and value < self.trace.best:
            self.trace.improvements.append((progress.seconds, value))


@pytest.mark.bench
@pytest.mark.parametrize("name", NAMES)
def test_table_of_published_problems(name, capsys):
    """The pick is never above the best published feasible weight, nor slower than a peer."""
    benchmark = load(name)
    follow = Follow()
    ours = pick(benchmark.problem, Limits(seconds=LIMIT, report=follow))
    goal = CLOSE * min(benchmark.best, ours.objective)
    to_goal = follow.trace.seconds_to(goal)
    seconds = max(LEAST_PEER_SECONDS, min(ours.seconds, 120.0))
    peers = [
        peer(benchmark.problem, seconds)
        for peer in (differential_evolution_peer, genetic_peer, one_shot_program)
    ]
    with capsys.disabled():
        print(
            f"\n{name}: published {benchmark.best:.3f}, ours {ours.objective:.3f} "
            f"({ours.objective / benchmark.best - 1:+.4%}), {ours.status}, bound {ours.bound:.3f}, "
            f"gap {ours.gap:.3%}, {ours.analyses} analyses, {ours.seconds:.2f} s, within 0.1 % "
            f"after {to_goal:.2f} s"
        )
        for peer in peers:
            when = peer.seconds_to(goal)
            print(
                f"    {peer.name}, {seconds:.0f} s: {peer.best:.3f} "
                f"({peer.best / benchmark.best - 1:+.3%}), {peer.analyses} analyses, within 0.1 % "
                + (f"after {when:.2f} s ({when / to_goal:.0f} x ours)" if when < math.inf else
                   "never")
                + ("" if peer.bound is None else f", bound {peer.bound:.3f}")
            )  # fmt: skip
    assert ours.objective <= benchmark.best * (1 + 1e-6)
    if benchmark.optimum is not None:
        assert ours.bound <= benchmark.optimum * (1 + 1e-6)
