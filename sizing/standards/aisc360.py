"""ANSI/AISC 360-16 and -22: steel members under axial force, LRFD or ASD.

Tension      Pn = min: Fy Ag with φ 0.90, Ω 1.67 (D2(a)); Fu Ae with φ 0.75, Ω 2.00 (D2(b))
Compression  Pn = Fcr Ag, or Fcr Ae with slender elements, φ 0.90, Ω 1.67 (E3, E5, E7)
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass, replace
from typing import Any

import numpy as np

from sizing.brief.model import LoadDuration
from sizing.brief.sections import Catalogue
from sizing.standards.aisc360_clauses import (
    CLAUSES_WITH_E7,
    E7_OFFSET,
    LIMIT,
    NOT_CHECKABLE,
    RUPTURE,
    YIELD,
)
from sizing.standards.aisc360_grades import KSI
from sizing.standards.aisc360_options import (
    ADVICE_COMPRESSION,
    ADVICE_TENSION,
    FACTORS,
    NAME,
    Options360,
    read_options,
)
from sizing.standards.aisc360_rows import RowArrays360, row_arrays
from sizing.standards.aisc360_rules import critical_stress
from sizing.standards.aisc360_slenderness import (
    BEYOND_E5,
    LEGS_TOO_UNEQUAL,
    Slenderness360,
    effective_slenderness,
)
from sizing.standards.aisc360_wording import basis_rows, caution_lines
from sizing.standards.aisc360_working import compression_steps, tension_steps
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
    IntArray,
    Material,
    MemberConditions,
    ResistanceTable,
    Sense,
    Step,
)
from sizing.standards.settings import require_groups

MODULUS = 29000.0 * KSI
"""E = 29 000 ksi in Pa (AISC 360, symbols)."""
DENSITY = 490.0 * 0.45359237 / 0.3048**3
"""490 lb/ft³ in kg/m³ (AISC Manual, weights of shapes)."""


@dataclass(frozen=True, kw_only=True)
class AISC360:
    """The standard with a grade and the choices of :class:`Options360`."""

    options: Options360
    material: Material
    name: str = NAME

    @property
    def edition(self) -> str:
        """Edition and method."""
        return f"{self.options.edition}, {self.options.method}"

    def resistances(
        self,
        catalogue: Catalogue,
        members: MemberConditions,
        durations: Sequence[LoadDuration],
    ) -> ResistanceTable:
        """Return the table of design (LRFD) or allowable (ASD) strengths in N.

        Load duration has no influence. Raises
        :class:`~sizing.standards.contract.SettingsError` when ``webs`` names a group that the
        members do not have.
        """
        require_groups("webs", self.options.webs, members.role)
        distinct, inverse = distinct_members(members)
        reasons = Reasons()
        found = self._distinct(catalogue, distinct, reasons)
        return spread(found, inverse, durations, CLAUSES_WITH_E7, reasons.texts())

    def _distinct(
        self, catalogue: Catalogue, members: MemberConditions, reasons: Reasons
    ) -> Resistances:
        rows = row_arrays(catalogue, self.options, self.material.E)
        slenderness = effective_slenderness(catalogue, members, self.options)
        tension, tension_clause = self.tension(catalogue, members, rows)
        compression, compression_clause = self.compression(catalogue, rows, slenderness)
        shape = compression.shape
        unusable = np.array([bool(row.unusable) for row in rows.rows])
        barred = unusable | np.array([bool(row.left_out) for row in rows.rows])
        texts = [reasons.index(row.unusable or row.left_out) for row in rows.rows]
        notes = np.broadcast_to(np.array(texts, dtype=np.intp), shape).copy()
        for where, text in (
            (slenderness.too_unequal, LEGS_TOO_UNEQUAL),
            (slenderness.too_long, BEYOND_E5),
        ):
            if where.any():
                notes[where & (notes == 0)] = reasons.index(text)
        left_out = barred | slenderness.too_unequal | slenderness.too_long
        found = Resistances(
            tension=np.where(unusable, 0.0, tension),
            compression=np.where(left_out, 0.0, compression),
            tension_clause=np.where(unusable, NOT_CHECKABLE, tension_clause),
            compression_clause=np.where(left_out, NOT_CHECKABLE, compression_clause),
            slenderness_in=slenderness.inside,
            slenderness_out=slenderness.outside,
            usable=np.broadcast_to(~unusable, shape),
            notes=notes,
        )
        greatest = np.fmax(slenderness.inside, slenderness.outside)
        return limit_slenderness(found, greatest, self._with_advice(members), reasons, LIMIT)

    def _with_advice(self, members: MemberConditions) -> MemberConditions:
        """Return the members with 200 (E2) and 300 (D1) as limits, where they are enforced."""
        if not self.options.enforce:
            return members
        return replace(
            members,
            max_slenderness_compression=np.minimum(
                members.max_slenderness_compression, ADVICE_COMPRESSION
            ),
            max_slenderness_tension=np.minimum(members.max_slenderness_tension, ADVICE_TENSION),
        )

    def tension(
        self, catalogue: Catalogue, members: MemberConditions, rows: RowArrays360
    ) -> tuple[FloatArray, IntArray]:
        """Return the tension strength in N and its clause (u, s), D2 and D3: Ae = An U."""
        yielding_factor, rupture_factor, _ = FACTORS[self.options.method]
        net = members.net_factor[:, None] * catalogue.area
        yielding = np.broadcast_to(yielding_factor * rows.Fy * catalogue.area, net.shape)
        rupture = rupture_factor * rows.Fu * net * self.options.shear_lag
        return np.minimum(yielding, rupture), np.where(rupture < yielding, RUPTURE, YIELD)

    def compression(
        self, catalogue: Catalogue, rows: RowArrays360, slenderness: Slenderness360
    ) -> tuple[FloatArray, IntArray]:
        """Return the compression strength in N and its clause (u, s), E3, E5 and E7."""
        Fcr = critical_stress(self.material.E, rows.Fy, slenderness.effective)
        area = rows.effective_area(catalogue.area, Fcr)
        clause = np.where(area < catalogue.area, slenderness.clause + E7_OFFSET, slenderness.clause)
        return FACTORS[self.options.method][2] * Fcr * area, clause

    def working(
        self,
        catalogue: Catalogue,
        section: int,
        members: MemberConditions,
        member: int,
        duration: LoadDuration,
        sense: Sense,
    ) -> tuple[Step, ...]:
        """Return the worked lines of one strength; the last line is the strength."""
        del duration
        one = catalogue.only(section)
        condition = take_members(members, np.array([member], dtype=np.intp))
        reasons = Reasons()
        found = self._distinct(one, condition, reasons)
        rows = row_arrays(one, self.options, self.material.E)
        note = reasons.texts()[int(found.notes[0, 0])]
        if sense == "tension":
            return tension_steps(self.options, one, condition, rows, found, note)
        slenderness = effective_slenderness(one, condition, self.options)
        E = self.material.E
        return compression_steps(self.options, E, one, condition, rows, slenderness, found, note)

    def basis(self) -> tuple[tuple[str, str], ...]:
        """Return (what, value with source) rows for the basis of design."""
        return basis_rows(self.options, self.material)

    def cautions(self) -> tuple[str, ...]:
        """Return what this standard's check leaves out, in plain sentences."""
        return caution_lines(self.options)


def make_aisc360(grade: str | None, settings: Mapping[str, Any]) -> AISC360:
    """Return AISC 360 with a grade and settings; raise :class:`SettingsError`."""
    options = read_options(grade, settings)
    return AISC360(
        options=options,
        material=Material(name=options.grade_name, E=MODULUS, density=DENSITY),
    )
