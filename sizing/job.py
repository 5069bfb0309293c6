"""The whole job: formulate each option of a brief, pick, check, and gather what is issued."""

from __future__ import annotations

from collections.abc import Callable, Mapping, Sequence
from difflib import get_close_matches
from importlib.metadata import PackageNotFoundError, version
from time import perf_counter

import numpy as np

from sizing.brief.model import Brief, Combination, Option
from sizing.cautions import cautions_for
from sizing.check import ADEQUATE, CheckedDesign, check_design
from sizing.errors import DisagreementError, InputError, NoAdequateSectionError, Problem
from sizing.formulate import GRAVITY, Formulation, formulate
from sizing.results import (
    CombinationResult,
    GroupResult,
    JobResult,
    LighterResult,
    MemberResult,
    OptionResult,
    ReactionResult,
    SectionSummary,
    WorkedCheck,
)
from sizing.selection.outcome import Limits, Pick, Shortfall
from sizing.selection.pick import pick
from sizing.standards.contract import Sense

OBJECTIVE_TOLERANCE = 1e-9
"""Relative agreement asked of the pick's objective and the mass the check adds up."""


def tool_version() -> str:
    """Return the installed version of this package."""
    try:
        return version("sizing")
    except PackageNotFoundError:
        return "unpackaged"


def pick_job(
    brief: Brief,
    *,
    options: Sequence[str] = (),
    limits: Callable[[str], Limits] = lambda _: Limits(),
) -> JobResult:
    """Pick, check and describe every option of the brief (or only those named).

    ``limits`` gives the limits for the option of that name. Raises what the parts raise:
    :class:`InputError`, :class:`UnstableTrussError`, :class:`NoAdequateSectionError`,
    :class:`SolverError`, :class:`DisagreementError`.
    """
    formulations = [formulate(brief, option) for option in _chosen(brief, options)]
    results = []
    for formulation in formulations:
        picked = pick(formulation.problem, limits(formulation.option.name))
        if picked.sections is None:
            raise NoAdequateSectionError(_why_none(formulation, picked))
        results.append(_describe(formulation, picked.sections.tolist(), picked))
    return JobResult(brief=brief, version=tool_version(), options=tuple(results))


def check_job(
    brief: Brief, sections: Mapping[str, Mapping[str, str]], options: Sequence[str] = ()
) -> JobResult:
    """Check given designations per option and group, without picking.

    Raises :class:`InputError` for a group without a section or a designation that the
    catalogue does not hold.
    """
    results = []
    for option in _chosen(brief, options or [o.name for o in brief.options if o.name in sections]):
        formulation = formulate(brief, option)
        rows = _rows_of(formulation, sections.get(option.name, {}))
        results.append(_describe(formulation, rows, None))
    return JobResult(brief=brief, version=tool_version(), options=tuple(results))


def _chosen(brief: Brief, names: Sequence[str]) -> list[Option]:
    known = {option.name: option for option in brief.options}
    unknown = [name for name in names if name not in known]
    if unknown:
        raise InputError(
            [
                Problem(
                    file=brief.source.name,
                    place="options",
                    found=f"no option {name!r}",
                    expected="one of " + ", ".join(known),
                    fix=_nearest(name, list(known)),
                )
                for name in unknown
            ]
        )
    return [known[name] for name in names] if names else list(brief.options)


def _nearest(name: str, known: list[str]) -> str:
    close = get_close_matches(name, known, n=1)
    return f"Did you mean {close[0]!r}?" if close else ""


def _rows_of(formulation: Formulation, given: Mapping[str, str]) -> list[int]:
    designations = formulation.catalogue.designation
    index = {name: row for row, name in enumerate(designations)}
    problems, rows = [], []
    for group in formulation.brief.groups:
        name = given.get(group.name)
        if name is not None and name in index:
            rows.append(index[name])
            continue
        problems.append(
            Problem(
                file=formulation.brief.source.name,
                place=f"sections.{formulation.option.name}.{group.name}",
                found="no section" if name is None else repr(name),
                expected=f"a designation of catalogue {formulation.catalogue.name}",
                fix=_nearest(name or "", list(designations)),
            )
        )
    if problems:
        raise InputError(problems)
    return rows


def _describe(formulation: Formulation, sections: list[int], picked: Pick | None) -> OptionResult:
    start = perf_counter()
    brief, option = formulation.brief, formulation.option
    checked = check_design(brief, option, formulation.standard, formulation.catalogue, sections)
    mass = sum(m.mass for m in checked.members)
    objective = formulation.problem.objective(np.asarray(sections))
    if picked is not None:
        _must_agree(formulation, checked, picked, objective)
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
        members=checked.members,
        sections=_summary(formulation, checked),
        lighter=_lighter(formulation, sections),
        combinations=_combinations(brief, checked),
        deflections=checked.deflections,
        reactions=_reactions(brief, checked),
        displacements=_displacements(checked, len(brief.combinations)),
        worked=_worked(formulation, checked),
        left_out=_left_out(formulation),
        basis=_basis(formulation),
        cautions=cautions_for(brief, option, formulation.standard, checked.members),
    )


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


def _left_out(formulation: Formulation) -> tuple[tuple[str, str], ...]:
    """Return (designation, reason) of sections with a note for some member, each reason once."""
    table, names = formulation.table, formulation.catalogue.designation
    rows: list[tuple[str, str]] = []
    for s, name in enumerate(names):
        reasons = {table.reasons[k] for k in np.unique(table.notes[:, s]) if table.reasons[k]}
        rows.extend((name, reason) for reason in sorted(reasons))
    return tuple(rows)


def _basis(formulation: Formulation) -> tuple[tuple[str, str], ...]:
    catalogue, option = formulation.catalogue, formulation.option
    return (
        ("Standard", f"{formulation.standard.name} ({formulation.standard.edition})"),
        *formulation.standard.basis(),
        ("Catalogue", f"{catalogue.name}, {len(catalogue)} rows, file {catalogue.source.name}"),
        ("Catalogue SHA-256", catalogue.source.sha256),
        *((f"Catalogue remark {k}", text) for k, text in enumerate(catalogue.remarks, start=1)),
        ("Analysis", "linear elastic direct stiffness, pin-ended two-force members, small "
         "displacements"),
        ("Gravity", f"{GRAVITY} m/s2"),
        ("Connection allowance on self-weight", f"{option.connection_allowance:.1%}"),
        ("Adequate means", f"every utilisation at most {ADEQUATE:.9f}"),
        ("Sign", "tension positive, compression negative"),
    )  # fmt: skip


def _why_none(formulation: Formulation, picked: Pick) -> str:
    """Say which member, which combination, and how far the best section falls short."""
    option, fall = formulation.option.name, picked.shortfall
    if picked.status == "stopped":
        return (
            f"option {option}: stopped after {picked.seconds:.0f} s before any adequate design was "
            "found; allow more time"
        )
    if fall is None:
        return f"option {option}: no choice of sections passes every check"
    return f"option {option}: {_shortfall_text(formulation, fall)}"


def _shortfall_text(formulation: Formulation, fall: Shortfall) -> str:
    brief, catalogue = formulation.brief, formulation.catalogue
    section = f" with {catalogue.designation[fall.section]}" if fall.section is not None else ""
    how_far = (
        "no section has any resistance there"
        if np.isinf(fall.utilisation)
        else f"utilisation is at best {fall.utilisation:.3f}"
    )
    if fall.kind == "deflection" and fall.row is not None:
        limit, node, c = formulation.deflection_keys[fall.row]
        return (
            f"no choice of sections keeps deflection limit {brief.deflection_limits[limit].name!r} "
            f"at node {brief.nodes[node].name} in combination {brief.combinations[c].name}: "
            f"{how_far}{section}; give the truss more depth, relax the limit, or add heavier "
            "sections to the catalogue"
        )
    if fall.member is not None and fall.combination is not None:
        member = brief.members[fall.member]
        combination = brief.combinations[formulation.strength[fall.combination]]
        return (
            f"no section of catalogue {catalogue.name} is adequate for member {member.name} "
            f"(group {brief.groups[member.group].name}) in {fall.kind}, combination "
            f"{combination.name}: {how_far}{section}; add heavier sections, a higher grade, or "
            "closer restraint"
        )
    return "no choice of sections passes every check"
