"""The rules of EN 1995-1-1 for a member under axial force, one function per rule.

Clauses are those of EN 1995-1-1:2004 with A1:2008 and A2:2014. Tables 3.1 (kmod) as reproduced
in the ICE Manual of Structural Design: Buildings, Table 19.9; Tables 2.3 and 3.2 recalled.
"""

from __future__ import annotations

import math

import numpy as np

from sizing.brief.model import LoadDuration
from sizing.standards.contract import FloatArray
from sizing.standards.en1995_grades import Product

# Table 3.1: solid timber and glulam alike, service classes 1 and 2 alike.
K_MOD_DRY: dict[LoadDuration, float] = {
    "permanent": 0.60,
    "long": 0.70,
    "medium": 0.80,
    "short": 0.90,
    "instantaneous": 1.10,
}
K_MOD_EXTERIOR: dict[LoadDuration, float] = {
    "permanent": 0.50,
    "long": 0.55,
    "medium": 0.65,
    "short": 0.70,
    "instantaneous": 0.90,
}
K_DEF = {1: 0.60, 2: 0.80, 3: 2.00}
GAMMA_M: dict[Product, float] = {"solid timber": 1.30, "glulam": 1.25}
BETA_C: dict[Product, float] = {"solid timber": 0.2, "glulam": 0.1}

LAMBDA_REL_PLATEAU = 0.3
K_H_DENSITY_LIMIT = 700.0


def k_mod(service_class: int, duration: LoadDuration) -> float:
    """Return kmod for service class 1, 2 or 3 and a load duration (3.1.3, Table 3.1)."""
    return (K_MOD_EXTERIOR if service_class == 3 else K_MOD_DRY)[duration]


def k_h(product: Product, rho_k: float, larger_dimension: FloatArray) -> FloatArray:
    """Return the size factor for tension along the grain, never below 1.

    Solid timber with ρk ≤ 700 kg/m³: min((150 mm / h)^0.2, 1.3) for h < 150 mm (3.2(3), eq. 3.1).
    Glulam: min((600 mm / h)^0.1, 1.1) for h < 600 mm (3.3(3), eq. 3.2). ``larger_dimension`` h
    in m is the width of the tension member: the larger side of its cross-section.
    """
    if product == "glulam":
        return np.clip((0.600 / larger_dimension) ** 0.1, 1.0, 1.1)
    if rho_k > K_H_DENSITY_LIMIT:
        return np.ones_like(larger_dimension)
    return np.clip((0.150 / larger_dimension) ** 0.2, 1.0, 1.3)


def design_value(k: float, f_k: float, gamma_M: float) -> float:
    """Return f_d = kmod f_k / γM in Pa (2.4.1, eq. 2.14)."""
    return k * f_k / gamma_M


def lambda_rel(slenderness: FloatArray, fc0k: float, E0_05: float) -> FloatArray:
    """Return λrel = (λ/π) √(fc,0,k / E0,05) with λ = L/i (6.3.2(1), eq. 6.21 and 6.22)."""
    return slenderness / math.pi * math.sqrt(fc0k / E0_05)


def k_buckling(relative: FloatArray, beta_c: float) -> FloatArray:
    """Return k = 0.5 (1 + βc (λrel − 0.3) + λrel²) (6.3.2(3), eq. 6.27 and 6.28)."""
    return 0.5 * (1.0 + beta_c * (relative - LAMBDA_REL_PLATEAU) + relative**2)


def k_c(relative: FloatArray, beta_c: float) -> FloatArray:
    """Return kc = 1 / (k + √(k² − λrel²)), and 1 for λrel ≤ 0.3 (6.3.2, eq. 6.25 and 6.26)."""
    held = np.maximum(relative, LAMBDA_REL_PLATEAU)
    k = k_buckling(held, beta_c)
    return np.asarray(np.minimum(1.0 / (k + np.sqrt(k**2 - held**2)), 1.0))
