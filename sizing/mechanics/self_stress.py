"""States of self-stress: member forces that balance at every node without any load.

Sizes: m members, n free displacements, r redundants.
"""

from __future__ import annotations

import numpy as np
from scipy.linalg import qr

from sizing.mechanics.geometry import FloatArray, Geometry
from sizing.mechanics.null_space import STRAINLESS
from sizing.mechanics.stiffness import Stiffness

DENSE_MEMBERS = 1000
"""Members up to which a dense QR decomposition with pivoting is used (about 0.3 s)."""

BLOCK = 256
"""Columns solved at once for the diagonal of the projector: bounds the memory to m × 256."""


def self_stress_basis(geometry: Geometry) -> FloatArray:
    """Return Z (m, r), orthonormal, with Bᵀ Z = 0 and r = m − rank B.

    Small trusses: the last columns of Q in B Π = Q R. Large ones: pivoted Cholesky of the
    projector I − B (BᵀB)⁻¹ Bᵀ = Z Zᵀ, one solution per redundant; this needs a stable truss
    and raises ``UnstableTrussError`` otherwise. The result is dense: m·r numbers.
    """
    B = geometry.compatibility
    m, n = B.shape
    if m <= DENSE_MEMBERS:
        if n == 0:
            return np.eye(m)
        Q, R, _ = qr(B.toarray(), pivoting=True)
        pivots = np.abs(np.diagonal(R))
        rank = int((pivots > STRAINLESS * pivots.max(initial=0.0)).sum())
        return np.asarray(Q[:, rank:])
    return _by_projector(Stiffness(B, np.ones(m)), m - n)


def _by_projector(unit: Stiffness, redundants: int) -> FloatArray:
    B = unit.compatibility
    m = B.shape[0]
    left = 1.0 - _diagonal(unit)
    Z = np.zeros((m, redundants))
    for t in range(redundants):
        i = int(np.argmax(left))
        column = -(B @ unit.solve(B[[i]].toarray()[0]))
        column[i] += 1.0
        column -= Z[:, :t] @ Z[i, :t]
        Z[:, t] = column / np.linalg.norm(column)
        left -= Z[:, t] ** 2
    return Z


def _diagonal(unit: Stiffness) -> FloatArray:
    """Return the diagonal of B (BᵀB)⁻¹ Bᵀ (m,)."""
    B = unit.compatibility
    parts = []
    for first in range(0, B.shape[0], BLOCK):
        rows = B[first : first + BLOCK].toarray()
        parts.append(np.einsum("in,ni->i", rows, unit.solve(rows.T)))
    return np.concatenate(parts)
