"""EN 1995-1-1: solid timber (EN 338) and glued laminated timber (EN 14080) under axial force.

Tension      N_t,Rd = kh · ft,0,d · A_net                 (6.1.2, 3.2(3), 3.3(3))
Compression  N_c,Rd = min(kc,in, kc,out) · fc,0,d · A     (6.1.4, 6.3.2)
with f_d = kmod f_k / γM                                  (2.4.1)
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass, replace
from typing import Any

import numpy as np

from sizing.brief.model import LoadDuration
from sizing.brief.sections import Catalogue
from sizing.standards.conditions import (
    Reasons,
    Resistances,
    distinct_members,
    limit_slenderness,
    take_members,
    take_section,
)
from sizing.standards.contract import (
    FloatArray,
    Material,
    MemberConditions,
    ResistanceTable,
    Sense,
    SettingsError,
    Step,
)
from sizing.standards.en1995_grades import EDITIONS_338, TimberGrade, grade_names, timber_grade
from sizing.standards.en1995_strength import (
    BETA_C,
    GAMMA_M,
    K_DEF,
    K_MOD_DRY,
    k_c,
    k_h,
    k_mod,
    lambda_rel,
)
from sizing.standards.en1995_working import Strength, compression_steps, tension_steps
from sizing.standards.settings import SettingsReader, nearest
from sizing.standards.slenderness import slenderness_in_and_out
from sizing.standards.timber_sections import (
    Exclusions,
    is_sawn,
    over_durations,
    product_names,
    smaller_and_larger,
)
from sizing.standards.worked_lines import step

NAME = "EN 1995-1-1"
EDITION = "2004 + A1:2008 + A2:2014, recommended values"
KEYS = ("service_class", "gamma_M", "edition_338")
USUAL_SERVICE_CLASS = 2

TENSION, COMPRESSION, BUCKLING_IN, BUCKLING_OUT, SLENDER, NOT_COVERED = range(6)
CLAUSES = (
    "6.1.2 tension along the grain",
    "6.1.4 compression along the grain",
    "6.3.2 buckling in plane",
    "6.3.2 buckling out of plane",
    "limit on slenderness",
    "not covered",
)
NOT_GLULAM = "the catalogue row is not glued laminated timber, the grade is"
NOT_SOLID_TIMBER = "the catalogue row is glued laminated timber, the grade is solid timber"


@dataclass(frozen=True, kw_only=True)
class EN1995:
    """A strength class in a service class; ``gamma_M`` is the partial factor of the material."""

    grade: TimberGrade
    service_class: int
    service_class_assumed: bool
    gamma_M: float  # noqa: N815 -- the symbol of the standard
    material: Material
    name: str = NAME
    edition: str = EDITION

    def resistances(
        self,
        catalogue: Catalogue,
        members: MemberConditions,
        durations: Sequence[LoadDuration],
    ) -> ResistanceTable:
        """Return the table of :class:`ResistanceTable`; the durations differ by kmod alone."""
        distinct, inverse = distinct_members(members)
        reasons = Reasons()
        unit = self._at_unit_kmod(catalogue, distinct, reasons)
        found = [self._scaled(unit, k_mod(self.service_class, d)) for d in durations]
        return over_durations(found, inverse, durations, CLAUSES, reasons.texts())

    def _at_unit_kmod(
        self, catalogue: Catalogue, members: MemberConditions, reasons: Reasons
    ) -> Resistances:
        grade = self.grade
        excluded = self._exclusions(catalogue, reasons)
        lambda_in, lambda_out = slenderness_in_and_out(catalogue, members)
        shape = lambda_in.shape
        _, larger = smaller_and_larger(catalogue)
        size = k_h(grade.product, grade.rho_k, larger)
        tension = size * (grade.ft0k / self.gamma_M) * catalogue.area
        k_in, k_out = self._k_c(lambda_in), self._k_c(lambda_out)
        least = np.minimum(k_in, k_out)
        axis = np.where(k_out < k_in, BUCKLING_OUT, BUCKLING_IN)
        clause = np.where(least < 1.0, axis, COMPRESSION)
        usable = np.broadcast_to(excluded.usable, shape)
        found = Resistances(
            tension=np.where(usable, tension * members.net_factor[:, None], 0.0),
            compression=np.where(usable, least * (grade.fc0k / self.gamma_M) * catalogue.area, 0.0),
            tension_clause=np.where(usable, TENSION, NOT_COVERED),
            compression_clause=np.where(usable, clause, NOT_COVERED),
            slenderness_in=lambda_in,
            slenderness_out=lambda_out,
            usable=usable,
            notes=np.broadcast_to(excluded.note, shape),
        )
        greatest = np.fmax(lambda_in, lambda_out)
        return limit_slenderness(found, greatest, members, reasons, SLENDER)

    def _exclusions(self, catalogue: Catalogue, reasons: Reasons) -> Exclusions:
        excluded = Exclusions(catalogue, reasons)
        glulam = product_names(catalogue, "14080")
        sawn = is_sawn(catalogue)
        if self.grade.product == "glulam":
            excluded.exclude(sawn & ~glulam, NOT_GLULAM)
        else:
            excluded.exclude(glulam & ~sawn, NOT_SOLID_TIMBER)
        return excluded

    def _k_c(self, slenderness: FloatArray) -> FloatArray:
        relative = lambda_rel(slenderness, self.grade.fc0k, self.grade.E0_05)
        return k_c(relative, BETA_C[self.grade.product])

    def _scaled(self, unit: Resistances, factor: float) -> Resistances:
        return replace(unit, tension=unit.tension * factor, compression=unit.compression * factor)

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
        one = take_section(catalogue, section)
        condition = take_members(members, np.array([member], dtype=np.intp))
        table = self.resistances(one, condition, (duration,))
        reason = table.reasons[int(table.notes[0, 0])]
        index = table.tension_clause if sense == "tension" else table.compression_clause
        clause = table.clauses[int(index[0, 0, 0])]
        values = table.tension if sense == "tension" else table.compression
        if float(values[0, 0, 0]) == 0.0:
            symbol = "N_t,Rd" if sense == "tension" else "N_c,Rd"
            return (step(symbol, "0", 0.0, "N", clause, reason),)
        strength = Strength(
            grade=self.grade,
            service_class=self.service_class,
            gamma_M=self.gamma_M,
            duration=duration,
        )
        if sense == "tension":
            return tension_steps(strength, one, float(condition.net_factor[0]), clause)
        return compression_steps(strength, one, condition, table, clause)

    def basis(self) -> tuple[tuple[str, str], ...]:
        """Return (what, value with source) rows for the basis of design."""
        grade = self.grade
        assumed = " (usual value, not given in the brief)" if self.service_class_assumed else ""
        factors = ", ".join(
            f"{duration} {k_mod(self.service_class, duration):g}" for duration in K_MOD_DRY
        )
        return (
            ("Strength class", f"{grade.name}, {grade.product}, {grade.edition}"),
            (
                "Strength along the grain",
                f"tension {grade.ft0k / 1e6:g} N/mm², compression {grade.fc0k / 1e6:g} N/mm²"
                " (characteristic)",
            ),
            (
                "Stiffness",
                f"{grade.E0_mean / 1e6:g} N/mm² (mean, for forces and deflections), "
                f"{grade.E0_05 / 1e6:g} N/mm² (5 %, for buckling)",
            ),
            ("Density", f"{grade.rho_mean:g} kg/m³ (mean)"),
            ("Service class", f"{self.service_class}{assumed}"),
            ("Load duration factor kmod", f"{factors} (Table 3.1)"),
            ("Partial factor γM", f"{self.gamma_M:g} (Table 2.3 unless set)"),
            ("Creep factor kdef", f"{self.material.creep:g} (Table 3.2)"),
        )

    def cautions(self) -> tuple[str, ...]:
        """Return what this check leaves out, in plain sentences."""
        lines = [
            "Timber: values recommended by EN 1995-1-1 are used; a national annex may differ"
            " (γM, load durations of snow and wind). A load case without a duration of its own"
            " counts as permanent, medium (imposed, snow) or short (roof imposed, wind).",
            "Timber: joints are not designed. Tension members count the net section factor of"
            " their group and nothing else; dowelled joints commonly reach only about 60 % of"
            " the member (common practice), so give that factor.",
            "Timber: compression uses the gross section, with fasteners that fill their holes,"
            " and straightness within the limits of EN 1995-1-1 section 10.",
            "Timber: boards of built-up sections count one by one, as if nothing joined them;"
            " Annex C is not used.",
            "Timber: slip in joints, bearing across the grain, bending, splitting, fire,"
            " durability and treatment are not checked.",
        ]
        if self.service_class_assumed:
            lines.append(
                f"Timber: service class {self.service_class} is assumed; outdoors exposed to rain"
                " it is 3 and the strength is less."
            )
        return tuple(lines)


def make_en1995(grade: str | None, settings: Mapping[str, Any]) -> EN1995:
    """Return the standard for a strength class such as ``C24`` or ``GL24h``.

    Settings: ``service_class`` 1, 2 (usual) or 3; ``gamma_M``, Table 2.3 unless given;
    ``edition_338`` ``"2016"`` (usual) or ``"2009"``. Raises :class:`SettingsError`.
    """
    reader = SettingsReader(NAME, settings, KEYS)
    edition = reader.choice("edition_338", tuple(EDITIONS_338), "2016")
    strength_class = _strength_class(grade, edition)
    service_class = reader.number("service_class", USUAL_SERVICE_CLASS)
    if service_class not in K_DEF:
        raise SettingsError(
            key="service_class",
            found=f"{service_class:g}",
            expected="1 (heated indoors), 2 (covered outdoors) or 3 (exposed)",
        )
    return EN1995(
        grade=strength_class,
        service_class=int(service_class),
        service_class_assumed=not reader.has("service_class"),
        gamma_M=reader.number("gamma_M", GAMMA_M[strength_class.product], at_least=1.0),
        material=Material(
            name=strength_class.name,
            E=strength_class.E0_mean,
            density=strength_class.rho_mean,
            creep=K_DEF[int(service_class)],
        ),
    )


def _strength_class(grade: str | None, edition: str) -> TimberGrade:
    names = grade_names(edition)
    for name in names:
        if grade is not None and name.casefold() == "".join(grade.split()).casefold():
            return timber_grade(name, edition)
    close = None if grade is None else nearest(grade, names)
    raise SettingsError(
        key="grade",
        found="nothing" if grade is None else f'"{grade}"',
        expected=f"a strength class of EN 338:{edition} or EN 14080:2013: {', '.join(names)}",
        fix=f'Did you mean "{close}"?' if close else "",
    )
