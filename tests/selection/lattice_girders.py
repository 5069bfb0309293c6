"""Lattice girders over several spans as sizing problems (invented demonstration data).

Square hollow sections with the corner radii of EN 10219-2 annex B (outer 2t, inner t), S355,
buckling curve a of EN 1993-1-1 6.3.1.2 (alpha = 0.21), partial factors 1.0.
"""

from __future__ import annotations

import numpy as np
from scipy import sparse

from sizing.selection.problem import SizingProblem

YIELD, YOUNG, DENSITY = 355e6, 210e9, 7850.0
SIZES = {
    40: (3, 4),
    50: (3, 4, 5),
    60: (3, 4, 5),
    70: (3, 4, 5),
    80: (3, 4, 5, 6),
    90: (4, 5, 6),
    100: (4, 5, 6, 8),
    120: (4, 5, 6, 8, 10),
    140: (5, 6, 8, 10),
    150: (5, 6, 8, 10),
    160: (5, 6, 8, 10),
    180: (6, 8, 10, 12),
    200: (6, 8, 10, 12),
    220: (6, 8, 10),
    250: (6, 8, 10),
}


def girder(
    spans: tuple[int, ...],
    *,
    panel: float = 3.0,
    depth: float = 2.4,
    crossed: bool = False,
    sag: float = 300.0,
    self_weight: bool = True,
) -> SizingProblem:
    """A Pratt girder with ``spans`` in panels, one pinned support and rollers, loads on top.

    Cases: permanent with self-weight, imposed on each span, wind uplift. ``crossed`` adds the
    other diagonal to every panel. ``sag``: span over the deflection limit.
    """
    panels = sum(spans)
    ends = np.cumsum((0, *spans))
    top = panels + 1
    points = np.array([(k * panel, y) for y in (0.0, depth) for k in range(top)])
    members, names = _members(spans, ends, top, crossed)
    group_names = list(dict.fromkeys(names))
    group = np.array([group_names.index(name) for name in names], dtype=np.intp)
    held = np.zeros(points.shape, dtype=bool)
    held[0], held[ends[1:], 1] = True, True
    column = np.full(held.shape, -1)
    column[~held] = np.arange((~held).sum())
    vector = points[members[:, 1]] - points[members[:, 0]]
    length = np.hypot(vector[:, 0], vector[:, 1])
    B = np.zeros((len(members), int((~held).sum())))
    share = np.zeros(B.T.shape)
    for i, pair in enumerate(members):
        for node, sign in zip(pair, (-1.0, 1.0), strict=True):
            for axis in range(2):
                if column[node, axis] >= 0:
                    B[i, column[node, axis]] += sign * vector[i, axis] / length[i]
            if column[node, 1] >= 0:
                share[column[node, 1], i] -= 0.5
    area, radius = _sections()
    chord = (members[:, 0] < top) == (members[:, 1] < top)
    bottom = chord & (members[:, 0] < top)
    buckling = np.where(bottom, 2.0 * panel, np.where(chord, panel, 0.9 * length))
    resistance = area * YIELD
    compression = _chi(buckling[:, None] / radius) * resistance
    factors, service = _combinations(len(spans))
    rows = [column[top + (ends[s] + ends[s + 1]) // 2, 1] for s in range(len(spans))]
    vectors = np.zeros((len(spans) * len(service), B.shape[1]))
    vectors[np.arange(len(vectors)), np.repeat(rows, len(service))] = 1.0
    shape = (len(members), area.size, 1)
    group_length = np.bincount(group, length)
    return SizingProblem(
        compatibility=sparse.csr_array(B),
        length=length,
        group=group,
        stiffness=YOUNG * area,
        weight=DENSITY * area * 9.80665,
        cost=group_length[:, None] * DENSITY * area,
        allowed=np.ones((len(group_names), area.size), dtype=bool),
        loads=_loads(spans, ends, column[top:, 1], B.shape[1], panel),
        self_weight_factor=np.array([float(self_weight)] + [0.0] * (len(spans) + 1)),
        self_weight_share=sparse.csr_array(share),
        strength_factors=factors,
        duration=np.zeros(len(factors), dtype=np.intp),
        tension=np.broadcast_to(resistance[None, :, None], shape).copy(),
        compression=compression[:, :, None],
        deflection_vectors=sparse.csr_array(vectors),
        deflection_factors=np.tile(service, (len(spans), 1)),
        deflection_limit=np.repeat(np.array(spans) * panel / sag, len(service)),
    )


def _members(spans, ends, top, crossed):
    panels = sum(spans)
    inner = ends[1:-1]

    def zone(k):
        near = min((min(abs(k - e), abs(k + 1 - e)) for e in inner), default=99)
        return "support" if near < 2 else "end" if min(k, panels - 1 - k) < 2 else "middle"

    members, names = [], []
    for k in range(panels):
        span = np.searchsorted(ends, k, side="right") - 1
        rising = k + 0.5 >= (ends[span] + ends[span + 1]) / 2
        down, up = (top + k, k + 1), (k, top + k + 1)
        members += [(k, k + 1), (top + k, top + k + 1), up if rising else down]
        names += [f"bottom {zone(k)}", f"top {zone(k)}", f"diagonal {zone(k)}"]
        if crossed:
            members.append(down if rising else up)
            names.append("counter diagonal")
    for k in range(panels + 1):
        members.append((k, top + k))
        names.append("post at support" if k in ends else "post")
    return np.array(members), names


def _sections():
    b, t = np.array([(size, wall) for size, walls in SIZES.items() for wall in walls]).T * 1e-3
    area = 4.0 * t * (b - t) - (4.0 - np.pi) * ((2.0 * t) ** 2 - t**2)
    second_moment = 0.96 * (b**4 - (b - 2.0 * t) ** 4) / 12.0
    order = np.argsort(area, kind="stable")
    return area[order], np.sqrt(second_moment / area)[order]


def _chi(slenderness):
    ratio = slenderness / (np.pi * np.sqrt(YOUNG / YIELD))
    phi = 0.5 * (1.0 + 0.21 * (ratio - 0.2) + ratio**2)
    return np.minimum(1.0, 1.0 / (phi + np.sqrt(np.maximum(phi**2 - ratio**2, 0.0))))


def _combinations(spans):
    """Factors of permanent, imposed on each span, wind: strength and serviceability."""
    one = np.eye(spans)
    sets = [np.ones(spans), *one, *(1.0 - one if spans > 2 else [])]
    strength = [[1.35, *(1.5 * chosen), 0.0] for chosen in sets] + [[1.0] + [0.0] * spans + [1.5]]
    service = [[1.0, *chosen, 0.0] for chosen in (np.ones(spans), *one)]
    return np.array(strength), np.array(service)


def _loads(spans, ends, columns, free, panel):
    loads = np.zeros((free, len(spans) + 2))
    for k, column in enumerate(columns):
        part = panel * (0.5 if k in (0, ends[-1]) else 1.0)
        loads[column, 0] -= 2.0e3 * part
        loads[column, -1] += 4.0e3 * part
        for s in range(len(spans)):
            if ends[s] <= k <= ends[s + 1]:
                half = 0.5 if k in (ends[s], ends[s + 1]) else 1.0
                loads[column, 1 + s] -= 9.0e3 * panel * half
    return loads
