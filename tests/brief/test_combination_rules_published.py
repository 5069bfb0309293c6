"""Combination rules against worked combinations; sources in tests/published/combinations."""

import csv
import json
from pathlib import Path

import pytest

from sizing.brief.combination_rules import expand
from sizing.brief.combination_rules_en1990 import PSI
from sizing.brief.model import LoadCase

FOLDER = Path(__file__).parents[1] / "published" / "combinations"
WORKED = json.loads((FOLDER / "worked.json").read_text(encoding="utf-8"))

CATEGORIES = {
    "imposed A domestic": "domestic",
    "imposed B offices": "offices",
    "imposed C congregation": "congregation",
    "imposed D shopping": "shopping",
    "imposed E storage": "storage",
    "traffic F <= 30 kN": "traffic up to 30 kN",
    "traffic G 30-160 kN": "traffic 30 to 160 kN",
    "imposed H roofs": "roof",
    "snow, Finland Iceland Norway Sweden": "snow Nordic",
    "snow, other CEN, altitude > 1000 m": "snow above 1000 m",
    "snow, other CEN, altitude <= 1000 m": "snow up to 1000 m",
    "wind": "wind",
    "temperature (not fire)": "temperature",
}


def cases_of(example):
    return [LoadCase(name=name, kind=kind, nodal={}) for name, kind, _ in example["cases"]]


def values(example, combinations):
    effect = [value for _, _, value in example["cases"]]
    return [sum(f * effect[q] for q, f in c.factors.items()) for c in combinations]


def check(example, combinations):
    got = values(example, combinations)
    for expected in example["values"]:
        found = [
            value
            for value, c in zip(got, combinations, strict=True)
            if all(words in c.origin for words in expected["contains"])
            and value == pytest.approx(expected["kN"], abs=expected["tolerance"])
        ]
        assert found, (expected, [(c.origin, v) for c, v in zip(combinations, got, strict=True)])


@pytest.mark.parametrize("example", WORKED["en1990"], ids=lambda e: e["name"])
def test_en1990_worked_combination(example):
    """Every worked combination of EN 1990 is in the set, with its value."""
    check(example, expand("EN 1990", cases_of(example), example["settings"]))


@pytest.mark.parametrize("example", WORKED["asce7"], ids=lambda e: e["name"])
def test_asce7_worked_combination(example):
    """Every worked combination of ASCE 7 is in the set; the envelope has the worked ends."""
    combinations = expand(example["rule"], cases_of(example), {})
    check(example, combinations)
    strength = [
        v
        for v, c in zip(values(example, combinations), combinations, strict=True)
        if c.state == "strength"
    ]
    assert max(strength) == pytest.approx(example["greatest"])
    assert min(strength) == pytest.approx(example["least"])


def test_psi_factors_are_table_a1_1():
    """ψ0, ψ1 and ψ2 of every category are those of EN 1990 Table A1.1."""
    with (FOLDER / "psi_factors.csv").open(encoding="utf-8", newline="") as file:
        table = {row["action"]: row for row in csv.DictReader(file)}
    for action, category in CATEGORIES.items():
        row = table[action]
        assert PSI[category] == (float(row["psi0"]), float(row["psi1"]), float(row["psi2"]))
