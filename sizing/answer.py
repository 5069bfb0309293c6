"""The complete answer of one option: the checked design described for documents and scripts."""

from __future__ import annotations

from time import perf_counter

import numpy as np

from sizing.basis import basis_of, left_out
from sizing.brief.model import Brief, Combination, Objective, Option
from sizing.cautions import cautions_for
from sizing.certificate_file import about, certificate_bytes
from sizing.check import CheckedDesign, check_design
from sizing.cutting import cutting_list
from sizing.cutting_pieces import with_order_lengths
from sizing.errors import DisagreementError
from sizing.formulation import Formulation
from sizing.objective import values_of
from sizing.results import (
    CombinationResult,
    GroupResult,
    LighterResult,
    MemberResult,
    NearTieResult,
    OptionResult,
    ReactionResult,
    SectionSummary,
    WorkedCheck,
)
from sizing.selection.outcome import Pick
from sizing.standards.contract import Sense
from sizing.supply_cautions import supply_cautions

OBJECTIVE_TOLERANCE = 1e-9
"""Relative agreement asked of the pick's objective and the mass the check adds up."""


def describe(
    formulation: Formulation, sections: list[int], picked: Pick | None, version: str
) -> OptionResult:
    """Check the design (catalogue row per group) and return everything that is issued of it.

    ``picked`` is None for sections that were given; ``version`` is the tool's.
    Raises :class:`DisagreementError` when the check does not confirm the pick.
    """
    start = perf_counter()
    brief, option = formulation.brief, formulation.option
    checked = check_design(brief, option, formulation.standard, formulation.catalogue, sections)
    mass = sum(m.mass for m in checked.members)
    objective = formulation.problem.objective(np.asarray(sections))
    if picked is not None:
        _must_agree(formulation, checked, picked, objective)
    cutting = cutting_list(brief, formulation.catalogue, sections)
    return OptionResult(
        option=option.name,
        standard=formulation.standard.name,
        edition=formulation.standard.edition,
        grade=formulation.standard.material.name,
        catalogue=formulation.catalogue.name,
        catalogue_source=formulation.catalogue.source,
        status=picked.status if picked else "checked",
        method=picked.method if picked else "sections given, checked only",
        objective_text=brief.minimise,
        objective=objective,
        bound=picked.bound if picked else None,
        gap=picked.gap if picked else None,
        analyses=picked.analyses if picked else 1,
        seconds=picked.seconds if picked else perf_counter() - start,
        adequate=checked.adequate,
        mass=mass,
        connection_allowance=option.connection_allowance,
        groups=_groups(brief, checked),
        members=with_order_lengths(brief, checked.members),
        sections=_summary(formulation, checked),
        lighter=_lighter(formulation, sections),
        combinations=_combinations(brief, checked),
        deflections=checked.deflections,
        reactions=_reactions(brief, checked),
        displacements=_displacements(checked, len(brief.combinations)),
        worked=_worked(formulation, checked),
        left_out=left_out(formulation),
        basis=basis_of(formulation),
        cautions=(
            *supply_cautions(brief, formulation.catalogue, sections, cutting),
            *cautions_for(brief, option, formulation.standard, checked.members),
        ),
        cost=_total("cost", formulation, sections),
        currency=option.cost.currency if option.cost else "",
        carbon=_total("carbon", formulation, sections),
        biogenic=_biogenic(option, mass),
        volume=sum(m.area * m.length for m in checked.members),
        near_ties=_near_ties(formulation, picked),
        certificate=_certificate(formulation, sections, picked, version),
        cutting=cutting,
    )


def _near_ties(formulation: Formulation, picked: Pick | None) -> tuple[NearTieResult, ...]:
    """Check the other designs that the pick lists; only adequate ones are passed on."""
    results = []
    for tie in () if picked is None else picked.near_ties:
        sections = tie.sections.tolist()
        checked = check_design(
            formulation.brief,
            formulation.option,
            formulation.standard,
            formulation.catalogue,
            sections,
            work=False,
        )
        if checked.adequate:
            results.append(
                NearTieResult(
                    designations=tuple(formulation.catalogue.designation[s] for s in sections),
                    objective=tie.objective,
                    mass=sum(m.mass for m in checked.members),
                    utilisation=checked.utilisation,
                )
            )
    return tuple(results)


def _certificate(
    formulation: Formulation, sections: list[int], picked: Pick | None, version: str
) -> bytes:
    if picked is None or picked.certificate is None:
        return b""
    facts = about(formulation, sections, picked.certificate.bound, version)
    return certificate_bytes(picked.certificate, facts)


def _total(objective: Objective, formulation: Formulation, sections: list[int]) -> float | None:
    values = values_of(
        objective,
        formulation.brief,
        formulation.option,
        formulation.catalogue,
        formulation.mass,
    )
    total = float(values[np.arange(len(sections)), sections].sum())
    return None if np.isnan(total) else total


def _biogenic(option: Option, mass: float) -> float | None:
    if option.carbon is None or option.carbon.biogenic is None:
        return None
    return option.carbon.biogenic * mass


def _must_agree(
    formulation: Formulation, checked: CheckedDesign, picked: Pick, objective: float
) -> None:
    name = formulation.option.name
    if not checked.adequate:
        raise DisagreementError(
            f"option {name}: the pick calls its design adequate, the check finds utilisation "
            f"{checked.utilisation:.9f}; nothing is issued"
        )
    if picked.objective is None or abs(objective - picked.objective) > (
        OBJECTIVE_TOLERANCE * abs(objective)
    ):
        raise DisagreementError(
            f"option {name}: the pick reports {picked.objective} {formulation.brief.minimise}, the "
            f"check adds up {objective}; nothing is issued"
        )


def _groups(brief: Brief, checked: CheckedDesign) -> tuple[GroupResult, ...]:
    results = []
    for group in brief.groups:
        members = [checked.members[i] for i in group.members]
        worst = max(members, key=lambda m: m.utilisation)
        results.append(
            GroupResult(
                name=group.name,
                designation=worst.designation,
                catalogue_row=worst.catalogue_row,
                members=tuple(m.mark for m in members),
                total_length=sum(m.length for m in members),
                mass=sum(m.mass for m in members),
                utilisation=worst.utilisation,
                governed_by=_governed_by(worst),
                governing_member=worst.mark,
                governing_combination=worst.governing_combination,
            )
        )
    return tuple(results)


def _governed_by(member: MemberResult) -> str:
    if member.governing is None:
        return "no force"
    return f"{member.governing}, {member.governing_clause}"


def _summary(formulation: Formulation, checked: CheckedDesign) -> tuple[SectionSummary, ...]:
    catalogue = formulation.catalogue
    lines = []
    for s in sorted(set(checked.sections)):
        members = [m for m in checked.members if m.designation == catalogue.designation[s]]
        length = sum(m.length for m in members)
        lines.append(
            SectionSummary(
                designation=catalogue.designation[s],
                catalogue_row=catalogue.row[s],
                product=catalogue.product[s],
                pieces=len(members),
                total_length=length,
                mass_per_metre=float(formulation.mass[s]),
                mass=sum(m.mass for m in members),
                surface=length * float(catalogue.surface[s]),
            )
        )
    return tuple(lines)


def _lighter(formulation: Formulation, sections: list[int]) -> tuple[LighterResult, ...]:
    """Put the next lighter allowed section into each group, alone, and check again."""
    problem, brief = formulation.problem, formulation.brief
    results = []
    for g, group in enumerate(brief.groups):
        cost = problem.cost[g]
        lighter = [s for s in np.flatnonzero(problem.allowed[g]) if cost[s] < cost[sections[g]]]
        if not lighter:
            results.append(_lightest_already(group.name))
            continue
        s = max(lighter, key=lambda k: cost[k])
        design = [*sections[:g], int(s), *sections[g + 1 :]]
        checked = check_design(
            brief,
            formulation.option,
            formulation.standard,
            formulation.catalogue,
            design,
            work=False,
        )
        results.append(_lighter_result(formulation, g, int(s), sections[g], checked))
    return tuple(results)


def _lightest_already(group: str) -> LighterResult:
    return LighterResult(
        group=group,
        designation=None,
        mass_saved=0.0,
        fails="",
        where="",
        combination="",
        utilisation=0.0,
    )


def _lighter_result(
    formulation: Formulation, g: int, s: int, current: int, checked: CheckedDesign
) -> LighterResult:
    member = max(checked.members, key=lambda m: m.utilisation)
    deflection = max(checked.deflections, key=lambda d: d.utilisation, default=None)
    length = sum(formulation.brief.members[i].length for i in formulation.brief.groups[g].members)
    saved = float(formulation.mass[current] - formulation.mass[s]) * length
    name = formulation.brief.groups[g].name
    designation = formulation.catalogue.designation[s]
    if checked.adequate:
        fails, where, combination = "nothing", "", ""
    elif deflection is not None and deflection.utilisation > member.utilisation:
        fails, where = "deflection", f"{deflection.limit_name} at {deflection.node}"
        combination = deflection.combination
    else:
        fails = (
            member.note if np.isinf(member.utilisation) and member.note else (_governed_by(member))
        )
        where, combination = member.mark, member.governing_combination
    return LighterResult(
        group=name,
        designation=designation,
        mass_saved=saved,
        fails=fails,
        where=where,
        combination=combination,
        utilisation=checked.utilisation,
    )


def _combinations(brief: Brief, checked: CheckedDesign) -> tuple[CombinationResult, ...]:
    return tuple(
        CombinationResult(
            name=combination.name,
            state=combination.state,
            factors=tuple((brief.cases[q].name, f) for q, f in combination.factors.items()),
            duration=combination.duration,
            origin=combination.origin,
            applied=tuple(float(x) for x in checked.applied[c]),
            residual=float(checked.analysis.residual[c]),
        )
        for c, combination in enumerate(brief.combinations)
    )


def _reactions(brief: Brief, checked: CheckedDesign) -> tuple[ReactionResult, ...]:
    def components(node: int, held: tuple[bool, ...], c: int) -> tuple[float, ...]:
        values = checked.analysis.reaction[node, :, c]
        return tuple(float(v) if h else 0.0 for v, h in zip(values, held, strict=True))

    return tuple(
        ReactionResult(
            node=brief.nodes[support.node].name,
            combination=combination.name,
            state=combination.state,
            components=components(support.node, support.held, c),
        )
        for support in brief.supports
        for c, combination in enumerate(brief.combinations)
    )


def _displacements(
    checked: CheckedDesign, combinations: int
) -> tuple[tuple[tuple[float, ...], ...], ...]:
    by_combination = np.moveaxis(checked.analysis.displacement, 2, 0)[:combinations]
    return tuple(tuple(tuple(node) for node in table) for table in by_combination.tolist())


def _worked(formulation: Formulation, checked: CheckedDesign) -> tuple[WorkedCheck, ...]:
    """Work the deciding check of the governing member of every group and of each sense."""
    brief = formulation.brief
    chosen: dict[tuple[int, Sense], None] = {}
    for sense in ("tension", "compression"):
        found = [
            (getattr(m, sense).utilisation, i)
            for i, m in enumerate(checked.members)
            if getattr(m, sense) is not None
        ]
        if found:
            chosen[(max(found)[1], sense)] = None
    for group in brief.groups:
        i = max(group.members, key=lambda k: checked.members[k].utilisation)
        governing = checked.members[i].governing
        if governing is not None:
            chosen[(i, governing)] = None
    return tuple(_work(formulation, checked, i, sense) for i, sense in chosen)


def _work(formulation: Formulation, checked: CheckedDesign, i: int, sense: Sense) -> WorkedCheck:
    brief, member = formulation.brief, checked.members[i]
    extreme = member.tension if sense == "tension" else member.compression
    if extreme is None:
        raise ValueError(f"{member.mark} is never in {sense}")
    combination = _by_name(brief, extreme.governing_combination)
    steps = formulation.standard.working(
        formulation.catalogue,
        checked.sections[brief.members[i].group],
        formulation.conditions,
        i,
        combination.duration,
        sense,
    )
    return WorkedCheck(
        mark=member.mark,
        designation=member.designation,
        sense=sense,
        combination=combination.name,
        force=extreme.governing_force,
        steps=steps,
        utilisation=extreme.utilisation,
    )


def _by_name(brief: Brief, name: str) -> Combination:
    return next(c for c in brief.combinations if c.name == name)
