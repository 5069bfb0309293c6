"""Flexural buckling of EN 1993-1-1:2005, 6.3.1: curves, slenderness, reduction factor."""

from __future__ import annotations

import math
from typing import Literal

import numpy as np

from sizing.standards.conditions import LIMIT_ROUNDING
from sizing.standards.contract import FloatArray

Curve = Literal["a0", "a", "b", "c", "d"]
Finish = Literal["hot finished", "cold formed", "rolled", "welded"]

ALPHA: dict[Curve, float] = {"a0": 0.13, "a": 0.21, "b": 0.34, "c": 0.49, "d": 0.76}
"""Imperfection factors, EN 1993-1-1:2005 Table 6.1."""

HOLLOW = ("SHS", "RHS", "CHS")
SLENDER_I = 1.2
FLANGE_STEP = 0.040
FLANGE_END = 0.100


def reduction_factor(slenderness: FloatArray, alpha: FloatArray) -> FloatArray:
    """Return χ of 6.3.1.2(1), eq. 6.49, for relative slenderness λ̄ and imperfection α.

    Φ = 0.5 [1 + α (λ̄ − 0.2) + λ̄²],  χ = 1 / (Φ + √(Φ² − λ̄²)) ≤ 1.  χ = 1 for λ̄ ≤ 0.2.
    """
    phi = buckling_phi(slenderness, alpha)
    root = np.sqrt(np.square(phi) - np.square(slenderness))
    return np.asarray(np.minimum(1.0, 1.0 / (phi + root)))


def buckling_phi(slenderness: FloatArray, alpha: FloatArray) -> FloatArray:
    """Return Φ = 0.5 [1 + α (λ̄ − 0.2) + λ̄²], 6.3.1.2(1)."""
    return np.asarray(0.5 * (1.0 + alpha * (slenderness - 0.2) + np.square(slenderness)))


def reference_slenderness(E: float, fy: FloatArray) -> FloatArray:
    """Return λ₁ = π √(E / fy), 6.3.1.3."""
    return np.asarray(math.pi * np.sqrt(E / fy))


def buckling_curves(
    family: str, finish: Finish, *, depth: float, width: float, flange: float, s460: bool
) -> tuple[Curve, Curve] | str:
    """Return the curves about the major and the minor axis, or why there is none.

    EN 1993-1-1:2005 Table 6.2 (2005 edition, where S460 alone has a column of its own).
    Dimensions in m, used for I and H sections only.
    """
    if family in HOLLOW:
        curve: Curve = "c" if finish == "cold formed" else "a0" if s460 else "a"
        return curve, curve
    if family == "angle":
        return "b", "b"
    if family == "rectangle":
        return "c", "c"
    if family == "I":
        return _curves_of_i(finish, depth / width, flange, s460)
    return f"Table 6.2 has no buckling curve for a section of family {family}"


def _curves_of_i(
    finish: Finish, ratio: float, flange: float, s460: bool
) -> tuple[Curve, Curve] | str:
    if math.isnan(ratio) or math.isnan(flange):
        return "the catalogue gives no depth, width or flange thickness, which set the curve"
    if finish == "welded":
        return ("b", "c") if flange <= FLANGE_STEP else ("c", "d")
    slender = ratio > SLENDER_I * (1.0 + LIMIT_ROUNDING)
    if slender and flange <= FLANGE_STEP:
        return ("a0", "a0") if s460 else ("a", "b")
    if flange <= FLANGE_END:
        return ("a", "a") if s460 else ("b", "c")
    if slender:
        return "Table 6.2 ends at flanges of 100 mm for rolled sections with h/b > 1.2"
    return ("c", "c") if s460 else ("d", "d")
