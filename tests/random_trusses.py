"""Random stable trusses by construction, for property tests and measurements.

``random_truss`` starts from a triangle (tetrahedron in space), adds each further node with d
members to earlier nodes that are not nearly in line, then adds redundant members. Held are as
many directions as rigid bodies have, and ``extra_supports`` more.
"""

from __future__ import annotations

import numpy as np

from sizing.mechanics.geometry import Geometry, truss_geometry

LEAST_SPREAD = 0.2  # least singular value of the directions that fix a new node
ATTEMPTS = 100  # places tried per node before the truss is begun anew


def random_truss(
    rng: np.random.Generator,
    *,
    nodes: int = 8,
    dimensions: int = 2,
    redundants: int = 2,
    extra_supports: int = 0,
) -> Geometry:
    """Return a stable truss of ``nodes`` nodes with up to ``redundants`` extra members."""
    grown = None
    while grown is None:
        grown = _grow(rng, nodes, dimensions)
    position, pairs = grown
    pairs.extend(_more_pairs(rng, nodes, pairs, redundants))
    order = rng.permutation(len(pairs))
    ends = np.array(pairs)[order]
    flip = rng.random(len(ends)) < 0.5
    ends[flip] = ends[flip][:, ::-1]
    held = _supports(rng, position, extra_supports)
    return truss_geometry(position, ends[:, 0], ends[:, 1], held)


def _grow(rng, nodes, d):
    """Return positions and member pairs of a simple truss, or None where it got stuck."""
    x = [np.zeros(d)]
    pairs: list[tuple[int, int]] = []
    for _ in range(ATTEMPTS * nodes):
        placed = len(x)
        if placed == nodes:
            return np.array(x), pairs
        way = rng.normal(size=d)
        candidate = x[rng.integers(placed)] + rng.uniform(0.8, 1.6) * way / np.linalg.norm(way)
        distance = np.linalg.norm(np.array(x) - candidate, axis=1)
        if distance.min() < 0.5:
            continue
        wanted = min(placed, d)
        chosen = rng.permutation(np.argsort(distance)[: wanted + 2])[:wanted]
        directions = np.array([(candidate - x[a]) / distance[a] for a in chosen])
        if placed >= 2 and _spread(directions, [x[a] for a in chosen], d) < LEAST_SPREAD:
            continue
        x.append(candidate)
        pairs.extend((int(a), placed) for a in chosen)
    return None


def _spread(directions, anchors, d):
    """Return how well the directions fix the node within the body it joins, 0 to 1."""
    if len(anchors) < d:  # the third node of a tetrahedron: keep it off the line of the others
        base = (anchors[1] - anchors[0]) / np.linalg.norm(anchors[1] - anchors[0])
        return np.linalg.norm(directions[0] - (directions[0] @ base) * base)
    return np.linalg.svd(directions, compute_uv=False)[-1]


def _more_pairs(rng, nodes, pairs, redundants):
    taken = {frozenset(p) for p in pairs}
    free = [
        (a, b) for a in range(nodes) for b in range(a + 1, nodes) if frozenset((a, b)) not in taken
    ]
    rng.shuffle(free)
    return [tuple(p) for p in free[:redundants]]


def _supports(rng, x, extra):
    """Hold node 0 fully, then the directions that stop the remaining rotations best."""
    j, d = x.shape
    held = np.zeros((j, d), dtype=bool)
    held[0] = True
    spins = [(0, 1)] if d == 2 else [(0, 1), (0, 2), (1, 2)]
    rotation = np.zeros((j, d, len(spins)))
    for s, (a, b) in enumerate(spins):
        rotation[:, a, s] = -(x[:, b] - x[0, b])
        rotation[:, b, s] = x[:, a] - x[0, a]
    rows = rotation.reshape(j * d, len(spins)).copy()
    for _ in spins:
        best = int(np.argmax(np.linalg.norm(rows, axis=1)))
        held.ravel()[best] = True
        v = rows[best] / np.linalg.norm(rows[best])
        rows -= np.outer(rows @ v, v)
    free = np.flatnonzero(~held.ravel())
    held.ravel()[rng.permutation(free)[:extra]] = True
    return held


def lattice_girder(panels: int, *, panel: float = 2.0, depth: float = 2.0) -> Geometry:
    """Return a plane girder with crossed diagonals, 5 members a panel, held at both ends."""
    a = 2 * np.arange(panels + 1)
    b = a + 1
    position = np.zeros((2 * (panels + 1), 2))
    position[a, 0] = position[b, 0] = panel * np.arange(panels + 1)
    position[b, 1] = depth
    start = np.concatenate([a[:-1], b[:-1], a, a[:-1], b[:-1]])
    end = np.concatenate([a[1:], b[1:], b, b[1:], a[1:]])
    held = np.zeros_like(position, dtype=bool)
    held[0] = True
    held[a[-1], 1] = True
    return truss_geometry(position, start, end, held)


def double_layer_grid(bays: int, *, module: float = 3.0, depth: float = 2.1) -> Geometry:
    """Return a square-on-square space grid of ``bays`` × ``bays``, about 8 bays² members."""
    top = np.arange((bays + 1) ** 2).reshape(bays + 1, bays + 1)
    bottom = top.size + np.arange(bays**2).reshape(bays, bays)
    position = np.zeros((top.size + bottom.size, 3))
    for grid, offset, z in ((top, 0.0, depth), (bottom, 0.5, 0.0)):
        i, k = np.indices(grid.shape)
        position[grid.ravel()] = np.column_stack(
            [(i.ravel() + offset) * module, (k.ravel() + offset) * module, np.full(grid.size, z)]
        )
    pairs = [(g[:-1], g[1:]) for g in (top, bottom)]
    pairs += [(g[:, :-1], g[:, 1:]) for g in (top, bottom)]
    corners = (top[:-1, :-1], top[1:, :-1], top[:-1, 1:], top[1:, 1:])
    pairs += [(bottom, corner) for corner in corners]
    held = np.zeros_like(position, dtype=bool)
    edge = np.unique(np.concatenate([top[0], top[-1], top[:, 0], top[:, -1]]))
    held[edge, 2] = True
    held[top[0, 0], :2] = True
    held[top[-1, 0], 1] = True
    return truss_geometry(
        position,
        np.concatenate([p.ravel() for p, _ in pairs]),
        np.concatenate([q.ravel() for _, q in pairs]),
        held,
    )
