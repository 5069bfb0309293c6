"""Nodes that move alone: their members and supports do not span their free directions.

Sizes: j nodes, d dimensions, n free displacements, n' those left when loose directions are out.
"""

from __future__ import annotations

import numpy as np
from scipy import sparse

from sizing.mechanics.geometry import BoolArray, FloatArray, Geometry, IntArray
from sizing.mechanics.movement import DEPENDENT, Mechanism, mechanism_of

FLAT = 1e-7
"""Sine of the angle out of line (or plane) below which a node's members count as in it.

The squared value, 1e-14, is what rounding of direction cosines allows to be told.
"""

NEARLY_FLAT = 1e-3
"""The same sine below which a node is reported as nearly unstable: 1 mm in a metre."""


def single_nodes(
    geometry: Geometry,
) -> tuple[list[Mechanism], sparse.csr_array, tuple[tuple[int, float], ...]]:
    """Return movements of single nodes, the complement (n, n') of them, nearly flat nodes."""
    j, d = geometry.nodes, geometry.dimensions
    gram = np.zeros((j, d, d))
    outer = geometry.cosines[:, :, None] * geometry.cosines[:, None, :]
    np.add.at(gram, geometry.start, outer)
    np.add.at(gram, geometry.end, outer)
    open_ = ~geometry.held
    gram *= open_[:, :, None] & open_[:, None, :]
    axes = np.arange(d)
    gram[:, axes, axes] += geometry.held  # a held direction is not loose
    values, vectors = np.linalg.eigh(gram)
    vectors[np.abs(vectors) < DEPENDENT] = 0.0

    index = np.full(j * d, -1)
    index[geometry.free] = np.arange(geometry.free.size)
    is_loose = values <= FLAT**2
    found = []
    for node, mode in np.argwhere(is_loose):
        movement = np.zeros((j, d))
        movement[node] = vectors[node, :, mode]
        found.append(mechanism_of(geometry, "node", movement.ravel()[geometry.free]))
    nearly = values[:, 0]
    flat = np.flatnonzero((nearly > FLAT**2) & (nearly <= NEARLY_FLAT**2))
    return (
        found,
        _complement(geometry, vectors, is_loose, index),
        tuple((int(i), float(np.sqrt(nearly[i]))) for i in flat),
    )


def _complement(
    geometry: Geometry, vectors: FloatArray, is_loose: BoolArray, index: IntArray
) -> sparse.csr_array:
    """Return orthonormal columns (n, n') of what single nodes do not do by themselves."""
    d = geometry.dimensions
    loose_nodes = np.flatnonzero(is_loose.any(axis=1))
    plain = geometry.free[~np.isin(geometry.free // d, loose_nodes)]
    rows = [index[plain]]
    columns = [np.arange(plain.size)]
    values = [np.ones(plain.size)]
    width = plain.size
    for node in loose_nodes:
        axes = np.flatnonzero(~geometry.held[node])
        kept = [
            v for v in vectors[node][:, ~is_loose[node]].T if np.abs(v[axes]).max(initial=0.0) > 0.5
        ]
        for v in kept:
            rows.append(index[node * d + axes])
            columns.append(np.full(axes.size, width))
            values.append(v[axes])
            width += 1
    return sparse.csr_array(
        (np.concatenate(values), (np.concatenate(rows), np.concatenate(columns))),
        shape=(geometry.free.size, width),
    )
