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
    FloatArray,
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
from sizing.standards.nds_strength import (
    C_COLUMN,
    C_P,
    INCISED,
    K_F,
    PHI,
    F_cE,
    density,
    size_factors,
    temperature_factors,
    wet_factors,
)
from sizing.standards.slenderness import slenderness_in_and_out
from sizing.standards.timber_sections import (
    SQRT12,
    Exclusions,
    is_built_up,
    over_durations,
    smaller_and_larger,
)

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
class Adjusted:
    """Values for one load duration: ``Ft``, ``Fc_star`` per section (s,), ``Emin``; Pa."""

    Ft: FloatArray
    Fc_star: FloatArray
    Emin: float


@dataclass(frozen=True, kw_only=True)
class NDS:
    """A grade with its adjustment factors."""

    grade: NDSGrade
    settings: NDSSettings
    material: Material
    name: str = NAME
    edition: str = EDITION

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
        values = self.adjusted(catalogue, duration)
        lambda_in, lambda_out = slenderness_in_and_out(catalogue, members)
        shape = lambda_in.shape
        cp_in, cp_out = (
            self._column(values, slenderness, catalogue) for slenderness in (lambda_in, lambda_out)
        )
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
        compression = values.Fc_star * least * catalogue.area
        tension = values.Ft * catalogue.area * members.net_factor[:, None]
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

    def _column(
        self, values: Adjusted, slenderness: FloatArray, catalogue: Catalogue
    ) -> FloatArray:
        """Return CP (u, s), times Kf of 15.3 for built-up sections (about both axes)."""
        critical = F_cE(values.Emin, slenderness / SQRT12)
        factor = C_P(critical, values.Fc_star, C_COLUMN[self.grade.product])
        return factor * self._plies(catalogue)

    def _plies(self, catalogue: Catalogue) -> FloatArray:
        return np.where(is_built_up(catalogue), self.settings.built_up, 1.0)

    def adjusted(self, catalogue: Catalogue, duration: LoadDuration) -> Adjusted:
        """Return the adjusted values of every section for one load duration."""
        factors = self.factors(catalogue)
        lasting = self.settings.durations[duration]
        tension, compression, modulus = lasting, lasting, 1.0
        if self.settings.method == "LRFD":
            tension, compression = (K_F[v] * PHI[v] * lasting for v in ("Ft", "Fc"))
            modulus = K_F["Emin"] * PHI["Emin"]
        return Adjusted(
            Ft=self.grade.Ft * factors["Ft"] * tension,
            Fc_star=self.grade.Fc * factors["Fc"] * compression,
            Emin=self.grade.Emin * self.stiffness_factor() * modulus,
        )

    def factors(self, catalogue: Catalogue) -> dict[str, FloatArray]:
        """Return CF CM Ct Ci and the user's factor on Ft and Fc, per section (s,)."""
        s = self.settings
        _, larger = smaller_and_larger(catalogue)
        size_t, size_c = size_factors(self.grade.size_rule, larger)
        heat_t, heat_c, _ = temperature_factors(s.temperature, wet=s.wet)
        wet_t, wet_c = 1.0, np.ones_like(size_c)
        if s.wet:
            wet_t, wet_c, _ = wet_factors(self.grade.product, self.grade.Fc / PSI * size_c)
        cut_t, cut_c = (INCISED["Ft"], INCISED["Fc"]) if s.incised else (1.0, 1.0)
        return {
            "Ft": size_t * (wet_t * heat_t * cut_t * s.factor_Ft),
            "Fc": size_c * wet_c * (heat_c * cut_c * s.factor_Fc),
        }

    def stiffness_factor(self) -> float:
        """Return CM Ct Ci and the user's factor on E and Emin."""
        return _stiffness_factor(self.grade, self.settings)

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
            return (_step("T" if sense == "tension" else "P", "0", 0.0, "N", clause, reason),)
        if sense == "tension":
            return self._tension_steps(one, condition, duration, clause)
        return self._compression_steps(one, table, duration, clause)

    def _value_steps(self, one: Catalogue, duration: LoadDuration, value: str) -> list[Step]:
        """The lines from the reference value to Ft' or Fc*."""
        s, grade = self.settings, self.grade
        reference = grade.Ft if value == "Ft" else grade.Fc
        factor = float(self.factors(one)[value][0])
        size = size_factors(grade.size_rule, smaller_and_larger(one)[1])
        lasting = s.durations[duration]
        other = factor / float(size[0 if value == "Ft" else 1][0])
        steps = [
            _step(value, grade.source, reference, "Pa", "Supplement", grade.name),
            _step("C_F", "Table 4A", factor / other, "-", "4.3.6", "size factor"),
            _step("C_MtI", "C_M C_t C_i", other, "-", "4.3.3, 4.3.4, 4.3.8", "moisture, heat"),
        ]
        result = "F_t'" if value == "Ft" else "F_c*"
        values = self.adjusted(one, duration)
        number = float((values.Ft if value == "Ft" else values.Fc_star)[0])
        if s.method == "ASD":
            text = f"load duration {duration}"
            steps.append(_step("C_D", "Table 2.3.2", lasting, "-", "2.3.2", text))
            steps.append(_step(result, f"{value} C_D C_F C_MtI", number, "Pa", "Table 4.3.1"))
            return steps
        text = f"time effect, load duration {duration}"
        steps += [
            _step("λ", "Table N3", lasting, "-", "N.3.3", text),
            _step("K_F", "Table N1", K_F[value], "-", "N.3.1", "format conversion"),
            _step("φ", "Table N2", PHI[value], "-", "N.3.2", "resistance factor"),
            _step(result, f"{value} K_F φ λ C_F C_MtI", number, "Pa", "Table 4.3.1"),
        ]
        return steps

    def _tension_steps(
        self, one: Catalogue, members: MemberConditions, duration: LoadDuration, clause: str
    ) -> tuple[Step, ...]:
        area, net = float(one.area[0]), float(members.net_factor[0])
        steps = self._value_steps(one, duration, "Ft")
        resistance = steps[-1].value * area * net
        return (
            _step("A", "catalogue", area, "m²", "section"),
            *steps,
            _step("k_net", "brief", net, "-", "3.1.2", "net over gross area at the joints"),
            _step("T", "F_t' k_net A", resistance, "N", clause, "resistance"),
        )

    def _compression_steps(
        self, one: Catalogue, table: ResistanceTable, duration: LoadDuration, clause: str
    ) -> tuple[Step, ...]:
        area, c = float(one.area[0]), C_COLUMN[self.grade.product]
        values = self.adjusted(one, duration)
        plies = float(self._plies(one)[0])
        strength = self._value_steps(one, duration, "Fc")
        steps = [
            _step("A", "catalogue", area, "m²", "section"),
            *strength,
            _step("E_min'", "E_min, adjusted", values.Emin, "Pa", "Table 4.3.1", self.grade.name),
            _step("c", self.grade.product, c, "-", "3.7.1.5"),
            _step("K_f", "15.3.2 for plies, else 1", plies, "-", "15.3.2"),
        ]
        columns = []
        for mark, slenderness in (("in", table.slenderness_in), ("out", table.slenderness_out)):
            le_d = slenderness[0] / SQRT12
            critical = F_cE(values.Emin, le_d)
            factor = plies * float(C_P(critical, values.Fc_star, c)[0])
            columns.append(factor)
            text = f"3.7.1 {'in' if mark == 'in' else 'out of'} plane"
            stress = float(critical[0])
            root = f"(1 + r)/(2c) − √([(1 + r)/(2c)]² − r/c), r = F_cE,{mark} / F_c*"
            steps += [
                _step(f"(le/d)_{mark}", f"L_{mark} / d_{mark}", float(le_d[0]), "-", text),
                _step(f"F_cE,{mark}", f"0.822 E_min' / (le/d)_{mark}²", stress, "Pa", text),
                _step(f"C_P,{mark}", f"K_f ({root})", factor, "-", text),
            ]
        resistance = min(columns) * strength[-1].value * area
        expression = "F_c* min(C_P,in, C_P,out) A"
        return (*steps, _step("P", expression, resistance, "N", clause, "resistance"))

    def basis(self) -> tuple[tuple[str, str], ...]:
        """Return (what, value with source) rows for the basis of design."""
        g, s = self.grade, self.settings
        table = "CD (Table 2.3.2)" if s.method == "ASD" else "time effect factor (Table N3)"
        lasting = ", ".join(f"{name} {factor:g}" for name, factor in s.durations.items())
        service = "wet" if s.wet else "dry"
        return (
            ("Standard", f"{self.edition}, {s.method}"),
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
            "Wood: sections that the catalogue calls built-up take Kf "
            f"{self.settings.built_up:g} about both axes; plies must be fastened to 15.3.3 or"
            " 15.3.4.",
        ]
        if self.settings.slenderness_limit > 50.0:
            lines.append("Wood: le/d above 50 is for the time of construction only (3.7.1.4).")
        if self.grade.source == OWN_VALUES:
            lines.append("Wood: the reference values are the user's own.")
        if self.grade.product == "glulam":
            lines.append("Wood: one Emin serves both axes; give the lower one for glulam.")
        return tuple(lines)


def _stiffness_factor(grade: NDSGrade, s: NDSSettings) -> float:
    factor = temperature_factors(s.temperature, wet=s.wet)[2] * s.factor_E
    if s.wet:
        factor *= wet_factors(grade.product, np.ones(1))[2]
    return factor * INCISED["E"] if s.incised else factor


def _step(
    symbol: str, expression: str, value: float, unit: str, clause: str, meaning: str = ""
) -> Step:
    return Step(
        symbol=symbol, expression=expression, value=value, unit=unit, clause=clause, meaning=meaning
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
            E=found.E * _stiffness_factor(found, chosen),
            density=density(found.G, moisture),
            creep=CREEP_WET if chosen.wet or chosen.unseasoned else CREEP_DRY,
        ),
    )
