"""Instantaneous, final and net final deflection as factors on the load cases.

EN 1995-1-1 2.2.3(5), eq. 2.2 to 2.5, for members of one creep behaviour:

    u_fin = Σ u_inst,G (1 + kdef) + u_inst,Q1 (1 + ψ2,1 kdef) + Σ u_inst,Qi (ψ0,i + ψ2,i kdef)

which is the serviceability combination itself plus kdef times its long-term part. NDS 3.5.2,
Δ_T = Kcr Δ_LT + Δ_ST, is the same with Kcr − 1 in the place of kdef. Forces in a truss of one
material do not change by uniform creep, so the factors hold for redundant trusses too.
"""

from __future__ import annotations

from collections.abc import Mapping

from sizing.brief.model import Combination, DeflectionComponent


def deflection_factors(
    combination: Combination,
    component: DeflectionComponent,
    creep: float,
    precamber: Mapping[int, float] | None = None,
) -> dict[int, float]:
    """Return case index → factor (zeros left out) of one component of the deflection.

    ``creep`` is kdef (:attr:`sizing.standards.contract.Material.creep`). ``instantaneous`` are
    the combination's own factors; ``final`` adds creep × long-term part; ``net final`` takes
    off the precamber, given as the load cases whose elastic deflection it equals.
    """
    factors = dict(combination.factors)
    if component == "instantaneous":
        return factors
    factors = _sum(factors, combination.long_term, creep)
    return _sum(factors, precamber or {}, -1.0) if component == "net final" else factors


def _sum(
    first: Mapping[int, float], second: Mapping[int, float], multiple: float
) -> dict[int, float]:
    cases = sorted({*first, *second})
    total = {q: first.get(q, 0.0) + multiple * second.get(q, 0.0) for q in cases}
    return {q: factor for q, factor in total.items() if factor != 0.0}
