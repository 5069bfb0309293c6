"""The rules of NDS 2018 for a member under axial force, one function per rule.

Clauses and tables are those of ANSI/AWC NDS-2018 and its Supplement; recalled unless the tests
name a printed source.
"""

from __future__ import annotations

import numpy as np

from sizing.brief.model import LoadDuration
from sizing.standards.contract import FloatArray
from sizing.standards.nds_grades import NDSProduct, SizeRule

INCH = 0.0254

# Table 2.3.2: dead load, ten years, two months, seven days, ten minutes.
C_D: dict[LoadDuration, float] = {
    "permanent": 0.90,
    "long": 1.00,
    "medium": 1.15,
    "short": 1.25,
    "instantaneous": 1.60,
}
# Table N3: 1.4D; occupancy, snow and roof live load leading; wind leading.
TIME_EFFECT: dict[LoadDuration, float] = {
    "permanent": 0.60,
    "long": 0.80,
    "medium": 0.80,
    "short": 0.80,
    "instantaneous": 1.00,
}
# Tables N1 and N2.
K_F = {"Ft": 2.70, "Fc": 2.40, "Emin": 1.76}
PHI = {"Ft": 0.80, "Fc": 0.90, "Emin": 0.85}

C_COLUMN: dict[NDSProduct, float] = {
    "dimension lumber": 0.8,
    "sized lumber": 0.8,
    "posts and timbers": 0.8,
    "glulam": 0.9,
    "composite lumber": 0.9,
}
"""c of 3.7.1.5."""

K_CE = 0.822
LE_D_LIMIT = 50.0
LE_D_LIMIT_CONSTRUCTION = 75.0

BUILT_UP = {"none": 0.0, "nails": 0.60, "bolts": 0.75}
"""Kf of 15.3.2 for buckling across the plies; 0: the boards act one by one."""

SIZE_TOLERANCE = 0.001
"""m; metric dressed sizes are rounded to the millimetre (89 for 88.9, 140 for 139.7)."""

# Dressed width of each nominal width up to 12 in; wider counts as 14 in (Table 4A).
DRESSED = np.array([3.5, 4.5, 5.5, 7.25, 9.25, 11.25]) * INCH
C_F_COMMON_TENSION = np.array([1.5, 1.4, 1.3, 1.2, 1.1, 1.0, 0.9])
C_F_COMMON_COMPRESSION = np.array([1.15, 1.1, 1.1, 1.05, 1.0, 1.0, 0.9])
C_F_STUD_TENSION = np.array([1.1, 1.0, 1.0])
C_F_STUD_COMPRESSION = np.array([1.05, 1.0, 1.0])
STUD_WIDEST = DRESSED[2]
CONSTRUCTION_WIDEST = DRESSED[0]

TEMPERATURES = ("up to 100 F", "100 to 125 F", "125 to 150 F")


def size_factors(rule: SizeRule, width: FloatArray) -> tuple[FloatArray, FloatArray]:
    """Return CF for Ft and for Fc (Supplement Table 4A) of sections ``width`` m wide (s,).

    A width between two dressed widths counts as the greater, whose factor is not higher. Stud
    grade is tabulated to 6 in, Construction to 4 in; wider ones are left out by the caller.
    """
    step = np.searchsorted(DRESSED + SIZE_TOLERANCE, width)
    if rule == "common":
        return C_F_COMMON_TENSION[step], C_F_COMMON_COMPRESSION[step]
    if rule == "stud":
        held = np.minimum(step, len(C_F_STUD_TENSION) - 1)
        return C_F_STUD_TENSION[held], C_F_STUD_COMPRESSION[held]
    ones = np.ones_like(width)
    return ones, ones


def wet_factors(product: NDSProduct, Fc_CF: FloatArray) -> tuple[float, FloatArray, float]:
    """Return CM for Ft, for Fc (s,) and for E and Emin in wet service.

    Dimension lumber 1.0, 0.8 (1.0 where Fc CF ≤ 750 psi), 0.9 (Table 4A); posts and timbers
    1.0, 0.91, 1.0 (Table 4D); glulam 0.8, 0.73, 0.833 (Table 5A). ``Fc_CF`` in psi.
    """
    ones = np.ones_like(Fc_CF)
    if product == "posts and timbers":
        return 1.0, 0.91 * ones, 1.0
    if product == "glulam":
        return 0.8, 0.73 * ones, 0.833
    return 1.0, np.where(Fc_CF <= 750.0, 1.0, 0.8), 0.9


def temperature_factors(temperature: str, *, wet: bool) -> tuple[float, float, float]:
    """Return Ct for Ft, Fc and E, Emin at sustained ``temperature`` (2.3.3, Table 2.3.3)."""
    step = TEMPERATURES.index(temperature)
    if step == 0:
        return 1.0, 1.0, 1.0
    return 0.9, (0.7, 0.5)[step - 1] if wet else (0.8, 0.7)[step - 1], 0.9


INCISED = {"Ft": 0.80, "Fc": 0.80, "E": 0.95}
"""Ci of Table 4.3.8."""


def F_cE(Emin: FloatArray | float, le_d: FloatArray) -> FloatArray:
    """Return FcE = 0.822 Emin' / (le/d)² in Pa, inf at le = 0 (3.7.1.5)."""
    squared = np.square(le_d)
    infinite = np.full_like(squared, np.inf)
    return np.divide(K_CE * Emin, squared, out=infinite, where=squared != 0.0)


def C_P(F_cE_: FloatArray, Fc_star: FloatArray, c: float) -> FloatArray:
    """Return the column stability factor CP (3.7.1.5, eq. 3.7-1), 1 for an unbuckled column.

    CP = (1 + r)/(2c) − √([(1 + r)/(2c)]² − r/c) with r = FcE/Fc*; computed as
    (r/c) / (a + √(a² − r/c)) with a = (1 + r)/(2c), which does not cancel for stocky columns.
    """
    # Divided by r throughout so that r = inf gives 1 and not inf/inf.
    inverse = Fc_star / F_cE_
    a = (1.0 + inverse) / (2.0 * c)
    return np.asarray((1.0 / c) / (a + np.sqrt(a**2 - inverse / c)))


def density(G: float, moisture: float) -> float:
    """Return kg/m³ from specific gravity (oven-dry) at ``moisture`` per cent.

    62.4 lb/ft³ · G / (1 + 0.009 G mc) · (1 + mc/100) (NDS Supplement 3.1.3).
    """
    water = 62.4 * 16.018463373960142
    return water * G / (1.0 + 0.009 * G * moisture) * (1.0 + moisture / 100.0)
