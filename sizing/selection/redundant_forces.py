"""Member forces through redundant forces: what the sections left in a box allow, and back.

N_t = N0_t + D + Z X_t for each distinct combination t of load cases, with N0 in equilibrium with
the loads at middle weights, D the forces from the deviation of the weights, Z the states of
self-stress and X a few redundant forces. Compatibility Zᵀ(L N / EA) = 0 makes X a ratio of sums
that are linear in r = 1/EA, so ranges of sections give ranges of X (Dinkelbach 1967, Management
Science 13:492-498, for the greatest ratio); ranges of X give ranges of member forces, which strike
sections. The formulas stand in ``certificate.py``; they are coded apart from the checker on
purpose.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from sizing.selection.certificate import LIFT, ForceBasis, Ladders, lifted_resistances
from sizing.selection.problem import SizingProblem

FloatArray = NDArray[np.float64]
IntArray = NDArray[np.intp]
BoolArray = NDArray[np.bool_]

ROOM = 2e-11
"""Forces are widened by this share of the greatest: more than the checker's own allowance, so
that the checker finds at least what was found here."""

WIDENING = 2e-9
"""Relative widening of the bounds on redundant forces, more than the checker's."""

PASSES = 2
"""How often sections and forces narrow each other in one box; a third pass found little."""

RATIO_STEPS = 8
"""Most Newton steps for the greatest ratio; three or four reach it."""


def make_basis(problem: SizingProblem, reference: IntArray) -> ForceBasis:
    """Force basis of ``problem``, centred on the design ``reference`` (g,).

    N0 are the true forces of the reference, so that X = 0 there; the states of self-stress are
    orthonormal in its energy, so that X is measured alike in all of them.
    """
    B = np.asarray(problem.compatibility.toarray(), dtype=np.float64)
    free = B.shape[1]
    L = problem.length
    inside = problem.group[:, None] == np.arange(problem.groups)
    flexibility = L / problem.stiffness[reference][problem.group]
    # Forces from the orthogonal factors of the weighted compatibility matrix: no stiffness matrix
    # is formed, so they balance to rounding. N = D^-1/2 Q R^-T p with D = diag(L/EA).
    scaled = B / np.sqrt(flexibility)[:, None]
    Q, R = np.linalg.qr(scaled, mode="complete")
    root = np.sqrt(flexibility)[:, None]
    states = root**-1 * Q[:, free:]
    factors = np.unique(np.vstack([problem.strength_factors, problem.deflection_factors]), axis=0)
    weight = problem.weight[reference]
    unit = np.asarray(problem.self_weight_share @ (L[:, None] * inside))
    phi = factors @ problem.self_weight_factor
    loads = problem.loads @ factors.T + np.outer(unit @ weight, phi)
    right = np.hstack([loads, unit, problem.deflection_vectors.T.toarray()])
    forces = _balanced(B, root**-1 * Q[:, :free], R[:free], right)
    t, g = loads.shape[1], unit.shape[1]
    return ForceBasis(
        factors=factors,
        forces=forces[:, :t],
        own=forces[:, t : t + g],
        weight=weight,
        states=states,
        movement=forces[:, t + g :].T,
        passes=PASSES,
    )


def _balanced(B: FloatArray, basis: FloatArray, R: FloatArray, p: FloatArray) -> FloatArray:
    # Two steps of refinement bring equilibrium to rounding.
    N = basis @ np.linalg.solve(R.T, p)
    for _ in range(2):
        N = N + basis @ np.linalg.solve(R.T, p - B.T @ N)
    return np.asarray(N)


@dataclass(frozen=True, kw_only=True, slots=True)
class Rooms:
    """What each box (b) leaves: r (b, g) least and greatest, N0 (b, m, t), D >= 0 (b, m, t)."""

    least: FloatArray
    most: FloatArray
    N0: FloatArray
    D: FloatArray


class RedundantForces:
    """Narrows boxes by redundant forces and makes their inequalities."""

    def __init__(self, problem: SizingProblem, ladder: Ladders, basis: ForceBasis) -> None:
        self.problem = problem
        self.ladder = ladder
        self.basis = basis
        self.inside = (problem.group[:, None] == np.arange(problem.groups)).astype(np.float64)
        self.L = problem.length
        self.phi = basis.factors @ problem.self_weight_factor
        Z = basis.states
        self.count = (basis.factors.shape[0], Z.shape[1])
        self.flex = np.einsum("ik,il,i,ig->gkl", Z, Z, self.L, self.inside)
        self.lever = np.einsum("ik,i,ig->kig", Z, self.L, self.inside)
        tension, compression = lifted_resistances(problem)
        section = ladder.section[problem.group]
        members = np.arange(self.L.size)[:, None]
        self.tension = tension[members, section]
        self.compression = compression[members, section]
        self.strength = _places(problem.strength_factors, basis.factors)
        self.rows = np.flatnonzero(problem.deflection_limit > 0.0)
        self.row_factor = _places(problem.deflection_factors, basis.factors)[self.rows]
        self.of_group = [np.flatnonzero(problem.group == g) for g in range(problem.groups)]
        self.force_size = np.abs(basis.forces).max(axis=1) + 0.05 * np.abs(basis.forces).max()
        self.influence = (np.abs(Z) / self.force_size[:, None]).max(axis=0, initial=0.0)

    def reach(self) -> FloatArray:
        """Greatest |X| (t, k) of any design: N has no more energy than N0."""
        ladder, basis = self.ladder, self.basis
        stiffest = np.where(ladder.valid, ladder.flexibility, np.inf).min(axis=1)
        softest = np.where(ladder.valid, ladder.flexibility, 0.0).max(axis=1)
        away = np.where(ladder.valid, np.abs(ladder.weight - basis.weight[:, None]), 0.0)
        D = np.abs(basis.own) @ away.max(axis=1)
        N = np.abs(basis.forces) + np.outer(D, np.abs(self.phi))
        energy = np.einsum("it,i->t", N**2, self.L * (self.inside @ softest))
        if self.count[1] == 0:
            return np.zeros(self.count)
        least = np.linalg.eigvalsh(np.einsum("g,gkl->kl", stiffest, self.flex))[0]
        reach = 2.0 * np.sqrt(energy / least) * (1.0 + 10.0 * WIDENING)
        return np.repeat(reach[:, None], self.count[1], axis=1)

    def narrow(self, mask: BoolArray, low: FloatArray, high: FloatArray) -> BoolArray:
        """Narrow sections (b, g, s) and forces (b, t, k) in place; return boxes left empty."""
        empty = np.zeros(mask.shape[0], dtype=bool)
        for _ in range(self.basis.passes):
            empty |= ~_filled(mask)
            rooms = self.rooms(mask, low, high)
            self._enclose(rooms, low, high)
            empty |= np.any(low > high, axis=(1, 2))
            self._strike(mask, *self.member_forces(rooms, low, high))
        return empty | ~_filled(mask)

    def rooms(self, mask: BoolArray, low: FloatArray, high: FloatArray) -> Rooms:
        """Return the ranges that the sections in ``mask`` leave."""
        ladder, basis = self.ladder, self.basis
        filled = mask.any(axis=2)
        least = np.where(mask, ladder.flexibility, np.inf).min(axis=2)
        most = np.where(mask, ladder.flexibility, -np.inf).max(axis=2)
        light = np.where(mask, ladder.weight, np.inf).min(axis=2)
        heavy = np.where(mask, ladder.weight, -np.inf).max(axis=2)
        least, most = np.where(filled, least, 1.0), np.where(filled, most, 1.0)
        light, heavy = np.where(filled, light, 0.0), np.where(filled, heavy, 0.0)
        N0 = np.broadcast_to(basis.forces, (mask.shape[0], *basis.forces.shape))
        D = np.zeros((mask.shape[0], self.L.size, 1))
        if (self.phi != 0.0).any():
            shift = ((light + heavy) / 2.0 - basis.weight) @ basis.own.T
            N0 = N0 + shift[:, :, None] * self.phi
            D = (((heavy - light) / 2.0) @ np.abs(basis.own).T)[:, :, None] * np.abs(self.phi)
        reach = np.maximum(np.abs(low), np.abs(high))
        size = np.abs(N0).max(axis=1) + reach @ np.abs(basis.states).max(axis=0)
        return Rooms(least=least, most=most, N0=N0, D=D + ROOM * size[:, None, :])

    def member_forces(
        self, rooms: Rooms, low: FloatArray, high: FloatArray
    ) -> tuple[FloatArray, FloatArray]:
        """Least and greatest member forces (b, m, t)."""
        Z = self.basis.states
        middle = rooms.N0 + Z @ ((low + high) / 2.0).transpose(0, 2, 1)
        half = rooms.D + np.abs(Z) @ ((high - low) / 2.0).transpose(0, 2, 1)
        return middle - half, middle + half

    def _numerator(
        self, rooms: Rooms, k: int, low: FloatArray, high: FloatArray
    ) -> tuple[FloatArray, FloatArray]:
        # Σ over members of the group of Z L (N0 + D), and the other redundants' share.
        middle = np.einsum("ig,bit->bgt", self.lever[k], rooms.N0)
        half = np.einsum("ig,bit->bgt", np.abs(self.lever[k]), rooms.D)
        least, most = middle - half, middle + half
        for other in range(self.count[1]):
            if other != k:
                b = self.flex[:, k, other][None, :, None]
                one, two = b * low[:, None, :, other], b * high[:, None, :, other]
                least += np.minimum(one, two)
                most += np.maximum(one, two)
        return least, most

    def _enclose(self, rooms: Rooms, low: FloatArray, high: FloatArray) -> None:
        for k in range(self.count[1]):
            least, most = self._numerator(rooms, k, low, high)
            b = self.flex[:, k, k][None, :, None]
            high[:, :, k] = np.minimum(high[:, :, k], _greatest_ratio(rooms, -least, b))
            low[:, :, k] = np.maximum(low[:, :, k], -_greatest_ratio(rooms, most, b))

    def _strike(self, mask: BoolArray, least: FloatArray, most: FloatArray) -> None:
        duration = self.problem.duration
        for k in np.unique(duration):
            t = np.unique(self.strength[duration == k])
            pull = least[:, :, t].max(axis=2)
            push = -most[:, :, t].min(axis=2)
            for g, members in enumerate(self.of_group):
                fits = pull[:, members, None] <= self.tension[members][:, :, k]
                fits &= push[:, members, None] <= self.compression[members][:, :, k]
                mask[:, g] &= fits.all(axis=1)

    def movements(self, least: FloatArray, most: FloatArray) -> tuple[FloatArray, FloatArray]:
        """Coefficients c of r and right sides in Σ r c >= right for both senses of every row.

        (b, 2·rows, g) and (2·rows,), the two senses of a row side by side.
        """
        M = self.basis.movement[self.rows]
        least, most = least[:, :, self.row_factor], most[:, :, self.row_factor]
        least, most = least.transpose(0, 2, 1), most.transpose(0, 2, 1)
        one, two = M * least, M * most
        room = ROOM * np.abs(M).max(axis=1, initial=0.0)[:, None]
        room = room * np.maximum(np.abs(least), np.abs(most))
        with_vector = (np.minimum(one, two) - room) * self.L
        against = (-np.maximum(one, two) - room) * self.L
        both = np.stack([with_vector, against], axis=2) @ self.inside
        limit = self.problem.deflection_limit[self.rows] * (1.0 + LIFT)
        shape = (both.shape[0], 2 * self.rows.size, both.shape[3])
        return -both.reshape(shape), -np.repeat(limit, 2)

    def spread_by_group(self, rooms: Rooms, low: FloatArray, high: FloatArray) -> FloatArray:
        """How much each group's range moves the member forces (b, g), as a share of them.

        First order about the middle of the box.
        """
        if self.count[1] == 0:
            return np.zeros(rooms.least.shape)
        middle = (low + high) / 2.0
        a = np.einsum("kig,bit->bgtk", self.lever, rooms.N0)
        misfit = a + np.einsum("gkl,btl->bgtk", self.flex, middle)
        F = np.einsum("bg,gkl->bkl", (rooms.least + rooms.most) / 2.0, self.flex)
        moved = np.einsum("bkl,bgtl->bgtk", np.linalg.inv(F), misfit)
        moved *= ((rooms.most - rooms.least) / 2.0)[:, :, None, None]
        return np.asarray((np.abs(moved) * self.influence).max(axis=(2, 3)))


def _greatest_ratio(rooms: Rooms, over: FloatArray, under: FloatArray) -> FloatArray:
    least, most = rooms.least[:, :, None], rooms.most[:, :, None]
    r = np.broadcast_to((least + most) / 2.0, over.shape)
    ratio = np.full(over.shape[::2], -np.inf)
    for _ in range(RATIO_STEPS):
        bottom = (r * under).sum(axis=1)
        known, ratio = ratio, (r * over).sum(axis=1) / bottom
        if (ratio <= known).all():
            break
        r = np.where(over > ratio[:, None, :] * under, most, least)
    size = (r * np.abs(over)).sum(axis=1) / (r * under).sum(axis=1)
    return np.asarray(ratio + WIDENING * size)


def _filled(mask: BoolArray) -> BoolArray:
    return np.asarray(np.all(np.any(mask, axis=2), axis=1))


def _places(wanted: FloatArray, known: FloatArray) -> IntArray:
    same = (wanted[:, None, :] == known[None, :, :]).all(axis=2)
    return np.asarray(same.argmax(axis=1))
