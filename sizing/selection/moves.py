"""Moves of one, two or three groups from a design, judged by the local model.

In the local model the slack of every check is a sum over the groups,

    slack(move a, b, c) = slack + change_a + change_b + change_c,

so that all pairs and triples are judged by adding a few vectors. Only checks that some triple of
moves could break are looked at.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from sizing.selection.choices import Choices
from sizing.selection.linearisation import Linearisation

FloatArray = NDArray[np.float64]
IntArray = NDArray[np.intp]
BoolArray = NDArray[np.bool_]

SLIGHT = 0.01
"""Predicted excess at which a cheaper design is still worth looking at."""

MOST_TRIPLES = 3_000_000
"""Triples of moves beyond which only pairs are judged."""

CHUNK = 8_000_000
"""Entries judged at once."""


@dataclass(frozen=True, kw_only=True, slots=True)
class Candidate:
    """A design reached by moves, what it saves, and the excess that the model predicts."""

    sections: IntArray
    saving: float
    excess: float


def candidates(
    model: Linearisation, choices: Choices, centre: IntArray, most: int
) -> list[Candidate]:
    """Return up to ``most`` cheaper designs, those predicted feasible first, dearest saving first.

    ``choices`` holds the sections that a move may take.
    """
    problem = model.problem
    moves = np.flatnonzero(choices.section != centre[choices.group])
    saving = problem.cost[choices.group, centre[choices.group]] - choices.cost(problem)
    slack, change = _slacks(model, choices, centre, moves)
    group, saving = choices.group[moves], saving[moves]
    sets = _sets(group, saving)
    excess = _excess(slack, change, sets)
    total = np.where(sets >= 0, saving[np.maximum(sets, 0)], 0.0).sum(axis=1)
    good = np.flatnonzero(excess <= SLIGHT)
    late = np.maximum(excess[good], 0.0)
    order = good[np.lexsort((-total[good], np.round(late, 3)))][:most]
    found = []
    for k in order:
        sections = centre.copy()
        for move in sets[k][sets[k] >= 0]:
            sections[group[move]] = choices.section[moves[move]]
        found.append(Candidate(sections=sections, saving=float(total[k]), excess=float(excess[k])))
    return found


def _sets(group: IntArray, saving: FloatArray) -> IntArray:
    # Index sets (k, 3) of moves of different groups that save something; -1 fills up.
    n = group.size
    single = np.column_stack([np.arange(n), np.full((n, 2), -1)])
    a, b = np.triu_indices(n, 1)
    apart = group[a] != group[b]
    a, b = a[apart], b[apart]
    pairs = np.column_stack([a, b, np.full(a.size, -1)])
    sets = [single, pairs]
    if a.size * n <= 3 * MOST_TRIPLES:
        pair, c = np.nonzero(np.arange(n) > b[:, None])
        fresh = (group[c] != group[a[pair]]) & (group[c] != group[b[pair]])
        pair, c = pair[fresh], c[fresh]
        sets.append(np.column_stack([a[pair], b[pair], c]))
    every = np.asarray(np.concatenate(sets), dtype=np.intp)
    total = np.where(every >= 0, saving[np.maximum(every, 0)], 0.0).sum(axis=1)
    return np.asarray(every[total > SMALLEST_SAVING * np.abs(saving).max(initial=0.0)])


SMALLEST_SAVING = 1e-9
"""Saving, relative to the greatest of a single move, that is rounding."""


def _slacks(
    model: Linearisation, choices: Choices, centre: IntArray, moves: IntArray
) -> tuple[FloatArray, FloatArray]:
    # Slack (e,) of every check at the centre and its change (moves, e), over the limits.
    problem = model.problem
    forces, movements = model.forces, model.movements
    tension, compression = model.analysis.resistances(centre)
    size = np.maximum(np.maximum(tension, compression), np.abs(forces).max() * 1e-6)
    limit = np.where(problem.deflection_limit > 0.0, problem.deflection_limit, 1.0)
    slack = np.concatenate(
        [
            ((tension - forces) / size).ravel(),
            ((compression + forces) / size).ravel(),
            (problem.deflection_limit - movements) / limit,
            (problem.deflection_limit + movements) / limit,
        ]
    )
    change = np.empty((moves.size, slack.size))
    for place, v in enumerate(moves):
        moved, shifted = model.change(choices, int(v))
        changed = centre.copy()
        changed[choices.group[v]] = choices.section[v]
        t, c = model.analysis.resistances(changed)
        change[place] = np.concatenate(
            [
                ((t - tension - moved) / size).ravel(),
                ((c - compression + moved) / size).ravel(),
                -shifted / limit,
                shifted / limit,
            ]
        )
    worst = np.sort(np.minimum(change, 0.0), axis=0)[:3].sum(axis=0)
    matters = slack + worst < 0.0
    return slack[matters], change[:, matters]


def _excess(slack: FloatArray, change: FloatArray, sets: IntArray) -> FloatArray:
    table = np.vstack([change, np.zeros(slack.size)]).astype(np.float32)
    base = slack.astype(np.float32)
    excess = np.zeros(sets.shape[0])
    if slack.size == 0:
        return excess
    step = max(1, CHUNK // slack.size)
    for first in range(0, sets.shape[0], step):
        part = sets[first : first + step]
        left = base + table[part[:, 0]] + table[part[:, 1]] + table[part[:, 2]]
        excess[first : first + step] = -left.min(axis=1)
    return excess
