"""What is minimised: mass, cost or carbon of each group with each section, by the user's rates.

For a group of n pieces and total system length ℓ in a section of m kg/m:

    mass   = ℓ m
    cost   = ℓ m per_kg + ℓ (per_metre + catalogue price) + n per_piece
    carbon = ℓ m a1_a3            (modules A1 to A3; biogenic storage is never netted)
"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from sizing.brief.model import Brief, CarbonFactors, CostRates, Objective, Option
from sizing.brief.sections import Catalogue

FloatArray = NDArray[np.float64]


def group_lengths(brief: Brief) -> FloatArray:
    """Return the total system length of each group in m (g,)."""
    return np.array([sum(brief.members[i].length for i in group.members) for group in brief.groups])


def objective_values(
    brief: Brief, option: Option, catalogue: Catalogue, mass: FloatArray
) -> FloatArray:
    """Return what the brief minimises, (g, s); NaN where a section has no price.

    ``mass`` (s,) is kg per m. The reader has made sure that the rates needed are there.
    """
    return values_of(brief.minimise, brief, option, catalogue, mass)


def values_of(
    objective: Objective, brief: Brief, option: Option, catalogue: Catalogue, mass: FloatArray
) -> FloatArray:
    """Return mass in kg, cost in the option's currency or carbon in kgCO2e, (g, s).

    NaN throughout where the option gives no rates for it.
    """
    length = group_lengths(brief)[:, None]
    if objective == "mass":
        return length * mass[None, :]
    pieces = np.array([float(len(group.members)) for group in brief.groups])[:, None]
    if objective == "cost":
        return _cost(option.cost, catalogue, mass, length, pieces)
    return _carbon(option.carbon, mass, length)


def _cost(
    rates: CostRates | None,
    catalogue: Catalogue,
    mass: FloatArray,
    length: FloatArray,
    pieces: FloatArray,
) -> FloatArray:
    if rates is None:
        return np.full((length.shape[0], mass.shape[0]), np.nan)
    price = catalogue.price if rates.catalogue_price else np.zeros_like(mass)
    per_metre = mass * rates.per_kg + rates.per_metre + price
    return np.asarray(length * per_metre[None, :] + pieces * rates.per_piece)


def _carbon(factors: CarbonFactors | None, mass: FloatArray, length: FloatArray) -> FloatArray:
    a1_a3 = np.nan if factors is None else factors.a1_a3
    return np.asarray(length * mass[None, :] * a1_a3)
