"""Basis of design and cautions of EN 1993-1-1 in words."""

from __future__ import annotations

from sizing.standards.contract import Material
from sizing.standards.en1993_options import EFFECTIVE_WIDTH, RECOMMENDED, Options1993


def basis_rows(options: Options1993, material: Material) -> tuple[tuple[str, str], ...]:
    """Return (what, value with source) rows."""
    return (
        ("Steel", options.grade_name),
        ("Strength", _strength(options)),
        ("Modulus of elasticity", f"{material.E / 1e6:g} N/mm² (3.2.6)"),
        ("Density", f"{material.density:g} kg/m³"),
        *(
            (
                f"Partial factor {key}",
                f"{getattr(options, key.lower()):.2f} ({_origin(key, options)})",
            )
            for key in RECOMMENDED
        ),
        ("Buckling curves", "Tables 6.1 and 6.2, by family, product and grade"),
        (
            "Hollow sections",
            f"{options.hollow_sections} (hot finished: a, S460 a0; cold formed: c)",
        ),
        ("Class 4 sections in compression", _class_4(options)),
        ("Buckling lengths", _lengths(options)),
        ("Angles connected by one leg", _leg(options)),
    )


def _strength(options: Options1993) -> str:
    own = [
        f"{name} {value / 1e6:g} N/mm² (setting)"
        for name, value in (("fy", options.fy), ("fu", options.fu))
        if value is not None
    ]
    if len(own) == 2:
        return ", ".join(own)
    table = (
        "EN 1993-1-1 Table 3.1"
        if options.grade_table == "EN 1993-1-1"
        else "product standards EN 10025, EN 10210-1, EN 10219-1"
    )
    return ", ".join([f"{table}, by product and thickness (from memory, to be confirmed)", *own])


def _origin(key: str, options: Options1993) -> str:
    return "setting" if key in options.own_factors else "recommended value, 6.1"


def _class_4(options: Options1993) -> str:
    if options.class_4 == EFFECTIVE_WIDTH:
        return "effective area, EN 1993-1-5, 4.4; circular sections left out"
    return "left out"


def _lengths(options: Options1993) -> str:
    if options.preset is None:
        return "as given in the brief"
    preset = options.preset
    parts = ["Annex BB.1 on the system lengths, or greater lengths of the brief"]
    if preset.chords:
        parts.append(f"chords: {', '.join(preset.chords)}")
    if preset.webs:
        parts.append(f"webs ({preset.web_ends} ends): {', '.join(preset.webs)}")
    return "; ".join(parts)


def _leg(options: Options1993) -> str:
    bolts = options.leg_bolts
    if bolts is None:
        return "not considered: the force is taken as centred on the section"
    hole = f"hole {bolts.hole * 1000:g} mm"
    if bolts.count == 1:
        return f"1 bolt, {hole}, e2 {bolts.edge * 1000:g} mm (EN 1993-1-8, 3.10.3)"
    pitch = f"p1 {bolts.pitch * 1000:g} mm, β {bolts.beta:.3f}"
    return f"{bolts.count} bolts in line, {hole}, {pitch} (EN 1993-1-8, 3.10.3)"


def caution_lines(options: Options1993) -> tuple[str, ...]:
    """Return what the check leaves out, in plain sentences."""
    lines = [
        "Recommended values of EN 1993-1-1:2005 are used unless set otherwise; the National Annex"
        " of the site may ask for others.",
        "Torsional and torsional-flexural buckling (6.3.1.4) is checked for single angles only, not"
        " for I sections and other open sections.",
        "Built-up members (two angles, battened members; 6.4) are checked as the single row of"
        " the catalogue; their battens and connectors are not.",
        "Grade tables are reproduced from memory: confirm fy and fu against the standard or the"
        " mill certificate.",
    ]
    if options.leg_bolts is None:
        lines.append(
            "Angles connected by one leg: the eccentricity of the connection is not included;"
            " set angle_bolts for tension, and see BB.1.2 and 6.2.9 for compression."
        )
    if options.preset is not None:
        lines.append(
            "Annex BB.1 lengths presume ends restrained as that annex asks: welds, or at least"
            " two bolts at each end, and chords that hold the webs."
        )
    if options.class_4 == EFFECTIVE_WIDTH:
        lines.append(
            "Class 4 sections: the shift of the centroid of the effective section (6.2.9.3) is"
            " not included; it is nil for doubly symmetric sections."
        )
    return tuple(lines)
