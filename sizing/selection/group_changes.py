"""How forces and movements answer when one group changes its stiffness: a rational model.

Let group S change its stiffness by the factor 1 - θ (θ = 1 - EA_new/EA_old). From K(θ) u = p
with K(θ) = K - θ B_Sᵀ k_S B_S, the elongations are a Neumann series in θ,

    e(θ) = e + θ G_S k_S e_S + θ² G_S k_S (G_SS k_S) e_S + …,   G = B K⁻¹ Bᵀ,

whose first two terms a1, a2 give the [1/1] Padé approximant e + a1 θ / (1 - ρ θ), ρ = a2/a1. It is
exact for a group of one member (Sherman & Morrison 1950) and for determinate trusses (ρ = 1). The
eigenvalues of G_SS k_S lie between 0 and 1, so ρ is held there. Only quantities of the analysed
design enter; nothing is analysed anew.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from sizing.selection.analysis import DesignAnalysis

FloatArray = NDArray[np.float64]
IntArray = NDArray[np.intp]

NO_CHANGE = 1e-12
"""First term, relative to the greatest of its kind, below which the group has no influence."""


@dataclass(frozen=True, kw_only=True, slots=True)
class GroupChanges:
    """Series of each group g: k·elongation of members (g, m, c) and movements (g, r).

    ``force_per_weight`` (g, m, c) and ``movement_per_weight`` (g, r) are the derivatives with
    respect to the group's self-weight per length. ``inside`` (g, m) marks the group's members.
    """

    inside: NDArray[np.bool_]
    force_first: FloatArray
    force_ratio: FloatArray
    movement_first: FloatArray
    movement_ratio: FloatArray
    force_per_weight: FloatArray
    movement_per_weight: FloatArray


def group_changes(
    analysis: DesignAnalysis, y: FloatArray, forces: FloatArray, deflection_forces: FloatArray
) -> GroupChanges:
    """Return the series at flexibilities y (g,) with forces (m, c) and (m, r) of the rows."""
    problem = analysis.problem
    k = 1.0 / (y[problem.group] * problem.length)
    B = np.asarray(problem.compatibility.toarray(), dtype=np.float64)
    F = analysis.solve(k, B.T)
    own = analysis.solve(k, analysis.group_loads)
    G = B @ F
    reach = problem.deflection_vectors @ F
    groups = problem.groups
    first, second = np.zeros((2, groups, *forces.shape))
    moved, moved_twice = np.zeros((2, groups, problem.deflection_limit.size))
    inside = problem.group == np.arange(groups)[:, None]
    for g in range(groups):
        s = np.flatnonzero(inside[g])
        again = k[s, None] * G[np.ix_(s, s)]
        once, twice = forces[s], again @ forces[s]
        first[g], second[g] = k[:, None] * (G[:, s] @ once), k[:, None] * (G[:, s] @ twice)
        once = deflection_forces[s]
        moved[g] = np.einsum("ri,ir->r", reach[:, s], once)
        moved_twice[g] = np.einsum("ri,ir->r", reach[:, s], again @ once)
    own_forces = (k[:, None] * (B @ own)).T
    return GroupChanges(
        inside=inside,
        force_first=first,
        force_ratio=_ratio(second, first),
        movement_first=moved,
        movement_ratio=_ratio(moved_twice, moved),
        force_per_weight=own_forces[:, :, None] * analysis.strength_self_weight,
        movement_per_weight=(problem.deflection_vectors @ own).T * analysis.deflection_self_weight,
    )


def _ratio(second: FloatArray, first: FloatArray) -> FloatArray:
    size = np.abs(first)
    matters = size > NO_CHANGE * size.max(initial=0.0)
    ratio = np.divide(second, first, out=np.zeros_like(first), where=matters)
    return np.clip(ratio, 0.0, 1.0)
