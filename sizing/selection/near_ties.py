"""Other feasible designs that cost hardly more than the pick."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from sizing.selection.analysis import DesignAnalysis, Evaluation
from sizing.selection.choices import Choices
from sizing.selection.linearisation import Linearisation
from sizing.selection.outcome import NearTie
from sizing.selection.record import Record
from sizing.selection.reduction import efficient_sections
from sizing.selection.step_program import EXCESS_PRICE, StepRules, propose
from sizing.selection.watch import Watch

BoolArray = NDArray[np.bool_]

CORE = 5
"""Sections a group among which near ties are sought."""

TRIES_EACH = 3
"""Candidates analysed for each near tie wanted; some fail the exact analysis."""


def near_ties(
    analysis: DesignAnalysis, watch: Watch, best: Evaluation, wanted: int, margin: float
) -> tuple[NearTie, ...]:
    """Return up to ``wanted`` feasible designs within ``margin`` (relative) of ``best``.

    Each is distinct, analysed exactly, and sorted by cost. The list is what was found near the
    pick, not a proof that there are no others.
    """
    problem = analysis.problem
    record = Record(analysis, watch)
    record.try_design(best.sections)
    choices = Choices.of(
        efficient_sections(problem, problem.allowed)
        | _taken(best, problem.groups, problem.sections)
    )
    model = Linearisation.at(analysis, best)
    near = choices.point(best.sections)
    found: list[Evaluation] = []
    limit = best.objective * (1.0 + margin)
    for _ in range(TRIES_EACH * wanted):
        if near is None or len(found) >= wanted or watch.stop():
            break
        rules = StepRules(
            cost_scale=best.objective,
            cost_weight=1.0,
            excess_weight=EXCESS_PRICE,
            core=CORE,
            cost_limit=limit,
            forbidden=record.designs(),
            seconds=record.step_seconds,
            stop=watch.asked,
        )
        step = propose(model, choices, near, rules)
        if step is None:
            break
        design = record.try_design(step.sections)
        if design.feasible and design.objective <= limit:
            found.append(design)
    found.sort(key=lambda design: design.objective)
    return tuple(NearTie(sections=d.sections, objective=d.objective) for d in found)


def _taken(best: Evaluation, groups: int, sections: int) -> BoolArray:
    mask = np.zeros((groups, sections), dtype=bool)
    mask[np.arange(groups), best.sections] = True
    return mask
