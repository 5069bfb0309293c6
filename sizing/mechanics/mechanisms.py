"""Movements of a truss that strain no member, sorted by kind, smallest culprit first.

Sizes: j nodes, d dimensions, m members, n free displacements, p movements.

1. One node: its members and supports do not span its free directions, so it moves alone.
2. A rigid body: a connected part moves as a whole because too few directions are held.
3. A linkage: what is left of the null space of B. Its basis is chosen so that each movement
   distorts one open panel (four members around a panel without a diagonal) where there is
   one; a member along that diagonal then stops the movement, for it would have to stretch.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from scipy import sparse

from sizing.mechanics.geometry import Geometry
from sizing.mechanics.linkages import linkages
from sizing.mechanics.loose_nodes import single_nodes
from sizing.mechanics.movement import Mechanism
from sizing.mechanics.null_space import null_space
from sizing.mechanics.rigid_bodies import rigid_bodies


@dataclass(frozen=True, kw_only=True)
class Mechanisms:
    """All independent movements (p of them) and how sound the diagram is otherwise.

    ``rank`` of B; ``redundants`` m − rank, the number of self-stress states; ``condition`` the
    square of greatest over least positive singular value of B (that of K with equal member
    stiffnesses); ``nearly_flat`` pairs (node, sine) of nodes whose members almost lie in one
    line or plane without support across it.
    """

    found: tuple[Mechanism, ...]
    rank: int
    redundants: int
    condition: float
    nearly_flat: tuple[tuple[int, float], ...]


def find_mechanisms(geometry: Geometry) -> Mechanisms:
    """Return every independent movement that strains no member.

    Raises ``SolverError`` when there are absurdly many (see ``null_space.MOST``) besides those
    of single nodes.
    """
    loose, complement, flat = single_nodes(geometry)
    reduced = sparse.csr_array(geometry.compatibility @ complement)
    null = null_space(reduced)
    rigid, known = rigid_bodies(geometry, complement)
    rest = null.basis - known @ (known.T @ null.basis)
    if rest.shape[1]:
        u, s, _ = np.linalg.svd(rest, full_matrices=False)
        rest = u[:, s > 0.5]  # a projection: its singular values are 0 and 1
    joint = linkages(geometry, complement @ rest)
    found = (*loose, *rigid, *joint)
    rank = geometry.free.size - len(found)
    return Mechanisms(
        found=found,
        rank=rank,
        redundants=geometry.members - rank,
        condition=(null.greatest / null.least) ** 2 if null.least else float("inf"),
        nearly_flat=flat,
    )
