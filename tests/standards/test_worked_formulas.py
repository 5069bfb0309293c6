"""The formula of every worked line gives its value from earlier lines, under every standard."""

from __future__ import annotations

import math
import re
from pathlib import Path

import numpy as np
import pytest

from sizing.brief.catalogue_reader import read_catalogue
from sizing.standards.formula import (
    PI,
    greatest,
    least,
    number,
    root,
    spreadsheet_of,
    symbols,
    symbols_in,
    text_of,
    up_to,
    value_of,
)
from sizing.standards.registry import make_standard

AGREEMENT = 1e-9
"""Relative; the same rule worked in another order of operations differs by rounding only."""

ELASTIC = {
    "E": "210 GPa", "density": "7850 kg/m3", "allowable_tension": "160 N/mm2",
    "allowable_compression": "140 N/mm2", "buckling_safety_factor": 2.5,
}  # fmt: skip

CASES = [
    ("EN 1993-1-1", "S355", {}, "square-hollow-sections"),
    ("EN 1993-1-1", "S355", {"class_4": "effective width"}, "rectangular-hollow-sections"),
    ("EN 1993-1-1", "S460N", {"class_4": "effective width"}, "ipe"),
    ("EN 1993-1-1", "S355", {"class_4": "effective width"}, "equal-angles"),
    (
        "EN 1993-1-1", "S235",
        {"angle_bolts": 2, "bolt_hole": "18 mm", "bolt_pitch": "60 mm"}, "equal-angles",
    ),
    (
        "EN 1993-1-1", "S235",
        {"angle_bolts": 1, "bolt_hole": "18 mm", "edge_distance": "30 mm"}, "equal-angles",
    ),
    ("AISC 360", "A500 Gr. C", {"slender_elements": "E7"}, "hss-square"),
    ("AISC 360", "A36", {"method": "ASD"}, "us-equal-angles"),
    ("AISC 360", "A36", {"single_angles": "E5 space"}, "us-equal-angles"),
    ("AISC 360", "A53 Gr. B", {"slender_elements": "E7"}, "pipe"),
    ("EN 1995-1-1", "C24", {}, "solid-timber"),
    ("EN 1995-1-1", "GL24h", {"service_class": 3}, "glulam"),
    ("NDS", "Douglas Fir-Larch No. 1", {}, "dimension-lumber"),
    ("NDS", "Douglas Fir-Larch No. 1", {"method": "LRFD"}, "dimension-lumber"),
    ("elastic", None, ELASTIC, "square-hollow-sections"),
    ("elastic", None, ELASTIC, "equal-angles"),
]  # fmt: skip


@pytest.mark.parametrize(("name", "grade", "settings", "rows"), CASES)
def test_every_formula_gives_the_value_beside_it(name, grade, settings, rows, members_of):
    """Worked again from the inputs alone, each line and the resistance come out the same."""
    standard = make_standard(name, grade, settings)
    catalogue = read_catalogue(rows, Path.cwd())
    worked = 0
    for section in range(0, len(catalogue), max(1, len(catalogue) // 12)):
        for length, net in ((0.4, 1.0), (1.7, 0.85), (5.0, 1.0)):
            members = members_of(length=length, out_of_plane=1.4 * length, net_factor=net)
            for sense in ("tension", "compression"):
                steps = standard.working(catalogue, section, members, 0, "short", sense)
                if steps[-1].value > 0.0:
                    worked += 1
                    again(steps)
    assert worked > 10


def again(steps):
    """Work all formulas from the inputs, each on the outcome of the earlier ones."""
    values: dict[str, float] = {}
    for line in steps:
        value = line.value
        if line.formula is not None:
            assert symbols_in(line.formula) <= set(values), line
            assert line.expression == text_of(line.formula)
            value = value_of(line.formula, values)
        assert math.isclose(value, line.value, rel_tol=AGREEMENT, abs_tol=1e-300), line
        values[line.symbol] = value
    assert steps[-1].formula is not None


def test_formulas_print_as_an_engineer_writes_them():
    """Products stand side by side, squares and roots as signs, brackets where they are needed."""
    A, f, g, r = symbols("A", "f", "γ", "Lc/r")
    assert text_of(0.9 * A * f / g) == "0.9 A f / γ"
    assert text_of(PI**2 * f * A / (g * r**2)) == "π² f A / (γ (Lc/r)²)"
    assert text_of(1.0 / (f + root(f**2 - g**2))) == "1 / (f + √(f² − γ²))"
    assert text_of(A - (f - g)) == "A − (f − γ)"
    assert text_of(least(A, greatest(f, g))) == "min(A, max(f, γ))"
    assert text_of(up_to(r, 2.0, f, g)) == "f for Lc/r ≤ 2, else γ"
    assert text_of((number(0.15, "m", "150 mm") / A) ** 0.2) == "(150 mm / A)^0.2"


def test_formulas_become_spreadsheet_formulas():
    """Brackets settle every order; constants with a unit come in the unit of the sheet."""
    A, f = symbols("A", "f")
    sheet = spreadsheet_of(
        up_to(A, number(2.0, "m"), root(A) * f**2, least(A, PI - f)),
        cell={"A": "C1", "f": "D1"}.__getitem__,
        scale={"m": 1e3, "-": 1.0}.__getitem__,
    )
    assert sheet == "IF(C1<=2000.0,(SQRT(C1)*(D1^2.0)),MIN(C1,(PI()-D1)))"
    assert not re.search(r"[^\x20-\x7e]", sheet)


def test_arrays_of_numpy_do_not_leak():
    """Values of worked lines are plain numbers."""
    formula = symbols("A")[0] * float(np.float64(2.0))
    assert isinstance(value_of(formula, {"A": 1.0}), float)
