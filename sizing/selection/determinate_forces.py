"""Statically determinate trusses: forces from equilibrium alone, and what they leave possible.

Sizes as in `problem`. The equilibrium matrix Bᵀ is square and regular, so

    N_c = N0_c + e_c D w,   N0 = B⁻ᵀ loads,  D = B⁻ᵀ (self-weight load of each group per unit w),

with w (g,) the self-weight per length of each group's section and e_c the factor of self-weight
in the combination. A movement is, by virtual work with f_r = B⁻ᵀ vector_r,

    u_r = Σ_i f_ri L_i N_ri / (EA)_i = Σ_g y_g (a_rg + h_rg(w)),   y_g = 1/(EA)_g.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from sizing.selection.problem import SizingProblem

FloatArray = NDArray[np.float64]
IntArray = NDArray[np.intp]
BoolArray = NDArray[np.bool_]

RANK_TOLERANCE = 1e-10
"""Ratio of smallest to greatest pivot of Bᵀ (entries are direction cosines) below which the truss
is taken for a mechanism; sound trusses show 1e-3 to 1e-5."""


@dataclass(frozen=True, kw_only=True)
class DeterminateForces:
    """Forces of a determinate truss as functions of the groups' weights w.

    fixed (m, c), per_weight (m, g), factor (c,): N = fixed + factor · (per_weight w).
    movement (r, g): a_rg; virtual (r, m): f_ri L_i; movement_factor (r,).
    """

    fixed: FloatArray
    per_weight: FloatArray
    factor: FloatArray
    movement: FloatArray
    virtual: FloatArray
    movement_factor: FloatArray
    group: IntArray
    groups: int

    def movement_per_weight(self, row: int) -> FloatArray:
        """b (g, g'): h_rg(w) = Σ_g' b_gg' w_g' of one deflection row."""
        b = np.zeros((self.groups, self.groups))
        np.add.at(b, self.group, self.virtual[row][:, None] * self.per_weight)
        return np.asarray(b * self.movement_factor[row])

    def movement_shares(self, w: FloatArray) -> FloatArray:
        """a_rg + h_rg(w) (r, g): share of group g in movement r per unit of y_g."""
        own = self.virtual * (self.per_weight @ w)
        shares = np.zeros((self.groups, self.virtual.shape[0]))
        np.add.at(shares, self.group, own.T)
        return self.movement + shares.T * self.movement_factor[:, None]


def determinate_forces(problem: SizingProblem) -> DeterminateForces | None:
    """Return the forces from equilibrium, or None when the truss is not determinate."""
    m, n = problem.compatibility.shape
    if m != n:
        return None
    from scipy.linalg import LinAlgError, lu_factor, lu_solve

    try:
        factors = lu_factor(problem.compatibility.toarray().T)
    except (LinAlgError, RuntimeWarning):
        return None
    pivots = np.abs(np.diag(factors[0]))
    if pivots.min() <= RANK_TOLERANCE * pivots.max():
        return None
    members = np.arange(m)
    group_loads = np.zeros((n, problem.groups))
    share = problem.self_weight_share.toarray() * problem.length
    np.add.at(group_loads.T, problem.group, share.T)
    case_forces = lu_solve(factors, problem.loads)
    virtual = lu_solve(factors, problem.deflection_vectors.toarray().T).T * problem.length
    combined = case_forces @ problem.deflection_factors.T
    movement = np.zeros((problem.groups, problem.deflection_limit.size))
    np.add.at(movement, problem.group, virtual.T[members] * combined)
    return DeterminateForces(
        fixed=case_forces @ problem.strength_factors.T,
        per_weight=lu_solve(factors, group_loads),
        factor=problem.strength_factors @ problem.self_weight_factor,
        movement=movement.T,
        virtual=virtual,
        movement_factor=problem.deflection_factors @ problem.self_weight_factor,
        group=problem.group,
        groups=problem.groups,
    )


def force_range(
    forces: DeterminateForces, lightest: FloatArray, heaviest: FloatArray
) -> tuple[FloatArray, FloatArray]:
    """Least and greatest N (m, c) over all weights lightest <= w <= heaviest (g,)."""
    up, down = np.maximum(forces.per_weight, 0.0), np.minimum(forces.per_weight, 0.0)
    least, greatest = up @ lightest + down @ heaviest, up @ heaviest + down @ lightest
    positive = np.maximum(forces.factor, 0.0)
    negative = np.minimum(forces.factor, 0.0)
    low = forces.fixed + np.outer(least, positive) + np.outer(greatest, negative)
    high = forces.fixed + np.outer(greatest, positive) + np.outer(least, negative)
    return low, high
