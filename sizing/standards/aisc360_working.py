"""The worked lines of AISC 360 for one member and one section."""

from __future__ import annotations

import numpy as np

from sizing.brief.sections import Catalogue
from sizing.standards.aisc360_clauses import CLAUSES, CLAUSES_WITH_E7, RUPTURE, SINGLE, YIELD
from sizing.standards.aisc360_options import FACTOR_TEXTS, FACTORS, Options360
from sizing.standards.aisc360_rows import MOST_ELEMENTS, Element, Row360, RowArrays360
from sizing.standards.aisc360_rules import (
    INELASTIC_END,
    critical_stress,
    effective_width,
    elastic_stress,
)
from sizing.standards.aisc360_slenderness import Slenderness360
from sizing.standards.conditions import Resistances
from sizing.standards.contract import FloatArray, MemberConditions, Step
from sizing.standards.formula import (
    PI,
    Formula,
    Symbol,
    greatest,
    least,
    number,
    root,
    symbols,
    up_to,
)
from sizing.standards.slenderness import radii_in_and_out
from sizing.standards.worked_lines import step

AG, AN, AE, FY, FU, E_MOD = symbols("Ag", "An", "Ae", "Fy", "Fu", "E")
PN_Y, PN_U, PN, SHEAR_LAG, K_NET = symbols("Pn,y", "Pn,u", "Pn", "U", "k_net")
RATIO, END, FE, FCR = symbols("Lc/r", "4.71 √(E/Fy)", "Fe", "Fcr")


def design(method: str, symbol: str) -> str:
    """Return the strength as the method writes it: ``φ Pn`` or ``Pn / Ω``."""
    return f"φ {symbol}" if method == "LRFD" else f"{symbol} / Ω"


def design_formula(method: str, nominal: Symbol, factor: str) -> Formula:
    """Return the formula of the strength: ``0.90 Pn`` or ``Pn / 1.67``."""
    value = number(float(factor), text=factor)
    return value * nominal if method == "LRFD" else nominal / value


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
        step("Pn,y", FY * AG, yielding, "N", CLAUSES[YIELD]),
        step(
            first,
            design_formula(options.method, PN_Y, yielding_text),
            yielding_factor * yielding,
            "N",
            CLAUSES[YIELD],
        ),
        step("Fu", row.origin, row.Fu, "Pa", "A3.1", "tensile strength"),
        step("k_net", "brief", net, "-", "B4.3", "net over gross area at the joints"),
        step("An", K_NET * AG, net * area, "m²", "B4.3", "net area at the joints"),
        step("U", "shear lag factor", options.shear_lag, "-", "D3"),
        step("Ae", AN * SHEAR_LAG, effective, "m²", "D3"),
        step("Pn,u", FU * AE, rupture, "N", CLAUSES[RUPTURE]),
        step(
            second,
            design_formula(options.method, PN_U, rupture_text),
            rupture_factor * rupture,
            "N",
            CLAUSES[RUPTURE],
        ),
        step(symbol, least(*symbols(first, second)), strength, "N", clause, "tension strength"),
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
    formula: Formula = FY
    if ratio > 0.0:
        formula = up_to(RATIO, END, 0.658 ** (FY / FE) * FY, 0.877 * FE)
        steps.append(step("Fe", PI**2 * E_MOD / RATIO**2, elastic_stress(E, ratio), "Pa", "E3-4"))
    steps += [
        step("4.71 √(E/Fy)", INELASTIC_END * root(E_MOD / FY), end, "-", "E3", "limit of Lc/r"),
        step("Fcr", formula, Fcr[0, 0], "Pa", "E3"),
    ]
    area = rows.effective_area(catalogue.area, Fcr)[0, 0]
    of = AG
    if area < catalogue.area[0]:
        of = AE
        steps += [
            *_width_steps(rows, Fcr),
            step("Ae", _area_formula(row), area, "m²", "E7", "effective area"),
        ]
    _, factor, _ = FACTOR_TEXTS[options.method]
    steps.append(step("Pn", FCR * of, Fcr[0, 0] * area, "N", clause))
    if not note:
        formula = design_formula(options.method, PN, factor)
        last = step(symbol, formula, strength, "N", clause, "compression strength")
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
        return _single_angle_steps(options, catalogue, length, slenderness)
    axis = "least" if catalogue.family[0] == "angle" else ""
    r_in, r_out = (float(r[0, 0]) for r in radii_in_and_out(catalogue, members))
    if axis:
        r_in = r_out = float(catalogue.r_least[0])
    radii = symbols(f"r_{axis or 'in'}", f"r_{axis or 'out'}")
    lengths = symbols("Lc,in", "Lc,out")
    given = [step(radii[0].name, "catalogue", r_in, "m", "section", "radius of gyration")]
    if not axis:
        given.append(step(radii[1].name, "catalogue", r_out, "m", "section", "radius of gyration"))
    return [
        *given,
        step("Lc,in", "buckling length in plane", members.in_plane[0], "m", "E2"),
        step("Lc,in/r", lengths[0] / radii[0], slenderness.inside[0, 0], "-", "E2"),
        step("Lc,out", "buckling length out of plane", members.out_of_plane[0], "m", "E2"),
        step("Lc,out/r", lengths[1] / radii[1], slenderness.outside[0, 0], "-", "E2"),
        step(
            "Lc/r",
            greatest(*symbols("Lc,in/r", "Lc,out/r")),
            slenderness.effective[0, 0],
            "-",
            "E2",
        ),
    ]


def _single_angle_steps(
    options: Options360, catalogue: Catalogue, length: float, slenderness: Slenderness360
) -> list[Step]:
    """Return the lines of Lc/r of a single angle web member, E5."""
    space = options.single_angles == "E5 space"
    rule = "E5(b)" if space else "E5(a)"
    radius = catalogue.r_major if options.shorter_leg else catalogue.r_minor
    L, ra, rz, legs, ratio = symbols("L", "ra", "rz", "bl/bs", "L/ra")
    formula = (
        up_to(ratio, 75.0, 60.0 + 0.8 * ratio, 45.0 + ratio)
        if space
        else up_to(ratio, 80.0, 72.0 + 0.75 * ratio, 32.0 + 1.25 * ratio)
    )
    meaning = "axis parallel to the connected leg"
    steps = [
        step("L", "system length", length, "m", CLAUSES[SINGLE]),
        step("ra", "catalogue", radius[0], "m", "section", meaning),
        step("L/ra", L / ra, slenderness.ratio_e5[0, 0], "-", rule),
    ]
    sides = sorted((float(catalogue.depth[0]), float(catalogue.width[0])))
    unequal = sides[1] / sides[0]
    if options.shorter_leg and unequal > 1.0:
        extra, floor = (6.0, 0.82) if space else (4.0, 0.95)
        steps += [
            step("rz", "catalogue", catalogue.r_least[0], "m", "section", "least radius"),
            step("bl/bs", "catalogue", unequal, "-", rule, "longer over shorter leg"),
        ]
        formula = greatest(formula + extra * (legs**2 - 1.0), floor * L / rz)
    return [*steps, step("Lc/r", formula, slenderness.effective[0, 0], "-", rule)]


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
        steps += _element_width_steps(rows.rows[0], e, float(rows.Fy[0]), float(be))
    return steps


def _element_width_steps(row: Row360, e: int, Fy: float, be: float) -> list[Step]:
    """Return the lines of be of one element, eqs. E7-2 to E7-5."""
    element = row.elements[e]
    ratio, limit, b, t, Fel = _element_symbols(element)
    share = root(Fel / FCR)
    reduced = least(1.0, (1.0 - element.c1 * share) * share)
    elastic = (element.c2 * element.limit / element.ratio) ** 2 * Fy
    return [
        step(b.name, "catalogue", element.width, "m", "section", "width"),
        step(t.name, "catalogue", element.thickness, "m", "section", "thickness"),
        step(limit.name, "Table B4.1a", element.limit, "-", "Table B4.1a"),
        step(Fel.name, (element.c2 * limit / ratio) ** 2 * FY, elastic, "Pa", "E7-5"),
        step(
            f"be, {element.name}",
            b * up_to(ratio, limit * root(FY / FCR), 1.0, reduced),
            be,
            "m",
            "E7.1",
            "effective width, E7-2 and E7-3",
        ),
    ]


def _element_symbols(element: Element) -> tuple[Symbol, ...]:
    return symbols(element.name, *(f"{s}, {element.name}" for s in ("λr", "b", "t", "Fel")))


def _area_formula(row: Row360) -> Formula:
    if not row.elements:
        return (0.038 * E_MOD / (FY * symbols("D/t")[0]) + number(2.0 / 3.0, text="2/3")) * AG
    area: Formula = AG
    for element in row.elements:
        _, _, b, t, _ = _element_symbols(element)
        (be,) = symbols(f"be, {element.name}")
        area = area - element.count * (b - be) * t
    return area
