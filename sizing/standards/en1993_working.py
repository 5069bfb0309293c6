"""The worked lines of EN 1993-1-1 for one member and one section."""

from __future__ import annotations

import numpy as np

from sizing.brief.sections import Catalogue
from sizing.standards.conditions import Resistances
from sizing.standards.contract import MemberConditions, Step
from sizing.standards.en1993_angles import (
    BETA_2,
    BETA_3,
    CLOSE_PITCH,
    WIDE_PITCH,
    net_area_of_leg,
)
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
from sizing.standards.en1993_walls import (
    K_INTERNAL,
    REFERENCE_YIELD,
    Wall,
    epsilon,
    plate_reduction,
)
from sizing.standards.formula import PI, Formula, greatest, least, number, root, symbols, up_to
from sizing.standards.worked_lines import step

A, A_NET, FY, FU, G0, G1, G2 = symbols("A", "A_net", "fy", "fu", "γM0", "γM1", "γM2")
N_PL, N_U, K_NET, EPS = symbols("N_pl,Rd", "N_u,Rd", "k_net", "ε")
D0, P1, E2, T, BETA = symbols("d0", "p1", "e2", "t", "β")
E_MOD, LAMBDA_1, N_C = symbols("E", "λ1", "N_c,Rd")


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
        step("N_pl,Rd", A * FY / G0, yielding, "N", CLAUSES[YIELD]),
    ]
    net = float(members.net_factor[0])
    terms = [N_PL]
    if options.leg_bolts is not None and catalogue.family[0] == "angle":
        steps += _one_leg_steps(options, catalogue, net, row)
        terms.append(N_U)
    elif net < 1.0:
        net_area = catalogue.area[0] * net
        steps += [
            _net_factor_step(net, "6.2.2.2"),
            step("A_net", K_NET * A, net_area, "m²", "6.2.2.2", "net area at the joints"),
            step("fu", row.strength.origin, row.strength.fu, "Pa", "3.2.1", "ultimate strength"),
            step("γM2", "partial factor", options.gamma_m2, "-", "6.1"),
            step(
                "N_u,Rd",
                0.9 * A_NET * FU / G2,
                0.9 * net_area * row.strength.fu / options.gamma_m2,
                "N",
                CLAUSES[RUPTURE],
            ),
        ]
        terms.append(N_U)
    clause = CLAUSES[found.tension_clause[0, 0]]
    steps.append(step("N_t,Rd", least(*terms), resistance, "N", clause, "tension resistance"))
    return tuple(steps)


def _net_factor_step(net: float, clause: str) -> Step:
    return step("k_net", "brief", net, "-", clause, "net over gross area at the joints")


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
        step("t", "catalogue", t, "m", "section", "leg thickness"),
    ]
    if bolts.count == 1:
        value = 2.0 * (bolts.edge - 0.5 * bolts.hole) * t * fu / gamma
        return [
            *steps,
            step("e2", "setting", bolts.edge, "m", clause, "edge distance"),
            step("N_u,Rd", 2.0 * (E2 - 0.5 * D0) * T * FU / G2, value, "N", clause),
        ]
    area = net_area_of_leg(catalogue.area, np.array([net]), catalogue.thickness, bolts)[0]
    low, high = BETA_2 if bolts.count == 2 else BETA_3
    beta = low + (high - low) * least(
        1.0, greatest(0.0, (P1 / D0 - CLOSE_PITCH) / (WIDE_PITCH - CLOSE_PITCH))
    )
    return [
        *steps,
        _net_factor_step(net, clause),
        step("A_net", greatest(least(K_NET * A, A - D0 * T), 0.0), area, "m²", clause, "net area"),
        step("p1", "setting", bolts.pitch, "m", clause, "pitch of the bolts"),
        step("β", beta, bolts.beta, "-", clause, "Table 3.8"),
        step("N_u,Rd", BETA * A_NET * FU / G2, bolts.beta * area * fu / gamma, "N", clause),
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
    area = A
    if row.class_4:
        (area,) = symbols("A_eff")
        steps += _effective_area_steps(catalogue, row)
    lambda_1 = float(reference_slenderness(E, rows.fy)[0])
    steps += [
        step("γM0", "partial factor", options.gamma_m0, "-", "6.1"),
        step(
            "N_c,Rd",
            area * FY / G0,
            row.area * row.strength.fy / options.gamma_m0,
            "N",
            CLAUSES[SQUASH],
        ),
        step("E", "3.2.6", E, "Pa", "3.2.6"),
        step("λ1", PI * root(E_MOD / FY), lambda_1, "-", "6.3.1.3"),
        step("γM1", "partial factor", options.gamma_m1, "-", "6.1"),
    ]
    terms = [N_C]
    by_annex = options.preset is not None and options.preset.places(members.role)[0] != AS_GIVEN
    source = "Annex BB.1" if by_annex else "brief"
    for mark, index, axis in zip(("in", "out", "v"), (IN, OUT, LEAST), axes, strict=True):
        if axis.applies[0, 0]:
            steps += _buckling_steps(options, rows, axis, mark, (area, source), CLAUSES[index])
            terms += symbols(f"N_b,{mark}")
    if torsion.applies[0, 0]:
        steps += _torsion_steps(options, catalogue, rows, axes[2], torsion)
        terms += symbols("N_b,T")
    if not note:
        meaning = "compression resistance"
        last = step("N_Rd", least(*terms), resistance, "N", clause, meaning)
    return (*steps, last)


def _torsion_steps(
    options: Options1993, catalogue: Catalogue, rows: RowArrays, about_v: Axis, torsion: Torsion
) -> list[Step]:
    """Return the lines of N_b,Rd of an angle in torsional-flexural buckling, 6.3.1.4."""
    clause = CLAUSES[TORSION]
    section = twisting(catalogue)
    relative, alpha = torsion.relative[0, 0], about_v.alpha[0, 0]
    chi = reduction_factor(relative, alpha)
    (area,) = symbols("A_eff" if rows.rows[0].class_4 else "A")
    twist, polar, shear, critical, slender, phi, factor, imperfection = symbols(
        "I_T", "i_0", "G", "N_cr,TF", "λ̄_T", "Φ_T", "χ_T", "α_v"
    )
    curve = 0.5 * (1.0 + imperfection * (slender - 0.2) + slender**2)
    reduction = least(1.0, 1.0 / (phi + root(phi**2 - slender**2)))
    return [
        step("I_T", "(h + b − t) t³ / 3", section.torsion[0], "m⁴", "section"),
        step("i_0", "√((I_y + I_z) / A + u0² + v0²)", section.polar[0], "m", "section"),
        step("G", "3.2.6", SHEAR_MODULUS, "Pa", "3.2.6"),
        step("N_cr,T", shear * twist / polar**2, torsion.plain[0], "N", clause, "twisting alone"),
        step(
            "N_cr,TF",
            "twisting with bowing about u-u and v-v over L_v",
            torsion.critical[0, 0],
            "N",
            clause,
        ),
        step("λ̄_T", root(area * FY / critical), relative, "-", clause),
        step("Φ_T", curve, buckling_phi(relative, alpha), "-", clause),
        step("χ_T", reduction, chi, "-", "6.3.1.2", "reduction factor"),
        step(
            "N_b,T",
            factor * area * FY / G1,
            chi * rows.area[0] * rows.fy[0] / options.gamma_m1,
            "N",
            clause,
        ),
    ]


def _class_steps(row: Row) -> list[Step]:
    """Return the classification of every part, Table 5.2."""
    if not row.walls:
        return []
    steps = [
        step(
            "ε",
            root(number(REFERENCE_YIELD, "Pa", "235 N/mm²") / FY),
            epsilon(row.strength.fy),
            "-",
            "Table 5.2",
        )
    ]
    for wall in row.walls:
        verdict = "class 4" if wall.slender else "class 1 to 3"
        meaning = f"limit {wall.limit_text} = {wall.limit:.2f}: {verdict}"
        steps.append(step(wall.name, "catalogue", wall.ratio, "-", "Table 5.2", meaning))
    return steps


def _effective_area_steps(catalogue: Catalogue, row: Row) -> list[Step]:
    """Return the lines of A_eff, EN 1993-1-5, 4.4: what each slender part loses."""
    clause = "EN 1993-1-5, 4.4"
    steps: list[Step] = []
    lost: Formula = A
    for wall in row.walls:
        if not wall.k_sigma:
            continue
        steps += _plate_steps(wall, row.strength.fy, clause)
        rho, c, t = symbols(f"ρ {wall.name}", f"c {wall.name}", f"t {wall.name}")
        if catalogue.family[0] == "angle":
            lost = A * rho
            break
        steps += [
            step(c.name, "catalogue", wall.width, "m", "section", "flat width"),
            step(t.name, "catalogue", wall.thickness, "m", "section", "thickness"),
        ]
        lost = lost - wall.count * (1.0 - rho) * c * t
    return [*steps, step("A_eff", lost, row.area, "m²", clause, "effective area")]


def _plate_steps(wall: Wall, fy: float, clause: str) -> list[Step]:
    """Return λ̄p and ρ of one part, EN 1993-1-5, 4.4(2) and Table 4.1 or 4.2."""
    ratio, slenderness = symbols(wall.name, f"λ̄p {wall.name}")
    start, offset = (0.673, 0.22) if wall.k_sigma == K_INTERNAL else (0.748, 0.188)
    relative = wall.ratio / (28.4 * epsilon(fy) * wall.k_sigma**0.5)
    rho = up_to(slenderness, start, 1.0, least(1.0, (slenderness - offset) / slenderness**2))
    return [
        step(slenderness.name, ratio / (28.4 * EPS * root(wall.k_sigma)), relative, "-", clause),
        step(f"ρ {wall.name}", rho, plate_reduction(wall.ratio, fy, wall.k_sigma), "-", clause),
    ]


def _buckling_steps(
    options: Options1993,
    rows: RowArrays,
    axis: Axis,
    mark: str,
    area_and_source: tuple[Formula, str],
    clause: str,
) -> list[Step]:
    """Return the lines of N_b,Rd about one axis, 6.3.1.

    ``mark`` of the axis; the symbol of the area and where the length comes from.
    """
    area, source = area_and_source
    row = rows.rows[0]
    relative, alpha = axis.relative[0, 0], axis.alpha[0, 0]
    chi = reduction_factor(relative, alpha)
    L, i, plain, phi, imperfection, factor = symbols(
        *(f"{letter}_{mark}" for letter in ("L", "i", "λ̄", "Φ", "α", "χ"))
    )
    ratio: Formula = L / i / LAMBDA_1
    if row.class_4:
        ratio = ratio * root(area / A)
    steps = [
        step(f"L_{mark}", source, axis.length[0, 0], "m", clause, "buckling length"),
        step(f"i_{mark}", "catalogue", axis.radius[0, 0], "m", "section", "radius of gyration"),
        step(f"λ̄_{mark}", ratio, axis.plain[0, 0], "-", "6.3.1.3"),
    ]
    used = plain
    if relative != axis.plain[0, 0]:
        start = number(0.35 if mark == "v" else 0.50)
        (used,) = symbols(f"λ̄_eff,{mark}")
        steps.append(step(used.name, start + 0.7 * plain, relative, "-", "BB.1.2(2)"))
    return [
        *steps,
        step(f"α_{mark}", "Tables 6.1 and 6.2", alpha, "-", "6.3.1.2", "imperfection factor"),
        step(
            f"Φ_{mark}",
            0.5 * (1.0 + imperfection * (used - 0.2) + used**2),
            buckling_phi(relative, alpha),
            "-",
            "6.3.1.2",
        ),
        step(
            f"χ_{mark}",
            least(1.0, 1.0 / (phi + root(phi**2 - used**2))),
            chi,
            "-",
            "6.3.1.2",
            "reduction factor",
        ),
        step(
            f"N_b,{mark}",
            factor * area * FY / G1,
            chi * rows.area[0] * rows.fy[0] / options.gamma_m1,
            "N",
            clause,
        ),
    ]
