"""Connected parts that move as a whole because too few directions are held.

Sizes: j nodes, d dimensions, n free displacements, n' those left when loose nodes are out.
"""

from __future__ import annotations

import numpy as np
from scipy import sparse
from scipy.sparse.csgraph import connected_components

from sizing.mechanics.geometry import FloatArray, Geometry, IntArray
from sizing.mechanics.movement import DEPENDENT, Mechanism, mechanism_of, sparsest

UNHELD = 1e-7
"""Singular value of the held directions, over the greatest, below which a movement is free."""


def rigid_bodies(
    geometry: Geometry, complement: sparse.csr_array
) -> tuple[list[Mechanism], FloatArray]:
    """Return rigid movements that no support stops, and an orthonormal basis (n', ·) of them."""
    j = geometry.nodes
    graph = sparse.csr_array(
        (np.ones(geometry.members), (geometry.start, geometry.end)), shape=(j, j)
    )
    count, part = connected_components(graph, directed=False)
    found: list[Mechanism] = []
    known = np.zeros((complement.shape[1], 0))
    order = np.argsort(part, kind="stable")
    for nodes in np.split(order, np.flatnonzero(np.diff(part[order])) + 1):
        for values in _rigid_movements(geometry, nodes):
            left = complement.T @ (values / np.linalg.norm(values))
            left = left - known @ (known.T @ left)
            size = np.linalg.norm(left)
            if size <= DEPENDENT:
                continue
            known = np.column_stack([known, left / size])
            mechanism = mechanism_of(geometry, "rigid", values)
            found.append(
                Mechanism(
                    kind="rigid",
                    movement=mechanism.movement,
                    nodes=mechanism.nodes,
                    whole=count == 1,
                )
            )
    return found, known


def _rigid_movements(geometry: Geometry, nodes: IntArray) -> list[FloatArray]:
    """Return a basis of the rigid movements of ``nodes`` that leave held directions alone."""
    d = geometry.dimensions
    x = geometry.position[nodes] - geometry.position[nodes].mean(axis=0)
    x = x / max(float(np.abs(x).max()), np.finfo(np.float64).tiny)
    modes = [np.tile(np.eye(d)[a], (nodes.size, 1)) for a in range(d)]
    for a, b in [(0, 1)] if d == 2 else [(0, 1), (0, 2), (1, 2)]:
        turn = np.zeros_like(x)
        turn[:, a], turn[:, b] = -x[:, b], x[:, a]
        modes.append(turn)
    motion = np.stack(modes, axis=-1)  # (nodes, d, 3 or 6)
    held = motion[geometry.held[nodes]]
    coefficients = np.eye(motion.shape[-1])
    if held.size:
        _, s, vt = np.linalg.svd(held, full_matrices=True)
        rank = int((s > UNHELD * s.max(initial=0.0)).sum())
        coefficients = vt[rank:].T
    coefficients = sparsest(coefficients)
    result = []
    for c in coefficients.T:
        full = np.zeros((geometry.nodes, d))
        full[nodes] = motion @ c
        free_values = full.ravel()[geometry.free]
        if np.abs(free_values).max(initial=0.0) > DEPENDENT:
            result.append(free_values)
    return result
