"""Do the numbers of a row agree with one another? Unit slips and typing errors come to light.

Published tables print three figures, which alone makes properties differ by up to 0.5 % (EN
10210-2, EN 10219-2 and EN 10056-1 tables against the formulas of their Annex A: 0.44 % at most;
tubes of ASTM A53: 3.3 %). So every comparison first grants the rounding of the printed figures,
keeps quiet up to a small deviation, remarks on a larger one and refuses what no table explains.
"""

from __future__ import annotations

import math
from collections.abc import Sequence

from sizing.brief import section_geometry as geometry
from sizing.brief.catalogue_causes import (
    AREA_CAUSES,
    INERTIA_CAUSES,
    LENGTH_CAUSES,
    likely_cause,
)
from sizing.brief.catalogue_deviations import QUIET, REFUSED, beyond, outside, rows_text
from sizing.brief.catalogue_masses import check_masses
from sizing.brief.catalogue_rows import Checked, Entry, Findings, place_of
from sizing.brief.catalogue_shapes import formed_by, has_dimensions, other_make, walls_fit

SHAPE_REFUSED = 0.06
"""Relative deviation of the area from the shape's own formula that is an error.

Corner radii, which tables leave out, move the area by up to 3 % outside the range of the
formulas tried here (US tubes with three-wall corners).
"""

INERTIA_REFUSED = 0.10
"""The same for second moments, which feel a corner about twice as much."""

LEAST_POLAR = 1.0 / (2.0 * math.pi)
"""Least (I major + I minor)/A² of any shape: a solid disc has it; no shape has less."""

GREATEST_POLAR = 50.0
"""Greatest (I major + I minor)/A² met: a tube of D/t = 100 has 8."""


def check_rows(rows: Sequence[Checked], density: float | str | None, findings: Findings) -> None:
    """Hold every row against itself; problems and remarks go to ``findings``."""
    suspects = check_masses(rows, density, findings)
    deviations: dict[str, list[tuple[float, Entry]]] = {}
    for row in rows:
        entry = row.entry
        if not _check_order(row, findings):
            continue
        for axis in ("major", "minor", "least"):
            _check_radius(row, axis, findings, deviations)
        if entry.line in suspects:
            continue
        good = _check_shape(row, findings, deviations) and _check_polar(row, findings)
        if good:
            _check_extent(row, findings)
    for what, found in deviations.items():
        greatest, entry = max(found, key=lambda item: abs(item[0]))
        findings.remarks.append(
            f"{what} in {rows_text(len(found))}; greatest {100 * greatest:+.1f} % in "
            f"{place_of(entry.line, entry.designation)}."
        )


def _check_order(row: Checked, findings: Findings) -> bool:
    """Require minor <= major and least <= minor, within rounding."""
    entry, good = row.entry, True
    pairs = (
        ("minor", row.i_minor, "major", row.i_major),
        ("least", row.i_least, "minor", row.i_minor),
    )
    for small, i_small, great, i_great in pairs:
        rounding = _axis_rounding(entry, small) + _axis_rounding(entry, great)
        if i_small <= i_great * (1.0 + QUIET / 2.0 + rounding):
            continue
        good = False
        key = _axis_key(entry, small)
        findings.in_row(
            entry,
            key,
            found=f"a {small} second moment of {i_small * 1e8:.4g} cm4, greater than the {great} "
            f"one of {i_great * 1e8:.4g} cm4",
            expected=f"{small} not above {great}",
            fix="Swap the columns, or name them major and minor if the axis letters mean otherwise."
            if small == "minor"
            else "The least axis of an angle is its v-v axis, not u-u.",
            kind="order",
        )
    return good


def _axis_key(entry: Entry, axis: str) -> str:
    """Return the key under which the row states its second moment about an axis."""
    for key in (f"I {axis}", f"i {axis}", "I", "i"):
        if key in entry.numbers:
            return key
    return f"I {axis}"


def _own_keys(axis: str) -> set[str]:
    """Return the keys that state a second moment about this axis and no other."""
    return {f"I {axis}", f"i {axis}"} | ({"I", "i"} if axis == "major" else set())


def _axis_rounding(entry: Entry, axis: str) -> float:
    key = _axis_key(entry, axis)
    if key not in entry.numbers:
        return 0.0
    rounding = entry.rounding(key)
    return 2.0 * rounding + entry.rounding("area") if key.startswith("i") else rounding


def _check_radius(
    row: Checked, axis: str, findings: Findings, deviations: dict[str, list[tuple[float, Entry]]]
) -> None:
    """Compare a stated radius of gyration with sqrt(I/A) where both are given."""
    entry = row.entry
    i_key, r_key = _stated(entry, "I", axis), _stated(entry, "i", axis)
    if i_key is None or r_key is None or (axis != "major" and r_key == "i"):
        return
    stated = entry.numbers[r_key].value
    formed = math.sqrt(entry.numbers[i_key].value / row.area)
    rounding = entry.rounding(r_key) + (entry.rounding(i_key) + entry.rounding("area")) / 2.0
    deviation = beyond(stated / formed - 1.0, rounding)
    if abs(deviation) <= QUIET:
        return
    if abs(deviation) <= REFUSED:
        name = "Radius of gyration differs from sqrt(I/A) by more than 1 % beyond rounding"
        deviations.setdefault(name, []).append((deviation, entry))
        return
    cause = likely_cause(stated / formed, LENGTH_CAUSES)
    by_inertia = likely_cause((formed / stated) ** 2, INERTIA_CAUSES)
    by_area = likely_cause((stated / formed) ** 2, AREA_CAUSES)
    advice = "Compare i, I and A with the printed table."
    if by_area and "decimal" not in by_area and entry.value("mass") is None:
        advice = f"The area looks like {by_area}."
    elif by_inertia and ("decimal" not in by_inertia or not cause):
        advice = f"The second moment looks like {by_inertia}."
    elif cause:
        advice = f"The radius looks like {cause}."
    findings.in_row(
        entry,
        r_key,
        found=f"{stated * 1e2:.4g} cm",
        expected=f"about {formed * 1e2:.4g} cm, the square root of I/A",
        fix=advice,
        kind="radius",
    )


def _stated(entry: Entry, symbol: str, axis: str) -> str | None:
    for key in (f"{symbol} {axis}", symbol):
        if key in entry.numbers and not (axis == "least" and key == symbol):
            return key
    return None


def _check_extent(row: Checked, findings: Findings) -> None:
    """No radius of gyration exceeds half the dimension across its axis."""
    entry = row.entry
    depth, width = entry.value("depth"), entry.value("width")
    if entry.family == "angle" or depth is None:
        return
    for extent, axis, inertia in ((depth, "major", row.i_major), (width, "minor", row.i_minor)):
        if extent is None or math.sqrt(inertia / row.area) <= 0.5 * extent * (1.0 + QUIET):
            continue
        radius = math.sqrt(inertia / row.area)
        key = "depth" if axis == "major" else "width"
        swapped = width is not None and axis == "major" and radius <= 0.5 * width
        findings.in_row(
            entry,
            key,
            found=f"{extent * 1e3:.4g} mm, with a radius of gyration about the {axis} axis of "
            f"{radius * 1e3:.4g} mm",
            expected=f"a radius of at most half the {key}",
            fix="Depth and width look swapped: depth is the dimension across the major axis."
            if swapped
            else "Compare the units of this column, of the area and of the second moment.",
            kind="extent",
        )
        return


def _check_polar(row: Checked, findings: Findings) -> bool:
    """(I major + I minor)/A² of any shape is at least that of a disc, 1/(2π)."""
    plies = row.entry.value("plies") or 1.0  # boards that slip count one by one
    polar = plies * (row.i_major + row.i_minor) / row.area**2
    if LEAST_POLAR * (1.0 - REFUSED) <= polar <= GREATEST_POLAR:
        return True
    key = _axis_key(row.entry, "major")
    small = polar < LEAST_POLAR
    findings.in_row(
        row.entry,
        key,
        found=f"a second moment of {row.i_major * 1e8:.4g} cm4 with an area of "
        f"{row.area * 1e4:.4g} cm2",
        expected="a second moment that this area can have (a solid disc has the least, "
        f"{row.area**2 / (4.0 * math.pi) * 1e8:.4g} cm4)"
        if small
        else "a second moment that this area can have (a tube of D/t = 100 has (I + I)/A2 of 8)",
        fix="The second moment looks like cm4 given as mm4, or the area like mm2 given as cm2."
        if small
        else "The second moment looks like mm4 given as cm4, or the area like cm2 given as mm2.",
        kind="polar",
    )
    return False


def _check_shape(
    row: Checked, findings: Findings, deviations: dict[str, list[tuple[float, Entry]]]
) -> bool:
    """Hold area and second moments against the family's own formulas."""
    entry = row.entry
    if not has_dimensions(entry):
        return True
    if not _fits(entry, findings):
        return False
    formed = formed_by(entry)
    if not formed:
        return True
    if not _check_area(row, formed, findings, deviations):
        return False
    good = True
    for axis, found in (("major", row.i_major), ("minor", row.i_minor), ("least", row.i_least)):
        if not entry.numbers.keys() & _own_keys(axis):
            continue
        values = [getattr(properties, f"i_{axis}") for properties in formed]
        deviation = beyond(outside(found, min(values), max(values)), _axis_rounding(entry, axis))
        if abs(deviation) > INERTIA_REFUSED:
            good = False
            ratio = found / values[0]
            cause = likely_cause(ratio, INERTIA_CAUSES)
            findings.in_row(
                entry,
                _axis_key(entry, axis),
                found=f"{found * 1e8:.4g} cm4 about the {axis} axis",
                expected=f"about {values[0] * 1e8:.4g} cm4 for these dimensions",
                fix=f"This looks like {cause}."
                if cause
                else "Compare dimensions and second moment with the printed table.",
                kind=f"inertia {axis}",
            )
        elif abs(deviation) > REFUSED:
            name = f"I {axis} differs from the formula by more than 3 % beyond rounding"
            deviations.setdefault(name, []).append((deviation, entry))
    return good


def _fits(entry: Entry, findings: Findings) -> bool:
    """Walls must fit into the section before a formula means anything."""
    if walls_fit(entry):
        return True
    t, depth, width = (entry.numbers[key].value for key in ("thickness", "depth", "width"))
    findings.in_row(
        entry,
        "thickness",
        found=f"{t * 1e3:.4g} mm in a section of {depth * 1e3:.4g} × {width * 1e3:.4g} mm",
        expected="walls that leave room inside",
        fix="Compare the units of depth, width and thickness.",
        kind="walls",
    )
    return False


def _check_area(
    row: Checked,
    formed: Sequence[geometry.SectionProperties],
    findings: Findings,
    deviations: dict[str, list[tuple[float, Entry]]],
) -> bool:
    entry = row.entry
    areas = [properties.area for properties in formed]
    deviation = beyond(outside(row.area, min(areas), max(areas)), entry.rounding("area"))
    other = other_make(entry, row.area) if abs(deviation) > 2.0 * QUIET else ""
    if other:
        findings.in_row(
            entry,
            "area",
            found=f"{row.area * 1e4:.4g} cm2, the area of the {other} section",
            expected=f"{areas[0] * 1e4:.4g} cm2 for {entry.product}",
            fix="Hot finished and cold formed sections of one size differ in area and in buckling "
            "curve: correct the product standard, or take the row from the right table.",
            kind="make",
        )
        return False
    if abs(deviation) > SHAPE_REFUSED:
        cause = likely_cause(row.area / areas[0], AREA_CAUSES)
        findings.in_row(
            entry,
            "area",
            found=f"{row.area * 1e4:.4g} cm2",
            expected=f"about {areas[0] * 1e4:.4g} cm2 for these dimensions",
            fix=f"This looks like {cause}."
            if cause
            else "Compare dimensions and area with the printed table.",
            kind="shape",
        )
        return False
    if abs(deviation) > 2.0 * QUIET:
        name = "Area differs from the formula by more than 2 % beyond rounding"
        deviations.setdefault(name, []).append((deviation, entry))
    return True
