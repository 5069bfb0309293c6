"""Energy cuts: inequalities linear in the choice that hold for every feasible design of a truss.

A requirement q·u <= d reads 4 q·u = c(F⁺) - c(F⁻) <= 4 d with F± = P/s ± s q and compliance
c(F) = Fᵀ K⁻¹ F. Where a box of section ranges is judged by a mean choice with mean stiffness Ā and
mean flexibility r̄ (r̄ >= 1/Ā), the best v is K(Ā)⁻¹F⁺ and the best forces R are those of the
stiffness 1/r̄, so the cut demands

    2 q·u(Ā) + 2 q·u(1/r̄) - ΔcP/s² - s² Δcq <= 4 d,   Δc = c(1/r̄) - c(Ā) >= 0

and is strongest with s⁴ = ΔcP/Δcq (derived here). The derivation of the cut itself,
with self-weight, stands in ``certificate.py``. Requirements that agree in every design (symmetric
members or movements) are replaced by their mean, which drops the part of c(q) that the load cannot
excite.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from sizing.selection.certificate import LIFT, Ladders, lifted_resistances
from sizing.selection.problem import SizingProblem

FloatArray = NDArray[np.float64]
IntArray = NDArray[np.intp]
BoolArray = NDArray[np.bool_]

SAME_DIGITS = 9
"""Decimals to which movements and limits must agree for requirements to count as symmetric. A
mistake would cost strength, never validity: a mean of requirements is a requirement."""

PROBES = 3
"""Designs at which requirements are compared; two that agree at three chance designs agree."""

EXACT_SHARE = 1e-9
"""Part of c added to Δc, so that the scale stays defined where Ā = 1/r̄."""

SHORTLIST = 24
"""Requirements of a box examined closely after a first look at all of them."""


@dataclass(frozen=True, kw_only=True, slots=True)
class Requirements:
    """q·u <= d: vector (j, n), factor index (j,), own group (j,) or -1, limit (j, s) by ladder.

    ``members_of`` lists the basic requirement numbers (see Certificate) averaged in each.
    """

    vector: FloatArray
    factor: IntArray
    group: IntArray
    limit: FloatArray
    members_of: tuple[IntArray, ...]
    factors: FloatArray


@dataclass(kw_only=True, slots=True)
class Cuts:
    """Energy cuts in boxes (b, k): Σ_g EA α + β/EA + ω w + 4·scale·limit >= right.

    Every cut is divided by ``size`` to make its terms of order one; square (b, k) is its s².
    """

    alpha: FloatArray
    beta: FloatArray
    omega: FloatArray
    right: FloatArray
    size: FloatArray
    requirement: IntArray
    square: FloatArray


class EnergyCuts:
    """Makes energy cuts for batches of boxes of one problem."""

    def __init__(self, problem: SizingProblem, ladder: Ladders) -> None:
        self.problem = problem
        self.ladder = ladder
        self.B = np.asarray(problem.compatibility.toarray(), dtype=np.float64)
        self.inside = (problem.group[:, None] == np.arange(problem.groups)).astype(np.float64)
        self.per_length = self.inside / problem.length[:, None]
        weighted = self.B / problem.length[:, None]
        self.group_stiffness = np.array(
            [
                self.B[problem.group == g].T @ weighted[problem.group == g]
                for g in range(problem.groups)
            ]
        )
        lengths = problem.length[:, None] * self.inside
        self.unit_weight = np.asarray(problem.self_weight_share @ lengths)
        self.requirements = self._requirements()
        self.phi = self.requirements.factors @ problem.self_weight_factor
        self.self_weight = bool((self.phi != 0.0).any())
        self.P = problem.loads @ self.requirements.factors.T
        self.own = self._own_forces() if self.self_weight else np.zeros((0, 0))

    def _requirements(self) -> Requirements:
        basic = _basic_requirements(self.problem, self.ladder, self.B)
        values = self._probe(basic)
        size = np.abs(values).max(axis=0, initial=1e-300)
        rounded = np.round(values / size, SAME_DIGITS) + 0.0
        greatest = basic.limit.max(axis=1, keepdims=True, initial=1e-300)
        shape = np.round(basic.limit / greatest, SAME_DIGITS)
        merged: dict[tuple[int, int, bytes, bytes], list[int]] = {}
        for j in range(basic.group.size):
            place = (int(basic.group[j]), int(basic.factor[j]))
            key = (*place, rounded[j].tobytes(), shape[j].tobytes())
            merged.setdefault(key, []).append(j)
        places = [np.array(found) for found in merged.values()]
        first = np.array([found[0] for found in places], dtype=np.intp)
        n = self.B.shape[1]
        return Requirements(
            vector=np.array([basic.vector[k].mean(axis=0) for k in places]).reshape(-1, n),
            factor=basic.factor[first],
            group=basic.group[first],
            limit=np.array([basic.limit[k].mean(axis=0) for k in places]).reshape(
                -1, basic.limit.shape[1]
            ),
            members_of=tuple(np.concatenate([basic.members_of[int(j)] for j in k]) for k in places),
            factors=basic.factors,
        )

    def _probe(self, basic: Requirements) -> FloatArray:
        chance = np.random.default_rng(0)
        ladder = self.ladder
        low, high = ladder.stiffness[:, 0], ladder.stiffness[:, -1]
        values = np.empty((basic.group.size, PROBES))
        for probe in range(PROBES):
            stiffness = low * (high / low * 1.1) ** chance.uniform(size=low.size)
            K = np.tensordot(stiffness, self.group_stiffness, axes=1)
            own = np.outer(self.unit_weight @ stiffness, self.problem.self_weight_factor)
            relative = np.abs(self.problem.loads).max() / (np.abs(own).max() + 1e-300)
            u = np.linalg.solve(K, self.problem.loads + own * relative) @ basic.factors.T
            values[:, probe] = np.einsum("jn,nj->j", basic.vector, u[:, basic.factor])
        return values

    def _own_forces(self) -> FloatArray:
        # Any forces in equilibrium with the unit weights do; these are elastic ones.
        ladder = self.ladder
        middle = np.sqrt(ladder.stiffness[:, 0] * ladder.stiffness[:, -1])
        K = np.tensordot(middle, self.group_stiffness, axes=1)
        u = np.linalg.solve(K, self.unit_weight)
        k = (self.inside @ middle / self.problem.length)[:, None]
        return np.asarray(k * (self.B @ u))

    def separate(
        self,
        stiffness: FloatArray,
        flexibility: FloatArray,
        mask: BoolArray,
        count: int,
    ) -> tuple[Cuts, FloatArray]:
        """Cuts most violated by mean choices (b, g); also (b, g) the weights they refer to."""
        need = self.requirements
        problem, boxes = self.problem, np.arange(stiffness.shape[0])[:, None]
        inner = np.linalg.inv(np.tensordot(stiffness, self.group_stiffness, axes=1))
        outer = np.linalg.inv(np.tensordot(1.0 / flexibility, self.group_stiffness, axes=1))
        weight, spread, away = self._self_weight_room(mask, flexibility)
        P = self.P[None]
        if self.self_weight:
            P = P + (weight @ self.unit_weight.T)[:, :, None] * self.phi
        u_in, u_out = inner @ P, outer @ P
        P = np.broadcast_to(P, u_in.shape)
        j = self._shortlist(u_in, u_out, stiffness, flexibility, mask)
        q = need.vector[j]
        factor = need.factor[j]
        z_in, z_out = q @ inner, q @ outer
        cP_in = np.einsum("bnf,bnf->bf", P, u_in)[boxes, factor]
        cP_out = np.einsum("bnf,bnf->bf", P, u_out)[boxes, factor]
        cq_in = np.einsum("bkn,bkn->bk", q, z_in)
        cq_out = np.einsum("bkn,bkn->bk", q, z_out)
        move_in = np.einsum("bkn,bkn->bk", q, u_in.transpose(0, 2, 1)[boxes, factor])
        move_out = np.einsum("bkn,bkn->bk", q, u_out.transpose(0, 2, 1)[boxes, factor])
        dP = np.maximum(cP_out - cP_in, 0.0) + EXACT_SHARE * cP_in
        dq = np.maximum(cq_out - cq_in, 0.0) + EXACT_SHARE * cq_in
        usable = (dP > 0.0) & (dq > 0.0)
        demand = (move_in + move_out - np.sqrt(dP * dq)) / 2.0
        demand = demand / self._mean_limit(j, stiffness, flexibility, mask)
        order = np.argsort(np.where(usable, -demand, np.inf), axis=1, kind="stable")[:, :count]
        j, factor, usable = j[boxes, order], factor[boxes, order], usable[boxes, order]
        square = np.where(usable, np.sqrt(dP / np.where(dq > 0.0, dq, 1.0))[boxes, order], 1.0)
        s = np.sqrt(square)[:, :, None]
        plus = u_in.transpose(0, 2, 1)[boxes, factor] / s + s * z_in[boxes, order]
        minus = u_out.transpose(0, 2, 1)[boxes, factor] / s - s * z_out[boxes, order]
        e_plus, e_minus = plus @ self.B.T, minus @ self.B.T
        alpha = (e_plus**2) @ self.per_length
        beta = ((e_minus**2) @ self.per_length) / (flexibility**2)[:, None, :]
        right = 2.0 * np.einsum("bkg,bg->bk", alpha, stiffness)
        omega = np.zeros((*alpha.shape[:2], 0))
        if self.self_weight:
            phi = (self.phi[factor][:, :, None]) / s
            R = e_minus / (self.problem.length * (flexibility @ self.inside.T)[:, None, :])
            omega = 2.0 * phi * (e_minus @ self.own - plus @ self.unit_weight)
            right = right + np.einsum("bkg,bg->bk", omega, weight)
            D = np.abs(phi) * (spread @ np.abs(self.own).T)[:, None, :]
            loss = np.abs(R) * problem.length * D * (away @ self.inside.T)[:, None, :]
            right = right - 2.0 * loss.sum(axis=2)
            beta = beta + (D**2 * problem.length) @ self.inside
        return self._scaled(alpha, beta, omega, right, (stiffness, j, square, usable)), weight

    def _scaled(
        self,
        alpha: FloatArray,
        beta: FloatArray,
        omega: FloatArray,
        right: FloatArray,
        source: tuple[FloatArray, IntArray, FloatArray, BoolArray],
    ) -> Cuts:
        # Divide every cut by its greatest term; one that is no use becomes 0 >= 0.
        need = self.requirements
        stiffness, j, square, usable = source
        right = right - np.where(need.group[j] < 0, 4.0 * need.limit[j, 0], 0.0)
        size = 2.0 * np.einsum("bkg,bg->bk", alpha, stiffness)
        usable = usable & (size > 0.0)
        live = np.where(usable, 1.0 / np.where(usable, size, 1.0), 0.0)
        return Cuts(
            alpha=alpha * live[:, :, None],
            beta=beta * live[:, :, None],
            omega=omega * live[:, :, None],
            right=right * live,
            size=np.where(usable, size, np.inf),
            requirement=j,
            square=square,
        )

    def tables(self, requirement: IntArray, size: FloatArray) -> tuple[IntArray, FloatArray]:
        """Own group (b, k), -1 for none, and 4·limit/size by ladder place (b, k, s)."""
        need = self.requirements
        live = (requirement >= 0) & np.isfinite(size)
        group = np.where(live, need.group[np.maximum(requirement, 0)], -1)
        factor = np.where(live, 4.0 / np.where(live, size, 1.0), 0.0)
        return group, need.limit[np.maximum(requirement, 0)] * factor[:, :, None]

    def _self_weight_room(
        self, mask: BoolArray, flexibility: FloatArray
    ) -> tuple[FloatArray, FloatArray, FloatArray]:
        # Middle weights, greatest deviation from them, greatest deviation from the flexibility.
        ladder = self.ladder
        if not self.self_weight:
            nothing = np.zeros(flexibility.shape)
            return nothing, nothing, nothing
        low = np.where(mask, ladder.weight, np.inf).min(axis=2)
        high = np.where(mask, ladder.weight, -np.inf).max(axis=2)
        middle = (low + high) / 2.0
        away = np.abs(ladder.flexibility - flexibility[:, :, None])
        return middle, (high - low) / 2.0, np.where(mask, away, 0.0).max(axis=2)

    def _nearest(self, stiffness: FloatArray, flexibility: FloatArray, mask: BoolArray) -> IntArray:
        # The ladder rises, so counting the sections below finds the place.
        middle = np.sqrt(stiffness / flexibility)
        place = (self.ladder.stiffness < middle[:, :, None]).sum(axis=2)
        first = mask.argmax(axis=2)
        last = mask.shape[2] - 1 - mask[:, :, ::-1].argmax(axis=2)
        return np.asarray(np.clip(place, first, last))

    def _mean_limit(
        self, j: IntArray, stiffness: FloatArray, flexibility: FloatArray, mask: BoolArray
    ) -> FloatArray:
        place = self._nearest(stiffness, flexibility, mask)
        need = self.requirements
        group = np.maximum(need.group[j], 0)
        at = place[np.arange(j.shape[0])[:, None], group]
        return np.asarray(need.limit[j, at])

    def _shortlist(
        self,
        u_in: FloatArray,
        u_out: FloatArray,
        stiffness: FloatArray,
        flexibility: FloatArray,
        mask: BoolArray,
    ) -> IntArray:
        need = self.requirements
        total = need.group.size
        if total <= SHORTLIST:
            return np.broadcast_to(np.arange(total), (stiffness.shape[0], total)).copy()
        mean = (u_in + u_out) / 2.0
        movement = np.empty((stiffness.shape[0], total))
        for f in range(need.factors.shape[0]):
            rows = np.flatnonzero(need.factor == f)
            movement[:, rows] = mean[:, :, f] @ need.vector[rows].T
        place = self._nearest(stiffness, flexibility, mask)
        limit = need.limit[np.arange(total), place[:, np.maximum(need.group, 0)]]
        first = np.argpartition(-movement / limit, SHORTLIST, axis=1)[:, :SHORTLIST]
        return np.sort(first, axis=1)


def _basic_requirements(problem: SizingProblem, ladder: Ladders, B: FloatArray) -> Requirements:
    """Every check of the problem as q·u <= d, in the numbering of the certificate."""
    tension, compression = lifted_resistances(problem)
    factors, index = np.unique(
        np.vstack([problem.strength_factors, problem.deflection_factors]),
        axis=0,
        return_inverse=True,
    )
    index = index.ravel()
    combinations = problem.strength_factors.shape[0]
    section, r = ladder.section[problem.group], ladder.flexibility[problem.group]
    members = np.arange(problem.length.size)
    vectors, factor, group, limits, numbers = [], [], [], [], []
    for k in range(combinations):
        for side, table in enumerate((tension, compression)):
            limit = table[members[:, None], section, problem.duration[k]]
            vectors.append((1.0 - 2.0 * side) * B)
            factor.append(np.full(members.size, index[k]))
            group.append(problem.group)
            limits.append(limit * r * problem.length[:, None])
            numbers.append(2 * (members * combinations + k) + side)
    rows = np.flatnonzero(problem.deflection_limit > 0.0)
    V = problem.deflection_vectors.toarray()[rows]
    for side in range(2):
        vectors.append((1.0 - 2.0 * side) * V)
        factor.append(index[combinations:][rows])
        group.append(np.full(rows.size, -1))
        limit = problem.deflection_limit[rows] * (1.0 + LIFT)
        limits.append(np.broadcast_to(limit[:, None], (rows.size, section.shape[1])))
        numbers.append(2 * (members.size * combinations + rows) + side)
    vector, limit = np.concatenate(vectors), np.concatenate(limits)
    usable = np.isfinite(limit).all(axis=1) & (np.abs(vector).max(axis=1, initial=0.0) > 0.0)
    chosen = np.flatnonzero(usable)
    number = np.concatenate(numbers)[chosen]
    return Requirements(
        vector=vector[chosen],
        factor=np.concatenate(factor)[chosen].astype(np.intp),
        group=np.concatenate(group)[chosen].astype(np.intp),
        limit=limit[chosen],
        members_of=tuple(number[k : k + 1] for k in range(chosen.size)),
        factors=factors,
    )
