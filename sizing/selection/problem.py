"""The sizing problem as plain arrays in one consistent unit system.

Sizes: m members, g groups, s sections, n free displacements, q load cases, c strength
combinations, k load durations, r deflection rows.

Member forces of combination c:  N_c = Σ_q strength_factors[c, q] · N_q,  N_q from
K u_q = p_q,  K = Bᵀ diag(EA/L) B,  p_q = loads[:, q] + self_weight_factor[q] · Σ_i h_i w_i L_i
with h_i = self_weight_share[:, i] and w_i = weight of member i's section.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray
from scipy import sparse

FloatArray = NDArray[np.float64]
IntArray = NDArray[np.intp]
BoolArray = NDArray[np.bool_]

FEASIBILITY_TOLERANCE = 1e-9
"""Greatest relative excess over a limit that still counts as met: rounding, no more.

Published optima sit exactly on a stress limit (1 kip on 0.1 in² at 10 ksi), so the tolerance
must exceed rounding in the analysis (about 1e-12) and stay far below anything that matters.
"""


@dataclass(frozen=True, kw_only=True)
class SizingProblem:
    """One catalogue sizing problem; every array float64 in one consistent unit system.

    compatibility         (m, n) sparse, elongation = B u, on the free displacements only
    length                (m,)   member lengths
    group                 (m,)   group index of each member
    stiffness             (s,)   E·A of each section (force)
    weight                (s,)   self-weight per length of each section, allowances included
    cost                  (g, s) what is minimised, for the whole group (mass, cost or carbon)
    allowed               (g, s) sections that the group may take
    loads                 (n, q) nodal loads per case
    self_weight_factor    (q,)   1 where the case includes self-weight, else 0
    self_weight_share     (n, m) sparse, nodal load per unit weight of each member
    strength_factors      (c, q) factors of the strength combinations
    duration              (c,)   index of each combination's load duration
    tension, compression  (m, s, k) resistances >= 0; N <= tension and -N <= compression
    deflection_vectors    (r, n) sparse; row · u is the movement that is limited
    deflection_factors    (r, q) factors of the combination of each row
    deflection_limit      (r,)   |row · u| <= limit
    """

    compatibility: sparse.csr_array
    length: FloatArray
    group: IntArray
    stiffness: FloatArray
    weight: FloatArray
    cost: FloatArray
    allowed: BoolArray
    loads: FloatArray
    self_weight_factor: FloatArray
    self_weight_share: sparse.csr_array
    strength_factors: FloatArray
    duration: IntArray
    tension: FloatArray
    compression: FloatArray
    deflection_vectors: sparse.csr_array
    deflection_factors: FloatArray
    deflection_limit: FloatArray

    @property
    def groups(self) -> int:
        """Number of groups g."""
        return int(self.allowed.shape[0])

    @property
    def sections(self) -> int:
        """Number of sections s."""
        return int(self.stiffness.shape[0])

    def objective(self, sections: IntArray) -> float:
        """Return what the design ``sections`` (g,) costs, summed over the groups."""
        return float(self.cost[np.arange(self.groups), sections].sum())
