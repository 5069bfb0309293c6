"""The worked lines of NDS: from the reference value to one resistance."""

from __future__ import annotations

import numpy as np

from sizing.brief.model import LoadDuration
from sizing.brief.sections import Catalogue
from sizing.standards.contract import FloatArray, MemberConditions, Step
from sizing.standards.formula import Formula, greatest, least, root, symbols
from sizing.standards.nds_strength import C_COLUMN, K_CE, K_F, PHI, F_cE, size_factors
from sizing.standards.nds_values import Adjusted, Values
from sizing.standards.slenderness import slenderness_in_and_out
from sizing.standards.timber_sections import SQRT12, smaller_and_larger
from sizing.standards.worked_lines import step

TABLE = "Table 4.3.1"

A, K_NET, C, FC_STAR, E_MIN = symbols("A", "k_net", "c", "F_c*", "E_min'")


def tension_steps(
    values: Values, one: Catalogue, members: MemberConditions, duration: LoadDuration, clause: str
) -> tuple[Step, ...]:
    """Return the lines for a catalogue of one section and the conditions of one member."""
    area, net = float(one.area[0]), float(members.net_factor[0])
    strength = _strength_steps(values, one, duration, "Ft")
    resistance = strength[-1].value * area * net
    return (
        step("A", "catalogue", area, "m²", "section"),
        *strength,
        step("k_net", "brief", net, "-", "3.1.2", "net over gross area at the joints"),
        step("T", symbols("F_t'")[0] * K_NET * A, resistance, "N", clause, "resistance"),
    )


def compression_steps(
    values: Values, one: Catalogue, members: MemberConditions, duration: LoadDuration, clause: str
) -> tuple[Step, ...]:
    """Return the lines for a catalogue of one section and the conditions of one member."""
    area, grade = float(one.area[0]), values.grade
    adjusted = values.adjusted(one, duration)
    strength = _strength_steps(values, one, duration, "Fc")
    reference, moisture, conversion, reduction = symbols("E_min", "C_MtI,E", "K_F,E", "φ_s")
    stiffness: Formula = reference * moisture
    lrfd: list[Step] = []
    if values.settings.method == "LRFD":
        stiffness = stiffness * conversion * reduction
        lrfd = [
            step("K_F,E", "Table N1", K_F["Emin"], "-", "N.3.1", "format conversion"),
            step("φ_s", "Table N2", PHI["Emin"], "-", "N.3.2", "resistance factor"),
        ]
    steps = [
        step("A", "catalogue", area, "m²", "section"),
        *strength,
        step("E_min", grade.source, grade.Emin, "Pa", "Supplement", grade.name),
        step(
            "C_MtI,E",
            "C_M C_t C_i",
            values.stiffness_factor(),
            "-",
            "4.3.3 to 4.3.8",
            "moisture, heat, incising",
        ),
        *lrfd,
        step("E_min'", stiffness, adjusted.Emin, "Pa", TABLE),
        step("c", grade.product, C_COLUMN[grade.product], "-", "3.7.1.5"),
    ]
    apart = slenderness_in_and_out(one, members)
    whole = values.slenderness(one, members)
    lengths = (float(members.in_plane[0]), float(members.out_of_plane[0]))
    factors, of_axes = [], []
    for length, mark, single, fastened in zip(lengths, ("in", "out"), apart, whole, strict=True):
        steps += _axis_steps(values, adjusted, (mark, length), single)
        factors.append(float(values.column(adjusted, single, fastened)[0, 0]))
        (stability,) = symbols(f"C_P,{mark}")
        if not np.array_equal(single, fastened):
            steps += _axis_steps(values, adjusted, (f"{mark},whole", length), fastened)
            (joint,) = symbols(f"C_P,{mark},whole")
            better = greatest(stability, values.settings.built_up * joint)
            (stability,) = symbols(f"C_P,{mark},plies")
            steps.append(step(stability.name, better, factors[-1], "-", "15.3.2"))
        of_axes.append(stability)
    resistance = min(factors) * strength[-1].value * area
    expression = FC_STAR * least(*of_axes) * A
    return (*steps, step("P", expression, resistance, "N", clause, "resistance"))


def _strength_steps(
    values: Values, one: Catalogue, duration: LoadDuration, symbol: str
) -> list[Step]:
    """Return the lines from the reference value Ft or Fc to Ft' or Fc*."""
    s, grade = values.settings, values.grade
    in_tension = symbol == "Ft"
    size = size_factors(grade.size_rule, smaller_and_larger(one)[1])[0 if in_tension else 1]
    other = float(values.factors(one)[symbol][0] / size[0])
    adjusted = values.adjusted(one, duration)
    reference = grade.Ft if in_tension else grade.Fc
    result, number = ("F_t'", adjusted.Ft) if in_tension else ("F_c*", adjusted.Fc_star)
    steps = [
        step(symbol, grade.source, reference, "Pa", "Supplement", grade.name),
        step("C_F", "Table 4A", float(size[0]), "-", "4.3.6", "size factor"),
        step("C_MtI", "C_M C_t C_i", other, "-", "4.3.3 to 4.3.8", "moisture, heat, incising"),
    ]
    lasting = s.durations[duration]
    if s.method == "ASD":
        steps.append(step("C_D", "Table 2.3.2", lasting, "-", "2.3.2", f"duration {duration}"))
        names: tuple[str, ...] = (symbol, "C_D", "C_F", "C_MtI")
    else:
        steps += [
            step("λ", "Table N3", lasting, "-", "N.3.3", f"time effect, duration {duration}"),
            step("K_F", "Table N1", K_F[symbol], "-", "N.3.1", "format conversion"),
            step("φ", "Table N2", PHI[symbol], "-", "N.3.2", "resistance factor"),
        ]
        names = (symbol, "K_F", "φ", "λ", "C_F", "C_MtI")
    factored: Formula
    factored, *others = symbols(*names)
    for factor in others:
        factored = factored * factor
    steps.append(step(result, factored, float(number[0]), "Pa", TABLE))
    return steps


def _axis_steps(
    values: Values, adjusted: Adjusted, where: tuple[str, float], slenderness: FloatArray
) -> list[Step]:
    """Return the lines of C_P; ``where``: the mark of the axis and the buckling length in m."""
    mark, length = where
    axis = mark.partition(",")[0]
    clause = f"3.7.1 {'in' if axis == 'in' else 'out of'} plane"
    le_d = slenderness / SQRT12
    critical = float(F_cE(adjusted.Emin, le_d)[0, 0])
    factor = float(values.stability(adjusted, slenderness)[0, 0])
    ratio = float(le_d[0, 0])
    L, d, le_over_d, euler, r = symbols(
        *(f"{name}_{mark}" for name in ("L", "d", "(le/d)")), f"F_cE,{mark}", f"r_{mark}"
    )
    if not ratio > 0.0:
        return [step(f"C_P,{mark}", "held throughout", factor, "-", clause)]
    half = (1.0 + r) / (2.0 * C)
    return [
        step(L.name, "brief", length, "m", clause, "buckling length"),
        step(d.name, "catalogue", length / ratio, "m", "section", "√12 radius of gyration"),
        step(le_over_d.name, L / d, ratio, "-", clause),
        step(euler.name, K_CE * E_MIN / le_over_d**2, critical, "Pa", clause),
        step(r.name, euler / FC_STAR, critical / float(adjusted.Fc_star[0]), "-", clause),
        step(f"C_P,{mark}", half - root(half**2 - r / C), factor, "-", clause),
    ]
