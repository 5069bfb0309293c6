"""Cutting 200 pieces of 25 lengths: bars, bound and time beside first fit decreasing.

Fixed inputs; nothing is asserted about seconds. Run with ``-m bench -s``.
"""

from __future__ import annotations

import random
import time
from dataclasses import replace

import pytest

from sizing.selection.cutting_check import faults_of
from sizing.selection.cutting_problem import CuttingProblem, StockLength
from sizing.selection.cutting_start import expense_of, first_plan
from sizing.selection.cutting_stock import cut_stock

pytestmark = pytest.mark.bench


def pieces(seed: int, unit: int) -> CuttingProblem:
    """25 lengths from 0.7 to 3.4 m, 200 pieces; ``unit`` steps in a millimetre."""
    chance = random.Random(seed)
    numbers = [1] * 25
    for _ in range(175):
        numbers[chance.randrange(25)] += 1
    return CuttingProblem(
        lengths=tuple(chance.sample(range(700 * unit, 3400 * unit), 25)),
        numbers=tuple(numbers),
        stock=(
            StockLength(length=6000 * unit, price=6013),
            StockLength(length=12000 * unit, price=12701),
        ),
        kerf=3 * unit,
        trim=10 * unit,
    )


@pytest.mark.parametrize("minimise", ["length", "bars", "cost"])
@pytest.mark.parametrize("unit", [1, 10])
def test_table_of_cutting_plans(minimise, unit):
    """Plans can be cut and lie between bound and first fit; the table shows how near."""
    print(f"\nminimise {minimise}, lengths in 1/{unit} mm")
    print(f"{'seed':>4} {'first fit':>10} {'plan':>10} {'bound':>10} {'gap':>7} {'s':>6}  status")
    for seed in range(6):
        problem = replace(pieces(seed, unit), minimise=minimise)
        begun = time.perf_counter()
        plan = cut_stock(problem, seconds=5.0)
        seconds = time.perf_counter() - begun
        start = expense_of(problem, first_plan(problem, problem.numbers))
        assert faults_of(plan) == ()
        assert plan.bound <= plan.objective <= start
        print(
            f"{seed:>4} {start:>10} {plan.objective:>10} {plan.bound:>10} {plan.gap:>7.2%} "
            f"{seconds:>6.2f}  {plan.status}: {plan.method}"
        )
