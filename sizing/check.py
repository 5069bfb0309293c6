"""The full, independent check of a chosen design, from the brief alone.

Nothing of the pick is reused: loads are summed per combination before the analysis (the pick
superposes load cases), self-weight is taken from the chosen rows, every combination is solved
by the full direct stiffness method with all nodes, and resistances are asked for anew, for the
chosen sections only.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from sizing.brief.model import Brief, Combination, LoadDuration, Option
from sizing.brief.sections import Catalogue
from sizing.errors import DisagreementError, SolverError
from sizing.formulate import GRAVITY, mass_per_metre, member_conditions
from sizing.mechanics.analysis import Analysis, analyse
from sizing.mechanics.brief_loads import geometry_of
from sizing.results import DeflectionResult, Extreme, MemberResult
from sizing.standards.contract import MemberConditions, ResistanceTable, Sense, Standard

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

    ``analysis`` covers all combinations of the brief in order (its last axis).
    ``residual`` is per combination; ``applied`` (c, d) is the sum of loads.
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
) -> CheckedDesign:
    """Check the design that gives group g the catalogue row ``sections[g]``.

    Raises :class:`SolverError` when the analysis does not balance and
    :class:`DisagreementError` when a resistance worked line by line differs from the table.
    """
    picked = np.array([sections[member.group] for member in brief.members], dtype=np.intp)
    mass = mass_per_metre(catalogue, standard)[picked]
    weight = mass * GRAVITY * (1.0 + option.connection_allowance)
    loads = combination_loads(brief, weight)
    analysis = analyse(geometry_of(brief), standard.material.E * catalogue.area[picked], loads)
    residual = float(np.max(analysis.residual, initial=0.0))
    if not residual <= RESIDUAL_LIMIT:
        raise SolverError(
            f"the analysis of option {option.name} does not balance (residual {residual:.1e}); "
            "the truss is close to a mechanism: look for nearly collinear members at a node"
        )
    members = _check_members(brief, option, standard, catalogue, picked, mass, analysis)
    return CheckedDesign(
        sections=tuple(int(s) for s in sections),
        analysis=analysis,
        applied=loads.sum(axis=0).T,
        members=members,
        deflections=check_deflections(brief, analysis),
    )


def combination_loads(brief: Brief, weight: FloatArray) -> FloatArray:
    """Return nodal loads in N (nodes, d, combinations) with member weights ``weight`` in N/m."""
    own = np.zeros(len(brief.nodes))
    for member, w in zip(brief.members, weight, strict=True):
        own[member.start] += 0.5 * w * member.length
        own[member.end] += 0.5 * w * member.length
    loads = np.zeros((len(brief.nodes), brief.dimensions, len(brief.combinations)))
    for c, combination in enumerate(brief.combinations):
        for q, factor in combination.factors.items():
            case = brief.cases[q]
            for node, force in case.nodal.items():
                loads[node, :, c] += factor * np.asarray(force)
            if case.self_weight:
                loads[:, -1, c] -= factor * own
    return loads


def check_deflections(brief: Brief, analysis: Analysis) -> tuple[DeflectionResult, ...]:
    """Return every deflection limit at every node in every combination that it holds for."""
    results = []
    for limit in brief.deflection_limits:
        direction = np.asarray(limit.direction)
        for node in limit.nodes:
            for c in limit.combinations:
                movement = analysis.displacement[node, :, c]
                if limit.relative_to is not None:
                    movement = movement - analysis.displacement[limit.relative_to, :, c]
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


def _check_members(
    brief: Brief,
    option: Option,
    standard: Standard,
    catalogue: Catalogue,
    picked: NDArray[np.intp],
    mass: FloatArray,
    analysis: Analysis,
) -> tuple[MemberResult, ...]:
    conditions = member_conditions(brief, option)
    strength = brief.combinations_of("strength")
    combinations = [brief.combinations[c] for c in strength]
    durations = tuple(dict.fromkeys(c.duration for c in combinations))
    force = analysis.force[:, list(strength)]
    zero = FORCE_ZERO * float(np.max(np.abs(analysis.force), initial=0.0))
    results: list[MemberResult] = []
    tables = {
        int(s): standard.resistances(catalogue.only(int(s)), conditions, durations)
        for s in np.unique(picked)
    }
    for i in range(len(brief.members)):
        judge = _Judge(
            combinations=combinations,
            durations=durations,
            table=tables[int(picked[i])],
            member=i,
            force=force[i],
            zero=zero,
            cap=brief.groups[brief.members[i].group].utilisation_cap,
        )
        tension, compression = judge.extreme("tension"), judge.extreme("compression")
        _agree(standard, catalogue, int(picked[i]), conditions, i, judge, tension, compression)
        results.append(
            _member_result(
                brief, catalogue, conditions, judge, int(picked[i]), float(mass[i]),
                analysis.force[i], tension, compression,
            )  # fmt: skip
        )
    return tuple(results)


@dataclass(frozen=True, kw_only=True)
class _Judge:
    """The forces of one member in all strength combinations against its resistances."""

    combinations: list[Combination]
    durations: tuple[LoadDuration, ...]
    table: ResistanceTable
    member: int
    force: FloatArray
    zero: float
    cap: float

    def extreme(self, sense: Sense) -> Extreme | None:
        """Return the greatest force of one sense and the combination that governs it."""
        sign = 1.0 if sense == "tension" else -1.0
        load = sign * self.force
        if not (load > self.zero).any():
            return None
        resistance = np.array([self.resistance(sense, c) for c in range(len(load))])
        with np.errstate(divide="ignore"):
            ratio = np.where(load > self.zero, load / resistance, 0.0)
        if not self.table.usable[self.member, 0]:
            ratio = np.where(load > self.zero, np.inf, ratio)
        greatest, governing = int(np.argmax(load)), int(np.argmax(ratio))
        return Extreme(
            force=float(self.force[greatest]),
            combination=self.combinations[greatest].name,
            resistance=float(resistance[governing]),
            utilisation=float(ratio[governing]),
            governing_combination=self.combinations[governing].name,
            governing_force=float(self.force[governing]),
            clause=self.clause(sense, governing),
        )

    def resistance(self, sense: Sense, c: int) -> float:
        """Return the resistance in N in combination ``c``, times the group's utilisation cap."""
        values = self.table.tension if sense == "tension" else self.table.compression
        return float(values[self.member, 0, self._duration(c)]) * self.cap

    def clause(self, sense: Sense, c: int) -> str:
        """Return the clause behind the resistance in combination ``c``."""
        table = self.table
        index = table.tension_clause if sense == "tension" else table.compression_clause
        return table.clauses[int(index[self.member, 0, self._duration(c)])]

    def _duration(self, c: int) -> int:
        return self.durations.index(self.combinations[c].duration)


def _agree(
    standard: Standard,
    catalogue: Catalogue,
    section: int,
    conditions: MemberConditions,
    member: int,
    judge: _Judge,
    *extremes: Extreme | None,
) -> None:
    """Work the deciding resistances line by line and compare them with the table's."""
    senses: tuple[Sense, Sense] = ("tension", "compression")
    for sense, extreme in zip(senses, extremes, strict=True):
        if extreme is None or extreme.resistance <= 0.0:
            continue
        names = [c.name for c in judge.combinations]
        duration = judge.combinations[names.index(extreme.governing_combination)].duration
        steps = standard.working(catalogue, section, conditions, member, duration, sense)
        worked = steps[-1].value * judge.cap
        if abs(worked - extreme.resistance) > WORKING_TOLERANCE * extreme.resistance:
            raise DisagreementError(
                f"{catalogue.designation[section]} in {conditions.role[member]}: {sense} "
                f"resistance {extreme.resistance:.6g} N from the table, {worked:.6g} N worked line "
                "by line; nothing is issued"
            )


def _member_result(
    brief: Brief,
    catalogue: Catalogue,
    conditions: MemberConditions,
    judge: _Judge,
    section: int,
    mass: float,
    forces: FloatArray,
    tension: Extreme | None,
    compression: Extreme | None,
) -> MemberResult:
    i = judge.member
    member = brief.members[i]
    governing = _governing(tension, compression)
    decisive = {"tension": tension, "compression": compression}.get(governing or "")
    limit = (
        conditions.max_slenderness_compression[i]
        if compression is not None
        else conditions.max_slenderness_tension[i]
    )
    return MemberResult(
        name=member.name,
        mark=member.mark,
        group=brief.groups[member.group].name,
        start=brief.nodes[member.start].name,
        end=brief.nodes[member.end].name,
        designation=catalogue.designation[section],
        catalogue_row=catalogue.row[section],
        length=member.length,
        mass_per_metre=mass,
        mass=mass * member.length,
        area=float(catalogue.area[section]),
        in_plane=float(conditions.in_plane[i]),
        out_of_plane=float(conditions.out_of_plane[i]),
        slenderness_in=float(judge.table.slenderness_in[i, 0]),
        slenderness_out=float(judge.table.slenderness_out[i, 0]),
        slenderness_limit=float(limit) if np.isfinite(limit) else None,
        tension=tension,
        compression=compression,
        utilisation=decisive.utilisation if decisive else 0.0,
        governing=governing,
        governing_clause=decisive.clause if decisive else "",
        governing_combination=decisive.governing_combination if decisive else "",
        forces=tuple(float(f) for f in forces),
        note=judge.table.reasons[int(judge.table.notes[i, 0])],
    )


def _governing(tension: Extreme | None, compression: Extreme | None) -> Sense | None:
    if tension is None and compression is None:
        return None
    if compression is None or (
        tension is not None and tension.utilisation >= compression.utilisation
    ):
        return "tension"
    return "compression"
