"""What can be said of a brief before any section is chosen: loads, reactions, determinacy, lengths.

Sizes: j nodes, d dimensions, q load cases, h directions held.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass

import numpy as np

from sizing.brief.model import Brief, LoadCase
from sizing.mechanics.analysis import analyse
from sizing.mechanics.brief_loads import case_loads, geometry_of
from sizing.mechanics.geometry import FloatArray, Geometry
from sizing.mechanics.stability import Determinacy, determinacy, nearly_flat_text, require_stable

SAME_RANK = 1e-9
"""Singular value of the equilibrium of the whole, over the greatest, that counts as none."""


@dataclass(frozen=True, kw_only=True)
class CaseOutline:
    """One load case: the resultant of its nodal loads in N, and the reactions by node index.

    ``reactions`` act on the truss, d components in N, without self-weight; None where they
    depend on the sections.
    """

    case: LoadCase
    total: tuple[float, ...]
    reactions: Mapping[int, tuple[float, ...]] | None


@dataclass(frozen=True, kw_only=True)
class LongestLength:
    """The longest buckling lengths of a group in m, each with the member that has it."""

    group: str
    in_plane: float
    in_plane_member: str
    out_of_plane: float
    out_of_plane_member: str


@dataclass(frozen=True, kw_only=True)
class Outline:
    """Everything that follows from the brief alone.

    ``reactions_from`` says what the reactions rest on: ``equilibrium of the whole``,
    ``equilibrium of the nodes``, or empty where they depend on the sections.
    """

    brief: Brief
    count: Determinacy
    reactions_from: str
    cases: tuple[CaseOutline, ...]
    lengths: tuple[LongestLength, ...]
    cautions: tuple[str, ...]


def outline_of(brief: Brief) -> Outline:
    """Return the outline of a stable truss; raises :class:`UnstableTrussError` for others."""
    geometry = geometry_of(brief)
    names = [node.name for node in brief.nodes]
    mechanisms = require_stable(geometry, names)
    count = determinacy(geometry, mechanisms)
    loads = case_loads(brief)
    reactions, basis = _reactions(geometry, loads, count)
    held = sorted({support.node for support in brief.supports})
    return Outline(
        brief=brief,
        count=count,
        reactions_from=basis,
        cases=tuple(
            CaseOutline(
                case=case,
                total=tuple(loads[:, :, q].sum(axis=0).tolist()),
                reactions=None
                if reactions is None
                else {node: tuple(reactions[node, :, q].tolist()) for node in held},
            )
            for q, case in enumerate(brief.cases)
        ),
        lengths=_longest(brief),
        cautions=(*brief.cautions, *nearly_flat_text(mechanisms, names)),
    )


def _reactions(
    geometry: Geometry, loads: FloatArray, count: Determinacy
) -> tuple[FloatArray | None, str]:
    """Return the reactions (j, d, q) and what they rest on; None where stiffness decides."""
    whole = rigid_reactions(geometry, loads)
    if whole is not None:
        return whole, "equilibrium of the whole"
    if count.determinate:  # forces and reactions are then the same for any stiffness
        return analyse(geometry, np.ones(geometry.members), loads).reaction, (
            "equilibrium of the nodes"
        )
    return None, ""


def rigid_reactions(geometry: Geometry, loads: FloatArray) -> FloatArray | None:
    """Return the reactions (j, d, q) that balance ``loads`` (j, d, q) on a rigid body.

    Σ R = −Σ P and Σ r × R = −Σ r × P, with 3 equations in a plane and 6 in space. None when more
    directions are held than that settles.
    """
    j, d = geometry.nodes, geometry.dimensions
    whole = _force_and_moment(geometry)  # (3 or 6, j·d)
    held = geometry.held.ravel()
    G = whole[:, held]
    if G.shape[1] > G.shape[0]:
        return None
    s = np.linalg.svd(G, compute_uv=False)
    if s.size < G.shape[1] or s[-1] <= SAME_RANK * s[0]:
        return None
    q = loads.shape[2]
    P = loads.reshape(j * d, q)
    R = np.zeros((j * d, q))
    R[held] = np.linalg.lstsq(G, -whole @ P, rcond=None)[0]
    return R.reshape(j, d, q)


def _force_and_moment(geometry: Geometry) -> FloatArray:
    """Return the map (3 or 6, j·d) from nodal forces to their resultant and moment."""
    j, d = geometry.nodes, geometry.dimensions
    x = geometry.position - geometry.position.mean(axis=0)
    x = x / np.abs(x).max()
    rows = [np.tile(np.eye(d)[a], (j, 1)) for a in range(d)]
    for a, b in [(0, 1)] if d == 2 else [(0, 1), (0, 2), (1, 2)]:
        turn = np.zeros((j, d))
        turn[:, a], turn[:, b] = -x[:, b], x[:, a]
        rows.append(turn)
    return np.array([row.ravel() for row in rows])


def _longest(brief: Brief) -> tuple[LongestLength, ...]:
    found = []
    for group in brief.groups:
        lengths = {i: brief.buckling_lengths(i) for i in group.members}
        inside = max(lengths, key=lambda i: lengths[i][0])
        outside = max(lengths, key=lambda i: lengths[i][1])
        found.append(
            LongestLength(
                group=group.name,
                in_plane=lengths[inside][0],
                in_plane_member=brief.members[inside].name,
                out_of_plane=lengths[outside][1],
                out_of_plane_member=brief.members[outside].name,
            )
        )
    return tuple(found)
