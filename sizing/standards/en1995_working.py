"""The worked lines of EN 1995-1-1: from the characteristic strength to one resistance."""

from __future__ import annotations

from dataclasses import dataclass

from sizing.brief.model import LoadDuration
from sizing.brief.sections import Catalogue
from sizing.standards.contract import FloatArray, MemberConditions, ResistanceTable, Step
from sizing.standards.en1995_grades import TimberGrade
from sizing.standards.en1995_strength import (
    BETA_C,
    K_H_DENSITY_LIMIT,
    LAMBDA_REL_PLATEAU,
    design_value,
    k_buckling,
    k_c,
    k_h,
    k_mod,
    lambda_rel,
)
from sizing.standards.formula import PI, greatest, least, number, root, symbols, up_to
from sizing.standards.slenderness import radii_in_and_out
from sizing.standards.timber_sections import smaller_and_larger
from sizing.standards.worked_lines import step

A, H, K_H, K_NET, K_MOD, GAMMA = symbols("A", "h", "k_h", "k_net", "k_mod", "γ_M")
FC_K, E_05, BETA = symbols("f_c,0,k", "E_0,05", "β_c")


@dataclass(frozen=True, kw_only=True, slots=True)
class Strength:
    """What settles the design strengths."""

    grade: TimberGrade
    service_class: int
    gamma_M: float  # noqa: N815 -- the symbol of the standard
    duration: LoadDuration

    def steps(self, mark: str) -> list[Step]:
        """Return the lines to f_t,0,d (mark ``t``) or f_c,0,d (mark ``c``)."""
        grade = self.grade
        f_k = grade.ft0k if mark == "t" else grade.fc0k
        k = k_mod(self.service_class, self.duration)
        f_d = design_value(k, f_k, self.gamma_M)
        state = f"service class {self.service_class}, load duration {self.duration}"
        return [
            step(f"f_{mark},0,k", grade.edition, f_k, "Pa", "grade", grade.name),
            step("k_mod", "Table 3.1", k, "-", "3.1.3", state),
            step("γ_M", "Table 2.3", self.gamma_M, "-", "2.4.1", grade.product),
            step(f"f_{mark},0,d", K_MOD * symbols(f"f_{mark},0,k")[0] / GAMMA, f_d, "Pa", "2.4.1"),
        ]


def tension_steps(strength: Strength, one: Catalogue, net: float, clause: str) -> tuple[Step, ...]:
    """Return the lines for a catalogue of one section; ``net``: net over gross area."""
    grade, area = strength.grade, float(one.area[0])
    larger = smaller_and_larger(one)[1]
    size = float(k_h(grade.product, grade.rho_k, larger)[0])
    formula = greatest(least((number(0.150, "m", "150 mm") / H) ** 0.2, 1.3), 1.0)
    size_clause = "3.2(3)"
    if grade.product == "glulam":
        formula = greatest(least((number(0.600, "m", "600 mm") / H) ** 0.1, 1.1), 1.0)
        size_clause = "3.3(3)"
    elif grade.rho_k > K_H_DENSITY_LIMIT:
        formula = number(1.0)
    lines = strength.steps("t")
    resistance = size * lines[-1].value * net * area
    return (
        step("A", "catalogue", area, "m²", "section"),
        *lines,
        step("h", "larger side", float(larger[0]), "m", "section"),
        step("k_h", formula, size, "-", size_clause, "size factor, not below 1"),
        step("k_net", "brief", net, "-", "6.1.2", "net over gross area at the joints"),
        step(
            "N_t,Rd", K_H * symbols("f_t,0,d")[0] * K_NET * A, resistance, "N", clause, "resistance"
        ),
    )


def compression_steps(
    strength: Strength,
    one: Catalogue,
    members: MemberConditions,
    table: ResistanceTable,
    clause: str,
) -> tuple[Step, ...]:
    """Return the lines for a catalogue of one section, and conditions and table of one member."""
    grade, area = strength.grade, float(one.area[0])
    beta = BETA_C[grade.product]
    lines = strength.steps("c")
    straight = f"straightness of {grade.product}"
    r_in, r_out = (float(r[0, 0]) for r in radii_in_and_out(one, members))
    length_in, length_out = float(members.in_plane[0]), float(members.out_of_plane[0])
    inside = _axis_steps(grade, "in", (length_in, r_in), table.slenderness_in[0])
    outside = _axis_steps(grade, "out", (length_out, r_out), table.slenderness_out[0])
    factor_in, factor_out, f_d = symbols("k_c,in", "k_c,out", "f_c,0,d")
    resistance = min(inside[-1].value, outside[-1].value) * lines[-1].value * area
    return (
        step("A", "catalogue", area, "m²", "section"),
        *lines,
        step("E_0,05", grade.edition, grade.E0_05, "Pa", "grade"),
        step("β_c", straight, beta, "-", "6.3.2(3)"),
        *inside,
        *outside,
        step(
            "N_c,Rd", least(factor_in, factor_out) * f_d * A, resistance, "N", clause, "resistance"
        ),
    )


def _axis_steps(
    grade: TimberGrade, mark: str, size: tuple[float, float], slenderness: FloatArray
) -> tuple[Step, ...]:
    """Return the lines of k_c about one axis; ``size``: buckling length and radius, m."""
    beta = BETA_C[grade.product]
    relative = lambda_rel(slenderness, grade.fc0k, grade.E0_05)
    lam, rel = float(slenderness[0]), float(relative[0])
    k, factor = float(k_buckling(relative, beta)[0]), float(k_c(relative, beta)[0])
    where = f"buckling {'in' if mark == 'in' else 'out of'} plane"
    L, i, plain, of, buckling = symbols(
        *(f"{letter}{mark}" for letter in ("L_", "i_", "λ_", "λ_rel,", "k_"))
    )
    curve = 0.5 * (1.0 + BETA * (of - LAMBDA_REL_PLATEAU) + of**2)
    last = up_to(of, LAMBDA_REL_PLATEAU, 1.0, 1.0 / (buckling + root(buckling**2 - of**2)))
    return (
        step(L.name, "brief", size[0], "m", where, "buckling length"),
        step(i.name, "catalogue", size[1], "m", "section", "radius of gyration"),
        step(plain.name, L / i, lam, "-", where),
        step(of.name, plain / PI * root(FC_K / E_05), rel, "-", "6.3.2(1)"),
        step(buckling.name, curve, k, "-", "6.3.2(3)"),
        step(f"k_c,{mark}", last, factor, "-", "6.3.2(3)"),
    )
