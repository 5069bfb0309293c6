"""Clause texts of EN 1993-1-1 as they appear in tables and schedules."""

from __future__ import annotations

YIELD, RUPTURE, ONE_LEG, SQUASH, IN, OUT, LEAST, TORSION, NOT_CHECKABLE, LIMIT = range(10)
BUCKLING = (IN, OUT, LEAST, TORSION)
CLAUSES = (
    "6.2.3(2)a yield of the gross section",
    "6.2.3(2)b rupture of the net section",
    "EN 1993-1-8, 3.10.3 angle connected by one leg",
    "6.2.4 cross-section in compression",
    "6.3.1 buckling in plane",
    "6.3.1 buckling out of plane",
    "6.3.1 buckling about v-v",
    "6.3.1.4 torsional-flexural buckling",
    "not checkable",
    "slenderness limit",
)
