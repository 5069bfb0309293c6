"""Deterministic starting designs for the search."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from sizing.selection.analysis import DesignAnalysis, Evaluation
from sizing.selection.problem import SizingProblem

IntArray = NDArray[np.intp]
BoolArray = NDArray[np.bool_]

STRESS_RATIO_PASSES = 3
"""Passes of stress-ratio resizing: most of the gain, before it wanders in a catalogue's steps."""


def stiffest(problem: SizingProblem, mask: BoolArray) -> IntArray:
    """Take the stiffest section in play for every group."""
    return np.asarray(np.where(mask, problem.stiffness, -np.inf).argmax(axis=1), dtype=np.intp)


def cheapest_for_forces(problem: SizingProblem, mask: BoolArray, found: Evaluation) -> IntArray:
    """Take for each group the cheapest section that resists the forces of ``found`` (m, c).

    Where none does, the section with the least excess.
    """
    chosen = np.empty(problem.groups, dtype=np.intp)
    used = section_utilisation(problem, found)
    for g in range(problem.groups):
        fits = mask[g] & (used[g] <= 1.0)
        if fits.any():
            chosen[g] = np.argmin(np.where(fits, problem.cost[g], np.inf))
        else:
            chosen[g] = np.argmin(np.where(mask[g], used[g], np.inf))
    return chosen


def section_utilisation(problem: SizingProblem, found: Evaluation) -> NDArray[np.float64]:
    """Greatest strength utilisation (g, s) of each section under the forces of ``found``."""
    used = np.zeros(problem.allowed.shape)
    for sign, table in ((1.0, problem.tension), (-1.0, problem.compression)):
        for k in range(table.shape[2]):
            combos = np.flatnonzero(problem.duration == k)
            if combos.size == 0:
                continue
            demand = np.maximum(sign * found.forces[:, combos], 0.0).max(axis=1)
            resistance = table[:, :, k]
            ratio = np.where(demand[:, None] > 0.0, 1e300, 0.0) * np.ones_like(resistance)
            np.divide(demand[:, None], resistance, out=ratio, where=resistance > 0.0)
            np.maximum.at(used, problem.group, ratio)
    return used


def stress_ratio_design(analysis: DesignAnalysis, mask: BoolArray, passes: int) -> Evaluation:
    """Resize from the stiffest design by the forces, ``passes`` times."""
    problem = analysis.problem
    found = analysis.evaluate(stiffest(problem, mask))
    for _ in range(passes):
        sections = cheapest_for_forces(problem, mask, found)
        if (sections == found.sections).all():
            break
        found = analysis.evaluate(sections)
    return found


def strengthened(analysis: DesignAnalysis, mask: BoolArray, found: Evaluation) -> Evaluation:
    """Scale a design up until stiffness in play is ``worst`` times as great (or used up)."""
    problem = analysis.problem
    if found.worst <= 1.0 or not np.isfinite(found.worst):
        return found
    wanted = problem.stiffness[found.sections] * found.worst
    sections = found.sections.copy()
    for g in range(problem.groups):
        enough = mask[g] & (problem.stiffness >= wanted[g])
        if enough.any():
            sections[g] = np.argmin(np.where(enough, problem.stiffness, np.inf))
        else:
            sections[g] = np.argmax(np.where(mask[g], problem.stiffness, -np.inf))
    return analysis.evaluate(sections)
