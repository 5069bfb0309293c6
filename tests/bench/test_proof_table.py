"""Proofs of published trusses and of lattice girders over several spans, one table.

    pytest -m bench -s tests/bench/test_proof_table.py

prints, per problem: members, redundants, groups, the design's objective, bound, gap, boxes,
nodes of the certificate, time of the proof (checking included) and of another check.
"""

from __future__ import annotations

import os
import time
from dataclasses import replace

import numpy as np
import pytest
from benchmark_problems import NAMES, load
from lattice_girders import girder

from sizing.selection.analysis import DesignAnalysis
from sizing.selection.bounds import prove
from sizing.selection.certificate import verify
from sizing.selection.outcome import Limits
from sizing.selection.search import run_search
from sizing.selection.watch import Watch

LIMIT = float(os.environ.get("SIZING_BENCH_SECONDS", "600"))
"""Time limit of each proof in seconds."""

GIRDERS = {
    "two spans": lambda: girder((8, 8)),
    "two spans, sag": lambda: girder((8, 8), sag=600.0),
    "three spans": lambda: girder((8, 8, 8)),
    "one span, crossed": lambda: girder((8,), crossed=True),
    "two spans, crossed": lambda: girder((8, 8), crossed=True),
}


def found_design(problem):
    """The best design of the search, as the pick hands it over."""
    limits = Limits(seconds=min(LIMIT, 120.0))
    return run_search(DesignAnalysis(problem), problem.allowed, Watch(limits)).best


@pytest.mark.bench
@pytest.mark.parametrize("name", [*NAMES, *GIRDERS])
def test_table_of_proofs(name, capsys):
    """A bound never exceeds the lightest design known, and its certificate is accepted."""
    published = load(name) if name in NAMES else None
    problem = published.problem if published else GIRDERS[name]()
    best = found_design(problem)
    start = time.monotonic()
    bound = prove(
        problem,
        best.sections,
        best.objective,
        DesignAnalysis(problem),
        replace(Limits(), seconds=LIMIT),
    )
    proving = time.monotonic() - start
    start = time.monotonic()
    nodes = 0
    if bound.certificate is not None:
        verdict = verify(problem, bound.certificate)
        assert verdict.accepted
        nodes = verdict.nodes
    checking = time.monotonic() - start
    members, free = problem.compatibility.shape
    with capsys.disabled():
        print(
            f"\n{name}: {members} members, {members - free} redundants, {problem.groups} groups: "
            f"{bound.status}, objective {bound.objective:.3f}, bound {bound.value:.3f}, "
            f"gap {1.0 - bound.value / bound.objective:.3%}, {bound.boxes} boxes, {nodes} nodes, "
            f"{proving:.1f} s, checked again in {checking:.1f} s"
        )
    assert bound.value <= bound.objective
    if published and published.optimum:
        assert bound.value <= published.optimum * (1.0 + 1e-6)
        assert np.isclose(bound.objective, published.optimum, rtol=1e-6)
