"""From a brief and one of its options to the arrays of a sizing problem.

Data flow: catalogue rows and grade → mass per metre, E·A → resistance table (members ×
sections × durations) → allowed sections per group → loads on the free displacements →
deflection rows → :class:`~sizing.selection.problem.SizingProblem`.
"""

from __future__ import annotations

from dataclasses import dataclass
from fnmatch import fnmatchcase

import numpy as np
from numpy.typing import NDArray
from scipy import sparse

from sizing.brief.catalogue_reader import read_catalogue
from sizing.brief.model import Brief, DeflectionLimit, Group, LoadDuration, Option
from sizing.brief.sections import Catalogue
from sizing.errors import InputError, NoAdequateSectionError, Problem
from sizing.mechanics.brief_loads import case_loads, geometry_of, self_weight_share
from sizing.mechanics.geometry import Geometry
from sizing.mechanics.stability import require_stable
from sizing.objective import objective_values
from sizing.selection.problem import SizingProblem
from sizing.standards.contract import (
    MemberConditions,
    ResistanceTable,
    SettingsError,
    Standard,
)
from sizing.standards.en1995_deflection import deflection_factors
from sizing.standards.registry import make_standard

FloatArray = NDArray[np.float64]

GRAVITY = 9.80665
"""Standard gravity in m/s² (ISO 80000-3), the value section tables use for kg/m to kN/m."""


@dataclass(frozen=True, kw_only=True)
class Formulation:
    """A sizing problem together with what its indices mean.

    ``mass`` is kg per m of each section (s,). ``deflection_keys`` gives, for each deflection
    row, the limit index, node index and combination index in the brief.
    """

    brief: Brief
    option: Option
    standard: Standard
    catalogue: Catalogue
    geometry: Geometry
    conditions: MemberConditions
    table: ResistanceTable
    mass: FloatArray
    strength: tuple[int, ...]
    deflection_keys: tuple[tuple[int, int, int], ...]
    problem: SizingProblem


def formulate(brief: Brief, option: Option) -> Formulation:
    """Return the sizing problem of one option of the brief.

    Raises :class:`InputError` for a catalogue, grade or setting that cannot be used,
    :class:`UnstableTrussError` for a mechanism and :class:`NoAdequateSectionError` when a group
    is left without a single section that it may take.
    """
    geometry = geometry_of(brief)
    require_stable(geometry, [node.name for node in brief.nodes])
    catalogue = read_catalogue(option.catalogue, brief.source.path.parent)
    standard = standard_of(brief, option)
    _require_one_method(brief, option, standard)
    mass = mass_per_metre(catalogue, standard)
    conditions = member_conditions(brief, option)
    strength = brief.combinations_of("strength")
    table = _resistances(brief, option, standard, catalogue, conditions)
    cost = objective_values(brief, option, catalogue, mass)
    allowed = allowed_sections(brief, option, catalogue, table) & ~np.isnan(cost)
    _require_priced(brief, option, allowed)
    keys, vectors, factors, limits = deflection_rows(brief, geometry, standard.material.creep)
    cap = np.array([group.utilisation_cap for group in brief.groups])
    member_group = np.array([member.group for member in brief.members], dtype=np.intp)
    capped = cap[member_group][:, None, None]
    free = geometry.free
    loads = case_loads(brief)
    problem = SizingProblem(
        compatibility=geometry.compatibility,
        length=geometry.length,
        group=member_group,
        stiffness=standard.material.E * catalogue.area,
        weight=mass * GRAVITY * (1.0 + option.connection_allowance),
        cost=np.where(np.isnan(cost), 0.0, cost),
        allowed=allowed,
        loads=loads.reshape(-1, loads.shape[-1])[free],
        self_weight_factor=np.array([float(case.self_weight) for case in brief.cases]),
        self_weight_share=sparse.csr_array(self_weight_share(geometry))[free],
        strength_factors=factor_matrix(brief, strength),
        duration=np.array(
            [table.durations.index(brief.combinations[c].duration) for c in strength], dtype=np.intp
        ),
        tension=table.tension * capped,
        compression=table.compression * capped,
        deflection_vectors=vectors,
        deflection_factors=factors,
        deflection_limit=limits,
    )
    return Formulation(
        brief=brief,
        option=option,
        standard=standard,
        catalogue=catalogue,
        geometry=geometry,
        conditions=conditions,
        table=table,
        mass=mass,
        strength=strength,
        deflection_keys=keys,
        problem=problem,
    )


def standard_of(brief: Brief, option: Option) -> Standard:
    """Return the option's standard with its grade and settings; bad ones name their key."""
    try:
        return make_standard(option.standard, option.grade, option.settings)
    except SettingsError as error:
        raise _setting_refused(brief, option, error) from error


def _resistances(
    brief: Brief,
    option: Option,
    standard: Standard,
    catalogue: Catalogue,
    conditions: MemberConditions,
) -> ResistanceTable:
    durations = durations_of(brief, brief.combinations_of("strength"))
    try:
        return standard.resistances(catalogue, conditions, durations)
    except SettingsError as error:
        raise _setting_refused(brief, option, error) from error


def _setting_refused(brief: Brief, option: Option, error: SettingsError) -> InputError:
    return InputError(
        [
            Problem(
                file=brief.source.name,
                place=f"options.{option.name}.{error.key}",
                found=error.found,
                expected=error.expected,
                fix=error.fix,
            )
        ]
    )


def _require_one_method(brief: Brief, option: Option, standard: Standard) -> None:
    """Refuse factored (LRFD) combinations with allowable (ASD) resistances and the reverse.

    The resistances of an EN standard are design values: service-level (ASD) combinations would
    leave the partial factors of actions out altogether.
    """
    method = dict(standard.basis()).get("Method", "").split(",")[0]
    fix = 'Write method = "{other}", or take the {method} combination rule.'
    if standard.name.startswith("EN "):
        method, fix = "design", 'Take the combination rule "EN 1990" (or one of LRFD).'
    other = {"LRFD": "ASD", "ASD": "LRFD", "design": "ASD"}.get(method)
    if other is None:
        return
    mixed = [
        combination.name
        for combination in brief.combinations
        if combination.state == "strength" and other in combination.origin.split()
    ]
    if mixed:
        raise InputError(
            [
                Problem(
                    file=brief.source.name,
                    place=f"options.{option.name}.method",
                    found=f"{method} resistances with {other} combinations ({mixed[0]} and others)",
                    expected="resistances and combinations of one method",
                    fix=fix.format(other=other, method=method),
                )
            ]
        )


def mass_per_metre(catalogue: Catalogue, standard: Standard) -> FloatArray:
    """Return kg per m (s,): the catalogue's, or area × density of the grade where it has none."""
    return np.where(
        np.isnan(catalogue.mass), catalogue.area * standard.material.density, catalogue.mass
    )


def durations_of(brief: Brief, strength: tuple[int, ...]) -> tuple[LoadDuration, ...]:
    """Return the distinct load durations of the strength combinations, in brief order."""
    return tuple(dict.fromkeys(brief.combinations[c].duration for c in strength))


def factor_matrix(brief: Brief, combinations: tuple[int, ...]) -> FloatArray:
    """Return the factors (combinations × cases) of the given combinations."""
    factors = np.zeros((len(combinations), len(brief.cases)))
    for row, c in enumerate(combinations):
        for case, factor in brief.combinations[c].factors.items():
            factors[row, case] = factor
    return factors


def member_conditions(brief: Brief, option: Option) -> MemberConditions:
    """Return what the standard must know of each member (arrays of length m)."""
    groups = [brief.groups[member.group] for member in brief.members]
    buckling = np.array([brief.buckling_lengths(i) for i in range(len(brief.members))])
    limits = [group.slenderness or option.slenderness for group in groups]
    return MemberConditions(
        length=np.array([member.length for member in brief.members]),
        in_plane=buckling[:, 0],
        out_of_plane=buckling[:, 1],
        depth_in_plane=np.array([group.depth_in_plane for group in groups]),
        net_factor=np.array([group.net_section_factor for group in groups])
        * option.net_section_factor,
        max_slenderness_compression=_limits([s.compression for s in limits]),
        max_slenderness_tension=_limits([s.tension for s in limits]),
        role=tuple(group.name for group in groups),
    )


def _limits(values: list[float | None]) -> FloatArray:
    return np.array([np.inf if value is None else value for value in values])


def allowed_sections(
    brief: Brief, option: Option, catalogue: Catalogue, table: ResistanceTable
) -> NDArray[np.bool_]:
    """Return which sections each group may take (g, s): families, patterns, usable for all.

    Raises :class:`NoAdequateSectionError` naming every group that is left with none.
    """
    allowed = np.empty((len(brief.groups), len(catalogue)), dtype=bool)
    empty = []
    for g, group in enumerate(brief.groups):
        chosen = _matches(group, catalogue)
        usable = table.usable[list(group.members)].all(axis=0)
        allowed[g] = chosen & usable & on_sale(catalogue)
        if not allowed[g].any():
            empty.append(_why_empty(group, chosen, catalogue, table))
    if empty:
        raise NoAdequateSectionError(
            f"option {option.name}: " + "; ".join(empty) + f" (catalogue {catalogue.name})"
        )
    return allowed


def on_sale(catalogue: Catalogue) -> NDArray[np.bool_]:
    """Return which sections (s,) the catalogue does not mark as not available."""
    if not catalogue.available:
        return np.ones(len(catalogue), dtype=bool)
    return np.array(catalogue.available, dtype=bool)


def _require_priced(brief: Brief, option: Option, allowed: NDArray[np.bool_]) -> None:
    unpriced = [group.name for g, group in enumerate(brief.groups) if not allowed[g].any()]
    if unpriced:
        raise NoAdequateSectionError(
            f"option {option.name}: no section that {', '.join(unpriced)} may take has a price in "
            "the catalogue; add prices, or minimise mass"
        )


def _matches(group: Group, catalogue: Catalogue) -> NDArray[np.bool_]:
    chosen = np.ones(len(catalogue), dtype=bool)
    if group.families:
        wanted = {family.casefold() for family in group.families}
        chosen &= np.array([family.casefold() in wanted for family in catalogue.family])
    if group.designations:
        chosen &= np.array(
            [
                any(fnmatchcase(name, pattern) for pattern in group.designations)
                for name in catalogue.designation
            ]
        )
    return chosen


def _why_empty(
    group: Group, chosen: NDArray[np.bool_], catalogue: Catalogue, table: ResistanceTable
) -> str:
    if not chosen.any():
        wanted = ", ".join((*group.families, *group.designations))
        return f"group {group.name} may take only {wanted}, which the catalogue does not hold"
    chosen = chosen & on_sale(catalogue)
    if not chosen.any():
        return f"group {group.name} may take only sections marked as not available"
    notes = table.notes[list(group.members)][:, chosen]
    reasons = [table.reasons[k] for k in np.unique(notes) if table.reasons[k]]
    return f"group {group.name} has no usable section: " + " / ".join(reasons[:3])


def deflection_rows(
    brief: Brief, geometry: Geometry, creep: float
) -> tuple[tuple[tuple[int, int, int], ...], sparse.csr_array, FloatArray, FloatArray]:
    """Return keys, vectors (r, n), factors (r, q) and limits (r,) of all deflection limits.

    ``creep`` is the material's kdef, which final deflections include. A movement that the
    supports prevent altogether has no row.
    """
    total = geometry.position.size
    column = np.full(total, -1)
    column[geometry.free] = np.arange(geometry.free.size)
    keys: list[tuple[int, int, int]] = []
    rows: list[int] = []
    columns: list[int] = []
    values: list[float] = []
    for k, limit in enumerate(brief.deflection_limits):
        for node in limit.nodes:
            entries = _movement(limit, node, brief.dimensions, column)
            if not entries:
                continue
            for c in limit.combinations:
                rows += [len(keys)] * len(entries)
                columns += [dof for dof, _ in entries]
                values += [value for _, value in entries]
                keys.append((k, node, c))
    shape = (len(keys), geometry.free.size)
    vectors = sparse.csr_array((values, (rows, columns)), shape=shape)
    factors = np.zeros((len(keys), len(brief.cases)))
    for row, (k, _, c) in enumerate(keys):
        for case, factor in limit_factors(brief, k, c, creep).items():
            factors[row, case] = factor
    limits = np.array([brief.deflection_limits[key[0]].limit for key in keys])
    return tuple(keys), vectors, factors, limits


def limit_factors(brief: Brief, limit: int, combination: int, creep: float) -> dict[int, float]:
    """Return case index → factor of the deflection that a limit checks in a combination."""
    asked = brief.deflection_limits[limit]
    return deflection_factors(
        brief.combinations[combination], asked.component, creep, asked.precamber
    )


def _movement(
    limit: DeflectionLimit, node: int, dimensions: int, column: NDArray[np.intp]
) -> list[tuple[int, float]]:
    """Return (free displacement, coefficient) pairs of the limited movement of one node."""
    terms = [(node, 1.0)]
    if limit.relative_to is not None:
        terms.append((limit.relative_to, -1.0))
    return [
        (int(column[at * dimensions + axis]), sign * component)
        for at, sign in terms
        for axis, component in enumerate(limit.direction)
        if component != 0.0 and column[at * dimensions + axis] >= 0
    ]
