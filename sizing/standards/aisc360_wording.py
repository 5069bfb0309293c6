"""Basis of design and cautions of AISC 360 in words."""

from __future__ import annotations

from sizing.standards.aisc360_grades import KSI
from sizing.standards.aisc360_options import FACTOR_TEXTS, Options360
from sizing.standards.contract import Material


def basis_rows(options: Options360, material: Material) -> tuple[tuple[str, str], ...]:
    """Return (what, value with source) rows."""
    sign, yielding, rupture = FACTOR_TEXTS[options.method]
    return (
        ("Method", f"{options.method}, edition {options.edition}"),
        ("Steel", options.grade_name),
        ("Strength", _strength(options)),
        ("Modulus of elasticity", f"{material.E / KSI:g} ksi"),
        ("Density", "490 lb/ft³"),
        ("Yielding and compression", f"{sign} = {yielding} (D2(a), E1)"),
        ("Rupture", f"{sign} = {rupture} (D2(b))"),
        ("Shear lag factor U", f"{options.shear_lag:g} (D3, setting or 1.0)"),
        ("Slender elements", _slender(options)),
        ("Single angles", _angles(options)),
        ("Slenderness advice", _advice(options)),
    )


def _strength(options: Options360) -> str:
    own = [
        f"{name} {value / KSI:g} ksi (setting)"
        for name, value in (("Fy", options.Fy), ("Fu", options.Fu))
        if value is not None
    ]
    if len(own) == 2:
        return ", ".join(own)
    table = "AISC Manual Tables 2-4 and 2-5 by grade and form (from memory, to be confirmed)"
    return ", ".join([table, *own])


def _slender(options: Options360) -> str:
    return "reduced by E7" if options.slender_elements == "E7" else "left out"


def _angles(options: Options360) -> str:
    if options.single_angles == "E3":
        return "concentric, E3 about the least axis over the greater length"
    leg = "shorter" if options.shorter_leg else "longer or equal"
    where = f"groups {', '.join(options.webs)}" if options.webs else "all groups"
    rule = "E5(b), space truss" if options.single_angles == "E5 space" else "E5(a), planar truss"
    return f"{rule}, connected by the {leg} leg, {where}"


def _advice(options: Options360) -> str:
    how = "enforced as limits" if options.enforce else "mentioned, not enforced"
    return f"Lc/r 200 in compression (E2), L/r 300 in tension (D1): {how}"


def caution_lines(options: Options360) -> tuple[str, ...]:
    """Return what the check leaves out, in plain sentences."""
    lines = [
        f"Strengths are {options.method}: the strength combinations of the brief must be"
        f" {options.method} combinations of the governing building code.",
        "Torsional and flexural-torsional buckling (E4) and built-up members (E6) are not"
        " checked; block shear and the connections (chapter J) are not checked.",
        "The catalogue's thickness is taken as the design wall thickness (B4.2); flat widths of"
        " HSS are the outside dimension less three times that thickness.",
        "The grade table is reproduced from memory: confirm Fy and Fu against the ASTM"
        " specification or the mill certificate.",
    ]
    if options.shear_lag == 1.0:
        lines.append(
            "Shear lag is not included in tension (U = 1.0): set shear_lag_factor where the"
            " connection does not hold every part of the section."
        )
    if not options.enforce:
        lines.append(
            "Members with Lc/r above 200 in compression (E2) or L/r above 300 in tension (D1)"
            " exceed the advice of the specification; see the slenderness in the schedule."
        )
    if options.single_angles != "E3":
        lines.append(
            "E5 presumes single angles connected by one leg at both ends, welded or with at least"
            " two bolts, on the same side of the gusset, without transverse load."
        )
    else:
        lines.append(
            "Single angles are checked as concentrically loaded; eccentric end connections need"
            " E5 (set single_angles) or H2."
        )
    return tuple(lines)
