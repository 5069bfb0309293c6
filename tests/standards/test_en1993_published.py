"""EN 1993-1-1 against printed tables and worked examples (see tests/published/steel/SOURCES.md)."""

from __future__ import annotations

import csv
import tomllib
from pathlib import Path

import numpy as np
import pytest

from sizing.standards.en1993 import make_en1993
from sizing.standards.en1993_curves import ALPHA, reduction_factor
from sizing.standards.en1993_grades import parse_grade, strength_of

PUBLISHED = Path(__file__).parents[1] / "published" / "steel"
CHI_ROUNDING = 1e-4  # four printed decimals
PRINTED = {"N": 1e-3, "Pa": 1e-6}  # examples print kN and N/mm2
POWERS = {"area": 1e-6, "i_major": 1e-12, "i_minor": 1e-12, "i_least": 1e-12}

EXAMPLES = tomllib.loads((PUBLISHED / "en1993_examples.toml").read_text("utf-8"))["examples"]


def rows_of(name):
    with (PUBLISHED / name).open(encoding="utf-8", newline="") as file:
        return list(csv.DictReader(file))


def in_metres(section):
    return {
        key: value if isinstance(value, str) else value * POWERS.get(key, 1e-3)
        for key, value in section.items()
    }


@pytest.mark.parametrize("curve", list(ALPHA))
def test_reduction_factors_of_the_table(curve):
    """χ agrees with ENV 1993-1-1 Table 5.5.2 (from memory) to its four decimals."""
    table = rows_of("chi_table.csv")
    slenderness = np.array([float(row["lambda_bar"]) for row in table])
    printed = np.array([float(row[curve]) for row in table])
    found = reduction_factor(slenderness, np.array(ALPHA[curve]))
    assert len(table) == 29
    np.testing.assert_allclose(found, printed, rtol=0.0, atol=CHI_ROUNDING)


@pytest.mark.parametrize("row", rows_of("en_steel_grades.csv"), ids=lambda r: "-".join(r.values()))
def test_strengths_of_the_grade_tables(row):
    """fy and fu agree with Table 3.1 and the product standards (from memory), at both ends."""
    product = "EN 10025" if row["product"].startswith("EN 10025") else row["product"]
    grade = parse_grade(row["grade"].split("/")[0])
    assert grade is not None
    printed_fu = float(row["fu_N_mm2"] or "nan")
    if (row["product"], row["grade"], printed_fu) == ("EN 10025-2", "S355", 510.0):
        printed_fu = 490.0  # AC:2009 to EN 1993-1-1:2005
    for millimetres in (float(row["t_over_mm"]) + 0.001, float(row["t_upto_mm"])):
        found = strength_of(grade, product, millimetres / 1000.0, row["table"])
        assert found.fy == float(row["fy_N_mm2"]) * 1e6
        assert np.isnan(printed_fu) or found.fu == printed_fu * 1e6


@pytest.mark.parametrize("example", EXAMPLES, ids=lambda e: e["name"])
def test_worked_examples(catalogue_of, members_of, example):
    """Every printed figure of the worked example stands in our worked lines."""
    catalogue = catalogue_of(in_metres(example["section"]))
    member = {
        key: value * 1e-3 if isinstance(value, int) and not isinstance(value, bool) else value
        for key, value in example["member"].items()
    }
    if "net_area" in member:
        member["net_factor"] = example["member"]["net_area"] * 1e-6 / catalogue.area[0]
        del member["net_area"]
    members = members_of(**member)
    standard = make_en1993(example["grade"], example["settings"])
    lines = standard.working(catalogue, 0, members, 0, "permanent", example["sense"])
    found = {
        line.symbol.replace(",", "_"): line.value * PRINTED.get(line.unit, 1.0) for line in lines
    }
    printed = {key.replace(",", "_"): value for key, value in example["printed"].items()}
    assert {key: found[key] for key in printed} == pytest.approx(printed, rel=example["tolerance"])
    table = standard.resistances(catalogue, members, ("permanent",))
    resistance = table.tension if example["sense"] == "tension" else table.compression
    assert resistance[0, 0, 0] == lines[-1].value


def test_the_designers_guide_resistance_is_met_closely(catalogue_of, members_of):
    """CHS 244.5x10, Example 6.7: N_b,Rd 1836.5 kN to the printed digits."""
    example = next(e for e in EXAMPLES if e["name"].startswith("CHS 244.5"))
    table = make_en1993(example["grade"], {}).resistances(
        catalogue_of(in_metres(example["section"])), members_of(length=4.0), ("permanent",)
    )
    assert table.compression[0, 0, 0] == pytest.approx(1836.5e3, rel=1e-4)
