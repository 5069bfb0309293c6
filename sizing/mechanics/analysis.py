"""Linear analysis of a truss for nodal loads, free elongations and support movements.

Sizes: j nodes, d dimensions, m members, q load cases, c combinations.

With e = B u the elongation and e⁰ what the member would lengthen by if left alone (α ΔT L for
temperature, positive when made too long), N = k (e − e⁰), k = EA/L, and Bᵀ N = P at the free
displacements. Hence K u = P + Bᵀ k (e⁰ − Bˢ s) with s the support movements; reactions follow
from equilibrium of the held directions, R = Bᵀ N − P there.
(Direct stiffness method: e.g. Hibbeler, Structural Analysis, ch. 14; Livesley.)
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from sizing.mechanics.geometry import FloatArray, Geometry
from sizing.mechanics.stiffness import Stiffness


@dataclass(frozen=True, kw_only=True)
class Analysis:
    """What the analysis found, per load case (or combination) q.

    displacement  (j, d, q)  m; support movements included
    force         (m, q)     N, tension positive
    reaction      (j, d, q)  N, of the support on the truss; 0 where not held
    load          (j, d, q)  N, as applied
    locked_force  (m, q)     N, −k (e⁰ − Bˢ s): member forces were every free node locked
    imbalance     (j, d, q)  N, Bᵀ N − load − reaction: 0 but for rounding
    """

    displacement: FloatArray
    force: FloatArray
    reaction: FloatArray
    load: FloatArray
    locked_force: FloatArray
    imbalance: FloatArray

    @property
    def residual(self) -> FloatArray:
        """(q,) greatest out-of-balance nodal force over the greatest nodal load or member force.

        The force that locked nodes would cause counts as well: a determinate truss that is
        heated has neither load nor member force.
        """
        parts = (self.load, self.force, self.locked_force)
        q = self.force.shape[-1]
        scale = np.max([np.abs(p.reshape(-1, q)).max(axis=0, initial=0.0) for p in parts], axis=0)
        worst = np.abs(self.imbalance.reshape(-1, q)).max(axis=0, initial=0.0)
        return np.asarray(worst / np.where(scale > 0, scale, 1.0))


def analyse(
    geometry: Geometry,
    axial_stiffness: FloatArray,
    loads: FloatArray,
    free_elongation: FloatArray | None = None,
    settlement: FloatArray | None = None,
    *,
    stiffness: Stiffness | None = None,
) -> Analysis:
    """Analyse every load case with one factorisation.

    ``axial_stiffness`` EA (m,) N; ``loads`` (j, d, q) N; ``free_elongation`` (m, q) m;
    ``settlement`` (j, d, q) m, movements imposed by supports, 0 where the node is not held.
    ``stiffness`` may bring a factorisation of the same EA/L already made.
    Raises ``UnstableTrussError`` for a mechanism (``stability.require_stable`` names the nodes
    that move), ``SolverError`` when the solution does not balance, ``ValueError`` for shapes
    that do not fit and for numbers that are not finite.
    """
    j, d, m = geometry.nodes, geometry.dimensions, geometry.members
    load = np.array(loads, dtype=np.float64)
    if load.ndim != 3 or load.shape[:2] != (j, d):
        raise ValueError(f"loads must be ({j}, {d}, cases), not {load.shape}")
    if not np.isfinite(load).all():
        raise ValueError("loads hold a number that is not finite")
    q = load.shape[2]
    free_e = _given(free_elongation, (m, q), "free_elongation")
    moved = _given(settlement, (j, d, q), "settlement")
    if np.any(moved[~geometry.held] != 0.0):
        raise ValueError("settlement moves a node in a direction that no support holds")

    K = stiffness if stiffness is not None else stiffness_of(geometry, axial_stiffness)
    k = K.member_stiffness[:, None]
    B = geometry.full_compatibility
    p = load.reshape(j * d, q)
    s = moved.reshape(j * d, q)

    locked = k * (B @ s - free_e)
    u = s.copy()
    u[geometry.free] = K.solve(p[geometry.free] - geometry.compatibility.T @ locked)
    force = k * (B @ u - free_e)
    internal = B.T @ force
    reaction = np.where(geometry.held.ravel()[:, None], internal - p, 0.0)
    shape = (j, d, q)
    return Analysis(
        displacement=u.reshape(shape),
        force=force,
        reaction=reaction.reshape(shape),
        load=load,
        locked_force=locked,
        imbalance=(internal - p - reaction).reshape(shape),
    )


def stiffness_of(geometry: Geometry, axial_stiffness: FloatArray) -> Stiffness:
    """Return the factorised stiffness for EA (m,) in N; raises as ``Stiffness`` does."""
    EA = np.asarray(axial_stiffness, dtype=np.float64)
    if EA.shape != (geometry.members,):
        raise ValueError(f"EA must be ({geometry.members},), not {EA.shape}")
    return Stiffness(geometry.compatibility, EA / geometry.length)


def combine(factors: FloatArray, analysis: Analysis) -> Analysis:
    """Return the analysis of each combination: Σ_q factors[c, q] × case q, factors (c, q)."""
    f = np.asarray(factors, dtype=np.float64).T
    return Analysis(
        displacement=analysis.displacement @ f,
        force=analysis.force @ f,
        reaction=analysis.reaction @ f,
        load=analysis.load @ f,
        locked_force=analysis.locked_force @ f,
        imbalance=analysis.imbalance @ f,
    )


def _given(array: FloatArray | None, shape: tuple[int, ...], name: str) -> FloatArray:
    if array is None:
        return np.zeros(shape)
    given = np.asarray(array, dtype=np.float64)
    if given.shape != shape:
        raise ValueError(f"{name} must be {shape}, not {given.shape}")
    if not np.isfinite(given).all():
        raise ValueError(f"{name} holds a number that is not finite")
    return given
