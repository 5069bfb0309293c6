"""Lower bounds and proof for any truss: chooses the ways, runs them, has the outcome checked.

All ways branch on section ranges. Energy cuts serve where movements govern, whatever the
redundancy; redundant forces serve where strength governs and there are few of them. Which is
better, redundant forces alone or both together, shows only in the run, so the two take turns,
with growing shares and the greater one for the better bound, until one has finished; a lighter
design that one meets is passed on. Progress lines tell the working bound; an answer holds only
what the checker of ``certificate.py`` has accepted.
"""

from __future__ import annotations

import time
from collections.abc import Callable
from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray

from sizing.selection.analysis import DesignAnalysis
from sizing.selection.certificate import Certificate, verify
from sizing.selection.outcome import Limits
from sizing.selection.problem import SizingProblem
from sizing.selection.range_branching import RangeBranching
from sizing.selection.range_branching_boxes import BranchingRules

IntArray = NDArray[np.intp]
Report = Callable[[str, float | None, float | None, int], None]

MOST_REDUNDANTS = 8
"""Redundant forces beyond this number have ranges too wide to help energy cuts along."""

MOST_REDUNDANTS_ALONE = 4
"""Up to this number redundant forces are also tried without energy cuts, at a tenth of the time
for each box: the better way for girders over several spans."""

MOST_FREE = 500
"""Free displacements up to which energy cuts, with their dense matrices, are worth their time."""

FIRST_TURN = 200.0
"""Milliseconds (estimated, not measured, so that runs repeat) of the first turn of each way."""

GROWTH = 1.5
"""How the turns grow, so that the better way is never kept waiting for more than its own time."""

TRAILING_SHARE = 0.1
"""Share of a turn for the way with the lesser bound: it may still overtake, at little cost."""

CHECK_SHARE = 0.3
"""Part of the time that the checker may need after the search for the bound."""


CHECK_AFTER_STOP = 30.0
"""Seconds of (estimated) work whose check, about a third of it, still follows a stop request;
after more work the unchecked bound is dropped, so that the program ends when asked to."""

PROVEN = 3e-8
"""Relative difference between objective and checked bound that is the margin of the proof."""

WIDER_MARGIN = 1e-6
"""Share by which the claim is lowered when rounding made the checker refuse it."""


@dataclass(frozen=True, kw_only=True, slots=True)
class Bound:
    """A checked lower bound on the objective of every feasible design.

    ``status``: ``proven`` (nothing lighter than ``objective`` by more than three parts in a
    hundred million), ``none feasible`` (proven that nothing passes) or ``open``. sections and
    objective are the best design known, perhaps lighter than the one handed over. ``boxes``
    counts the boxes of all ways; ``certificate`` is what the checker accepted, None where the
    bound is the sum of the cheapest sections.
    """

    value: float
    status: str
    sections: IntArray | None
    objective: float | None
    method: str
    boxes: int
    certificate: Certificate | None


@dataclass(kw_only=True, slots=True)
class _Way:
    name: str
    branching: RangeBranching
    milliseconds: float


def prove(
    problem: SizingProblem,
    incumbent: IntArray | None,
    objective: float | None,
    analysis: DesignAnalysis,
    limits: Limits,
    report: Report | None = None,
) -> Bound:
    """Prove that ``incumbent`` is the lightest, or find a lighter design or a lower bound.

    ``incumbent`` (g,) is a feasible design with its objective, or None. ``limits.seconds`` count
    from now; ``limits.gap`` ends the work as soon as the bound is that near. The answer is
    deterministic as long as it finishes in time.
    """
    start = time.monotonic()
    ways = _ways(problem, incumbent, analysis)
    end = limits.seconds * (1.0 - CHECK_SHARE)

    def stop() -> bool:
        asked = limits.stop is not None and limits.stop()
        return asked or time.monotonic() - start >= end

    turn = FIRST_TURN
    while ways and not any(way.branching.finished for way in ways) and not stop():
        leader = max(ways, key=lambda way: way.branching.bound)
        for way in ways:
            share = 1.0 if way is leader else TRAILING_SHARE
            way.branching.run(max(1, int(share * turn / way.milliseconds)), stop)
            _share(ways)
            if report is not None:
                found = way.branching
                known = None if found.best is None else found.objective
                bound = max(other.branching.bound for other in ways)
                report("proving", known, bound if np.isfinite(bound) else None, analysis.count)
            if way.branching.finished or _near(way.branching, limits.gap):
                return _conclude(problem, ways, incumbent, objective, hurried=False)
        turn *= GROWTH
    hurried = limits.stop is not None and limits.stop()
    return _conclude(problem, ways, incumbent, objective, hurried=hurried)


def cheapest(problem: SizingProblem) -> float:
    """Sum of the cheapest allowed section of every group: a bound that needs no proof."""
    return float(np.where(problem.allowed, problem.cost, np.inf).min(axis=1).sum())


def _ways(
    problem: SizingProblem, incumbent: IntArray | None, analysis: DesignAnalysis
) -> list[_Way]:
    members, free = problem.compatibility.shape
    reference = incumbent
    if reference is None:
        stiffness = np.where(problem.allowed, problem.stiffness, -np.inf)
        reference = stiffness.argmax(axis=1)
    combinations = problem.strength_factors.shape[0] + problem.deflection_factors.shape[0]
    entries = members * combinations * (problem.groups + problem.sections)
    few = members - free <= MOST_REDUNDANTS
    narrowing = 0.2 + entries / 2e5 if few else 0.0
    ways = []
    if members - free <= MOST_REDUNDANTS_ALONE:
        rules = BranchingRules(energy=False, forces=True)
        ways.append(("redundant forces", rules, narrowing))
    if free <= MOST_FREE and members > free:
        name = "energy cuts and redundant forces" if few else "energy cuts"
        rules = BranchingRules(energy=True, forces=few)
        ways.append((name, rules, 0.5 + free**3 / 5e4 + narrowing))
    return [
        _Way(
            name=name,
            branching=RangeBranching(
                problem,
                analysis,
                rules,
                incumbent,
                reference,
            ),
            milliseconds=milliseconds,
        )
        for name, rules, milliseconds in ways
    ]


def _share(ways: list[_Way]) -> None:
    best = min((way.branching for way in ways), key=lambda branching: branching.objective)
    if best.best is not None:
        for way in ways:
            way.branching.offer(best.best, best.objective)


def _near(branching: RangeBranching, gap: float) -> bool:
    if branching.best is None:
        return False
    return branching.objective - branching.bound <= gap * abs(branching.objective)


def _conclude(
    problem: SizingProblem,
    ways: list[_Way],
    incumbent: IntArray | None,
    objective: float | None,
    *,
    hurried: bool,
) -> Bound:
    boxes = sum(way.branching.boxes for way in ways)
    best, least = incumbent, objective
    for way in ways:
        if way.branching.best is not None and (least is None or way.branching.objective < least):
            best, least = way.branching.best, way.branching.objective
    floor = cheapest(problem)
    order = sorted(ways, key=lambda way: (way.branching.finished, way.branching.bound))
    for way in reversed(order):
        finished = way.branching.finished
        if way.branching.bound < floor and not finished:
            continue
        if hurried and way.branching.boxes * way.milliseconds > 1e3 * CHECK_AFTER_STOP:
            continue
        certificate = _checked(problem, way.branching)
        if certificate is None:
            continue
        value = max(certificate.bound, floor)
        status = "open"
        if finished and best is None:
            status = "none feasible"
        elif least is not None and least - value <= PROVEN * abs(least):
            status = "proven"
        return Bound(
            value=value,
            status=status,
            sections=best,
            objective=least,
            method=f"branching on section ranges with {way.name}, {boxes} boxes, checked",
            boxes=boxes,
            certificate=certificate,
        )
    return Bound(
        value=floor,
        status="open",
        sections=best,
        objective=least,
        method="cheapest section of every group",
        boxes=boxes,
        certificate=None,
    )


def _checked(problem: SizingProblem, branching: RangeBranching) -> Certificate | None:
    certificate = branching.certificate()
    for margin in (0.0, WIDER_MARGIN):
        claim = certificate.bound - margin * abs(branching.objective)
        lowered = replace(certificate, bound=claim)
        if verify(problem, lowered).accepted:
            return lowered
    return None
