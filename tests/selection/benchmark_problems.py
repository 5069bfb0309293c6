"""Published benchmark trusses as sizing problems (data beside this file, each with its source)."""

from __future__ import annotations

import json
from dataclasses import dataclass
from pathlib import Path

import numpy as np
from scipy import sparse

from sizing.selection.problem import SizingProblem

FOLDER = Path(__file__).parents[1] / "published" / "benchmarks"
NAMES = tuple(sorted(path.stem for path in FOLDER.glob("*.json")))


@dataclass(frozen=True, kw_only=True)
class Benchmark:
    """A published problem: ``best`` is the lightest weight in print, ``optimum`` proven or None."""

    name: str
    problem: SizingProblem
    best: float
    optimum: float | None


def load(name: str) -> Benchmark:
    """Read one benchmark into plain arrays, in the units of its file."""
    data = json.loads((FOLDER / f"{name}.json").read_text(encoding="utf-8"))
    ids = list(data["nodes"])
    points = np.array([data["nodes"][i] for i in ids], dtype=float)
    dimensions = points.shape[1]
    column = np.full(points.shape, -1)
    free = 0
    for place, node in enumerate(ids):
        held = data["supports"].get(node, [0] * dimensions)
        for axis in range(dimensions):
            if not held[axis]:
                column[place, axis] = free
                free += 1
    ends = np.array([[ids.index(str(a)), ids.index(str(b))] for a, b in data["members"]])
    vectors = points[ends[:, 1]] - points[ends[:, 0]]
    length = np.linalg.norm(vectors, axis=1)
    cosines = vectors / length[:, None]
    compatibility = np.zeros((len(ends), free))
    for member, (a, b) in enumerate(ends):
        for axis in range(dimensions):
            for node, sign in ((a, -1.0), (b, 1.0)):
                if column[node, axis] >= 0:
                    compatibility[member, column[node, axis]] += sign * cosines[member, axis]
    group = np.zeros(len(ends), dtype=np.intp)
    for g, members in enumerate(data["groups"]):
        group[members] = g
    areas = np.array(data["areas"], dtype=float)
    cases = data["load_cases"]
    loads = np.zeros((free, len(cases)))
    for case, nodal in enumerate(cases):
        for node, force in nodal.items():
            for axis, value in enumerate(force):
                if column[ids.index(node), axis] >= 0:
                    loads[column[ids.index(node), axis], case] += value
    rows, factors, limits = _deflection(data, ids, column, free)
    shape = (len(ends), areas.size, 1)
    stress = data["stress_limits"]
    group_length = np.bincount(group, weights=length, minlength=len(data["groups"]))
    problem = SizingProblem(
        compatibility=sparse.csr_array(compatibility),
        length=length,
        group=group,
        stiffness=data["E"] * areas,
        weight=data["density"] * areas,
        cost=data["density"] * np.outer(group_length, areas),
        allowed=np.ones((len(data["groups"]), areas.size), dtype=bool),
        loads=loads,
        self_weight_factor=np.zeros(len(cases)),
        self_weight_share=sparse.csr_array((free, len(ends))),
        strength_factors=np.eye(len(cases)),
        duration=np.zeros(len(cases), dtype=np.intp),
        tension=np.broadcast_to(stress["tension"] * areas[None, :, None], shape).copy(),
        compression=np.broadcast_to(stress["compression"] * areas[None, :, None], shape).copy(),
        deflection_vectors=rows,
        deflection_factors=factors,
        deflection_limit=limits,
    )
    return Benchmark(
        name=name,
        problem=problem,
        best=float(data["best_published"]["weight"]),
        optimum=data["known_optimum"],
    )


def _deflection(data, ids, column, free):
    cases = len(data["load_cases"])
    columns, factors, limits = [], [], []
    for limit in data["displacement_limits"]:
        nodes = ids if limit["nodes"] == "all" else limit["nodes"]
        for node in nodes:
            for axis in limit["dirs"]:
                if column[ids.index(node), axis] < 0:
                    continue
                for case in range(cases):
                    columns.append(column[ids.index(node), axis])
                    factors.append(np.eye(cases)[case])
                    limits.append(limit["limit"])
    shape = (len(limits), free)
    entries = (np.ones(len(limits)), (np.arange(len(limits)), np.array(columns, dtype=int)))
    rows = sparse.csr_array(entries, shape=shape) if limits else sparse.csr_array((0, free))
    return rows, np.array(factors).reshape(-1, cases), np.array(limits, dtype=float)
