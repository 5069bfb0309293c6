"""The worked lines of NDS: from the reference value to one resistance."""

from __future__ import annotations

import numpy as np

from sizing.brief.model import LoadDuration
from sizing.brief.sections import Catalogue
from sizing.standards.contract import FloatArray, MemberConditions, Step
from sizing.standards.nds_strength import C_COLUMN, K_F, PHI, F_cE, size_factors
from sizing.standards.nds_values import Adjusted, Values
from sizing.standards.slenderness import slenderness_in_and_out
from sizing.standards.timber_sections import SQRT12, smaller_and_larger

TABLE = "Table 4.3.1"


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
        step("T", "F_t' k_net A", resistance, "N", clause, "resistance"),
    )


def compression_steps(
    values: Values, one: Catalogue, members: MemberConditions, duration: LoadDuration, clause: str
) -> tuple[Step, ...]:
    """Return the lines for a catalogue of one section and the conditions of one member."""
    area, grade = float(one.area[0]), values.grade
    adjusted = values.adjusted(one, duration)
    strength = _strength_steps(values, one, duration, "Fc")
    stiffness = "E_min C_M C_t C_i"
    if values.settings.method == "LRFD":
        stiffness += f" K_F φ_s, K_F = {K_F['Emin']:g}, φ_s = {PHI['Emin']:g}"
    steps = [
        step("A", "catalogue", area, "m²", "section"),
        *strength,
        step("E_min", grade.source, grade.Emin, "Pa", "Supplement", grade.name),
        step("E_min'", stiffness, adjusted.Emin, "Pa", TABLE),
        step("c", grade.product, C_COLUMN[grade.product], "-", "3.7.1.5"),
    ]
    apart = slenderness_in_and_out(one, members)
    whole = values.slenderness(one, members)
    factors, symbols = [], []
    for mark, single, fastened in zip(("in", "out"), apart, whole, strict=True):
        steps += _axis_steps(values, adjusted, mark, single)
        factors.append(float(values.column(adjusted, single, fastened)[0, 0]))
        symbols.append(f"C_P,{mark}")
        if not np.array_equal(single, fastened):
            symbols[-1] += ",plies"
            steps += _axis_steps(values, adjusted, f"{mark},whole", fastened)
            text = f"max(C_P,{mark}, {values.settings.built_up:g} C_P,{mark},whole)"
            steps.append(step(symbols[-1], text, factors[-1], "-", "15.3.2"))
    resistance = min(factors) * strength[-1].value * area
    expression = f"F_c* min({', '.join(symbols)}) A"
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
        expression = f"{symbol} C_D C_F C_MtI"
    else:
        steps += [
            step("λ", "Table N3", lasting, "-", "N.3.3", f"time effect, duration {duration}"),
            step("K_F", "Table N1", K_F[symbol], "-", "N.3.1", "format conversion"),
            step("φ", "Table N2", PHI[symbol], "-", "N.3.2", "resistance factor"),
        ]
        expression = f"{symbol} K_F φ λ C_F C_MtI"
    steps.append(step(result, expression, float(number[0]), "Pa", TABLE))
    return steps


def _axis_steps(
    values: Values, adjusted: Adjusted, mark: str, slenderness: FloatArray
) -> list[Step]:
    axis = mark.partition(",")[0]
    clause = f"3.7.1 {'in' if axis == 'in' else 'out of'} plane"
    le_d = slenderness / SQRT12
    critical = float(F_cE(adjusted.Emin, le_d)[0, 0])
    factor = float(values.stability(adjusted, slenderness)[0, 0])
    root = f"(1 + r)/(2c) − √([(1 + r)/(2c)]² − r/c), r = F_cE,{mark} / F_c*"
    return [
        step(f"(le/d)_{mark}", f"L_{axis} / d_{mark}", float(le_d[0, 0]), "-", clause),
        step(f"F_cE,{mark}", f"0.822 E_min' / (le/d)_{mark}²", critical, "Pa", clause),
        step(f"C_P,{mark}", root, factor, "-", clause),
    ]


def step(
    symbol: str, expression: str, value: float, unit: str, clause: str, meaning: str = ""
) -> Step:
    """Return one worked line."""
    return Step(
        symbol=symbol, expression=expression, value=value, unit=unit, clause=clause, meaning=meaning
    )
