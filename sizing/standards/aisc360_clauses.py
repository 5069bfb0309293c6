"""Clause texts of AISC 360 as they appear in tables and schedules."""

from __future__ import annotations

YIELD, RUPTURE, IN, OUT, LEAST, SINGLE, NOT_CHECKABLE, LIMIT = range(8)
CLAUSES = (
    "D2(a) yielding of the gross section",
    "D2(b) rupture of the net section",
    "E3 buckling in plane",
    "E3 buckling out of plane",
    "E3 buckling about the least axis",
    "E5 single angle connected by one leg",
    "not checkable",
    "slenderness limit",
)
E7_OFFSET = len(CLAUSES)
CLAUSES_WITH_E7 = (*CLAUSES, *(f"E7 slender elements, {text}" for text in CLAUSES))
"""Index + E7_OFFSET is the clause with slender elements."""
