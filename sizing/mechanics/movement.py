"""One movement that strains no member, as a record, and what counts as no movement."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Literal

import numpy as np
from scipy.linalg import qr

from sizing.mechanics.geometry import FloatArray, Geometry

DEPENDENT = 1e-8
"""Length left of a unit movement, after taking out those found before, that counts as nothing."""

STOPS = 1e-6
"""Stretch of a thought member over the greatest movement, above which it stops the movement."""

Kind = Literal["node", "rigid", "linkage"]


@dataclass(frozen=True, kw_only=True)
class Mechanism:
    """One movement that strains no member, scaled to a greatest node movement of 1.

    ``movement`` (j, d); ``nodes`` the nodes that move; ``stop`` two nodes between which one
    member would stop it (None: none was found); ``panel`` the open panel around them, in order.
    ``whole`` tells whether a rigid movement takes the entire truss.
    """

    kind: Kind
    movement: FloatArray
    nodes: tuple[int, ...]
    stop: tuple[int, int] | None = None
    panel: tuple[int, int, int, int] | None = None
    whole: bool = False


def _movement(geometry: Geometry, free_values: FloatArray) -> FloatArray:
    """Return (j, d), greatest node movement 1, greatest component positive."""
    full = np.zeros(geometry.nodes * geometry.dimensions)
    full[geometry.free] = free_values
    moved = full.reshape(geometry.nodes, geometry.dimensions)
    moved = moved / np.linalg.norm(moved, axis=1).max()
    moved[np.abs(moved) < DEPENDENT] = 0.0
    return np.asarray(moved * np.sign(moved.ravel()[np.argmax(np.abs(moved))]))


def mechanism_of(geometry: Geometry, kind: Kind, free_values: FloatArray) -> Mechanism:
    """Return the record of a movement given on the free displacements (n,)."""
    movement = _movement(geometry, free_values)
    moving = np.flatnonzero(np.linalg.norm(movement, axis=1) > STOPS)
    return Mechanism(kind=kind, movement=movement, nodes=tuple(int(i) for i in moving))


def sparsest(basis: FloatArray) -> FloatArray:
    """Return the same column space with a unit matrix in as many pivot rows: few entries."""
    if not basis.shape[1]:
        return basis
    _, _, pivots = qr(basis.T, pivoting=True)
    rows = np.sort(pivots[: basis.shape[1]])
    reduced: FloatArray = np.linalg.solve(basis[rows].T, basis.T).T
    reduced[np.abs(reduced) < DEPENDENT] = 0.0
    return reduced
