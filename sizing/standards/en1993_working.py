"""The worked lines of EN 1993-1-1 for one member and one section."""

from __future__ import annotations

import numpy as np

from sizing.brief.sections import Catalogue
from sizing.standards.conditions import Resistances
from sizing.standards.contract import FloatArray, MemberConditions, Step
from sizing.standards.en1993_angles import net_area_of_leg
from sizing.standards.en1993_axes import Axis
from sizing.standards.en1993_clauses import (
    CLAUSES,
    IN,
    LEAST,
    ONE_LEG,
    OUT,
    RUPTURE,
    SQUASH,
    TORSION,
    YIELD,
)
from sizing.standards.en1993_curves import (
    buckling_phi,
    reduction_factor,
    reference_slenderness,
)
from sizing.standards.en1993_lengths import AS_GIVEN
from sizing.standards.en1993_options import Options1993
from sizing.standards.en1993_rows import Row, RowArrays
from sizing.standards.en1993_torsion import SHEAR_MODULUS, Torsion, twisting
from sizing.standards.en1993_walls import epsilon


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


def _strength_steps(catalogue: Catalogue, row: Row) -> list[Step]:
    """Return area and yield strength."""
    return [
        step("A", "catalogue", catalogue.area[0], "m²", "section", catalogue.designation[0]),
        step("fy", row.strength.origin, row.strength.fy, "Pa", "3.2.1", "yield strength"),
    ]


def tension_steps(
    options: Options1993,
    catalogue: Catalogue,
    members: MemberConditions,
    rows: RowArrays,
    found: Resistances,
    note: str,
) -> tuple[Step, ...]:
    """Return the lines of N_t,Rd, 6.2.3."""
    row = rows.rows[0]
    resistance = float(found.tension[0, 0])
    if row.unusable:
        return (step("N_t,Rd", "0", resistance, "N", CLAUSES[found.tension_clause[0, 0]], note),)
    steps = _strength_steps(catalogue, row)
    yielding = catalogue.area[0] * row.strength.fy / options.gamma_m0
    steps += [
        step("γM0", "partial factor", options.gamma_m0, "-", "6.1"),
        step("N_pl,Rd", "A fy / γM0", yielding, "N", CLAUSES[YIELD]),
    ]
    net = float(members.net_factor[0])
    terms = ["N_pl,Rd"]
    if options.leg_bolts is not None and catalogue.family[0] == "angle":
        steps += _one_leg_steps(options, catalogue, net, row)
        terms.append("N_u,Rd")
    elif net < 1.0:
        net_area = catalogue.area[0] * net
        steps += [
            step("A_net", f"{net:g} A", net_area, "m²", "6.2.2.2", "net area at the joints"),
            step("fu", row.strength.origin, row.strength.fu, "Pa", "3.2.1", "ultimate strength"),
            step("γM2", "partial factor", options.gamma_m2, "-", "6.1"),
            step(
                "N_u,Rd",
                "0.9 A_net fu / γM2",
                0.9 * net_area * row.strength.fu / options.gamma_m2,
                "N",
                CLAUSES[RUPTURE],
            ),
        ]
        terms.append("N_u,Rd")
    expression = f"min({', '.join(terms)})" if len(terms) > 1 else terms[0]
    clause = CLAUSES[found.tension_clause[0, 0]]
    steps.append(step("N_t,Rd", expression, resistance, "N", clause, "tension resistance"))
    return tuple(steps)


def _one_leg_steps(options: Options1993, catalogue: Catalogue, net: float, row: Row) -> list[Step]:
    """Return the lines of N_u,Rd of an angle connected by one leg, EN 1993-1-8, 3.10.3."""
    bolts = options.leg_bolts
    if bolts is None:
        return []
    clause = CLAUSES[ONE_LEG]
    t = float(catalogue.thickness[0])
    fu, gamma = row.strength.fu, options.gamma_m2
    steps = [
        step("fu", row.strength.origin, fu, "Pa", "3.2.1", "ultimate strength"),
        step("γM2", "partial factor", gamma, "-", "6.1"),
        step("d0", "setting", bolts.hole, "m", clause, "bolt hole"),
    ]
    if bolts.count == 1:
        value = 2.0 * (bolts.edge - 0.5 * bolts.hole) * t * fu / gamma
        return [
            *steps,
            step("t", "catalogue", t, "m", "section", "leg thickness"),
            step("e2", "setting", bolts.edge, "m", clause, "edge distance"),
            step("N_u,Rd", "2.0 (e2 − 0.5 d0) t fu / γM2", value, "N", clause),
        ]
    area = net_area_of_leg(catalogue.area, np.array([net]), catalogue.thickness, bolts)[0]
    return [
        *steps,
        step("A_net", f"min({net:g} A, A − d0 t)", area, "m²", clause, "net area"),
        step("p1", "setting", bolts.pitch, "m", clause, "pitch of the bolts"),
        step("β", "linear in p1 / d0, Table 3.8", bolts.beta, "-", clause),
        step("N_u,Rd", "β A_net fu / γM2", bolts.beta * area * fu / gamma, "N", clause),
    ]


def compression_steps(
    options: Options1993,
    E: float,
    catalogue: Catalogue,
    members: MemberConditions,
    rows: RowArrays,
    buckling: tuple[Axis, Axis, Axis, Torsion],
    found: Resistances,
    note: str,
) -> tuple[Step, ...]:
    """Return the lines of the compression resistance, 6.2.4 and 6.3.1."""
    row, axes, torsion = rows.rows[0], buckling[:3], buckling[3]
    resistance = float(found.compression[0, 0])
    clause = CLAUSES[found.compression_clause[0, 0]]
    last = step("N_Rd", "0", resistance, "N", clause, note)
    if row.unusable:
        return (last,)
    steps = [*_strength_steps(catalogue, row), *_class_steps(row)]
    if row.left_out:
        return (*steps, last)
    area = "A"
    if row.class_4:
        area = "A_eff"
        text = "A less (1 − ρ) of each slender part"
        steps.append(step("A_eff", text, row.area, "m²", "EN 1993-1-5, 4.4", "effective area"))
    lambda_1 = float(reference_slenderness(E, rows.fy)[0])
    steps += [
        step("γM0", "partial factor", options.gamma_m0, "-", "6.1"),
        step(
            "N_c,Rd",
            f"{area} fy / γM0",
            row.area * row.strength.fy / options.gamma_m0,
            "N",
            CLAUSES[SQUASH],
        ),
        step("E", "3.2.6", E, "Pa", "3.2.6"),
        step("λ1", "π √(E / fy)", lambda_1, "-", "6.3.1.3"),
        step("γM1", "partial factor", options.gamma_m1, "-", "6.1"),
    ]
    terms = ["N_c,Rd"]
    by_annex = options.preset is not None and options.preset.places(members.role)[0] != AS_GIVEN
    source = "Annex BB.1" if by_annex else "brief"
    for mark, index, axis in zip(("in", "out", "v"), (IN, OUT, LEAST), axes, strict=True):
        if axis.applies[0, 0]:
            steps += _buckling_steps(options, rows, axis, (mark, area, source), CLAUSES[index])
            terms.append(f"N_b,{mark}")
    if torsion.applies[0, 0]:
        steps += _torsion_steps(options, catalogue, rows, axes[2], torsion)
        terms.append("N_b,T")
    if not note:
        meaning = "compression resistance"
        last = step("N_Rd", f"min({', '.join(terms)})", resistance, "N", clause, meaning)
    return (*steps, last)


def _torsion_steps(
    options: Options1993, catalogue: Catalogue, rows: RowArrays, least: Axis, torsion: Torsion
) -> list[Step]:
    """Return the lines of N_b,Rd of an angle in torsional-flexural buckling, 6.3.1.4."""
    clause = CLAUSES[TORSION]
    section = twisting(catalogue)
    relative, alpha = torsion.relative[0, 0], least.alpha[0, 0]
    chi = reduction_factor(relative, alpha)
    area = "A_eff" if rows.rows[0].class_4 else "A"
    return [
        step("I_T", "(h + b − t) t³ / 3", section.torsion[0], "m⁴", "section"),
        step("i_0", "√((I_y + I_z) / A + u0² + v0²)", section.polar[0], "m", "section"),
        step("G", "3.2.6", SHEAR_MODULUS, "Pa", "3.2.6"),
        step("N_cr,T", "G I_T / i_0²", torsion.plain[0], "N", clause, "twisting alone"),
        step(
            "N_cr,TF",
            "twisting with bowing about u-u and v-v over L_v",
            torsion.critical[0, 0],
            "N",
            clause,
        ),
        step("λ̄_T", f"√({area} fy / N_cr,TF)", relative, "-", clause),
        step("Φ_T", "0.5 [1 + α_v (λ̄_T − 0.2) + λ̄_T²]", buckling_phi(relative, alpha), "-", clause),
        step("χ_T", "1 / (Φ_T + √(Φ_T² − λ̄_T²)) ≤ 1", chi, "-", "6.3.1.2", "reduction factor"),
        step(
            "N_b,T",
            f"χ_T {area} fy / γM1",
            chi * rows.area[0] * rows.fy[0] / options.gamma_m1,
            "N",
            clause,
        ),
    ]


def _class_steps(row: Row) -> list[Step]:
    """Return the classification of every part, Table 5.2."""
    if not row.walls:
        return []
    steps = [step("ε", "√(235 N/mm² / fy)", epsilon(row.strength.fy), "-", "Table 5.2")]
    for wall in row.walls:
        verdict = "class 4" if wall.slender else "class 1 to 3"
        meaning = f"limit {wall.limit_text} = {wall.limit:.2f}: {verdict}"
        steps.append(step(wall.name, "catalogue", wall.ratio, "-", "Table 5.2", meaning))
    return steps


def _buckling_steps(
    options: Options1993,
    rows: RowArrays,
    axis: Axis,
    words: tuple[str, str, str],
    clause: str,
) -> list[Step]:
    """Return the lines of N_b,Rd about one axis, 6.3.1.

    ``words``: the mark of the axis, the symbol of the area, where the length comes from.
    """
    mark, area, source = words
    row = rows.rows[0]
    relative, alpha = axis.relative[0, 0], axis.alpha[0, 0]
    chi = reduction_factor(relative, alpha)
    ratio = f"(L_{mark} / i_{mark}) / λ1" + (" · √(A_eff / A)" if row.class_4 else "")
    steps = [
        step(f"L_{mark}", source, axis.length[0, 0], "m", clause, "buckling length"),
        step(f"i_{mark}", "√(I / A)", axis.radius[0, 0], "m", "section", "radius of gyration"),
        step(f"λ̄_{mark}", ratio, axis.plain[0, 0], "-", "6.3.1.3"),
    ]
    name = f"λ̄_{mark}"
    if relative != axis.plain[0, 0]:
        start = "0.35" if mark == "v" else "0.50"
        name = f"λ̄_eff,{mark}"
        steps.append(step(name, f"{start} + 0.7 λ̄_{mark}", relative, "-", "BB.1.2(2)"))
    return [
        *steps,
        step(f"α_{mark}", "Tables 6.1 and 6.2", alpha, "-", "6.3.1.2", "imperfection factor"),
        step(
            f"Φ_{mark}",
            f"0.5 [1 + α_{mark} ({name} − 0.2) + {name}²]",
            buckling_phi(relative, alpha),
            "-",
            "6.3.1.2",
        ),
        step(
            f"χ_{mark}",
            f"1 / (Φ_{mark} + √(Φ_{mark}² − {name}²)) ≤ 1",
            chi,
            "-",
            "6.3.1.2",
            "reduction factor",
        ),
        step(
            f"N_b,{mark}",
            f"χ_{mark} {area} fy / γM1",
            chi * rows.area[0] * rows.fy[0] / options.gamma_m1,
            "N",
            clause,
        ),
    ]
