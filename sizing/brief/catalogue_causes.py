"""What usually lies behind a number that is out by a telling factor: units and decimal marks."""

from __future__ import annotations

import math

CAUSE_MARGIN = 0.05
"""Relative distance within which a ratio is taken as the sign of a known slip."""

AREA_CAUSES = {
    100.0: "mm2 given as cm2", 0.01: "cm2 given as mm2", 645.16: "mm2 given as in2",
    6.4516: "cm2 given as in2", 1 / 6.4516: "in2 given as cm2", 1 / 645.16: "in2 given as mm2",
    10.0: "a figure with the decimal mark one place too far right",
    0.1: "a figure with the decimal mark one place too far left",
}  # fmt: skip
INERTIA_CAUSES = {
    1e4: "mm4 given as cm4", 1e-4: "cm4 given as mm4", 416231.4: "mm4 given as in4",
    41.62314: "cm4 given as in4", 1 / 41.62314: "in4 given as cm4",
    10.0: "a figure with the decimal mark one place too far right",
    0.1: "a figure with the decimal mark one place too far left",
}  # fmt: skip
LENGTH_CAUSES = {
    10.0: "mm given as cm", 0.1: "cm given as mm",
    25.4: "mm given as in", 1 / 25.4: "in given as mm",
}  # fmt: skip
MASS_CAUSES = {
    1.488164: "kg/m given as lb/ft", 1 / 1.488164: "lb/ft given as kg/m",
    9.80665: "N/m given as kg/m", 0.01: "kN/m given as kg/m", 1000.0: "g/m given as kg/m",
}  # fmt: skip


def likely_cause(ratio: float, causes: dict[float, str]) -> str:
    """Return the slip that explains found/expected = ``ratio``, empty when none does."""
    nearest = min(causes, key=lambda known: abs(math.log(ratio / known)))
    return causes[nearest] if abs(ratio / nearest - 1.0) <= CAUSE_MARGIN else ""
