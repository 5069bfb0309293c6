"""Torsional-flexural buckling of single angles, EN 1993-1-1, 6.3.1.4.

Short angles twist before they bow: at h/t = 11.5 (class 3 of S235) the resistance about v-v
would be 15 % too great. Webs by Annex BB.1.2 have that rule's λ̄_eff in its place.
"""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np

from sizing.brief.sections import Catalogue
from sizing.standards.contract import BoolArray, FloatArray, IntArray
from sizing.standards.en1993_axes import Axis
from sizing.standards.en1993_rows import RowArrays

SHEAR_MODULUS = 81e9
"""G in Pa, EN 1993-1-1:2005, 3.2.6(1)."""
HALVINGS = 60
"""Bisection of the interval of a double down to its last digits."""
SAME_LOAD = 1e-9
"""Critical loads closer than this are one mode: an equal angle bows about v-v without twist."""


@dataclass(frozen=True, kw_only=True)
class Twisting:
    """Constants of each angle (s,), NaN for other sections.

    ``torsion`` I_T in m⁴; ``polar`` i0 in m about the shear centre; ``along_u``, ``along_v``
    squared distances in m² from the centroid to the shear centre along the principal axes.
    """

    torsion: FloatArray
    polar: FloatArray
    along_u: FloatArray
    along_v: FloatArray


@dataclass(frozen=True, kw_only=True)
class Torsion:
    """Torsional-flexural buckling (u, s): ``critical`` N_cr,TF in N, ``relative`` λ̄_T.

    ``plain`` is N_cr,T in N (s,). ``applies`` is False for sections other than angles, for webs
    by BB.1.2, and where buckling about v-v comes first.
    """

    plain: FloatArray
    critical: FloatArray
    relative: FloatArray
    applies: BoolArray


def twisting(catalogue: Catalogue) -> Twisting:
    """Return the constants of legs h and b of thickness t, met at their centre lines.

    I_T = (h + b − t) t³/3; the shear centre lies where the centre lines meet; i0² = (I_y + I_z)/A
    + u0² + v0². Fillets are left out, on the safe side. The share v0² follows from the second
    moment along the line to the shear centre, I_u v0² + I_v u0² (I_u is greatest, spread along v).
    """
    h, b, t = catalogue.depth, catalogue.width, catalogue.thickness
    with np.errstate(invalid="ignore", divide="ignore"):
        deep = 0.5 * (h**2 + (b - t) * t) / (h + b - t) - 0.5 * t
        wide = 0.5 * (b**2 + (h - t) * t) / (h + b - t) - 0.5 * t
        y, z, least = catalogue.i_major, catalogue.i_minor, catalogue.i_least
        greatest = y + z - least
        product = -np.sqrt(np.maximum((y - least) * (z - least), 0.0))
        distance = deep**2 + wide**2
        along_line = deep**2 * y + 2.0 * deep * wide * product + wide**2 * z
        along_v = np.clip((along_line - least * distance) / (greatest - least), 0.0, distance)
        polar = np.sqrt((y + z) / catalogue.area + distance)
    return Twisting(
        torsion=(h + b - t) * t**3 / 3.0,
        polar=polar,
        along_u=distance - along_v,
        along_v=along_v,
    )


def torsional_buckling(catalogue: Catalogue, rows: RowArrays, least: Axis, E: float) -> Torsion:
    """Return N_cr,TF and λ̄_T = √(A_eff fy / N_cr,TF) over the length of the axis v-v.

    N_cr,T = G I_T / i0² (warping of an angle is nil). N_cr,TF is the least root of
    (N_u − N)(N_v − N)(N_cr,T − N) i0² = N² [u0² (N_v − N) + v0² (N_u − N)].
    """
    shape = least.length.shape
    critical = np.full(shape, np.inf)
    plain = np.full(shape[1], np.inf)
    angle = np.flatnonzero(least.applies.any(axis=0))
    if angle.size:
        section = twisting(catalogue)
        plain[angle] = (SHEAR_MODULUS * section.torsion / section.polar**2)[angle]
        # At no length at all an angle still twists: a length of one i_v stands for none.
        length = np.maximum(least.length, least.radius)[:, angle]
        about_v = math.pi**2 * E * catalogue.i_least[angle] / length**2
        greatest = (catalogue.i_major + catalogue.i_minor - catalogue.i_least)[angle]
        about_u = math.pi**2 * E * greatest / length**2
        found = _least_root(about_u, about_v, plain[angle], section, angle)
        critical[:, angle] = np.where(found < about_v * (1.0 - SAME_LOAD), found, np.inf)
    # λ̄_eff of BB.1.2 differs from the plain slenderness, which marks the webs.
    web = least.relative != least.plain
    with np.errstate(invalid="ignore"):
        relative = np.sqrt(rows.area * rows.fy / critical)
    return Torsion(
        plain=plain,
        critical=critical,
        relative=relative,
        applies=np.isfinite(critical) & least.applies & ~web,
    )


def _least_root(
    about_u: FloatArray, about_v: FloatArray, plain: FloatArray, section: Twisting, at: IntArray
) -> FloatArray:
    """Return the least root by bisection: the difference of the two sides falls through it."""
    polar, u, v = section.polar[at] ** 2, section.along_u[at], section.along_v[at]
    low = np.zeros_like(about_v)
    high = np.minimum(np.minimum(about_u, about_v), plain)
    for _ in range(HALVINGS):
        N = 0.5 * (low + high)
        bowing_u, bowing_v = about_u - N, about_v - N
        left = bowing_u * bowing_v * (plain - N) * polar
        before = left > N**2 * (u * bowing_v + v * bowing_u)
        low, high = np.where(before, N, low), np.where(before, high, N)
    return 0.5 * (low + high)
