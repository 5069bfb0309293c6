"""Why nothing fits: the worst check of the least bad design."""

from __future__ import annotations

import numpy as np

from sizing.selection.analysis import Evaluation
from sizing.selection.outcome import Shortfall
from sizing.selection.problem import FEASIBILITY_TOLERANCE, SizingProblem
from sizing.selection.starts import section_utilisation


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


def explain(problem: SizingProblem, found: Evaluation) -> Shortfall:
    """Name what stands in the way at the least bad design ``found``.

    First a group for which no section in play resists the forces of that design, with the section
    that comes nearest; else the worst check of the design itself.
    """
    used = np.where(problem.allowed, section_utilisation(problem, found), np.inf)
    nearest = used.argmin(axis=1)
    least = used[np.arange(problem.groups), nearest]
    group = int(np.argmax(least))
    if not least[group] > 1.0 + FEASIBILITY_TOLERANCE:
        return worst_check(problem, found)
    section = int(nearest[group])
    members = np.flatnonzero(problem.group == group)
    forces = found.forces[members]
    tension = problem.tension[members, section][:, problem.duration]
    compression = problem.compression[members, section][:, problem.duration]
    resistance = np.where(forces > 0.0, tension, compression)
    ratio = np.where(np.abs(forces) > 0.0, np.inf, 0.0)
    np.divide(np.abs(forces), resistance, out=ratio, where=resistance > 0.0)
    place, combination = (int(n) for n in np.unravel_index(np.argmax(ratio), ratio.shape))
    return Shortfall(
        kind="tension" if forces[place, combination] > 0.0 else "compression",
        member=int(members[place]),
        combination=combination,
        row=None,
        group=group,
        section=section,
        utilisation=float(ratio[place, combination]),
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
