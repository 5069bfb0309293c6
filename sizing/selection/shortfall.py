"""Why nothing fits: the worst check of the least bad design."""

from __future__ import annotations

import numpy as np

from sizing.selection.analysis import Evaluation
from sizing.selection.outcome import Shortfall
from sizing.selection.problem import SizingProblem


def none_allowed(problem: SizingProblem) -> Shortfall | None:
    """Name a group that may take no section at all, if there is one."""
    empty = np.flatnonzero(~problem.allowed.any(axis=1))
    if empty.size == 0:
        return None
    return Shortfall(
        kind="none allowed",
        member=int(np.flatnonzero(problem.group == empty[0])[0]),
        combination=None,
        row=None,
        group=int(empty[0]),
        section=None,
        utilisation=float("inf"),
    )


def worst_check(problem: SizingProblem, found: Evaluation) -> Shortfall:
    """Name the check with the greatest utilisation of an analysed design."""
    strength = float(found.strength.max(initial=0.0))
    if found.deflection.size and float(found.deflection.max()) > strength:
        row = int(np.argmax(found.deflection))
        return Shortfall(
            kind="deflection",
            member=None,
            combination=None,
            row=row,
            group=None,
            section=None,
            utilisation=float(found.deflection[row]),
        )
    member, combination = (
        int(n) for n in np.unravel_index(np.argmax(found.strength), found.strength.shape)
    )
    group = int(problem.group[member])
    return Shortfall(
        kind="tension" if found.forces[member, combination] > 0.0 else "compression",
        member=member,
        combination=combination,
        row=None,
        group=group,
        section=int(found.sections[group]),
        utilisation=strength,
    )
