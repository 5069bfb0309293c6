"""Exact derivatives of member forces and displacements with respect to flexibilities.

Sizes: m members, n free displacements, c load columns (cases or combinations), r displacement
rows, g groups.

Let y_j = 1/(EA)_j, f_j = L_j y_j the flexibility and k_j = 1/f_j the stiffness of member j,
K = Bᵀ diag(k) B, G = B K⁻¹ Bᵀ (m, m). With N = k ∘ (B u − e⁰) and K u = P + Bᵀ k e⁰:

    dk_j = −k_j² df_j, and at constant P equilibrium gives Bᵀ dN = 0.
    dN = diag(k) B du + (B u − e⁰) dk,  where (B u − e⁰)_j dk_j = −k_j N_j df_j =: −t_j,
    Bᵀ dN = 0  →  K du = Bᵀ t,  B du = G t,
    dN_i/df_j = k_i G_ij k_j N_j − k_i N_i δ_ij.                                      (1)

For a displacement q·u with virtual forces n = k ∘ B K⁻¹ q, from du = K⁻¹ Bᵀ t:

    d(q·u)/df_j = n_j N_j                                                             (2)

(the integrand of the virtual work theorem, for redundant trusses as well as determinate ones).
df_j = L_j dy_j turns both into derivatives by y_j, which are summed over the members of a group
because they share one section. Loads that depend on the section (self-weight) enter separately:
``force_response`` gives dN for a change of load.
"""

from __future__ import annotations

import numpy as np
from scipy import sparse

from sizing.mechanics.geometry import FloatArray, IntArray
from sizing.mechanics.stiffness import Stiffness


def elongation_influence(stiffness: Stiffness) -> FloatArray:
    """Return G = B K⁻¹ Bᵀ (m, m), m/N: elongations caused by unit force pairs at member ends.

    Dense: m² numbers, 8 MB at 1000 members.
    """
    B = stiffness.compatibility
    return np.asarray(B @ stiffness.solve(B.T.toarray()))


def virtual_forces(stiffness: Stiffness, vectors: sparse.csr_array | FloatArray) -> FloatArray:
    """Return n (r, m): member forces per unit of the load q in each row of ``vectors`` (r, n)."""
    q = vectors if isinstance(vectors, np.ndarray) else vectors.toarray()
    return np.asarray(stiffness.member_forces(stiffness.solve(q.T)).T)


def force_response(stiffness: Stiffness, loads: FloatArray) -> FloatArray:
    """Return dN (m, c), N, for nodal loads (n, c) in N; forces are linear in the loads."""
    return stiffness.member_forces(stiffness.solve(loads))


def force_by_flexibility(
    stiffness: Stiffness, force: FloatArray, influence: FloatArray | None = None
) -> FloatArray:
    """Return dN_i/df_j for every load column (c, m, m), N per (m/N): equation (1).

    ``force`` N (m, c). ``influence`` may bring G where it is already known.
    """
    k = stiffness.member_stiffness
    G = elongation_influence(stiffness) if influence is None else influence
    coupling = k[:, None] * G * k[None, :]
    coupling[np.diag_indices_from(coupling)] -= k
    return np.asarray(coupling[None, :, :] * force.T[:, None, :])


def force_by_group(
    stiffness: Stiffness, force: FloatArray, length: FloatArray, group: IntArray, groups: int
) -> FloatArray:
    """Return dN_i/dy_g (c, m, g), N per (1/N), where all members of group g share y = 1/(EA).

    Σ over the group's members j of L_j dN_i/df_j, found as the response to g·c columns of
    initial forces, so that the m × m influence is never formed.
    ``force`` (m, c); ``length`` (m,); ``group`` (m,) group index of each member.
    """
    m, c = force.shape
    k = stiffness.member_stiffness
    t = (k * length)[:, None] * force  # t_j = k_j N_j df_j with df_j = L_j dy
    columns = np.zeros((m, groups, c))
    columns[np.arange(m), group] = t
    flat = columns.reshape(m, groups * c)
    u = stiffness.solve(stiffness.compatibility.T @ flat)
    change = stiffness.member_forces(u) - flat
    return np.asarray(change.reshape(m, groups, c).transpose(2, 0, 1))


def displacement_by_flexibility(virtual: FloatArray, force: FloatArray) -> FloatArray:
    """Return d(q·u)/df_j = n_j N_j (r, m), m per (m/N): equation (2).

    ``virtual`` n (r, m) from ``virtual_forces``; ``force`` N (r, m), row by row the member
    forces of the combination in which displacement row r is wanted.
    """
    return virtual * force


def displacement_by_group(
    virtual: FloatArray, force: FloatArray, length: FloatArray, group: IntArray, groups: int
) -> FloatArray:
    """Return d(q·u)/dy_g (r, g): Σ over members j of the group of L_j n_j N_j."""
    return sum_by_group(displacement_by_flexibility(virtual, force) * length, group, groups)


def sum_by_group(values: FloatArray, group: IntArray, groups: int) -> FloatArray:
    """Return ``values`` (..., m) summed over the members of each group (..., g)."""
    m = group.shape[0]
    belongs = sparse.csr_array((np.ones(m), (np.arange(m), group)), shape=(m, groups))
    flat = values.reshape(-1, m) @ belongs
    return np.asarray(flat.reshape(*values.shape[:-1], groups))
