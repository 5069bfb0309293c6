"""The search: descend from a few starts by linear steps, then improve the best design found."""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np
from numpy.typing import NDArray

from sizing.selection.analysis import DesignAnalysis, Evaluation
from sizing.selection.choices import Choices
from sizing.selection.exchange import exchange, improve
from sizing.selection.linear_steps import descend, descend_mixed, oscillate, round_mixture
from sizing.selection.record import Record
from sizing.selection.reduction import efficient_sections
from sizing.selection.starts import STRESS_RATIO_PASSES, stiffest, strengthened, stress_ratio_design
from sizing.selection.watch import Watch

BoolArray = NDArray[np.bool_]


def run_search(analysis: DesignAnalysis, mask: BoolArray, watch: Watch) -> Record:
    """Search for a cheap feasible design over the pairs (g, s) in ``mask``."""
    record = Record(analysis, watch)
    for _ in search_stages(record, mask):
        pass
    return record


def search_stages(record: Record, mask: BoolArray) -> Iterator[None]:
    """Search as :func:`run_search` does, pausing after each stage.

    The first stage takes a few analyses and is seldom far off. Between two stages ``record`` may
    be given designs found elsewhere: the search goes on from the best.
    """
    analysis, watch = record.analysis, record.watch
    mask = efficient_sections(analysis.problem, mask)
    choices = Choices.of(mask)
    strong = record.try_design(stiffest(analysis.problem, mask))
    light = stress_ratio_design(analysis, mask, STRESS_RATIO_PASSES)
    record.try_design(light.sections)
    # A design sized by its forces is the better start where strength governs, a mixture of
    # sections where movements do; which is which shows only in the result.
    descend(record, choices, light)
    yield
    _from_mixture(record, choices, strong)
    _improve(record, choices, None)
    yield
    for start in (light, strengthened(analysis, mask, light)):
        if watch.stop():
            break
        before = record.best
        _from_mixture(record, choices, start)
        _improve(record, choices, before)
        yield


def _from_mixture(record: Record, choices: Choices, start: Evaluation) -> None:
    x = descend_mixed(record, choices, start.sections)
    found = None if x is None else round_mixture(record, choices, x)
    if found is not None:
        descend(record, choices, found)


def _improve(record: Record, choices: Choices, before: Evaluation | None) -> None:
    if record.best is not before:
        exchange(record, choices)
        oscillate(record, choices)
        improve(record, choices)


def first_designs(analysis: DesignAnalysis, mask: BoolArray, watch: Watch) -> Record:
    """Find a good feasible design quickly, for a method that proves by itself."""
    record = Record(analysis, watch)
    mask = efficient_sections(analysis.problem, mask)
    choices = Choices.of(mask)
    strong = record.try_design(stiffest(analysis.problem, mask))
    _from_mixture(record, choices, strong)
    return record
