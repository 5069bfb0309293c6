"""Relative slenderness about every axis that a member can buckle about, EN 1993-1-1, 6.3.1.3."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from sizing.brief.sections import Catalogue
from sizing.standards.contract import BoolArray, FloatArray, IntArray, MemberConditions
from sizing.standards.en1993_angles import web_angle_slenderness
from sizing.standards.en1993_curves import reference_slenderness
from sizing.standards.en1993_lengths import AS_GIVEN, WEB, Preset
from sizing.standards.en1993_rows import RowArrays
from sizing.standards.slenderness import is_angle, radii_in_and_out


@dataclass(frozen=True, kw_only=True)
class Axis:
    """Buckling about one axis, arrays (u, s).

    ``length`` in m, ``radius`` in m, ``plain`` = (L/i)/λ₁ · √(A_eff/A), ``relative`` the same
    or λ̄_eff of BB.1.2, ``alpha`` the imperfection factor. ``applies`` is False where the section
    has no such axis.
    """

    length: FloatArray
    radius: FloatArray
    plain: FloatArray
    relative: FloatArray
    alpha: FloatArray
    applies: BoolArray

    @property
    def slenderness(self) -> FloatArray:
        """L/i."""
        return self.length / self.radius


def buckling_axes(
    catalogue: Catalogue,
    members: MemberConditions,
    rows: RowArrays,
    E: float,
    preset: Preset | None,
) -> tuple[Axis, Axis, Axis]:
    """Return the axes for buckling in plane, out of plane, and about v-v (angles only).

    λ̄ = (L_cr/i) / λ₁ · √(A_eff/A), λ₁ = π √(E/fy). Angles buckle about v-v over the greater of
    their two lengths. Under Annex BB.1 chords and webs start from their system length, or a
    greater length where the brief gives one, so that no reduction counts twice; angles of the
    webs take λ̄_eff of BB.1.2(2).
    """
    shape = (members.length.size, len(catalogue))
    angle = np.broadcast_to(is_angle(catalogue), shape)
    places = (
        np.full(members.length.size, AS_GIVEN) if preset is None else preset.places(members.role)
    )
    factor_in, factor_out = _preset_factors(catalogue, places, preset)
    web = places[:, None] == WEB
    system = np.where(places == AS_GIVEN, 0.0, members.length)
    length_in = np.maximum(members.in_plane, system)[:, None] * factor_in
    length_out = np.maximum(members.out_of_plane, system)[:, None] * factor_out
    radius_in, radius_out = radii_in_and_out(catalogue, members)
    least = np.broadcast_to(catalogue.r_least, shape)
    upright = members.depth_in_plane[:, None]
    scale = np.sqrt(rows.area / catalogue.area) / reference_slenderness(E, rows.fy)

    def axis(
        length: FloatArray, radius: FloatArray, alpha: FloatArray, applies: BoolArray, v_v: bool
    ) -> Axis:
        plain = length / radius * scale
        effective = web_angle_slenderness(plain, least_axis=v_v)
        return Axis(
            length=length,
            radius=radius,
            plain=plain,
            relative=np.where(web & angle, effective, plain),
            alpha=np.broadcast_to(alpha, shape),
            applies=applies,
        )

    everywhere = np.ones(shape, dtype=bool)
    alpha_in = np.where(upright, rows.alpha_major, rows.alpha_minor)
    alpha_out = np.where(upright, rows.alpha_minor, rows.alpha_major)
    return (
        axis(length_in, radius_in, alpha_in, everywhere, v_v=False),
        axis(length_out, radius_out, alpha_out, everywhere, v_v=False),
        axis(np.maximum(length_in, length_out), least, rows.alpha_minor, angle, v_v=True),
    )


def _preset_factors(
    catalogue: Catalogue, places: IntArray, preset: Preset | None
) -> tuple[FloatArray, FloatArray]:
    """Return the factors of Annex BB.1 on the lengths in and out of plane (u, s)."""
    shape = (places.size, len(catalogue))
    factor_in, factor_out = np.ones(shape), np.ones(shape)
    if preset is not None:
        families = np.array(catalogue.family)
        for place in np.unique(places):
            for family in dict.fromkeys(catalogue.family):
                where = np.ix_(places == place, families == family)
                factor_in[where], factor_out[where] = preset.factors(int(place), family)
    return factor_in, factor_out
