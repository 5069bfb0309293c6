"""NDS 2018 against printed values and examples; see tests/published/timber for the sources."""

import csv
import json
from pathlib import Path

import numpy as np
import pytest

from sizing.standards.nds import make_nds
from sizing.standards.nds_grades import PSI, nds_grades
from sizing.standards.nds_strength import C_P, F_cE, density, size_factors

FOLDER = Path(__file__).parents[1] / "published" / "timber"
DATA = json.loads((FOLDER / "nds_members.json").read_text(encoding="utf-8"))
INCH = 0.0254
POUND = 4.4482216152605
LB_PER_FT3 = 16.018463373960142
CP_TOLERANCE = 5e-4
"""CP is printed with three or four decimals."""
FOUR_FIGURES = 2e-4
"""Relative; the regression values have four figures."""


def rows(name):
    with (FOLDER / name).open(encoding="utf-8", newline="") as file:
        return list(csv.DictReader(file))


@pytest.mark.parametrize(
    "row", rows("nds_reference_values.csv"), ids=lambda r: f"{r['species']} {r['grade']}"
)
def test_reference_values_are_those_of_table_4a(row):
    """Every grade holds the row of Supplement Table 4A."""
    grade = nds_grades()[f"{row['species']} {row['grade']}"]
    assert grade.Ft / PSI == pytest.approx(float(row["Ft_psi"]))
    assert grade.Fc / PSI == pytest.approx(float(row["Fc_psi"]))
    assert pytest.approx(float(row["E_psi"])) == grade.E / PSI
    assert grade.Emin / PSI == pytest.approx(float(row["Emin_psi"]))
    assert float(row["G"]) == grade.G


@pytest.mark.parametrize("name", nds_grades())
def test_emin_follows_appendix_d(name):
    """Emin = E (1 − 1.645 · 0.25) 1.03 / 1.66 (App. D), to 10 000 psi."""
    grade = nds_grades()[name]
    expected = grade.E * (1.0 - 1.645 * 0.25) * 1.03 / 1.66
    assert grade.Emin == pytest.approx(expected, rel=0.0105)


@pytest.mark.parametrize("example", DATA["stability_factor_published"], ids=lambda e: e["name"])
def test_column_stability_example(example):
    """Fc*, FcE, CP and Fc' of the printed example come out within its rounding."""
    fc_star = example["Fc"] * example["C_D"] * np.ones(1)
    critical = F_cE(example["Emin"], np.array([example["le_in"] / example["d_in"]]))
    factor = C_P(critical, fc_star, example["c"])
    assert fc_star[0] == pytest.approx(example["Fc_star"], rel=example["relative"])
    assert critical[0] == pytest.approx(example["FcE"], rel=example["relative"])
    assert (critical / fc_star)[0] == pytest.approx(example["r"], rel=example["relative"])
    assert factor[0] == pytest.approx(example["CP"], abs=CP_TOLERANCE)
    assert (factor * fc_star)[0] == pytest.approx(example["Fc_prime"], rel=example["relative"])


def test_column_stability_over_slenderness():
    """CP and FcE over le/d are those computed apart from the package."""
    data = DATA["stability_factor_computed"]
    critical = F_cE(data["Emin"], np.array(data["le_d"], dtype=float))
    np.testing.assert_allclose(critical, data["FcE"], rtol=FOUR_FIGURES)
    factor = C_P(critical, np.array(data["Fc_star"]), data["c"])
    np.testing.assert_allclose(factor, data["CP"], atol=1e-4)


@pytest.mark.parametrize("example", DATA["columns"], ids=lambda e: e["name"])
def test_column(rectangles, members_of, example):
    """Slenderness, Fc*, FcE, CP, Fc' and the load of the governing axis are the computed ones."""
    standard = make_nds(example["grade"], {})
    catalogue = rectangles((example["b_in"] * INCH, example["d_in"] * INCH))
    column = members_of(length=example["strong_in"] * INCH, out_of_plane=example["weak_in"] * INCH)
    duration = example["duration"]
    table = standard.resistances(catalogue, column, (duration,))
    assert table.usable.all()
    steps = standard.working(catalogue, 0, column, 0, duration, "compression")
    found = {step.symbol: step.value for step in steps}
    axis = "in" if found["C_P,in"] <= found["C_P,out"] else "out"
    assert found[f"(le/d)_{axis}"] == pytest.approx(example["le_d"], abs=0.005)
    assert found["F_c*"] / PSI == pytest.approx(example["Fc_star"], abs=0.06)
    assert found[f"F_cE,{axis}"] / PSI == pytest.approx(example["FcE"], abs=0.06)
    assert found[f"C_P,{axis}"] == pytest.approx(example["CP"], abs=1e-4)
    assert found["F_c*"] * found[f"C_P,{axis}"] / PSI == pytest.approx(
        example["Fc_prime"], abs=0.06
    )
    load = table.compression[0, 0, 0] / POUND
    assert load == pytest.approx(example["P_lb"], rel=FOUR_FIGURES)


def test_tie(rectangles, members_of):
    """Ft' and the allowable tension are the computed ones."""
    tie = DATA["tie"]
    standard = make_nds(tie["grade"], {})
    catalogue = rectangles((tie["b_in"] * INCH, tie["d_in"] * INCH))
    steps = standard.working(catalogue, 0, members_of(length=1.0), 0, tie["duration"], "tension")
    found = {step.symbol: step.value for step in steps}
    assert found["F_t'"] / PSI == pytest.approx(tie["Ft_prime"], abs=0.005)
    assert found["T"] / POUND == pytest.approx(tie["T_lb"], rel=FOUR_FIGURES)


@pytest.mark.parametrize("row", DATA["weights"]["rows"], ids=lambda row: row[0])
def test_weight_from_specific_gravity(row):
    """Density at 15 % moisture is the weight that the American Wood Council lists."""
    _, gravity, pounds = row
    got = density(gravity, 15.0) / LB_PER_FT3
    assert got == pytest.approx(pounds, abs=DATA["weights"]["tolerance_pcf"])


@pytest.mark.parametrize("rule", ["common", "stud"])
def test_size_factors_are_those_of_table_4a(rule):
    """CF of every nominal width is the table's, for inch and rounded metric dressed widths."""
    data = DATA["size_factors"]
    for nominal, tension, compression in data[rule]:
        inches = data["dressed_in"][str(nominal)]
        for width in (inches * INCH, round(inches * INCH, 3)):
            got = size_factors(rule, np.array([width]))
            assert (got[0][0], got[1][0]) == (tension, compression)


@pytest.mark.parametrize("row", rows("nds_lumber_sizes.csv"), ids=lambda r: r["nominal"])
def test_dressed_sizes_are_usable_with_a_grade_made_for_them(rectangles, members_of, row):
    """Every listed size is usable with the table of its thickness; smaller side under 5 in: 4A."""
    size = (float(row["b_in"]) * INCH, float(row["d_in"]) * INCH)
    grade = "DF-L No.2" if size[0] < 4.5 * INCH else "DF-L No.2, posts and timbers"
    table = make_nds(grade, {}).resistances(rectangles(size), members_of(length=1.0), ("medium",))
    assert table.usable.all()
