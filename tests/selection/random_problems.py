"""Sizing problems by construction: small random ones for enumeration, and a long roof girder.

Everything is invented: sections are square tubes of random or regular sizes, resistances follow
yield in tension and a smooth squash-Euler curve (Rankine) in compression.
"""

from __future__ import annotations

import itertools

import numpy as np
from random_trusses import random_truss
from scipy import sparse

from sizing.mechanics.geometry import truss_geometry
from sizing.selection.analysis import DesignAnalysis
from sizing.selection.problem import SizingProblem

E = 210e9
YIELD = 355e6
DENSITY = 7850.0
GRAVITY = 9.81


def square_tubes(sizes):
    """Area (m²) and radius of gyration (m) of square tubes (side, wall) in mm."""
    side, wall = np.array(sizes, dtype=float).T / 1000.0
    inner = side - 2.0 * wall
    area = side**2 - inner**2
    radius = np.sqrt((side**4 - inner**4) / 12.0 / area)
    order = np.argsort(area, kind="stable")
    return area[order], radius[order]


def resistances(area, radius, buckling, durations):
    """Tension and compression (m, s, k), the compression by Rankine's formula."""
    squash = YIELD * area
    euler = np.pi**2 * E * area * (radius / buckling[:, None]) ** 2
    compression = squash * euler / (squash + euler)
    tension = np.broadcast_to(squash, compression.shape)
    return (
        tension[:, :, None] * np.array(durations),
        compression[:, :, None] * np.array(durations),
    )


def self_weight_share(geometry):
    """Half of each member's weight (unit: per unit weight) down at each end, free ones only."""
    d = geometry.dimensions
    full = np.zeros((geometry.nodes * d, geometry.members))
    members = np.arange(geometry.members)
    np.add.at(full, (geometry.start * d + d - 1, members), -0.5)
    np.add.at(full, (geometry.end * d + d - 1, members), -0.5)
    return sparse.csr_array(full[geometry.free])


def random_problem(
    rng,
    *,
    dimensions=2,
    nodes=6,
    redundants=1,
    groups=4,
    sections=6,
    self_weight=True,
    deflection=True,
    tightness=1.0,
):
    """Return a small random problem whose middling designs lie near the limits."""
    geometry = random_truss(rng, nodes=nodes, dimensions=dimensions, redundants=redundants)
    m, n = geometry.compatibility.shape
    group = np.concatenate([np.arange(groups), rng.integers(0, groups, max(0, m - groups))])[:m]
    group = rng.permutation(group).astype(np.intp)
    groups = int(group.max()) + 1
    sides = rng.uniform(40.0, 200.0, sections)
    area, radius = square_tubes([(b, b / rng.uniform(12.0, 35.0)) for b in sides])
    cases = int(rng.integers(1, 4))
    combos = int(rng.integers(1, 5))
    loads = rng.normal(size=(n, cases)) * 1e4
    factors = rng.uniform(-1.0, 1.6, (combos, cases))
    durations = [1.0, 0.8]
    buckling = geometry.length * rng.uniform(0.5, 2.0, m)
    tension, compression = resistances(area, radius, buckling, durations)
    price = rng.uniform(0.8, 1.2, sections) if rng.random() < 0.5 else np.ones(sections)
    group_length = np.bincount(group, weights=geometry.length, minlength=groups)
    rows = min(n, 3) if deflection else 0
    draft = {
        "compatibility": geometry.compatibility,
        "length": geometry.length,
        "group": group,
        "stiffness": E * area,
        "weight": DENSITY * GRAVITY * area,
        "cost": DENSITY * np.outer(group_length, area * price),
        "allowed": rng.random((groups, sections)) < 0.9,
        "loads": loads,
        "self_weight_factor": np.eye(cases)[0] if self_weight else np.zeros(cases),
        "self_weight_share": self_weight_share(geometry),
        "strength_factors": factors,
        "duration": rng.integers(0, 2, combos).astype(np.intp),
        "tension": tension,
        "compression": compression,
        "deflection_vectors": sparse.csr_array(np.eye(n)[rng.permutation(n)[:rows]].reshape(-1, n)),
        "deflection_factors": factors[rng.integers(0, combos, rows)],
        "deflection_limit": np.ones(rows),
    }
    draft["allowed"][np.arange(groups), rng.integers(0, sections, groups)] = True
    return _calibrated(rng, draft, groups, sections, tightness)


def _calibrated(rng, draft, groups, sections, tightness):
    # Scale loads so that the strength of a middling design is used up, then set the deflection
    # limits near the movements of such designs.
    middle = np.full(groups, sections // 2, dtype=np.intp)
    problem = SizingProblem(**draft)
    found = DesignAnalysis(problem).evaluate(middle)
    draft["loads"] = draft["loads"] / found.strength.max() * tightness
    found = DesignAnalysis(SizingProblem(**draft)).evaluate(middle)
    if draft["deflection_limit"].size:
        size = np.abs(found.movements).max()
        limit = np.maximum(np.abs(found.movements), 0.1 * size)
        draft["deflection_limit"] = limit * rng.uniform(0.7, 1.4, limit.size)
    return SizingProblem(**draft)


def every_design(problem):
    """All allowed designs (b, g)."""
    options = [np.flatnonzero(row) for row in problem.allowed]
    return np.array(list(itertools.product(*options)), dtype=np.intp)


def enumerated(problem):
    """Objective of the cheapest feasible design by trying all, or None."""
    designs = every_design(problem)
    tried = DesignAnalysis(problem).evaluate_many(designs)
    if not tried.feasible.any():
        return None
    return float(tried.objective[tried.feasible].min())


def roof_girder(
    panels=50, *, groups_chord=3, groups_web=5, sections=150, combinations=25, redundant=False
):
    """A parallel-chord girder, 4 members a panel and one: self-weight, uplift, sag limits.

    ``redundant`` adds a middle support. Groups: zones of each chord, of diagonals and of posts.
    """
    x = np.repeat(np.arange(panels + 1) * 3.0, 2)
    z = np.tile([0.0, 0.08 * 3.0 * panels], panels + 1)
    bottom, top = 2 * np.arange(panels + 1), 2 * np.arange(panels + 1) + 1
    half = panels // 2
    ends, zone = [], []
    kinds = {"bottom": groups_chord, "top": groups_chord, "web": groups_web, "post": groups_web - 1}
    starts = np.concatenate([[0], np.cumsum(list(kinds.values()))[:-1]])
    offset = dict(zip(kinds, starts, strict=True))

    def place(kind, p):
        near = min(p, panels - 1 - p) if kind != "post" else min(p, panels - p)
        return offset[kind] + min(kinds[kind] - 1, near * kinds[kind] // max(1, half))

    for p in range(panels):
        ends += [(bottom[p], bottom[p + 1]), (top[p], top[p + 1])]
        zone += [place("bottom", p), place("top", p)]
        ends.append((top[p], bottom[p + 1]) if p < half else (bottom[p], top[p + 1]))
        zone.append(place("web", p))
    for p in range(panels + 1):
        ends.append((bottom[p], top[p]))
        zone.append(place("post", p))
    held = np.zeros((2 * (panels + 1), 2), dtype=bool)
    held[bottom[0]] = True
    held[bottom[-1], 1] = True
    if redundant:
        held[bottom[half], 1] = True
    pairs = np.array(ends)
    geometry = truss_geometry(np.column_stack([x, z]), pairs[:, 0], pairs[:, 1], held)
    return _girder_problem(geometry, np.array(zone, dtype=np.intp), sections, combinations, top)


def _girder_problem(geometry, group, sections, combinations, top):
    n, groups = geometry.free.size, int(group.max()) + 1
    sides = (
        40,
        50,
        60,
        70,
        80,
        90,
        100,
        120,
        140,
        150,
        160,
        180,
        200,
        220,
        250,
        260,
        300,
        350,
        400,
    )
    walls = (3, 4, 5, 6, 6.3, 8, 10, 12, 12.5, 14.2, 16)
    sizes = [(b, t) for b in sides for t in walls if 8 <= b / t <= 65][:sections]
    area, radius = square_tubes(sizes)
    down = {int(f): k for k, f in enumerate(geometry.free)}
    full = np.zeros((n, 4))
    rng = np.random.default_rng(7)
    for node in top:
        k = down[int(node) * 2 + 1]
        left = 1.0 if node <= top[len(top) // 2] else 0.5
        full[k] = [-2e3, -4e3 * left, 3e3, -1.5e3 * (1.5 - left)]
    loads = np.column_stack([np.zeros(n), full])
    factors = np.column_stack(
        [
            rng.choice([0.9, 1.0, 1.35], combinations),
            rng.choice([0.9, 1.0, 1.35], combinations),
            rng.choice([0.0, 0.75, 1.5], combinations),
            rng.choice([0.0, 0.9, 1.5], combinations),
            rng.choice([0.0, 1.05, 1.5], combinations),
        ]
    )
    buckling = geometry.length * np.where(np.abs(geometry.cosines[:, 0]) > 0.99, 3.0, 0.9)
    tension, compression = resistances(area, radius, buckling, [1.0])
    vertical = [k for k, f in enumerate(geometry.free) if f % 2 == 1]
    states = np.array(
        [[1, 1, 1, 0, 0.6], [1, 1, 0.5, 0.6, 1], [1, 1, 0, 1, 0], [1, 1, 0.7, 0, 0.7]]
    )
    vectors = np.eye(n)[np.repeat(vertical, len(states))]
    span = np.ptp(geometry.position[:, 0])
    group_length = np.bincount(group, weights=geometry.length, minlength=groups)
    return SizingProblem(
        compatibility=geometry.compatibility,
        length=geometry.length,
        group=group,
        stiffness=E * area,
        weight=DENSITY * GRAVITY * area,
        cost=DENSITY * np.outer(group_length, area),
        allowed=np.ones((groups, area.size), dtype=bool),
        loads=loads,
        self_weight_factor=np.array([1.0, 0.0, 0.0, 0.0, 0.0]),
        self_weight_share=self_weight_share(geometry),
        strength_factors=factors,
        duration=np.zeros(combinations, dtype=np.intp),
        tension=tension,
        compression=compression,
        deflection_vectors=sparse.csr_array(vectors),
        deflection_factors=np.tile(states, (len(vertical), 1)),
        deflection_limit=np.full(len(vectors), span / 250.0),
    )
