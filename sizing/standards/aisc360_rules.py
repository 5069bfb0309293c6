"""The rules of ANSI/AISC 360-16 and -22 for axial force, as pure functions in any unit system."""

from __future__ import annotations

import math

import numpy as np

from sizing.standards.contract import BoolArray, FloatArray

INELASTIC_END = 4.71
E5_END = 200.0
E5_LEG_RATIO = 1.7


def elastic_stress(E: float, slenderness: FloatArray) -> FloatArray:
    """Return Fe = π² E / (Lc/r)², eq. E3-4; inf at no slenderness."""
    squared = np.square(slenderness)
    infinite = np.full_like(squared, np.inf)
    return np.divide(math.pi**2 * E, squared, out=infinite, where=squared != 0.0)


def critical_stress(E: float, Fy: FloatArray, slenderness: FloatArray) -> FloatArray:
    """Return Fcr of E3, eqs. E3-2 and E3-3.

    Lc/r ≤ 4.71 √(E/Fy): Fcr = 0.658^(Fy/Fe) Fy; beyond: Fcr = 0.877 Fe.
    """
    Fe = elastic_stress(E, slenderness)
    inelastic = np.power(0.658, Fy / Fe) * Fy
    slender = slenderness > INELASTIC_END * np.sqrt(E / Fy)
    return np.where(slender, 0.877 * Fe, inelastic)


def single_angle_slenderness(
    ratio: FloatArray, leg_ratio: FloatArray, least: FloatArray, *, space: bool, shorter: bool
) -> FloatArray:
    """Return Lc/r of a single angle web member, E5.

    ``ratio`` = L/ra about the axis parallel to the connected leg, ``leg_ratio`` = bl/bs,
    ``least`` = L/rz. Planar trusses, E5(a): 72 + 0.75 L/ra up to 80, then 32 + 1.25 L/ra.
    Box or space trusses, E5(b): 60 + 0.8 L/ra up to 75, then 45 + L/ra. Connected by the
    shorter leg: + 4 [(bl/bs)² − 1] but at least 0.95 L/rz (planar), 6 and 0.82 (space).
    """
    if space:
        found = np.where(ratio <= 75.0, 60.0 + 0.8 * ratio, 45.0 + ratio)
        extra, floor = 6.0, 0.82
    else:
        found = np.where(ratio <= 80.0, 72.0 + 0.75 * ratio, 32.0 + 1.25 * ratio)
        extra, floor = 4.0, 0.95
    if shorter:
        unequal = leg_ratio > 1.0
        raised = np.maximum(found + extra * (np.square(leg_ratio) - 1.0), floor * least)
        found = np.where(unequal, raised, found)
    return np.asarray(found)


def effective_width(
    width: FloatArray,
    ratio: FloatArray,
    limit: FloatArray,
    factors: tuple[FloatArray, FloatArray],
    Fy: FloatArray,
    Fcr: FloatArray,
) -> FloatArray:
    """Return be of E7.1, eqs. E7-2 to E7-5, in the unit of ``width``.

    λ ≤ λr √(Fy/Fcr): be = b; beyond: be = b (1 − c1 √(Fel/Fcr)) √(Fel/Fcr) with
    Fel = (c2 λr/λ)² Fy, never more than b.
    """
    c1, c2 = factors
    root = c2 * limit / ratio * np.sqrt(Fy / Fcr)
    reduced = np.minimum(1.0, (1.0 - c1 * root) * root)
    return width * np.where(ratio <= limit * np.sqrt(Fy / Fcr), 1.0, reduced)


def round_share(E: float, Fy: float, ratio: float) -> float:
    """Return Ae/Ag of a round section, E7.2: 0.038 E/(Fy D/t) + 2/3 beyond 0.11 E/Fy, at most 1."""
    if ratio <= 0.11 * E / Fy:
        return 1.0
    return min(1.0, 0.038 * E / (Fy * ratio) + 2.0 / 3.0)


def is_beyond_e5(slenderness: FloatArray) -> BoolArray:
    """Return where E5 ends: Lc/r above 200 asks for combined force and bending (H2)."""
    return np.asarray(slenderness > E5_END)
