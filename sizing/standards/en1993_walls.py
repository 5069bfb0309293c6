"""Local buckling: class 3 limits of EN 1993-1-1 Table 5.2, effective areas of EN 1993-1-5."""

from __future__ import annotations

import math
from dataclasses import dataclass

from sizing.standards.conditions import LIMIT_ROUNDING

INTERNAL_LIMIT = 42.0
OUTSTAND_LIMIT = 14.0
LEG_LIMIT = 15.0
LEGS_LIMIT = 11.5
CIRCULAR_LIMIT = 90.0
REFERENCE_YIELD = 235e6
K_INTERNAL = 4.0
K_OUTSTAND = 0.43


@dataclass(frozen=True, kw_only=True, slots=True)
class Dimensions:
    """Dimensions of one catalogue row in m, area in m²; NaN where not given."""

    family: str
    area: float
    depth: float
    width: float
    thickness: float
    flange: float
    root_radius: float


@dataclass(frozen=True, kw_only=True, slots=True)
class Wall:
    """One part in uniform compression: its slenderness and the class 3 limit it must meet.

    ``width`` and ``thickness`` in m and ``count`` give its share of the effective area;
    ``k_sigma`` is 0 for a part that has none of its own.
    """

    name: str
    ratio: float
    limit: float
    limit_text: str
    width: float = 0.0
    thickness: float = 0.0
    count: int = 0
    k_sigma: float = 0.0

    @property
    def slender(self) -> bool:
        """Whether the part is class 4."""
        return self.ratio > self.limit * (1.0 + LIMIT_ROUNDING)


def epsilon(fy: float) -> float:
    """Return ε = √(235 N/mm² / fy), Table 5.2."""
    return math.sqrt(REFERENCE_YIELD / fy)


def walls_of(size: Dimensions, fy: float) -> tuple[Wall, ...] | str:
    """Return the parts to be classified, or the reason why the catalogue row does not do.

    EN 1993-1-1:2005 Table 5.2, uniform compression: internal parts c/t ≤ 42ε (hollow sections
    c = b − 3t), outstand flanges c/t ≤ 14ε, angles h/t ≤ 15ε and (b + h)/(2t) ≤ 11.5ε, tubes
    d/t ≤ 90ε². A missing root radius counts as none, which lengthens c.
    """
    if size.family == "rectangle":
        return ()
    rules = {"CHS": _tube, "SHS": _hollow, "RHS": _hollow, "angle": _angle, "I": _i_section}
    if size.family not in rules:
        return f"Table 5.2 does not cover a section of family {size.family}"
    needed = [size.depth, size.thickness]
    if size.family != "CHS":
        needed.append(size.width)
    if size.family == "I":
        needed.append(size.flange)
    if any(math.isnan(value) for value in needed):
        return "the catalogue gives no wall thickness or outer dimension, so no class"
    return rules[size.family](size, epsilon(fy))


def _tube(size: Dimensions, eps: float) -> tuple[Wall, ...]:
    return (
        Wall(
            name="d/t",
            ratio=size.depth / size.thickness,
            limit=CIRCULAR_LIMIT * eps**2,
            limit_text="90ε²",
        ),
    )


def _hollow(size: Dimensions, eps: float) -> tuple[Wall, ...]:
    t = size.thickness
    return tuple(
        Wall(
            name=name,
            ratio=side / t - 3.0,
            limit=INTERNAL_LIMIT * eps,
            limit_text="42ε",
            width=max(side - 3.0 * t, 0.0),
            thickness=t,
            count=2,
            k_sigma=K_INTERNAL,
        )
        for name, side in (("(h − 3t)/t", size.depth), ("(b − 3t)/t", size.width))
    )


def _angle(size: Dimensions, eps: float) -> tuple[Wall, ...]:
    longer, t = max(size.depth, size.width), size.thickness
    return (
        Wall(
            name="h/t",
            ratio=longer / t,
            limit=LEG_LIMIT * eps,
            limit_text="15ε",
            width=longer,
            thickness=t,
            k_sigma=K_OUTSTAND,
        ),
        Wall(
            name="(b + h)/(2t)",
            ratio=(size.depth + size.width) / (2.0 * t),
            limit=LEGS_LIMIT * eps,
            limit_text="11.5ε",
        ),
    )


def _i_section(size: Dimensions, eps: float) -> tuple[Wall, ...]:
    root = 0.0 if math.isnan(size.root_radius) else size.root_radius
    web = size.depth - 2.0 * (size.flange + root)
    outstand = (size.width - size.thickness) / 2.0 - root
    return (
        Wall(
            name="web c/t",
            ratio=web / size.thickness,
            limit=INTERNAL_LIMIT * eps,
            limit_text="42ε",
            width=web,
            thickness=size.thickness,
            count=1,
            k_sigma=K_INTERNAL,
        ),
        Wall(
            name="flange c/t",
            ratio=outstand / size.flange,
            limit=OUTSTAND_LIMIT * eps,
            limit_text="14ε",
            width=outstand,
            thickness=size.flange,
            count=4,
            k_sigma=K_OUTSTAND,
        ),
    )


def class_4_reason(walls: tuple[Wall, ...]) -> str:
    """Return which part makes the section class 4, empty when none does."""
    for wall in walls:
        if wall.slender:
            return (
                f"class 4: {wall.name} = {wall.ratio:.2f} exceeds {wall.limit_text} ="
                f" {wall.limit:.2f} (Table 5.2)"
            )
    return ""


def plate_reduction(ratio: float, fy: float, k_sigma: float) -> float:
    """Return ρ of EN 1993-1-5, 4.4(2) for uniform compression (ψ = 1).

    λ̄p = (b̄/t) / (28.4 ε √kσ).  Internal parts (kσ = 4): ρ = (λ̄p − 0.22)/λ̄p² beyond 0.673;
    outstands (kσ = 0.43): ρ = (λ̄p − 0.188)/λ̄p² beyond 0.748.
    """
    slenderness = ratio / (28.4 * epsilon(fy) * math.sqrt(k_sigma))
    start, offset = (0.673, 0.22) if k_sigma == K_INTERNAL else (0.748, 0.188)
    if slenderness <= start:
        return 1.0
    return min(1.0, (slenderness - offset) / slenderness**2)


def effective_area(size: Dimensions, walls: tuple[Wall, ...], fy: float) -> float:
    """Return A_eff in m² of a class 4 section in uniform compression, EN 1993-1-5, 4.4.

    Hollow and I sections lose (1 − ρ) of each flat part; both legs of an angle are reduced by
    the ρ of the longer leg, as the table of b̄ in 4.4(2) has it.
    """
    if size.family == "angle":
        return size.area * plate_reduction(walls[0].ratio, fy, walls[0].k_sigma)
    lost = sum(
        wall.count
        * (1.0 - plate_reduction(wall.ratio, fy, wall.k_sigma))
        * wall.width
        * wall.thickness
        for wall in walls
    )
    return size.area - lost
