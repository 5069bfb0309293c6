"""Which sizes each product and grade of NDS is made for; others are left out with the reason."""

from __future__ import annotations

from sizing.brief.sections import Catalogue
from sizing.standards.nds_grades import NDSGrade
from sizing.standards.nds_strength import (
    CONSTRUCTION_WIDEST,
    INCH,
    SIZE_TOLERANCE,
    STUD_WIDEST,
)
from sizing.standards.timber_sections import (
    Exclusions,
    is_sawn,
    product_names,
    smaller_and_larger,
)

THINNEST, THICKEST = 1.5 * INCH, 4.0 * INCH
"""Dimension lumber is 2 to 4 in thick: 1.5 in dressed to 4 in rough (4.1.3.2)."""
POST_LEAST, POST_SPREAD = 4.5 * INCH, 2.0 * INCH
"""Posts and timbers are 5 x 5 in and larger, not more than 2 in wider than thick (4.1.3.4)."""


def exclude_sizes(grade: NDSGrade, catalogue: Catalogue, excluded: Exclusions) -> None:
    """Leave out the sections for which the grade has no reference values."""
    smaller, larger = smaller_and_larger(catalogue)
    glulam, sawn = product_names(catalogue, "14080"), is_sawn(catalogue)
    if grade.product == "glulam":
        excluded.exclude(sawn & ~glulam, "the catalogue row is sawn lumber, the grade is glulam")
    else:
        excluded.exclude(glulam & ~sawn, "the catalogue row is glulam, the grade is lumber")
    if grade.product in ("dimension lumber", "sized lumber"):
        thin = smaller < THINNEST - SIZE_TOLERANCE
        excluded.exclude(thin, "thinner than 2 in nominal: no dimension lumber")
        thick = smaller > THICKEST + SIZE_TOLERANCE
        excluded.exclude(thick, "thicker than 4 in: no dimension lumber, take posts and timbers")
    if grade.product == "posts and timbers":
        small = smaller < POST_LEAST - SIZE_TOLERANCE
        excluded.exclude(small, "smaller than 5 x 5 in: no posts and timbers")
        wide = larger - smaller > POST_SPREAD + SIZE_TOLERANCE
        excluded.exclude(wide, "more than 2 in wider than thick: a beam grade, not a post")
    if grade.size_rule == "stud":
        wide = larger > STUD_WIDEST + SIZE_TOLERANCE
        excluded.exclude(wide, "Stud grade wider than 6 in takes No.3 values: choose No.3")
    if grade.size_rule == "construction":
        wide = larger > CONSTRUCTION_WIDEST + SIZE_TOLERANCE
        excluded.exclude(wide, "Construction grade is made to 4 in wide only")
