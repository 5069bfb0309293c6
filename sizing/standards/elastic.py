"""Allowable stress, and Euler's load over a safety factor: sizing without a design code.

Tension      N_t = A · allowable_tension
Compression  N_c = min(A · allowable_compression, π² E I / (L² · buckling_safety_factor))

with I and L of both axes; angles take the least second moment with the greater length.
"""

from __future__ import annotations

import math
from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from typing import Any

import numpy as np

from sizing.brief.model import LoadDuration
from sizing.brief.sections import Catalogue
from sizing.standards.conditions import (
    Reasons,
    Resistances,
    distinct_members,
    limit_slenderness,
    spread,
    take_members,
)
from sizing.standards.contract import (
    FloatArray,
    Material,
    MemberConditions,
    ResistanceTable,
    Sense,
    Step,
)
from sizing.standards.formula import PI, Formula, least, symbols
from sizing.standards.settings import Range, SettingsReader
from sizing.standards.slenderness import is_angle, slenderness_in_and_out
from sizing.standards.worked_lines import step

A, K_NET, SIGMA_T, SIGMA_C, E_MOD, N_FACTOR, N_SIGMA = symbols(
    "A", "k_net", "σ_t", "σ_c", "E", "n", "N_σ"
)

KEYS = (
    "E",
    "density",
    "allowable_tension",
    "allowable_compression",
    "buckling",
    "buckling_safety_factor",
)

USUAL_MODULUS = Range(least=1e8, greatest=1e12, text="a modulus of elasticity, 0.1 to 1000 GPa")
USUAL_DENSITY = Range(least=10.0, greatest=25000.0, text="a density of 10 to 25 000 kg/m3")
GREATEST_STRAIN = 0.1
"""An allowable stress above E/10 is no elastic stress; it catches MPa written for GPa in E."""

TENSION, COMPRESSION, BUCKLING_IN, BUCKLING_OUT, BUCKLING_LEAST, NO_INERTIA, LIMIT = range(7)
CLAUSES = (
    "allowable stress in tension",
    "allowable stress in compression",
    "Euler buckling in plane",
    "Euler buckling out of plane",
    "Euler buckling about the least axis",
    "buckling not checkable",
    "slenderness limit",
)


def euler_stress(E: float, slenderness: FloatArray) -> FloatArray:
    """Return Euler's critical stress π² E / (L/i)² in Pa, inf at slenderness 0 (Euler 1744)."""
    squared = np.square(slenderness)
    infinite = np.full_like(squared, np.inf)
    return np.divide(math.pi**2 * E, squared, out=infinite, where=squared != 0.0)


@dataclass(frozen=True, kw_only=True)
class Elastic:
    """Allowable stresses in Pa; ``safety_factor`` on Euler's load, None to leave buckling out."""

    material: Material
    allowable_tension: float
    allowable_compression: float
    safety_factor: float | None
    name: str = "elastic"
    edition: str = "allowable stress"

    def resistances(
        self,
        catalogue: Catalogue,
        members: MemberConditions,
        durations: Sequence[LoadDuration],
    ) -> ResistanceTable:
        """Return the table of :class:`ResistanceTable`; load duration has no influence."""
        distinct, inverse = distinct_members(members)
        reasons = Reasons()
        found = self._distinct(catalogue, distinct, reasons)
        return spread(found, inverse, durations, CLAUSES, reasons.texts())

    def _distinct(
        self, catalogue: Catalogue, members: MemberConditions, reasons: Reasons
    ) -> Resistances:
        slenderness_in, slenderness_out = slenderness_in_and_out(catalogue, members)
        shape = slenderness_in.shape
        area = np.broadcast_to(catalogue.area, shape)
        compression = area * self.allowable_compression
        clause = np.full(shape, COMPRESSION, dtype=np.intp)
        notes = np.zeros(shape, dtype=np.intp)
        slenderness = np.fmax(slenderness_in, slenderness_out)
        if self.safety_factor is not None:
            buckling = area * euler_stress(self.material.E, slenderness) / self.safety_factor
            axis = np.where(slenderness_out > slenderness_in, BUCKLING_OUT, BUCKLING_IN)
            axis = np.where(is_angle(catalogue), BUCKLING_LEAST, axis)
            clause = np.where(buckling < compression, axis, clause)
            compression = np.minimum(compression, buckling)
            unknown = np.isnan(slenderness)
            if unknown.any():
                missing = reasons.index("the catalogue gives no second moment of area")
                notes = np.where(unknown, missing, notes)
                clause = np.where(unknown, NO_INERTIA, clause)
                compression = np.where(unknown, 0.0, compression)
        found = Resistances(
            tension=area * self.allowable_tension * members.net_factor[:, None],
            compression=compression,
            tension_clause=np.full(shape, TENSION, dtype=np.intp),
            compression_clause=clause,
            slenderness_in=slenderness_in,
            slenderness_out=slenderness_out,
            usable=np.ones(shape, dtype=bool),
            notes=notes,
        )
        return limit_slenderness(found, slenderness, members, reasons, LIMIT)

    def working(
        self,
        catalogue: Catalogue,
        section: int,
        members: MemberConditions,
        member: int,
        duration: LoadDuration,
        sense: Sense,
    ) -> tuple[Step, ...]:
        """Return the worked lines of one resistance; the last line is the resistance."""
        one = catalogue.only(section)
        condition = take_members(members, np.array([member], dtype=np.intp))
        table = self.resistances(one, condition, (duration,))
        area = float(one.area[0])
        steps = [Step(symbol="A", expression="catalogue", value=area, unit="m²", clause="section")]
        if sense == "tension":
            return (*steps, *self._tension_steps(condition, table))
        return (*steps, *self._compression_steps(one, condition, table))

    def _tension_steps(self, members: MemberConditions, table: ResistanceTable) -> tuple[Step, ...]:
        clause = CLAUSES[TENSION]
        net = float(members.net_factor[0])
        return (
            step("σ_t", "setting", self.allowable_tension, "Pa", clause, "allowable stress"),
            step("k_net", "brief", net, "-", clause, "net over gross area at the joints"),
            step(
                "N_t", K_NET * A * SIGMA_T, float(table.tension[0, 0, 0]), "N", clause, "resistance"
            ),
        )

    def _compression_steps(
        self, catalogue: Catalogue, members: MemberConditions, table: ResistanceTable
    ) -> tuple[Step, ...]:
        clause = CLAUSES[COMPRESSION]
        area = float(catalogue.area[0])
        squash = area * self.allowable_compression
        steps = [
            step("σ_c", "setting", self.allowable_compression, "Pa", clause, "allowable stress"),
            step("N_σ", A * SIGMA_C, squash, "N", clause),
        ]
        terms = [N_SIGMA]
        angle = catalogue.family[0] == "angle"
        radius = "least radius of gyration" if angle else "radius of gyration"
        if self.safety_factor is not None:
            steps += [
                step("E", "setting", self.material.E, "Pa", "material"),
                step("n", "setting", self.safety_factor, "-", "safety factor on Euler's load"),
            ]
            for mark, index, length, slenderness in (
                ("in", BUCKLING_IN, members.in_plane[0], table.slenderness_in[0, 0]),
                ("out", BUCKLING_OUT, members.out_of_plane[0], table.slenderness_out[0, 0]),
            ):
                if not slenderness > 0.0:
                    continue  # held throughout, or no second moment of area: nothing to work
                load = area * float(euler_stress(self.material.E, slenderness)) / self.safety_factor
                text = CLAUSES[index]
                L, i, ratio, euler = symbols(*(f"{letter}_{mark}" for letter in "LiλN"))
                steps += [
                    step(f"L_{mark}", "brief", float(length), "m", text, "buckling length"),
                    step(i.name, "catalogue", length / slenderness, "m", "section", radius),
                    step(ratio.name, L / i, float(slenderness), "-", text),
                    step(euler.name, PI**2 * E_MOD * A / (N_FACTOR * ratio**2), load, "N", text),
                ]
                terms.append(euler)
        expression: Formula | str = least(*terms)
        reason = table.reasons[int(table.notes[0, 0])]
        resistance = float(table.compression[0, 0, 0])
        if resistance == 0.0 and reason:
            expression = "0"
        governing = table.clauses[int(table.compression_clause[0, 0, 0])]
        steps.append(step("N_c", expression, resistance, "N", governing, reason or "resistance"))
        return tuple(steps)

    def basis(self) -> tuple[tuple[str, str], ...]:
        """Return (what, value with source) rows for the basis of design."""
        buckling = (
            "left out by setting"
            if self.safety_factor is None
            else f"Euler's load over a safety factor of {self.safety_factor:g}, both axes"
        )
        return (
            ("Method", "allowable stress, no design code"),
            ("Modulus of elasticity", f"{self.material.E / 1e6:g} N/mm² (setting)"),
            ("Density", f"{self.material.density:g} kg/m³ (setting)"),
            ("Allowable stress in tension", f"{self.allowable_tension / 1e6:g} N/mm² (setting)"),
            (
                "Allowable stress in compression",
                f"{self.allowable_compression / 1e6:g} N/mm² (setting)",
            ),
            ("Buckling", buckling),
        )

    def cautions(self) -> tuple[str, ...]:
        """Return what this check leaves out, in plain sentences."""
        left_out = (
            "Allowable stresses and safety factors are the user's own; no design code is applied.",
            "Local buckling of walls, torsional buckling, crookedness and eccentricity of the"
            " members are not checked.",
        )
        if self.safety_factor is None:
            return (*left_out, "Buckling of compression members is not checked at all.")
        return left_out


def make_elastic(grade: str | None, settings: Mapping[str, Any]) -> Elastic:
    """Return the standard; ``grade`` only names the material. Raises :class:`SettingsError`."""
    reader = SettingsReader("elastic", settings, KEYS)
    buckling = reader.choice("buckling", ("Euler", "none"), "Euler")
    factor = None
    if buckling == "Euler":
        factor = reader.required_number("buckling_safety_factor", at_least=1.0, at_most=20.0)
    else:
        reader.forbid("buckling_safety_factor", 'buckling = "none"')
    E = reader.required_quantity("E", "stress", USUAL_MODULUS)
    usual = Range(
        least=0.0, greatest=GREATEST_STRAIN * E, text=f"at most E/{1 / GREATEST_STRAIN:g}"
    )
    return Elastic(
        material=Material(
            name=grade or "material as set",
            E=E,
            density=reader.required_quantity("density", "density", USUAL_DENSITY),
        ),
        allowable_tension=reader.required_quantity("allowable_tension", "stress", usual),
        allowable_compression=reader.required_quantity("allowable_compression", "stress", usual),
        safety_factor=factor,
    )
