"""Words for loads as stated: quantities in the brief's units, resultants with their direction."""

from __future__ import annotations

import math
from collections.abc import Sequence
from itertools import groupby

import numpy as np
from numpy.typing import NDArray

from sizing.units import Display, Kind, UnitPair

FloatArray = NDArray[np.float64]

NOTHING = 1e-9
"""Part of a resultant below which a component is rounding."""


def number_with_unit(value: float, kind: Kind, units: UnitPair) -> str:
    """Return e.g. ``1.00 kN/m²``; a number without a unit as it is."""
    display = Display.of(units)
    if kind == "pressure":
        return display.pressure.text(value)
    if kind == "line load":
        return display.line_load.text(value)
    if kind == "length":
        return display.length.text(value)
    return f"{value:g}"


def lengths_text(factors: Sequence[float], lengths: Sequence[float], units: UnitPair) -> str:
    """Return ``28.800 m``, or ``(0.8 × 14.400 m + 0.4 × 14.400 m)`` for parts with factors."""
    runs = groupby(zip(factors, lengths, strict=True), key=lambda pair: pair[0])
    parts = [(factor, math.fsum(length for _, length in run)) for factor, run in runs]
    length = Display.of(units).length
    if all(factor == 1.0 for factor, _ in parts):
        return length.text(math.fsum(lengths))
    words = [f"{factor:g} × {length.text(total)}" for factor, total in parts]
    return words[0] if len(words) == 1 else f"({' + '.join(words)})"


def force_text(force: FloatArray, units: UnitPair) -> str:
    """Return a resultant: ``172.80 kN down``, or its components where it is not upright."""
    unit = Display.of(units).force
    size = float(np.abs(force).max(initial=0.0))
    if size == 0.0:
        return f"0 {unit.label}"
    if np.all(np.abs(force[:-1]) <= NOTHING * size):
        return f"{unit.text(abs(float(force[-1])))} {'down' if force[-1] < 0.0 else 'up'}"
    axes = zip("xyz", force, strict=False)
    parts = [f"{axis} {unit.number(float(f))}" for axis, f in axes]
    return f"({', '.join(parts)}) {unit.label}"
