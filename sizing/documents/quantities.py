"""Units in which documents print: metric, or US customary where the brief is written so."""

from __future__ import annotations

import math
from collections.abc import Iterable
from dataclasses import dataclass, replace

from sizing.brief.model import Units
from sizing.units import Display, DisplayUnit, is_us

MOST_PLACES = 6
"""More decimals than this say nothing about a truss."""


@dataclass(frozen=True, kw_only=True, slots=True)
class Quantity:
    """A unit for print: SI value × ``scale`` = number in ``unit``; ``places`` decimals."""

    unit: str
    scale: float
    places: int

    def of(self, si: float) -> float:
        """Return the SI value in this unit, never a negative zero."""
        return si * self.scale + 0.0

    def text(self, si: float) -> str:
        """Return value and unit as printed, e.g. ``12.4 kN``."""
        number = f"{self.of(si):.{self.places}f}"
        return f"{number.removeprefix('-') if float(number) == 0.0 else number} {self.unit}"

    def fitted(self, si_values: Iterable[float]) -> Quantity:
        """Return this unit with more decimals where all values are small.

        The greatest value then shows three figures, so that a small truss does not print 0.0.
        """
        greatest = max((abs(self.of(v)) for v in si_values if math.isfinite(v)), default=0.0)
        if greatest == 0.0:
            return self
        wanted = min(2 - math.floor(math.log10(greatest)), MOST_PLACES)
        return replace(self, places=max(self.places, wanted))


VOLUME = Quantity(unit="m³", scale=1.0, places=3)
VOLUME_US = Quantity(unit="ft³", scale=0.3048**-3, places=2)
"""The international foot is 0.3048 m by definition (1959 agreement)."""


@dataclass(frozen=True, kw_only=True, slots=True)
class ShownUnits:
    """The units of one document set. ``movement`` is for deflections."""

    force: Quantity
    length: Quantity
    movement: Quantity
    mass: Quantity
    mass_per_length: Quantity
    area: Quantity
    second_moment: Quantity
    stress: Quantity
    surface: Quantity
    volume: Quantity
    us: bool


def shown_units(units: Units) -> ShownUnits:
    """Return the units for print that go with a brief's units."""
    display = Display.of(units)
    return ShownUnits(
        force=_quantity(display.force),
        length=_quantity(display.length),
        movement=_quantity(display.small_length),
        mass=_quantity(display.mass),
        mass_per_length=_quantity(display.mass_per_length),
        area=_quantity(display.area),
        second_moment=_quantity(display.second_moment),
        stress=_quantity(display.stress),
        surface=_quantity(display.surface),
        volume=VOLUME_US if is_us(units) else VOLUME,
        us=is_us(units),
    )


def _quantity(unit: DisplayUnit) -> Quantity:
    return Quantity(unit=unit.label, scale=unit.factor, places=unit.decimals)
