"""Job results of invented trusses for the tests of documents.

Forces come from a small dense stiffness analysis and masses from the catalogue rows below, so
that totals and equilibrium hold; resistances are plain area × yield and Euler values with a
factor (for documents any consistent number will do). Everything here is invented.
"""

from __future__ import annotations

import math
from collections.abc import Callable
from dataclasses import dataclass, field
from pathlib import Path

import numpy as np
import pytest

from sizing.brief.model import (
    Brief,
    BucklingLength,
    Combination,
    DeflectionLimit,
    Group,
    LoadCase,
    Member,
    Node,
    Option,
    SourceFile,
    Support,
    Units,
)
from sizing.results import (
    CombinationResult,
    DeflectionResult,
    Extreme,
    GroupResult,
    JobResult,
    LighterResult,
    MemberResult,
    OptionResult,
    ReactionResult,
    SectionSummary,
    WorkedCheck,
)
from sizing.standards.contract import Step
from sizing.standards.formula import symbols
from sizing.standards.worked_lines import step

E = 210e9
YIELD = 355e6
ROWS = {  # designation -> (row, area m², radius of gyration m): invented square tubes
    "SHS 60x60x4": (12, 8.8e-4, 0.0227),
    "SHS 80x80x5": (19, 14.7e-4, 0.0305),
    "SHS 100x100x5": (27, 18.7e-4, 0.0386),
    "SHS 120x120x6.3": (35, 28.2e-4, 0.0461),
    "SHS 150x150x8": (48, 44.8e-4, 0.0577),
}


@dataclass
class Lines:
    """A line diagram: nodes, supports, members by node names per group, loads."""

    nodes: dict[str, tuple[float, ...]]
    held: dict[str, tuple[bool, ...]]
    groups: dict[str, list[tuple[str, str, str]]]
    sections: dict[str, str]
    cases: dict[str, dict[str, tuple[float, ...]]]
    combinations: list[tuple[str, str, dict[str, float]]]
    limited: list[str] = field(default_factory=list)
    out_of_plane: dict[str, float] = field(default_factory=dict)


def girder(panels: int, *, combinations: int = 0) -> Lines:
    """A parallel-chord girder with uplift; ``combinations`` extra ones vary the wind."""
    step, depth = 3.0, 2.4
    nodes = {f"A{i}": (i * step, 0.0) for i in range(panels + 1)}
    nodes |= {f"B{i}": (i * step, depth) for i in range(panels + 1)}
    top = [(f"B{i}", f"B{i + 1}", f"T{i + 1}") for i in range(panels)]
    bottom = [(f"A{i}", f"A{i + 1}", f"L{i + 1}") for i in range(panels)]
    posts = [(f"A{i}", f"B{i}", f"V{i + 1}") for i in range(panels + 1)]
    half = panels / 2
    diagonals = [
        (f"B{i}", f"A{i + 1}", f"D{i + 1}") if i < half else (f"A{i}", f"B{i + 1}", f"D{i + 1}")
        for i in range(panels)
    ]
    inner = [f"B{i}" for i in range(1, panels)]
    combos = [
        ("U1", "strength", {"permanent": 1.35, "snow": 1.5}),
        ("U2", "strength", {"permanent": 1.0, "wind uplift": 1.5}),
        ("S1", "serviceability", {"permanent": 1.0, "snow": 1.0}),
    ]
    combos += [
        (f"U{k + 3}", "strength", {"permanent": 1.0, "wind uplift": 0.1 * k, "snow": 0.3})
        for k in range(combinations)
    ]
    return Lines(
        nodes=nodes,
        held={"A0": (True, True), f"A{panels}": (False, True)},
        groups={"top chord": top, "bottom chord": bottom, "posts": posts, "diagonals": diagonals},
        sections={
            "top chord": "SHS 150x150x8",
            "bottom chord": "SHS 120x120x6.3",
            "posts": "SHS 80x80x5",
            "diagonals": "SHS 60x60x4",
        },
        cases={
            "permanent": dict.fromkeys(inner, (0.0, -6000.0 * 8 / panels)),
            "snow": dict.fromkeys(inner, (0.0, -11000.0 * 8 / panels)),
            "wind uplift": dict.fromkeys(inner, (0.0, 9000.0 * 8 / panels)),
        },
        combinations=combos,
        limited=[f"A{panels // 2}"],
        out_of_plane={"top chord": 6.0, "bottom chord": 9.0},
    )


def tower() -> Lines:
    """A small three-dimensional tower on four legs."""
    nodes: dict[str, tuple[float, ...]] = {}
    for level, (half, z) in enumerate([(1.5, 0.0), (1.1, 3.0), (0.8, 6.0)]):
        for k, (sx, sy) in enumerate([(-1, -1), (1, -1), (1, 1), (-1, 1)]):
            nodes[f"{'PQR'[level]}{k + 1}"] = (sx * half, sy * half, z)
    legs, rings, braces = [], [], []
    for lower, upper in ("PQ", "QR"):
        for k in range(4):
            here, there = k + 1, (k + 1) % 4 + 1
            legs.append((f"{lower}{here}", f"{upper}{here}", f"G{len(legs) + 1}"))
            braces.append((f"{lower}{here}", f"{upper}{there}", f"X{len(braces) + 1}"))
            braces.append((f"{lower}{there}", f"{upper}{here}", f"X{len(braces) + 1}"))
            rings.append((f"{upper}{here}", f"{upper}{there}", f"H{len(rings) + 1}"))
    rings.append(("Q1", "Q3", f"H{len(rings) + 1}"))
    rings.append(("R1", "R3", f"H{len(rings) + 1}"))
    top = {f"R{k}": (9e3, 2e3, -20e3) for k in (1, 2, 3, 4)}
    return Lines(
        nodes=nodes,
        held={f"P{k}": (True, True, True) for k in (1, 2, 3, 4)},
        groups={"legs": legs, "bracing": braces, "rings": rings},
        sections={"legs": "SHS 100x100x5", "bracing": "SHS 60x60x4", "rings": "SHS 60x60x4"},
        cases={
            "permanent": dict.fromkeys(top, (0.0, 0.0, -8000.0)),
            "wind": top,
        },
        combinations=[
            ("U1", "strength", {"permanent": 1.35}),
            ("U2", "strength", {"permanent": 1.0, "wind": 1.5}),
            ("S1", "serviceability", {"permanent": 1.0, "wind": 1.0}),
        ],
        limited=["R1"],
    )


def job_of(
    lines: Lines,
    *,
    title: str = "Harbour store, roof girder G1 (invented)",
    units: Units | None = None,
    options: tuple[str, ...] = ("steel",),
) -> JobResult:
    """Return a consistent job result for a line diagram."""
    brief = _brief(lines, title, units or Units(), options)
    return JobResult(
        brief=brief,
        version="0.1.0",
        options=tuple(_option(lines, brief, name) for name in options),
    )


def _brief(lines: Lines, title: str, units: Units, options: tuple[str, ...]) -> Brief:
    names = list(lines.nodes)
    members: list[Member] = []
    groups = []
    for g, (group, ends) in enumerate(lines.groups.items()):
        first = len(members)
        for a, b, mark in ends:
            length = math.dist(lines.nodes[a], lines.nodes[b])
            members.append(
                Member(
                    name=f"{a}-{b}", mark=mark, start=names.index(a), end=names.index(b),
                    group=g, length=length,
                )
            )  # fmt: skip
        rule = lines.out_of_plane.get(group)
        groups.append(
            Group(
                name=group,
                members=tuple(range(first, len(members))),
                out_of_plane=BucklingLength(rule="length", value=rule) if rule
                else BucklingLength(),
            )
        )  # fmt: skip
    cases = list(lines.cases)
    return Brief(
        title=title,
        source=SourceFile(name="girder.toml", path=Path("girder.toml"), sha256="ab" * 32),
        units=units,
        minimise="mass",
        nodes=tuple(Node(name=n, position=p) for n, p in lines.nodes.items()),
        supports=tuple(Support(node=names.index(n), held=h) for n, h in lines.held.items()),
        groups=tuple(groups),
        members=tuple(members),
        cases=tuple(
            LoadCase(
                name=c,
                kind="permanent" if c == "permanent" else "wind" if "wind" in c else "snow",
                nodal={names.index(n): f for n, f in loads.items()},
                self_weight=c == "permanent",
            )
            for c, loads in lines.cases.items()
        ),
        combinations=tuple(
            Combination(
                name=n,
                state=s,
                factors={cases.index(c): f for c, f in factors.items()},
                duration="short",
            )
            for n, s, factors in lines.combinations
        ),
        deflection_limits=tuple(
            DeflectionLimit(
                name="sag",
                nodes=(names.index(n),),
                direction=(0.0, 1.0),
                direction_text="y",
                limit=0.096,
                limit_text="span/250",
                combinations=(2,),
            )
            for n in lines.limited
        ),
        options=tuple(
            Option(name=o, standard="EN 1993-1-1", grade="S355", catalogue="invented-tubes")
            for o in options
        ),
    )


def _analysis(brief: Brief, area: np.ndarray, weight: np.ndarray):
    """Dense direct stiffness: forces (m, c), displacements (n·d, c), loads (n·d, c)."""
    d, n = brief.dimensions, len(brief.nodes)
    position = np.array([node.position for node in brief.nodes])
    rows = np.zeros((len(brief.members), n * d))
    for i, m in enumerate(brief.members):
        direction = (position[m.end] - position[m.start]) / m.length
        rows[i, m.start * d : m.start * d + d] = -direction
        rows[i, m.end * d : m.end * d + d] = direction
    stiffness = E * area / np.array([m.length for m in brief.members])
    K = rows.T @ (stiffness[:, None] * rows)
    free = np.ones(n * d, dtype=bool)
    for s in brief.supports:
        free[s.node * d : s.node * d + d] = [not h for h in s.held]
    loads = np.zeros((n * d, len(brief.combinations)))
    for c, combination in enumerate(brief.combinations):
        for q, factor in combination.factors.items():
            for node, force in brief.cases[q].nodal.items():
                loads[node * d : node * d + d, c] += factor * np.array(force)
            if brief.cases[q].self_weight:
                for m, w in zip(brief.members, weight, strict=True):
                    for node in (m.start, m.end):
                        loads[node * d + d - 1, c] -= factor * w * m.length / 2
    u = np.zeros_like(loads)
    u[free] = np.linalg.solve(K[np.ix_(free, free)], loads[free])
    force = stiffness[:, None] * (rows @ u)
    return force, u, loads, rows.T @ force - loads


def _option(lines: Lines, brief: Brief, name: str) -> OptionResult:
    chosen = [lines.sections[brief.groups[m.group].name] for m in brief.members]
    area = np.array([ROWS[s][1] for s in chosen])
    force, u, loads, reaction = _analysis(brief, area, area * 7850 * 9.80665)
    d = brief.dimensions
    members = tuple(_member(brief, i, chosen[i], force[i]) for i in range(len(brief.members)))
    groups = tuple(_group(g.name, members) for g in brief.groups)
    mass = math.fsum(m.mass for m in members)
    return OptionResult(
        option=name,
        standard="EN 1993-1-1",
        edition="2005 with A1:2014",
        grade="S355",
        catalogue="invented-tubes",
        catalogue_source=SourceFile(name="tubes.csv", path=Path("tubes.csv"), sha256="cd" * 32),
        status="proven",
        method="one exact mixed-integer programme; forces do not depend on the sections",
        objective_text="mass",
        objective=mass,
        bound=mass,
        gap=0.0,
        analyses=7,
        seconds=0.42,
        adequate=all(m.utilisation <= 1.0 for m in members),
        mass=mass,
        connection_allowance=0.05,
        groups=groups,
        members=members,
        sections=_sections(members),
        lighter=tuple(
            LighterResult(
                group=g.name,
                designation=None if g.designation == "SHS 60x60x4" else "SHS 60x60x4",
                mass_saved=0.1 * g.mass,
                fails=g.governed_by,
                where=g.governing_member,
                combination=g.governing_combination,
                utilisation=g.utilisation + 0.4,
            )
            for g in groups
        ),
        combinations=tuple(
            CombinationResult(
                name=c.name,
                state=c.state,
                factors=tuple((brief.cases[q].name, f) for q, f in c.factors.items()),
                duration=c.duration,
                origin=c.origin,
                applied=tuple(loads[:, k].reshape(-1, d).sum(axis=0).tolist()),
                residual=3e-15,
            )
            for k, c in enumerate(brief.combinations)
        ),
        deflections=tuple(
            DeflectionResult(
                limit_name=limit.name,
                node=brief.nodes[n].name,
                direction=limit.direction_text,
                combination=brief.combinations[c].name,
                value=float(u[n * d + d - 1, c]),
                limit=limit.limit,
                limit_text=limit.limit_text,
                utilisation=abs(float(u[n * d + d - 1, c])) / limit.limit,
            )
            for limit in brief.deflection_limits
            for n in limit.nodes
            for c in limit.combinations
        ),
        reactions=tuple(
            ReactionResult(
                node=brief.nodes[s.node].name,
                combination=c.name,
                state=c.state,
                components=tuple(
                    float(reaction[s.node * d + a, k]) if s.held[a] else 0.0 for a in range(d)
                ),
            )
            for s in brief.supports
            for k, c in enumerate(brief.combinations)
        ),
        displacements=tuple(
            tuple(tuple(row) for row in u[:, k].reshape(-1, d).tolist())
            for k in range(len(brief.combinations))
        ),
        worked=_worked(members),
        left_out=(("SHS 200x200x3", "wall too slender: class 4 in compression"),),
        basis=(("gamma M0, gamma M1", "1.00, 1.00 (EN 1993-1-1, 6.1)"), ("E", "210 GPa (3.2.6)")),
        cautions=(
            "Joints are not designed here; the member forces at each joint are listed.",
            "Group bottom chord turns to compression in combination U2: check its restraint.",
        ),
    )


def _member(brief: Brief, i: int, designation: str, force: np.ndarray) -> MemberResult:
    m = brief.members[i]
    group = brief.groups[m.group]
    row, area, radius = ROWS[designation]
    slender = max(m.length, group.out_of_plane.of(m.length)) / radius
    euler = math.pi**2 * E * area / slender**2
    pressure = 1.0 / (1.0 / (area * YIELD) + 1.25 / euler)
    strength = [c.state == "strength" for c in brief.combinations]
    A, f_y, N_E = symbols("A", "f_y", "N_E")
    given = (
        step("A", "catalogue", area, "m²", "section", "area"),
        step("f_y", "S355", YIELD, "Pa", "3.2.1", "yield strength"),
    )
    pull = (*given, step("N_Rd", A * f_y, area * YIELD, "N", "6.2.3", "resistance"))
    bow = (
        *given,
        step("N_E", "Euler", euler, "N", "", "Euler's load"),
        step("N_Rd", 1.0 / (1.0 / (A * f_y) + 1.25 / N_E), pressure, "N", "6.3.1"),
    )
    tension = _extreme(brief, np.where(strength, force, 0.0), pull, "6.2.3 tension")
    push = _extreme(brief, np.where(strength, -force, 0.0), bow, "6.3.1 buckling out of plane")
    compression = push and Extreme(
        force=-push.force, combination=push.combination, resistance=push.resistance,
        utilisation=push.utilisation, governing_combination=push.governing_combination,
        governing_force=-push.governing_force, clause=push.clause, steps=push.steps,
    )  # fmt: skip
    worst = max((e for e in (tension, compression) if e), key=lambda e: e.utilisation, default=None)
    return MemberResult(
        name=m.name, mark=m.mark, group=group.name,
        start=brief.nodes[m.start].name, end=brief.nodes[m.end].name,
        designation=designation, catalogue_row=row, length=m.length,
        mass_per_metre=7850 * area, mass=7850 * area * m.length, area=area,
        in_plane=group.in_plane.of(m.length), out_of_plane=group.out_of_plane.of(m.length),
        slenderness_in=m.length / radius, slenderness_out=group.out_of_plane.of(m.length) / radius,
        slenderness_limit=200.0 if compression else None,
        tension=tension, compression=compression,
        utilisation=worst.utilisation if worst else 0.0,
        governing=None if worst is None else "tension" if worst is tension else "compression",
        governing_clause=worst.clause if worst else "",
        governing_combination=worst.governing_combination if worst else "",
        forces=tuple(force.tolist()),
    )  # fmt: skip


def _extreme(
    brief: Brief, force: np.ndarray, steps: tuple[Step, ...], clause: str
) -> Extreme | None:
    k = int(np.argmax(force))
    if force[k] < 1e-3:
        return None
    name, resistance = brief.combinations[k].name, steps[-1].value
    return Extreme(
        force=float(force[k]), combination=name, resistance=resistance,
        utilisation=float(force[k]) / resistance, governing_combination=name,
        governing_force=float(force[k]), clause=clause, steps=steps,
    )  # fmt: skip


def _group(name: str, members: tuple[MemberResult, ...]) -> GroupResult:
    own = [m for m in members if m.group == name]
    worst = max(own, key=lambda m: m.utilisation)
    return GroupResult(
        name=name, designation=worst.designation, catalogue_row=worst.catalogue_row,
        members=tuple(m.mark for m in own), total_length=math.fsum(m.length for m in own),
        mass=math.fsum(m.mass for m in own), utilisation=worst.utilisation,
        governed_by=f"{worst.governing}, {worst.governing_clause}", governing_member=worst.mark,
        governing_combination=worst.governing_combination,
    )  # fmt: skip


def _sections(members: tuple[MemberResult, ...]) -> tuple[SectionSummary, ...]:
    lines = []
    for designation in dict.fromkeys(m.designation for m in members):
        own = [m for m in members if m.designation == designation]
        length = math.fsum(m.length for m in own)
        lines.append(
            SectionSummary(
                designation=designation, catalogue_row=own[0].catalogue_row, product="EN 10219-2",
                pieces=len(own), total_length=length, mass_per_metre=own[0].mass_per_metre,
                mass=math.fsum(m.mass for m in own), surface=0.4 * length,
            )
        )  # fmt: skip
    return tuple(lines)


def _worked(members: tuple[MemberResult, ...]) -> tuple[WorkedCheck, ...]:
    worked = []
    for sense in ("tension", "compression"):
        m = max(members, key=lambda m: e.utilisation if (e := getattr(m, sense)) else 0.0)
        extreme = getattr(m, sense)
        worked.append(
            WorkedCheck(
                mark=m.mark, designation=m.designation, sense=sense,
                combination=extreme.governing_combination, force=extreme.governing_force,
                utilisation=extreme.utilisation,
                steps=(
                    Step(symbol="A", expression="from the catalogue", value=m.area, unit="m²",
                         clause="", meaning="area"),
                    Step(symbol="f_y", expression="S355", value=YIELD, unit="Pa",
                         clause="3.2.1", meaning="yield strength"),
                    Step(symbol="lambda_bar", expression="sqrt(A f_y / N_cr)", value=0.87,
                         unit="-", clause="6.3.1.2", meaning="non-dimensional slenderness"),
                    Step(symbol="N_Rd", expression="A f_y / gamma_M0", value=extreme.resistance,
                         unit="N", clause="6.2.3", meaning=f"{sense} resistance"),
                ),
            )
        )  # fmt: skip
    return tuple(worked)


@pytest.fixture(scope="session")
def girder_job() -> JobResult:
    """An eight-panel girder with uplift, one option."""
    return job_of(girder(8))


@pytest.fixture(scope="session")
def tower_job() -> JobResult:
    """A space truss in US units with two options."""
    return job_of(
        tower(),
        title="Signal mast, tower T2 (invented)",
        units=Units(force="kip", length="ft"),
        options=("tube", "tube two"),
    )


@pytest.fixture(scope="session")
def large_job() -> JobResult:
    """About 300 members and 25 combinations."""
    return job_of(girder(75, combinations=22), title="Long shed, girder G9 (invented)")


HOSTILE = (
    "<script>alert(1)</script>",
    "a & b \"c\" 'd' ]]>",
    "=cmd|' /C calc'!A0",
    "+1",
    "-2",
    "@SUM(A1)",
    "שלום עולם",
    "exe\u202egnp",
    "🏗️ crane",
    "two\nlines\tand a tab",
    "x" * 300,
    "_x0041_",
    "bell\x07",
    "{{ 7 * 7 }} {% raw %}",
    "[bold red]loud[/] :smile:",
    "&A&P &[Page]",
)


def hostile_girder() -> Lines:
    """A girder whose nodes, marks and groups carry names that try to break a document."""
    plain = girder(7)
    nodes = dict(zip(plain.nodes, HOSTILE, strict=True))
    marks = iter(HOSTILE * 3)
    groups = dict(zip(plain.groups, HOSTILE, strict=False))
    return Lines(
        nodes={nodes[n]: p for n, p in plain.nodes.items()},
        held={nodes[n]: h for n, h in plain.held.items()},
        groups={
            groups[g]: [(nodes[a], nodes[b], next(marks)) for a, b, _ in members]
            for g, members in plain.groups.items()
        },
        sections={groups[g]: s for g, s in plain.sections.items()},
        cases={
            c if c == "permanent" else f"{c} {HOSTILE[2]}": {nodes[n]: f for n, f in loads.items()}
            for c, loads in plain.cases.items()
        },
        combinations=[
            (
                HOSTILE[k],
                state,
                {c if c == "permanent" else f"{c} {HOSTILE[2]}": f for c, f in factors.items()},
            )
            for k, (_, state, factors) in enumerate(plain.combinations)
        ],
        limited=[nodes[n] for n in plain.limited],
        out_of_plane={groups[g]: r for g, r in plain.out_of_plane.items()},
    )


@pytest.fixture(scope="session")
def hostile_job() -> JobResult:
    """A job in which every name tries to break a document."""
    return job_of(hostile_girder(), title=" ".join(HOSTILE), options=HOSTILE[:8])


@pytest.fixture(scope="session")
def hostile_names() -> tuple[str, ...]:
    """The names used in ``hostile_job``."""
    return HOSTILE


@pytest.fixture(scope="session")
def make_job() -> Callable[[int], JobResult]:
    """Build the job of a girder with a number of panels."""
    return lambda panels: job_of(girder(panels))
