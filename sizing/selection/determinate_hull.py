"""Deflection limits of a determinate truss, exact for every design at once.

A movement holds y_g h_g(w). One variable v_g stands for each product, held from below by

    v_g >= λ h_g(w) + Σ_s x_gs (y_s - λ) · (l if y_s > λ else u)      for λ = y_k, every k,

which is the convex hull of the product over the group's sections and l <= h_g <= u: at a design
with section k the row of λ = y_k gives v_g >= y_k h_g exactly.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray
from scipy import sparse

from sizing.selection.determinate_rows import SLACK, DeflectionRows, weight_range
from sizing.selection.highs import LinearModel

FloatArray = NDArray[np.float64]


def with_hulls(
    model: LinearModel, rows: DeflectionRows, limits: list[tuple[int, float]]
) -> LinearModel:
    """Extend a model over x (v,) by the exact rows of ``limits`` (row, sign).

    Further variables: the groups' weights over their greatest, then v_g for each limit.
    """
    problem, choices = rows.problem, rows.choices
    v, groups = choices.count, len(choices.slices)
    _, heaviest = weight_range(problem, choices.mask)
    unit = np.where(heaviest > 0.0, heaviest, 1.0)
    share = sparse.csr_array(
        (problem.weight[choices.section] / unit[choices.group], (choices.group, np.arange(v))),
        shape=(groups, v),
    )
    extra = groups * (1 + len(limits))
    wide = sparse.csr_array((model.matrix.shape[0], extra))
    blocks = [sparse.hstack([model.matrix, wide])]
    blocks.append(
        sparse.hstack(
            [share, -sparse.eye_array(groups), sparse.csr_array((groups, extra - groups))]
        )
    )
    lower = [model.row_lower, np.zeros(groups)]
    upper = [model.row_upper, np.zeros(groups)]
    for place, (r, sign) in enumerate(limits):
        matrix, bound = _hull(rows, r, sign, unit, groups * (1 + place), extra)
        blocks.append(matrix)
        lower.append(np.full(bound.size, -np.inf))
        upper.append(bound)
    free = np.full(extra, np.inf)
    free[:groups] = 1.0
    low = np.where(np.arange(extra) < groups, 0.0, -np.inf)
    return LinearModel(
        cost=np.concatenate([model.cost, np.zeros(extra)]),
        lower=np.concatenate([model.lower, low]),
        upper=np.concatenate([model.upper, free]),
        matrix=sparse.csr_array(sparse.vstack(blocks)),
        row_lower=np.concatenate(lower),
        row_upper=np.concatenate(upper),
        integer=None
        if model.integer is None
        else np.concatenate([model.integer, np.zeros(extra, dtype=bool)]),
    )


def _hull(
    rows: DeflectionRows, r: int, sign: float, unit: FloatArray, first: int, extra: int
) -> tuple[sparse.csr_array, FloatArray]:
    problem, choices = rows.problem, rows.choices
    v, groups = choices.count, len(choices.slices)
    flexibility = 1.0 / problem.stiffness[choices.section]
    b = sign * rows.forces.movement_per_weight(r)
    lightest, heaviest = weight_range(problem, choices.mask)
    up, down = np.maximum(b, 0.0), np.minimum(b, 0.0)
    low, high = up @ lightest + down @ heaviest, up @ heaviest + down @ lightest
    size = float(problem.deflection_limit[r]) or 1.0
    matrix = np.zeros((1 + v, v + extra))
    bounds = np.zeros(1 + v)
    matrix[0, :v] = sign * rows.forces.movement[r, choices.group] * flexibility / size
    matrix[0, v + first : v + first + groups] = 1.0
    bounds[0] = problem.deflection_limit[r] / size + SLACK
    line = 1
    for g, part in enumerate(choices.slices):
        y = flexibility[part]
        for k in range(y.size):
            excess = y - y[k]
            matrix[line, part] = excess * np.where(excess > 0.0, low[g], high[g]) / size
            matrix[line, v : v + groups] = y[k] * b[g] * unit / size
            matrix[line, v + first + g] = -1.0
            line += 1
    return sparse.csr_array(matrix), bounds
