"""Effective slenderness Lc/r of AISC 360 for every member and section."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from sizing.brief.sections import Catalogue
from sizing.standards.aisc360_clauses import IN, LEAST, OUT, SINGLE
from sizing.standards.aisc360_options import Options360
from sizing.standards.aisc360_rules import E5_LEG_RATIO, is_beyond_e5, single_angle_slenderness
from sizing.standards.conditions import beyond
from sizing.standards.contract import BoolArray, FloatArray, IntArray, MemberConditions
from sizing.standards.slenderness import is_angle, slenderness_in_and_out

BEYOND_E5 = "E5 ends at Lc/r = 200; beyond, combined force and bending (H2) governs, not covered"
LEGS_TOO_UNEQUAL = "E5 covers angles with a leg ratio below 1.7 only"


@dataclass(frozen=True, kw_only=True)
class Slenderness360:
    """Arrays (u, s). ``inside``, ``outside``: L/r in and out of plane, angles about the least axis.

    ``effective``: the Lc/r that sets the critical stress; ``clause`` names it. ``by_e5``: where
    the single angle rule holds, ``ratio_e5`` = L/ra there; ``too_long``, ``too_unequal``: where
    that rule gives out.
    """

    inside: FloatArray
    outside: FloatArray
    effective: FloatArray
    clause: IntArray
    by_e5: BoolArray
    ratio_e5: FloatArray
    too_long: BoolArray
    too_unequal: BoolArray


def effective_slenderness(
    catalogue: Catalogue, members: MemberConditions, options: Options360
) -> Slenderness360:
    """Return Lc/r: the greater of both planes; angles about the least axis (E3), or E5."""
    inside, outside = slenderness_in_and_out(catalogue, members)
    angle = is_angle(catalogue)
    effective = np.fmax(inside, outside)
    clause = np.where(outside > inside, OUT, IN)
    clause = np.where(angle, LEAST, clause)
    web = np.array([options.is_web(role) for role in members.role], dtype=bool)
    by_e5 = web[:, None] & angle
    legs = np.fmax(catalogue.depth, catalogue.width) / np.fmin(catalogue.depth, catalogue.width)
    length = np.maximum(members.length, np.maximum(members.in_plane, members.out_of_plane))
    # The axis parallel to the longer leg is the minor one, parallel to the shorter the major one.
    radius = catalogue.r_major if options.shorter_leg else catalogue.r_minor
    ratio = length[:, None] / radius
    by_rule = single_angle_slenderness(
        ratio,
        legs,
        length[:, None] / catalogue.r_least,
        space=options.single_angles == "E5 space",
        shorter=options.shorter_leg,
    )
    effective = np.where(by_e5, by_rule, effective)
    return Slenderness360(
        inside=inside,
        outside=outside,
        effective=effective,
        clause=np.where(by_e5, SINGLE, clause),
        by_e5=by_e5,
        ratio_e5=ratio,
        too_long=by_e5 & is_beyond_e5(effective),
        too_unequal=by_e5 & (legs >= E5_LEG_RATIO) & beyond(legs, 1.0),
    )
