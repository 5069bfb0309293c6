"""NDS 2018: sawn lumber, timbers and glulam under axial force, ASD or LRFD.

Tension      T = Ft' · A_net,  Ft' = Ft CD CM Ct CF Ci               (3.8, 4.3)
Compression  P = Fc' · A,      Fc' = Fc* CP, Fc* = Fc CD CM Ct CF Ci  (3.6, 3.7)
with CP from FcE = 0.822 Emin' / (le/d)² about each axis and le/d ≤ 50. LRFD takes KF φ λ in
the place of CD, and KF φs on Emin (Appendix N).
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from typing import Any

import numpy as np

from sizing.brief.model import LoadDuration
from sizing.brief.sections import Catalogue
from sizing.standards.conditions import (
    Reasons,
    Resistances,
    beyond,
    distinct_members,
    limit_slenderness,
    take_members,
    take_section,
)
from sizing.standards.contract import (
    Material,
    MemberConditions,
    ResistanceTable,
    Sense,
    Step,
)
from sizing.standards.nds_grades import OWN_VALUES, PSI, NDSGrade
from sizing.standards.nds_settings import (
    NAME,
    NDSSettings,
    read_grade,
    read_settings,
    refuse_unknown_factors,
)
from sizing.standards.nds_sizes import exclude_sizes
from sizing.standards.nds_strength import density
from sizing.standards.nds_values import Values
from sizing.standards.nds_working import compression_steps, tension_steps
from sizing.standards.slenderness import slenderness_in_and_out
from sizing.standards.timber_sections import SQRT12, Exclusions, over_durations
from sizing.standards.worked_lines import step

EDITION = "ANSI/AWC NDS-2018 with Supplement 2018"

TENSION, COMPRESSION, COLUMN_IN, COLUMN_OUT, TOO_SLENDER, LIMIT, NOT_COVERED = range(7)
CLAUSES = (
    "3.8.1 tension along the grain",
    "3.6.3 compression along the grain",
    "3.7.1 column stability in plane",
    "3.7.1 column stability out of plane",
    "3.7.1.4 slenderness le/d",
    "limit on slenderness",
    "not covered",
)

MOISTURE_DRY, MOISTURE_WET = 15.0, 28.0
"""Per cent: at 15 the densities of the American Wood Council's list result; 28 is about fibre
saturation (common practice)."""
CREEP_DRY, CREEP_WET = 0.5, 1.0
"""Kcr − 1 of 3.5.2: Kcr 1.5 for seasoned lumber and glulam dry, 2.0 unseasoned or wet."""


@dataclass(frozen=True, kw_only=True)
class NDS:
    """A grade with its adjustment factors."""

    grade: NDSGrade
    settings: NDSSettings
    material: Material
    name: str = NAME
    edition: str = EDITION

    @property
    def values(self) -> Values:
        """The adjusted values that follow from grade and settings."""
        return Values(grade=self.grade, settings=self.settings)

    def resistances(
        self,
        catalogue: Catalogue,
        members: MemberConditions,
        durations: Sequence[LoadDuration],
    ) -> ResistanceTable:
        """Return the table of :class:`ResistanceTable`: allowable loads (ASD) or design ones."""
        distinct, inverse = distinct_members(members)
        reasons = Reasons()
        excluded = Exclusions(catalogue, reasons)
        exclude_sizes(self.grade, catalogue, excluded)
        found = [self._at(d, catalogue, distinct, excluded, reasons) for d in durations]
        return over_durations(found, inverse, durations, CLAUSES, reasons.texts())

    def _at(
        self,
        duration: LoadDuration,
        catalogue: Catalogue,
        members: MemberConditions,
        excluded: Exclusions,
        reasons: Reasons,
    ) -> Resistances:
        adjusted = self.values.adjusted(catalogue, duration)
        apart = slenderness_in_and_out(catalogue, members)
        lambda_in, lambda_out = self.values.slenderness(catalogue, members)
        shape = lambda_in.shape
        cp_in = self.values.column(adjusted, apart[0], lambda_in)
        cp_out = self.values.column(adjusted, apart[1], lambda_out)
        least = np.minimum(cp_in, cp_out)
        clause = np.where(cp_out < cp_in, COLUMN_OUT, COLUMN_IN)
        clause = np.where(least < 1.0, clause, COMPRESSION)
        usable = np.broadcast_to(excluded.usable, shape)
        greatest = np.fmax(lambda_in, lambda_out)
        slender = beyond(greatest / SQRT12, self.settings.slenderness_limit) & usable
        notes = np.broadcast_to(excluded.note, shape).copy()
        if slender.any():
            limit = self.settings.slenderness_limit
            text = f"le/d exceeds {limit:g}, the limit of 3.7.1.4 for members in compression"
            notes[slender] = reasons.index(text)
        compression = adjusted.Fc_star * least * catalogue.area
        tension = adjusted.Ft * catalogue.area * members.net_factor[:, None]
        found = Resistances(
            tension=np.where(usable, tension, 0.0),
            compression=np.where(usable & ~slender, compression, 0.0),
            tension_clause=np.where(usable, TENSION, NOT_COVERED),
            compression_clause=np.where(
                usable, np.where(slender, TOO_SLENDER, clause), NOT_COVERED
            ),
            slenderness_in=lambda_in,
            slenderness_out=lambda_out,
            usable=usable,
            notes=notes,
        )
        return limit_slenderness(found, greatest, members, reasons, LIMIT)

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
        index = table.tension_clause if sense == "tension" else table.compression_clause
        clause = table.clauses[int(index[0, 0, 0])]
        values = table.tension if sense == "tension" else table.compression
        if float(values[0, 0, 0]) == 0.0:
            reason = table.reasons[int(table.notes[0, 0])]
            return (step("T" if sense == "tension" else "P", "0", 0.0, "N", clause, reason),)
        steps = tension_steps if sense == "tension" else compression_steps
        return steps(self.values, one, condition, duration, clause)

    def basis(self) -> tuple[tuple[str, str], ...]:
        """Return (what, value with source) rows for the basis of design."""
        g, s = self.grade, self.settings
        table = "CD (Table 2.3.2)" if s.method == "ASD" else "time effect factor (Table N3)"
        lasting = ", ".join(f"{name} {factor:g}" for name, factor in s.durations.items())
        service = "wet" if s.wet else "dry"
        return (
            ("Method", s.method),
            ("Grade", f"{g.name}, {g.product} ({g.source})"),
            (
                "Reference values",
                f"Ft {g.Ft / PSI:.0f}, Fc {g.Fc / PSI:.0f}, E {g.E / PSI:.0f}, "
                f"Emin {g.Emin / PSI:.0f} psi",
            ),
            ("Modulus for forces and deflections", f"{self.material.E / PSI:.0f} psi (E')"),
            ("Density", f"{self.material.density:.0f} kg/m³ from specific gravity {g.G:g}"),
            ("Load duration", f"{table}: {lasting}"),
            (
                "Service",
                f"{service}, {s.temperature}, {'incised' if s.incised else 'not incised'}; "
                f"further factors {s.factor_Ft:g} on Ft, {s.factor_Fc:g} on Fc, "
                f"{s.factor_E:g} on E and Emin",
            ),
            ("Greatest le/d", f"{s.slenderness_limit:g} (3.7.1.4)"),
            ("Creep factor", f"Kcr − 1 = {self.material.creep:g} (3.5.2)"),
        )

    def cautions(self) -> tuple[str, ...]:
        """Return what this standard's check leaves out, in plain sentences."""
        asd = self.settings.method == "ASD"
        lines = [
            "Wood: resistances are allowable loads; combinations must be those of ASD."
            if asd
            else "Wood: resistances are LRFD design values; combinations must be those of LRFD, and"
            " each needs the load duration of its leading load (Table N3).",
            "Wood: joints are not designed; tension counts the net section factor of the group"
            " and nothing else. Row and group tear-out are not checked.",
            "Wood: compression uses the gross section; bearing, bending, fire, decay and treatment"
            " are not checked, and the buckling stiffness factor of sheathed chords is not used.",
            self._plies_caution(),
        ]
        if self.settings.slenderness_limit > 50.0:
            lines.append("Wood: le/d above 50 is for the time of construction only (3.7.1.4).")
        if self.grade.source == OWN_VALUES:
            lines.append("Wood: the reference values are the user's own.")
        if self.grade.product == "glulam":
            lines.append("Wood: one Emin serves both axes; give the lower one for glulam.")
        return tuple(lines)

    def _plies_caution(self) -> str:
        if self.settings.built_up == 0.0:
            return "Wood: boards of built-up sections count one by one, as if nothing joined them."
        return (
            f"Wood: built-up sections take Kf {self.settings.built_up:g} across the plies, which"
            " must be fastened to 15.3.3 (nails) or 15.3.4 (bolts)."
        )


def make_nds(grade: str | None, settings: Mapping[str, Any]) -> NDS:
    """Return the standard for a grade such as ``Douglas Fir-Larch No.2`` or ``SPF No.1/No.2``.

    Settings: ``method`` ``"ASD"`` (usual) or ``"LRFD"``; ``wet_service``, ``unseasoned``,
    ``incised`` true or false; ``temperature``; ``factor_Ft``, ``factor_Fc``, ``factor_E``;
    ``duration_factors``, a table; ``slenderness_limit`` (le/d); ``built_up_fasteners``. Own
    reference values: ``Ft``, ``Fc``, ``E``, ``Emin``, ``specific_gravity``, ``product``.
    Raises :class:`SettingsError`.
    """
    reader, chosen = read_settings(settings)
    found = read_grade(grade, settings, reader)
    refuse_unknown_factors(found, chosen)
    moisture = MOISTURE_WET if chosen.wet else MOISTURE_DRY
    return NDS(
        grade=found,
        settings=chosen,
        material=Material(
            name=found.name,
            E=found.E * Values(grade=found, settings=chosen).stiffness_factor(),
            density=density(found.G, moisture),
            creep=CREEP_WET if chosen.wet or chosen.unseasoned else CREEP_DRY,
        ),
    )
