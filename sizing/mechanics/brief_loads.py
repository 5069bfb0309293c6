"""From the validated brief to arrays: geometry, nodal loads per case, shares of self-weight.

Sizes: j nodes, d dimensions, m members, q load cases.
"""

from __future__ import annotations

import numpy as np
from scipy import sparse

from sizing.brief.model import Brief
from sizing.mechanics.geometry import FloatArray, Geometry, truss_geometry


def geometry_of(brief: Brief) -> Geometry:
    """Return the geometry of the brief's line diagram; raises as ``truss_geometry`` does."""
    held = np.zeros((len(brief.nodes), brief.dimensions), dtype=np.bool_)
    for support in brief.supports:
        held[support.node] |= support.held
    return truss_geometry(
        [node.position for node in brief.nodes],
        [member.start for member in brief.members],
        [member.end for member in brief.members],
        held,
    )


def case_loads(brief: Brief) -> FloatArray:
    """Return the nodal loads of every case (j, d, q) in N, without any self-weight."""
    loads = np.zeros((len(brief.nodes), brief.dimensions, len(brief.cases)))
    for q, case in enumerate(brief.cases):
        for node, components in case.nodal.items():
            loads[node, :, q] += components
    return loads


def combination_factors(brief: Brief) -> FloatArray:
    """Return the factor of every case in every combination (c, q), zero where left out."""
    factors = np.zeros((len(brief.combinations), len(brief.cases)))
    for c, combination in enumerate(brief.combinations):
        for q, factor in combination.factors.items():
            factors[c, q] = factor
    return factors


def self_weight_share(geometry: Geometry) -> sparse.csr_array:
    """Return h (j·d, m): the nodal load per unit weight of each member.

    Half of a member's weight goes to each end, downwards, that is against the last axis:
    nodal loads = h @ (weight of each member in N). Common practice for pin-jointed trusses; the
    bending of the member under its own weight is not covered.
    """
    m, d = geometry.members, geometry.dimensions
    rows = np.concatenate([geometry.start, geometry.end]) * d + (d - 1)
    columns = np.tile(np.arange(m), 2)
    values = np.full(2 * m, -0.5)
    return sparse.csr_array((values, (rows, columns)), shape=(geometry.nodes * d, m))
