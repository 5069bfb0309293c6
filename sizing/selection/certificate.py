"""The data of a proof that nothing lighter exists, and its checker.

The checker shares no code with the search: it needs the problem and the certificate only. A
proof is a tree. Its root is the whole space, every allowed section of every group; a split parts
the sections of one group in two, so the leaves cover the whole space whatever the numbers say.
Every node may name valid inequalities with multipliers λ >= 0. With columns c[g,s] and
Σ_g c[g, s_g] >= rhs for every feasible design inside the node, the Lagrangian

    bound = Σ_g min over s of (cost[g,s] - Σ λ c[g,s]) + Σ λ rhs

is a lower bound on the objective there; it closes the node (bound >= claim) or strikes the
sections with which it would be closed. A node that is neither closed nor split refutes the proof.

Inequalities, each recomputed here from first principles (r = 1/EA; elongation e = B u):

* Energy cut, from q·u <= d and 4 q·u = c(F⁺) - c(F⁻), F± = P/s ± s q, c(F) = Fᵀ K⁻¹ F. For any v,
  c(F⁺) >= 2 F⁺·v - vᵀKv (linear in EA); for any forces R in equilibrium with F⁻,
  c(F⁻) <= Σ R² L r (linear in r). So Σ_g EA α_g + r β_g + 4 d(s) >= 2 F⁺·v.
  Self-weight: F⁺ is linear in the weights w as it stands. R gains D = Σ_h (w_h - w̄_h) G_h with G
  in equilibrium with the unit self-weight; R² r + 2 R D r + D² r with r = r̄ + ρ is
  <= R² r + 2 R D r̄ + 2 |R| D̂ ρ̂ + D̂² r, D̂ and ρ̂ the greatest |D| and |ρ| in the node: linear
  in (EA, r, w) again, with an error of second order.
  A residual ε of the equilibrium of R: c(F⁻) <= (1 + η) Σ R² L r + (1 + 1/η) ε·K⁻¹ε, and
  K⁻¹ is greatest with the least EA of every group.
* Forces N = N0 + Z X + D (Z: all states of self-stress). Compatibility Zᵀ(L r N) = 0 is
  Σ_g r (a_g + b_g X) = 0 for each redundant, a_g = Σ Z L (N0 + D), b_g = Σ Z L Z; with the ends
  of the ranges of r, D and the other redundants it bounds X, a ratio of sums that are linear in
  r. A section that cannot carry the least force left to it is struck.
* Movement row: Σ L r M N <= d for any M in equilibrium with the row's unit load; with the ends
  of the range of each N it is linear in r.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from sizing.selection.problem import FEASIBILITY_TOLERANCE, SizingProblem

FloatArray = NDArray[np.float64]
IntArray = NDArray[np.intp]
BoolArray = NDArray[np.bool_]

LIFT = 2.0 * FEASIBILITY_TOLERANCE
"""Limits are raised by this share, so that no design that counts as feasible is cut off."""

NO_FORCE = 1e-9
"""Share of the greatest force that counts as none against a resistance of zero, as in the exact
analysis; the greatest resistance of all bounds the forces of a feasible design."""

NO_MOVEMENT = 1e-12
"""Share of the greatest displacement that counts as none against a limit of zero, likewise."""

ROUNDING = 1e-12
"""Rounding error allowed for in a Lagrangian bound, as a share of the sum of the sizes of its
terms: some thousand additions at 1.1e-16 each."""

FORCE_ROUNDING = 1e-11
"""Rounding allowed for in a member force, as a share of the greatest force; equilibrium of the
given forces is required to a tenth of it."""

RESIDUAL_WEIGHT = 1e-11
"""η above: makes the energy of R dearer by 1e-11, and the residual's energy, about 1e-24 of it,
count 1e11 times."""

ENCLOSURE_MARGIN = 1e-9
"""Relative widening of the bounds on redundant forces: rounding of the ratio, many times over."""

RATIO_STEPS = 8
"""Newton steps for the greatest ratio of two sums linear in r; each gives a valid bound only at
the end, when the test of the bound holds, and it ends after three or four."""

NODES_AT_ONCE = 256
ENERGY, MOVEMENT = 0, 1
NO_SPLIT, SECTION_SPLIT, ONE_DESIGN = 0, 1, 2


@dataclass(frozen=True, kw_only=True, slots=True)
class ForceBasis:
    """How member forces depend on redundant forces: N_t = N0_t + D + Z X_t for factors t.

    factors (t, q) factors of the load cases, forces N0 (m, t) at the weights ``weight`` (g,),
    own (m, g) forces from a unit weight per length of each group, states Z (m, k),
    movement M (r, m) forces in equilibrium with each deflection row. ``passes``: how often
    ranges of X and sections are narrowed by each other in every node.
    """

    factors: FloatArray
    forces: FloatArray
    own: FloatArray
    weight: FloatArray
    states: FloatArray
    movement: FloatArray
    passes: int


@dataclass(frozen=True, kw_only=True, slots=True)
class Certificate:
    """A proof that no feasible design costs less than ``bound``.

    Requirements are means of basic ones of one group and one combination:
    ``requirement_basic[requirement_start[j] : requirement_start[j + 1]]``; basic number
    2 (i·c + k) + side is the tension (0) or compression (1) check of member i in combination k,
    2 (m·c + row) + side the movement of a row along (0) or against (1) its vector.
    Energy cuts (c): EA for v and 1/(r̄) for R as (c, g), weights w̄ (c, g), requirement, scale s².
    Nodes (n), parents first: kind of split, group, place in its ladder after which it is parted,
    children (n, 2), multipliers ``step_*[step_start[i] : step_start[i + 1]]`` with kind and index
    of the inequality (the energy cut, or 2·row + side of the movement).
    """

    bound: float
    requirement_start: IntArray
    requirement_basic: IntArray
    cut_stiffness: FloatArray
    cut_flexibility: FloatArray
    cut_weight: FloatArray
    cut_requirement: IntArray
    cut_scale: FloatArray
    basis: ForceBasis | None
    split_kind: IntArray
    split_group: IntArray
    split_place: IntArray
    children: IntArray
    step_start: IntArray
    step_kind: IntArray
    step_index: IntArray
    step_value: FloatArray


@dataclass(frozen=True, kw_only=True, slots=True)
class Verdict:
    """Whether a certificate proves its bound; ``reason`` says what fails."""

    accepted: bool
    reason: str
    nodes: int


@dataclass(frozen=True, kw_only=True, slots=True)
class Ladders:
    """Allowed sections of each group by rising stiffness, padded to one length s: all (g, s)."""

    section: IntArray
    valid: BoolArray
    stiffness: FloatArray
    flexibility: FloatArray
    weight: FloatArray
    cost: FloatArray


def ladders(problem: SizingProblem) -> Ladders:
    """Sort the allowed sections of every group by stiffness, then cost, then number."""
    orders = [
        sorted(
            np.flatnonzero(problem.allowed[g]),
            key=lambda s, g=g: (problem.stiffness[s], problem.cost[g, s]),  # type: ignore[misc] # the default only binds g
        )
        for g in range(problem.groups)
    ]
    longest = max(len(order) for order in orders)
    section = np.array([order + [order[-1]] * (longest - len(order)) for order in orders])
    valid = np.arange(longest) < np.array([len(order) for order in orders])[:, None]
    stiffness = problem.stiffness[section]
    return Ladders(
        section=section,
        valid=valid,
        stiffness=stiffness,
        flexibility=1.0 / stiffness,
        weight=problem.weight[section],
        cost=problem.cost[np.arange(problem.groups)[:, None], section],
    )


def lifted_resistances(problem: SizingProblem) -> tuple[FloatArray, FloatArray]:
    """Resistances (m, s, k) raised by what still counts as met."""
    usable = problem.allowed[problem.group][:, :, None]
    tables = (problem.tension, problem.compression)
    greatest = max(float(np.where(usable, table, 0.0).max(initial=0.0)) for table in tables)
    floor = NO_FORCE * greatest * (1.0 + LIFT)
    tension, compression = (np.where(table > 0.0, table * (1.0 + LIFT), floor) for table in tables)
    return tension, compression


def verify(problem: SizingProblem, certificate: Certificate) -> Verdict:
    """Check every node of the proof; nothing of it is taken on trust."""
    try:
        return _Checker(problem, certificate).run()
    except (IndexError, ValueError, np.linalg.LinAlgError) as error:
        return Verdict(accepted=False, reason=f"broken data: {error}", nodes=0)


class _Refused(Exception):  # noqa: N818 - a verdict, not an error
    pass


class _Checker:
    def __init__(self, problem: SizingProblem, certificate: Certificate) -> None:
        self.problem = problem
        self.certificate = certificate
        self.ladders = ladders(problem)
        self.B = np.asarray(problem.compatibility.toarray(), dtype=np.float64)
        self.L = problem.length
        self.inside = problem.group[:, None] == np.arange(problem.groups)
        self.unit_weight = (problem.self_weight_share.toarray() * self.L) @ self.inside
        self.tension, self.compression = lifted_resistances(problem)
        self.nodes = 0

    def run(self) -> Verdict:
        try:
            self._check_shape()
            self.energy = _EnergyCuts(self)
            self.forces = None if self.certificate.basis is None else _Forces(self)
            self._walk()
        except _Refused as refusal:
            return Verdict(accepted=False, reason=str(refusal), nodes=self.nodes)
        return Verdict(accepted=True, reason="", nodes=self.nodes)

    def _check_shape(self) -> None:
        data = self.certificate
        if not np.isfinite(data.bound):
            raise _Refused("the bound is not a number")
        n = data.split_kind.size
        if data.children.shape != (n, 2) or data.step_start.shape != (n + 1,):
            raise _Refused("the tree is malformed")
        if data.step_start[0] != 0 or (np.diff(data.step_start) < 0).any():
            raise _Refused("the steps are malformed")
        if data.step_start[-1] != data.step_value.size:
            raise _Refused("the steps are malformed")
        if not np.isfinite(data.step_value).all() or (data.step_value < 0.0).any():
            raise _Refused("a multiplier is negative or not a number")
        parts = data.split_kind == SECTION_SPLIT
        children = data.children[parts].ravel()
        parents = np.repeat(np.flatnonzero(parts), 2)
        if np.unique(children).size != children.size or (children <= parents).any():
            raise _Refused("a child stands twice or before its parent")

    def _walk(self) -> None:
        ladder = self.ladders
        shape = (0, 0) if self.forces is None else self.forces.shape
        reach = np.zeros((1, *shape)) if self.forces is None else self.forces.reach[None]
        stack = [
            (np.zeros(1, dtype=np.intp), ladder.valid[None], -reach, reach, np.full(1, -np.inf))
        ]
        while stack:
            ids, mask, low, high, known = stack.pop()
            if ids.size > NODES_AT_ONCE:
                rest = slice(NODES_AT_ONCE, None)
                stack.append((ids[rest], mask[rest], low[rest], high[rest], known[rest]))
                head = slice(NODES_AT_ONCE)
                ids, mask, low, high, known = (
                    ids[head],
                    mask[head],
                    low[head],
                    high[head],
                    known[head],
                )
            stack.append(self._check_nodes(ids, mask.copy(), low.copy(), high.copy(), known))
            if stack[-1][0].size == 0:
                stack.pop()

    def _check_nodes(
        self, ids: IntArray, mask: BoolArray, low: FloatArray, high: FloatArray, known: FloatArray
    ) -> tuple[IntArray, BoolArray, FloatArray, FloatArray, FloatArray]:
        claim = self.certificate.bound
        self.nodes += ids.size
        dead = np.zeros(ids.size, dtype=bool)
        if self.forces is not None:
            dead = self.forces.narrow(mask, low, high)
        dead |= (known >= claim) | ~_filled(mask)
        live = np.flatnonzero(~dead)
        ids, mask, low, high, known = ids[live], mask[live], low[live], high[live], known[live]
        if ids.size:
            bound, mask = self._lagrangian(ids, mask, low, high)
            known = np.maximum(known, bound)
            open_ = (known < claim) & _filled(mask)
            ids, mask, low, high, known = (
                ids[open_],
                mask[open_],
                low[open_],
                high[open_],
                known[open_],
            )
        return self._split(ids, mask, low, high, known)

    def _lagrangian(
        self, ids: IntArray, mask: BoolArray, low: FloatArray, high: FloatArray
    ) -> tuple[FloatArray, BoolArray]:
        data, ladder, claim = self.certificate, self.ladders, self.certificate.bound
        sums = _Sums(ids.size, ladder)
        count = data.step_start[ids + 1] - data.step_start[ids]
        entry = np.concatenate([np.arange(data.step_start[i], data.step_start[i + 1]) for i in ids])
        node = np.repeat(np.arange(ids.size), count)
        kind, index, value = data.step_kind[entry], data.step_index[entry], data.step_value[entry]
        if (kind > MOVEMENT).any() or (kind < ENERGY).any():
            raise _Refused("an inequality is of no known kind")
        if (kind == MOVEMENT).any() and self.forces is None:
            raise _Refused("a movement inequality without a force basis")
        chosen = kind == ENERGY
        self.energy.add(sums, node[chosen], index[chosen], value[chosen], mask)
        if self.forces is not None:
            other = kind == MOVEMENT
            self.forces.add(sums, node[other], index[other], value[other], (mask, low, high))
        column, size = sums.columns()
        column = np.where(mask, column, np.inf)
        size = np.where(mask, size, 0.0).max(axis=2).sum(axis=1) + sums.size
        least = column.min(axis=2)
        bound = least.sum(axis=1) + sums.constant - ROUNDING * size
        if np.isnan(bound).any():
            raise _Refused("a bound is not a number")
        kept = mask & (column + (bound[:, None] - least)[:, :, None] < claim)
        return bound, kept

    def _split(
        self, ids: IntArray, mask: BoolArray, low: FloatArray, high: FloatArray, known: FloatArray
    ) -> tuple[IntArray, BoolArray, FloatArray, FloatArray, FloatArray]:
        data = self.certificate
        kind = data.split_kind[ids]
        if (kind == NO_SPLIT).any():
            raise _Refused(f"node {ids[kind == NO_SPLIT][0]} is neither closed nor split")
        for place in np.flatnonzero(kind == ONE_DESIGN):
            self._check_design(int(ids[place]), mask[place])
        parts = kind != ONE_DESIGN
        if (kind[parts] != SECTION_SPLIT).any():
            raise _Refused("a split is of no known kind")
        ids, mask, low, high, known = ids[parts], mask[parts], low[parts], high[parts], known[parts]
        group, node = data.split_group[ids], np.arange(ids.size)
        if (group < 0).any():
            raise _Refused("a split is malformed")
        below = np.arange(mask.shape[2]) <= data.split_place[ids, None]
        left, right = mask.copy(), mask
        left[node, group] &= below
        right[node, group] &= ~below
        return (
            np.concatenate([data.children[ids, 0], data.children[ids, 1]]),
            np.concatenate([left, right]),
            np.concatenate([low, low]),
            np.concatenate([high, high]),
            np.concatenate([known, known]),
        )

    def _check_design(self, node: int, mask: BoolArray) -> None:
        # One design left: it must cost as much as claimed, or fail its own exact analysis (with
        # one step of refinement).
        problem = self.problem
        if (mask.sum(axis=1) != 1).any():
            raise _Refused(f"node {node} holds more than one design")
        section = self.ladders.section[np.arange(problem.groups), mask.argmax(axis=1)]
        if problem.objective(section) >= self.certificate.bound:
            return
        k = problem.stiffness[section][problem.group] / self.L
        own = self.unit_weight @ problem.weight[section]
        p = problem.loads + np.outer(own, problem.self_weight_factor)
        K = (self.B.T * k) @ self.B
        u = np.linalg.solve(K, p)
        u += np.linalg.solve(K, p - self.B.T @ (k[:, None] * (self.B @ u)))
        N = (k[:, None] * (self.B @ u)) @ problem.strength_factors.T
        members = np.arange(self.L.size)
        chosen = section[problem.group]
        tension = self.tension[members, chosen][:, problem.duration]
        compression = self.compression[members, chosen][:, problem.duration]
        fails = bool((tension < N).any() or (compression < -N).any())
        moves = np.einsum("rq,rq->r", problem.deflection_vectors @ u, problem.deflection_factors)
        limit = problem.deflection_limit
        fails |= bool((np.abs(moves) > limit * (1.0 + LIFT))[limit > 0.0].any())
        if not fails:
            raise _Refused(f"the design of node {node} passes its checks")


class _Sums:
    """Σ λ · columns per node, kept by what a column is linear in."""

    def __init__(self, nodes: int, ladder: Ladders) -> None:
        groups, sections = ladder.valid.shape
        self.ladder = ladder
        self.stiffness = np.zeros((nodes, groups))
        self.flexibility = np.zeros((nodes, groups))
        self.weight = np.zeros((nodes, groups))
        self.table = np.zeros((nodes, groups, sections))
        self.constant = np.zeros(nodes)
        self.size = np.zeros(nodes)
        self.sizes = np.zeros((3, nodes, groups))

    def add(self, kind: int, node: IntArray, amount: FloatArray) -> None:
        """Add amounts (e, g) to what stands with EA (0), r (1) or the weight (2)."""
        target = (self.stiffness, self.flexibility, self.weight)[kind]
        np.add.at(target, node, amount)
        np.add.at(self.sizes[kind], node, np.abs(amount))

    def add_constant(self, node: IntArray, amount: FloatArray) -> None:
        np.add.at(self.constant, node, amount)
        np.add.at(self.size, node, np.abs(amount))

    def columns(self) -> tuple[FloatArray, FloatArray]:
        """cost - Σ λ c and the sum of the sizes of its terms, both (b, g, s)."""
        ladder = self.ladder
        taken = (
            self.stiffness[:, :, None] * ladder.stiffness
            + self.flexibility[:, :, None] * ladder.flexibility
            + self.weight[:, :, None] * ladder.weight
            + self.table
        )
        size = (
            self.sizes[0][:, :, None] * ladder.stiffness
            + self.sizes[1][:, :, None] * ladder.flexibility
            + self.sizes[2][:, :, None] * np.abs(ladder.weight)
            + np.abs(self.table)
        )
        return ladder.cost - taken, np.abs(ladder.cost) + size


class _EnergyCuts:
    """Columns of all energy cuts, recomputed from the designs at which they were taken."""

    def __init__(self, checker: _Checker) -> None:
        self.checker = checker
        problem, data = checker.problem, checker.certificate
        self.group, self.factor, self.vector, self.limit = self._requirements()
        count = data.cut_scale.size
        for array in (data.cut_stiffness, data.cut_flexibility, data.cut_scale):
            if array.shape[0] != count or not np.isfinite(array).all() or (array <= 0.0).any():
                raise _Refused("an energy cut is malformed")
        self.phi = self.factor @ problem.self_weight_factor
        self.own: FloatArray | None = None
        self.own_rest = 0.0
        if (self.phi != 0.0).any():
            self.own = self._own_forces()
        least = np.where(checker.ladders.valid, checker.ladders.stiffness, np.inf).min(axis=1)
        self.softest = self._stiffness(least[None])[0]
        groups = problem.groups
        self.alpha, self.beta, self.omega = (np.zeros((count, groups)) for _ in range(3))
        self.right = np.zeros(count)
        self.forces = np.zeros((count if self.own is not None else 0, checker.L.size))
        for first in range(0, count, NODES_AT_ONCE):
            self._compute(np.arange(first, min(count, first + NODES_AT_ONCE)))

    def _requirements(self) -> tuple[IntArray, FloatArray, FloatArray, FloatArray]:
        """Group (-1: none), load factors (j, q), vector (j, n) and limit (j, s) of each."""
        checker = self.checker
        problem, data, ladder = checker.problem, checker.certificate, checker.ladders
        combinations = problem.strength_factors.shape[0]
        members = checker.L.size * combinations
        vectors = problem.deflection_vectors.toarray()
        groups, factors, means, limits = [], [], [], []
        for first, last in zip(
            data.requirement_start[:-1], data.requirement_start[1:], strict=True
        ):
            basic = data.requirement_basic[first:last]
            if basic.size == 0 or (basic < 0).any():
                raise _Refused("a requirement is malformed")
            found = set()
            vector, limit = 0.0, 0.0
            for number in basic:
                which, side = divmod(int(number), 2)
                sign = 1.0 - 2.0 * side
                if which < members:
                    i, k = divmod(which, combinations)
                    g = int(problem.group[i])
                    table = (checker.tension, checker.compression)[side]
                    allowed = table[i, ladder.section[g], problem.duration[k]]
                    limit = limit + allowed * checker.L[i] * ladder.flexibility[g]
                    vector = vector + sign * checker.B[i]
                    factor = problem.strength_factors[k]
                else:
                    g, row = -1, which - members
                    if problem.deflection_limit[row] <= 0.0:
                        raise _Refused("a movement without a limit is required")
                    limit = limit + problem.deflection_limit[row] * (1.0 + LIFT)
                    vector = vector + sign * vectors[row]
                    factor = problem.deflection_factors[row]
                found.add((g, tuple(factor)))
            if len(found) != 1:
                raise _Refused("a requirement mixes groups or combinations")
            groups.append(g)
            factors.append(factor)
            means.append(vector / basic.size)
            limits.append(limit / basic.size + np.zeros(ladder.valid.shape[1]))
        shape = (len(groups), -1)
        if not groups:
            q, n = problem.loads.shape[1], problem.loads.shape[0]
            return np.zeros(0, dtype=np.intp), np.zeros((0, q)), np.zeros((0, n)), np.zeros((0, 1))
        return (
            np.array(groups),
            np.array(factors).reshape(shape),
            np.array(means).reshape(shape),
            np.array(limits).reshape(shape),
        )

    def _own_forces(self) -> FloatArray:
        """Forces (m, g) in equilibrium with a unit weight per length of each group."""
        checker = self.checker
        middle = np.sqrt(np.prod(checker.ladders.stiffness[:, [0, -1]], axis=1))
        K = self._stiffness(middle[None])[0]
        k = (checker.inside @ middle / checker.L)[:, None]
        u = np.linalg.solve(K, checker.unit_weight)
        u += np.linalg.solve(K, checker.unit_weight - checker.B.T @ (k * (checker.B @ u)))
        G: FloatArray = k * (checker.B @ u)
        scale = np.abs(G).max(initial=0.0)
        rest = np.abs(checker.B.T @ G - checker.unit_weight).max(initial=0.0)
        if rest > 0.1 * FORCE_ROUNDING * scale:
            raise _Refused("self-weight is not in equilibrium")
        weight = checker.ladders.weight
        self.own_rest = rest * float((weight.max(axis=1) - weight.min(axis=1)).sum())
        return G

    def _stiffness(self, stiffness: FloatArray) -> FloatArray:
        checker = self.checker
        k = (stiffness @ checker.inside.T) / checker.L
        return np.asarray((checker.B.T * k[:, None, :]) @ checker.B)

    def _compute(self, c: IntArray) -> None:
        checker, data = self.checker, self.checker.certificate
        problem, B, L = checker.problem, checker.B, checker.L
        j = data.cut_requirement[c]
        s = np.sqrt(data.cut_scale[c])[:, None]
        P = self.factor[j] @ problem.loads.T
        P = P + self.phi[j][:, None] * (data.cut_weight[c] @ checker.unit_weight.T)
        plus, minus = P / s + s * self.vector[j], P / s - s * self.vector[j]
        v = np.linalg.solve(self._stiffness(data.cut_stiffness[c]), plus[:, :, None])[:, :, 0]
        e = v @ B.T
        self.alpha[c] = (e**2 / L) @ checker.inside
        middle = data.cut_flexibility[c]
        k = 1.0 / ((middle @ checker.inside.T) * L)
        K = self._stiffness(1.0 / middle)
        u = np.linalg.solve(K, minus[:, :, None])[:, :, 0]
        R = k * (u @ B.T)
        u = np.linalg.solve(K, (minus - R @ B)[:, :, None])[:, :, 0]
        R += k * (u @ B.T)
        rest = minus - R @ B
        # Rounding of the residual itself, taken on top of it.
        rest = np.abs(rest) + 1e-15 * (np.abs(R) @ np.abs(B) + np.abs(minus))
        rest += np.abs(self.phi[j])[:, None] / s * self.own_rest
        energy = np.linalg.norm(rest, axis=1) ** 2 / np.linalg.eigvalsh(self.softest)[0]
        self.beta[c] = (1.0 + RESIDUAL_WEIGHT) * ((R**2 * L) @ checker.inside)
        self.right[c] = 2.0 * np.einsum("cn,cn->c", plus, v)
        self.right[c] -= (1.0 + 1.0 / RESIDUAL_WEIGHT) * energy
        if self.own is not None:
            slope = -(v @ checker.unit_weight) + (R / k) @ self.own
            self.omega[c] = 2.0 * self.phi[j][:, None] / s * slope
            self.right[c] += np.einsum("cg,cg->c", self.omega[c], data.cut_weight[c])
            self.forces[c] = R

    def add(
        self, sums: _Sums, node: IntArray, cut: IntArray, value: FloatArray, mask: BoolArray
    ) -> None:
        """Add λ times the cuts to the sums of their nodes."""
        if cut.size == 0:
            return
        if (cut < 0).any():
            raise _Refused("an inequality is not in the list")
        lam = value[:, None]
        j = self.checker.certificate.cut_requirement[cut]
        sums.add(0, node, lam * self.alpha[cut])
        sums.add(1, node, lam * self.beta[cut])
        sums.add_constant(node, value * self.right[cut])
        if self.own is not None:
            sums.add(2, node, lam * self.omega[cut])
            self._add_self_weight(sums, node, cut, value, mask)
        member = self.group[j] >= 0
        np.add.at(
            sums.table,
            (node[member], self.group[j[member]]),
            4.0 * lam[member] * self.limit[j[member]],
        )
        fixed = ~member
        sums.add_constant(node[fixed], -4.0 * value[fixed] * self.limit[j[fixed], 0])

    def _add_self_weight(
        self, sums: _Sums, node: IntArray, cut: IntArray, value: FloatArray, mask: BoolArray
    ) -> None:
        # Second-order terms of the deviation D from the weights of the cut, in each node's box.
        checker, data = self.checker, self.checker.certificate
        assert self.own is not None
        spread = _spread(checker.ladders.weight, mask[node], data.cut_weight[cut])
        away = _spread(checker.ladders.flexibility, mask[node], data.cut_flexibility[cut])
        j = data.cut_requirement[cut]
        s = np.sqrt(data.cut_scale[cut])[:, None]
        D = np.abs(self.phi[j])[:, None] / s * (spread @ np.abs(self.own).T)
        D *= 1.0 + RESIDUAL_WEIGHT
        slack = 2.0 * np.abs(self.forces[cut]) * checker.L * D * (away @ checker.inside.T)
        sums.add_constant(node, -value * (1.0 + RESIDUAL_WEIGHT) * slack.sum(axis=1))
        extra = (1.0 + RESIDUAL_WEIGHT) * ((D**2 * checker.L) @ checker.inside)
        sums.add(1, node, value[:, None] * extra)


def _filled(mask: BoolArray) -> BoolArray:
    """Whether every group has a section left (b,)."""
    return np.asarray(np.all(np.any(mask, axis=2), axis=1))


def _met(limit: FloatArray, nothing: float) -> FloatArray:
    """What still counts as met; against a limit of zero, what counts as nothing."""
    return np.where(limit > 0.0, limit * (1.0 + FEASIBILITY_TOLERANCE), nothing)


def _spread(values: FloatArray, mask: BoolArray, middle: FloatArray) -> FloatArray:
    """Greatest |value - middle| (e, g) over the sections (e, g, s) left; 0 where none is."""
    away = np.abs(values - middle[:, :, None])
    return np.asarray(np.where(mask, away, 0.0).max(axis=2))


class _Forces:
    """Forces through redundants: ranges of X, sections struck, inequalities linear in r."""

    def __init__(self, checker: _Checker) -> None:
        self.checker = checker
        basis = checker.certificate.basis
        assert basis is not None
        self.basis = basis
        problem, B, L = checker.problem, checker.B, checker.L
        members, free = B.shape
        self.phi = basis.factors @ problem.self_weight_factor
        loads = problem.loads @ basis.factors.T
        loads = loads + np.outer(checker.unit_weight @ basis.weight, self.phi)
        for forces, load in (
            (basis.forces, loads),
            (basis.own, checker.unit_weight),
            (basis.movement.T, problem.deflection_vectors.T.toarray()),
            (basis.states, np.zeros((free, members - free))),
        ):
            scale = np.abs(forces).max(initial=0.0)
            if forces.shape != (members, load.shape[1]):
                raise _Refused("the force basis has the wrong size")
            if not np.abs(B.T @ forces - load).max(initial=0.0) <= 0.1 * FORCE_ROUNDING * scale:
                raise _Refused("the force basis is not in equilibrium")
        if np.linalg.matrix_rank(basis.states) != members - free:
            raise _Refused("the states of self-stress are not independent")
        self.strength = _same_rows(problem.strength_factors, basis.factors)
        self.rows = _same_rows(problem.deflection_factors, basis.factors)
        Z = basis.states
        self.shape = (basis.factors.shape[0], Z.shape[1])
        self.flex = np.einsum("ik,il,i,ig->gkl", Z, Z, L, checker.inside)
        self.reach = self._reach()

    def _reach(self) -> FloatArray:
        # N has the least energy among N0 + Z X, so |ZX| <= 2 |N0| in the norm of the energy.
        checker, basis = self.checker, self.basis
        ladder = checker.ladders
        stiffest = np.where(ladder.valid, ladder.flexibility, np.inf).min(axis=1)
        softest = np.where(ladder.valid, ladder.flexibility, 0.0).max(axis=1)
        spread = _spread(ladder.weight, ladder.valid[None], basis.weight[None])[0]
        D = np.abs(basis.own) @ spread
        N = np.abs(basis.forces) + np.outer(D, np.abs(self.phi))
        N *= 1.0 + FORCE_ROUNDING
        energy = np.einsum("it,i->t", N**2, checker.L * (checker.inside @ softest))
        least = np.linalg.eigvalsh(np.einsum("g,gkl->kl", stiffest, self.flex)).min(initial=np.inf)
        if least <= 0.0:
            raise _Refused("the states of self-stress are not independent")
        reach = 2.0 * np.sqrt(energy / least) * (1.0 + ENCLOSURE_MARGIN)
        return np.broadcast_to(reach[:, None], self.shape).copy()

    def narrow(self, mask: BoolArray, low: FloatArray, high: FloatArray) -> BoolArray:
        """Narrow sections and forces by each other, in place; return which nodes are empty."""
        dead = np.zeros(mask.shape[0], dtype=bool)
        for _ in range(self.basis.passes):
            dead |= ~_filled(mask)
            rooms = _Rooms(self, mask, low, high)
            self._enclose(rooms, low, high)
            dead |= np.any(low > high, axis=(1, 2))
            self._strike(mask, *rooms.member_forces(low, high))
        return dead | ~_filled(mask)

    def _enclose(self, rooms: _Rooms, low: FloatArray, high: FloatArray) -> None:
        for k in range(self.shape[1]):
            least, most = rooms.numerator(k, low, high)
            b = self.flex[:, k, k][None, :, None]
            high[:, :, k] = np.minimum(high[:, :, k], rooms.greatest_ratio(-least, b))
            low[:, :, k] = np.maximum(low[:, :, k], -rooms.greatest_ratio(most, b))

    def _strike(self, mask: BoolArray, least: FloatArray, most: FloatArray) -> None:
        checker, problem = self.checker, self.checker.problem
        sections = checker.ladders.section[problem.group]
        members = np.arange(checker.L.size)[:, None]
        for k in range(problem.tension.shape[2]):
            t = np.unique(self.strength[problem.duration == k])
            if t.size == 0:
                continue
            pull = least[:, :, t].max(axis=2)[:, :, None]
            push = -most[:, :, t].min(axis=2)[:, :, None]
            fails = pull > checker.tension[members, sections, k]
            fails |= push > checker.compression[members, sections, k]
            for g in range(problem.groups):
                mask[:, g] &= ~fails[:, problem.group == g].any(axis=1)

    def add(
        self,
        sums: _Sums,
        node: IntArray,
        index: IntArray,
        value: FloatArray,
        state: tuple[BoolArray, FloatArray, FloatArray],
    ) -> None:
        """Add λ times movement inequalities to the sums of their nodes."""
        if index.size == 0:
            return
        if (index < 0).any():
            raise _Refused("an inequality is not in the list")
        mask, low, high = state
        rooms = _Rooms(self, mask, low, high)
        checker, problem = self.checker, self.checker.problem
        row, side = np.divmod(index, 2)
        if (problem.deflection_limit[row] <= 0.0).any():
            raise _Refused("a movement without a limit is required")
        least, most = rooms.member_forces(low, high)
        t = self.rows[row]
        least, most = least[node, :, t], most[node, :, t]
        M = self.basis.movement[row] * (1.0 - 2.0 * side)[:, None]
        room = FORCE_ROUNDING * np.abs(M).max(axis=1, keepdims=True)
        room = room * np.maximum(np.abs(least), np.abs(most))
        work = (np.minimum(M * least, M * most) - room) * checker.L
        sums.add(1, node, -value[:, None] * (work @ checker.inside))
        limit = problem.deflection_limit[row] * (1.0 + LIFT)
        sums.add_constant(node, -value * limit)


class _Rooms:
    """What the sections left in each node allow: ranges of r, spread of self-weight forces."""

    def __init__(self, forces: _Forces, mask: BoolArray, low: FloatArray, high: FloatArray) -> None:
        self.forces = forces
        checker, basis = forces.checker, forces.basis
        ladder = checker.ladders
        r = np.broadcast_to(ladder.flexibility, mask.shape)
        filled = mask.any(axis=2)
        self.least = np.where(filled, np.where(mask, r, np.inf).min(axis=2), 1.0)
        self.most = np.where(filled, np.where(mask, r, 0.0).max(axis=2), 1.0)
        weight = np.broadcast_to(ladder.weight, mask.shape)
        lightest = np.where(filled, np.where(mask, weight, np.inf).min(axis=2), 0.0)
        heaviest = np.where(filled, np.where(mask, weight, -np.inf).max(axis=2), 0.0)
        middle = (lightest + heaviest) / 2.0
        # N0 at the middle weights of the node, D the greatest deviation from it.
        shift = ((middle - basis.weight) @ basis.own.T)[:, :, None] * forces.phi
        self.N0 = basis.forces + shift
        spread = ((heaviest - lightest) / 2.0) @ np.abs(basis.own).T
        reach = np.maximum(np.abs(low), np.abs(high))
        size = np.abs(self.N0).max(axis=1) + reach @ np.abs(basis.states).max(axis=0)
        self.D = spread[:, :, None] * np.abs(forces.phi) + FORCE_ROUNDING * size[:, None, :]

    def member_forces(self, low: FloatArray, high: FloatArray) -> tuple[FloatArray, FloatArray]:
        """Least and greatest member forces (b, m, t)."""
        Z = self.forces.basis.states
        N = self.N0 + np.einsum("ik,btk->bit", Z, (low + high) / 2.0)
        half = np.einsum("ik,btk->bit", np.abs(Z), (high - low) / 2.0) + self.D
        return N - half, N + half

    def numerator(self, k: int, low: FloatArray, high: FloatArray) -> tuple[FloatArray, FloatArray]:
        """Least and greatest Σ over i in g of Z L (N0 + D) + Σ_{l≠k} b X_l, both (b, g, t)."""
        checker, Z, flex = self.forces.checker, self.forces.basis.states, self.forces.flex
        lever = (Z[:, k] * checker.L)[:, None] * checker.inside
        middle = np.einsum("ig,bit->bgt", lever, self.N0)
        half = np.einsum("ig,bit->bgt", np.abs(lever), self.D)
        least, most = middle - half, middle + half
        for other in range(self.forces.shape[1]):
            if other != k:
                one = flex[:, k, other][None, :, None] * low[:, None, :, other]
                two = flex[:, k, other][None, :, None] * high[:, None, :, other]
                least, most = least + np.minimum(one, two), most + np.maximum(one, two)
        return least, most

    def greatest_ratio(self, over: FloatArray, under: FloatArray) -> FloatArray:
        """Upper bound (b, t) on Σ r over / Σ r under for r in its range, under >= 0."""
        least, most = self.least[:, :, None], self.most[:, :, None]
        r = np.broadcast_to((least + most) / 2.0, over.shape)
        for _ in range(RATIO_STEPS):
            ratio = (r * over).sum(axis=1) / (r * under).sum(axis=1)
            r = np.where(over - ratio[:, None, :] * under > 0.0, most, least)
        size = (r * np.abs(over)).sum(axis=1) / (r * under).sum(axis=1)
        bound: FloatArray = ratio + ENCLOSURE_MARGIN * size
        # The test that makes it a bound, whatever the steps did.
        excess = np.maximum(over - bound[:, None, :] * under, 0.0) * most
        excess += np.minimum(over - bound[:, None, :] * under, 0.0) * least
        return np.where(excess.sum(axis=1) <= 0.0, bound, np.inf)


def _same_rows(wanted: FloatArray, known: FloatArray) -> IntArray:
    """Index of each wanted row among the known ones."""
    place = np.empty(wanted.shape[0], dtype=np.intp)
    for row, factors in enumerate(wanted):
        found = np.flatnonzero((known == factors).all(axis=1))
        if found.size == 0:
            raise _Refused("the force basis lacks a combination")
        place[row] = found[0]
    return place
