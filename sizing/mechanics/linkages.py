"""Movements of several nodes together, told apart by the member that would stop each.

Sizes: j nodes, d dimensions, n free displacements, p movements.
A thought member joins two unjoined nodes with a common neighbour. Best are those across an open
panel: four members around it and no diagonal.
"""

from __future__ import annotations

import numpy as np
from scipy import sparse

from sizing.mechanics.geometry import BoolArray, FloatArray, Geometry, IntArray
from sizing.mechanics.movement import STOPS, Mechanism, mechanism_of, sparsest


def linkages(geometry: Geometry, movements: FloatArray) -> list[Mechanism]:
    """Return the movements (n, p) re-combined so that each has one thought member to stop it."""
    p = movements.shape[1]
    if p == 0:
        return []
    full = np.zeros((geometry.nodes * geometry.dimensions, p))
    full[geometry.free] = movements
    u = full.reshape(geometry.nodes, geometry.dimensions, p)
    pairs, shared = _thought_members(geometry)
    way = geometry.position[pairs[:, 1]] - geometry.position[pairs[:, 0]]
    length = np.linalg.norm(way, axis=1, keepdims=True)
    way = np.divide(way, length, out=np.zeros_like(way), where=length > 0)
    stretch = np.einsum("pd,pdq->pq", way, u[pairs[:, 1]] - u[pairs[:, 0]])
    size = np.linalg.norm(stretch, axis=1)
    useful = size > STOPS * size.max(initial=0.0)
    pairs, stretch = pairs[useful], stretch[useful]
    opened = np.array(
        [
            n >= 2 and _panel_around(geometry, int(a), int(c)) is not None
            for (a, c), n in zip(pairs, shared[useful], strict=True)
        ],
        dtype=np.bool_,
    )
    chosen = _independent_rows(stretch, opened)
    basis = _one_each(movements, stretch[chosen])
    found = []
    for t in range(p):
        plain = mechanism_of(geometry, "linkage", basis[:, t])
        if t >= len(chosen):
            found.append(plain)
            continue
        a, c = (int(i) for i in pairs[chosen[t]])
        panel = _panel_around(geometry, a, c) if opened[chosen[t]] else None
        found.append(
            Mechanism(
                kind="linkage",
                movement=plain.movement,
                nodes=plain.nodes,
                stop=(a, c),
                panel=panel,
            )
        )
    return sorted(found, key=lambda mechanism: len(mechanism.nodes))


def _adjacency(geometry: Geometry) -> sparse.csr_array:
    j = geometry.nodes
    ends = (
        np.concatenate([geometry.start, geometry.end]),
        np.concatenate([geometry.end, geometry.start]),
    )
    graph = sparse.csr_array((np.ones(ends[0].size), ends), shape=(j, j))
    graph.data[:] = 1.0
    return graph


def _thought_members(geometry: Geometry) -> tuple[IntArray, IntArray]:
    """Return pairs (·, 2) of unjoined nodes with common neighbours, and how many they share."""
    graph = _adjacency(geometry)
    common = sparse.coo_array(sparse.triu(graph @ graph, k=1))
    a, c = common.coords
    apart = np.asarray(graph[a, c]).ravel() == 0
    pairs = np.column_stack([a, c])[apart].astype(np.intp)
    return pairs, common.data[apart].astype(np.intp)


def _neighbours(geometry: Geometry, node: int) -> set[int]:
    ends = (geometry.end[geometry.start == node], geometry.start[geometry.end == node])
    return {int(i) for i in np.concatenate(ends)}


def _panel_around(geometry: Geometry, a: int, c: int) -> tuple[int, int, int, int] | None:
    """Return a panel a-b-c-e of four members without a diagonal, or None."""
    common = sorted(_neighbours(geometry, a) & _neighbours(geometry, c))
    for i, b in enumerate(common):
        beside = _neighbours(geometry, b)
        for e in common[i + 1 :]:
            if e not in beside:
                return _from_lowest((a, b, c, e))
    return None


def _from_lowest(ring: tuple[int, int, int, int]) -> tuple[int, int, int, int]:
    """Return the ring begun at its lowest node, towards the lower neighbour: one name each."""
    i = ring.index(min(ring))
    a, b, c, e = ring[i:] + ring[:i]
    return (a, b, c, e) if b < e else (a, e, c, b)


def _independent_rows(stretch: FloatArray, preferred: BoolArray) -> list[int]:
    """Return rows of full rank, taken first where ``preferred``, greatest remainder first."""
    left = stretch.copy()
    left[np.abs(left) < STOPS * np.abs(left).max(initial=0.0)] = 0.0
    chosen: list[int] = []
    threshold = STOPS * float(np.linalg.norm(left, axis=1).max(initial=0.0))
    for allowed in (preferred, np.ones_like(preferred)):
        while len(chosen) < stretch.shape[1]:
            size = np.where(allowed, np.linalg.norm(left, axis=1), 0.0)
            if not size.size or size.max() <= threshold:
                break
            i = int(np.argmax(size))
            v = left[i] / size[i]
            left = left - np.outer(left @ v, v)
            chosen.append(i)
    return chosen


def _one_each(movements: FloatArray, stretch: FloatArray) -> FloatArray:
    """Return movements (n, p) re-combined: thought member t (t < r) is stretched by t only."""
    p = movements.shape[1]
    r = stretch.shape[0]
    if r == 0:
        return sparsest(movements)
    inverse = np.linalg.pinv(stretch)  # (p, r), stretch @ inverse = I
    if r == p:
        return np.asarray(movements @ inverse)
    _, _, vt = np.linalg.svd(stretch)
    return np.hstack([movements @ inverse, sparsest(movements @ vt[r:].T)])
