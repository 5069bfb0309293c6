"""The pick on published problems, its limits, and what it says when nothing fits."""

from __future__ import annotations

import dataclasses
import time

import numpy as np
import pytest
from selection.benchmark_problems import load
from selection.random_problems import roof_girder

from sizing.selection.analysis import DesignAnalysis
from sizing.selection.outcome import Limits
from sizing.selection.pick import pick
from sizing.selection.search import run_search
from sizing.selection.watch import Watch

MOST_ANALYSES = 300
SHORT = ("10bar_42areas", "15bar", "25bar_30areas", "72bar_32areas")


def searched(name):
    case = load(name)
    analysis = DesignAnalysis(case.problem)
    start = time.monotonic()
    record = run_search(analysis, case.problem.allowed, Watch(Limits()))
    return case, record.best, analysis.count, time.monotonic() - start


def test_six_bar_is_proven():
    """The determinate six-bar truss: the published optimum, proven by one program."""
    case = load("6bar_42areas")
    found = pick(case.problem)
    assert found.status == "proven"
    assert found.objective == pytest.approx(case.best, abs=1e-5)


@pytest.mark.parametrize("name", SHORT)
def test_search_reaches_the_best_published_weight(name):
    """Best published weights within 300 analyses (sources stand in the data files)."""
    case, best, count, _ = searched(name)
    assert best is not None
    assert best.feasible
    assert best.objective <= case.best * (1.0 + 1e-6)
    assert count <= MOST_ANALYSES


def test_same_problem_same_pick():
    """Two runs analyse the same designs and end at the same one."""
    first, second = searched("10bar_42areas"), searched("10bar_42areas")
    assert first[2] == second[2]
    assert (first[1].sections == second[1].sections).all()


def test_stop_request_ends_with_the_best_design_so_far():
    """A stop request gives back a checked design, quickly, with status stopped."""
    case = load("72bar_32areas")
    seen = []
    limits = Limits(seconds=60.0, report=seen.append, stop=lambda: len(seen) >= 2)
    found = pick(case.problem, limits)
    assert found.status == "stopped"
    assert found.sections is not None
    assert DesignAnalysis(case.problem).evaluate(found.sections).feasible
    assert found.seconds < 30.0


def test_no_time_at_all():
    """Without time there is no crash and no claim."""
    found = pick(load("10bar_42areas").problem, Limits(seconds=0.0))
    assert found.status == "stopped"
    found = pick(load("6bar_42areas").problem, Limits(seconds=0.0))
    assert found.status == "stopped"


def test_gap_ends_the_search():
    """A wide gap is reached at once and the status says so."""
    found = pick(load("15bar").problem, Limits(seconds=60.0, gap=0.9))
    assert found.status in ("within gap", "proven")
    assert found.gap <= 0.9


def test_group_without_sections_is_named():
    """A group that may take nothing is reported before anything is computed."""
    problem = load("10bar_42areas").problem
    allowed = problem.allowed.copy()
    allowed[4] = False
    found = pick(dataclasses.replace(problem, allowed=allowed))
    assert found.status == "no adequate section"
    assert found.shortfall.kind == "none allowed"
    assert found.shortfall.group == 4


def test_too_heavy_loads_name_the_member_and_how_far():
    """A hundredfold load: proven that nothing fits, with member, section and utilisation."""
    for name in ("6bar_42areas", "10bar_42areas"):
        problem = load(name).problem
        found = pick(dataclasses.replace(problem, loads=problem.loads * 100.0))
        assert found.status == "no adequate section"
        assert "proven" in found.method
        assert found.shortfall.kind in ("tension", "compression")
        assert found.shortfall.section == 41
        assert found.shortfall.utilisation > 5.0


def test_deflection_that_cannot_be_met_is_named():
    """A limit a hundred times too tight is reported as deflection, with its row."""
    problem = load("6bar_42areas").problem
    tight = dataclasses.replace(problem, deflection_limit=problem.deflection_limit / 100.0)
    found = pick(tight)
    assert found.status == "no adequate section"
    assert found.shortfall.kind == "deflection"
    assert found.shortfall.row is not None


def test_near_ties_are_distinct_feasible_and_near():
    """Near ties pass the exact analysis, differ from the pick, and lie within the margin."""
    problem = load("6bar_42areas").problem
    found = pick(problem, Limits(near_ties=3, near_tie_margin=0.02))
    assert found.near_ties
    designs = {found.sections.tobytes()}
    for tie in found.near_ties:
        assert tie.sections.tobytes() not in designs
        designs.add(tie.sections.tobytes())
        assert found.objective <= tie.objective <= 1.02 * found.objective
        assert DesignAnalysis(problem).evaluate(tie.sections).feasible


@pytest.mark.bench
def test_bench_table(capsys):
    """Weight, analyses and seconds of the search on every published problem, printed."""
    with capsys.disabled():
        print(f"\n{'problem':16}{'weight':>14}{'published':>14}{'analyses':>10}{'seconds':>9}")
        for name in (*SHORT, "10bar_64areas", "200bar"):
            case, best, count, seconds = searched(name)
            print(f"{name:16}{best.objective:14.4f}{case.best:14.4f}{count:10d}{seconds:9.1f}")
        girder = roof_girder()
        found = pick(girder, Limits(seconds=60.0))
        print(
            f"girder of {girder.length.size} members: {found.status}, {found.objective:.2f}, "
            f"bound {found.bound:.2f}, {found.seconds:.1f} s"
        )
    assert np.isfinite(found.bound)
