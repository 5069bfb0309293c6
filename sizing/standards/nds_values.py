"""Adjusted values of NDS: reference value times factors, and the column stability factor."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from sizing.brief.model import LoadDuration
from sizing.brief.sections import Catalogue
from sizing.standards.contract import FloatArray, MemberConditions
from sizing.standards.nds_grades import PSI, NDSGrade
from sizing.standards.nds_settings import NDSSettings
from sizing.standards.nds_strength import (
    C_COLUMN,
    C_P,
    INCISED,
    K_F,
    PHI,
    F_cE,
    size_factors,
    temperature_factors,
    wet_factors,
)
from sizing.standards.slenderness import slenderness_in_and_out
from sizing.standards.timber_sections import SQRT12, joined, smaller_and_larger


@dataclass(frozen=True, kw_only=True)
class Adjusted:
    """Values for one load duration: ``Ft``, ``Fc_star`` per section (s,), ``Emin``; Pa."""

    Ft: FloatArray
    Fc_star: FloatArray
    Emin: float


@dataclass(frozen=True, kw_only=True)
class Values:
    """A grade and its settings, and everything that follows from the two."""

    grade: NDSGrade
    settings: NDSSettings

    def slenderness(
        self, catalogue: Catalogue, members: MemberConditions
    ) -> tuple[FloatArray, FloatArray]:
        """Return L/i (u, s) in and out of plane: of the whole section where plies are fastened."""
        fastened = self.settings.built_up > 0.0
        return slenderness_in_and_out(joined(catalogue) if fastened else catalogue, members)

    def column(self, values: Adjusted, apart: FloatArray, whole: FloatArray) -> FloatArray:
        """Return CP (u, s): of the section, and for fastened plies the greater of two (15.3.2).

        Kf CP with le/d of the whole section, or CP of the boards one by one (``apart``).
        """
        single = self.stability(values, apart)
        return np.fmax(single, self.settings.built_up * self.stability(values, whole))

    def stability(self, values: Adjusted, slenderness: FloatArray) -> FloatArray:
        """Return CP (u, s) with le/d = (L/i) / √12, the same thing for a rectangle."""
        critical = F_cE(values.Emin, slenderness / SQRT12)
        return C_P(critical, values.Fc_star, C_COLUMN[self.grade.product])

    def adjusted(self, catalogue: Catalogue, duration: LoadDuration) -> Adjusted:
        """Return the adjusted values of every section for one load duration."""
        factors = self.factors(catalogue)
        lasting = self.settings.durations[duration]
        tension, compression, modulus = lasting, lasting, 1.0
        if self.settings.method == "LRFD":
            tension, compression = (K_F[v] * PHI[v] * lasting for v in ("Ft", "Fc"))
            modulus = K_F["Emin"] * PHI["Emin"]
        return Adjusted(
            Ft=self.grade.Ft * factors["Ft"] * tension,
            Fc_star=self.grade.Fc * factors["Fc"] * compression,
            Emin=self.grade.Emin * self.stiffness_factor() * modulus,
        )

    def factors(self, catalogue: Catalogue) -> dict[str, FloatArray]:
        """Return CF CM Ct Ci and the user's factor on Ft and Fc, per section (s,)."""
        s = self.settings
        _, larger = smaller_and_larger(catalogue)
        size_t, size_c = size_factors(self.grade.size_rule, larger)
        heat_t, heat_c, _ = temperature_factors(s.temperature, wet=s.wet)
        wet_t, wet_c = 1.0, np.ones_like(size_c)
        if s.wet:
            wet_t, wet_c, _ = wet_factors(self.grade.product, self.grade.Fc / PSI * size_c)
        cut_t, cut_c = (INCISED["Ft"], INCISED["Fc"]) if s.incised else (1.0, 1.0)
        return {
            "Ft": size_t * (wet_t * heat_t * cut_t * s.factor_Ft),
            "Fc": size_c * wet_c * (heat_c * cut_c * s.factor_Fc),
        }

    def stiffness_factor(self) -> float:
        """Return CM Ct Ci and the user's factor on E and Emin."""
        s = self.settings
        factor = temperature_factors(s.temperature, wet=s.wet)[2] * s.factor_E
        if s.wet:
            factor *= wet_factors(self.grade.product, np.ones(1))[2]
        return factor * INCISED["E"] if s.incised else factor
