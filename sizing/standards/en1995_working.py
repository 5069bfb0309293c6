"""The worked lines of EN 1995-1-1: from the characteristic strength to one resistance."""

from __future__ import annotations

from dataclasses import dataclass

from sizing.brief.model import LoadDuration
from sizing.brief.sections import Catalogue
from sizing.standards.contract import FloatArray, ResistanceTable, Step
from sizing.standards.en1995_grades import TimberGrade
from sizing.standards.en1995_strength import (
    BETA_C,
    design_value,
    k_buckling,
    k_c,
    k_h,
    k_mod,
    lambda_rel,
)
from sizing.standards.timber_sections import smaller_and_larger


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
            step(f"f_{mark},0,d", f"k_mod f_{mark},0,k / γ_M", f_d, "Pa", "2.4.1"),
        ]


def tension_steps(strength: Strength, one: Catalogue, net: float, clause: str) -> tuple[Step, ...]:
    """Return the lines for a catalogue of one section; ``net``: net over gross area."""
    grade, area = strength.grade, float(one.area[0])
    larger = smaller_and_larger(one)[1]
    size = float(k_h(grade.product, grade.rho_k, larger)[0])
    expression, size_clause = "min((150 mm / h)^0.2, 1.3)", "3.2(3)"
    if grade.product == "glulam":
        expression, size_clause = "min((600 mm / h)^0.1, 1.1)", "3.3(3)"
    lines = strength.steps("t")
    resistance = size * lines[-1].value * net * area
    return (
        step("A", "catalogue", area, "m²", "section"),
        *lines,
        step("h", "larger side", float(larger[0]), "m", "section"),
        step("k_h", expression, size, "-", size_clause, "size factor, not below 1"),
        step("k_net", "brief", net, "-", "6.1.2", "net over gross area at the joints"),
        step("N_t,Rd", "k_h f_t,0,d k_net A", resistance, "N", clause, "resistance"),
    )


def compression_steps(
    strength: Strength, one: Catalogue, table: ResistanceTable, clause: str
) -> tuple[Step, ...]:
    """Return the lines for a catalogue of one section and the table of one member."""
    grade, area = strength.grade, float(one.area[0])
    beta = BETA_C[grade.product]
    lines = strength.steps("c")
    straight = f"straightness of {grade.product}"
    inside = _axis_steps(grade, "in", table.slenderness_in[0])
    outside = _axis_steps(grade, "out", table.slenderness_out[0])
    resistance = min(inside[-1].value, outside[-1].value) * lines[-1].value * area
    return (
        step("A", "catalogue", area, "m²", "section"),
        *lines,
        step("E_0,05", grade.edition, grade.E0_05, "Pa", "grade"),
        step("β_c", straight, beta, "-", "6.3.2(3)"),
        *inside,
        *outside,
        step("N_c,Rd", "min(k_c,in, k_c,out) f_c,0,d A", resistance, "N", clause, "resistance"),
    )


def _axis_steps(grade: TimberGrade, mark: str, slenderness: FloatArray) -> tuple[Step, ...]:
    beta = BETA_C[grade.product]
    relative = lambda_rel(slenderness, grade.fc0k, grade.E0_05)
    lam, rel = float(slenderness[0]), float(relative[0])
    k, factor = float(k_buckling(relative, beta)[0]), float(k_c(relative, beta)[0])
    where = f"buckling {'in' if mark == 'in' else 'out of'} plane"
    of = f"λ_rel,{mark}"
    last = f"1 / (k_{mark} + √(k_{mark}² − {of}²)), 1 for {of} ≤ 0.3"
    return (
        step(f"λ_{mark}", f"L_{mark} / i_{mark}", lam, "-", where),
        step(of, f"(λ_{mark} / π) √(f_c,0,k / E_0,05)", rel, "-", "6.3.2(1)"),
        step(f"k_{mark}", f"0.5 (1 + β_c ({of} − 0.3) + {of}²)", k, "-", "6.3.2(3)"),
        step(f"k_c,{mark}", last, factor, "-", "6.3.2(3)"),
    )


def step(
    symbol: str, expression: str, value: float, unit: str, clause: str, meaning: str = ""
) -> Step:
    """Return one worked line."""
    return Step(
        symbol=symbol, expression=expression, value=value, unit=unit, clause=clause, meaning=meaning
    )
