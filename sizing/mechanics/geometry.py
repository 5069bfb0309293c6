"""The line diagram as arrays, with the compatibility matrix as its one geometric object.

Sizes: j nodes, d dimensions (2 or 3), m members, n free displacements.

A member from node a to node b has length L = |x_b − x_a| and direction cosines
c = (x_b − x_a)/L; small displacements u stretch it by e = c·(u_b − u_a), so that e = B u
with −c and +c in the columns of its two nodes. Equilibrium is the transpose, Bᵀ N = P.
(Any text on matrix structural analysis; e.g. Livesley, Matrix Methods of Structural Analysis.)
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TypeVar

import numpy as np
from numpy.typing import ArrayLike, NDArray
from scipy import sparse

FloatArray = NDArray[np.float64]
IntArray = NDArray[np.intp]
BoolArray = NDArray[np.bool_]
Scalar = TypeVar("Scalar", bound=np.generic)

COINCIDENT_NODES = 1e-12
"""Least member length over the size of the truss: below it, length and direction are rounding."""


@dataclass(frozen=True, kw_only=True)
class Geometry:
    """A line diagram; every array is read-only.

    position            (j, d)  node coordinates, m; the last axis points up
    start, end          (m,)    node indices of each member
    held                (j, d)  true where a support holds the node in that direction
    length              (m,)    member lengths, m
    cosines             (m, d)  unit vectors from start to end
    free                (n,)    flat indices node·d + axis of the free displacements, ascending
    compatibility       (m, n)  sparse, elongation = B u on the free displacements
    full_compatibility  (m, j·d) sparse, the same on all displacements
    """

    position: FloatArray
    start: IntArray
    end: IntArray
    held: BoolArray
    length: FloatArray
    cosines: FloatArray
    free: IntArray
    compatibility: sparse.csr_array
    full_compatibility: sparse.csr_array

    @property
    def nodes(self) -> int:
        """Number of nodes j."""
        return int(self.position.shape[0])

    @property
    def dimensions(self) -> int:
        """Number of dimensions d: 2 in a plane, 3 in space."""
        return int(self.position.shape[1])

    @property
    def members(self) -> int:
        """Number of members m."""
        return int(self.start.shape[0])


def truss_geometry(
    position: ArrayLike, start: ArrayLike, end: ArrayLike, held: ArrayLike
) -> Geometry:
    """Build the geometry from node coordinates (j, d), member ends (m,), (m,) and held (j, d).

    Raises ``ValueError`` where shapes do not fit, a coordinate is not finite, a node index does
    not exist, or the two ends of a member coincide (L below ``COINCIDENT_NODES`` × truss size).
    """
    x = _frozen(np.array(position, dtype=np.float64))
    a = _frozen(np.array(start, dtype=np.intp))
    b = _frozen(np.array(end, dtype=np.intp))
    h = _frozen(np.array(held, dtype=np.bool_))
    _require_shapes(x, a, b, h)
    span = x[b] - x[a]
    length = np.linalg.norm(span, axis=1)
    size = np.ptp(x, axis=0).max(initial=0.0)
    short = np.flatnonzero(length <= COINCIDENT_NODES * size)
    if short.size:
        i = int(short[0])
        raise ValueError(
            f"member {i} has no length: its nodes {int(a[i])} and {int(b[i])} coincide"
        )
    cosines = span / length[:, None]
    free = np.flatnonzero(~h.ravel())
    full = _compatibility(cosines, a, b, x.shape[0])
    return Geometry(
        position=x,
        start=a,
        end=b,
        held=h,
        length=_frozen(length),
        cosines=_frozen(cosines),
        free=_frozen(free),
        compatibility=sparse.csr_array(full[:, free]),
        full_compatibility=full,
    )


def _require_shapes(x: FloatArray, a: IntArray, b: IntArray, h: BoolArray) -> None:
    if x.ndim != 2 or x.shape[1] not in (2, 3):
        raise ValueError(f"position must be (nodes, 2 or 3), not {x.shape}")
    if not np.isfinite(x).all():
        raise ValueError("position holds a coordinate that is not a finite number")
    if a.ndim != 1 or a.shape != b.shape:
        raise ValueError(f"start and end must be (members,) alike, not {a.shape} and {b.shape}")
    if h.shape != x.shape:
        raise ValueError(f"held must be shaped like position {x.shape}, not {h.shape}")
    for ends in (a, b):
        if ends.size and (ends.min() < 0 or ends.max() >= x.shape[0]):
            raise ValueError(f"members name nodes outside 0 to {x.shape[0] - 1}")


def _compatibility(cosines: FloatArray, a: IntArray, b: IntArray, nodes: int) -> sparse.csr_array:
    members, d = cosines.shape
    axes = np.arange(d)
    columns = np.hstack([a[:, None] * d + axes, b[:, None] * d + axes])
    values = np.hstack([-cosines, cosines])
    rows = np.arange(0, 2 * d * members + 1, 2 * d)
    full = sparse.csr_array((values.ravel(), columns.ravel(), rows), shape=(members, nodes * d))
    full.sum_duplicates()
    full.eliminate_zeros()
    return full


def _frozen(array: NDArray[Scalar]) -> NDArray[Scalar]:
    array.flags.writeable = False
    return array
