"""The full, independent check of a chosen design, from the brief alone.

Nothing of the pick is reused: loads are summed per combination before the analysis (the pick
superposes load cases), self-weight is taken from the chosen rows, every combination is solved
by the full direct stiffness method with all nodes, and resistances are asked for anew, for the
chosen sections only.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from sizing.brief.model import Brief, Combination, LoadDuration, Option
from sizing.brief.sections import Catalogue
from sizing.errors import DisagreementError, SolverError
from sizing.formulation import GRAVITY, limit_factors, mass_per_metre, member_conditions
from sizing.mechanics.analysis import Analysis, analyse
from sizing.mechanics.brief_loads import geometry_of
from sizing.results import DeflectionResult, Extreme, MemberResult
from sizing.standards.contract import MemberConditions, ResistanceTable, Sense, Standard, Step

FloatArray = NDArray[np.float64]

FORCE_ZERO = 1e-9
"""A member force below this share of the truss's greatest force is rounding, not a force."""

RESIDUAL_LIMIT = 1e-8
"""Greatest acceptable out-of-balance nodal force over the greatest force: far above rounding
(about 1e-12), far below anything that could change a size."""

WORKING_TOLERANCE = 1e-9
"""Relative agreement asked of a resistance worked line by line and the one from the table."""

ADEQUATE = 1.0 + 1e-9
"""Utilisation up to which a check counts as met: 1 plus rounding."""


@dataclass(frozen=True, kw_only=True)
class CheckedDesign:
    """The outcome of the check; ``sections`` are catalogue indices per group.

    The last axis of ``analysis`` holds all combinations of the brief in order, then what final
    deflections add; ``applied`` (the same, d) is the sum of loads.
    """

    sections: tuple[int, ...]
    analysis: Analysis
    applied: FloatArray
    members: tuple[MemberResult, ...]
    deflections: tuple[DeflectionResult, ...]

    @property
    def utilisation(self) -> float:
        """Greatest utilisation over members and deflection limits."""
        return max(
            [m.utilisation for m in self.members] + [d.utilisation for d in self.deflections],
            default=0.0,
        )

    @property
    def adequate(self) -> bool:
        """Whether every check is met."""
        return self.utilisation <= ADEQUATE


def check_design(
    brief: Brief,
    option: Option,
    standard: Standard,
    catalogue: Catalogue,
    sections: Sequence[int],
    *,
    work: bool = True,
) -> CheckedDesign:
    """Check the design that gives group g the catalogue row ``sections[g]``.

    ``work``: also work every deciding resistance line by line and compare, as is due for the
    design that is issued.

    Raises :class:`SolverError` when the analysis does not balance and
    :class:`DisagreementError` when a resistance worked line by line differs from the table.
    """
    picked = np.array([sections[member.group] for member in brief.members], dtype=np.intp)
    mass = mass_per_metre(catalogue, standard)[picked]
    weight = mass * GRAVITY * (1.0 + option.connection_allowance)
    sets, movements = _factor_sets(brief, standard.material.creep)
    loads = factored_loads(brief, weight, sets)
    analysis = analyse(geometry_of(brief), standard.material.E * catalogue.area[picked], loads)
    residual = float(np.max(analysis.residual, initial=0.0))
    if not residual <= RESIDUAL_LIMIT:
        raise SolverError(
            f"the analysis of option {option.name} does not balance (residual {residual:.1e}); "
            "the truss is close to a mechanism: look for nearly collinear members at a node"
        )
    terms = _terms(brief, option, standard, catalogue, analysis, work)
    members = _check_members(terms, picked, mass, analysis)
    return CheckedDesign(
        sections=tuple(int(s) for s in sections),
        analysis=analysis,
        applied=loads.sum(axis=0).T,
        members=members,
        deflections=_check_deflections(brief, analysis, movements),
    )


def _factor_sets(
    brief: Brief, creep: float
) -> tuple[list[dict[int, float]], dict[tuple[int, int], int]]:
    """Return the factored sums to analyse, and which of them each (limit, combination) uses.

    The combinations of the brief come first, in order; final deflections (creep, precamber)
    add sums of their own behind them.
    """
    sets = [dict(combination.factors) for combination in brief.combinations]
    movements: dict[tuple[int, int], int] = {}
    for k, limit in enumerate(brief.deflection_limits):
        for c in limit.combinations:
            factors = limit_factors(brief, k, c, creep)
            if factors == sets[c]:
                movements[k, c] = c
                continue
            if factors not in sets[len(brief.combinations) :]:
                sets.append(factors)
            movements[k, c] = len(brief.combinations) + sets[len(brief.combinations) :].index(
                factors
            )
    return sets, movements


def factored_loads(
    brief: Brief, weight: FloatArray, sets: Sequence[Mapping[int, float]]
) -> FloatArray:
    """Return nodal loads in N (nodes, d, sets) with member weights ``weight`` in N/m."""
    own = np.zeros(len(brief.nodes))
    for member, w in zip(brief.members, weight, strict=True):
        own[member.start] += 0.5 * w * member.length
        own[member.end] += 0.5 * w * member.length
    loads = np.zeros((len(brief.nodes), brief.dimensions, len(sets)))
    for c, factors in enumerate(sets):
        for q, factor in factors.items():
            case = brief.cases[q]
            for node, force in case.nodal.items():
                loads[node, :, c] += factor * np.asarray(force)
            if case.self_weight:
                loads[:, -1, c] -= factor * own
    return loads


def _check_deflections(
    brief: Brief, analysis: Analysis, movements: Mapping[tuple[int, int], int]
) -> tuple[DeflectionResult, ...]:
    """Return every deflection limit at every node in every combination that it holds for."""
    results = []
    for k, limit in enumerate(brief.deflection_limits):
        direction = np.asarray(limit.direction)
        for node in limit.nodes:
            for c in limit.combinations:
                at = movements[k, c]
                movement = analysis.displacement[node, :, at]
                if limit.relative_to is not None:
                    movement = movement - analysis.displacement[limit.relative_to, :, at]
                value = float(direction @ movement)
                results.append(
                    DeflectionResult(
                        limit_name=limit.name,
                        node=brief.nodes[node].name,
                        direction=limit.direction_text,
                        combination=brief.combinations[c].name,
                        value=value,
                        limit=limit.limit,
                        limit_text=limit.limit_text,
                        utilisation=abs(value) / limit.limit,
                    )
                )
    return tuple(results)


@dataclass(frozen=True, kw_only=True)
class _Terms:
    """What all members are judged by: the strength combinations and the standard."""

    brief: Brief
    standard: Standard
    catalogue: Catalogue
    conditions: MemberConditions
    strength: tuple[int, ...]
    combinations: list[Combination]
    durations: tuple[LoadDuration, ...]
    zero: float
    work: bool


def _terms(
    brief: Brief,
    option: Option,
    standard: Standard,
    catalogue: Catalogue,
    analysis: Analysis,
    work: bool,
) -> _Terms:
    strength = brief.combinations_of("strength")
    combinations = [brief.combinations[c] for c in strength]
    return _Terms(
        brief=brief,
        standard=standard,
        catalogue=catalogue,
        conditions=member_conditions(brief, option),
        strength=strength,
        combinations=combinations,
        durations=tuple(dict.fromkeys(c.duration for c in combinations)),
        zero=FORCE_ZERO * float(np.max(np.abs(analysis.force[:, list(strength)]), initial=0.0)),
        work=work,
    )


def _check_members(
    terms: _Terms, picked: NDArray[np.intp], mass: FloatArray, analysis: Analysis
) -> tuple[MemberResult, ...]:
    brief, standard, catalogue = terms.brief, terms.standard, terms.catalogue
    strength = list(terms.strength)
    tables = {
        int(s): standard.resistances(catalogue.only(int(s)), terms.conditions, terms.durations)
        for s in np.unique(picked)
    }
    return tuple(
        _Judge(
            terms=terms,
            table=tables[int(picked[i])],
            member=i,
            section=int(picked[i]),
            mass=float(mass[i]),
            force=analysis.force[i, strength],
            all_forces=tuple(analysis.force[i, : len(brief.combinations)].tolist()),
        ).verdict()
        for i in range(len(brief.members))
    )


@dataclass(frozen=True, kw_only=True)
class _Judge:
    """One member: its forces in all strength combinations against its resistances."""

    terms: _Terms
    table: ResistanceTable
    member: int
    section: int
    mass: float
    force: FloatArray
    all_forces: tuple[float, ...]

    def verdict(self) -> MemberResult:
        """Return the member's line of the schedule."""
        terms, table, i = self.terms, self.table, self.member
        brief, catalogue = terms.brief, terms.catalogue
        member = brief.members[i]
        tension, compression = self.extreme("tension"), self.extreme("compression")
        governing = _governing(tension, compression)
        decisive = compression if governing == "compression" else tension
        limits = terms.conditions.max_slenderness_tension
        if compression is not None:
            limits = terms.conditions.max_slenderness_compression
        return MemberResult(
            name=member.name,
            mark=member.mark,
            group=brief.groups[member.group].name,
            start=brief.nodes[member.start].name,
            end=brief.nodes[member.end].name,
            designation=catalogue.designation[self.section],
            catalogue_row=catalogue.row[self.section],
            length=member.length,
            mass_per_metre=self.mass,
            mass=self.mass * member.length,
            area=float(catalogue.area[self.section]),
            in_plane=float(terms.conditions.in_plane[i]),
            out_of_plane=float(terms.conditions.out_of_plane[i]),
            slenderness_in=float(table.slenderness_in[i, 0]),
            slenderness_out=float(table.slenderness_out[i, 0]),
            slenderness_limit=float(limits[i]) if np.isfinite(limits[i]) else None,
            tension=tension,
            compression=compression,
            utilisation=decisive.utilisation if decisive else 0.0,
            governing=governing,
            governing_clause=decisive.clause if decisive else "",
            governing_combination=decisive.governing_combination if decisive else "",
            forces=self.all_forces,
            note=table.reasons[int(table.notes[i, 0])],
        )

    def extreme(self, sense: Sense) -> Extreme | None:
        """Return the greatest force of one sense and the combination that governs it."""
        load = self.force if sense == "tension" else -self.force
        acts = load > self.terms.zero
        if not acts.any():
            return None
        resistance = np.array([self.resistance(sense, c) for c in range(len(load))])
        if not self.table.usable[self.member, 0]:
            resistance[:] = 0.0
        with np.errstate(divide="ignore"):
            ratio = np.where(acts, load / resistance, 0.0)
        greatest, governing = int(np.argmax(load)), int(np.argmax(ratio))
        steps: tuple[Step, ...] = ()
        if self.terms.work and resistance[governing] > 0.0:
            steps = self._worked(sense, governing, float(resistance[governing]))
        names = [c.name for c in self.terms.combinations]
        return Extreme(
            force=float(self.force[greatest]),
            combination=names[greatest],
            resistance=float(resistance[governing]),
            utilisation=float(ratio[governing]),
            governing_combination=names[governing],
            governing_force=float(self.force[governing]),
            clause=self.clause(sense, governing),
            steps=steps,
        )

    def resistance(self, sense: Sense, c: int) -> float:
        """Return the resistance in N in combination ``c``, times the group's utilisation cap."""
        values = self.table.tension if sense == "tension" else self.table.compression
        return float(values[self.member, 0, self._duration(c)]) * self._cap()

    def clause(self, sense: Sense, c: int) -> str:
        """Return the clause behind the resistance in combination ``c``."""
        table = self.table
        index = table.tension_clause if sense == "tension" else table.compression_clause
        return table.clauses[int(index[self.member, 0, self._duration(c)])]

    def _cap(self) -> float:
        brief = self.terms.brief
        return brief.groups[brief.members[self.member].group].utilisation_cap

    def _duration(self, c: int) -> int:
        return self.terms.durations.index(self.terms.combinations[c].duration)

    def _worked(self, sense: Sense, c: int, resistance: float) -> tuple[Step, ...]:
        """Return a deciding resistance worked line by line, once it agrees with the table's."""
        terms = self.terms
        duration = terms.combinations[c].duration
        steps = terms.standard.working(
            terms.catalogue, self.section, terms.conditions, self.member, duration, sense
        )
        worked = steps[-1].value * self._cap()
        if abs(worked - resistance) > WORKING_TOLERANCE * resistance:
            raise DisagreementError(
                f"{terms.catalogue.designation[self.section]} in member "
                f"{terms.brief.members[self.member].name}: {sense} resistance {resistance:.6g} N "
                f"from the table, {worked:.6g} N worked line by line; nothing is issued"
            )
        return steps


def _governing(tension: Extreme | None, compression: Extreme | None) -> Sense | None:
    if tension is None and compression is None:
        return None
    if compression is None or (
        tension is not None and tension.utilisation >= compression.utilisation
    ):
        return "tension"
    return "compression"
