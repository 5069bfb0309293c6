"""Which radius of gyration belongs to which buckling length."""

from __future__ import annotations

import numpy as np

from sizing.brief.sections import Catalogue
from sizing.standards.contract import BoolArray, FloatArray, MemberConditions


def is_angle(catalogue: Catalogue) -> BoolArray:
    """Return which sections (s,) are angles: their least axis is inclined to both planes."""
    return np.array([family == "angle" for family in catalogue.family], dtype=bool)


def radii_in_and_out(
    catalogue: Catalogue, members: MemberConditions
) -> tuple[FloatArray, FloatArray]:
    """Return the radii of gyration (u, s), m, of the geometric axes, in and out of plane.

    With the section's depth in the plane of the truss, buckling in plane bends the section
    about its major axis.
    """
    upright = members.depth_in_plane[:, None]
    major, minor = catalogue.r_major[None, :], catalogue.r_minor[None, :]
    return np.where(upright, major, minor), np.where(upright, minor, major)


def slenderness_in_and_out(
    catalogue: Catalogue, members: MemberConditions
) -> tuple[FloatArray, FloatArray]:
    """Return L/i (u, s) in and out of plane; angles take their least radius both ways.

    The greater of the two for an angle is its slenderness about the least axis over the
    greater buckling length. NaN where the catalogue does not give the second moments of area.
    """
    radius_in, radius_out = radii_in_and_out(catalogue, members)
    least = np.where(is_angle(catalogue), catalogue.r_least, np.nan)[None, :]
    radius_in = np.where(np.isnan(least), radius_in, least)
    radius_out = np.where(np.isnan(least), radius_out, least)
    return members.in_plane[:, None] / radius_in, members.out_of_plane[:, None] / radius_out
