"""The formulas that the rows of a family may follow, from the dimensions that the row states."""

from __future__ import annotations

from collections.abc import Callable

from sizing.brief import section_geometry as geometry
from sizing.brief.catalogue_rows import Entry

SAME_AREA = 0.005
"""Relative deviation within which a row has the area of a formula: rounding to three figures."""


def has_thin_us_wall(entry: Entry) -> bool:
    """ASTM A500 and A53 tables print the mass of the nominal wall, the area of 0.93 of it."""
    product = entry.product.upper().replace(" ", "")
    if product:
        return product.startswith(("ASTMA500", "ASTMA53", "A500", "A53"))
    return entry.designation.upper().startswith(("HSS", "PIPE"))


Shape = Callable[[Entry], list[geometry.SectionProperties]]


def _hollow(entry: Entry) -> list[geometry.SectionProperties]:
    h, b, t = _dimensions(entry)
    sharp = geometry.rectangular_hollow(
        depth=h, width=b, wall=t, outside_radius=0.0, inside_radius=0.0
    )
    hot = geometry.hot_finished_hollow(depth=h, width=b, wall=t)
    cold = geometry.cold_formed_hollow(depth=h, width=b, wall=t)
    if entry.product.upper().startswith("EN 10210"):
        return [hot]
    if entry.product.upper().startswith("EN 10219"):
        return [cold]
    found = [sharp, hot, cold]
    if has_thin_us_wall(entry):
        found.append(geometry.us_square_hollow(depth=h, width=b, nominal_wall=t))
    return found


def _tube(entry: Entry) -> list[geometry.SectionProperties]:
    d, _, t = _dimensions(entry)
    found = [geometry.circular_hollow(diameter=d, wall=t)]
    if has_thin_us_wall(entry):
        found.append(geometry.us_pipe(diameter=d, nominal_wall=t))
    return found


def _angle(entry: Entry) -> list[geometry.SectionProperties]:
    a, b, t = _dimensions(entry)
    root = entry.value("root_radius")
    radii = [0.0, 1.6 * t] if root is None else [root]
    return [
        geometry.angle(leg=a, other_leg=b, thickness=t, root_radius=r, toe_radius=r / 2.0)
        for r in radii
    ]


def _i_section(entry: Entry) -> list[geometry.SectionProperties]:
    h, b, t = _dimensions(entry)
    flange = entry.numbers["flange"].value
    root = entry.value("root_radius")
    radii = [0.0, 0.15 * h] if root is None else [root]
    return [
        geometry.i_section(depth=h, width=b, web=t, flange=flange, root_radius=r) for r in radii
    ]


def _rectangle(entry: Entry) -> list[geometry.SectionProperties]:
    depth, width = entry.numbers["depth"].value, entry.numbers["width"].value
    plies = entry.value("plies") or 1.0
    apart = geometry.built_up_plies(depth=depth, ply=width / plies, plies=round(plies))
    return [apart, geometry.rectangle(depth=depth, width=width)]


def _dimensions(entry: Entry) -> tuple[float, float, float]:
    return (
        entry.numbers["depth"].value,
        entry.numbers["width"].value,
        entry.numbers["thickness"].value,
    )


SHAPES: dict[str, tuple[tuple[str, ...], Shape]] = {
    "SHS": (("depth", "width", "thickness"), _hollow),
    "RHS": (("depth", "width", "thickness"), _hollow),
    "CHS": (("depth", "width", "thickness"), _tube),
    "angle": (("depth", "width", "thickness"), _angle),
    "I": (("depth", "width", "thickness", "flange"), _i_section),
    "rectangle": (("depth", "width"), _rectangle),
}
"""Dimensions that each family's formula needs, and the formulas that its tables may follow."""


def has_dimensions(entry: Entry) -> bool:
    """Say whether the row states what the formula of its family needs."""
    needed = SHAPES[entry.family][0] if entry.family in SHAPES else ()
    return bool(needed) and all(key in entry.numbers for key in needed)


def walls_fit(entry: Entry) -> bool:
    """Say whether the stated walls leave room inside, so that a formula means anything."""
    t = entry.value("thickness")
    if t is None:
        return True
    depth, width = entry.numbers["depth"].value, entry.numbers["width"].value
    room = min(depth, width) / (2.0 if entry.family in {"SHS", "RHS", "CHS"} else 1.0)
    flange = entry.value("flange") if entry.family == "I" else None
    return t < room and (flange is None or 2.0 * flange < depth)


def formed_by(entry: Entry) -> list[geometry.SectionProperties]:
    """Return the properties by each formula that the row may follow, the likeliest first.

    A formula whose corner radii do not fit into so thick a section is left out; the list is
    empty when none fits.
    """
    found = SHAPES[entry.family][1](entry)
    return [each for each in found if min(each.area, each.i_least) > 0.0]


def other_make(entry: Entry, area: float) -> str:
    """Say whether a hollow section of one EN product has the area of the other one."""
    if entry.family not in {"SHS", "RHS"}:
        return ""
    h, b, t = _dimensions(entry)
    product = entry.product.upper()
    if product.startswith("EN 10210"):
        other, name = geometry.cold_formed_hollow(depth=h, width=b, wall=t), "cold formed"
    elif product.startswith("EN 10219"):
        other, name = geometry.hot_finished_hollow(depth=h, width=b, wall=t), "hot finished"
    else:
        return ""
    return name if abs(area / other.area - 1.0) <= SAME_AREA + entry.rounding("area") else ""
