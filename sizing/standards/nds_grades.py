"""Reference design values of NDS Supplement 2018, and which sizes each grade is made for.

Visually graded dimension lumber, 2 to 4 in thick (Table 4A), and posts and timbers of Douglas
Fir-Larch, 5 x 5 in and larger (Table 4D); psi. Recalled; Emin agrees with its formula in
Appendix D within rounding. Anything else (Southern Pine, glulam, machine-graded lumber) is
given by the user, value by value.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import Literal

NDSProduct = Literal[
    "dimension lumber", "sized lumber", "posts and timbers", "glulam", "composite lumber"
]
SizeRule = Literal["common", "stud", "construction", "none"]

OWN_VALUES = "given by the user"
"""Source of a grade whose reference values stand in the brief."""

PSI = 6894.757293168361
"""Pa in one pound-force per square inch."""


@dataclass(frozen=True, kw_only=True, slots=True)
class NDSGrade:
    """Reference values ``Ft``, ``Fc``, ``E``, ``Emin`` in Pa and specific gravity ``G``."""

    name: str
    source: str
    product: NDSProduct
    size_rule: SizeRule
    Ft: float
    Fc: float
    E: float
    Emin: float
    G: float


# species: grade: Ft, Fc, E, Emin (psi), G
TABLE_4A: dict[str, dict[str, tuple[float, float, float, float, float]]] = {
    "Douglas Fir-Larch": {
        "Select Structural": (1000, 1700, 1_900_000, 690_000, 0.5),
        "No.1 & Btr": (800, 1550, 1_800_000, 660_000, 0.5),
        "No.1": (675, 1500, 1_700_000, 620_000, 0.5),
        "No.2": (575, 1350, 1_600_000, 580_000, 0.5),
        "No.3": (325, 775, 1_400_000, 510_000, 0.5),
        "Stud": (450, 850, 1_400_000, 510_000, 0.5),
        "Construction": (650, 1650, 1_500_000, 550_000, 0.5),
    },
    "Hem-Fir": {
        "Select Structural": (925, 1500, 1_600_000, 580_000, 0.43),
        "No.1": (625, 1350, 1_500_000, 550_000, 0.43),
        "No.2": (525, 1300, 1_300_000, 470_000, 0.43),
    },
    "Spruce-Pine-Fir": {
        "Select Structural": (700, 1400, 1_500_000, 550_000, 0.42),
        "No.1/No.2": (450, 1150, 1_400_000, 510_000, 0.42),
        "No.3": (250, 650, 1_200_000, 440_000, 0.42),
        "Stud": (350, 725, 1_200_000, 440_000, 0.42),
        "Construction": (500, 1400, 1_300_000, 470_000, 0.42),
    },
}
TABLE_4D: dict[str, dict[str, tuple[float, float, float, float, float]]] = {
    "Douglas Fir-Larch": {
        "Select Structural": (1000, 1150, 1_600_000, 580_000, 0.5),
        "No.1": (825, 1000, 1_600_000, 580_000, 0.5),
        "No.2": (475, 700, 1_300_000, 470_000, 0.5),
    },
}
POSTS = "posts and timbers"
SHORT_SPECIES = {"Douglas Fir-Larch": "DF-L", "Hem-Fir": "HF", "Spruce-Pine-Fir": "SPF"}


def nds_grades() -> dict[str, NDSGrade]:
    """Return every tabulated grade by its name, such as ``Douglas Fir-Larch No.2``."""
    found = {}
    for species, grades in TABLE_4A.items():
        for grade, values in grades.items():
            name = f"{species} {grade}"
            found[name] = _grade(name, "Table 4A", "dimension lumber", _size_rule(grade), values)
    for species, grades in TABLE_4D.items():
        for grade, values in grades.items():
            name = f"{species} {grade}, {POSTS}"
            found[name] = _grade(name, "Table 4D", "posts and timbers", "none", values)
    return found


def find_grade(name: str) -> NDSGrade | None:
    """Return the grade of this name; case, spaces and punctuation do not matter.

    The short names DF-L, HF and SPF stand for their species; the species may come last.
    """
    spellings = {}
    for full, grade in nds_grades().items():
        for species, short in SHORT_SPECIES.items():
            if full.startswith(species):
                rest = full.removeprefix(species)
                for said in (species + rest, rest + species, short + rest, rest + short):
                    spellings[_folded(said)] = grade
    return spellings.get(_folded(name))


def _folded(name: str) -> str:
    return "".join(letter for letter in name.casefold() if letter.isalnum())


def _size_rule(grade: str) -> SizeRule:
    if grade == "Stud":
        return "stud"
    return "construction" if grade in ("Construction", "Standard") else "common"


def _grade(
    name: str,
    table: str,
    product: NDSProduct,
    size_rule: SizeRule,
    values: tuple[float, float, float, float, float],
) -> NDSGrade:
    Ft, Fc, E, Emin, G = values
    return NDSGrade(
        name=name,
        source=f"NDS Supplement 2018 {table}",
        product=product,
        size_rule=size_rule,
        Ft=Ft * PSI,
        Fc=Fc * PSI,
        E=E * PSI,
        Emin=Emin * PSI,
        G=G,
    )
