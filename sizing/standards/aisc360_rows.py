"""What AISC 360 says of each catalogue row, whatever the member: strength and slender elements."""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np

from sizing.brief.sections import Catalogue
from sizing.standards.aisc360_grades import (
    FORMS,
    KSI,
    SPECIFICATIONS,
    GradeUS,
    specification_of,
)
from sizing.standards.aisc360_options import Options360
from sizing.standards.aisc360_rules import effective_width, round_share
from sizing.standards.conditions import beyond
from sizing.standards.contract import FloatArray
from sizing.standards.steel_rows import not_steel

HSS_WALL = (1.40, 0.20, 1.38)
STIFFENED = (1.49, 0.18, 1.31)
FLANGE = (0.56, 0.22, 1.49)
LEG = (0.45, 0.22, 1.49)
"""λr / √(E/Fy) of Table B4.1a, and c1, c2 of Table E7.1."""

TORSION_LEG = 0.71
ROUND_LIMIT = 0.11
ROUND_END = 0.45
MOST_ELEMENTS = 2


@dataclass(frozen=True, kw_only=True, slots=True)
class Element:
    """A plate element: flat width b and thickness t in m, how many, λr, c1 and c2."""

    name: str
    width: float
    thickness: float
    count: int
    limit: float
    c1: float
    c2: float

    @property
    def ratio(self) -> float:
        """λ = b/t."""
        return self.width / self.thickness

    @property
    def slender(self) -> bool:
        """Whether λ exceeds λr of Table B4.1a."""
        return bool(beyond(np.array(self.ratio), self.limit))


@dataclass(frozen=True, kw_only=True, slots=True)
class Row360:
    """One catalogue row: strength in Pa, its elements, Ae/Ag of E7.2 for round sections.

    ``round_ratio`` is D/t, NaN for other families, ``round_limit`` its λr.
    ``unusable`` and ``left_out`` are reasons, empty where there is none.
    """

    Fy: float
    Fu: float
    origin: str
    elements: tuple[Element, ...]
    round_ratio: float
    round_limit: float
    round_area: float
    unusable: str
    left_out: str

    @property
    def slender(self) -> bool:
        """Whether any element is slender (Table B4.1a)."""
        walls = any(element.slender for element in self.elements)
        return walls or bool(beyond(np.array(self.round_ratio), self.round_limit))


@dataclass(frozen=True, kw_only=True)
class RowArrays360:
    """The rows as arrays: ``Fy``, ``Fu``, ``round_area`` (s,); elements padded to (s, 2)."""

    rows: tuple[Row360, ...]
    Fy: FloatArray
    Fu: FloatArray
    round_area: FloatArray
    width: FloatArray
    thickness: FloatArray
    count: FloatArray
    limit: FloatArray
    c1: FloatArray
    c2: FloatArray

    def effective_area(self, area: FloatArray, Fcr: FloatArray) -> FloatArray:
        """Return Ae in m² (u, s) at the critical stress Fcr (u, s), E7.1 and E7.2."""
        found = area * self.round_area
        for e in range(MOST_ELEMENTS):
            be = effective_width(
                self.width[:, e],
                self.width[:, e] / self.thickness[:, e],
                self.limit[:, e],
                (self.c1[:, e], self.c2[:, e]),
                self.Fy,
                Fcr,
            )
            found = found - self.count[:, e] * (self.width[:, e] - be) * self.thickness[:, e]
        return np.asarray(found)


def row_arrays(catalogue: Catalogue, options: Options360, E: float) -> RowArrays360:
    """Return every row of the catalogue judged under ``options``."""
    rows = tuple(judge_row(catalogue, s, options, E) for s in range(len(catalogue)))

    def padded(name: str, filling: float) -> FloatArray:
        values = np.full((len(rows), MOST_ELEMENTS), filling)
        for s, row in enumerate(rows):
            for e, element in enumerate(row.elements):
                values[s, e] = getattr(element, name)
        return values

    return RowArrays360(
        rows=rows,
        Fy=np.array([row.Fy for row in rows]),
        Fu=np.array([row.Fu for row in rows]),
        round_area=np.array([row.round_area for row in rows]),
        width=padded("width", 1.0),
        thickness=padded("thickness", 1.0),
        count=padded("count", 0.0),
        limit=padded("limit", 1.0),
        c1=padded("c1", 0.0),
        c2=padded("c2", 1.0),
    )


def judge_row(catalogue: Catalogue, section: int, options: Options360, E: float) -> Row360:
    """Return strength and elements of one catalogue row, and why it cannot be used, if so."""
    family = catalogue.family[section]
    strength = _strength(family, catalogue.product[section], options)
    if isinstance(strength, str):
        return _barred(1.0, 1.0, "", unusable=strength)
    Fy, Fu, origin = strength
    elements = _elements(catalogue, section, math.sqrt(E / Fy))
    if isinstance(elements, str):
        return _barred(Fy, Fu, origin, left_out=elements)
    ratio = (
        float(catalogue.depth[section] / catalogue.thickness[section])
        if family == "CHS"
        else math.nan
    )
    row = Row360(
        Fy=Fy,
        Fu=Fu,
        origin=origin,
        elements=elements,
        round_ratio=ratio,
        round_limit=ROUND_LIMIT * E / Fy,
        round_area=1.0 if math.isnan(ratio) else round_share(E, Fy, ratio),
        unusable="",
        left_out="",
    )
    reason = _why_left_out(catalogue, section, row, options, E / Fy)
    return _barred(Fy, Fu, origin, left_out=reason, shown=row) if reason else row


def _strength(family: str, product: str, options: Options360) -> tuple[float, float, str] | str:
    """Return Fy and Fu in Pa with their origin, or why the row has none."""
    if timber := not_steel(family, product):
        return timber
    if options.Fy is not None and options.Fu is not None:
        return options.Fy, options.Fu, "Fy and Fu as set"
    grade = options.grade
    if grade is None:
        return "no grade is given"
    if other := _other_product(product, grade):
        return other
    form = FORMS.get(family, "shape or angle")
    if form not in grade.strengths:
        return f"grade {grade.name} is not made as {form}; set Fy and Fu to use it"
    Fy, Fu = (value * KSI for value in grade.strengths[form])
    own = [name for name in ("Fy", "Fu") if getattr(options, name) is not None]
    origin = f"{grade.name}, {form}" + "".join(f"; {name} as set" for name in own)
    return options.Fy or Fy, options.Fu or Fu, origin


def _other_product(product: str, grade: GradeUS) -> str:
    """Return why the row's product is not of the grade: pipe to A53 has no A500 strength."""
    if "EN 10" in product.upper():
        return f"{product} is not a product of the ASTM grade table; set Fy and Fu"
    named = specification_of(product)
    if named in SPECIFICATIONS and named != specification_of(grade.name):
        return f"the catalogue row is {product}, the grade {grade.name}; set Fy and Fu to use it"
    return ""


def _elements(catalogue: Catalogue, section: int, root: float) -> tuple[Element, ...] | str:
    """Return the plate elements of a row (B4.1), with limits for √(E/Fy) = ``root``."""
    family = catalogue.family[section]
    depth, width, t, flange, root_radius = (
        float(values[section])
        for values in (
            catalogue.depth,
            catalogue.width,
            catalogue.thickness,
            catalogue.flange,
            catalogue.root_radius,
        )
    )
    needed = {
        "rectangle": (),
        "CHS": (depth, t),
        "SHS": (depth, width, t),
        "RHS": (depth, width, t),
        "angle": (depth, width, t),
        "I": (depth, width, t, flange),
    }
    if family not in needed:
        return f"Table B4.1a limits for a section of family {family} are not covered"
    if any(math.isnan(value) for value in needed[family]):
        return "the catalogue gives no wall thickness or outer dimension, so no wall slenderness"
    parts: tuple[tuple[str, float, float, int, tuple[float, float, float]], ...] = ()
    if family in ("SHS", "RHS"):
        parts = (
            ("(h − 3t)/t", depth - 3.0 * t, t, 2, HSS_WALL),
            ("(b − 3t)/t", width - 3.0 * t, t, 2, HSS_WALL),
        )
    elif family == "angle":
        parts = (("leg b/t", depth, t, 1, LEG), ("second leg b/t", width, t, 1, LEG))
    elif family == "I":
        fillet = 0.0 if math.isnan(root_radius) else root_radius
        parts = (
            ("h/tw", depth - 2.0 * (flange + fillet), t, 1, STIFFENED),
            ("bf/(2 tf)", 0.5 * width, flange, 4, FLANGE),
        )
    return tuple(
        Element(
            name=name,
            width=b,
            thickness=thickness,
            count=count,
            limit=kind[0] * root,
            c1=kind[1],
            c2=kind[2],
        )
        for name, b, thickness, count, kind in parts
        if b > 0.0
    )


def _why_left_out(
    catalogue: Catalogue, section: int, row: Row360, options: Options360, E_over_Fy: float
) -> str:
    inertias = (catalogue.i_major[section], catalogue.i_minor[section], catalogue.i_least[section])
    if any(math.isnan(value) for value in inertias):
        return "the catalogue gives no second moment of area"
    ratio = np.array(row.round_ratio)
    if beyond(ratio, ROUND_END * E_over_Fy):
        end = ROUND_END * E_over_Fy
        return f"D/t = {row.round_ratio:.1f} exceeds 0.45 E/Fy = {end:.1f}, where E7.2 ends"
    if catalogue.family[section] == "angle":
        leg = max(element.ratio for element in row.elements)
        limit = TORSION_LEG * math.sqrt(E_over_Fy)
        if beyond(np.array(leg), limit):
            return (
                f"b/t = {leg:.1f} exceeds 0.71 √(E/Fy) = {limit:.1f}: flexural-torsional buckling"
                " (E4) governs, which is not covered"
            )
    if row.slender and options.slender_elements == "leave out":
        return slender_text(row) + '; set slender_elements = "E7" to use it'
    return ""


def slender_text(row: Row360) -> str:
    """Return which element is slender, empty when none is."""
    if beyond(np.array(row.round_ratio), row.round_limit):
        return (
            f"slender wall: D/t = {row.round_ratio:.1f} exceeds 0.11 E/Fy = {row.round_limit:.1f}"
            " (Table B4.1a)"
        )
    for element in row.elements:
        if element.slender:
            return (
                f"slender element: {element.name} = {element.ratio:.1f} exceeds"
                f" {element.limit:.1f} (Table B4.1a)"
            )
    return ""


def _barred(
    Fy: float,
    Fu: float,
    origin: str,
    *,
    unusable: str = "",
    left_out: str = "",
    shown: Row360 | None = None,
) -> Row360:
    return Row360(
        Fy=Fy,
        Fu=Fu,
        origin=origin,
        elements=shown.elements if shown else (),
        round_ratio=shown.round_ratio if shown else math.nan,
        round_limit=shown.round_limit if shown else math.inf,
        round_area=shown.round_area if shown else 1.0,
        unusable=unusable,
        left_out=left_out,
    )
