"""What EN 1993-1-1 says of each catalogue row, whatever the member: strength, class, curves."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np

from sizing.brief.sections import Catalogue
from sizing.standards.contract import FloatArray
from sizing.standards.en1993_curves import ALPHA, HOLLOW, Curve, Finish, buckling_curves
from sizing.standards.en1993_grades import Product, Strength, strength_of
from sizing.standards.en1993_options import EFFECTIVE_WIDTH, Options1993
from sizing.standards.en1993_walls import (
    Dimensions,
    Wall,
    class_4_reason,
    effective_area,
    walls_of,
)
from sizing.standards.steel_rows import not_steel

UNKNOWN_FINISH = (
    "the catalogue does not say whether the hollow section is hot finished (EN 10210) or cold "
    "formed (EN 10219); name the product, or set hollow_sections"
)


@dataclass(frozen=True, kw_only=True, slots=True)
class Row:
    """One catalogue row. ``unusable`` and ``left_out`` are reasons, empty where there is none.

    ``area`` is the area that counts in compression (A, or A_eff of a class 4 section), in m².
    """

    strength: Strength
    walls: tuple[Wall, ...]
    area: float
    curves: tuple[Curve, Curve]
    class_4: str
    unusable: str
    left_out: str


@dataclass(frozen=True, kw_only=True)
class RowArrays:
    """The rows as arrays (s,): ``fy``, ``fu`` in Pa, ``area`` in m², imperfection factors."""

    rows: tuple[Row, ...]
    fy: FloatArray
    fu: FloatArray
    area: FloatArray
    alpha_major: FloatArray
    alpha_minor: FloatArray


def row_arrays(catalogue: Catalogue, options: Options1993) -> RowArrays:
    """Return every row of the catalogue judged under ``options``."""
    rows = [judge_row(catalogue, s, options) for s in range(len(catalogue))]

    def array(values: Sequence[float]) -> FloatArray:
        return np.array(values, dtype=float)

    return RowArrays(
        rows=tuple(rows),
        fy=array([row.strength.fy for row in rows]),
        fu=array([row.strength.fu for row in rows]),
        area=array([row.area for row in rows]),
        alpha_major=array([ALPHA[row.curves[0]] for row in rows]),
        alpha_minor=array([ALPHA[row.curves[1]] for row in rows]),
    )


def judge_row(catalogue: Catalogue, section: int, options: Options1993) -> Row:
    """Return strength, class, effective area and curves of one catalogue row."""
    size = _dimensions(catalogue, section)
    finish = finish_of(size.family, catalogue.product[section], options.hollow_sections)
    strength = _strength(size, catalogue.product[section], finish, options)
    if isinstance(strength, str):
        return _row(Strength(fy=1.0, fu=1.0, origin=""), size.area, unusable=strength)
    if options.leg_bolts is not None and size.family == "angle" and math.isnan(size.thickness):
        return _row(strength, size.area, unusable="the catalogue gives no thickness of the leg")
    if finish is None:
        return _row(strength, size.area, left_out=UNKNOWN_FINISH)
    curves = buckling_curves(
        size.family,
        finish,
        depth=size.depth,
        width=size.width,
        flange=size.flange,
        s460=options.grade is not None and options.grade.number == 460,
    )
    if isinstance(curves, str):
        return _row(strength, size.area, left_out=curves)
    walls = walls_of(size, strength.fy)
    if isinstance(walls, str):
        return _row(strength, size.area, left_out=walls)
    class_4 = class_4_reason(walls)
    area, left_out = size.area, ""
    if class_4 and size.family == "CHS":
        left_out = f"{class_4}; circular sections of class 4 need EN 1993-1-6"
    elif class_4 and options.class_4 == EFFECTIVE_WIDTH:
        area = effective_area(size, walls, strength.fy)
    elif class_4:
        left_out = f'{class_4}; set class_4 = "effective width" to use it'
    if not left_out and _no_inertia(catalogue, section):
        left_out = "the catalogue gives no second moment of area"
    return Row(
        strength=strength,
        walls=walls,
        area=area,
        curves=curves,
        class_4=class_4,
        unusable="",
        left_out=left_out,
    )


def finish_of(family: str, product: str, hollow_sections: str) -> Finish | None:
    """Return how the section was made; None for a hollow section of unknown make.

    EN 10210 is hot finished, EN 10219 cold formed; ASTM A500, A1085 and A53 tubes are formed
    cold and welded, ASTM A501 is hot formed.
    """
    if family not in HOLLOW:
        return "welded" if "weld" in product.casefold() else "rolled"
    if hollow_sections == "hot finished":
        return "hot finished"
    if hollow_sections == "cold formed":
        return "cold formed"
    words = product.upper().replace(" ", "")
    if "10210" in words or "A501" in words:
        return "hot finished"
    if any(mark in words for mark in ("10219", "A500", "A1085", "A53")):
        return "cold formed"
    return None


def product_of(family: str, finish: Finish | None) -> Product | None:
    """Return which rows of the grade tables serve; None for a hollow section of unknown make."""
    if family not in HOLLOW:
        return "EN 10025"
    if finish is None:
        return None
    return "EN 10210-1" if finish == "hot finished" else "EN 10219-1"


def thickest_part(size: Dimensions) -> float:
    """Return the nominal thickness in m that sets the strength: flange or wall, whichever is more.

    A solid section counts with its smaller side. NaN where the catalogue gives none.
    """
    if size.family == "rectangle":
        return min(size.depth, size.width)
    parts = [t for t in (size.thickness, size.flange) if not math.isnan(t)]
    return max(parts) if parts else math.nan


def _strength(
    size: Dimensions, product: str, finish: Finish | None, options: Options1993
) -> Strength | str:
    """Return the strength of the row, as set or from the table, or why there is none."""
    if timber := not_steel(size.family, product):
        return timber
    if options.fy is not None and options.fu is not None:
        return Strength(fy=options.fy, fu=options.fu, origin="fy and fu as set")
    found = _table_strength(size, product, finish, options)
    if isinstance(found, str):
        return found
    own = [name for name in ("fy", "fu") if getattr(options, name) is not None]
    return Strength(
        fy=found.fy if options.fy is None else options.fy,
        fu=found.fu if options.fu is None else options.fu,
        origin=found.origin + "".join(f"; {name} as set" for name in own),
    )


def _table_strength(
    size: Dimensions, product: str, finish: Finish | None, options: Options1993
) -> Strength | str:
    if "ASTM" in product.upper():
        return f"{product} is not a product of the EN grade tables; set fy and fu"
    rows = product_of(size.family, finish)
    if rows is None:
        return UNKNOWN_FINISH
    thickness = thickest_part(size)
    if math.isnan(thickness):
        return "the catalogue gives no thickness, which the strength of the grade depends on"
    if options.grade is None:
        return "no grade is given"
    return strength_of(options.grade, rows, thickness, options.grade_table)


def _row(strength: Strength, area: float, *, unusable: str = "", left_out: str = "") -> Row:
    return Row(
        strength=strength,
        walls=(),
        area=area,
        curves=("d", "d"),
        class_4="",
        unusable=unusable,
        left_out=left_out,
    )


def _no_inertia(catalogue: Catalogue, section: int) -> bool:
    values = (catalogue.i_major[section], catalogue.i_minor[section], catalogue.i_least[section])
    return any(math.isnan(value) for value in values)


def _dimensions(catalogue: Catalogue, section: int) -> Dimensions:
    return Dimensions(
        family=catalogue.family[section],
        area=float(catalogue.area[section]),
        depth=float(catalogue.depth[section]),
        width=float(catalogue.width[section]),
        thickness=float(catalogue.thickness[section]),
        flange=float(catalogue.flange[section]),
        root_radius=float(catalogue.root_radius[section]),
    )
