"""Small random trusses as sizing problems, small enough to try every design."""

from __future__ import annotations

import itertools

import numpy as np
from scipy import sparse

from sizing.selection.analysis import DesignAnalysis
from sizing.selection.problem import SizingProblem


def random_truss(seed: int, *, most_designs: int = 2500) -> SizingProblem:
    """A plane truss of one to three bays with chance in everything the problem may hold.

    Redundancy 0 to 5, two to five groups, three to eight sections (not always dearer when
    stiffer), one to three cases, load durations, self-weight in some cases, resistances of zero,
    movements limited in both senses (sometimes to zero), sections that a group may not take.
    """
    chance = np.random.default_rng(seed)
    bays = int(chance.integers(1, 4))
    points = np.array([(k, y) for k in range(bays + 1) for y in (0.0, 1.0)])
    points += chance.uniform(-0.1, 0.1, points.shape)
    held = np.zeros(points.shape, dtype=bool)
    held[:2] = True
    held[-2, 1], held[-1, 0] = chance.random() < 0.4, chance.random() < 0.2
    members = _members(bays, chance)
    B, length, share = _geometry(points, held, members)
    m, n = B.shape
    groups = int(chance.integers(2, min(5, m) + 1))
    sections = int(chance.integers(3, 9))
    group = np.concatenate([np.arange(groups), chance.integers(0, groups, m - groups)])
    chance.shuffle(group)
    area = np.sort(chance.uniform(0.3, 1.0, sections)) * 10.0 ** chance.uniform(-1.0, 1.0)
    area = area * np.linspace(1.0, chance.uniform(1.0, 12.0), sections)
    if chance.random() < 0.3:
        chance.shuffle(area)
    q, c = int(chance.integers(1, 4)), int(chance.integers(1, 5))
    durations = int(chance.integers(1, 3))
    scale = 4.0 * 10.0 ** chance.uniform(-0.5, 0.6)
    tension = scale * area[None, :, None] * chance.uniform(0.8, 1.2, (m, 1, durations))
    compression = tension * chance.uniform(0.3, 1.0, (m, sections, 1))
    if chance.random() < 0.15:
        compression[chance.integers(0, m)] = 0.0
    r = int(chance.integers(0, 4))
    vectors = (chance.random((r, n)) < 0.3) * chance.normal(size=(r, n))
    limit = chance.uniform(0.05, 0.5, r) * scale / 4.0
    if r and chance.random() < 0.1:
        limit[0], vectors[0] = 0.0, 0.0
    own = chance.random() < 0.6
    cost = np.bincount(group, length, groups)[:, None] * area[None, :]
    if chance.random() < 0.4:
        cost = cost * chance.uniform(0.7, 1.3, cost.shape)
    allowed = chance.random((groups, sections)) < 0.9
    allowed[np.arange(groups), chance.integers(0, sections, groups)] = True
    while np.prod(allowed.sum(axis=1)) > most_designs:
        g = int(allowed.sum(axis=1).argmax())
        allowed[g, chance.choice(np.flatnonzero(allowed[g]))] = False
    return SizingProblem(
        compatibility=sparse.csr_array(B),
        length=length,
        group=group.astype(np.intp),
        stiffness=100.0 * area,
        weight=area * chance.uniform(0.1, 0.6),
        cost=cost,
        allowed=allowed,
        loads=chance.normal(size=(n, q)) * (chance.random((n, q)) < 0.7),
        self_weight_factor=(chance.random(q) < 0.7).astype(float) * own,
        self_weight_share=sparse.csr_array(share),
        strength_factors=chance.uniform(-1.0, 1.5, (c, q)),
        duration=chance.integers(0, durations, c).astype(np.intp),
        tension=np.broadcast_to(tension, (m, sections, durations)).copy(),
        compression=compression,
        deflection_vectors=sparse.csr_array(vectors.reshape(r, n)),
        deflection_factors=chance.uniform(-1.0, 1.5, (r, q)),
        deflection_limit=limit,
    )


def every_design(problem: SizingProblem):
    """All allowed designs (d, g) with their evaluation."""
    lists = [np.flatnonzero(allowed) for allowed in problem.allowed]
    designs = np.array(list(itertools.product(*lists)), dtype=np.intp)
    return designs, DesignAnalysis(problem).evaluate_many(designs)


def _members(bays, chance):
    members = [(0, 1)] if chance.random() < 0.5 else []
    for k in range(bays):
        a, b, c, d = 2 * k, 2 * k + 1, 2 * k + 2, 2 * k + 3
        members += [(a, c), (b, d), (c, d), (a, d)]
        if chance.random() < 0.6:
            members.append((b, c))
    return np.array(members)


def _geometry(points, held, members):
    column = np.full(held.shape, -1)
    column[~held] = np.arange((~held).sum())
    vector = points[members[:, 1]] - points[members[:, 0]]
    length = np.hypot(vector[:, 0], vector[:, 1])
    B = np.zeros((len(members), int((~held).sum())))
    share = np.zeros(B.T.shape)
    for i, ends in enumerate(members):
        for node, sign in zip(ends, (-1.0, 1.0), strict=True):
            for axis in range(2):
                if column[node, axis] >= 0:
                    B[i, column[node, axis]] += sign * vector[i, axis] / length[i]
            if column[node, 1] >= 0:
                share[column[node, 1], i] -= 0.5
    return B, length, share
