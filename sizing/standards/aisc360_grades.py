"""Yield and tensile strength of ASTM structural steels by grade and form of section.

Values of AISC Manual, 15th ed., Tables 2-4 and 2-5, from memory; ``Fy`` and ``Fu`` can be set.
"""

from __future__ import annotations

import re
from dataclasses import dataclass
from typing import Literal

KSI = 6894757.293168361
"""Pa in one ksi: 0.45359237 kg · 9.80665 m/s² · 1000 / (0.0254 m)² (exact by definition)."""

Form = Literal["rectangular HSS", "round HSS or pipe", "shape or angle", "plate or bar"]
FORMS: dict[str, Form] = {
    "SHS": "rectangular HSS",
    "RHS": "rectangular HSS",
    "CHS": "round HSS or pipe",
    "I": "shape or angle",
    "angle": "shape or angle",
    "other": "shape or angle",
    "rectangle": "plate or bar",
}
_OPEN: tuple[Form, ...] = ("shape or angle", "plate or bar")
_HSS: tuple[Form, ...] = ("rectangular HSS", "round HSS or pipe")


@dataclass(frozen=True, kw_only=True, slots=True)
class GradeUS:
    """``Fy`` and ``Fu`` in ksi for each form that the grade is made in."""

    name: str
    strengths: dict[Form, tuple[float, float]]


def _same(forms: tuple[Form, ...], Fy: float, Fu: float) -> dict[Form, tuple[float, float]]:
    return dict.fromkeys(forms, (Fy, Fu))


GRADES: tuple[GradeUS, ...] = (
    GradeUS(name="A36", strengths=_same(_OPEN, 36, 58)),
    GradeUS(name="A53 Gr B", strengths={"round HSS or pipe": (35, 60)}),
    GradeUS(
        name="A500 Gr B",
        strengths={"rectangular HSS": (46, 58), "round HSS or pipe": (42, 58)},
    ),
    GradeUS(
        name="A500 Gr C",
        strengths={"rectangular HSS": (50, 62), "round HSS or pipe": (46, 62)},
    ),
    GradeUS(name="A501 Gr B", strengths=_same(_HSS, 50, 70)),
    GradeUS(name="A529 Gr 50", strengths=_same(_OPEN, 50, 65)),
    GradeUS(name="A572 Gr 50", strengths=_same(_OPEN, 50, 65)),
    GradeUS(name="A572 Gr 60", strengths=_same(_OPEN, 60, 75)),
    GradeUS(name="A572 Gr 65", strengths=_same(_OPEN, 65, 80)),
    GradeUS(name="A588", strengths=_same(_OPEN, 50, 70)),
    GradeUS(name="A847", strengths=_same(_HSS, 50, 70)),
    GradeUS(name="A913 Gr 65", strengths=_same(("shape or angle",), 65, 80)),
    GradeUS(name="A992", strengths=_same(("shape or angle",), 50, 65)),
    GradeUS(name="A1085", strengths=_same(_HSS, 50, 65)),
)


def grade_names() -> tuple[str, ...]:
    """Return the names of all grades in the table."""
    return tuple(grade.name for grade in GRADES)


def find_grade(name: str) -> GradeUS | None:
    """Return the grade meant by ``A500 Gr B``, ``ASTM A500-B``, ``A572-50``, ``A53``; else None."""
    wanted = _plain(name)
    for grade in GRADES:
        if _plain(grade.name) == wanted:
            return grade
    starting = [grade for grade in GRADES if _plain(grade.name.split(" Gr ")[0]) == wanted]
    return starting[0] if len(starting) == 1 else None


def specification_of(name: str) -> str:
    """Return the ASTM specification that a grade or product names (``A500``), else empty."""
    found = re.search(r"A\s?(\d+)", name.upper())
    return f"A{found.group(1)}" if found else ""


SPECIFICATIONS = frozenset(specification_of(grade.name) for grade in GRADES)
"""Specifications that carry a strength; A6 and the like only carry dimensions."""


def _plain(name: str) -> str:
    word = name.upper().replace("ASTM", "").replace("GRADE", "").replace("GR", "")
    return "".join(character for character in word if character.isalnum())
