"""EN 1993-1-1:2005: steel members under axial force.

Tension      N_t,Rd = A fy / γM0, at holes also 0.9 A_net fu / γM2          (6.2.3)
Compression  N_Rd = min(A fy / γM0, χ A fy / γM1 about every axis)          (6.2.4, 6.3.1)
             and of single angles in torsional-flexural buckling            (6.3.1.4)
with A_eff in place of A for class 4 sections, where they are admitted.
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
from sizing.standards.en1993_angles import net_area_of_leg, one_leg_resistance
from sizing.standards.en1993_axes import Axis, buckling_axes
from sizing.standards.en1993_clauses import (
    BUCKLING,
    CLAUSES,
    LIMIT,
    NOT_CHECKABLE,
    ONE_LEG,
    RUPTURE,
    SQUASH,
    YIELD,
)
from sizing.standards.en1993_curves import reduction_factor
from sizing.standards.en1993_options import NAME, Options1993, read_options
from sizing.standards.en1993_rows import RowArrays, row_arrays
from sizing.standards.en1993_torsion import Torsion, torsional_buckling
from sizing.standards.en1993_wording import basis_rows, caution_lines
from sizing.standards.en1993_working import compression_steps, tension_steps
from sizing.standards.slenderness import is_angle

MODULUS = 210e9
"""E in Pa, EN 1993-1-1:2005, 3.2.6(1)."""
DENSITY = 7850.0
"""Density in kg/m³, EN 1991-1-1 Table A.4: 77.0 to 78.5 kN/m³; EN section tables take 7850."""


@dataclass(frozen=True, kw_only=True)
class EN1993:
    """The standard with a grade and the choices of :class:`Options1993`."""

    options: Options1993
    material: Material
    name: str = NAME
    edition: str = "2005, with AC:2009"

    def resistances(
        self,
        catalogue: Catalogue,
        members: MemberConditions,
        durations: Sequence[LoadDuration],
    ) -> ResistanceTable:
        """Return the table; load duration has no influence.

        Raises :class:`~sizing.standards.contract.SettingsError` when ``chords`` or ``webs``
        name a group that the members do not have.
        """
        if self.options.preset is not None:
            self.options.preset.require_groups(members.role)
        distinct, inverse = distinct_members(members)
        reasons = Reasons()
        found = self._distinct(catalogue, distinct, reasons)
        return spread(found, inverse, durations, CLAUSES, reasons.texts())

    def _distinct(
        self, catalogue: Catalogue, members: MemberConditions, reasons: Reasons
    ) -> Resistances:
        rows = row_arrays(catalogue, self.options)
        axes = buckling_axes(catalogue, members, rows, self.material.E, self.options.preset)
        tension, tension_clause = self.tension(catalogue, members, rows)
        torsion = torsional_buckling(catalogue, rows, axes[2], self.material.E)
        compression, compression_clause = self.compression(rows, axes, torsion)
        shape = compression.shape
        unusable = np.array([bool(row.unusable) for row in rows.rows])
        barred = unusable | np.array([bool(row.left_out) for row in rows.rows])
        notes = [reasons.index(row.unusable or row.left_out) for row in rows.rows]
        slenderness_in, slenderness_out = shown_slenderness(axes)
        found = Resistances(
            tension=np.where(unusable, 0.0, tension),
            compression=np.where(barred, 0.0, compression),
            tension_clause=np.where(unusable, NOT_CHECKABLE, tension_clause),
            compression_clause=np.where(barred, NOT_CHECKABLE, compression_clause),
            slenderness_in=slenderness_in,
            slenderness_out=slenderness_out,
            usable=np.broadcast_to(~unusable, shape),
            notes=np.broadcast_to(np.array(notes, dtype=np.intp), shape),
        )
        return limit_slenderness(
            found, np.fmax(slenderness_in, slenderness_out), members, reasons, LIMIT
        )

    def tension(
        self, catalogue: Catalogue, members: MemberConditions, rows: RowArrays
    ) -> tuple[FloatArray, IntArray]:
        """Return N_t,Rd in N and its clause (u, s), 6.2.3(2): yield, and rupture at holes.

        N_pl,Rd = A fy / γM0 (6.6); N_u,Rd = 0.9 A_net fu / γM2 (6.7) where the group has a net
        section; angles by one leg take EN 1993-1-8, 3.10.3 in place of (6.7).
        """
        chosen = self.options
        net = members.net_factor[:, None]
        shape = (members.length.size, len(catalogue))
        yielding = np.broadcast_to(catalogue.area * rows.fy / chosen.gamma_m0, shape)
        rupture = 0.9 * (catalogue.area * net) * rows.fu / chosen.gamma_m2
        rupture = np.where(net < 1.0, rupture, np.inf)
        clause = np.full(shape, RUPTURE, dtype=np.intp)
        if chosen.leg_bolts is not None:
            angle = is_angle(catalogue)
            net_area = net_area_of_leg(
                np.broadcast_to(catalogue.area, shape), net, catalogue.thickness, chosen.leg_bolts
            )
            by_leg = one_leg_resistance(
                net_area, catalogue.thickness, rows.fu, chosen.gamma_m2, chosen.leg_bolts
            )
            rupture = np.where(angle, by_leg, rupture)
            clause = np.where(angle, ONE_LEG, clause)
        return np.minimum(yielding, rupture), np.where(rupture < yielding, clause, YIELD)

    def compression(
        self, rows: RowArrays, axes: tuple[Axis, Axis, Axis], torsion: Torsion
    ) -> tuple[FloatArray, IntArray]:
        """Return the compression resistance in N and its clause (u, s).

        N_c,Rd = A fy / γM0 (6.10, 6.11); N_b,Rd = χ A fy / γM1 (6.47, 6.48) about each axis, and
        of angles in torsional-flexural buckling (6.3.1.4).
        """
        shape = axes[0].length.shape
        squash = np.broadcast_to(rows.area * rows.fy / self.options.gamma_m0, shape)
        found = [squash]
        for axis in axes:
            chi = reduction_factor(axis.relative, axis.alpha)
            buckling = chi * rows.area * rows.fy / self.options.gamma_m1
            found.append(np.where(axis.applies, buckling, np.inf))
        chi = reduction_factor(np.where(torsion.applies, torsion.relative, 0.0), axes[2].alpha)
        twisting = chi * rows.area * rows.fy / self.options.gamma_m1
        found.append(np.where(torsion.applies, twisting, np.inf))
        stacked = np.stack(found)
        governing = np.argmin(np.where(np.isnan(stacked), np.inf, stacked), axis=0)
        return stacked.min(axis=0), np.array([SQUASH, *BUCKLING], dtype=np.intp)[governing]

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
        del duration
        one = catalogue.only(section)
        condition = take_members(members, np.array([member], dtype=np.intp))
        reasons = Reasons()
        found = self._distinct(one, condition, reasons)
        rows = row_arrays(one, self.options)
        note = reasons.texts()[int(found.notes[0, 0])]
        if sense == "tension":
            return tension_steps(self.options, one, condition, rows, found, note)
        axes = buckling_axes(one, condition, rows, self.material.E, self.options.preset)
        E = self.material.E
        torsion = torsional_buckling(one, rows, axes[2], E)
        buckling = (*axes, torsion)
        return compression_steps(self.options, E, one, condition, rows, buckling, found, note)

    def basis(self) -> tuple[tuple[str, str], ...]:
        """Return (what, value with source) rows for the basis of design."""
        return basis_rows(self.options, self.material)

    def cautions(self) -> tuple[str, ...]:
        """Return what this standard's check leaves out, in plain sentences."""
        return caution_lines(self.options)


def shown_slenderness(axes: tuple[Axis, Axis, Axis]) -> tuple[FloatArray, FloatArray]:
    """Return L/i in and out of plane (u, s); angles take i_v both ways."""
    inside, outside, least = axes
    return (
        np.where(least.applies, inside.length / least.radius, inside.slenderness),
        np.where(least.applies, outside.length / least.radius, outside.slenderness),
    )


def make_en1993(grade: str | None, settings: Mapping[str, Any]) -> EN1993:
    """Return EN 1993-1-1 with a grade and settings; raise :class:`SettingsError`."""
    options = read_options(grade, settings)
    return EN1993(
        options=options,
        material=Material(name=options.grade_name, E=MODULUS, density=DENSITY),
    )
