"""The worked lines of AISC 360 for one member and one section."""

from __future__ import annotations

import numpy as np

from sizing.brief.sections import Catalogue
from sizing.standards.aisc360_clauses import CLAUSES, CLAUSES_WITH_E7, RUPTURE, SINGLE, YIELD
from sizing.standards.aisc360_options import FACTOR_TEXTS, FACTORS, Options360
from sizing.standards.aisc360_rows import MOST_ELEMENTS, Row360, RowArrays360
from sizing.standards.aisc360_rules import (
    INELASTIC_END,
    critical_stress,
    effective_width,
    elastic_stress,
)
from sizing.standards.aisc360_slenderness import Slenderness360
from sizing.standards.conditions import Resistances
from sizing.standards.contract import FloatArray, MemberConditions, Step


def step(
    symbol: str,
    expression: str,
    value: float | FloatArray,
    unit: str,
    clause: str,
    meaning: str = "",
) -> Step:
    """Return one worked line."""
    return Step(
        symbol=symbol,
        expression=expression,
        value=float(value),
        unit=unit,
        clause=clause,
        meaning=meaning,
    )


def design(method: str, symbol: str) -> str:
    """Return the strength as the method writes it: ``φ Pn`` or ``Pn / Ω``."""
    return f"φ {symbol}" if method == "LRFD" else f"{symbol} / Ω"


def design_text(method: str, symbol: str, factor: str) -> str:
    """Return the formula of the strength: ``0.90 Pn`` or ``Pn / 1.67``."""
    return f"{factor} {symbol}" if method == "LRFD" else f"{symbol} / {factor}"


def _strength_steps(catalogue: Catalogue, row: Row360) -> list[Step]:
    return [
        step("Ag", "catalogue", catalogue.area[0], "m²", "section", catalogue.designation[0]),
        step("Fy", row.origin, row.Fy, "Pa", "A3.1", "yield stress"),
    ]


def tension_steps(
    options: Options360,
    catalogue: Catalogue,
    members: MemberConditions,
    rows: RowArrays360,
    found: Resistances,
    note: str,
) -> tuple[Step, ...]:
    """Return the lines of the tension strength, D2 and D3."""
    row = rows.rows[0]
    strength = float(found.tension[0, 0])
    clause = CLAUSES[found.tension_clause[0, 0]]
    symbol = design(options.method, "Pn")
    if row.unusable:
        return (step(symbol, "0", strength, "N", clause, note),)
    _, yielding_text, rupture_text = FACTOR_TEXTS[options.method]
    yielding_factor, rupture_factor, _ = FACTORS[options.method]
    net = float(members.net_factor[0])
    area = float(catalogue.area[0])
    effective = net * area * options.shear_lag
    yielding, rupture = row.Fy * area, row.Fu * effective
    first, second = design(options.method, "Pn,y"), design(options.method, "Pn,u")
    return (
        *_strength_steps(catalogue, row),
        step("Pn,y", "Fy Ag", yielding, "N", CLAUSES[YIELD]),
        step(
            first,
            design_text(options.method, "Pn,y", yielding_text),
            yielding_factor * yielding,
            "N",
            CLAUSES[YIELD],
        ),
        step("Fu", row.origin, row.Fu, "Pa", "A3.1", "tensile strength"),
        step("An", f"{net:g} Ag", net * area, "m²", "B4.3", "net area at the joints"),
        step("U", "shear lag factor", options.shear_lag, "-", "D3"),
        step("Ae", "An U", effective, "m²", "D3"),
        step("Pn,u", "Fu Ae", rupture, "N", CLAUSES[RUPTURE]),
        step(
            second,
            design_text(options.method, "Pn,u", rupture_text),
            rupture_factor * rupture,
            "N",
            CLAUSES[RUPTURE],
        ),
        step(symbol, f"min({first}, {second})", strength, "N", clause, "tension strength"),
    )


def compression_steps(
    options: Options360,
    E: float,
    catalogue: Catalogue,
    members: MemberConditions,
    rows: RowArrays360,
    slenderness: Slenderness360,
    found: Resistances,
    note: str,
) -> tuple[Step, ...]:
    """Return the lines of the compression strength, E3, E5 and E7."""
    row = rows.rows[0]
    strength = float(found.compression[0, 0])
    clause = CLAUSES_WITH_E7[found.compression_clause[0, 0]]
    symbol = design(options.method, "Pn")
    last = step(symbol, "0", strength, "N", clause, note)
    if row.unusable:
        return (last,)
    steps = [*_strength_steps(catalogue, row), *_element_steps(row)]
    if row.left_out:
        return (*steps, last)
    ratio = slenderness.effective[0, 0]
    steps += [
        *_slenderness_steps(options, catalogue, members, slenderness),
        step("E", "modulus of elasticity", E, "Pa", "symbols"),
    ]
    Fcr = critical_stress(E, rows.Fy, slenderness.effective)
    end = INELASTIC_END * np.sqrt(E / row.Fy)
    text = "0.877 Fe" if ratio > end else "0.658^(Fy/Fe) Fy"
    if ratio > 0.0:
        steps.append(step("Fe", "π² E / (Lc/r)²", elastic_stress(E, ratio), "Pa", "E3-4"))
    steps += [
        step("4.71 √(E/Fy)", "limit of Lc/r", end, "-", "E3"),
        step("Fcr", text, Fcr[0, 0], "Pa", "E3"),
    ]
    area = rows.effective_area(catalogue.area, Fcr)[0, 0]
    name = "Ag"
    if area < catalogue.area[0]:
        name = "Ae"
        steps += [
            *_width_steps(rows, Fcr),
            step("Ae", _area_text(row), area, "m²", "E7", "effective area"),
        ]
    _, factor, _ = FACTOR_TEXTS[options.method]
    steps.append(step("Pn", f"Fcr {name}", Fcr[0, 0] * area, "N", clause))
    if not note:
        text = design_text(options.method, "Pn", factor)
        last = step(symbol, text, strength, "N", clause, "compression strength")
    return (*steps, last)


def _element_steps(row: Row360) -> list[Step]:
    """Return the slenderness of every element, Table B4.1a."""
    steps = [
        step(
            element.name,
            "catalogue",
            element.ratio,
            "-",
            "Table B4.1a",
            f"λr = {element.limit:.2f}: {'slender' if element.slender else 'nonslender'}",
        )
        for element in row.elements
    ]
    if not np.isnan(row.round_ratio):
        verdict = "slender" if row.slender else "nonslender"
        meaning = f"λr = {row.round_limit:.2f}: {verdict}"
        steps.append(step("D/t", "catalogue", row.round_ratio, "-", "Table B4.1a", meaning))
    return steps


def _slenderness_steps(
    options: Options360,
    catalogue: Catalogue,
    members: MemberConditions,
    slenderness: Slenderness360,
) -> list[Step]:
    """Return the lines that lead to Lc/r."""
    if slenderness.by_e5[0, 0]:
        length = max(members.length[0], members.in_plane[0], members.out_of_plane[0])
        rule = "E5(b)" if options.single_angles == "E5 space" else "E5(a)"
        return [
            step("L", "system length", length, "m", CLAUSES[SINGLE]),
            step(
                "L/ra", "axis parallel to the connected leg", slenderness.ratio_e5[0, 0], "-", rule
            ),
            step("Lc/r", f"{rule} of L/ra", slenderness.effective[0, 0], "-", rule),
        ]
    axis = "least" if catalogue.family[0] == "angle" else ""
    return [
        step("Lc,in", "buckling length in plane", members.in_plane[0], "m", "E2"),
        step("Lc,in/r", f"Lc,in / r_{axis or 'in'}", slenderness.inside[0, 0], "-", "E2"),
        step("Lc,out", "buckling length out of plane", members.out_of_plane[0], "m", "E2"),
        step("Lc,out/r", f"Lc,out / r_{axis or 'out'}", slenderness.outside[0, 0], "-", "E2"),
        step("Lc/r", "max(Lc,in/r, Lc,out/r)", slenderness.effective[0, 0], "-", "E2"),
    ]


def _width_steps(rows: RowArrays360, Fcr: FloatArray) -> list[Step]:
    """Return the effective width of every element of the row, E7.1."""
    steps = []
    for e in range(min(MOST_ELEMENTS, len(rows.rows[0].elements))):
        be = effective_width(
            rows.width[:, e],
            rows.width[:, e] / rows.thickness[:, e],
            rows.limit[:, e],
            (rows.c1[:, e], rows.c2[:, e]),
            rows.Fy,
            Fcr,
        )[0, 0]
        name = rows.rows[0].elements[e].name
        steps.append(step(f"be, {name}", "E7-2, E7-3", be, "m", "E7.1", "effective width"))
    return steps


def _area_text(row: Row360) -> str:
    return "Ag − Σ (b − be) t" if row.elements else "[0.038 E / (Fy D/t) + 2/3] Ag"
