"""500 small random trusses: the pick against trying every design.

    pytest -m bench -s tests/bench/test_random_trusses.py

2D and 3D, 0 to 3 redundants, 3 to 5 groups, 4 to 8 sections, several load cases, self-weight in
every second one, deflection limits in four of five. A short form of the same runs in the ordinary
tests (tests/selection).
"""

from __future__ import annotations

import time

import numpy as np
import pytest
from selection.random_problems import enumerated, random_problem

from sizing.selection.outcome import Limits
from sizing.selection.pick import pick

TRUSSES = 500
SAME = 1e-7
"""Bounds are claimed up to 2e-8 below what was found."""


def build(seed):
    rng = np.random.default_rng(10_000 + seed)
    return random_problem(
        rng,
        dimensions=2 + seed % 2,
        nodes=int(rng.integers(4, 7)),
        redundants=seed % 4,
        groups=int(rng.integers(3, 6)),
        sections=int(rng.integers(4, 9)),
        self_weight=bool(seed % 2),
        deflection=seed % 5 != 0,
        tightness=(1.0, 0.6, 1.6)[seed % 3],
    )


@pytest.mark.bench
def test_the_pick_is_the_enumerated_optimum(capsys):
    """Every pick equals the cheapest of all designs, and no bound exceeds it."""
    proven = none = 0
    start = time.process_time()
    for seed in range(TRUSSES):
        problem = build(seed)
        optimum = enumerated(problem)
        found = pick(problem, Limits(seconds=30.0))
        if optimum is None:
            assert found.sections is None, seed
            none += 1
            continue
        assert found.objective is not None, seed
        assert abs(found.objective - optimum) <= SAME * optimum, seed
        assert found.bound <= optimum * (1.0 + 1e-9), seed
        proven += found.status == "proven"
    with capsys.disabled():
        print(
            f"\n{TRUSSES} trusses: {proven} proven optimal, {none} proven or found infeasible, "
            f"{TRUSSES - proven - none} optimal with a gap; {time.process_time() - start:.0f} s"
        )
