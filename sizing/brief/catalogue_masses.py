"""The mass of every row against area × density."""

from __future__ import annotations

from collections.abc import Sequence

from sizing.brief import section_geometry as geometry
from sizing.brief.catalogue_causes import AREA_CAUSES, MASS_CAUSES, likely_cause
from sizing.brief.catalogue_deviations import QUIET, REFUSED, beyond, outside, rows_text
from sizing.brief.catalogue_rows import Checked, Entry, Findings, place_of
from sizing.brief.catalogue_shapes import formed_by, has_dimensions, has_thin_us_wall, walls_fit

TIMBER_DENSITIES = (250.0, 1300.0)
"""kg/m³, lightest softwood to heaviest hardwood class with a margin (EN 338: 290 to 1080)."""


def check_masses(
    rows: Sequence[Checked], density: float | str | None, findings: Findings
) -> set[int]:
    """Compare mass with area × density; return the lines that were refused."""
    if isinstance(density, str):
        return set()
    refused: list[tuple[Checked, float, float]] = []
    small: list[tuple[float, Entry]] = []
    judged = 0
    for row in rows:
        mass = row.entry.value("mass")
        if mass is None:
            continue
        judged += 1
        ratio = mass / row.area
        unstated = density is None and row.entry.family == "rectangle"
        if unstated and TIMBER_DENSITIES[0] <= ratio <= TIMBER_DENSITIES[1]:
            continue
        low = density if density is not None else geometry.STEEL_DENSITY
        high = low / geometry.US_WALL_FACTOR if has_thin_us_wall(row.entry) else low
        rounding = row.entry.rounding("mass") + row.entry.rounding("area")
        deviation = beyond(outside(ratio, low, high), rounding)
        if abs(deviation) > REFUSED:
            refused.append((row, ratio, low))
        elif abs(deviation) > QUIET:
            small.append((deviation, row.entry))
    if small:
        greatest, entry = max(small, key=lambda item: abs(item[0]))
        findings.remarks.append(
            f"Mass differs from area × density by more than 1 % beyond rounding in "
            f"{rows_text(len(small))}; greatest {100 * greatest:+.1f} % in "
            f"{place_of(entry.line, entry.designation)}."
        )
    ratios = [ratio for _, ratio, _ in refused]
    common = judged > 1 and len(refused) == judged and max(ratios) / min(ratios) < 1.0 + REFUSED
    if common:
        _refuse_common_mass(refused, findings)
    else:
        for row, ratio, expected in refused:
            _refuse_mass(row, ratio, expected, findings)
    return {row.entry.line for row, _, _ in refused}


def _mass_cause(ratio: float) -> str:
    """Return the likely slip behind mass/(area × density) = ``ratio``."""
    cause = likely_cause(1.0 / ratio, AREA_CAUSES)
    if cause and "decimal" not in cause:
        return f"The area looks like {cause}."
    by_mass = likely_cause(ratio, MASS_CAUSES)
    if by_mass:
        return f"The mass looks like {by_mass}."
    if cause:
        return "A decimal mark has slipped by one place in mass or area."
    return ""


def _refuse_common_mass(refused: list[tuple[Checked, float, float]], findings: Findings) -> None:
    row, _, expected = refused[0]
    typical = sorted(ratio for _, ratio, _ in refused)[len(refused) // 2]
    cause = _mass_cause(typical / expected)
    advice = (
        f"{cause} Correct the unit in the column head."
        if cause
        else f"If the material is not steel, write: # density = {typical:.0f} kg/m3"
    )
    findings.problem(
        place=f"every row ({place_of(row.entry.line, row.entry.designation)} first), "
        f"columns {findings.head('area')!r} and {findings.head('mass')!r}",
        found=f"mass over area of {typical:.4g} kg/m3",
        expected=f"a density of {expected:.0f} kg/m3",
        fix=advice,
    )


def _refuse_mass(row: Checked, ratio: float, expected: float, findings: Findings) -> None:
    """Report the mass or the area, whichever the dimensions speak against."""
    entry, mass = row.entry, row.entry.numbers["mass"].value
    shapes = formed_by(entry) if has_dimensions(entry) and walls_fit(entry) else []
    formed = shapes[0].area if shapes else None
    if formed is not None and abs(mass / (formed * expected) - 1.0) <= REFUSED:
        cause = likely_cause(row.area / formed, AREA_CAUSES)
        findings.in_row(
            entry,
            "area",
            found=f"{row.area * 1e4:.4g} cm2",
            expected=f"about {formed * 1e4:.4g} cm2 for these dimensions and this mass",
            fix=f"This looks like {cause}."
            if cause
            else "Compare the area with the printed table.",
            kind="area against mass",
        )
        return
    agrees = formed is not None and abs(row.area / formed - 1.0) <= REFUSED
    advice = "The area agrees with the dimensions; compare the mass with the printed table."
    if not agrees:
        advice = "Compare area and mass with the printed table."
    findings.in_row(
        entry,
        "mass",
        found=f"{mass:.4g} kg/m with an area of {row.area * 1e4:.4g} cm2 ({ratio:.4g} kg/m3)",
        expected=f"about {row.area * expected:.4g} kg/m (area × {expected:.0f} kg/m3)",
        fix=_mass_cause(ratio / expected) or advice,
        kind="mass against area",
    )
