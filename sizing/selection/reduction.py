"""Which sections a search need not try. Nothing here may be used in a proof.

A section that costs no less than another, is no stiffer and resists no more is hardly ever part
of a good design. But it may be part of the best one: in an indeterminate truss a softer member
attracts less force, in any truss a movement may grow with a member's stiffness where virtual and
real force have opposite signs, and a heavier member may hold down a light roof. Hence: for the
search only. What a proof may drop is decided where the proof is made (`determinate_rows`).
"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from sizing.selection.problem import SizingProblem

BoolArray = NDArray[np.bool_]


def efficient_sections(problem: SizingProblem, mask: BoolArray) -> BoolArray:
    """Pairs (g, s) of ``mask`` that no other pair of the group beats in every respect.

    Of equal sections the first stays.
    """
    keep = mask.copy()
    for g in range(problem.groups):
        usable = np.flatnonzero(mask[g])
        inside = problem.group == g
        merits = np.concatenate(
            [
                -problem.cost[g, usable][None],
                problem.stiffness[usable][None],
                problem.tension[inside][:, usable].transpose(0, 2, 1).reshape(-1, usable.size),
                problem.compression[inside][:, usable].transpose(0, 2, 1).reshape(-1, usable.size),
            ]
        )
        for place, s in enumerate(usable):
            no_worse = (merits >= merits[:, place : place + 1]).all(axis=0)
            equal = (merits == merits[:, place : place + 1]).all(axis=0)
            better = no_worse & ~equal
            better[:place] |= equal[:place]
            keep[g, s] = not better.any()
    return keep
