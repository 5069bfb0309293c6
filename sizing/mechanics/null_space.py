"""The null space of a sparse compatibility matrix: movements that strain no member.

Sizes: m members, n displacements, p dimensions of the null space. Rows of B hold direction
cosines, so its singular values have no unit and lie between 0 and about 2 to 3.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from scipy import sparse
from scipy.sparse.linalg import eigsh

from sizing.errors import SolverError
from sizing.mechanics.factor import cholesky
from sizing.mechanics.geometry import FloatArray

STRAINLESS = 1e-10
"""Singular value of B, over the greatest, below which a movement strains nothing.

Rounding leaves some 1e-15 (1e-13 in the sparse search). A sound girder of 400 panels held at
its ends still has 3e-6, falling with the square of the number of panels.
"""

DENSE_COLUMNS = 250
"""Displacements up to which the full singular value decomposition is used (about 0.05 s)."""

SHIFT = 1e-12
"""Added to BᵀB so that it can be factorised: above rounding, far below any true σ²."""

SWEEPS = 4
"""Inverse iterations; each shrinks σ² = 1e-9 ten-thousandfold against a null movement."""

MOST = 512
"""Independent movements after which a sparse search gives up: the diagram is not a truss."""


@dataclass(frozen=True, kw_only=True)
class NullSpace:
    """``basis`` (n, p) orthonormal; ``greatest`` σ_max and ``least`` positive singular value."""

    basis: FloatArray
    greatest: float
    least: float


def null_space(matrix: sparse.csr_array) -> NullSpace:
    """Return the null space of ``matrix`` B (m, n): movements u with |B u| ≤ 1e-10 σ_max |u|.

    Singular value decomposition for small n; for larger n inverse iteration on BᵀB + εI with a
    growing block, then a singular value decomposition of B on the block (Rayleigh–Ritz without
    squaring, so that σ is found to rounding). Raises ``SolverError`` beyond ``MOST`` movements.
    """
    m, n = matrix.shape
    if n == 0 or m == 0:
        return NullSpace(basis=np.eye(n), greatest=0.0, least=0.0)
    return _dense(matrix.toarray()) if n <= DENSE_COLUMNS else _sparse(matrix)


def _dense(B: FloatArray) -> NullSpace:
    m, n = B.shape
    _, s, vt = np.linalg.svd(B, full_matrices=m < n)
    sigma = np.zeros(n)
    sigma[: s.size] = s
    return _split(sigma, vt.T, float(sigma[0]))


def _sparse(matrix: sparse.csr_array) -> NullSpace:
    n = matrix.shape[1]
    gram = sparse.csc_array(matrix.T @ matrix + SHIFT * sparse.eye_array(n))
    factor = cholesky(gram)
    if factor is None:
        raise SolverError("The search for movements that strain no member failed in rounding.")
    random = np.random.default_rng(0)  # a fixed start: the same truss gives the same answer
    start = random.standard_normal(n)
    greatest = float(np.sqrt(eigsh(gram, k=1, which="LA", v0=start, tol=1e-3)[0][0]))
    block = random.standard_normal((n, 8))
    while True:
        for _ in range(SWEEPS):
            block, _ = np.linalg.qr(factor.solve(block))
        strained = matrix @ block
        _, s, vt = np.linalg.svd(strained, full_matrices=strained.shape[0] < block.shape[1])
        sigma = np.zeros(block.shape[1])
        sigma[: s.size] = s
        found = _split(sigma, block @ vt.T, greatest)
        if found.basis.shape[1] < block.shape[1]:
            return found
        if block.shape[1] >= min(n, MOST):
            raise SolverError(
                f"More than {block.shape[1]} independent movements strain no member: "
                "this line diagram is not a truss."
            )
        wider = min(2 * block.shape[1], n, MOST)
        block = np.hstack([block, random.standard_normal((n, wider - block.shape[1]))])


def _split(sigma: FloatArray, vectors: FloatArray, greatest: float) -> NullSpace:
    null = sigma <= STRAINLESS * greatest
    strained = sigma[~null]
    return NullSpace(
        basis=vectors[:, null],
        greatest=greatest,
        least=float(strained.min()) if strained.size else 0.0,
    )
