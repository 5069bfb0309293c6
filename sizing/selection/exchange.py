"""Improve a feasible design: ask the linear model for the cheaper design nearest to feasible."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from sizing.selection.choices import Choices
from sizing.selection.linear_steps import in_reach
from sizing.selection.linearisation import Linearisation
from sizing.selection.moves import candidates
from sizing.selection.record import Record
from sizing.selection.step_program import StepRules, propose

FloatArray = NDArray[np.float64]

CHEAPER = 1e-7
"""Relative saving asked of an improvement."""

MOST_EXCESS = 0.05
"""Predicted excess beyond which a cheaper design is not worth an analysis."""

REACH = 0.8
"""Greatest change of ln(EA) in an improvement."""

MOVE_REACH = 0.3
"""Greatest change of ln(EA) in an exchange; the next section on either side is always in reach."""

MOST_LISTED = 200
MOST_TRIES = 8
"""Candidates listed about one design, and analysed before the exchange gives up."""

PATIENCE = 6
"""Failures in a row after which the predicted excess is compared with the errors seen."""

MOST_FAILURES = 18
"""Failures in a row after which the improvement gives up, however good the predictions look."""


def exchange(record: Record, choices: Choices) -> None:
    """Replace the best design by the best move of up to three groups, as long as one helps."""
    problem = record.analysis.problem
    while record.best is not None and not record.watch.stop():
        before = record.best
        model = Linearisation.at(record.analysis, before)
        close = Choices.of(in_reach(problem, choices.mask, model.y, MOVE_REACH))
        known = {design.tobytes() for design in record.designs()}
        tries = 0
        for candidate in candidates(model, close, before.sections, MOST_LISTED):
            if candidate.sections.tobytes() in known:
                continue
            record.try_design(candidate.sections)
            tries += 1
            if record.best is not before or tries >= MOST_TRIES or record.watch.stop():
                break
        if record.best is before:
            return


def improve(record: Record, choices: Choices, core: int = 5) -> None:
    """Replace the best design by cheaper ones while the linear model finds candidates."""
    errors: list[float] = []
    centre = record.best
    while centre is not None and record.best is not None and not record.watch.stop():
        model = Linearisation.at(record.analysis, centre)
        close = Choices.of(in_reach(record.analysis.problem, choices.mask, model.y, REACH))
        near = close.point(centre.sections)
        if near is None:
            return
        rules = StepRules(
            cost_scale=record.best.objective,
            cost_weight=0.0,
            excess_weight=1.0,
            core=core,
            least_excess=-0.02,
            most_excess=MOST_EXCESS,
            cost_limit=record.best.objective * (1.0 - CHEAPER),
            forbidden=record.designs(),
            seconds=record.step_seconds,
            gap=1e-3,
            stop=record.watch.asked,
        )
        step = propose(model, close, near, rules)
        if step is None:
            return
        before = record.best
        found = record.try_design(step.sections)
        if record.best is not before:
            errors, centre = [], record.best
            continue
        errors.append(abs(found.worst - 1.0 - step.excess))
        hopeless = step.excess > 2.0 * max(errors[-2 * PATIENCE :])
        if len(errors) >= MOST_FAILURES or (len(errors) >= PATIENCE and hopeless):
            return
        # The linear model of a failed neighbour sees other neighbours better.
        centre = found if len(errors) % 2 else record.best
