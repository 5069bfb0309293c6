"""Cholesky factorisation of a sparse symmetric positive definite matrix, for repeated solution."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

import numpy as np
from scipy import sparse
from scipy.linalg import LinAlgError, cho_factor, cho_solve, cho_solve_banded, cholesky_banded
from scipy.sparse.csgraph import reverse_cuthill_mckee

from sizing.mechanics.geometry import FloatArray

DENSE_LIMIT = 200
"""Rows up to which the matrix is factorised as a full one.

Measured on girders and space grids (tests/bench): full and band take the same 1 ms near 230
rows; at 400 rows the band is up to five times faster, below 100 the full one by a third.
"""


@dataclass(frozen=True, kw_only=True)
class Factor:
    """``solve`` (n, q) or (n,); ``pivots`` (n,) the squared diagonal of the Cholesky factor."""

    solve: Callable[[FloatArray], FloatArray]
    pivots: FloatArray


def cholesky(matrix: sparse.csc_array) -> Factor | None:
    """Return the factor of ``matrix`` (n, n), or None when it is not positive definite.

    Small: full Cholesky. Larger: rows ordered by reverse Cuthill–McKee (1969), then Cholesky of
    the band, n·b² operations for half bandwidth b. Trusses are long or flat, so b is small: some
    10 in a girder, three times the nodes of one row in a grid. A general sparse LU factorisation
    took sixty times as long for a space grid of 10,000 members.
    """
    try:
        return _full(matrix) if matrix.shape[0] <= DENSE_LIMIT else _band(matrix)
    except LinAlgError:
        return None


def _full(matrix: sparse.csc_array) -> Factor:
    factor = cho_factor(matrix.toarray(), lower=True, check_finite=False)
    return Factor(
        solve=lambda p: np.asarray(cho_solve(factor, p, check_finite=False)),
        pivots=np.diagonal(factor[0]) ** 2,
    )


def _band(matrix: sparse.csc_array) -> Factor:
    order = reverse_cuthill_mckee(sparse.csr_matrix(matrix), symmetric_mode=True)
    back = np.argsort(order)
    entries = sparse.coo_array(matrix)
    row, column = (back[c] for c in entries.coords)
    lower = row >= column
    below = row[lower] - column[lower]
    band = np.zeros((int(below.max(initial=0)) + 1, matrix.shape[0]), order="F")
    band[below, column[lower]] = entries.data[lower]
    factor = cholesky_banded(band, overwrite_ab=True, lower=True, check_finite=False)

    def solve(p: FloatArray) -> FloatArray:
        inner = cho_solve_banded((factor, True), p[order], check_finite=False)
        return np.asarray(inner[back])

    return Factor(solve=solve, pivots=factor[0, back] ** 2)
