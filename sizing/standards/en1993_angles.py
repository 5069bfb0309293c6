"""Angles: connected by one leg (EN 1993-1-8, 3.10.3), as web members (EN 1993-1-1, BB.1.2)."""

from __future__ import annotations

from dataclasses import dataclass

from sizing.standards.contract import FloatArray

CLOSE_PITCH = 2.5
WIDE_PITCH = 5.0
BETA_2 = (0.4, 0.7)
BETA_3 = (0.5, 0.7)


@dataclass(frozen=True, kw_only=True, slots=True)
class LegBolts:
    """Bolts in one line through one leg: ``hole`` d0, ``pitch`` p1, ``edge`` e2, all in m.

    ``pitch`` is NaN for one bolt, ``edge`` for several.
    """

    count: int
    hole: float
    pitch: float
    edge: float

    @property
    def beta(self) -> float:
        """Return β2 or β3 of EN 1993-1-8 Table 3.8: linear from p1 = 2.5 d0 to 5 d0."""
        least, greatest = BETA_2 if self.count == 2 else BETA_3
        share = (self.pitch / self.hole - CLOSE_PITCH) / (WIDE_PITCH - CLOSE_PITCH)
        return least + (greatest - least) * min(1.0, max(0.0, share))


def net_area_of_leg(
    area: FloatArray, net_factor: FloatArray, thickness: FloatArray, bolts: LegBolts
) -> FloatArray:
    """Return A_net in m²: the group's net factor, or one hole off the leg if that is less."""
    by_factor = area * net_factor
    by_hole = area - bolts.hole * thickness
    return by_factor.clip(max=by_hole).clip(min=0.0)


def one_leg_resistance(
    net_area: FloatArray, thickness: FloatArray, fu: FloatArray, gamma_M2: float, bolts: LegBolts
) -> FloatArray:
    """Return N_u,Rd in N of an angle connected by one leg, EN 1993-1-8, 3.10.3(2).

    One bolt: 2.0 (e2 − 0.5 d0) t fu / γM2 (3.11). Two: β2 A_net fu / γM2 (3.12). Three or
    more: β3 A_net fu / γM2 (3.13).
    """
    if bolts.count == 1:
        return 2.0 * (bolts.edge - 0.5 * bolts.hole) * thickness * fu / gamma_M2
    return bolts.beta * net_area * fu / gamma_M2


def web_angle_slenderness(slenderness: FloatArray, *, least_axis: bool) -> FloatArray:
    """Return λ̄_eff of BB.1.2(2): 0.35 + 0.7 λ̄_v about v-v, 0.50 + 0.7 λ̄ about y-y and z-z."""
    return (0.35 if least_axis else 0.50) + 0.7 * slenderness
