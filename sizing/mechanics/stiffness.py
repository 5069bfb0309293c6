"""The stiffness matrix K = Bᵀ diag(EA/L) B, factorised once for any number of load columns.

Sizes: m members, n free displacements, q load columns.
"""

from __future__ import annotations

from collections.abc import Callable

import numpy as np
from scipy import sparse

from sizing.errors import SolverError, UnstableTrussError
from sizing.mechanics.factor import cholesky
from sizing.mechanics.geometry import FloatArray

PIVOT_FLOOR = 1e-14
"""Least pivot over its diagonal entry in a factorisation that is believed.

In exact arithmetic a mechanism gives a zero pivot; rounding leaves some 1e-16 of the diagonal.
"""

REFINE_ABOVE = 1e-13
"""Out-of-balance force over greatest load or member force above which a solution is refined."""

RESIDUAL_LIMIT = 1e-7
"""Out-of-balance force over greatest load or member force above which a solution is refused.

One part in ten million is far below what any load is known to. Rounding leaves some 1e-14 in
roof trusses and space grids; more than the limit means that the factorisation is worthless.
"""

_UNSTABLE = (
    "The truss moves without straining any member: it is a mechanism or is not held. "
    "Add a member or a support."
)


class Stiffness:
    """K = Bᵀ diag(k) B, factorised.

    ``compatibility`` (m, n) sparse, ``member_stiffness`` k = EA/L (m,), N/m, all > 0.
    Raises ``UnstableTrussError`` when K is singular and ``ValueError`` when a stiffness is not a
    positive finite number. Which nodes move is what ``sizing.mechanics.stability`` finds out.
    """

    def __init__(self, compatibility: sparse.csr_array, member_stiffness: FloatArray) -> None:
        k = np.array(member_stiffness, dtype=np.float64)
        if k.shape != (compatibility.shape[0],):
            raise ValueError(f"one stiffness per member is needed, not an array {k.shape}")
        if not (np.isfinite(k).all() and (k > 0).all()):
            raise ValueError("every member stiffness EA/L must be a positive finite number")
        k.flags.writeable = False
        self.member_stiffness = k
        self.compatibility = compatibility
        self._transpose = sparse.csr_array(compatibility.T)
        self._apply_inverse = self._factorise()

    @property
    def free(self) -> int:
        """Number of free displacements n."""
        return int(self.compatibility.shape[1])

    def matrix(self) -> sparse.csc_array:
        """Return K (n, n), N/m, sparse."""
        scaled = self.compatibility.multiply(self.member_stiffness[:, None])
        return sparse.csc_array(self._transpose @ sparse.csr_array(scaled))

    def solve(self, loads: FloatArray) -> FloatArray:
        """Return u (n, q) or (n,) in m with K u = ``loads`` (n, q) or (n,) in N.

        Every solution is checked: it is finite and its out-of-balance forces
        |P − Bᵀ k B u| stay below ``RESIDUAL_LIMIT`` × the greatest load or member force of the
        column, after one step of iterative refinement where needed; otherwise it raises
        ``SolverError``.
        """
        p = np.asarray(loads, dtype=np.float64)
        if p.shape[0] != self.free:
            raise ValueError(f"loads have {p.shape[0]} rows for {self.free} free displacements")
        if not p.size:
            return np.zeros_like(p)
        u = self._apply_inverse(p)
        worst, residual = self._imbalance(p, u)
        if np.any(worst > REFINE_ABOVE):
            u = u + self._apply_inverse(residual)
            worst, _ = self._imbalance(p, u)
        if not np.all(worst <= RESIDUAL_LIMIT):  # written so that NaN fails as well
            raise SolverError(
                f"The forces found do not balance the loads (out of balance by {worst.max():.1e} "
                "of the greatest force): the truss is close to a mechanism, or member stiffnesses "
                "differ too widely. Look for nearly straight chains of members and wrong areas."
            )
        return u

    def _imbalance(self, p: FloatArray, u: FloatArray) -> tuple[FloatArray, FloatArray]:
        """Return |P − K u| over the greatest load or member force, per column, and P − K u."""
        force = self.member_forces(u)
        residual = p - self._transpose @ force
        scale = np.maximum(np.abs(p).max(axis=0), np.abs(force).max(axis=0, initial=0.0))
        worst = np.abs(residual).max(axis=0) / np.where(scale > 0, scale, 1.0)
        return np.asarray(worst), residual

    def member_forces(self, displacements: FloatArray) -> FloatArray:
        """Return N = k ∘ B u (m, q) or (m,) in N for displacements (n, q) or (n,) in m."""
        elongation: FloatArray = self.compatibility @ displacements
        k = self.member_stiffness
        return elongation * (k if elongation.ndim == 1 else k[:, None])

    def _factorise(self) -> Callable[[FloatArray], FloatArray]:
        if self.free == 0:
            return lambda p: p
        matrix = self.matrix()
        factor = cholesky(matrix)
        if factor is None or not np.all(factor.pivots > PIVOT_FLOOR * matrix.diagonal()):
            raise UnstableTrussError(_UNSTABLE)
        return factor.solve
